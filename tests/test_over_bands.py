"""The mean over bands: closed forms of its interval."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from sure_samples import sure

from reportgen.model import BuildResult
from reportgen.pages.summary import covariance_of, interval_over_bands, mean_over_bands
from reportgen.physics.over_bands import efficiency_covariance, half_width_over_bands
from reportgen.physics.uncertainty import interval

BANDS = ("160 m", "80 m", "40 m", "20 m")


def test_bands_that_err_together_are_no_surer_than_one() -> None:
    """JCGM 100:2008, 5.2.2, note 1: with all correlations 1, standard uncertainties add."""
    matrix = np.full((4, 4), 1e-4)
    assert half_width_over_bands(BANDS, matrix, BANDS) == pytest.approx(1.96e-2)
    assert half_width_over_bands(BANDS, matrix, BANDS[:1]) == pytest.approx(1.96e-2)


def test_independent_bands_average_out() -> None:
    """JCGM 100:2008, 5.1.2, equation (10): the mean of four has half of their uncertainty."""
    assert half_width_over_bands(BANDS, 1e-4 * np.eye(4), BANDS) == pytest.approx(0.98e-2)


def test_a_band_that_is_not_known_leaves_the_mean_unknown() -> None:
    assert half_width_over_bands(BANDS, np.eye(4), ("40 m", "6 m")) is None
    assert half_width_over_bands(BANDS, np.eye(4), ()) is None
    assert efficiency_covariance({}) is None


def test_a_draw_without_a_value_does_not_count() -> None:
    draws = {"a": np.array([0.1, np.nan, 0.3, 0.2]), "b": np.array([0.2, 0.2, np.inf, 0.1])}
    names, matrix = efficiency_covariance(draws)
    kept = [[10 ** (-x / 10) for x in one] for one in ([0.1, 0.3, 0.2], [0.2, np.inf, 0.1])]
    assert names == ("a", "b")
    np.testing.assert_allclose(matrix, np.cov(kept))


def with_draws(result: BuildResult) -> BuildResult:
    """Draws of which half is common to all bands."""
    random = np.random.default_rng(5)
    common = random.normal(0, 0.01, 4000)
    draws = {
        name: one.mean() + common + random.normal(0, 0.01, 4000)
        for name, one in result.loss_draws_db.items()
    }
    return replace(result, loss_draws_db=draws)


@pytest.mark.parametrize("names", [None, ("40 m",), ("80 m", "40 m", "20 m")])
@pytest.mark.parametrize("key", ["efficiency_ratio", "heat_loss_db", "heat_w"])
def test_the_interval_is_that_of_the_draws(key: str, names) -> None:
    """Against the quantiles of the draws themselves, which the index does not have."""
    result = with_draws(sure())
    wanted = names or tuple(result.loss_draws_db)
    ratio = np.mean([10 ** (-result.loss_draws_db[name] / 10) for name in wanted], axis=0)
    low, high = interval_over_bands(
        result.chosen, covariance_of(result), key, result.power_w, names
    )
    mean = mean_over_bands(result.chosen, key, result.power_w, names)
    assert low < mean < high
    drawn = interval(ratio)
    width = {"efficiency_ratio": drawn[1] - drawn[0], "heat_w": 60 * (drawn[1] - drawn[0])}
    width["heat_loss_db"] = 10 * np.log10(drawn[1] / drawn[0])
    assert high - low == pytest.approx(width[key], rel=0.04)
