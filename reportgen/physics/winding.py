"""The winding's equivalent circuit, fitted over a whole sweep to what the half of a pair shows.

From the low side: lead, capacitor, series arm (leakage and wire), shunt arm (core), series arm,
capacitance across the high side, ideal transformer. Read point by point, a pair cannot tell how
the series arm divides about the core, nor the core from the high side's capacitance; read over
frequency with a core that disperses as ferrites do, it can.

References
----------
.. [1] T. Tsutaoka, J. Appl. Phys. 93, 2789 (2003): permeability of ferrites as the sum of a
   domain-wall resonance and a spin relaxation (cited from memory).
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from reportgen.model import ComplexArray, RealArray
from reportgen.physics.bisection import Halved

_NEWTON_STEPS = 5


@dataclass(frozen=True, slots=True)
class Parameter:
    """One unknown of the circuit: where the fit starts, and what is expected of it beforehand.

    `spread` is a standard deviation. Windings and materials as in common practice; the spreads
    are wide and the sweep overrules them where it can.
    """

    start: float
    spread: float


LEAKAGE, WIRE, SHARE, HIGH_PF, MAGNETISING, CAPACITOR, LEAD_NH = range(7)
RELAXATION, EXPONENT, DOMAIN, RESONANCE, DAMPING = range(7, 12)

_PARAMETERS = {
    LEAKAGE: Parameter(0.0, 1.5),  # ln of leakage over its first guess
    WIRE: Parameter(np.log(0.05), 1.0),  # ln of the winding's resistance at 1 MHz over 1 ohm
    SHARE: Parameter(0.25, 0.15),  # of the series arm behind the core
    HIGH_PF: Parameter(1.0, 0.5),  # across the high side, beyond a capacitor there
    MAGNETISING: Parameter(0.2, 1.5),  # ln of magnetising inductance over its first guess
    RELAXATION: Parameter(np.log(10.0), 1.0),  # ln of the spins' relaxation over 1 MHz
    EXPONENT: Parameter(0.9, 0.15),  # of the relaxation
    DOMAIN: Parameter(-0.5, 1.0),  # ln of odds: the domain walls' share of the permeability
    RESONANCE: Parameter(-0.4, 0.4),  # ln of domain-wall resonance over the relaxation
    DAMPING: Parameter(0.7, 0.4),  # ln of the domain walls' damping
    CAPACITOR: Parameter(0.0, 1.0),  # deviation over the capacitor's standard deviation
    LEAD_NH: Parameter(5.0, 3.0),  # in front of the capacitor
}
START = np.array([_PARAMETERS[index].start for index in range(len(_PARAMETERS))])
SPREAD = np.array([_PARAMETERS[index].spread for index in range(len(_PARAMETERS))])


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Frame:
    """What the circuit is fitted within: sidecar values, and first guesses of the inductances.

    Capacitors across either side as entered [F], the low one's relative standard deviation, their
    loss tangent [ratio], inductances [H].
    """

    turns_ratio: float
    low_capacitor_f: float = 0.0
    low_capacitor_spread: float = 0.03
    high_capacitor_f: float = 0.0
    loss_tangent: float = 0.0
    leakage_h: float = 1e-7
    magnetising_h: float = 1e-6


@dataclass(frozen=True, slots=True, eq=False)
class Arms:
    """The circuit's parts at each frequency, referred to the low side; (..., F) complex.

    `lead_ohm`, `capacitor_s`, `series_ohm` (whole), `shunt_s` (core), `high_s`; `share`, the part
    of the series arm that lies behind the core, (..., 1) [ratio]; `wire_ohm`, the resistance of the
    series arm by the circuit, which follows it better than single points do.
    """

    lead_ohm: ComplexArray
    capacitor_s: ComplexArray
    series_ohm: ComplexArray
    shunt_s: ComplexArray
    high_s: ComplexArray
    share: RealArray
    wire_ohm: RealArray


def arms_of(parameters: RealArray, frame: Frame, frequency_hz: RealArray) -> Arms:
    """The circuit's parts at (F,) frequencies for (..., 12) parameters."""
    p = [parameters[..., index, None] for index in range(len(START))]
    f = frequency_hz
    jw = 2j * np.pi * f
    spin_hz = 1e6 * np.exp(p[RELAXATION])
    wall_hz = spin_hz * np.exp(p[RESONANCE])
    wall = 1 / (1 + np.exp(-p[DOMAIN]))
    jf = 1j * f
    dispersion = wall / (1 - (f / wall_hz) ** 2 + jf / wall_hz * np.exp(p[DAMPING]))
    dispersion = dispersion + (1 - wall) / (1 + jf / spin_hz) ** p[EXPONENT]
    high_f = 1e-12 * p[HIGH_PF] + frame.high_capacitor_f
    wire_ohm = np.exp(p[WIRE]) * np.sqrt(f / 1e6)
    return Arms(
        np.asarray(jw * 1e-9 * p[LEAD_NH]),
        low_capacitor_s(frame, f) * (1 + frame.low_capacitor_spread * p[CAPACITOR]),
        np.asarray(jw * frame.leakage_h * np.exp(p[LEAKAGE]) + wire_ohm),
        np.asarray(1 / (jw * frame.magnetising_h * np.exp(p[MAGNETISING]) * dispersion)),
        np.asarray(jw * high_f * frame.turns_ratio**2),
        p[SHARE],
        wire_ohm,
    )


def open_and_short_ohm(arms: Arms) -> tuple[ComplexArray, ComplexArray]:
    """Impedance at the low side with the high side open, and shorted [ohm]."""
    behind = arms.share * arms.series_ohm
    front = arms.series_ohm - behind
    y_open = arms.shunt_s + arms.high_s / (1 + behind * arms.high_s)
    z_open = front + 1 / y_open
    z_short = front + behind / (1 + behind * arms.shunt_s)
    return (
        arms.lead_ohm + z_open / (1 + z_open * arms.capacitor_s),
        arms.lead_ohm + z_short / (1 + z_short * arms.capacitor_s),
    )


def low_capacitor_s(frame: Frame, frequency_hz: RealArray) -> ComplexArray:
    """Admittance of the capacitor across the low side, as entered [siemens]."""
    omega = 2 * np.pi * frequency_hz
    return np.asarray(omega * frame.low_capacitor_f * (1j + frame.loss_tangent))


def arms_seen(halved: Halved, arms: Arms) -> Arms:
    """The circuit with its series arm and core as the half itself shows them at each frequency.

    Notes
    -----
    Lead, capacitor, high-side capacitance and the share of the series arm behind the core stay the
    circuit's. With z the whole series arm and y the core, Zshort = z1 + z2/(1 + y z2) and
    Zopen = z1 + 1/(y + yh/(1 + z2 yh)): Newton's steps in z, y following from Zopen. Plain rounds
    run away near the resonance of the high side's capacitance with the leakage behind the core.
    """
    seen_open = 1 / (1 / (halved.z_open_ohm - arms.lead_ohm) - arms.capacitor_s)
    seen_short = 1 / (1 / (halved.z_short_ohm - arms.lead_ohm) - arms.capacitor_s)
    z = seen_short
    for _ in range(_NEWTON_STEPS):
        behind = arms.share * z
        high = arms.high_s / (1 + behind * arms.high_s)
        gap = 1 / (seen_open - z + behind)
        below = 1 + behind * (gap - high)
        slope_y = gap**2 * (1 - arms.share) + arms.share * high**2
        slope = 1 - arms.share + (arms.share - behind**2 * slope_y) / below**2
        z = z - (z - behind + behind / below - seen_short) / slope
    behind = arms.share * z
    y = 1 / (seen_open - z + behind) - arms.high_s / (1 + behind * arms.high_s)
    return replace(arms, series_ohm=z, shunt_s=y)


def open_ratio(arms: Arms) -> ComplexArray:
    """Voltage ratio A of the circuit before its ideal transformer, high side open [ratio].

    Notes
    -----
    The lead sees the current of all that is behind it; a capacitor there else leaves A alone.
    """
    behind = arms.share * arms.series_ohm
    front = arms.series_ohm - behind
    inner = (1 + front * arms.shunt_s) * (1 + behind * arms.high_s) + front * arms.high_s
    z_open, _ = open_and_short_ohm(arms)
    return np.asarray(inner * z_open / (z_open - arms.lead_ohm))
