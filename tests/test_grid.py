"""The grid of a method: points of the coarsest sweep, marks of the bands, never a point outside."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from simulation.bench import sweep_of

from reportgen.errors import NotMeasurable
from reportgen.model import Band, Sweep
from reportgen.physics.grid import common_grid, resampled

BAND = Band(name="x", from_hz=7.05e6, to_hz=7.35e6)


def one_port(frequency_hz: np.ndarray, file: str = "a.s1p") -> Sweep:
    """A reflection whose real and imaginary part are straight lines over frequency."""
    return sweep_of(file, frequency_hz, (frequency_hz / 1e8 * (1 - 2j))[:, None, None])


def test_grid_of_one_sweep_is_its_points_and_the_marks_of_the_bands():
    grid = common_grid([one_port(np.array([7.0e6, 7.1e6, 7.2e6, 7.4e6]))], [BAND])
    assert grid.frequency_hz.tolist() == [7.0e6, 7.05e6, 7.1e6, 7.2e6, 7.35e6, 7.4e6]
    assert grid.native.tolist() == [True, False, True, True, False, True]


def test_marks_outside_the_sweep_are_left_out():
    grid = common_grid([one_port(np.array([7.1e6, 7.15e6, 7.3e6]))], [BAND])
    assert grid.frequency_hz.tolist() == [7.1e6, 7.15e6, 7.2e6, 7.3e6]
    assert grid.native.tolist() == [True, True, False, True]


def test_coarsest_sweep_within_the_common_range_counts():
    fine = one_port(np.linspace(5e6, 9e6, 401), "fine.s1p")
    coarse = one_port(np.array([1e6, 6e6, 8e6, 10e6]), "coarse.s1p")
    grid = common_grid([fine, coarse], [])
    assert grid.frequency_hz.tolist() == [5e6, 6e6, 8e6, 9e6]
    assert grid.native.tolist() == [False, True, True, False]


def test_sweeps_without_a_common_range():
    low, high = (
        one_port(np.array([1e6, 2e6]), "low.s1p"),
        one_port(np.array([3e6, 4e6]), "high.s1p"),
    )
    with pytest.raises(NotMeasurable) as raised:
        common_grid([low, high], [BAND])
    assert str(raised.value) == (
        "the sweeps low.s1p, high.s1p have less than two frequencies in common"
    )


def test_sweep_of_one_point():
    with pytest.raises(NotMeasurable) as raised:
        common_grid([one_port(np.array([7.1e6]))], [BAND])
    assert str(raised.value) == "the sweep a.s1p has less than two frequencies"


@given(
    st.lists(
        st.lists(st.integers(1, 60), min_size=2, max_size=20, unique=True), min_size=1, max_size=3
    )
)
def test_grid_ascends_and_stays_within_every_sweep(megahertz):
    sweeps = [one_port(np.array(sorted(points)) * 1e6) for points in megahertz]
    low = max(sweep.frequency_hz[0] for sweep in sweeps)
    high = min(sweep.frequency_hz[-1] for sweep in sweeps)
    try:
        grid = common_grid(sweeps, [BAND])
    except NotMeasurable:
        return
    assert np.all(np.diff(grid.frequency_hz) > 0)
    assert (grid.frequency_hz[0], grid.frequency_hz[-1]) == (low, high)
    swept = [set(sweep.frequency_hz.tolist()) for sweep in sweeps]
    assert any(set(grid.frequency_hz[grid.native].tolist()) <= points for points in swept)


def test_interpolation_is_linear_in_the_complex_plane():
    """A reflection that turns by 90 degrees is, half way, on the chord and not on the arc."""
    sweep = sweep_of("a.s1p", np.array([1e6, 2e6]), np.array([1.0, 1j])[:, None, None])
    assert resampled(sweep, np.array([1.5e6]))[0, 0, 0] == pytest.approx(0.5 + 0.5j)


def test_each_port_is_interpolated_by_itself():
    values = np.arange(8).reshape(2, 2, 2) * (1 + 1j)
    sweep = sweep_of("a.s2p", np.array([1e6, 3e6]), values)
    found = resampled(sweep, np.array([1e6, 2e6, 3e6]))
    assert found.shape == (2, 2, 3)
    np.testing.assert_allclose(found[1, 0], [2 + 2j, 4 + 4j, 6 + 6j])
    np.testing.assert_allclose(found[0, 1], [1 + 1j, 3 + 3j, 5 + 5j])


def test_points_that_were_swept_come_back_as_they_are():
    sweep = one_port(np.linspace(1e6, 30e6, 57))
    np.testing.assert_array_equal(resampled(sweep, sweep.frequency_hz)[0, 0], sweep.s[:, 0, 0])
