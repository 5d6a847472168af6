"""Load sweeps: the pair that they close, the stray that they name, the match by themselves."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np

from reportgen.errors import NotMeasurable
from reportgen.model import (
    Band,
    BuildSheet,
    ComplexArray,
    Curves,
    Finding,
    Fitted,
    Load,
    Measurement,
    Method,
    RealArray,
    Setup,
    Severity,
)
from reportgen.physics.bisection import (
    FIT_BOUND_PF,
    StrayFit,
    fit_stray,
    halve_pair,
    load_squared,
    ratio_by_load,
    unit_of_pair,
)
from reportgen.physics.grid import common_grid, resampled
from reportgen.physics.methods import (
    ClosedPair,
    Solved,
    closing_ratio,
    curves_of_chain,
    pair_scattering,
)
from reportgen.physics.network import (
    impedance_of_reflection,
    reflection_of_impedance,
    resistor_ohm,
)
from reportgen.physics.pairs import Pair

NOT_DETERMINED_PF = 3.0
"""A stray known no better than this is not determined by the data [pF]."""

RESISTANCE_DOUBT = 0.1
"""A load that seems to differ by more than this part from what was entered is a finding."""


@dataclass(frozen=True, slots=True, eq=False)
class LoadSweeps:
    """The load sweeps of one unit with one load; `name` is the load's key path."""

    unit: str
    name: str
    load: Load
    measurements: tuple[Measurement, ...]

    def reflection(self, frequency_hz: RealArray) -> ComplexArray:
        """Mean of the sweeps at frequencies within all of them, (F,) [ratio]."""
        seen = [resampled(one.sweep, frequency_hz)[0, 0] for one in self.measurements]
        return np.asarray(np.mean(seen, axis=0))


def find_load_sweeps(measurements: Sequence[Measurement]) -> tuple[LoadSweeps, ...]:
    """Load sweeps by unit and load, in the order of their first sweep."""
    found: dict[tuple[str, str], list[Measurement]] = {}
    for one in measurements:
        if one.entry.setup is Setup.LOAD and one.load is not None:
            key = (one.entry.unit or "A", one.entry.load or "load")
            found.setdefault(key, []).append(one)
    return tuple(
        LoadSweeps(unit, name, group[0].load, tuple(group))
        for (unit, name), group in found.items()
        if group[0].load is not None
    )


def bisection_with_load(
    closed: ClosedPair, loads: Sequence[LoadSweeps], sheet: BuildSheet, bands: Sequence[Band]
) -> Solved:
    """The mean of two units from their pair and their load sweeps.

    Raises
    ------
    NotMeasurable
        None of the two units was swept with a load, or not in the pair's range.
    """
    used = [sweeps for sweeps in loads if sweeps.unit in closed.pair.units]
    if not used:
        raise NotMeasurable("neither unit of the pair was swept with a load")
    files = [one.sweep for sweeps in used for one in sweeps.measurements]
    grid = common_grid([*closed.pair.sweeps, *files], bands)
    hz = grid.frequency_hz
    s = pair_scattering(closed.pair, hz)
    halved = halve_pair(s)
    expected = closing_ratio(halved, closed.circuit, hz)
    squared = {
        id(sweeps): load_squared(halved, impedance_of_reflection(sweeps.reflection(hz)))
        for sweeps in used
    }
    strays = {
        name: _stray_of_load([one for one in used if one.name == name], squared, expected, hz)
        for name in dict.fromkeys(one.name for one in used)
    }
    ratio_squared = [
        squared[id(one)] / (2 * resistor_ohm(one.load.resistance_ohm, strays[one.name].used_f, hz))
        for one in used
    ]
    t = ratio_by_load(np.mean(ratio_squared, axis=0) * 2, 1.0, expected)
    return Solved(
        method=Method.BISECTION_LOAD,
        unit=None,
        units=closed.pair.units,
        load_ohm=sheet.nominal_load_ohm,
        curves=curves_of_chain(unit_of_pair(halved, t), grid, sheet, s),
        fitted=tuple(stray.fitted for stray in strays.values() if stray.fitted is not None),
        findings=(
            *(finding for stray in strays.values() for finding in stray.findings),
            *_one_unit_only(closed.pair, used),
        ),
    )


@dataclass(frozen=True, kw_only=True, slots=True)
class _Stray:
    """The stray of one load: what is used [F], what is reported."""

    used_f: float
    fitted: Fitted | None = None
    findings: tuple[Finding, ...] = ()


def _stray_of_load(
    used: Sequence[LoadSweeps],
    squared: Mapping[int, ComplexArray],
    expected: ComplexArray,
    frequency_hz: RealArray,
) -> _Stray:
    first = used[0]
    mean = np.mean([squared[id(one)] for one in used], axis=0)
    fit = fit_stray(mean, expected, first.load.resistance_ohm, frequency_hz)
    findings = _load_findings(first, fit)
    if first.load.stray_pf != "fit":
        return _Stray(used_f=first.load.stray_pf * 1e-12, findings=findings)
    fitted, used_f = _reported(first, fit)
    return _Stray(used_f=used_f, fitted=fitted, findings=findings)


def _reported(sweeps: LoadSweeps, fit: StrayFit) -> tuple[Fitted, float]:
    of = f"loads.{sweeps.name}"
    if fit.spread_f > NOT_DETERMINED_PF * 1e-12:
        reason = (
            f"not determined: {sweeps.load.resistance_ohm:g} ohm and the range swept leave no "
            "trace of a few picofarads in the data"
        )
        return Fitted(quantity="stray_pf", of=of, value=None, reason=reason), 0.0
    stray_f = float(fit.stray_f)
    return Fitted(quantity="stray_pf", of=of, value=stray_f * 1e12), stray_f


def _load_findings(sweeps: LoadSweeps, fit: StrayFit) -> tuple[Finding, ...]:
    found = []
    file, key = sweeps.measurements[0].sweep.file, f"loads.{sweeps.name}"
    stray_pf, spread_pf = float(fit.stray_f) * 1e12, float(fit.spread_f) * 1e12
    entered = sweeps.load.stray_pf
    if abs(stray_pf) >= FIT_BOUND_PF:
        found.append(
            Finding(
                severity=Severity.WARNING,
                code="stray-at-bound",
                file=file,
                key=f"{key}.stray_pf",
                message="the fit of the load's stray capacitance ran to its bound of "
                f"{stray_pf:.0f} pF",
                remedy="check which load and which unit this sweep belongs to",
            )
        )
    elif entered != "fit" and abs(stray_pf - entered) > max(1.0, 2 * spread_pf):
        found.append(
            Finding(
                severity=Severity.WARNING,
                code="stray-contradicted",
                file=file,
                key=f"{key}.stray_pf",
                message=f"the sidecar says {entered:g} pF, the sweeps say {stray_pf:.1f} pF; "
                "the sidecar's value was used",
                remedy='set stray_pf = "fit", or measure the resistor on its leads again',
            )
        )
    seen_ohm = sweeps.load.resistance_ohm * float(fit.resistance_ratio)
    if abs(fit.resistance_ratio - 1) > RESISTANCE_DOUBT:
        found.append(
            Finding(
                severity=Severity.WARNING,
                code="load-contradicted",
                file=file,
                key=f"{key}.resistance_ohm",
                message=f"the sidecar says {sweeps.load.resistance_ohm:g} ohm; with the turns "
                f"entered, the sweeps look like {seen_ohm:.3g} ohm",
                remedy="check the load's value and the turns",
            )
        )
    return tuple(found)


def _one_unit_only(pair: Pair, used: Sequence[LoadSweeps]) -> tuple[Finding, ...]:
    missing = [unit for unit in pair.units if unit not in {one.unit for one in used}]
    if not missing:
        return ()
    return (
        Finding(
            severity=Severity.NOTE,
            code="one-unit-loaded",
            file=used[0].measurements[0].sweep.file,
            message=f"unit {missing[0]} was not swept with a load; unit {used[0].unit} stands for "
            "both, so their difference is in the figures",
            remedy=f'add a sweep with setup = "load", unit = "{missing[0]}"',
        ),
    )


def load_only(sweeps: LoadSweeps, sheet: BuildSheet, bands: Sequence[Band]) -> Solved:
    """The match of one unit with the load it had; loss is not measured so."""
    grid = common_grid([one.sweep for one in sweeps.measurements], bands)
    z_in_ohm = impedance_of_reflection(sweeps.reflection(grid.frequency_hz))
    gamma = reflection_of_impedance(z_in_ohm, sheet.match.source_ohm)
    return Solved(
        method=Method.LOAD_ONLY,
        unit=sweeps.unit,
        units=(sweeps.unit,),
        load_ohm=sweeps.load.resistance_ohm,
        curves=Curves(
            frequency_hz=grid.frequency_hz,
            native=grid.native,
            reflection_ratio=np.abs(gamma) ** 2,
        ),
        reason="loss is not measured: a load sweep shows the match only; sweep two units back "
        "to back to get it",
    )
