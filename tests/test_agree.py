"""Methods on one build against each other: agreement, and a likely cause where they differ."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from accuracy import BANDS
from simulation.bench import bench_sheet, known_build

from reportgen.model import Agreement, Build, BuildResult, Finding, Method, Setup, Severity
from reportgen.physics.agree import disagreement
from reportgen.physics.measure import measure_build


def measured(build: Build) -> BuildResult:
    with pytest.MonkeyPatch.context() as patch:
        patch.setattr("reportgen.physics.measure.DRAWS", 150)
        for name in ("find_budget", "find_advice"):
            patch.setattr(f"reportgen.physics.measure.{name}", lambda question: ())
        return measure_build(build, bench_sheet("bench"), BANDS)


def swept(**condition: object) -> Build:
    """A pair, and unit A in every way there is."""
    build = known_build(np.random.default_rng(1), everything=True, **condition).build
    kept = [
        one
        for one in build.measurements
        if one.entry.setup is not Setup.DIRECT and "C" not in (one.entry.units or ())
    ]
    return replace(build, measurements=tuple(kept))


@pytest.fixture(scope="module")
def fitted() -> BuildResult:
    return measured(swept())


@pytest.fixture(scope="module")
def stated() -> BuildResult:
    return measured(swept(stray_pf=0))


def disagreements(result: BuildResult) -> list[Finding]:
    return [one for one in result.findings if one.code == "methods-disagree"]


def agreement_of(result: BuildResult, method: Method) -> Agreement:
    (found,) = (one for one in result.agreements if one.method is method)
    return found


def test_methods_agree_with_the_stray_fitted(fitted):
    assert {one.agrees for one in fitted.agreements} == {True}
    assert disagreements(fitted) == []
    found = agreement_of(fitted, Method.SERIES_RESISTOR)
    assert (found.unit, found.against) == ("A", Method.TERMINATIONS)
    assert abs(found.difference_db) < 2 * found.u95_db


def test_fitted_strays_are_the_true_one(fitted):
    """The same stray sits at the load and at the series resistor."""
    strays_pf = {one.of: one.value for one in fitted.fitted}
    assert set(strays_pf) == {"loads.main", "loads.main, in series"}
    assert strays_pf["loads.main"] == pytest.approx(strays_pf["loads.main, in series"], abs=0.4)
    assert all(3 < value < 5 for value in strays_pf.values())


def test_a_wrong_stray_makes_methods_disagree_and_says_so(stated):
    found = agreement_of(stated, Method.BISECTION_LOAD)
    assert (found.against, found.agrees) == (Method.BISECTION, False)
    assert abs(found.difference_db) > 2 * found.u95_db
    (doubt,) = (one for one in disagreements(stated) if "bisection+load" in one.message)
    assert doubt.severity is Severity.WARNING
    assert "grows with frequency, as a stray capacitance" in doubt.message
    assert 'stray_pf = "fit"' in doubt.remedy


def test_the_series_resistor_disagrees_too(stated):
    """It is compared at the load that it would have had, were there no stray."""
    found = agreement_of(stated, Method.SERIES_RESISTOR)
    assert (found.against, found.agrees) == (Method.TERMINATIONS, False)


# --- causes --------------------------------------------------------------------------------------


def doubt_of(differences_db: list[float], method: Method = Method.BISECTION_LOAD) -> Finding:
    found = Agreement(
        method=method, unit=None, against=Method.BISECTION, agrees=False,
        band="0", difference_db=differences_db[0], u95_db=0.05,
    )  # fmt: skip
    draws = {str(i): np.full(9, value) for i, value in enumerate(differences_db)}
    return disagreement(found, draws)


@pytest.mark.parametrize(
    ("differences_db", "words"),
    [
        ([0.01, 0.05, 0.2, 0.4], "grows with frequency"),
        ([-0.05, -1.4, -2.2, -3.9], "grows with frequency"),
        ([0.4, 0.41, 0.39, 0.4], "much the same in all bands"),
        ([0.5, 0.3, 0.1, 0.05], "much the same in all bands"),
    ],
)
def test_cause_by_frequency(differences_db, words):
    assert words in doubt_of(differences_db).message


def test_pairs_that_disagree_are_not_laid_at_the_loads_door():
    doubt = doubt_of([0.4, 0.4], Method.THREE_PAIRS)
    assert "mixed up" in doubt.message
    assert doubt.remedy == "check the units of each sweep"
