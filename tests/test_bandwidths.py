"""Bandwidths on straight curves, whose crossings are known."""

import numpy as np
import pytest
from measurements import curves_of

from reportgen.model import Bandwidth, Limits
from reportgen.physics.bandwidths import find_bandwidths

HZ = np.array([1e6, 2e6, 3e6, 4e6, 5e6])


def reflection_of_swr(swr: list[float]) -> np.ndarray:
    values = np.array(swr)
    return ((values - 1) / (values + 1)) ** 2


def test_edges_are_interpolated_between_points():
    """SWR 4, 1.5, 1.5, 1.5, 3.5: 2 is crossed at 1.8 and at 4.25 MHz."""
    curves = curves_of(HZ, reflection=reflection_of_swr([4, 1.5, 1.5, 1.5, 3.5]))
    assert find_bandwidths(curves, Limits()) == (
        Bandwidth(
            criterion="swr <= 2",
            from_hz=pytest.approx(1.8e6),
            to_hz=pytest.approx(4.25e6),
            from_sweep_edge=False,
            to_sweep_edge=False,
        ),
    )


def test_range_that_ends_with_the_sweep_is_flagged():
    (found,) = find_bandwidths(curves_of(HZ, efficiency=0.9), Limits())
    assert found == Bandwidth(
        criterion="efficiency >= 80 %",
        from_hz=1e6,
        to_hz=5e6,
        from_sweep_edge=True,
        to_sweep_edge=True,
    )


def test_only_one_end_may_be_the_sweeps():
    (found,) = find_bandwidths(
        curves_of(HZ, efficiency=np.array([0.9, 0.9, 0.9, 0.7, 0.7])), Limits()
    )
    assert (found.from_sweep_edge, found.to_sweep_edge) == (True, False)
    assert found.to_hz == pytest.approx(3.5e6)


def test_every_contiguous_range_is_listed():
    swr = [1.5, 2.5, 1.5, 2.5, 1.5]
    found = find_bandwidths(curves_of(HZ, reflection=reflection_of_swr(swr)), Limits())
    edges = [(one.from_hz, one.to_hz) for one in found]
    np.testing.assert_allclose(edges, [(1e6, 1.5e6), (2.5e6, 3.5e6), (4.5e6, 5e6)])


def test_match_before_efficiency_each_with_its_limit():
    curves = curves_of(HZ, efficiency=0.9, reflection=reflection_of_swr([1.4] * 5))
    found = find_bandwidths(curves, Limits(swr=1.5, efficiency_percent=87.5))
    assert [one.criterion for one in found] == ["swr <= 1.5", "efficiency >= 87.5 %"]


def test_limit_itself_is_kept():
    curves = curves_of(HZ, efficiency=0.75)
    assert len(find_bandwidths(curves, Limits(efficiency_percent=75))) == 1
    assert find_bandwidths(curves, Limits(efficiency_percent=76)) == ()


def test_limit_of_zero_per_cent_is_a_limit():
    (found,) = find_bandwidths(curves_of(HZ, efficiency=0.1), Limits(efficiency_percent=0))
    assert found.criterion == "efficiency >= 0 %"


def test_total_reflection_beside_a_good_point_draws_no_line_to_infinity():
    curves = curves_of(HZ, reflection=np.array([1.0, 0.01, 0.01, 0.01, 1.2]))
    (found,) = find_bandwidths(curves, Limits())
    assert (found.from_hz, found.to_hz) == (2e6, 4e6)
    assert not found.from_sweep_edge
    assert not found.to_sweep_edge


def test_nothing_measured_nothing_listed():
    assert find_bandwidths(curves_of(HZ, halved=0.9), Limits()) == ()
    assert find_bandwidths(curves_of(HZ, reflection=0.9), Limits()) == ()
