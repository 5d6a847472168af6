"""Figures of a band: closed forms on straight curves, and the exact words where data are thin."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from measurements import curves_of

from reportgen.model import Band, BandResult, Curves, Figure, MeasuredBand, NotMeasured
from reportgen.physics.bands import in_bands, mean_ratio

BAND = Band(name="x", from_hz=7.0e6, to_hz=7.3e6)
SIXTY = Band(name="60 m", from_hz=5351.5e3, to_hz=5366.5e3)


def only(curves: Curves, band: Band = BAND, power_w: float = 100.0) -> BandResult:
    (result,) = in_bands(curves, [band], power_w)
    return result


def measured(curves: Curves, band: Band = BAND, power_w: float = 100.0) -> MeasuredBand:
    result = only(curves, band, power_w)
    assert isinstance(result, MeasuredBand)
    return result


def reason_of(curves: Curves, band: Band = BAND) -> str:
    result = only(curves, band)
    assert isinstance(result, NotMeasured)
    return result.reason


def straight(hz: np.ndarray, at_seven: float, per_mhz: float) -> np.ndarray:
    return at_seven + per_mhz * (hz - 7e6) / 1e6


def grid_hz(low: float = 6.8e6, high: float = 7.5e6) -> np.ndarray:
    """Every 25 kHz, which holds the edges and the centre of the band."""
    return np.arange(low, high + 1, 25e3)


# --- mean, worst, centre -------------------------------------------------------------------------


def test_efficiency_that_falls_in_a_straight_line():
    """From 0.9 to 0.78 in the band: mean and centre 0.84, worst at the upper edge."""
    figures = measured(curves_of(grid_hz(), straight(grid_hz(), 0.9, -0.4))).figures
    assert figures["efficiency_ratio"] == Figure(
        mean=pytest.approx(0.84),
        worst=pytest.approx(0.78),
        centre=pytest.approx(0.84),
        worst_at_hz=7.3e6,
    )
    loss = figures["heat_loss_db"]
    assert loss.mean == pytest.approx(-10 * np.log10(0.84))
    assert loss.worst == pytest.approx(-10 * np.log10(0.78))
    assert loss.worst_at_hz == 7.3e6
    assert figures["heat_w"].mean == pytest.approx(16)
    assert figures["heat_w"].worst == pytest.approx(22)


def test_mean_loss_is_that_of_the_mean_ratio_and_not_the_mean_of_decibels():
    hz = grid_hz()
    found = measured(curves_of(hz, straight(hz, 0.9, -2.0))).figures["heat_loss_db"].mean
    inside = (hz >= 7e6) & (hz <= 7.3e6)
    decibels = -10 * np.log10(straight(hz[inside], 0.9, -2.0))
    assert found == pytest.approx(-10 * np.log10(0.6))
    assert abs(found - decibels.mean()) > 0.05


def test_worst_match_is_the_highest_swr_and_the_lowest_return_loss():
    hz = grid_hz()
    figures = measured(curves_of(hz, reflection=straight(hz, 0.1, -0.3))).figures
    assert figures["swr"].worst_at_hz == figures["return_loss_db"].worst_at_hz == 7.0e6
    assert figures["return_loss_db"].worst == pytest.approx(10)
    assert figures["return_loss_db"].mean == pytest.approx(-10 * np.log10(0.055))
    rho = np.sqrt(0.1)
    assert figures["swr"].worst == pytest.approx((1 + rho) / (1 - rho))


def test_rated_power_only_scales_the_heat():
    hz = grid_hz()
    curves = curves_of(hz, straight(hz, 0.9, -0.4), 0.01)
    small, large = (measured(curves, power_w=power_w).figures for power_w in (10.0, 1000.0))
    assert large["heat_w"].mean == pytest.approx(100 * small["heat_w"].mean)
    assert {key: figure for key, figure in small.items() if key != "heat_w"} == {
        key: figure for key, figure in large.items() if key != "heat_w"
    }


def test_points_outside_the_band_do_not_count():
    hz = grid_hz()
    ratio = np.where((hz >= 7e6) & (hz <= 7.3e6), 0.8, 0.1)
    assert measured(curves_of(hz, ratio)).figures["efficiency_ratio"].mean == pytest.approx(0.8)


def test_uneven_points_are_weighted_by_frequency():
    """Many points crowd at the low end, where it is bad; the trapezoid rule does not mind."""
    hz = np.concatenate([np.linspace(7.0e6, 7.1e6, 101), [7.2e6, 7.3e6]])
    found = measured(curves_of(hz, straight(hz, 0.5, 1.0))).figures["efficiency_ratio"].mean
    assert found == pytest.approx(0.65)


def test_perfect_match_has_no_return_loss_in_decibels():
    figure = measured(curves_of(grid_hz(), reflection=0.0)).figures["return_loss_db"]
    assert (figure.mean, figure.worst, figure.centre) == (None, None, None)


def test_quantities_that_were_not_measured_are_not_there():
    figures = measured(curves_of(grid_hz(), reflection=0.1)).figures
    assert set(figures) == {"mismatch_loss_db", "return_loss_db", "swr"}


# --- the mean ------------------------------------------------------------------------------------


@given(
    st.lists(st.integers(1, 10_000), min_size=2, max_size=30, unique=True),
    st.floats(-1, 1),
    st.floats(-1, 1),
)
def test_trapezoid_mean_of_a_straight_line_is_its_middle(steps, start, slope):
    hz = np.array(sorted(steps), dtype=float)
    wanted = start + slope * (hz[0] + hz[-1]) / 2
    assert mean_ratio(hz, start + slope * hz) == pytest.approx(wanted, rel=1e-9, abs=1e-9)


def test_trapezoid_mean_of_a_parabola_and_of_draws():
    """x^2 from 0 to 1 has the mean 1/3; with 1000 steps the rule is 1.7e-7 too high."""
    x = np.linspace(0, 1, 1001)
    draws = np.stack([x**2, 2 * x**2])
    assert mean_ratio(x, draws) == pytest.approx([1 / 3, 2 / 3], abs=4e-7)
    assert mean_ratio(x, x**2) - 1 / 3 == pytest.approx(1 / 6e6, rel=1e-3)


# --- words ---------------------------------------------------------------------------------------


def test_whole_band_with_many_points_needs_no_words():
    result = measured(curves_of(grid_hz(), 0.8))
    assert result.reason is None
    assert not result.partial
    assert not result.interpolated
    assert (result.points, result.covered_hz) == (13, (7.0e6, 7.3e6))


def test_partial_band():
    hz = grid_hz(low=7.1e6)
    result = measured(curves_of(hz, straight(hz, 0.9, -0.4)))
    assert result.partial
    assert result.covered_hz == (7.1e6, 7.3e6)
    assert result.reason == "covers 7.1 to 7.3 MHz of 7 to 7.3 MHz"
    assert result.figures["efficiency_ratio"].mean == pytest.approx(0.82)
    assert result.figures["efficiency_ratio"].centre == pytest.approx(0.84)


def test_partial_band_without_its_centre():
    result = measured(curves_of(grid_hz(low=7.2e6), 0.9))
    assert result.figures["efficiency_ratio"].centre is None
    assert result.figures["efficiency_ratio"].mean == pytest.approx(0.9)


def sixty_metres(swept_hz: list[float]) -> Curves:
    """A coarse sweep, the marks of the narrow band added to it."""
    marks = [SIXTY.from_hz, SIXTY.centre_hz, SIXTY.to_hz]
    hz = np.array(sorted({*swept_hz, *marks}))
    return curves_of(hz, straight(hz, 0.9, 0.05), native=np.isin(hz, swept_hz))


@pytest.mark.parametrize(
    ("swept_hz", "points", "reason"),
    [
        ([5.3e6, 5.4e6], 0, "no swept point inside, interpolated"),
        ([5.3e6, 5.36e6, 5.4e6], 1, "1 swept point inside, interpolated"),
        ([5.3e6, 5.355e6, 5.36e6, 5.4e6], 2, "2 swept points inside, interpolated"),
        (
            [5.3e6, 5.352e6, 5.355e6, 5.36e6, 5.365e6, 5.4e6],
            4,
            "4 swept points inside, interpolated",
        ),
    ],
)
def test_narrow_band_with_few_points(swept_hz, points, reason):
    result = measured(sixty_metres(swept_hz), SIXTY)
    assert result.interpolated
    assert (result.points, result.reason) == (points, reason)
    wanted = 0.9 + 0.05 * (SIXTY.centre_hz - 7e6) / 1e6
    assert result.figures["efficiency_ratio"].mean == pytest.approx(wanted)


def test_five_points_are_enough():
    swept = [5.3e6, 5.352e6, 5.355e6, 5.358e6, 5.36e6, 5.365e6, 5.4e6]
    result = measured(sixty_metres(swept), SIXTY)
    assert not result.interpolated
    assert (result.points, result.reason) == (5, None)


def test_partial_and_interpolated_are_both_said():
    hz = np.array([7.2e6, 7.25e6, 7.3e6, 7.4e6])
    assert measured(curves_of(hz, 0.9)).reason == (
        "covers 7.2 to 7.3 MHz of 7 to 7.3 MHz; 3 swept points inside, interpolated"
    )


def test_points_too_far_apart():
    hz = np.array([6.0e6, 7.0e6, 7.15e6, 7.3e6, 9.0e6])
    curves = curves_of(hz, 0.9, native=np.array([True, False, False, False, True]))
    assert reason_of(curves) == "not enough points: neighbouring ones are 3 MHz apart"


def test_a_gap_of_a_tenth_of_the_centre_is_still_bridged():
    marks = [7.0e6, 7.15e6, 7.3e6]
    for width, bridged in ((0.714e6, True), (0.716e6, False)):
        hz = np.array([6.9e6, *marks, 6.9e6 + width])
        curves = curves_of(hz, 0.9, native=np.array([True, False, False, False, True]))
        assert isinstance(only(curves), MeasuredBand) == bridged


@pytest.mark.parametrize(
    ("low", "high", "reason"),
    [
        (1.5e6, 6.9e6, "not covered: the sweep runs from 1.5 to 6.9 MHz"),
        (7.3e6, 30e6, "not covered: the sweep runs from 7.3 to 30 MHz"),
        (10.0125e6, 30e6, "not covered: the sweep runs from 10.0125 to 30 MHz"),
    ],
)
def test_band_that_the_sweep_does_not_cover(low, high, reason):
    assert reason_of(curves_of(np.linspace(low, high, 200), 0.9)) == reason


def test_bands_keep_their_order():
    curves = curves_of(grid_hz(), 0.9)
    assert [one.band for one in in_bands(curves, [BAND, SIXTY], 100.0)] == [BAND, SIXTY]
