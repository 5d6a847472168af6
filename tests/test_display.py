"""Rounding is meaning: the one function that turns numbers into text."""

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from reportgen.pages.display import (
    DASH,
    MINUS,
    aligned,
    bandwidth_range,
    entered,
    interval,
    megahertz_range,
    no_more_than,
    number,
    one_sided,
    plus_minus,
    quantity_number,
)
from reportgen.physics.quantities import BY_KEY

FINITE = st.floats(-1e6, 1e6, allow_nan=False)


def parsed(text: str) -> float:
    return float(text.replace(MINUS, "-").lstrip("<>\u00a0").replace(",", "."))


@given(value=FINITE, limit=FINITE, decimals=st.integers(0, 3))
def test_rounding_never_crosses_a_limit(value: float, limit: float, decimals: int) -> None:
    text = number(value, decimals, limits=[limit], marks=[])
    shown = parsed(text)
    assert (shown > limit) - (shown < limit) == (value > limit) - (value < limit)


@given(value=FINITE, limit=FINITE, u95=st.floats(1e-4, 1e3))
def test_digits_of_the_uncertainty_cross_no_limit_either(
    value: float, limit: float, u95: float
) -> None:
    shown = parsed(number(value, 1, u95=u95, limits=[limit], marks=[]))
    assert (shown > limit) - (shown < limit) == (value > limit) - (value < limit)


@given(value=st.floats(-1e4, 1e4), decimals=st.integers(0, 4))
def test_rounding_moves_a_figure_by_less_than_one_unit_of_the_last_place(
    value: float, decimals: int
) -> None:
    assert abs(parsed(number(value, decimals, marks=[])) - value) <= 0.500001 * 10.0**-decimals


@pytest.mark.parametrize(
    ("value", "decimals", "limit", "text"),
    [
        (9.96, 1, 10.0, "9.9"),
        (10.04, 0, 10.0, "11"),
        (10.0, 1, 10.0, "10.0"),
        (1.9999, 2, 2.0, "1.99"),
        (2.0001, 2, 2.0, "2.01"),
    ],
)
def test_a_figure_beside_its_limit(value, decimals, limit, text):
    assert number(value, decimals, limits=[limit]) == text


@pytest.mark.parametrize(
    ("ratio", "text"),
    [
        (1.0, "100.0"),
        (0.99999, ">\u00a099.9"),
        (0.0, "0.0"),
        (0.00001, "<\u00a00.1"),
        (0.8613, "86.1"),
        (0.07, "7.0"),
    ],
)
def test_0_and_100_percent_only_when_they_are_that(ratio, text):
    assert quantity_number(BY_KEY["efficiency_ratio"], ratio) == text


def test_a_ratio_above_one_is_shown_as_it_is():
    assert quantity_number(BY_KEY["efficiency_ratio"], 1.02) == "102.0"


# Return loss and SWR: table "VSWR, return loss, reflection coefficient", radio-electronics.com.
@pytest.mark.parametrize(
    ("return_loss_db", "swr"), [(6, 3.010), (10, 1.925), (14, 1.499), (20, 1.222), (30, 1.065)]
)
def test_swr_of_a_published_return_loss_is_printed_to_the_place_of_the_table(return_loss_db, swr):
    rho = 10 ** (-return_loss_db / 20)
    value = (1 + rho) / (1 - rho)
    assert number(value, 3) == f"{swr:.3f}"


def test_return_loss_of_14_db_is_better_than_swr_1_5_and_looks_it():
    # 1.499 in the table above rounds to 1.50, the limit itself.
    assert quantity_number(BY_KEY["swr"], 1.4989, limits=[1.5]) == "1.49"
    assert quantity_number(BY_KEY["swr"], 1.4989) == "1.50"


def test_swr_of_one_appears_only_when_it_is_one():
    assert quantity_number(BY_KEY["swr"], 1.0) == "1.00"
    assert quantity_number(BY_KEY["swr"], 1.001) == "<\u00a01.01"
    assert quantity_number(BY_KEY["swr"], math.inf) == "\u221e"


# JCGM 100:2008, H.2 (table H.4): R 127.732 ohm, u 0.071; X 219.847, u 0.295 (read in a secondary
# source). 7.2.2: m 100.02147 g, u 0.35 mg (value from memory).
@pytest.mark.parametrize(
    ("value", "u95", "text"),
    [
        (127.732169, 0.071, "127.732"),
        (219.846512, 0.295, "219.85"),
        (100.021472, 0.00035, "100.02147"),
        (0.6512, 0.045, "0.651"),
        (1234.0, 120.0, "1230"),
        (0.5, 0.0996, "0.50"),
    ],
)
def test_digits_follow_two_digits_of_u95(value, u95, text):
    assert number(value, 1, u95=u95, marks=[]) == text


def test_a_difference_and_its_uncertainty_end_in_the_same_place():
    assert plus_minus(-0.1034, 0.0213, 2) == f"{MINUS}0.103\u00a0\u00b1\u00a00.021"
    assert plus_minus(0.5, 0.12, 2) == "+0.50\u00a0\u00b1\u00a00.12"


@given(low=st.floats(0, 100), width=st.floats(1e-3, 10))
def test_an_interval_never_shrinks(low: float, width: float) -> None:
    low_text, high_text = interval(low, low + width, 2).split(DASH)
    assert parsed(low_text) <= low
    assert parsed(high_text) >= low + width


def test_what_is_not_known_is_a_dash():
    assert number(None, 2) == DASH
    assert number(math.nan, 2) == DASH


def test_comma_where_the_language_has_one():
    assert number(3.14159, 2, locale="de") == "3,14"
    assert number(3.14159, 2, locale="en-GB") == "3.14"


def test_figures_with_an_uncertainty_meet_at_their_points_and_signs() -> None:
    texts = aligned(["12.25\u00a0\u00b1\u00a00.58", "9.3\u00a0\u00b1\u00a01.1", "not measured"])
    assert texts == (
        "12.25\u00a0\u00b1\u00a00.58",
        "9.3\u2007\u00a0\u00b1\u00a01.1\u2007",
        "not measured",
    )


def test_a_one_sided_interval_never_shrinks() -> None:
    assert one_sided(27.68, None, 1) == "over\u00a027.6"
    assert one_sided(None, 0.031, 2) == "below\u00a00.04"
    assert one_sided(27.68, None, 1, locale="de") == "over\u00a027,6"
    assert one_sided(None, None, 1) == DASH


def test_points_of_a_column_meet():
    texts = aligned(["0.5", "0.125", "3"])
    assert [text.rstrip("\u2007\u00a0") for text in texts] == ["0.5", "0.125", "3"]
    assert len({len(text) - text.find(".") for text in texts[:2]}) == 1


def test_frequencies_are_written_as_the_trade_does():
    assert megahertz_range(7e6, 7.3e6) == f"7.0{DASH}7.3"
    assert megahertz_range(5_351_500, 5_366_500) == f"5.3515{DASH}5.3665"
    assert bandwidth_range(2_104_000, 29_812_345) == f"2.11{DASH}29.8"


def test_typed_numbers_keep_what_was_typed():
    assert [entered(value) for value in (3200.0, 0.5, 82.0, 21.25)] == [
        "3200",
        "0.5",
        "82",
        "21.25",
    ]


@pytest.mark.parametrize(
    ("value", "text"),
    [(17.99, "17"), (179.9, "170"), (0.0199, "0.019"), (100.0, "100"), (9.999, "9.9"), (0, "0")],
)
def test_what_may_be_had_at_most_is_rounded_down(value, text):
    assert no_more_than(value) == text
    assert no_more_than(value, locale="de") == text.replace(".", ",")
