"""Efficiency is the operating power gain of the textbooks; delivered is the transducer gain.

A transistor is not reciprocal, so `chain_of_scattering` and `maximum_efficiency_ratio` do not apply
to it. `efficiency_ratio` takes any chain matrix, and scikit-rf makes one of the books' scattering
parameters. Available gain, stability factor and maximum stable gain of such two-ports have no
counterpart here and are not checked; neither is Pozar's stability example (4th ed., 12.2).

Sources: D. M. Pozar, Microwave Engineering, 4th ed., examples 12.1 (inputs read in a secondary
text) and 12.3; C. Bowick, RF Circuit Design, conjugate match at 200 MHz; G. Gonzalez, Microwave
Transistor Amplifiers, 2nd ed., chapter 3, 6 GHz. Results from memory and matched by computing.
"""

import numpy as np
import pytest
import skrf
from two_ports import operating_power_gain, polar, t_pad

from reportgen.physics.network import (
    Chain,
    efficiency_ratio,
    impedance_of_reflection,
    input_impedance_ohm,
    reflection_of_impedance,
    reflection_ratio,
)

POZAR_12_1 = ((0.38, -158), (0.11, 54), (3.50, 80), (0.40, -43))

CONJUGATE_MATCH = {  # S11, S12, S21, S22; source and load reflection; gain [dB], half a last digit
    "Pozar 12.3": (
        ((0.72, -116), (0.03, 57), (2.60, 76), (0.73, -54)), (0.872, 123), (0.876, 61), 16.7, 0.05,
    ),
    "Bowick, 200 MHz": (
        ((0.4, 162), (0.04, 60), (5.2, 63), (0.35, -39)), (0.522, -162), (0.487, 39), 16.1, 0.05,
    ),
    "Gonzalez, 6 GHz": (
        ((0.641, -171.3), (0.057, 16.3), (2.058, 28.5), (0.572, -95.7)),
        (0.762, 177.3), (0.718, 103.9), 11.38, 0.005,
    ),
}  # fmt: skip


def chain_of(printed: tuple[tuple[float, float], ...]) -> Chain:
    """Chain matrix of S11, S12, S21, S22 in magnitude and degrees, by scikit-rf."""
    s = np.array([polar(*pair)[0] for pair in printed]).reshape(1, 2, 2)
    a = skrf.network.s2a(s, 50.0)
    return Chain(a[:, 0, 0], a[:, 0, 1], a[:, 1, 0], a[:, 1, 1])


def test_pozar_example_12_1():
    """25 ohm source, 40 ohm load: G = 13.1, GT = 12.6, and the reflection seen 0.365 at -152."""
    chain = chain_of(POZAR_12_1)
    gain = efficiency_ratio(chain, 40.0)[0]
    assert gain == pytest.approx(13.1, abs=0.05)
    assert gain == pytest.approx(13.0858, abs=5e-5)
    transducer = gain * (1 - reflection_ratio(chain, 40.0, 25.0)[0])
    assert transducer == pytest.approx(12.6, abs=0.05)
    assert transducer == pytest.approx(12.6039, abs=5e-5)
    seen = reflection_of_impedance(input_impedance_ohm(chain, 40.0))[0]
    assert abs(seen) == pytest.approx(0.365, abs=5e-4)
    assert np.degrees(np.angle(seen)) == pytest.approx(-152, abs=0.5)


@pytest.mark.parametrize(
    ("printed", "source", "load", "gain_db", "allowed"),
    CONJUGATE_MATCH.values(),
    ids=CONJUGATE_MATCH,
)
def test_conjugate_match_of_a_textbook_transistor(printed, source, load, gain_db, allowed):
    """Into the printed load the gain is the printed maximum, and the input wants the source."""
    chain = chain_of(printed)
    load_ohm = impedance_of_reflection(polar(*load))
    assert 10 * np.log10(efficiency_ratio(chain, load_ohm)[0]) == pytest.approx(
        gain_db, abs=allowed
    )
    wanted = np.conj(reflection_of_impedance(input_impedance_ohm(chain, load_ohm)))
    assert abs(wanted - polar(*source)) < 0.01


def test_a_reciprocal_pad_agrees_with_the_formula_in_scattering_parameters():
    """The same identity without a transistor, every value by scikit-rf on one side."""
    pad = t_pad(10, 150, 25)
    for load_ohm in (30.0, 50.0, 700 - 300j):
        assert efficiency_ratio(pad, load_ohm) == pytest.approx(operating_power_gain(pad, load_ohm))
