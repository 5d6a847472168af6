"""What a passive transformer cannot show: warnings about a sweep that was read without fault.

Nothing is altered here. Unless noted otherwise the thresholds are those that showed up on real
handheld sweeps; they are common practice, not taken from a standard.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Iterator, Sequence
from datetime import date

import numpy as np
from numpy.lib.stride_tricks import sliding_window_view
from numpy.typing import NDArray

from reportgen.model import (
    Band,
    BenchSheet,
    BuildSheet,
    ComplexArray,
    Finding,
    Measurement,
    RealArray,
    Setup,
    Severity,
    Sweep,
)

_REFLECTION_LIMIT = 1.005
_POWER_LIMIT = 1.01
_GAIN_LIMIT = 1.05
_GAIN_SHARE = 0.05
_ZERO = 1e-9
_RECIPROCITY_LIMIT = 0.02
# Ours: twice what simulated pairs, a few per cent apart, reach on a handheld analyzer (0.05).
_ASYMMETRY_LIMIT = 0.1
_SPIKE_DB = 0.4
_SPIKE_DEVIATIONS = 12
_MEDIAN_POINTS = 7
_FEWEST_FOR_SPIKES = 21
_FEWEST_IN_BAND = 5
_LISTED = 5
_FIRST_YEAR = 2010


def without_answered(
    findings: Sequence[Finding], measurements: Sequence[Measurement]
) -> tuple[Finding, ...]:
    """Findings without the call for the other path of pairs that were swept both ways round."""
    pairs = [one for one in measurements if one.entry.setup is Setup.BACK_TO_BACK]
    ways = {one.entry.pair for one in pairs}
    both = {one.sweep.file for one in pairs if one.entry.pair[::-1] in ways}
    return tuple(one for one in findings if one.code != "one-path" or one.file not in both)


def check_sweep(measurement: Measurement, bands: Iterable[Band]) -> tuple[Finding, ...]:
    """Warnings about a sweep that is physically implausible, or coarse in a band.

    Parameters
    ----------
    measurement : Measurement
        The sweep in its set-up.
    bands : iterable of Band
        Those that are to be reported.
    """
    sweep = measurement.sweep
    found = [*_reflection(sweep), *_coarse(sweep, bands)]
    if sweep.ports == 2:
        found += [*_through(sweep), *_not_reciprocal(sweep)]
        if measurement.entry.setup is Setup.BACK_TO_BACK:
            found += _asymmetric(sweep)
    return (*found, *_spikes(sweep))


def check_dates(sheet: BuildSheet, bench: BenchSheet) -> tuple[Finding, ...]:
    """Warnings about dates that an analyzer with a reset clock gives.

    A build measured before the calibration that its sweeps name, or either before 2010.
    """
    used = {entry.calibration for entry in sheet.sweep}
    named = used if len(bench.calibrations) > 1 else set(bench.calibrations)
    performed = [
        (name, calibration.performed_on)
        for name, calibration in bench.calibrations.items()
        if name in named and calibration.performed_on is not None
    ]
    dated = [("measured_on", sheet.measured_on)] if sheet.measured_on else []
    dated += [(f"calibrations.{name}.performed_on", day) for name, day in performed]
    found = [_reset_clock(key, day) for key, day in dated if day.year < _FIRST_YEAR]
    for name, day in performed if not found else []:
        if sheet.measured_on is not None and sheet.measured_on < day:
            message = f"measured on {sheet.measured_on}, before the calibration {name} of {day}"
            found.append(_date_warning(message, "measured_on"))
    return tuple(found)


def _reset_clock(key: str, day: date) -> Finding:
    return _date_warning(f"the date {day} looks like a reset clock", key)


def _date_warning(message: str, key: str) -> Finding:
    bench = key.startswith("calibrations")
    return Finding(
        severity=Severity.WARNING,
        code="clock",
        message=message,
        remedy="correct the date",
        file="runs.toml" if bench else "build.toml",
        key=key,
    )


# --- power ---------------------------------------------------------------------------------------


def _reflection(sweep: Sweep) -> Iterator[Finding]:
    """More reflected than came in: abs(S11), and abs(S22) where measured, above 1.005."""
    for port in range(1 if sweep.one_path else sweep.ports):
        level = np.abs(sweep.s[:, port, port])
        if np.any(level > _REFLECTION_LIMIT):
            name = f"|S{port + 1}{port + 1}|"
            yield _power_warning(sweep, f"{name} reaches", level, level > _REFLECTION_LIMIT)


def _through(sweep: Sweep) -> Iterator[Finding]:
    """More power out than in, or an active device behind the ports."""
    into, through = np.abs(sweep.s[:, 0, 0]), np.abs(sweep.s[:, 1, 0])
    gain = through > _GAIN_LIMIT
    if np.mean(gain) > _GAIN_SHARE:
        peak = _peak(sweep, through)
        message = f"|S21| reaches {peak}: gain at {_share(gain)}, which no passive build has"
        remedy = "take the amplifier out, or repeat the thru calibration"
        yield _warning(sweep, "gain", message, remedy)
        return
    power = into**2 + through**2
    above = (power > _POWER_LIMIT) & (into <= _REFLECTION_LIMIT)
    if np.any(above):
        yield _power_warning(sweep, "|S11|^2 + |S21|^2 reaches", np.where(above, power, 0), above)


def _power_warning(
    sweep: Sweep, subject: str, level: RealArray, above: NDArray[np.bool_]
) -> Finding:
    peak = _peak(sweep, level)
    message = f"more power out than in: {subject} {peak}, too much at {_share(above)}"
    return _warning(sweep, "power-above-1", message, "check the calibration and the load's value")


def _peak(sweep: Sweep, level: RealArray) -> str:
    """The highest level, rounded up so that it never reads as the limit it exceeds."""
    at = int(np.argmax(level))
    return f"{math.ceil(level[at] * 1e4) / 1e4:.4f} at {_mhz(sweep.frequency_hz[at])}"


def _share(which: NDArray[np.bool_]) -> str:
    return f"{np.count_nonzero(which)} of {len(which)} points"


# --- the two paths and the two ports -------------------------------------------------------------


def _not_reciprocal(sweep: Sweep) -> Iterator[Finding]:
    """S21 and S12 different, though nothing in a build is one-way.

    Not asked where one of them is zero throughout: that path was not measured, or the ports are
    reversed, which the reader of the file has said.
    """
    forward, backward = sweep.s[:, 1, 0], sweep.s[:, 0, 1]
    if sweep.one_path or np.all(np.abs(forward) < _ZERO) or np.all(np.abs(backward) < _ZERO):
        return
    difference = np.abs(forward - backward)
    if np.any(difference > _RECIPROCITY_LIMIT):
        peak = _peak(sweep, difference)
        message = f"S21 and S12 differ by {peak}; in a passive build they are equal"
        yield _warning(sweep, "not-reciprocal", message, "calibrate both ports again")


def _asymmetric(sweep: Sweep) -> Iterator[Finding]:
    """A pair whose two ends differ by more than residuals explain: unequal units."""
    if sweep.one_path:
        return
    difference = np.abs(sweep.s[:, 0, 0] - sweep.s[:, 1, 1])
    if np.any(difference > _ASYMMETRY_LIMIT):
        message = (
            f"S11 and S22 of the pair differ by {_peak(sweep, difference)}: the units are unequal, "
            "and what the pair says of one unit is less sure"
        )
        remedy = "sweep each unit by itself with a load, or three units in three pairs"
        yield _warning(sweep, "asymmetric-pair", message, remedy)


# --- single points -------------------------------------------------------------------------------


def _spikes(sweep: Sweep) -> Iterator[Finding]:
    """Points far from the running median of seven: broadcast, range switching, a loose contact.

    Through paths are judged in decibels. A reflection is judged by magnitude, with the step that
    0.4 dB make at full reflection, because a good match is a notch in decibels.
    """
    for name, level, least in _levels(sweep):
        if len(level) < _FEWEST_FOR_SPIKES:
            continue
        around = np.median(sliding_window_view(level, _MEDIAN_POINTS), axis=-1)
        edge = _MEDIAN_POINTS // 2
        distance = np.abs(level[edge:-edge] - around)
        spread = float(np.median(np.abs(distance - np.median(distance))))
        (places,) = np.nonzero(distance > max(least, _SPIKE_DEVIATIONS * spread))
        if len(places):
            message = f"{name} has spikes at {_listed(sweep.frequency_hz[places + edge])}"
            remedy = "sweep again with averaging if a band is hit; the figures use all points"
            yield _warning(sweep, "spikes", message, remedy)


def _levels(sweep: Sweep) -> Iterator[tuple[str, RealArray, float]]:
    """Name, course over frequency, and least height of a spike, of what is worth a look."""
    yield "|S11|", np.abs(sweep.s[:, 0, 0]), 1 - 10 ** (-_SPIKE_DB / 20)
    if sweep.ports == 2:
        yield "|S21|", _level_db(sweep.s[:, 1, 0]), _SPIKE_DB


def _level_db(wave: ComplexArray) -> RealArray:
    level_db: RealArray = 20 * np.log10(np.maximum(np.abs(wave), _ZERO))
    return level_db


def _listed(frequency_hz: RealArray) -> str:
    """The first few frequencies, and how many more there are."""
    first = ", ".join(_mhz(each) for each in frequency_hz[:_LISTED])
    more = len(frequency_hz) - _LISTED
    return f"{first} and {more} more" if more > 0 else first


def _coarse(sweep: Sweep, bands: Iterable[Band]) -> Iterator[Finding]:
    """One warning that names every band, covered at least in part, with fewer than 5 points."""
    first, last = sweep.frequency_hz[0], sweep.frequency_hz[-1]
    few = []
    for band in bands:
        if band.from_hz <= last and band.to_hz >= first:
            inside = (sweep.frequency_hz >= band.from_hz) & (sweep.frequency_hz <= band.to_hz)
            if np.count_nonzero(inside) < _FEWEST_IN_BAND:
                few.append(f"{band.name} has {np.count_nonzero(inside)}")
    if few:
        message = f"fewer than {_FEWEST_IN_BAND} points in a band: {', '.join(few)}"
        remedy = "figures there rest on interpolation; sweep more points or the band alone"
        yield _warning(sweep, "few-points", message, remedy)


def _mhz(frequency_hz: float) -> str:
    return f"{frequency_hz / 1e6:.5g} MHz"


def _warning(sweep: Sweep, code: str, message: str, remedy: str) -> Finding:
    return Finding(
        severity=Severity.WARNING, code=code, message=message, remedy=remedy, file=sweep.file
    )
