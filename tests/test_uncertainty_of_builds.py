"""Whether the intervals of a seeded population hold the truth, and how wide they are.

The small run: few builds, few draws. `python tests/accuracy.py 200` is the large one.
"""

from __future__ import annotations

import numpy as np
import pytest
from accuracy import BANDS, Case, cases_of, errors_db
from simulation.bench import known_build

from reportgen.model import Method

METHODS = (Method.BISECTION, Method.BISECTION_LOAD)
DRAWS = 150


def population(builds: int, grade: str, *, one_path: bool) -> dict[Method, list[Case]]:
    """Pairs, both units with a load."""
    found: dict[Method, list[Case]] = {method: [] for method in METHODS}
    with pytest.MonkeyPatch.context() as patch:
        patch.setattr("reportgen.physics.measure.DRAWS", DRAWS)
        for name in ("find_budget", "find_advice"):
            patch.setattr(f"reportgen.physics.measure.{name}", lambda question: ())
        for seed in range(builds):
            rng = np.random.default_rng(seed)
            for case in cases_of(known_build(rng, grade=grade, one_path=one_path), grade):
                found.get(case.method, []).append(case)
    return found


CONDITIONS = {
    "bench": ("bench", False, 12, 0.05, 0.05),
    "handheld": ("handheld", False, 8, 0.08, 0.10),
    "handheld, one path": ("handheld", True, 8, 0.08, 0.10),
}
"""Grade, one path or both, builds, and what median u95 and 95 % of the errors keep to [dB]."""


@pytest.mark.parametrize("condition", CONDITIONS.values(), ids=CONDITIONS)
def test_population(condition):
    """Bands of a build err together, so the share held of few builds lies about 95 % loosely."""
    grade, one_path, builds, u95_limit_db, error_limit_db = condition
    for cases in population(builds, grade, one_path=one_path).values():
        assert len(cases) == builds * len(BANDS)
        assert 0.88 <= np.mean([case.held for case in cases]) <= 1.0
        assert 0 < np.median([case.u95_db for case in cases]) < u95_limit_db
        assert np.percentile(np.abs(errors_db(cases)), 95) < error_limit_db
