"""What makes a figure uncertain, and what a further sweep would do about it."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from accuracy import BANDS
from simulation.bench import bench_sheet, known_build

from reportgen.model import BuildResult, Calibration, MethodResult
from reportgen.physics.budget import Question, find_budget
from reportgen.physics.drawn import Contribution
from reportgen.physics.measure import measure_build
from reportgen.physics.plans import find_plans
from reportgen.physics.solve import bands_with_loss


def measured(seed: int, grade: str = "bench", **condition: object) -> BuildResult:
    with pytest.MonkeyPatch.context() as patch:
        patch.setattr("reportgen.physics.measure.DRAWS", 300)
        build = known_build(np.random.default_rng(seed), grade=grade, **condition).build
        return measure_build(build, bench_sheet(grade), BANDS)


def u95_db(method: MethodResult) -> dict[str, float]:
    found = {band.band.name: band.figures["heat_loss_db"] for band in bands_with_loss(method.bands)}
    return {name: (figure.high95 - figure.low95) / 2 for name, figure in found.items()}


@pytest.fixture(scope="module")
def pair() -> BuildResult:
    return measured(3)


# --- budget --------------------------------------------------------------------------------------


def test_largest_first_and_each_once(pair):
    means = [np.mean(list(line.u95_db.values())) for line in pair.budget]
    assert means == sorted(means, reverse=True)
    assert means[-1] > 0.1 * means[0]
    names = [line.contribution for line in pair.budget]
    assert len(set(names)) == len(names) >= 4
    assert set(names) <= {one.value for one in Contribution}


def test_squares_of_the_parts_sum_to_the_square_of_all(pair):
    """Mean over the bands: the parts are independent, the figure nearly linear in them."""
    parts = {
        name: sum(line.u95_db[name] ** 2 for line in pair.budget) for name in pair.budget[0].u95_db
    }
    whole = u95_db(pair.chosen)
    assert np.mean([parts[name] / whole[name] ** 2 for name in parts]) == pytest.approx(1, abs=0.25)


def test_a_worse_directivity_shows_in_its_line_alone(pair):
    plans = tuple(plan for plan in find_plans(pair.build)[0] if plan.method is pair.chosen.method)

    def lines(**limits: float) -> dict[str, float]:
        question = Question(
            build=pair.build,
            calibrations={"cal": Calibration(grade="bench", **limits)},
            plans=plans,
            bands=tuple(bands_with_loss(pair.chosen.bands))[3:4],
        )
        return {line.contribution: line.u95_db["40 m"] for line in find_budget(question)}

    as_assumed, worse = lines(), lines(directivity_db=40.0)
    assert worse["directivity"] == pytest.approx(2 * as_assumed["directivity"], rel=0.1)
    assert worse["load match"] == pytest.approx(as_assumed["load match"])


# --- advice --------------------------------------------------------------------------------------


@pytest.fixture(scope="module")
def one_path() -> BuildResult:
    return measured(1, "handheld", loads=False, one_path=True)


def test_advice_for_a_one_path_pair_without_loads(one_path):
    assert one_path.advice
    words = [one.sweep for one in one_path.advice]
    assert "a load sweep of unit A and of unit B" in words
    gains = [one.u95_then_db / one.u95_db for one in one_path.advice]
    assert gains == sorted(gains)
    assert gains[-1] < 0.8


def test_what_was_predicted_is_what_the_real_sweep_gives(one_path):
    """The same pair with real load sweeps besides."""
    (predicted,) = (one for one in one_path.advice if one.sweep.startswith("a load sweep"))
    real = measured(1, "handheld", one_path=True)
    (loaded,) = (one for one in real.methods if one.method == "bisection+load")
    assert predicted.u95_db == pytest.approx(u95_db(one_path.chosen)[predicted.band], rel=0.2)
    assert predicted.u95_then_db == pytest.approx(u95_db(loaded)[predicted.band], rel=0.35)


def test_no_advice_where_nothing_would_help_much():
    known = known_build(np.random.default_rng(0)).build
    result = measure_build(replace(known), bench_sheet("bench"), BANDS[3:4])
    assert result.advice == ()
