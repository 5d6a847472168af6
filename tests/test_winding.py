"""The winding's equivalent circuit: its formulas against a row of parts, its fit against itself."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from two_ports import back_to_back

from reportgen.physics.bisection import halve_pair
from reportgen.physics.network import Chain, efficiency_ratio, series_arm, shunt_arm
from reportgen.physics.winding import (
    LEAKAGE,
    SHARE,
    SPREAD,
    START,
    Arms,
    Frame,
    arms_of,
    arms_seen,
    low_capacitor_s,
    open_and_short_ohm,
    open_ratio,
)
from reportgen.physics.winding_fit import MISFIT_LIMIT, fit_circuit, fit_points, with_guesses

HZ = np.linspace(1.5e6, 30e6, 60)
FRAME = Frame(
    turns_ratio=7.0,
    low_capacitor_f=80e-12,
    loss_tangent=0.001,
    leakage_h=120e-9,
    magnetising_h=7e-6,
)


def chain_of(arms: Arms) -> Chain:
    """The same circuit as a row of parts, before its ideal transformer."""
    behind = arms.share * arms.series_ohm
    row = (
        series_arm(arms.lead_ohm),
        shunt_arm(arms.capacitor_s),
        series_arm(arms.series_ohm - behind),
        shunt_arm(arms.shunt_s),
        series_arm(behind),
        shunt_arm(arms.high_s),
    )
    chain = row[0]
    for part in row[1:]:
        chain = chain @ part
    return chain


def parameters(spreads: float = 1.0) -> st.SearchStrategy[np.ndarray]:
    """Circuits so many spreads about what is expected."""
    off = st.lists(st.floats(-spreads, spreads), min_size=START.size, max_size=START.size)
    return off.map(lambda values: START + SPREAD * np.array(values))


@given(parameters())
def test_open_and_short_are_those_of_the_row_of_parts(values):
    arms = arms_of(values, FRAME, HZ)
    chain = chain_of(arms)
    z_open, z_short = open_and_short_ohm(arms)
    np.testing.assert_allclose(z_open, chain.a / chain.c, rtol=1e-9)
    np.testing.assert_allclose(z_short, chain.b / chain.d, rtol=1e-9)


@given(parameters())
def test_every_circuit_within_what_is_expected_is_passive(values):
    efficiency = efficiency_ratio(chain_of(arms_of(values, FRAME, HZ)), 50.0)
    assert np.all(efficiency > 0)
    assert np.all(efficiency <= 1 + 1e-12)


@given(parameters(0.6))
def test_ratio_of_a_pair_of_such_circuits_is_that_of_the_row_of_parts(values):
    """Series arm and core are found again from the pair; the rest is the circuit's."""
    arms = arms_of(values, FRAME, HZ)
    unit = chain_of(arms)
    found = open_ratio(arms_seen(halve_pair(back_to_back(unit, unit)), arms))
    np.testing.assert_allclose(found, unit.a, rtol=1e-3)


def test_ratio_of_an_extreme_circuit():
    """Leakage and its share behind the core one spread up: the rounds have not settled, 0.05 dB."""
    spreads = np.zeros(START.size)
    spreads[[LEAKAGE, SHARE]] = 1
    arms = arms_of(START + SPREAD * spreads, FRAME, HZ)
    unit = chain_of(arms)
    found = open_ratio(arms_seen(halve_pair(back_to_back(unit, unit)), arms))
    assert np.max(np.abs(20 * np.log10(np.abs(found / unit.a)))) < 0.05


def test_parts_at_the_start_of_the_fit():
    """At 1 MHz: 5 nH of lead, 80 pF, 120 nH with 50 milliohms, 1 pF across the high side."""
    arms = arms_of(START, FRAME, np.array([1e6]))
    omega = 2e6 * np.pi
    assert arms.lead_ohm[0] == pytest.approx(1j * omega * 5e-9)
    assert arms.capacitor_s[0] == pytest.approx(omega * 80e-12 * (1j + 0.001))
    assert arms.series_ohm[0] == pytest.approx(0.05 + 1j * omega * 120e-9)
    assert arms.high_s[0] == pytest.approx(1j * omega * 1e-12 * 49)
    assert arms.share == pytest.approx(0.25)


def test_core_is_an_inductance_where_it_does_not_disperse_yet_and_lossy_above():
    low, high = (1 / arms_of(START, FRAME, np.array([hz])).shunt_s[0] for hz in (1e3, 20e6))
    assert low == pytest.approx(2e3j * np.pi * 7e-6 * np.exp(0.2), rel=1e-3)
    assert high.real > high.imag > 0


def test_capacitor_of_the_high_side():
    frame = Frame(turns_ratio=7.0, high_capacitor_f=2e-12)
    arms = arms_of(START, frame, np.array([1e6]))
    assert arms.capacitor_s[0] == 0
    assert arms.high_s[0] == pytest.approx(2e6j * np.pi * 3e-12 * 49)


def test_low_capacitor_admittance():
    found = low_capacitor_s(FRAME, np.array([10e6]))[0]
    assert found == pytest.approx(2e7 * np.pi * 80e-12 * (1j + 0.001))


def test_first_guesses_of_the_inductances():
    """Leakage from the shorted side; the core from the open one, where leakage adds 2 % and the
    capacitor's resonance another 4 %: good enough to start from.
    """
    omega = 2 * np.pi * HZ
    unit = shunt_arm(80e-12 * omega * (1j + 0.001)) @ series_arm(0.1 + 1j * omega * 90e-9)
    unit = unit @ shunt_arm(1 / (1j * omega * 5e-6))
    guessed = with_guesses(FRAME, halve_pair(back_to_back(unit, unit)), HZ)
    assert guessed.leakage_h == pytest.approx(90e-9, rel=0.03)
    assert guessed.magnetising_h == pytest.approx(5e-6, rel=0.06)
    assert guessed.low_capacitor_f == FRAME.low_capacitor_f


@pytest.mark.parametrize("seed", [1, 2, 3, 4])
def test_fit_finds_a_circuit_of_its_own_kind(seed):
    """The ratio, all that the fit is for, within 0.02 dB; the misfit far below its limit."""
    rng = np.random.default_rng(seed)
    true = START + SPREAD * rng.uniform(-0.8, 0.8, START.size)
    unit = chain_of(arms_of(true, FRAME, HZ))
    halved = halve_pair(back_to_back(unit, unit))
    fitted = fit_circuit(halved, FRAME, HZ)
    assert fitted.believed
    assert fitted.misfit_ratio < MISFIT_LIMIT / 10
    found = open_ratio(arms_seen(halved, arms_of(fitted.parameters, fitted.frame, HZ)))
    off_db = 20 * np.log10(np.abs(found / unit.a))
    assert np.max(np.abs(off_db)) < 0.02


def test_fit_does_not_believe_what_is_no_winding():
    """A lossy line and a shunt resonance behave like no core with a winding on it."""
    omega = 2 * np.pi * HZ
    trap = shunt_arm(1 / (0.2 + 1j * omega * 4e-7 + 1 / (1j * omega * 4e-10)))
    unit = series_arm(30 + 0j * omega) @ trap @ series_arm(1j * omega * 5e-7)
    fitted = fit_circuit(halve_pair(back_to_back(unit, unit)), FRAME, HZ)
    assert not fitted.believed
    assert fitted.misfit_ratio > MISFIT_LIMIT


def test_fit_uses_some_points_up_to_sixty_megahertz():
    many = np.linspace(1e6, 100e6, 1001)
    points = fit_points(many)
    assert 30 <= points.size <= 100
    assert points[0] == 0
    assert many[points[-1]] <= 60e6 < many[points[-1] + 1]
    assert np.all(np.diff(points) > 0)


def test_fit_uses_all_of_a_few_points():
    assert fit_points(np.linspace(1e6, 30e6, 21)).tolist() == list(range(21))


def test_fit_of_a_sweep_that_lies_above_sixty_megahertz_has_a_point_left():
    assert fit_points(np.linspace(70e6, 90e6, 5)).tolist() == [0]
