"""In which set-up a sweep may have been taken, told from the sweep alone.

A winding, a bare resistor and a plain connection reflect and pass so differently that a few
medians over the middle of the range tell them apart.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np

from reportgen.model import ComplexArray, RealArray, Setup, Sweep
from reportgen.physics.network import ANALYZER_OHM, impedance_of_reflection

MIDDLE_HZ = (3e6, 12e6)
"""Where such transformers work best: neither core nor leakage hides what is connected [Hz]."""

_FEWEST_POINTS = 5
_WIDE = 2.0  # from end to end at least so many times, or little can be told [ratio]
_FROM_HZ = 4e6  # a sweep that begins above does not show a winding's inductive end [Hz]
_LARGEST_RESISTOR_OHM = 20e3
_SWING = 0.1  # imaginary part that a reflection has to reach to count as a swing


@dataclass(frozen=True, kw_only=True, slots=True)
class Guess:
    """A set-up, why it is thought to be that, and what else it might be.

    `others` is empty where there is no doubt.
    """

    setup: Setup
    reason: str
    others: tuple[Setup, ...] = ()


@np.errstate(divide="ignore", invalid="ignore")  # a reflection of 1 is an impedance without bounds
def guess_setup(sweep: Sweep) -> Guess:
    """The set-up that a sweep of one or two ports was most likely taken in."""
    middle = middle_of(sweep.frequency_hz)
    if sweep.ports == 1:
        return _one_port(sweep.frequency_hz, sweep.s[:, 0, 0], middle)
    return _two_port(sweep, middle)


def middle_of(frequency_hz: RealArray) -> slice:
    """The points between 3 and 12 MHz, or all where few are swept there."""
    low, high = np.searchsorted(frequency_hz, MIDDLE_HZ)
    return slice(int(low), int(high)) if high - low >= _FEWEST_POINTS else slice(None)


# --- one port --------------------------------------------------------------------------------


def _one_port(frequency_hz: RealArray, reflection: ComplexArray, middle: slice) -> Guess:
    inside = reflection[middle]
    least, size = (float(np.quantile(np.abs(inside), part)) for part in (0.1, 0.5))
    swings = list(_swings(reflection))
    wide = bool(frequency_hz[-1] > _WIDE * frequency_hz[0])
    if size > 0.5 and (len(swings) > 2 or (swings == [-1] and frequency_hz[0] < _FROM_HZ)):
        return _antenna(swings)
    if least < 0.3 or size < 0.4:
        return _load(least, size, wide)
    if (
        np.abs(np.median(np.angle(inside))) < np.pi / 18
        and np.ptp(np.unwrap(np.angle(reflection))) < np.pi / 4
    ):
        return _bare_load(inside, wide)
    if np.median(inside.real) < 0 and size > 0.9:
        return _short(frequency_hz[middle], inside)
    return _open(size, swings, wide)


def _swings(reflection: ComplexArray) -> Iterator[int]:
    """Signs of the reactance from the low end on, each change once; what hardly swings is none."""
    last = 0
    for sign in np.sign(reflection.imag[np.abs(reflection.imag) > _SWING]):
        if sign != last:
            last = int(sign)
            yield last


def _load(least: float, size: float, wide: bool) -> Guess:
    reason = f"little is reflected (half the points below {size:.2f})"
    doubt = least > 0.2 or not wide
    return Guess(
        setup=Setup.LOAD,
        reason=reason,
        others=(Setup.OPEN, Setup.ANTENNA) if doubt else (),
    )


def _antenna(swings: list[int]) -> Guess:
    if len(swings) > 2:
        reason = f"the reactance changes its sign {len(swings) - 1} times, as that of a wire does"
        return Guess(setup=Setup.ANTENNA, reason=reason)
    reason = "it begins capacitive and reflects much, as a short wire does; no winding does"
    return Guess(setup=Setup.ANTENNA, reason=reason, others=(Setup.OPEN,))


def _bare_load(reflection: ComplexArray, wide: bool) -> Guess:
    resistance_ohm = float(np.median(impedance_of_reflection(reflection).real))
    sure = wide and resistance_ohm < _LARGEST_RESISTOR_OHM
    what = f"bare resistor of some {_two_digits(resistance_ohm)} ohm" if sure else "large resistor"
    reason = f"it looks like a {what}, and the phase hardly turns"
    return Guess(setup=Setup.LOAD_CHECK, reason=reason, others=() if sure else (Setup.OPEN,))


def _short(frequency_hz: RealArray, reflection: ComplexArray) -> Guess:
    reactance_ohm = impedance_of_reflection(reflection).imag
    henry = float(np.median(reactance_ohm / (2 * np.pi * frequency_hz)))
    reason = (
        f"nearly all is reflected, as by a leakage inductance of {henry * 1e6:.2f} microhenry alone"
    )
    large = henry > 0.6e-6 or henry < 0
    return Guess(setup=Setup.SHORT, reason=reason, others=(Setup.OPEN,) if large else ())


def _open(size: float, swings: list[int], wide: bool) -> Guess:
    reason = f"much is reflected (half the points above {size:.2f})"
    if swings == [1, -1] and wide:
        reason += ", inductive at the low end and capacitive at the high end, as a bare winding is"
        return Guess(setup=Setup.OPEN, reason=reason)
    return Guess(setup=Setup.OPEN, reason=reason, others=(Setup.LOAD, Setup.SHORT, Setup.ANTENNA))


# --- two ports -------------------------------------------------------------------------------


def _two_port(sweep: Sweep, middle: slice) -> Guess:
    s11, s21 = sweep.s[:, 0, 0], sweep.s[:, 1, 0]
    reflected = float(np.median(np.abs(s11[middle])))
    through_db = decibel(np.median(np.abs(s21[middle])))
    kept = float(np.median(np.abs(s11[middle]) ** 2 + np.abs(s21[middle]) ** 2))
    wide = bool(sweep.frequency_hz[-1] > _WIDE * sweep.frequency_hz[0])
    if np.quantile(np.abs(s11), 0.95) < 0.12 and through_db < 0.15:
        return _thru(through_db, wide)
    if through_db > 6 and np.median(np.abs(s11[middle] + s21[middle] - 1)) < 0.1:
        return _bare_resistor(s21[middle])
    if reflected > 0.5 and kept > 0.93 and _is_lopsided(sweep, middle):
        return _direct(through_db, reflected)
    if through_db < 7:
        return _pair(sweep, middle, through_db)
    return _series_resistor(through_db, reflected)


def _is_lopsided(sweep: Sweep, middle: slice) -> bool:
    """Port 1 sees less than 50 ohm, and port 2, where it was measured, more."""
    near = np.median(sweep.s[middle, 0, 0].real)
    far = np.median(sweep.s[middle, 1, 1].real)
    return bool(near < 0 and (sweep.one_path or far > 0))


def _thru(through_db: float, wide: bool) -> Guess:
    reason = f"{abs(through_db):.2f} dB from port to port, and hardly anything is reflected"
    others = () if wide else (Setup.BACK_TO_BACK,)
    return Guess(setup=Setup.THRU_CHECK, reason=reason, others=others)


def _bare_resistor(s21: ComplexArray) -> Guess:
    """S11 + S21 = 1 for anything in series between the ports, S21 = 100/(100 + Z)."""
    resistance_ohm = np.median((2 * ANALYZER_OHM * (1 / s21 - 1)).real)
    reason = f"it looks like a bare series resistor of {_two_digits(resistance_ohm)} ohm"
    return Guess(setup=Setup.RESISTOR_CHECK, reason=reason)


def _direct(through_db: float, reflected: float) -> Guess:
    reason = (
        f"port 1 reflects {reflected:.2f} as a few ohms do, {through_db:.1f} dB from port to port, "
        "and nothing is lost between"
    )
    return Guess(setup=Setup.DIRECT, reason=reason)


def _pair(sweep: Sweep, middle: slice, through_db: float) -> Guess:
    reason = f"{through_db:.1f} dB from port to port"
    if sweep.one_path:
        doubt = through_db > 5
    else:
        apart = float(np.median(np.abs(sweep.s[middle, 0, 0] - sweep.s[middle, 1, 1])))
        doubt = apart > 0.2 or through_db > 5
        alike = "alike" if apart < 0.2 else "not alike"
        reason += f", and both ports reflect {alike} (apart by {apart:.2f})"
    others = (Setup.SERIES_RESISTOR, Setup.DIRECT) if doubt else ()
    return Guess(setup=Setup.BACK_TO_BACK, reason=reason, others=others)


def _series_resistor(through_db: float, reflected: float) -> Guess:
    reason = (
        f"{through_db:.1f} dB from port to port, while port 1 reflects {reflected:.2f} only: most "
        "stays in a resistor"
    )
    doubt = reflected > 0.5 or through_db < 8
    others = (Setup.BACK_TO_BACK, Setup.DIRECT) if doubt else ()
    return Guess(setup=Setup.SERIES_RESISTOR, reason=reason, others=others)


def decibel(amplitude_ratio: float) -> float:
    """Loss of a wave, positive where less comes out [dB]."""
    return float(-20 * np.log10(max(amplitude_ratio, 1e-10)))


def _two_digits(value: float) -> str:
    return f"{float(f'{value:.2g}'):.0f}"
