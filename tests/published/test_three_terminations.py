"""A reciprocal two-port from what it reflects with its far side open, shorted and loaded.

Source: G. A. Deschamps, J. Appl. Phys. 24(8), 1046-1050, 1953 (citation from memory; formulas
derived anew): S11 = Gm, S22 = (Go + Gs - 2 Gm)/(Go - Gs), S12^2 = 2 (Go - Gm)(Gm - Gs)/(Go - Gs)
with ideal open, short and match. The numeric example is computed, not printed anywhere. That the
efficiency follows from the three reflections, whatever the load's magnitude, is our own derivation.
"""

import numpy as np
import pytest
from hypothesis import given
from two_ports import passive_loads, passive_two_ports, polar

from reportgen.physics.network import (
    Scattering,
    chain_of_scattering,
    efficiency_ratio,
    input_impedance_ohm,
    reflection_of_impedance,
    scattering_of_chain,
)


def reflections(chain, load_ohm):
    """With the far side open, shorted and loaded, re 50 ohm."""
    z_in = input_impedance_ohm(chain, load_ohm)
    return tuple(reflection_of_impedance(z) for z in (chain.a / chain.c, chain.b / chain.d, z_in))


def deschamps(g_open, g_short, g_match):
    """S11, S22 and S12^2."""
    apart = g_open - g_short
    through = 2 * (g_open - g_match) * (g_match - g_short) / apart
    return g_match, (g_open + g_short - 2 * g_match) / apart, through


def test_numeric_example():
    """Gm 0.3000/20.00, Go 0.6047/-64.87, Gs 0.8002/92.46, and exactly back."""
    through = polar(0.85, -40)
    s = Scattering(polar(0.30, 20), through, through, polar(0.25, -110))
    g_open, g_short, g_match = reflections(chain_of_scattering(s), 50.0)
    for found, (size, degrees) in (
        (g_match, (0.3000, 20.00)),
        (g_open, (0.6047, -64.87)),
        (g_short, (0.8002, 92.46)),
    ):
        assert abs(found[0]) == pytest.approx(size, abs=5e-5)
        assert np.degrees(np.angle(found[0])) == pytest.approx(degrees, abs=5e-3)
    s11, s22, squared = deschamps(g_open, g_short, g_match)
    np.testing.assert_allclose([s11, s22, squared], [s.s11, s.s22, s.s12**2], atol=1e-12)


@given(passive_two_ports())
def test_deschamps_gives_the_scattering_parameters(chain):
    s = scattering_of_chain(chain)
    s11, s22, squared = deschamps(*reflections(chain, 50.0))
    np.testing.assert_allclose(s11, s.s11, atol=1e-9)
    scale = np.min(np.abs(s.s21) ** 2)  # Go - Gs is 2 S21^2/(1 - S22^2): it cancels as S21 fades
    np.testing.assert_allclose(squared, s.s21**2, atol=1e-12 + 1e-14 / scale)
    np.testing.assert_allclose(s22, s.s22, atol=1e-9 + 1e-13 / scale)


@given(passive_two_ports(), passive_loads())
def test_efficiency_from_three_reflections(chain, load_ohm):
    """(Re Z/|Z|) 2 |gm - gs| |go - gm| / (|go - gs| (1 - |gm|^2)): only the load's phase counts."""
    g_open, g_short, g_load = reflections(chain, load_ohm)
    swing = 2 * np.abs(g_load - g_short) * np.abs(g_open - g_load)
    through = swing / (np.abs(g_open - g_short) * (1 - np.abs(g_load) ** 2))
    found = load_ohm.real / np.abs(load_ohm) * through
    exact = efficiency_ratio(chain, load_ohm)
    spread = np.min(np.abs([g_load - g_short, g_open - g_load, g_open - g_short]), axis=0)
    np.testing.assert_array_less(np.abs(found / exact - 1), 1e-9 + 1e-13 / spread)
