"""Each method carried out: figures in every band, with their intervals."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

from reportgen.errors import NotMeasurable
from reportgen.model import (
    Band,
    BandResult,
    Build,
    Curves,
    Finding,
    MeasuredBand,
    Measurement,
    MethodResult,
    RealArray,
)
from reportgen.physics.bands import in_bands, readings_in_bands
from reportgen.physics.checks import conditioned, corrected, find_checks
from reportgen.physics.drawn import Drawn
from reportgen.physics.grid import common_grid
from reportgen.physics.loads import find_load_sweeps, load_findings, one_unit_only
from reportgen.physics.methods import Computed, Plan
from reportgen.physics.plans import find_plans, not_measurable
from reportgen.physics.quantities import BY_KEY
from reportgen.physics.seen import AS_SWEPT
from reportgen.physics.uncertainty import (
    Spread,
    curves_of,
    draw_grid,
    efficiency_ribbon,
    in_range,
    mean_draws,
    spread_of,
    with_intervals,
)


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Solved:
    """A plan carried out: its figures, what draws do to them, and what it computed on the way."""

    plan: Plan
    result: MethodResult
    spread: Spread
    computed: Computed


def solve_all(
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
    if plan.readings:
        return _solve_readings(plan, bands, power_w)
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
        curves=with_ribbon(curves, spread),
        bands=with_intervals(in_bands(curves, bands, power_w), spread, power_w),
        reason=plan.reason,
    )
    return Solved(plan=plan, result=result, spread=spread, computed=computed)


def _solve_readings(plan: Plan, bands: Sequence[Band], power_w: float) -> Solved:
    """Single readings: figures where there is one, and no intervals."""
    hz = plan.sweeps[0].frequency_hz
    computed = plan.compute(hz, AS_SWEPT)
    curves = curves_of(computed, hz)
    result = MethodResult(
        method=plan.method,
        unit=plan.unit,
        units=plan.units,
        load_ohm=plan.load_ohm,
        curves=curves,
        bands=readings_in_bands(curves, bands, power_w),
        reason=plan.reason,
    )
    return Solved(
        plan=plan, result=result, spread=Spread(seen=curves, drawn=curves), computed=computed
    )


def with_ribbon(curves: Curves, spread: Spread) -> Curves:
    """The same curves with the interval of efficiency along them."""
    ends = efficiency_ribbon(curves, spread)
    if ends is None:
        return curves
    return replace(curves, efficiency_low95=ends[0], efficiency_high95=ends[1])


def _findings_of_loads(build: Build, one: Solved) -> list[Finding]:
    loads = [
        sweeps
        for sweeps in find_load_sweeps(build.measurements)
        if sweeps.unit in one.plan.units and sweeps.stray_key in one.computed.strays
    ]
    first = {sweeps.stray_key: sweeps for sweeps in reversed(loads)}
    findings = [
        finding
        for name, sweeps in first.items()
        for finding in load_findings(sweeps, one.computed.strays[name])
    ]
    return [*findings, *(one_unit_only(one.plan.units, loads) if loads else ())]


def loss_draws_db(chosen: MethodResult, spread: Spread) -> dict[str, RealArray]:
    """Draws of the mean heat loss of each band, for comparisons [dB]."""
    quantity = BY_KEY["heat_loss_db"]
    return {
        band.band.name: mean_draws(
            quantity, band.figures["heat_loss_db"], spread, in_range(spread, band), 1.0
        )
        for band in bands_with_loss(chosen.bands)
    }


def bands_with_loss(bands: Sequence[BandResult]) -> list[MeasuredBand]:
    """The bands in which loss was measured."""
    return [
        band for band in bands if isinstance(band, MeasuredBand) and "heat_loss_db" in band.figures
    ]
