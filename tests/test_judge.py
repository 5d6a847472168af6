"""Figures against limits: the interval is the guard band (JCGM 106:2012, clause 8.3)."""

from __future__ import annotations

import pytest

from reportgen.model import (
    Band,
    BenchSheet,
    Figure,
    Judgement,
    LimitResult,
    Limits,
    MeasuredBand,
    NotMeasured,
)
from reportgen.physics.judge import judge, overall

FORTY = Band(name="40 m", from_hz=7.0e6, to_hz=7.3e6)


def band_with(key: str, worst: float | None, low: float | None, high: float | None) -> MeasuredBand:
    figure = Figure(
        mean=worst, worst=worst, centre=worst, worst_at_hz=7e6, worst_low95=low, worst_high95=high
    )
    return MeasuredBand(
        band=FORTY, covered_hz=(7.0e6, 7.3e6), points=9, interpolated=False, figures={key: figure}
    )


def judged(one: MeasuredBand | NotMeasured, **limits: Limits) -> LimitResult:
    (found,) = judge([one], BenchSheet(limits=limits))
    return found


@pytest.mark.parametrize(
    ("low", "high", "judgement"),
    [
        (1.8, 2.0, Judgement.PASS),
        (1.8, 2.01, Judgement.UNDECIDED),
        (1.99, 2.4, Judgement.UNDECIDED),
        (2.01, 2.4, Judgement.FAIL),
        (1.8, None, Judgement.UNDECIDED),
        (2.1, None, Judgement.FAIL),
        (None, None, Judgement.UNDECIDED),
    ],
)
def test_swr_keeps_below_its_limit(low, high, judgement):
    found = judged(band_with("swr", 1.95, low, high), all=Limits(swr=2.0))
    assert found.judgement is judgement
    assert (found.band, found.quantity, found.limit) == ("40 m", "swr", 2.0)
    assert (found.value, found.low95, found.high95) == (1.95, low, high)


@pytest.mark.parametrize(
    ("low", "high", "judgement"),
    [
        (0.80, 0.84, Judgement.PASS),
        (0.79, 0.84, Judgement.UNDECIDED),
        (0.75, 0.80, Judgement.UNDECIDED),
        (0.75, 0.79, Judgement.FAIL),
    ],
)
def test_efficiency_keeps_above_its_limit(low, high, judgement):
    found = judged(band_with("efficiency_ratio", 0.8, low, high), all=Limits(efficiency_percent=80))
    assert (found.judgement, found.limit) == (judgement, 0.8)


def test_a_band_of_its_own_goes_before_all_by_quantity():
    one = band_with("swr", 1.7, 1.6, 1.8)
    limits = {"all": Limits(swr=2.0, efficiency_percent=80), "40 m": Limits(swr=1.5)}
    swr, efficiency = judge([one], BenchSheet(limits=limits))
    assert (swr.limit, swr.judgement) == (1.5, Judgement.FAIL)
    assert (efficiency.limit, efficiency.judgement) == (0.8, Judgement.NOT_MEASURED)


def test_another_bands_limit_is_not_asked_of_this_one():
    bench = BenchSheet(limits={"20 m": Limits(swr=1.5)})
    assert judge([band_with("swr", 1.7, 1.6, 1.8)], bench) == ()


def test_a_band_without_figures_is_not_measured():
    found = judged(NotMeasured(band=FORTY, reason="not covered"), all=Limits(swr=2.0))
    assert (found.judgement, found.value) == (Judgement.NOT_MEASURED, None)


def results(*judgements: Judgement) -> list[LimitResult]:
    return [
        LimitResult(
            band="40 m", quantity="swr", limit=2, value=1, low95=1, high95=1, judgement=judgement
        )
        for judgement in judgements
    ]


@pytest.mark.parametrize(
    ("found", "whole"),
    [
        ((), None),
        ((Judgement.NOT_MEASURED,), None),
        ((Judgement.PASS, Judgement.NOT_MEASURED), Judgement.PASS),
        ((Judgement.PASS, Judgement.UNDECIDED), Judgement.UNDECIDED),
        ((Judgement.PASS, Judgement.UNDECIDED, Judgement.FAIL), Judgement.FAIL),
    ],
)
def test_build_as_a_whole(found, whole):
    assert overall(results(*found)) is whole
