"""What the temperature logs of a build say of the power that it stands."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from reportgen.model import (
    BenchSheet,
    Build,
    Finding,
    HeatRun,
    Interval,
    MethodResult,
    Severity,
    Stress,
    Thermal,
    ThermalFit,
    WarmUp,
)
from reportgen.physics.permitted_power import duty_table, lowest_limit, permitted_of

Fitted = tuple[ThermalFit, WarmUp]

_NO_LIMIT = "no temperature limit is given, so no power follows from the log"
_NO_HEAT = "no band has a heat that is known, so no power follows from the log"


def fit_heat_runs(
    build: Build, chosen: MethodResult, units: Sequence[MethodResult]
) -> tuple[tuple[Fitted, ...], tuple[Finding, ...]]:
    """Every log of a build with the heat that the sweeps of its unit give, and what is wrong.

    A unit that no method knows by itself counts as the mean.
    """
    fits: list[Fitted] = []
    findings: list[Finding] = []
    for run in build.heat_runs:
        fit, found = _fit(run, chosen, units)
        fits += [] if fit is None else [fit]
        findings += found
    return tuple(fits), tuple(findings)


def _fit(
    run: HeatRun, chosen: MethodResult, units: Sequence[MethodResult]
) -> tuple[Fitted | None, tuple[Finding, ...]]:
    from reportgen.physics.thermal import fit_log  # slow to import, and most builds have no log

    known = (one for one in units if one.curves.efficiency_ratio is not None)
    own = next((one for one in known if one.unit == run.entry.unit), chosen)
    efficiency = efficiency_at(own, run.entry.frequency_mhz * 1e6)
    if efficiency is None:
        return None, (_not_known(run),)
    return fit_log(run, efficiency)


def efficiency_at(method: MethodResult, frequency_hz: float) -> Interval | None:
    """Efficiency at one frequency, between the points of a curve [ratio]; None: not covered."""
    curves = method.curves
    hz = curves.frequency_hz
    ends = (curves.efficiency_ratio, curves.efficiency_low95, curves.efficiency_high95)
    if not hz[0] <= frequency_hz <= hz[-1] or ends[0] is None:
        return None
    value, low, high = (
        None if end is None else float(np.interp(frequency_hz, hz, end)) for end in ends
    )
    assert value is not None
    return Interval(value=value, low95=low, high95=high)


def _not_known(run: HeatRun) -> Finding:
    return Finding(
        severity=Severity.WARNING,
        code="log-without-loss",
        file=run.log.file,
        message=f"no sweep tells the efficiency at {run.entry.frequency_mhz:g} MHz, so the heat "
        "during this log is not known",
        remedy="sweep that frequency too, or log at one that was swept",
    )


def thermal_of(
    fits: Sequence[Fitted], build: Build, bench: BenchSheet, stress: Stress | None
) -> Thermal | None:
    """The log that warms most for its heat, and the power that follows from it; None: no log."""
    if not fits or stress is None:
        return None
    fit, warm_up = max(fits, key=lambda one: one[0].resistance_k_per_w.value)
    permitted = permitted_of(fit, stress, build.sheet, duty_table(bench.duty))
    reason = _NO_LIMIT if lowest_limit(build.sheet) is None else _NO_HEAT
    return Thermal(
        fits=tuple(one for one, _ in fits),
        fit=fit,
        warm_up=warm_up,
        permitted=permitted,
        reason=None if permitted else reason,
    )
