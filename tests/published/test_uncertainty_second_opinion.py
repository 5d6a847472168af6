"""JCGM 100:2008 H.2 by the open library `uncertainties`, against our draws.

Inputs: the means, standard deviations and correlations that the guide prints (Tables H.2 to H.4),
as carried in the test suite of the Measurement Standards Laboratory of New Zealand's GTC. The
library propagates to first order, we by draws: two ways to the same figures.
"""

import numpy as np
import pytest
from uncertainties import correlated_values_norm, umath

from reportgen.physics.uncertainty import half_width

MEANS = (4.9990, 19.6610e-3, 1.04446)  # V, A, rad
DEVIATIONS = (0.0032, 0.0095e-3, 0.00075)
CORRELATIONS = np.array([[1, -0.36, 0.86], [-0.36, 1, -0.65], [0.86, -0.65, 1]])
PRINTED = {
    "resistance": (127.732, 0.071),
    "reactance": (219.847, 0.295),
    "impedance": (254.260, 0.236),
}


def both_ways() -> dict[str, tuple[object, np.ndarray]]:
    volts, amperes, phase = correlated_values_norm(
        list(zip(MEANS, DEVIATIONS, strict=True)), CORRELATIONS
    )
    covariance = CORRELATIONS * np.outer(DEVIATIONS, DEVIATIONS)
    v, i, phi = np.random.default_rng(2).multivariate_normal(MEANS, covariance, 200_000).T
    return {
        "resistance": (volts * umath.cos(phase) / amperes, v * np.cos(phi) / i),
        "reactance": (volts * umath.sin(phase) / amperes, v * np.sin(phi) / i),
        "impedance": (volts / amperes, v / i),
    }


@pytest.mark.parametrize("name", PRINTED)
def test_library_draws_and_guide_agree(name: str) -> None:
    library, draws = both_ways()[name]
    printed, deviation = PRINTED[name]
    assert library.nominal_value == pytest.approx(printed, abs=6e-4)
    assert np.mean(draws) == pytest.approx(library.nominal_value, abs=3e-3)
    assert half_width(draws) / 1.96 == pytest.approx(library.std_dev, rel=0.01)
    assert half_width(draws) / 1.96 == pytest.approx(deviation, rel=0.02)
