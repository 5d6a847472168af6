"""One build measured: every method its sweeps allow, the one that is the result, the rest."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import TypedDict

import numpy as np

from reportgen.errors import NotMeasurable
from reportgen.model import (
    Advice,
    Band,
    BandResult,
    BenchSheet,
    BudgetLine,
    Build,
    BuildResult,
    Finding,
    Fitted,
    Limits,
    MeasuredBand,
    MethodResult,
)
from reportgen.physics.agree import find_agreements
from reportgen.physics.bandwidths import find_bandwidths
from reportgen.physics.budget import Question, find_advice, find_budget
from reportgen.physics.checks import check_findings
from reportgen.physics.choose import chosen_of, rank
from reportgen.physics.drawn import Drawn
from reportgen.physics.forecast import Forecast, forecast_of
from reportgen.physics.heat_runs import fit_heat_runs, thermal_of
from reportgen.physics.heat_split import heat_split_of
from reportgen.physics.judge import judge
from reportgen.physics.loads import find_load_sweeps
from reportgen.physics.lots import find_repeatability, lot_of
from reportgen.physics.methods import NOT_DETERMINED_PF
from reportgen.physics.mismatch import most_heat_ratios
from reportgen.physics.solve import Solved, bands_with_loss, loss_draws_db, solve_all
from reportgen.physics.stress import stress_of
from reportgen.physics.uncertainty import DRAWS, half_width


@dataclass(frozen=True, slots=True, eq=False)
class Measured:
    """A build's result, and the method behind it, once for each pair or unit."""

    result: BuildResult
    group: tuple[Solved, ...]

    def forecast(self) -> Forecast | None:
        """What to wind next; None where the result's method does not know the winding."""
        bands = measured_bands(self.result.chosen.bands)
        return forecast_of(self.group, self.result.build, bands) if bands else None


def measure_build(build: Build, bench: BenchSheet, known: Sequence[Band]) -> BuildResult:
    """Everything that a build's sweeps say; see `measure`."""
    return measure(build, bench, known).result


@np.errstate(divide="ignore", invalid="ignore", over="ignore")
def measure(build: Build, bench: BenchSheet, known: Sequence[Band]) -> Measured:
    """Everything that a build's sweeps say, and what it rests on.

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
    solved, findings = solve_all(build, bands, power_w, drawn)
    if not solved:
        raise NotMeasurable(_why_nothing(build, findings))
    group, chosen, spread = chosen_of(solved, bands, power_w)
    units = _units(solved)
    agreements, doubts = find_agreements(solved, drawn)
    checked = check_findings(build.measurements, drawn)
    methods = tuple(one.result for one in solved)
    fits, of_logs = fit_heat_runs(build, chosen, units)
    most_heat = most_heat_ratios(group, build.sheet, chosen.bands)
    stress = stress_of(build.sheet, measured_bands(chosen.bands), power_w, most_heat)
    result = BuildResult(
        build=build,
        power_w=power_w,
        chosen=chosen,
        units=units,
        methods=methods,
        bandwidths=find_bandwidths(chosen.curves, bench.limits.get("all", Limits())),
        fitted=_fitted(build, solved),
        findings=_unique((*build.findings, *findings, *doubts, *checked, *of_logs)),
        loss_draws_db=loss_draws_db(chosen, spread),
        agreements=agreements,
        limits=judge(chosen.bands, bench),
        stress=stress,
        thermal=thermal_of(fits, build, bench, stress),
        heat_split=heat_split_of(group, chosen.bands, build.sheet, power_w),
        lot=lot_of(units),
        repeatability=find_repeatability(build.measurements),
        **_budget_and_advice(build, bench, group, chosen),
    )
    return Measured(result, tuple(group))


def measured_bands(bands: Sequence[BandResult]) -> list[MeasuredBand]:
    """Those that have figures."""
    return [band for band in bands if isinstance(band, MeasuredBand)]


def _touched(build: Build, known: Sequence[Band]) -> tuple[Band, ...]:
    """The bands that any sweep overlaps."""
    ranges = [(one.sweep.frequency_hz[0], one.sweep.frequency_hz[-1]) for one in build.measurements]
    return tuple(
        band
        for band in known
        if any(low < band.to_hz and band.from_hz < high for low, high in ranges)
    )


def _why_nothing(build: Build, findings: Sequence[Finding]) -> str:
    if findings:
        return "; ".join(finding.message for finding in findings)
    setups = ", ".join(sorted({one.entry.setup.value for one in build.measurements}))
    return (
        f"no method can use the sweeps that are there ({setups}): loss needs two units back to "
        "back, match needs a load sweep"
    )


# --- beside the result ---------------------------------------------------------------------------


def _units(solved: Sequence[Solved]) -> tuple[MethodResult, ...]:
    """Each unit by itself, by the method that knows it best."""
    best: dict[str, MethodResult] = {}
    for one in sorted((one.result for one in solved), key=rank):
        if one.unit is not None:
            best.setdefault(one.unit, one)
    return tuple(best[unit] for unit in sorted(best))


class _Beside(TypedDict):
    budget: tuple[BudgetLine, ...]
    advice: tuple[Advice, ...]


def _budget_and_advice(
    build: Build, bench: BenchSheet, group: Sequence[Solved], chosen: MethodResult
) -> _Beside:
    bands = tuple(bands_with_loss(chosen.bands))
    if not bands:
        return {"budget": (), "advice": ()}
    question = Question(
        build=build,
        calibrations=bench.calibrations,
        plans=tuple(one.plan for one in group),
        bands=bands,
    )
    return {"budget": find_budget(question), "advice": find_advice(question)}


def _fitted(build: Build, solved: Sequence[Solved]) -> tuple[Fitted, ...]:
    """The stray of every load that was to be fitted, by the method that knows it best."""
    loads = {sweeps.stray_key: sweeps.load for sweeps in find_load_sweeps(build.measurements)}
    found: dict[str, Fitted] = {}
    for one in sorted(solved, key=lambda one: rank(one.result)):
        for name, fit in one.computed.strays.items():
            if loads[name].stray_pf != "fit" or name in found:
                continue
            found[name] = _fitted_stray(name, float(fit.stray_f), float(fit.spread_f), one)
    return tuple(found.values())


def _fitted_stray(name: str, stray_f: float, spread_f: float, one: Solved) -> Fitted:
    of = f"loads.{name}"
    if not (spread_f <= NOT_DETERMINED_PF * 1e-12 and np.isfinite(stray_f)):
        reason = "not determined: the range swept leaves no trace of a few picofarads in the data"
        return Fitted(quantity="stray_pf", of=of, value=None, reason=reason)
    drawn = one.spread.computed.strays.get(name)
    u95 = None if drawn is None else half_width(drawn.stray_f) * 1e12
    return Fitted(quantity="stray_pf", of=of, value=stray_f * 1e12, u95=u95)


def _unique(findings: Sequence[Finding]) -> tuple[Finding, ...]:
    """Each finding once; of those about one key of the sidecar, the first method's."""
    found: dict[object, Finding] = {}
    for one in findings:
        same = (one.code, one.key) if (one.key or "").startswith("loads.") else one
        found.setdefault(same, one)
    return tuple(found.values())
