"""One unit from two of them back to back, high sides joined.

A pair of equal units is mirror-symmetric about the join, so its open- and short-circuited half
is known from the pair alone. One complex number stays free, since an ideal transformer at the
join cancels; a lumped section or a load sweep closes it.

References
----------
.. [1] A. C. Bartlett, Phil. Mag. ser. 7, vol. 4, pp. 902-907, 1927 (cited from memory).
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from reportgen.model import ComplexArray, RealArray
from reportgen.physics.network import (
    Chain,
    Impedance,
    Scattering,
    impedance_of_reflection,
)

FIT_FROM_HZ = 3e6
"""Below this a stray of a few picofarads leaves no trace in the data [Hz]."""

FIT_BOUND_PF = 25.0
"""Largest stray that the fit believes, either way [pF]."""

_ITERATIONS = 6


@dataclass(frozen=True, slots=True, eq=False)
class Halved:
    """A symmetric pair M = [[p, q], [r, p]] and what its half shows; each (..., F) complex.

    `z_open_ohm`, `z_short_ohm`: input impedance of one unit, its high side open or shorted [ohm].
    """

    p: ComplexArray
    q: ComplexArray
    r: ComplexArray
    z_open_ohm: ComplexArray
    z_short_ohm: ComplexArray


def halve_pair(pair: Scattering) -> Halved:
    """Open- and short-circuited half of a pair, by the bisection theorem [1]_.

    Parameters
    ----------
    pair : Scattering
        Both units; made symmetric first by averaging with its port-reversed self.

    Notes
    -----
    gamma_open = S11 + S21, gamma_short = S11 - S21.
    """
    s11 = (pair.s11 + pair.s22) / 2
    s21 = (pair.s21 + pair.s12) / 2
    return halved_of_impedances(
        impedance_of_reflection(s11 + s21), impedance_of_reflection(s11 - s21)
    )


def halved_of_impedances(z_open_ohm: ComplexArray, z_short_ohm: ComplexArray) -> Halved:
    """A half by its input impedance with the high side open, and shorted [ohm].

    Notes
    -----
    Zopen = (P + 1)/R and Zshort = (P - 1)/R; P^2 - QR = 1.
    """
    r = 2 / (z_open_ohm - z_short_ohm)
    p = r * z_open_ohm - 1
    return Halved(p, (p * p - 1) / r, r, z_open_ohm, z_short_ohm)


def halve_three_pairs(ab: Chain, ac: Chain, bc: Chain) -> Halved:
    """The half of unit A from three pairs of three unequal units.

    Parameters
    ----------
    ab, ac, bc : Chain
        Pairs, from the low side of the unit named first to that of the other.

    Notes
    -----
    With K = diag(1, -1): M_AC K (M_AB K M_BC K)^-1 = A K A^-1 = [[P, -Q], [R, -P]] of unit A, since
    B_reversed K B = K for every reciprocal two-port.
    """
    turn = Chain(*(np.asarray(value, dtype=np.complex128) for value in (1, 0, 0, -1)))
    m = ac @ turn @ _inverse(ab @ turn @ bc @ turn)
    p = (m.a - m.d) / 2
    return halved_of_impedances((p + 1) / m.c, (p - 1) / m.c)


def _inverse(chain: Chain) -> Chain:
    determinant = chain.a * chain.d - chain.b * chain.c
    return Chain(
        chain.d / determinant,
        -chain.b / determinant,
        -chain.c / determinant,
        chain.a / determinant,
    )


def unit_of_pair(halved: Halved, t: ComplexArray) -> Chain:
    """Chain matrix of one unit whose open-circuit voltage ratio is `t` = A [ratio].

    Notes
    -----
    B = Q/(2t), C = R t/(P + 1), D = (P + 1)/(2t): the factorings of M = N N_reversed.
    """
    return Chain(t, halved.q / (2 * t), halved.r * t / (halved.p + 1), (halved.p + 1) / (2 * t))


def section_arms(halved: Halved, capacitor_s: ComplexArray) -> tuple[ComplexArray, ComplexArray]:
    """Series [ohm] and shunt [siemens] arm of the lumped section, behind the capacitor.

    Parameters
    ----------
    halved : Halved
        The pair.
    capacitor_s : (..., F) complex array
        Admittance of what lies across the low side [siemens].

    Notes
    -----
    Series arm on the low side, shunt arm behind it. The other order misses by 0.2 to 0.5 dB.
    """
    z = 1 / (1 / halved.z_short_ohm - capacitor_s)
    z_open = 1 / (1 / halved.z_open_ohm - capacitor_s)
    return z, 1 / (z_open - z)


def load_squared(halved: Halved, z_in_ohm: ComplexArray) -> ComplexArray:
    """2 t^2 Z from the impedance seen with the load Z on one unit's high side [ohm]."""
    above = halved.p + 1
    return np.asarray((halved.q - z_in_ohm * above) / (z_in_ohm * halved.r / above - 1))


def ratio_by_load(squared: ComplexArray, load_ohm: Impedance, near: ComplexArray) -> ComplexArray:
    """Voltage ratio A from 2 t^2 Z; of the two roots the one on the side of `near`."""
    t = np.sqrt(squared / (2 * load_ohm))
    return np.asarray(np.where((t * np.conj(near)).real < 0, -t, t))


@dataclass(frozen=True, slots=True, eq=False)
class StrayFit:
    """A stray capacitance as the data name it, each (...).

    `stray_f` [F]; `spread_f`: by how much the capacitance would have to be off to cause the misfit
    that is left [F]; `resistance_ratio`: the load's resistance that the sweeps imply over the one
    that was entered, the turns ratio being right [ratio].
    """

    stray_f: RealArray
    spread_f: RealArray
    resistance_ratio: RealArray


def fit_stray(
    squared: ComplexArray,
    expected: ComplexArray,
    admittance_s: ComplexArray,
    frequency_hz: RealArray,
) -> StrayFit:
    """Capacitance across the load that makes the load sweep and the closed pair agree.

    Parameters
    ----------
    squared : (..., F) complex array
        2 t^2 Z of the load sweep [ohm].
    expected : (..., F) complex array
        t as the pair alone was closed [ratio].
    admittance_s : (..., F) complex array
        The load's admittance without the stray [siemens].
    frequency_hz : (F,) array
        [Hz].

    Returns
    -------
    StrayFit
        Difference between the capacitance at the load and that present at the open, or half
        that of the pair's join; negative values are allowed.

    Notes
    -----
    Complex least squares of ln(t(C)/t) above 3 MHz, its mean log-magnitude removed since the
    turns ratio and the load's resistance are only nearly known. t(C) goes with
    sqrt(Y + jwC), so a few Gauss-Newton steps from C = 0 settle it.
    """
    used = frequency_hz >= FIT_FROM_HZ
    omega = 2 * np.pi * frequency_hz[used]
    known = admittance_s[..., used]
    root = np.sqrt(squared[..., used] * known / 2) / expected[..., used]
    misfit_at_zero: ComplexArray = np.log(np.where(root.real < 0, -root, root))
    stray = np.zeros(misfit_at_zero.shape[:-1])
    if not used.any():
        return StrayFit(stray, stray + np.inf, stray + 1)
    for _ in range(_ITERATIONS):
        admittance = known + 1j * omega * stray[..., None]
        whole: ComplexArray = misfit_at_zero + 0.5 * np.log(admittance / known)
        misfit = _level_free(whole)
        slope = _level_free(np.asarray(0.5j * omega / admittance))
        weight = np.sum(np.abs(slope) ** 2, axis=-1)
        step = np.sum((misfit * slope.conj()).real, axis=-1) / weight
        stray = np.clip(stray - step, -FIT_BOUND_PF * 1e-12, FIT_BOUND_PF * 1e-12)
    spread = np.sqrt(np.sum(np.abs(misfit) ** 2, axis=-1) / weight)
    return StrayFit(stray, spread, np.exp(2 * whole.real.mean(axis=-1)))


def _level_free(log_ratio: ComplexArray) -> ComplexArray:
    return np.asarray(log_ratio - log_ratio.real.mean(axis=-1, keepdims=True))
