"""Two-port algebra: closed forms, laws that every passive two-port keeps, scikit-rf beside it."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from two_ports import (
    FREQUENCY_HZ,
    assert_same_chain,
    matrices_of,
    network_of,
    operating_power_gain,
    passive_loads,
    passive_two_ports,
)

from reportgen.physics.network import (
    Chain,
    chain_of_scattering,
    efficiency_ratio,
    ideal_transformer,
    impedance_of_reflection,
    input_impedance_ohm,
    line,
    maximum_efficiency_ratio,
    reflection_of_impedance,
    reflection_ratio,
    resistor_ohm,
    scattering_of_chain,
    series_arm,
    shunt_arm,
)

ONE = np.ones(1)

# --- parts ---------------------------------------------------------------------------------------


def test_series_and_shunt_arm_add_up():
    assert input_impedance_ohm(series_arm(30 * ONE), 50.0) == pytest.approx(80)
    assert input_impedance_ohm(shunt_arm(ONE / 50), 50.0) == pytest.approx(25)
    assert efficiency_ratio(series_arm(30 * ONE), 50.0) == pytest.approx(50 / 80)
    assert efficiency_ratio(shunt_arm(ONE / 50), 50.0) == pytest.approx(0.5)


def test_ideal_transformer_divides_the_load_by_the_square_of_its_turns():
    unit = ideal_transformer(8 * ONE)
    assert input_impedance_ohm(unit, 3200.0) == pytest.approx(50)
    assert input_impedance_ohm(unit.reversed(), 50.0) == pytest.approx(3200)
    assert efficiency_ratio(unit, 3200.0 + 100j) == pytest.approx(1)
    assert reflection_ratio(unit, 3200.0, 50.0) == pytest.approx(0)


def test_quarter_wave_line_inverts_and_half_wave_line_repeats():
    load_ohm = 30 + 40j
    assert input_impedance_ohm(line(75.0, np.pi / 2 * ONE), load_ohm) == pytest.approx(
        75**2 / load_ohm
    )
    assert input_impedance_ohm(line(75.0, np.pi * ONE), load_ohm) == pytest.approx(load_ohm)
    assert efficiency_ratio(line(75.0, 0.7 * ONE), load_ohm) == pytest.approx(1)


def test_resistor_with_as_much_reactance_across_it():
    """w R C = 1 gives R/(1 + j)."""
    f = np.array([5e6])
    found = resistor_ohm(2450.0, 1 / (2 * np.pi * 5e6 * 2450), f)
    assert found == pytest.approx(2450 / (1 + 1j))
    assert resistor_ohm(2450.0, 0.0, f) == pytest.approx(2450)


@given(passive_loads())
def test_reflection_and_impedance_are_each_other_turned_round(load_ohm):
    gamma = reflection_of_impedance(load_ohm, 75.0)
    np.testing.assert_allclose(impedance_of_reflection(gamma, 75.0), load_ohm, rtol=1e-9)
    assert np.all(np.abs(gamma) < 1)


def test_reflection_of_a_known_mismatch():
    assert reflection_of_impedance(np.array([100 + 0j])) == pytest.approx(1 / 3)
    assert reflection_ratio(series_arm(0 * ONE), 100.0, 50.0) == pytest.approx(1 / 9)


# --- laws ----------------------------------------------------------------------------------------


@given(passive_two_ports())
def test_every_part_and_product_is_reciprocal(chain):
    determinant = chain.a * chain.d - chain.b * chain.c
    scale = np.abs(chain.a * chain.d) + np.abs(chain.b * chain.c)
    np.testing.assert_array_less(np.abs(determinant - 1), 1e-12 * scale + 1e-12)


@given(passive_two_ports(), passive_loads())
def test_efficiency_of_a_passive_two_port_is_between_nothing_and_all(chain, load_ohm):
    efficiency = efficiency_ratio(chain, load_ohm)
    assert np.all(efficiency > 0)
    assert np.all(efficiency <= 1 + 1e-12)


@given(passive_two_ports(), passive_loads())
def test_efficiency_is_the_operating_power_gain(chain, load_ohm):
    np.testing.assert_allclose(
        efficiency_ratio(chain, load_ohm), operating_power_gain(chain, load_ohm), rtol=1e-5
    )


@given(passive_two_ports(), passive_loads())
def test_no_load_beats_the_best_one(chain, load_ohm):
    assert np.all(efficiency_ratio(chain, load_ohm) <= maximum_efficiency_ratio(chain) + 1e-12)


@given(passive_two_ports())
def test_best_efficiency_is_the_same_from_both_sides(chain):
    np.testing.assert_allclose(
        maximum_efficiency_ratio(chain), maximum_efficiency_ratio(chain.reversed()), rtol=1e-9
    )


def test_best_efficiency_of_something_lossless_is_one():
    chain = ideal_transformer(7 * ONE) @ shunt_arm(2e-3j * ONE) @ series_arm(40j * ONE)
    assert maximum_efficiency_ratio(chain) == pytest.approx(1, abs=1e-7)


@given(passive_two_ports())
def test_reversing_twice_changes_nothing(chain):
    assert_same_chain(chain.reversed().reversed(), chain, rtol=0)
    s = scattering_of_chain(chain)
    np.testing.assert_array_equal(matrices_of(s.reversed().reversed()), matrices_of(s))


@given(passive_two_ports())
def test_reversing_is_the_same_in_both_descriptions(chain):
    np.testing.assert_allclose(
        matrices_of(scattering_of_chain(chain.reversed())),
        matrices_of(scattering_of_chain(chain).reversed()),
        rtol=1e-12,
        atol=1e-15,
    )


@given(passive_two_ports(), passive_two_ports())
def test_a_row_reversed_is_the_reversed_parts_in_the_other_order(one, other):
    assert_same_chain((one @ other).reversed(), other.reversed() @ one.reversed())


@given(passive_two_ports(), passive_loads())
def test_turning_a_winding_round_changes_no_figure(chain, load_ohm):
    turned = chain_of_scattering(scattering_of_chain(chain).negated())
    assert_same_chain(turned, Chain(-chain.a, -chain.b, -chain.c, -chain.d), rtol=1e-5)
    np.testing.assert_allclose(
        efficiency_ratio(turned, load_ohm), efficiency_ratio(chain, load_ohm), rtol=1e-4
    )


# --- scattering parameters -----------------------------------------------------------------------


@given(passive_two_ports(), st.sampled_from([50.0, 75.0, 600.0]))
def test_chain_to_scattering_and_back(chain, reference_ohm):
    """Table 4.2 of Pozar, Microwave Engineering, 4th ed., both ways."""
    back = chain_of_scattering(scattering_of_chain(chain, reference_ohm), reference_ohm)
    assert_same_chain(back, chain, rtol=1e-5)


@given(passive_two_ports())
def test_scikit_rf_makes_the_same_scattering_parameters(chain):
    np.testing.assert_allclose(
        matrices_of(scattering_of_chain(chain)), network_of(chain).s, rtol=1e-6, atol=1e-9
    )


@given(passive_two_ports(), passive_two_ports())
def test_scikit_rf_cascades_alike(one, other):
    np.testing.assert_allclose(
        matrices_of(scattering_of_chain(one @ other)),
        (network_of(one) ** network_of(other)).s,
        rtol=1e-6,
        atol=1e-9,
    )


@given(passive_two_ports())
def test_scikit_rf_renormalises_alike(chain):
    network = network_of(chain)
    network.renormalize(75.0)
    np.testing.assert_allclose(
        matrices_of(scattering_of_chain(chain, 75.0)), network.s, rtol=1e-6, atol=1e-9
    )


def test_draws_stand_in_front_of_the_frequency():
    """Three draws of one part, each as it would be alone."""
    draws_ohm = np.array([10.0, 20.0, 30.0])[:, None] * np.ones(FREQUENCY_HZ.shape)
    chain = series_arm(draws_ohm) @ shunt_arm(2j * np.pi * FREQUENCY_HZ * 1e-10)
    for index, ohm in enumerate((10.0, 20.0, 30.0)):
        alone = series_arm(ohm + 0 * FREQUENCY_HZ) @ shunt_arm(2j * np.pi * FREQUENCY_HZ * 1e-10)
        np.testing.assert_allclose(
            efficiency_ratio(chain, 450.0)[index], efficiency_ratio(alone, 450.0)
        )
    assert scattering_of_chain(chain).s11.shape == (3, FREQUENCY_HZ.size)
