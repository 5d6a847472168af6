"""The mean of efficiency over several bands: how sure it is, from how the bands vary together.

Bands share most of what makes them uncertain, so their intervals must not be combined as if they
were independent: the covariance of the draws is kept, a few numbers for each build.

References
----------
.. [1] JCGM 100:2008, clause 5.2.2 (correlated input quantities), equation (13).
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from math import sqrt

import numpy as np

from reportgen.model import RealArray

COVERAGE = 1.96
"""Half of a 95 % interval over the standard deviation, of a normal distribution."""

Matrix = Sequence[Sequence[float]]


def efficiency_covariance(
    loss_draws_db: Mapping[str, RealArray],
) -> tuple[tuple[str, ...], RealArray] | None:
    """Covariance of the mean efficiencies of the bands, (B, B) [ratio squared], and their names.

    None where there are no draws. A draw without a value in some band counts in none.
    """
    if not loss_draws_db:
        return None
    ratio = 10 ** (-np.array(list(loss_draws_db.values())) / 10)
    known = ratio[:, np.isfinite(ratio).all(axis=0)]
    if known.shape[1] < 2:
        return None
    return tuple(loss_draws_db), np.atleast_2d(np.cov(known))


def half_width_over_bands(
    bands: Sequence[str], matrix: Matrix, names: Sequence[str]
) -> float | None:
    """Half of the 95 % interval of the mean over `names`, each counted once [ratio].

    None where the covariance of `bands` lacks one of them.
    """
    if not names or any(name not in bands for name in names):
        return None
    weight = np.array([1 / len(names) if band in names else 0.0 for band in bands])
    variance = float(weight @ np.asarray(matrix, dtype=float) @ weight)  # eq. (13) in [1]
    return COVERAGE * sqrt(max(variance, 0.0))
