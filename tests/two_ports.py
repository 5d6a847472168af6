"""Two-ports to test with: random ones by hypothesis, and the way to scikit-rf and back."""

from __future__ import annotations

import numpy as np
import skrf
from hypothesis import strategies as st

from reportgen.model import ComplexArray
from reportgen.physics.network import (
    Chain,
    Scattering,
    ideal_transformer,
    scattering_of_chain,
    series_arm,
    shunt_arm,
)

FREQUENCY_HZ = np.linspace(1e6, 30e6, 7)


def polar(magnitude: float, degrees: float) -> ComplexArray:
    """One complex number as books print it, (1,)."""
    return np.array([magnitude * np.exp(1j * np.radians(degrees))])


def t_pad(first_ohm: float, shunt_ohm: float, second_ohm: float) -> Chain:
    """Three resistors, at one frequency."""
    one = np.ones(1)
    return series_arm(first_ohm * one) @ shunt_arm(one / shunt_ohm) @ series_arm(second_ohm * one)


def pi_pad(first_ohm: float, series_ohm: float, second_ohm: float) -> Chain:
    """Three resistors, at one frequency."""
    one = np.ones(1)
    return shunt_arm(one / first_ohm) @ series_arm(series_ohm * one) @ shunt_arm(one / second_ohm)


def matrices_of(s: Scattering) -> ComplexArray:
    """(F, 2, 2) scattering matrices."""
    return np.moveaxis(np.array([[s.s11, s.s12], [s.s21, s.s22]]), -1, 0)


def network_of(chain: Chain) -> skrf.Network:
    """The two-port as scikit-rf has it, converted by scikit-rf."""
    matrices = np.moveaxis(np.array([[chain.a, chain.b], [chain.c, chain.d]]), -1, 0)
    points = np.arange(1, len(matrices) + 1) * 1e6
    return skrf.Network(f=points, f_unit="Hz", s=skrf.network.a2s(matrices, 50.0), z0=50.0)


def operating_power_gain(chain: Chain, load_ohm: ComplexArray | float) -> np.ndarray:
    """Power into the load over power entering, from scattering parameters by scikit-rf [ratio].

    |S21|^2 (1 - |GL|^2) / ((1 - |Gin|^2) |1 - S22 GL|^2): Pozar, Microwave Engineering, 4th ed.,
    section 12.1.
    """
    s = np.moveaxis(network_of(chain).s, 0, -1)
    load = (load_ohm - 50) / (load_ohm + 50)
    seen = s[0, 0] + s[0, 1] * s[1, 0] * load / (1 - s[1, 1] * load)
    through = abs(s[1, 0]) ** 2 * (1 - abs(load) ** 2)
    return through / ((1 - abs(seen) ** 2) * abs(1 - s[1, 1] * load) ** 2)


def _arm_ohm(draw: st.DrawFn, most_ohm: float) -> ComplexArray:
    resistance = draw(st.floats(0.01, most_ohm))
    inductance = draw(st.floats(0, 5e-9 * most_ohm))
    return np.asarray(resistance + 2j * np.pi * FREQUENCY_HZ * inductance)


def _arm_s(draw: st.DrawFn, most_s: float) -> ComplexArray:
    conductance = draw(st.floats(1e-6, most_s))
    capacitance = draw(st.floats(0, 1e-8 * most_s))
    return np.asarray(conductance + 2j * np.pi * FREQUENCY_HZ * capacitance)


@st.composite
def passive_two_ports(draw: st.DrawFn, most_ohm: float = 1e3, most_s: float = 0.1) -> Chain:
    """A ladder of lossy arms with an ideal transformer in it, on `FREQUENCY_HZ`."""
    n = ideal_transformer(np.full(FREQUENCY_HZ.shape, draw(st.floats(0.2, 8))))
    front = series_arm(_arm_ohm(draw, most_ohm)) @ shunt_arm(_arm_s(draw, most_s))
    return front @ n @ series_arm(_arm_ohm(draw, most_ohm)) @ shunt_arm(_arm_s(draw, most_s))


def passive_units() -> st.SearchStrategy[Chain]:
    """Passive two-ports through which enough comes for a pair of them to be measured."""
    return passive_two_ports(most_ohm=100.0, most_s=5e-3)


@st.composite
def passive_loads(draw: st.DrawFn) -> ComplexArray:
    """A load with resistance in it [ohm]."""
    resistance, reactance = draw(st.floats(1, 5e3)), draw(st.floats(-5e3, 5e3))
    return np.full(FREQUENCY_HZ.shape, resistance + 1j * reactance)


def assert_same_chain(one: Chain, other: Chain, rtol: float = 1e-9) -> None:
    """Both chain matrices agree, each element to `rtol` of its largest value."""
    for name in "abcd":
        left, right = getattr(one, name), getattr(other, name)
        scale = max(float(np.max(np.abs(right))), 1e-12)
        np.testing.assert_allclose(left, right, rtol=rtol, atol=rtol * scale, err_msg=name)


def back_to_back(first: Chain, second: Chain) -> Scattering:
    """A pair, high sides joined, as a perfect analyzer sees it."""
    return scattering_of_chain(first @ second.reversed())
