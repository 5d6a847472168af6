"""One build measured: every method its sweeps allow, the one that is the result, the rest."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np

from reportgen.errors import NotMeasurable
from reportgen.model import (
    Band,
    BandResult,
    BenchSheet,
    Build,
    BuildResult,
    Curves,
    Finding,
    Fitted,
    Limits,
    MeasuredBand,
    Measurement,
    Method,
    MethodResult,
    RealArray,
    Setup,
    Severity,
)
from reportgen.physics.bands import in_bands
from reportgen.physics.bandwidths import find_bandwidths
from reportgen.physics.checks import CHECKS, conditioned, corrected, find_checks
from reportgen.physics.drawn import Drawn
from reportgen.physics.grid import common_grid
from reportgen.physics.loads import find_load_sweeps, load_findings, one_unit_only
from reportgen.physics.methods import NOT_DETERMINED_PF, Computed, Plan
from reportgen.physics.plans import find_plans, not_measurable
from reportgen.physics.quantities import BY_KEY
from reportgen.physics.seen import AS_SWEPT
from reportgen.physics.uncertainty import (
    DRAWS,
    RATIOS,
    Spread,
    curves_of,
    draw_grid,
    efficiency_ribbon,
    half_width,
    in_range,
    mean_draws,
    mean_spread,
    spread_of,
    with_intervals,
)

PREFERENCE = (
    Method.BISECTION_LOAD,
    Method.THREE_PAIRS_LOAD,
    Method.TERMINATIONS,
    Method.THREE_PAIRS,
    Method.BISECTION,
    Method.SERIES_RESISTOR,
    Method.DIRECT,
    Method.LOAD_ONLY,
    Method.HALVING,
)
"""Which method is the result where their intervals are equal."""

USED_SETUPS = (
    Setup.BACK_TO_BACK,
    Setup.LOAD,
    Setup.OPEN,
    Setup.SHORT,
    Setup.SERIES_RESISTOR,
    Setup.DIRECT,
    *CHECKS,
)


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Solved:
    """A plan carried out: its figures, what draws do to them, and what it computed on the way."""

    plan: Plan
    result: MethodResult
    spread: Spread
    computed: Computed


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
    drawn = Drawn(bench.calibrations, build.key, DRAWS)
    solved, findings = _solve_all(build, bands, power_w, drawn)
    if not solved:
        raise NotMeasurable(_why_nothing(build, findings))
    chosen, spread = _chosen(solved, bands, power_w)
    methods = tuple(one.result for one in solved)
    return BuildResult(
        build=build,
        power_w=power_w,
        chosen=chosen,
        units=tuple(one for one in methods if one.unit is not None and one.method is chosen.method)
        or tuple(one for one in methods if one.method is Method.LOAD_ONLY),
        methods=methods,
        bandwidths=find_bandwidths(chosen.curves, bench.limits.get("all", Limits())),
        fitted=_fitted(build, solved),
        findings=_unique((*build.findings, *findings, *_unused(build))),
        loss_draws_db=_loss_draws_db(chosen, spread),
    )


def _touched(build: Build, known: Sequence[Band]) -> tuple[Band, ...]:
    """The bands that any sweep overlaps."""
    ranges = [(one.sweep.frequency_hz[0], one.sweep.frequency_hz[-1]) for one in build.measurements]
    return tuple(
        band
        for band in known
        if any(low < band.to_hz and band.from_hz < high for low, high in ranges)
    )


# --- methods -------------------------------------------------------------------------------------


def _solve_all(
    build: Build, bands: Sequence[Band], power_w: float, drawn: Drawn
) -> tuple[list[Solved], tuple[Finding, ...]]:
    """All methods that the sweeps allow, and what was found on the way."""
    plans, found = find_plans(build)
    checks = find_checks(build.measurements)
    solved: list[Solved] = []
    findings = list(found)
    for plan in plans:
        findings += plan.findings
        try:
            one = _solve(plan, bands, power_w, drawn, checks)
        except NotMeasurable as error:
            findings.append(not_measurable(plan.sweeps[0].file, error))
            continue
        solved.append(one)
        findings += _findings_of_loads(build, one)
    return solved, tuple(findings)


def _solve(
    plan: Plan,
    bands: Sequence[Band],
    power_w: float,
    drawn: Drawn,
    checks: Sequence[Measurement],
) -> Solved:
    grid = common_grid(plan.sweeps, bands)
    computed = plan.compute(grid.frequency_hz, AS_SWEPT)
    curves = curves_of(computed, grid.frequency_hz, grid.native)
    hz = grid.frequency_hz
    spread = spread_of(plan, draw_grid(hz[0], hz[-1], bands), drawn)
    spread = conditioned(spread, checks, drawn)
    curves = corrected(curves, spread)
    result = MethodResult(
        method=plan.method,
        unit=plan.unit,
        units=plan.units,
        load_ohm=plan.load_ohm,
        curves=_with_ribbon(curves, spread),
        bands=with_intervals(in_bands(curves, bands, power_w), spread, power_w),
        reason=plan.reason,
    )
    return Solved(plan=plan, result=result, spread=spread, computed=computed)


def _with_ribbon(curves: Curves, spread: Spread) -> Curves:
    ends = efficiency_ribbon(curves, spread)
    if ends is None:
        return curves
    return replace(curves, efficiency_low95=ends[0], efficiency_high95=ends[1])


def _why_nothing(build: Build, findings: Sequence[Finding]) -> str:
    if findings:
        return "; ".join(finding.message for finding in findings)
    setups = ", ".join(sorted({one.entry.setup.value for one in build.measurements}))
    return (
        f"no method can use the sweeps that are there ({setups}): loss needs two units back to "
        "back, match needs a load sweep"
    )


# --- the result ----------------------------------------------------------------------------------


def _chosen(
    solved: Sequence[Solved], bands: Sequence[Band], power_w: float
) -> tuple[MethodResult, Spread]:
    """The method with loss in most bands and then the smallest interval; several: their mean."""
    groups: dict[Method, list[Solved]] = {}
    for one in solved:
        groups.setdefault(one.plan.method, []).append(one)
    means = [_mean_of(group, bands, power_w) for group in groups.values()]
    return min(means, key=lambda mean: _rank(mean[0]))


def _rank(result: MethodResult) -> tuple[int, float, int]:
    losses = [
        band.figures["heat_loss_db"]
        for band in result.bands
        if isinstance(band, MeasuredBand) and "heat_loss_db" in band.figures
    ]
    widths = [
        figure.high95 - figure.low95
        for figure in losses
        if figure.high95 is not None and figure.low95 is not None
    ]
    width = float(np.mean(widths)) if widths else float("inf")
    return -len(losses), round(width, 4), PREFERENCE.index(result.method)


def _mean_of(
    group: Sequence[Solved], bands: Sequence[Band], power_w: float
) -> tuple[MethodResult, Spread]:
    """The mean over several pairs or units, on the points of the first that all cover."""
    first = group[0].result
    if len(group) == 1:
        return first, group[0].spread
    low = max(one.result.curves.frequency_hz[0] for one in group)
    high = min(one.result.curves.frequency_hz[-1] for one in group)
    inside = (first.curves.frequency_hz >= low) & (first.curves.frequency_hz <= high)
    if np.count_nonzero(inside) < 2:
        return first, group[0].spread
    hz = first.curves.frequency_hz[inside]
    parts = {name: _mean_ratio([one.result.curves for one in group], name, hz) for name in RATIOS}
    curves = Curves(frequency_hz=hz, native=first.curves.native[inside], **parts)
    spread = mean_spread([one.spread for one in group])
    result = replace(
        first,
        unit=None,
        units=tuple(dict.fromkeys(unit for one in group for unit in one.result.units)),
        curves=_with_ribbon(curves, spread),
        bands=with_intervals(in_bands(curves, bands, power_w), spread, power_w),
    )
    return result, spread


def _mean_ratio(parts: Sequence[Curves], name: str, frequency_hz: RealArray) -> RealArray | None:
    found = [(one.frequency_hz, getattr(one, name)) for one in parts]
    if any(ratio is None for _, ratio in found):
        return None
    return np.asarray(np.mean([np.interp(frequency_hz, hz, ratio) for hz, ratio in found], axis=0))


def _loss_draws_db(chosen: MethodResult, spread: Spread) -> dict[str, RealArray]:
    """Draws of the mean heat loss of each band, for comparisons [dB]."""
    quantity = BY_KEY["heat_loss_db"]
    return {
        band.band.name: mean_draws(
            quantity, band.figures["heat_loss_db"], spread, in_range(spread, band), 1.0
        )
        for band in _with_loss(chosen.bands)
    }


def _with_loss(bands: Sequence[BandResult]) -> list[MeasuredBand]:
    return [
        band for band in bands if isinstance(band, MeasuredBand) and "heat_loss_db" in band.figures
    ]


# --- strays and what contradicts the sidecar -----------------------------------------------------


def _fitted(build: Build, solved: Sequence[Solved]) -> tuple[Fitted, ...]:
    """The stray of every load that was to be fitted, by the method that knows it best."""
    loads = {sweeps.name: sweeps.load for sweeps in find_load_sweeps(build.measurements)}
    found: dict[str, Fitted] = {}
    for one in sorted(solved, key=lambda one: _rank(one.result)):
        for name, fit in one.computed.strays.items():
            if loads[name].stray_pf != "fit" or name in found:
                continue
            found[name] = _fitted_stray(name, float(fit.stray_f), float(fit.spread_f), one)
    return tuple(found.values())


def _fitted_stray(name: str, stray_f: float, spread_f: float, one: Solved) -> Fitted:
    of = f"loads.{name}"
    if spread_f > NOT_DETERMINED_PF * 1e-12:
        reason = "not determined: the range swept leaves no trace of a few picofarads in the data"
        return Fitted(quantity="stray_pf", of=of, value=None, reason=reason)
    drawn = one.spread.strays.get(name)
    u95 = None if drawn is None else half_width(drawn.stray_f) * 1e12
    return Fitted(quantity="stray_pf", of=of, value=stray_f * 1e12, u95=u95)


def _findings_of_loads(build: Build, one: Solved) -> list[Finding]:
    loads = [
        sweeps
        for sweeps in find_load_sweeps(build.measurements)
        if sweeps.unit in one.plan.units and sweeps.name in one.computed.strays
    ]
    first = {sweeps.name: sweeps for sweeps in reversed(loads)}
    findings = [
        finding
        for name, sweeps in first.items()
        for finding in load_findings(sweeps, one.computed.strays[name])
    ]
    return [*findings, *(one_unit_only(one.plan.units, loads) if loads else ())]


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
