"""Resistive pads: two-ports whose loss is known exactly.

Sources. Matched pads, 50 ohm: "RF attenuator resistor values table" of electronics-notes.com,
rows 1 to 3 dB read in the source; T. R. Kuphaldt, Lessons in Electric Circuits, vol. III, section
on the T attenuator (25.97 and 35.14 ohm for 10 dB, read in the source); other rows from memory and
matched by computing. Minimum-loss pads: Reference Data for Radio Engineers, chapter on attenuators
(formula from memory; 5.72 dB for 75/50 ohm is printed in many places). K = 2 Z1/Z2 - 1 of such a
pad is our own derivation.
"""

import numpy as np
import pytest
from two_ports import network_of, pi_pad, t_pad

from reportgen.physics.network import (
    Chain,
    chain_of_scattering,
    efficiency_ratio,
    input_impedance_ohm,
    maximum_efficiency_ratio,
    reflection_ratio,
    scattering_of_chain,
    series_arm,
    shunt_arm,
)
from reportgen.physics.quantities import decibel_loss, swr_of_reflection

MATCHED = [  # dB, T: series, shunt; pi: shunt, series [ohm], and how exactly each is printed
    (1, (2.9, 0.05), (433, 0.5), (870, 0.5), (5.8, 0.05)),
    (2, (5.7, 0.05), (215, 0.5), (436, 0.5), (11.6, 0.05)),
    (3, (8.5, 0.05), (142, 0.5), (292, 0.5), (17.6, 0.05)),
    (6, (16.6, 0.05), (66.9, 0.05), (150.5, 0.05), (37.4, 0.05)),
    (10, (25.97, 0.005), (35.14, 0.005), (96.25, 0.005), (71.15, 0.005)),
    (20, (40.9, 0.05), (10.1, 0.05), (61.1, 0.05), (247.5, 0.05)),
]
MINIMUM_LOSS = [  # Z1, Z2, series, shunt [ohm], loss [dB]
    (75, 50, 43.3013, 86.6025, 5.7195),
    (200, 50, 173.2051, 57.7350, 11.4390),
    (300, 50, 273.8613, 54.7723, 13.4152),
    (450, 50, 424.2641, 53.0330, 15.3110),
    (600, 50, 574.4563, 52.2233, 16.6255),
    (2450, 50, 2424.8711, 50.5181, 22.8779),
    (600, 300, 424.2641, 424.2641, 7.6555),
]
BETWEEN_50_OHM = [  # Z1, S11, S21, S22, loss [dB] of the pad to 50 ohm when both ports are 50 ohm
    (75, 0.200000, 0.507180, -0.053590, 5.8968),
    (600, 0.846154, 0.078596, -0.018403, 22.0920),
    (2450, 0.960000, 0.020103, -0.004949, 33.9347),
]


def matched_t(loss_db: float) -> Chain:
    k = 10 ** (loss_db / 20)
    series = 50 * (k - 1) / (k + 1)
    return t_pad(series, 100 * k / (k * k - 1), series)


def matched_pi(loss_db: float) -> Chain:
    k = 10 ** (loss_db / 20)
    shunt = 50 * (k + 1) / (k - 1)
    return pi_pad(shunt, 50 * (k * k - 1) / (2 * k), shunt)


def minimum_loss_pad(z1_ohm: float, z2_ohm: float) -> Chain:
    """From the higher to the lower resistance."""
    series = np.sqrt(z1_ohm * (z1_ohm - z2_ohm)) * np.ones(1)
    return series_arm(series) @ shunt_arm(np.sqrt(1 - z2_ohm / z1_ohm) / z2_ohm * np.ones(1))


@pytest.mark.parametrize(("loss_db", "t_series", "t_shunt", "pi_shunt", "pi_series"), MATCHED)
def test_matched_pad_resistors_come_back_out_of_the_chain(
    loss_db, t_series, t_shunt, pi_shunt, pi_series
):
    """From scattering parameters that only know the loss to the printed resistors.

    T: shunt 1/C, series (A - 1)/C; pi: series B, shunt B/(A - 1).
    """
    wanted = chain_of_scattering(scattering_of_chain(matched_t(loss_db)))
    seen = chain_of_scattering(scattering_of_chain(matched_pi(loss_db)))
    found = [
        ((wanted.a - 1) / wanted.c, t_series),
        (1 / wanted.c, t_shunt),
        (seen.b / (seen.a - 1), pi_shunt),
        (seen.b, pi_series),
    ]
    for value, (printed, allowed) in found:
        assert value[0] == pytest.approx(printed, abs=1.001 * allowed)


@pytest.mark.parametrize("pad", [matched_t, matched_pi])
@pytest.mark.parametrize("loss_db", [row[0] for row in MATCHED])
def test_matched_pad_neither_reflects_nor_hides_its_loss(pad, loss_db):
    s = scattering_of_chain(pad(loss_db))
    np.testing.assert_allclose([s.s11, s.s22], 0, atol=1e-12)
    np.testing.assert_allclose([s.s21, s.s12], 10 ** (-loss_db / 20), rtol=1e-12)
    assert decibel_loss(efficiency_ratio(pad(loss_db), 50.0)) == pytest.approx(loss_db)
    assert decibel_loss(maximum_efficiency_ratio(pad(loss_db))) == pytest.approx(loss_db)
    assert input_impedance_ohm(pad(loss_db), 50.0) == pytest.approx(50)


@pytest.mark.parametrize("first_db", [1, 3, 10])
def test_matched_pads_in_a_row_add_their_decibels(first_db):
    row = matched_t(first_db) @ matched_pi(6).reversed()
    assert decibel_loss(efficiency_ratio(row, 50.0)) == pytest.approx(first_db + 6)


def test_printed_pad_of_ten_decibels_as_printed():
    """The printed check: 25.97 + (35.14 parallel to 75.97) = 50.00 ohm."""
    pad = t_pad(25.97, 35.14, 25.97)
    assert input_impedance_ohm(pad, 50.0)[0].real == pytest.approx(50.00, abs=0.005)
    assert decibel_loss(efficiency_ratio(pad, 50.0))[0] == pytest.approx(10, abs=0.002)


def test_mismatched_pad_tells_insertion_loss_from_efficiency():
    """T of 10, 150 and 10 ohm: 3.17 dB and SWR 1.057 are printed in a published note."""
    pad = t_pad(10, 150, 10)
    s = scattering_of_chain(pad)
    assert decibel_loss(np.abs(s.s21) ** 2)[0] == pytest.approx(3.1672, abs=5e-5)
    assert swr_of_reflection(reflection_ratio(pad, 50.0, 50.0))[0] == pytest.approx(
        1.05714, abs=5e-6
    )
    assert efficiency_ratio(pad, 50.0)[0] == pytest.approx(0.482625, abs=5e-7)


@pytest.mark.parametrize(("z1", "z2", "series", "shunt", "loss_db"), MINIMUM_LOSS)
def test_minimum_loss_pad(z1, z2, series, shunt, loss_db):
    pad = minimum_loss_pad(z1, z2)
    assert pad.b[0].real == pytest.approx(series, abs=5e-5)
    assert 1 / pad.c[0].real == pytest.approx(shunt, abs=5e-5)
    assert input_impedance_ohm(pad, float(z2)) == pytest.approx(z1)
    assert input_impedance_ohm(pad.reversed(), float(z1)) == pytest.approx(z2)
    for way, load_ohm in ((pad, z2), (pad.reversed(), z1)):
        assert decibel_loss(efficiency_ratio(way, float(load_ohm)))[0] == pytest.approx(
            loss_db, abs=5e-5
        )


@pytest.mark.parametrize(("z1", "z2", "series", "shunt", "loss_db"), MINIMUM_LOSS)
def test_minimum_loss_pad_is_its_own_best_case(z1, z2, series, shunt, loss_db):
    """No load does better: K = 2 Z1/Z2 - 1 and the best efficiency is K - sqrt(K^2 - 1)."""
    k = 2 * z1 / z2 - 1
    best = maximum_efficiency_ratio(minimum_loss_pad(z1, z2))[0]
    assert best == pytest.approx(k - np.sqrt(k * k - 1), rel=1e-9)
    assert decibel_loss(np.array(best)) == pytest.approx(loss_db, abs=5e-5)
    network = network_of(minimum_loss_pad(z1, z2))
    assert network.stability[0] == pytest.approx(k)
    assert network.max_gain[0] == pytest.approx(best)


@pytest.mark.parametrize(("z1", "z2", "series", "shunt", "loss_db"), MINIMUM_LOSS)
def test_minimum_loss_pads_back_to_back_add_their_decibels(z1, z2, series, shunt, loss_db):
    """The facing sides are equal, so there is no mismatch between them."""
    both = minimum_loss_pad(z1, z2).reversed() @ minimum_loss_pad(z1, z2)
    assert decibel_loss(efficiency_ratio(both, float(z2)))[0] == pytest.approx(
        2 * loss_db, abs=1.1e-4
    )


@pytest.mark.parametrize(("z1", "z2", "series", "shunt", "loss_db"), MINIMUM_LOSS)
def test_minimum_loss_pad_renormalised_by_scikit_rf(z1, z2, series, shunt, loss_db):
    """Between its own resistances it reflects nothing; scikit-rf does the renormalising."""
    network = network_of(minimum_loss_pad(z1, z2))
    network.renormalize([z1, z2])
    np.testing.assert_allclose([network.s[0, 0, 0], network.s[0, 1, 1]], 0, atol=1e-9)
    assert decibel_loss(np.abs(network.s[0, 1, 0]) ** 2) == pytest.approx(loss_db, abs=5e-5)


@pytest.mark.parametrize(("z1", "s11", "s21", "s22", "through_db"), BETWEEN_50_OHM)
def test_minimum_loss_pad_between_two_50_ohm_ports(z1, s11, s21, s22, through_db):
    """2450/50 ohm reads 33.93 dB so and 22.88 dB between its own: the rest is mismatch."""
    s = scattering_of_chain(minimum_loss_pad(z1, 50))
    seen = [float(value[0].real) for value in (s.s11, s.s21, s.s22)]
    assert seen == pytest.approx([s11, s21, s22], abs=5e-7)
    assert decibel_loss(np.abs(s.s21) ** 2)[0] == pytest.approx(through_db, abs=5e-5)
