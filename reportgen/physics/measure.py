"""One build measured: every method its sweeps allow, the one that is the result, the rest."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Sequence
from functools import cache, partial

import numpy as np

from reportgen.errors import NotMeasurable
from reportgen.model import (
    Band,
    BenchSheet,
    Build,
    BuildResult,
    BuildSheet,
    Curves,
    Finding,
    Fitted,
    Limits,
    MeasuredBand,
    Method,
    MethodResult,
    Setup,
    Severity,
)
from reportgen.physics.bands import in_bands
from reportgen.physics.bandwidths import find_bandwidths
from reportgen.physics.loads import (
    LoadSweeps,
    bisection_with_load,
    find_load_sweeps,
    load_only,
)
from reportgen.physics.methods import ClosedPair, Solved, bisection, close_pair, halving
from reportgen.physics.pairs import find_pairs

PREFERENCE = (Method.BISECTION_LOAD, Method.BISECTION, Method.LOAD_ONLY, Method.HALVING)
"""Which method is the result when several cover the same number of bands."""

USED_SETUPS = (Setup.BACK_TO_BACK, Setup.LOAD)


def measure_build(build: Build, bench: BenchSheet, known: Sequence[Band]) -> BuildResult:
    """Everything that a build's sweeps say.

    Parameters
    ----------
    build : Build
        As read from its folder.
    bench : BenchSheet
        What is common to all builds.
    known : sequence of Band
        The bands asked about; only those that a sweep touches when the bench names none.

    Raises
    ------
    NotMeasurable
        No method can do anything with the sweeps that are there.
    """
    bands = known if bench.bands is not None else _touched(build, known)
    power_w = build.sheet.rating.power_w or bench.power_w
    solved, findings = _solve(build, bands)
    if not solved:
        raise NotMeasurable(_why_nothing(build, findings))
    methods = tuple(_in_bands(one, bands, power_w) for one in solved)
    chosen = _chosen(methods, bands, power_w)
    return BuildResult(
        build=build,
        power_w=power_w,
        chosen=chosen,
        units=tuple(one for one in methods if one.unit is not None),
        methods=methods,
        bandwidths=find_bandwidths(chosen.curves, bench.limits.get("all", Limits())),
        fitted=_all_fitted(solved),
        findings=_unique((*build.findings, *findings, *_unused(build))),
    )


def _touched(build: Build, known: Sequence[Band]) -> tuple[Band, ...]:
    """The bands that any sweep overlaps."""
    ranges = [(one.sweep.frequency_hz[0], one.sweep.frequency_hz[-1]) for one in build.measurements]
    return tuple(
        band
        for band in known
        if any(low < band.to_hz and band.from_hz < high for low, high in ranges)
    )


def _solve(build: Build, bands: Sequence[Band]) -> tuple[list[Solved], tuple[Finding, ...]]:
    """All methods that the sweeps allow, and why one of them was left out."""
    solved: list[Solved] = []
    findings: list[Finding] = []
    for files, method in _possible(build, bands):
        try:
            solved += method()
        except NotMeasurable as error:
            findings.append(_no_method(files, error))
    findings += [finding for one in solved for finding in one.findings]
    return solved, tuple(findings)


def _possible(
    build: Build, bands: Sequence[Band]
) -> Iterator[tuple[str, Callable[[], list[Solved]]]]:
    """What to try on which file."""
    loads = find_load_sweeps(build.measurements)
    for pair in find_pairs(build.measurements):
        close = cache(partial(close_pair, pair, build.sheet, bands))
        yield pair.sweeps[0].file, partial(_solve_pair, close, build.sheet)
        if any(one.unit in pair.units for one in loads):
            yield pair.sweeps[0].file, partial(_solve_loaded, close, loads, build.sheet, bands)
    for sweeps in loads:
        file = sweeps.measurements[0].sweep.file
        yield file, partial(_solve_load, sweeps, build.sheet, bands)


def _solve_pair(close: Callable[[], ClosedPair], sheet: BuildSheet) -> list[Solved]:
    return [halving(close(), sheet), bisection(close(), sheet)]


def _solve_loaded(
    close: Callable[[], ClosedPair],
    loads: Sequence[LoadSweeps],
    sheet: BuildSheet,
    bands: Sequence[Band],
) -> list[Solved]:
    return [bisection_with_load(close(), loads, sheet, bands)]


def _solve_load(sweeps: LoadSweeps, sheet: BuildSheet, bands: Sequence[Band]) -> list[Solved]:
    return [load_only(sweeps, sheet, bands)]


def _no_method(file: str, error: NotMeasurable) -> Finding:
    return Finding(
        severity=Severity.WARNING,
        code="not-measurable",
        file=file,
        message=f"left out: {error}",
        remedy="sweep all set-ups of a build over the same range",
    )


def _why_nothing(build: Build, findings: Sequence[Finding]) -> str:
    if findings:
        return "; ".join(finding.message for finding in findings)
    setups = ", ".join(sorted({one.entry.setup.value for one in build.measurements}))
    return (
        f"no method can use the sweeps that are there ({setups}): loss needs two units back to "
        "back, match needs a load sweep"
    )


def _in_bands(solved: Solved, bands: Sequence[Band], power_w: float) -> MethodResult:
    return MethodResult(
        method=solved.method,
        unit=solved.unit,
        units=solved.units,
        load_ohm=solved.load_ohm,
        curves=solved.curves,
        bands=in_bands(solved.curves, bands, power_w),
        reason=solved.reason,
    )


# --- the result ----------------------------------------------------------------------------------


def _chosen(methods: Sequence[MethodResult], bands: Sequence[Band], power_w: float) -> MethodResult:
    """The method that gives loss in most bands, then the preferred one; several: their mean."""
    best = max(
        {one.method for one in methods},
        key=lambda method: (
            max(_bands_with_loss(one) for one in methods if one.method is method),
            -PREFERENCE.index(method),
        ),
    )
    same = [one for one in methods if one.method is best]
    return same[0] if len(same) == 1 else _mean_of(same, bands, power_w)


def _bands_with_loss(method: MethodResult) -> int:
    return sum(
        isinstance(band, MeasuredBand) and "efficiency_ratio" in band.figures
        for band in method.bands
    )


def _mean_of(same: Sequence[MethodResult], bands: Sequence[Band], power_w: float) -> MethodResult:
    """The mean of several pairs or units, on the points of the first that all cover."""
    first = same[0].curves
    low = max(one.curves.frequency_hz[0] for one in same)
    high = min(one.curves.frequency_hz[-1] for one in same)
    inside = (first.frequency_hz >= low) & (first.frequency_hz <= high)
    if np.count_nonzero(inside) < 2:
        return same[0]
    hz = first.frequency_hz[inside]

    def mean(name: str) -> np.ndarray[tuple[int, ...], np.dtype[np.float64]] | None:
        parts = [getattr(one.curves, name) for one in same]
        if any(part is None for part in parts):
            return None
        seen = [
            np.interp(hz, one.curves.frequency_hz, part)
            for one, part in zip(same, parts, strict=True)
        ]
        return np.asarray(np.mean(seen, axis=0))

    curves = Curves(
        frequency_hz=hz,
        native=first.native[inside],
        efficiency_ratio=mean("efficiency_ratio"),
        reflection_ratio=mean("reflection_ratio"),
        halved_pair_ratio=mean("halved_pair_ratio"),
    )
    return MethodResult(
        method=same[0].method,
        unit=None,
        units=tuple(dict.fromkeys(unit for one in same for unit in one.units)),
        load_ohm=same[0].load_ohm,
        curves=curves,
        bands=in_bands(curves, bands, power_w),
        reason=same[0].reason,
    )


def _all_fitted(solved: Sequence[Solved]) -> tuple[Fitted, ...]:
    """Every fitted quantity once, as the first pair named it."""
    found: dict[tuple[str, str], Fitted] = {}
    for one in solved:
        for fitted in one.fitted:
            found.setdefault((fitted.quantity, fitted.of), fitted)
    return tuple(found.values())


def _unused(build: Build) -> tuple[Finding, ...]:
    """Sweeps of set-ups from which no figure is taken."""
    return tuple(
        Finding(
            severity=Severity.NOTE,
            code="set-up-not-used",
            file=one.sweep.file,
            message=f"{one.entry.setup.value} sweeps are read and checked; no figure is taken "
            "from them",
            remedy="nothing to do",
        )
        for one in build.measurements
        if one.entry.setup not in USED_SETUPS
    )


def _unique(findings: Sequence[Finding]) -> tuple[Finding, ...]:
    return tuple(dict.fromkeys(findings))
