"""A build against the baseline: nothing against itself, mirrored each way, or a reason."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from measurements import build_of, curves_of, sheet_of

from reportgen.model import Band, BandComparison, BuildResult, Method, MethodResult, Verdict
from reportgen.physics.bands import in_bands
from reportgen.physics.compare import compare

FORTY = Band(name="40 m", from_hz=7.0e6, to_hz=7.3e6)
TWENTY = Band(name="20 m", from_hz=14.0e6, to_hz=14.35e6)
BANDS = (FORTY, TWENTY)


def result_of(
    efficiency: float | None,
    *,
    power_w: float = 100.0,
    low_hz: float = 5e6,
    high_hz: float = 20e6,
    bands: tuple[Band, ...] = BANDS,
    key: str = "alder",
) -> BuildResult:
    """A build of flat efficiency, every 50 kHz."""
    curves = curves_of(np.arange(low_hz, high_hz + 1, 50e3), efficiency, 0.01)
    method = MethodResult(
        method=Method.BISECTION if efficiency is not None else Method.LOAD_ONLY,
        unit=None,
        units=("A", "B"),
        load_ohm=2450.0,
        curves=curves,
        bands=in_bands(curves, bands, power_w),
    )
    return BuildResult(
        build=build_of(sheet_of(2, 14), [], key),
        power_w=power_w,
        chosen=method,
        units=(),
        methods=(method,),
        bandwidths=(),
        fitted=(),
        findings=(),
    )


def by_band(result: BuildResult, baseline: BuildResult) -> dict[str, BandComparison]:
    return {one.band: one for one in compare(result, baseline).bands}


def test_a_build_against_itself_is_nothing_everywhere():
    result = result_of(0.83)
    found = compare(result, result)
    assert (found.key, found.name) == ("alder", "Simulated")
    assert [one.band for one in found.bands] == ["40 m", "20 m"]
    for one in found.bands:
        assert (one.heat_loss_db, one.heat_w, one.reason) == (0, 0, None)


def test_difference_is_this_build_minus_the_baseline():
    """0.9 against 0.8: 0.5115 dB less loss and 10 W less heat at 100 W."""
    one = by_band(result_of(0.9), result_of(0.8))["40 m"]
    assert one.heat_loss_db == pytest.approx(-0.5115, abs=5e-5)
    assert one.heat_w == pytest.approx(-10)


def test_heat_is_at_this_builds_power():
    one = by_band(result_of(0.9, power_w=50), result_of(0.8, power_w=1000))["40 m"]
    assert one.heat_w == pytest.approx(-5)


@given(st.floats(0.05, 1), st.floats(0.05, 1))
def test_each_against_the_other_mirrors(one, other):
    forth = by_band(result_of(one), result_of(other))["40 m"]
    back = by_band(result_of(other), result_of(one))["40 m"]
    assert forth.heat_loss_db == pytest.approx(-back.heat_loss_db, abs=1e-12)
    assert forth.heat_w == pytest.approx(-back.heat_w, abs=1e-9)


# --- verdicts ------------------------------------------------------------------------------------


def judged(ours_db: np.ndarray, theirs_db: np.ndarray) -> BandComparison:
    ours, theirs = (
        replace(result_of(10 ** (-float(np.median(draws)) / 10)), loss_draws_db={"40 m": draws})
        for draws in (ours_db, theirs_db)
    )
    return by_band(ours, theirs)["40 m"]


DRAWS_DB = np.random.default_rng(1).normal(0.5, 0.1, 4000)
OTHER_DB = np.random.default_rng(2).normal(0.5, 0.1, 4000)


def test_a_build_against_itself_is_the_same_with_nothing_in_doubt():
    one = judged(DRAWS_DB, DRAWS_DB)
    assert (one.verdict, one.heat_loss_db, one.heat_loss_u95_db) == (Verdict.SAME, 0, 0)


@pytest.mark.parametrize(
    ("more_db", "verdict"),
    [(0.3, Verdict.WORSE), (0.25, Verdict.SAME), (-0.25, Verdict.SAME), (-0.3, Verdict.BETTER)],
)
def test_verdict_where_the_interval_of_the_difference_leaves_zero(more_db, verdict):
    """Two independent losses, 0.1 dB each: the difference is known to 1.96 sqrt(2) 0.1 = 0.277."""
    one = judged(OTHER_DB + more_db, DRAWS_DB)
    assert one.verdict is verdict
    assert one.heat_loss_u95_db == pytest.approx(0.277, rel=0.04)


def test_what_both_builds_share_does_not_hide_a_difference():
    """Common draws cancel: 0.02 dB between two losses of 0.1 dB each."""
    assert judged(DRAWS_DB + 0.02, DRAWS_DB).verdict is Verdict.WORSE
    assert judged(DRAWS_DB, DRAWS_DB + 0.02).verdict is Verdict.BETTER


def test_without_draws_there_is_no_verdict():
    one = by_band(result_of(0.9), result_of(0.8))["40 m"]
    assert (one.verdict, one.heat_loss_u95_db) == (None, None)


# --- reasons -------------------------------------------------------------------------------------


def without(one: BandComparison) -> tuple[Verdict | None, str | None]:
    assert one.heat_loss_db is None
    assert one.heat_w is None
    assert one.heat_loss_u95_db is None
    return one.verdict, one.reason


@pytest.mark.parametrize(
    ("result", "baseline", "verdict", "reason"),
    [
        (
            result_of(0.9, high_hz=10e6),
            result_of(0.8),
            Verdict.NOT_MEASURED,
            "this build was not measured there",
        ),
        (
            result_of(0.9),
            result_of(0.8, high_hz=10e6),
            Verdict.NOT_MEASURED,
            "the baseline was not measured there",
        ),
        (
            result_of(0.9),
            result_of(0.8, bands=(FORTY,)),
            Verdict.NOT_MEASURED,
            "the baseline was not measured there",
        ),
        (
            result_of(0.9, high_hz=14.2e6),
            result_of(0.8),
            Verdict.NOT_COMPARABLE,
            "the two sweeps cover different parts of the band",
        ),
        (
            result_of(None),
            result_of(0.8),
            Verdict.NOT_COMPARABLE,
            "the loss of this build was not measured",
        ),
        (
            result_of(0.9),
            result_of(None),
            Verdict.NOT_COMPARABLE,
            "the loss of the baseline was not measured",
        ),
    ],
    ids=["ours", "theirs", "not asked", "partial", "our loss", "their loss"],
)
def test_what_cannot_be_compared_says_why(result, baseline, verdict, reason):
    assert without(by_band(result, baseline)["20 m"]) == (verdict, reason)


def test_the_same_part_of_a_band_is_compared():
    found = by_band(result_of(0.9, high_hz=14.2e6), result_of(0.8, high_hz=14.2e6))
    assert found["20 m"].heat_loss_db == pytest.approx(-0.5115, abs=5e-5)


def test_bands_that_only_the_baseline_has_do_not_appear():
    assert set(by_band(result_of(0.9, bands=(TWENTY,)), result_of(0.8))) == {"20 m"}


def test_efficiency_without_a_loss_in_decibels_is_not_comparable():
    """A mean efficiency below nothing has no loss in decibels."""
    verdict, reason = without(by_band(result_of(-0.1), result_of(0.8))["40 m"])
    assert verdict is Verdict.NOT_COMPARABLE
    assert reason == "the loss of this build was not measured"
