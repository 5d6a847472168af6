"""Settings common to all tests."""

import os
from collections.abc import Iterator

import pytest
from hypothesis import settings

for name in ("OPENBLAS_NUM_THREADS", "OMP_NUM_THREADS", "MKL_NUM_THREADS"):
    os.environ.setdefault(name, "1")  # workers share the cores; before numpy is imported

settings.register_profile("suite", max_examples=50, deadline=None, derandomize=True)
settings.load_profile("suite")


@pytest.fixture(scope="module")
def few_draws() -> Iterator[None]:
    """Intervals from few draws: saves most of the time where no interval is checked."""
    with pytest.MonkeyPatch.context() as patch:
        patch.setattr("reportgen.physics.measure.DRAWS", 40)
        yield
