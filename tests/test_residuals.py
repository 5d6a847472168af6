"""What a calibration leaves: limits, draws, and sweeps put right again."""

from __future__ import annotations

import numpy as np
import pytest
import skrf
from hypothesis import given
from hypothesis import strategies as st
from scipy.stats import kstest
from two_ports import FREQUENCY_HZ, passive_two_ports

from reportgen.model import Calibration
from reportgen.physics.network import Chain, Scattering, scattering_of_chain
from reportgen.physics.residuals import (
    GRADES,
    LONGEST_DELAY_S,
    PortResiduals,
    disc,
    gain,
    generator,
    limits_of,
    one_path_corrected,
    reflection_corrected,
    seen_through,
    trace_noise_ratio,
    two_port_corrected,
)

DRAWS = 4000


@st.composite
def ports(draw: st.DrawFn) -> PortResiduals:
    """One direction of a calibration that is not a good one."""

    def residual(most: float) -> np.ndarray:
        turn = draw(st.floats(-np.pi, np.pi)) + FREQUENCY_HZ * draw(st.floats(-1e-7, 1e-7))
        return np.asarray(draw(st.floats(0, most)) * np.exp(1j * turn))

    def tracking() -> np.ndarray:
        return np.full(FREQUENCY_HZ.shape, draw(st.floats(0.98, 1.02)))

    return PortResiduals(
        residual(0.02), residual(0.03), residual(0.05), tracking(), tracking(), residual(1e-3)
    )


def assert_same(one: Scattering, other: Scattering, within: float) -> None:
    for name in ("s11", "s12", "s21", "s22"):
        np.testing.assert_allclose(
            getattr(one, name), getattr(other, name), rtol=0, atol=within, err_msg=name
        )


# --- correction ----------------------------------------------------------------------------------


@given(passive_two_ports(), ports(), ports())
def test_two_port_comes_back(chain, forward, backward):
    true = scattering_of_chain(chain)
    seen = seen_through(true, forward, backward)
    assert_same(two_port_corrected(seen, forward, backward), true, 1e-12)


@given(passive_two_ports(), ports(), ports())
def test_one_path_comes_back_where_the_far_side_is_known(chain, forward, backward):
    true = scattering_of_chain(chain)
    seen = seen_through(true, forward, backward)
    assert_same(one_path_corrected(seen.s11, seen.s21, forward, true.s22), true, 1e-6)


@given(passive_two_ports(), ports(), ports())
def test_reflection_comes_back(chain, forward, backward):
    """A reflection is a two-port through which nothing comes."""
    true, nothing = scattering_of_chain(chain).s11, np.zeros(FREQUENCY_HZ.shape, complex)
    seen = seen_through(Scattering(true, nothing, nothing, nothing), forward, backward).s11
    np.testing.assert_allclose(reflection_corrected(seen, forward), true, rtol=0, atol=1e-12)


def two_ports_of(s11, s12, s21, s22) -> skrf.Network:
    matrices = np.moveaxis(np.array([[s11, s12], [s21, s22]]), -1, 0)
    return skrf.Network(f=FREQUENCY_HZ, f_unit="Hz", s=matrices, z0=50.0)


@given(passive_two_ports(), ports())
def test_seen_as_a_cascade(chain: Chain, port: PortResiduals):
    """The flow graph as scikit-rf solves it: an error box, the two-port, the far port's match."""
    s, one = scattering_of_chain(chain), np.ones(FREQUENCY_HZ.shape, complex)
    box = two_ports_of(port.directivity, port.reflection_tracking, one, port.source_match)
    joined = box ** two_ports_of(s.s11, s.s12, s.s21, s.s22)
    end = skrf.Network(f=FREQUENCY_HZ, f_unit="Hz", s=port.load_match[:, None, None], z0=50.0)
    seen = seen_through(s, port, port)
    through = joined.s[:, 1, 0] / (1 - joined.s[:, 1, 1] * port.load_match)
    np.testing.assert_allclose(seen.s11, (joined**end).s[:, 0, 0], atol=1e-10)
    np.testing.assert_allclose(
        seen.s21, port.isolation + port.transmission_tracking * through, atol=1e-10
    )


# --- limits --------------------------------------------------------------------------------------


@pytest.mark.parametrize("grade", list(GRADES))
def test_limits_are_those_of_the_grade(grade):
    assert limits_of(Calibration(grade=grade)) == GRADES[grade]


def test_what_is_stated_goes_before_the_grade():
    found = limits_of(Calibration(grade="bench", directivity_db=31.0, noise_db=0.0))
    assert (found.directivity_db, found.noise_db) == (31.0, 0.0)
    assert found.source_match_db == GRADES["bench"].source_match_db
    assert found.one_path_load_match_db == 26


def test_stated_load_match_holds_for_one_path_too():
    found = limits_of(Calibration(load_match_db=20.0))
    assert (found.load_match_db, found.one_path_load_match_db) == (20, 20)


# --- draws ---------------------------------------------------------------------------------------


def drawn_disc(limit_db: float = 40.0) -> np.ndarray:
    return disc(generator("test"), DRAWS, limit_db, FREQUENCY_HZ)


def test_draws_are_uniform_in_the_disc():
    """The square of the radius is uniform, and so is the phase."""
    draws = drawn_disc() / 10 ** (-40 / 20)
    assert draws.shape == (DRAWS, FREQUENCY_HZ.size)
    assert kstest(np.abs(draws[:, 0]) ** 2, "uniform").pvalue > 0.01
    assert kstest(np.angle(draws[:, 0]), "uniform", (-np.pi, 2 * np.pi)).pvalue > 0.01
    np.testing.assert_allclose(np.abs(draws), np.abs(draws[:, :1]).repeat(7, axis=1))


def test_draws_turn_with_frequency_by_a_bounded_delay():
    hz = np.array([10e6, 10.1e6])
    draws = disc(generator("test"), DRAWS, 40.0, hz)
    delays_s = np.angle(draws[:, 0] / draws[:, 1]) / (2 * np.pi * 0.1e6)
    assert np.max(np.abs(delays_s)) <= LONGEST_DELAY_S == 17e-9
    assert kstest(delays_s, "uniform", (-17e-9, 34e-9)).pvalue > 0.01


def test_gain_is_uniform_in_decibels():
    draws_db = 20 * np.log10(gain(generator("test"), DRAWS, 0.05))[:, 0]
    assert kstest(draws_db, "uniform", (-0.05, 0.1)).pvalue > 0.01


def test_same_names_same_draws_other_names_other_draws():
    one, again = (generator("cal", 1, "directivity").uniform(size=50) for _ in range(2))
    np.testing.assert_array_equal(one, again)
    for names in (("cal", 2, "directivity"), ("cal1", "", "directivity"), ("ca", "l1directivity")):
        assert abs(np.corrcoef(one, generator(*names).uniform(size=50))[0, 1]) < 0.5


# --- noise ---------------------------------------------------------------------------------------


def noisy(points: int, level: float, seed: int) -> np.ndarray:
    """A trace that turns and fades, with complex noise of that standard deviation."""
    hz = np.linspace(1.5e6, 30e6, points)
    smooth = 0.9 / (1 + (hz / 20e6) ** 2) * np.exp(-2j * np.pi * hz * 20e-9)
    parts = np.random.default_rng(seed).normal(size=(2, points)) / np.sqrt(2)
    return np.asarray(smooth + level * (parts[0] + 1j * parts[1]))


@pytest.mark.parametrize("level", [1e-4, 1e-3, 1e-2])
@pytest.mark.parametrize("seed", range(3))
def test_noise_of_a_trace(level, seed):
    assert trace_noise_ratio(noisy(401, level, seed)) == pytest.approx(level, rel=0.2)


def test_noise_is_not_made_up_by_a_smooth_trace_nor_by_a_spike():
    assert trace_noise_ratio(noisy(401, 0, 0)) < 1e-6
    spiky = noisy(401, 1e-3, 0)
    spiky[200] += 0.5
    assert trace_noise_ratio(spiky) == pytest.approx(1e-3, rel=0.2)


def test_noise_of_few_points_is_not_known():
    assert trace_noise_ratio(noisy(24, 1e-3, 0)) is None
    assert trace_noise_ratio(noisy(25, 1e-3, 0)) is not None
