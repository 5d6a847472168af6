"""What a temperature log says: thermal resistance and time constant, or what is wrong with it.

Assumed: one body, evenly heated by a loss that stays what it was when measured cold.
"""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from reportgen.errors import NotMeasurable
from reportgen.model import (
    Finding,
    HeatRun,
    Interval,
    Severity,
    ThermalFit,
    ThermalLog,
    WarmUp,
)
from reportgen.physics.warm_up import fit_warm_up

_LONG_ENOUGH = 2.0  # time constants
_GAP = 0.2  # time constants
_OFF_CURVE = 0.05  # of the rise
_WARM_START = 0.15  # of the rise
_PARTS = 12
_PLAUSIBLE_S = (20.0, 6 * 3600.0)


def heat_of(power_w: float, efficiency_ratio: Interval) -> Interval:
    """Heat at a power that enters the low side, from the efficiency at that frequency [W].

    An end that is not known stays unknown. More efficiency is less heat: the ends change places.
    """
    low, high = efficiency_ratio.low95, efficiency_ratio.high95
    return Interval(
        value=power_w * (1 - efficiency_ratio.value),
        low95=None if high is None else power_w * (1 - high),
        high95=None if low is None else power_w * (1 - low),
    )


def thermal_resistance_k_per_w(rise_k: Interval, heat_w: Interval) -> Interval:
    """Rise of the core over the heat in it [K/W].

    The relative uncertainties of rise and heat add in quadrature, above and below by themselves.

    Raises
    ------
    NotMeasurable
        There is no heat to be seen at the log's frequency.
    """
    if heat_w.value <= 0:
        raise NotMeasurable("the sweeps show no heat at the frequency of the log")
    value = rise_k.value / heat_w.value
    up = _log_ratio(rise_k.high95, rise_k.value), _log_ratio(heat_w.value, heat_w.low95)
    down = _log_ratio(rise_k.value, rise_k.low95), _log_ratio(heat_w.high95, heat_w.value)
    high, low = float(np.hypot(*up)), float(np.hypot(*down))
    return Interval(
        value=value,
        low95=float(value * np.exp(-low)) if np.isfinite(low) else None,
        high95=float(value * np.exp(high)) if np.isfinite(high) else None,
    )


def _log_ratio(greater: float | None, lesser: float | None) -> float:
    """Logarithm of a ratio; infinite where an end is not known, or is no heat at all."""
    if greater is None or lesser is None or lesser <= 0:
        return float("inf")
    return float(np.log(greater / lesser))


# --- a log and its faults --------------------------------------------------------------------


def fit_log(
    run: HeatRun, efficiency_ratio: Interval
) -> tuple[tuple[ThermalFit, WarmUp] | None, tuple[Finding, ...]]:
    """What a log says, None where it says nothing, and what is wrong with it.

    Parameters
    ----------
    run : HeatRun
        Of one unit, the power entering its low side.
    efficiency_ratio : Interval
        Of that unit at the frequency of the log [ratio].
    """
    log, power_w = run.log, run.entry.power_w
    try:
        warm_up = fit_warm_up(log)
        heat_w = heat_of(power_w, efficiency_ratio)
        resistance = thermal_resistance_k_per_w(warm_up.rise_k, heat_w)
    except NotMeasurable as reason:
        return None, (_finding(log, Severity.ERROR, "log-says-nothing", str(reason)),)
    faults = tuple(_faults(log, warm_up))
    if any(fault.severity is Severity.ERROR for fault in faults):
        return None, faults
    fit = ThermalFit(
        file=log.file,
        unit=run.entry.unit,
        power_w=power_w,
        frequency_hz=run.entry.frequency_mhz * 1e6,
        heat_w=heat_w,
        rise_k=warm_up.rise_k,
        start_k=warm_up.start_k,
        time_constant_s=warm_up.time_constant_s,
        resistance_k_per_w=resistance,
        span_s=log.span_s,
    )
    return (fit, warm_up), faults


def _faults(log: ThermalLog, fit: WarmUp) -> Iterator[Finding]:
    """What makes a log doubtful (warning), or no warm-up (error)."""
    tau_s, rise_k = fit.time_constant_s.value, fit.rise_k.value
    falls_k = _fall_k(log)
    if falls_k > max(0.1 * rise_k, 1.0):
        text = f"the core cools by {falls_k:.1f} K before the end; expected constant power"
        yield _finding(log, Severity.ERROR, "log-falls", text, "end the log where power went off")
        return
    if log.span_s < tau_s or fit.rise_k.low95 is None or fit.time_constant_s.low95 is None:
        text = f"the log ends after {log.span_s:.0f} s, before the curve shows where it is going"
        yield _finding(log, Severity.ERROR, "log-too-short", text, "log until it hardly rises")
        return
    if log.span_s < _LONG_ENOUGH * tau_s:
        text = f"the log covers {log.span_s / tau_s:.1f} time constants of {tau_s:.0f} s"
        yield _finding(log, Severity.WARNING, "log-short", text, "three or more make it surer")
    gap_s = float(np.max(np.diff(log.time_s)))
    if gap_s > _GAP * tau_s:
        text = f"{gap_s:.0f} s pass between two rows, the time constant is {tau_s:.0f} s"
        yield _finding(log, Severity.WARNING, "log-gap", text, "log without a break")
    if not _PLAUSIBLE_S[0] < tau_s < _PLAUSIBLE_S[1]:
        text = f"a time constant of {tau_s:.3g} s is unlikely of a ring core"
        yield _finding(log, Severity.WARNING, "log-time-unit", text, "is time_s in seconds?")
    if abs(fit.start_k) > _WARM_START * rise_k:
        text = f"at the first row the core is {fit.start_k:+.1f} K off its surroundings"
        yield _finding(
            log, Severity.NOTE, "log-warm-start", text,
            "start cold, and see that both thermometers then read the same",
        )  # fmt: skip
    parts = [part.mean() for part in np.array_split(fit.core_c - fit.fitted_c, 2 * _PARTS)]
    off_k = float(np.max(np.abs(parts)))
    if off_k > max(_OFF_CURVE * rise_k, 1.0):
        text = f"the log is up to {off_k:.1f} K off the curve of one time constant"
        yield _finding(
            log, Severity.WARNING, "log-off-curve", text,
            "was the power constant from the first row on, and the thermometer fast?",
        )  # fmt: skip


def _fall_k(log: ThermalLog) -> float:
    """By how much the last part of the log is colder over the room than the hottest [K]."""
    parts = np.array_split(log.core_c - log.ambient_c, _PARTS)
    means = [float(np.median(part)) for part in parts]
    return max(means) - means[-1]


def _finding(
    log: ThermalLog, severity: Severity, code: str, message: str, remedy: str = "log again"
) -> Finding:
    return Finding(severity=severity, code=code, message=message, remedy=remedy, file=log.file)
