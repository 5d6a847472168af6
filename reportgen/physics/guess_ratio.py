"""Turns ratio and resistor as sweeps suggest them: good to some per cent, to be held against notes.

Nothing here enters a figure.
"""

from __future__ import annotations

import numpy as np

from reportgen.model import ComplexArray, Sweep
from reportgen.physics.grid import resampled
from reportgen.physics.guess_setup import middle_of
from reportgen.physics.network import ANALYZER_OHM, impedance_of_reflection
from reportgen.physics.pairs import inverted


@np.errstate(divide="ignore", invalid="ignore")
def ratio_of_load(loaded: Sweep, resistance_ohm: float, bare: Sweep | None = None) -> float:
    """Turns ratio of a unit with a known resistor on its high side [ratio].

    Parameters
    ----------
    loaded : Sweep
        Low side swept with the resistor on the high side; of two ports, the reflection at port 1.
    resistance_ohm : float
        The resistor, with the port behind it where there is one [ohm].
    bare : Sweep, optional
        The same unit open, or a pair of such units: without it the loss of the core counts as
        load, and the ratio comes out some 10 % high.

    Notes
    -----
    n^2/R is the conductance that the resistor adds to that of the open unit; an inductance or a
    capacitor beside it changes nothing. Leakage is left out of account.
    """
    return float(np.sqrt(resistance_ohm * _added_conductance_s(loaded, bare)))


@np.errstate(divide="ignore", invalid="ignore")
def ratio_of_series(sweep: Sweep, bare: Sweep | None = None) -> float:
    """Turns ratio of a unit with an unknown resistor in series to port 2 [ratio].

    Notes
    -----
    V1/V2 = (R + 50)/(50 n), and n^2/(R + 50) is the conductance added.
    """
    return ANALYZER_OHM * _added_conductance_s(sweep, bare) * _voltage_ratio(sweep)


@np.errstate(divide="ignore", invalid="ignore")
def resistance_of_series(sweep: Sweep, bare: Sweep | None = None) -> float:
    """The series resistor of such a sweep, without the port behind it [ohm]."""
    ratio = ratio_of_series(sweep, bare)
    return ratio**2 / _added_conductance_s(sweep, bare) - ANALYZER_OHM


@np.errstate(divide="ignore", invalid="ignore")
def resistance_of_check(sweep: Sweep) -> float:
    """A bare series resistor between the ports: S21 = 100/(100 + R) [ohm]."""
    s21 = sweep.s[middle_of(sweep.frequency_hz), 1, 0]
    return float(np.median((2 * ANALYZER_OHM * (1 / s21 - 1)).real))


def _voltage_ratio(sweep: Sweep) -> float:
    """Real part of V1/V2 = (1 + S11)/S21 with 50 ohm on port 2; leakage is in the other part."""
    middle = middle_of(sweep.frequency_hz)
    return float(np.median(np.abs(((1 + sweep.s[middle, 0, 0]) / sweep.s[middle, 1, 0]).real)))


def _added_conductance_s(loaded: Sweep, bare: Sweep | None) -> float:
    """What the load adds to the conductance at the low side, at least a little [siemens]."""
    middle = middle_of(loaded.frequency_hz)
    frequency_hz = loaded.frequency_hz[middle]
    conductance = (1 / impedance_of_reflection(loaded.s[middle, 0, 0])).real
    if bare is not None:
        conductance = conductance - (1 / impedance_of_reflection(_open(bare, frequency_hz))).real
    return max(float(np.median(conductance)), 1e-6)


def _open(bare: Sweep, frequency_hz: np.ndarray) -> ComplexArray:
    """Reflection of a unit with its high side open; of a pair, its half: S11 + S21."""
    s = resampled(bare, frequency_hz)
    if bare.ports == 1:
        return np.asarray(s[0, 0])
    through = -s[1, 0] if inverted(bare) else s[1, 0]
    return np.asarray((s[0, 0] if bare.one_path else (s[0, 0] + s[1, 1]) / 2) + through)
