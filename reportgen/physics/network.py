"""Two-port algebra on arrays of any shape, frequency last, draws in front.

A unit is its chain matrix from the low to the high side, [V1, I1] = N [V2, I2] with I2 flowing
into the load. All units and parts here are reciprocal: AD - BC = 1.

References
----------
.. [1] D. M. Pozar, Microwave Engineering, 4th ed., section 4.4 (chain and scattering matrices).
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TypeVar

import numpy as np

from reportgen.model import ComplexArray, RealArray

ANALYZER_OHM = 50.0
"""Resistance that the scattering parameters of every sweep are referred to [ohm]."""

Impedance = float | complex | RealArray | ComplexArray
_Array = TypeVar("_Array", RealArray, ComplexArray)


@dataclass(frozen=True, slots=True, eq=False)
class Chain:
    """Chain matrix [[a, b], [c, d]]: a, d [ratio], b [ohm], c [siemens]; each (..., F) complex."""

    a: ComplexArray
    b: ComplexArray
    c: ComplexArray
    d: ComplexArray

    def __matmul__(self, other: Chain) -> Chain:
        return Chain(
            self.a * other.a + self.b * other.c,
            self.a * other.b + self.b * other.d,
            self.c * other.a + self.d * other.c,
            self.c * other.b + self.d * other.d,
        )

    def reversed(self) -> Chain:
        """The same reciprocal two-port seen from its other side."""
        return Chain(self.d, self.b, self.c, self.a)


@dataclass(frozen=True, slots=True, eq=False)
class Scattering:
    """Scattering parameters of a two-port re 50 ohm [ratio]; each (..., F) complex."""

    s11: ComplexArray
    s12: ComplexArray
    s21: ComplexArray
    s22: ComplexArray

    def reversed(self) -> Scattering:
        """The same two-port with its ports exchanged."""
        return Scattering(self.s22, self.s21, self.s12, self.s11)

    def negated(self) -> Scattering:
        """The same two-port with one winding turned round."""
        return Scattering(self.s11, -self.s12, -self.s21, self.s22)


def series_arm(impedance_ohm: Impedance) -> Chain:
    """An impedance in series [ohm]."""
    z = np.asarray(impedance_ohm, dtype=complex)
    return Chain(np.ones_like(z), z, np.zeros_like(z), np.ones_like(z))


def shunt_arm(admittance_s: Impedance) -> Chain:
    """An admittance across the line [siemens]."""
    y = np.asarray(admittance_s, dtype=complex)
    return Chain(np.ones_like(y), np.zeros_like(y), y, np.ones_like(y))


def ideal_transformer(turns_ratio: float | RealArray) -> Chain:
    """Lossless, with `turns_ratio` times as many turns on the high side [ratio]."""
    n: ComplexArray = np.asarray(turns_ratio, dtype=np.complex128)
    return Chain(1 / n, np.zeros_like(n), np.zeros_like(n), n)


def line(characteristic_ohm: float, electrical_length_rad: RealArray) -> Chain:
    """A lossless line of the given characteristic impedance [ohm] and length [rad]."""
    cosine = np.cos(electrical_length_rad).astype(complex)
    sine = 1j * np.sin(electrical_length_rad)
    return Chain(cosine, characteristic_ohm * sine, sine / characteristic_ohm, cosine)


def chain_of_scattering(s: Scattering, reference_ohm: float = ANALYZER_OHM) -> Chain:
    """Chain matrix of a reciprocal two-port from its scattering parameters.

    Notes
    -----
    Table 4.2 of [1]_; S21 stands for S12 too, so reciprocity is taken, not tested.
    """
    z0 = reference_ohm
    product = s.s21 * s.s21
    return Chain(
        ((1 + s.s11) * (1 - s.s22) + product) / (2 * s.s21),
        z0 * ((1 + s.s11) * (1 + s.s22) - product) / (2 * s.s21),
        ((1 - s.s11) * (1 - s.s22) - product) / (2 * s.s21) / z0,
        ((1 - s.s11) * (1 + s.s22) + product) / (2 * s.s21),
    )


def scattering_of_chain(chain: Chain, reference_ohm: float = ANALYZER_OHM) -> Scattering:
    """Scattering parameters of a reciprocal two-port re `reference_ohm` on both sides.

    Notes
    -----
    Table 4.2 of [1]_ with AD - BC = 1.
    """
    b = chain.b / reference_ohm
    c = chain.c * reference_ohm
    total = chain.a + b + c + chain.d
    through = 2 / total
    return Scattering(
        (chain.a + b - c - chain.d) / total,
        through,
        through,
        (-chain.a + b - c + chain.d) / total,
    )


def reflection_of_impedance(
    impedance_ohm: Impedance, reference_ohm: float = ANALYZER_OHM
) -> ComplexArray:
    """Reflection coefficient of an impedance re a resistance [ratio]."""
    z = np.asarray(impedance_ohm, dtype=complex)
    return np.asarray((z - reference_ohm) / (z + reference_ohm))


def impedance_of_reflection(
    reflection: ComplexArray, reference_ohm: float = ANALYZER_OHM
) -> ComplexArray:
    """Impedance that reflects so, re a resistance [ohm]."""
    return np.asarray(reference_ohm * (1 + reflection) / (1 - reflection))


def input_impedance_ohm(chain: Chain, load_ohm: Impedance) -> ComplexArray:
    """Impedance seen at the low side with `load_ohm` on the high side [ohm]."""
    return np.asarray((chain.a * load_ohm + chain.b) / (chain.c * load_ohm + chain.d))


def efficiency_ratio(chain: Chain, load_ohm: Impedance) -> RealArray:
    """Power into the load over power entering the low side [ratio].

    Parameters
    ----------
    chain : Chain
        From the low to the high side.
    load_ohm : float or (..., F) complex array
        Load on the high side [ohm].

    Notes
    -----
    With I2 = 1 A the load takes Re Z and the low side Re(V1 conj I1); mismatch does not enter.
    It equals the operating power gain of section 12.1 of [1]_. 1 for a lossless two-port.
    """
    entering = (chain.a * load_ohm + chain.b) * np.conj(chain.c * load_ohm + chain.d)
    return np.asarray(np.asarray(load_ohm).real / entering.real)


def reflection_ratio(chain: Chain, load_ohm: Impedance, source_ohm: float) -> RealArray:
    """Power reflected at the low side over power available, re the source [ratio]."""
    gamma = reflection_of_impedance(input_impedance_ohm(chain, load_ohm), source_ohm)
    return np.asarray(np.abs(gamma) ** 2)


def maximum_efficiency_ratio(chain: Chain) -> RealArray:
    """Efficiency into the best load that there is (maximum available gain) [ratio].

    Notes
    -----
    1 / (K + sqrt(K^2 - 1)) with Rollett's K of a reciprocal two-port,
    K = (2 Re(z11) Re(z22) - Re(z12^2)) / |z12|^2; this form does not cancel as K grows.
    """
    z11, z22, z12 = chain.a / chain.c, chain.d / chain.c, 1 / chain.c
    k = (2 * z11.real * z22.real - (z12 * z12).real) / np.abs(z12) ** 2
    return np.asarray(1 / (k + np.sqrt(np.maximum(k * k - 1, 0))))


def resistor_ohm(
    resistance_ohm: float, capacitance_f: Impedance, frequency_hz: RealArray
) -> ComplexArray:
    """Impedance of a resistor with a capacitance across it [ohm]."""
    omega = 2 * np.pi * frequency_hz
    return np.asarray(1 / (1 / resistance_ohm + 1j * omega * capacitance_f))
