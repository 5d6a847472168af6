"""One unit from two: exact where theory says so, for any passive unit."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from two_ports import FREQUENCY_HZ, back_to_back, passive_units

from reportgen.physics.bisection import (
    FIT_BOUND_PF,
    Halved,
    StrayFit,
    fit_stray,
    halve_pair,
    halve_three_pairs,
    load_squared,
    ratio_by_load,
    section_arms,
    unit_of_pair,
)
from reportgen.physics.network import (
    Chain,
    efficiency_ratio,
    ideal_transformer,
    input_impedance_ohm,
    resistor_ohm,
    series_arm,
    shunt_arm,
)

OMEGA = 2 * np.pi * FREQUENCY_HZ
N = 7.0
CAPACITOR_S = OMEGA * 100e-12 * (1j + 0.001)
LOAD_OHM = 2400.0


def section(leakage_h: float = 120e-9, wire_ohm: float = 0.5) -> Chain:
    """Capacitor, series arm, shunt arm of a lossy core, ideal transformer."""
    core_s = 1 / (1j * OMEGA * 6e-6 / (1 + 1j * FREQUENCY_HZ / 8e6))
    chain = shunt_arm(CAPACITOR_S) @ series_arm(wire_ohm + 1j * OMEGA * leakage_h)
    return chain @ shunt_arm(core_s) @ ideal_transformer(np.full(OMEGA.shape, N))


def halved_pair(unit: Chain) -> Halved:
    return halve_pair(back_to_back(unit, unit))


def assert_close(found: Chain, wanted: Chain, rtol: float = 1e-6) -> None:
    for name in "abcd":
        np.testing.assert_allclose(getattr(found, name), getattr(wanted, name), rtol=rtol)


# --- halving -------------------------------------------------------------------------------------


@given(passive_units())
def test_symmetric_pair_shows_the_open_and_the_shorted_half(unit):
    halved = halved_pair(unit)
    np.testing.assert_allclose(halved.z_open_ohm, unit.a / unit.c, rtol=1e-4)
    np.testing.assert_allclose(halved.z_short_ohm, unit.b / unit.d, rtol=1e-4)


@given(passive_units())
def test_true_ratio_gives_back_the_unit(unit):
    found = unit_of_pair(halved_pair(unit), unit.a)
    assert_close(found, unit, rtol=1e-3)


@given(passive_units(), passive_units())
def test_a_pair_says_the_same_from_both_sides(one, other):
    straight = halve_pair(back_to_back(one, other))
    turned = halve_pair(back_to_back(other, one))
    np.testing.assert_allclose(straight.z_open_ohm, turned.z_open_ohm, rtol=1e-6)
    np.testing.assert_allclose(straight.z_short_ohm, turned.z_short_ohm, rtol=1e-6)


@given(passive_units(), passive_units(), passive_units())
def test_three_pairs_show_each_unit_however_unequal_they_are(first, second, third):
    """What a single pair cannot say: the half of one of two different units."""
    halved = halve_three_pairs(
        first @ second.reversed(), first @ third.reversed(), second @ third.reversed()
    )
    np.testing.assert_allclose(halved.z_open_ohm, first.a / first.c, rtol=1e-4)
    np.testing.assert_allclose(halved.z_short_ohm, first.b / first.d, rtol=1e-4)
    assert_close(unit_of_pair(halved, first.a), first, rtol=1e-4)


def test_any_ratio_factors_the_pair():
    """The number that stays free cancels at the join."""
    halved = halved_pair(section())
    for t in (0.1 + 0j, 0.2 - 0.1j):
        unit = unit_of_pair(halved, np.full(OMEGA.shape, t))
        pair = unit @ unit.reversed()
        np.testing.assert_allclose(pair.a, halved.p)
        np.testing.assert_allclose(pair.b, halved.q)
        np.testing.assert_allclose(pair.c, halved.r)


# --- the lumped section --------------------------------------------------------------------------


def test_section_arms_of_a_true_section():
    series, shunt = section_arms(halved_pair(section()), CAPACITOR_S)
    np.testing.assert_allclose(series, 0.5 + 1j * OMEGA * 120e-9, rtol=1e-9)
    np.testing.assert_allclose(1 / shunt, 1j * OMEGA * 6e-6 / (1 + 1j * FREQUENCY_HZ / 8e6))


def test_true_section_is_closed_exactly():
    halved = halved_pair(section())
    series, shunt = section_arms(halved, CAPACITOR_S)
    ratio = (1 + series * shunt) / N
    assert_close(unit_of_pair(halved, ratio), section())
    np.testing.assert_allclose(ratio, section().a)


def test_forgotten_capacitor_is_seen_in_the_efficiency():
    """A closing that did not care about the capacitor would pass every other test here."""
    halved = halved_pair(section())
    series, shunt = section_arms(halved, 0 * CAPACITOR_S)
    forgotten = unit_of_pair(halved, (1 + series * shunt) / N)
    off = efficiency_ratio(forgotten, LOAD_OHM) / efficiency_ratio(section(), LOAD_OHM)
    assert np.max(np.abs(10 * np.log10(off))) > 0.02


# --- closing by a load ---------------------------------------------------------------------------


@given(
    passive_units(),
    st.floats(200, 5000),
    st.floats(0, 10),
)
def test_exact_load_sweep_gives_back_the_unit(unit, resistance_ohm, stray_pf):
    load_ohm = resistor_ohm(resistance_ohm, stray_pf * 1e-12, FREQUENCY_HZ)
    halved = halved_pair(unit)
    squared = load_squared(halved, input_impedance_ohm(unit, load_ohm))
    np.testing.assert_allclose(squared, 2 * unit.a**2 * load_ohm, rtol=1e-3)
    t = ratio_by_load(squared, load_ohm, unit.a * np.exp(0.3j))
    assert_close(unit_of_pair(halved, t), unit, rtol=1e-3)


def test_root_is_the_one_beside_what_is_expected():
    t = section().a
    for near in (t, -t, t * np.exp(1.5j), t * np.exp(-1.6j)):
        found = ratio_by_load(2 * t**2 * LOAD_OHM, LOAD_OHM, near)
        assert np.all((found * np.conj(near)).real > 0)
        np.testing.assert_allclose(found**2, t**2)


# --- stray ---------------------------------------------------------------------------------------


def squared_with(stray_pf: float, resistance_ohm: float = LOAD_OHM) -> np.ndarray:
    """2 t^2 Z of a load sweep that really had so much capacitance across its resistor."""
    unit = section()
    load_ohm = resistor_ohm(resistance_ohm, stray_pf * 1e-12, FREQUENCY_HZ)
    return load_squared(halved_pair(unit), input_impedance_ohm(unit, load_ohm))


def fit_with(squared: np.ndarray, expected: np.ndarray | None = None) -> StrayFit:
    """The fit with the load as entered."""
    admittance_s = np.full(FREQUENCY_HZ.shape, 1 / LOAD_OHM, complex)
    expected = section().a if expected is None else expected
    return fit_stray(squared, expected, admittance_s, FREQUENCY_HZ)


@pytest.mark.parametrize("stray_pf", [-3.0, 0.0, 0.4, 3.7, 12.0])
def test_stray_across_the_load_is_found(stray_pf):
    fit = fit_with(squared_with(stray_pf))
    assert fit.stray_f * 1e12 == pytest.approx(stray_pf, abs=1e-3)
    assert fit.spread_f * 1e12 == pytest.approx(0, abs=1e-3)
    assert fit.resistance_ratio == pytest.approx(1, rel=1e-4)


def test_level_does_not_disturb_the_stray_and_tells_the_resistance():
    """A load that is 4 % above what was entered."""
    fit = fit_with(squared_with(3.0, 1.04 * LOAD_OHM))
    assert fit.stray_f * 1e12 == pytest.approx(3.0, rel=0.05)
    assert fit.resistance_ratio == pytest.approx(1.04, rel=1e-3)


def test_wrong_root_does_no_harm():
    fit = fit_with(squared_with(3.0), -section().a)
    assert fit.stray_f * 1e12 == pytest.approx(3.0, abs=1e-3)


def test_draws_are_fitted_one_by_one():
    squared = np.stack([squared_with(pf) for pf in (1.0, 2.0, 5.0)])
    fit = fit_with(squared)
    np.testing.assert_allclose(fit.stray_f * 1e12, [1, 2, 5], atol=1e-3)


def test_nothing_above_three_megahertz_determines_no_stray():
    low_hz = FREQUENCY_HZ / 11
    fit = fit_stray(squared_with(3.0), section().a, 0j * low_hz + 1 / LOAD_OHM, low_hz)
    assert fit.stray_f == 0
    assert fit.spread_f == np.inf
    assert fit.resistance_ratio == 1


def test_fit_stops_at_its_bound():
    fit = fit_with(squared_with(60.0))
    assert fit.stray_f * 1e12 == pytest.approx(FIT_BOUND_PF)
