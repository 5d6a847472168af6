"""Bartlett's bisection theorem on two circuits whose halves are known.

Sources: A. C. Bartlett, Phil. Mag. ser. 7, vol. 4, pp. 902-907, 1927 (cited from memory): with the
half opened and shorted at the plane, S11 = (Gopen + Gshort)/2, S21 = (Gopen - Gshort)/2. The pad of
10 dB is that of Kuphaldt (25.97 and 35.14 ohm, read); the Butterworth low-pass of three elements
(1, 2, 1) is classic, |S21|^2 = 1/(1 + w^6).
"""

import numpy as np
import pytest
from two_ports import back_to_back

from reportgen.physics.bisection import halve_pair
from reportgen.physics.network import Scattering, reflection_of_impedance, series_arm, shunt_arm


def test_half_of_a_t_pad_of_ten_decibels():
    half = series_arm(np.array([25.9747])) @ shunt_arm(np.array([1 / (2 * 35.1364)]))
    halved = halve_pair(back_to_back(half, half))
    assert halved.z_open_ohm[0] == pytest.approx(96.2475, abs=5e-4)
    assert halved.z_short_ohm[0] == pytest.approx(25.9747, abs=1e-6)
    g_open, g_short = (
        reflection_of_impedance(z)[0] for z in (halved.z_open_ohm, halved.z_short_ohm)
    )
    assert g_open == pytest.approx(0.316228, abs=5e-6)
    assert g_short == pytest.approx(-0.316228, abs=5e-6)


def test_half_of_a_pad_that_is_only_known_by_its_loss():
    """S11 = 0 and S21 = 0.316228: the resistors of the half follow."""
    zero, through = np.zeros(1, complex), np.full(1, 0.1**0.5, complex)
    halved = halve_pair(Scattering(zero, through, through, zero))
    assert halved.z_open_ohm[0] == pytest.approx(96.2475, abs=5e-5)
    assert halved.z_short_ohm[0] == pytest.approx(25.9747, abs=5e-5)


@pytest.mark.parametrize(("w", "passed"), [(0.5, 0.984615), (1.0, 0.5), (2.0, 0.0153846)])
def test_half_of_a_butterworth_low_pass(w, passed):
    """One ohm scaled to fifty: an inductor of 50 w, then half of the capacitor."""
    half = series_arm(np.array([50j * w])) @ shunt_arm(np.array([1j * w / 50]))
    pair = back_to_back(half, half)
    assert np.abs(pair.s21[0]) ** 2 == pytest.approx(passed, abs=5e-7)
    assert np.abs(pair.s21[0]) ** 2 == pytest.approx(1 / (1 + w**6))
    halved = halve_pair(pair)
    assert halved.z_short_ohm[0] == pytest.approx(50j * w)
    assert halved.z_open_ohm[0] == pytest.approx(50 * (1j * w + 1 / (1j * w)))
