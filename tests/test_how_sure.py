"""What the pages say of how sure the figures are."""

import re
from dataclasses import replace

import pytest
import result_samples as samples
from page_reader import BASELINE, Page, index, published, report
from rich.console import Console
from sure_samples import BENCH, NAMES, sure

from reportgen.model import Agreement, BandComparison, Comparison, Judgement, Method, Verdict
from reportgen.pages.charts import draw_charts
from reportgen.pages.comparison import comparison_sentence
from reportgen.pages.intervals import with_interval
from reportgen.pages.limits import limits_short, limits_words
from reportgen.pages.method_tables import (
    agreement_sentence,
    agreement_words,
    units_sentences,
    units_table,
)
from reportgen.pages.terminal import print_bands
from reportgen.physics.quantities import BY_KEY


@pytest.fixture(scope="module")
def text():
    return Page(report("sure", BENCH)).text


# --- a figure and its interval -------------------------------------------------------------------


@pytest.mark.parametrize(
    ("key", "value", "low", "high", "expected"),
    [
        ("heat_loss_db", 0.6264, 0.5694, 0.6861, "0.626\u00a0±\u00a00.058"),
        ("efficiency_ratio", 0.8609, 0.852, 0.870, "86.09\u00a0±\u00a00.90"),
        ("efficiency_ratio", 0.86, 0.70, 1.02, "86\u00a0±\u00a016"),
        ("return_loss_db", 27.0, 25.04, 37.91, "27.0 (25.0\u201338.0)"),
        ("return_loss_db", 34.2, 27.68, None, "over\u00a027.6"),
        ("heat_loss_db", 0.01, None, 0.031, "below\u00a00.04"),
        ("swr", 1.5, None, None, "1.50"),
        ("swr", None, None, None, "not measured"),
    ],
)
def test_a_figure_beside_its_interval(key, value, low, high, expected):
    assert with_interval(BY_KEY[key], value, low, high) == expected


def test_the_figure_beside_an_interval_keeps_to_its_side_of_a_limit():
    shown = with_interval(BY_KEY["efficiency_ratio"], 0.79996, 0.78, 0.82, limits=[0.8])
    assert shown == "79.9\u00a0±\u00a02.0"


# --- the head of a report ------------------------------------------------------------------------


def test_verdict_and_key_figures_say_how_sure_they_are(text):
    assert re.search(
        r"On 10 bands from 160 m to 10 m, 87\.\d\d ± 0\.\d\d % of the power that enters reaches "
        r"the load on average; least on 10 m, 8\d\.\d ± 2\.\d %\.",
        text,
    )
    assert re.search(r"Mean efficiency 87\.\d\d % ± 0\.\d\d %, over 10 bands", text)
    assert re.search(r"Worst SWR in a band 1\.\d\d\d ± 0\.05\d, on 10 m", text)
    assert re.search(r"Most heat at 60 W 10\.\d\d W ± 0\.\d\d W, on 10 m", text)


def test_band_table_shows_lopsided_and_one_sided_intervals(text):
    assert "27.0 (25.0\u201338.0)" in text
    assert "over 24.6" in text


# --- charts --------------------------------------------------------------------------------------


def _efficiency_chart(result):
    bands = [band.band for band in result.chosen.bands]
    return draw_charts(result, None, bands, swr_limits={}, efficiency_limits={})["efficiency"]


def test_efficiency_chart_has_a_ribbon_where_the_interval_is_known():
    with_ribbon, without = _efficiency_chart(sure()), _efficiency_chart(samples.full())
    assert "ribbon" in with_ribbon.alt
    assert "ribbon" not in without.alt
    assert "opacity: 0.22" in with_ribbon.svg
    assert "opacity: 0.22" not in without.svg
    assert "95\u00a0% interval" in with_ribbon.svg
    assert "95\u00a0% interval" not in without.svg


# --- against the baseline ------------------------------------------------------------------------


def _comparison(*verdicts):
    bands = tuple(
        BandComparison(band=f"{place} m", heat_loss_db=0.1, heat_w=1.0, verdict=verdict)
        for place, verdict in enumerate(verdicts)
    )
    return Comparison(key="birch", name="Birch", bands=bands)


def test_comparison_counts_bands_by_verdict():
    mixed = _comparison(Verdict.SAME, Verdict.BETTER, Verdict.SAME, Verdict.NOT_MEASURED)
    assert comparison_sentence(mixed) == (
        "Against the baseline, Birch: better on 1 and same within uncertainty on 2 of 3 bands."
    )
    alone = comparison_sentence(_comparison(Verdict.WORSE))
    assert alone == "Against the baseline, Birch: worse on 1 band."


# --- methods -------------------------------------------------------------------------------------


def test_methods_stand_side_by_side_with_their_agreement(text):
    assert "Bisection with load, mean of A and B" in text
    assert "published: the surest of those that speak of most units; into 3200 Ω" in text
    expected = "disagrees with bisection with load, differing most on 10 m: +0.212 ± 0.042 dB"
    assert expected in text
    assert "common practice, and not the loss of a unit" in text


def test_it_is_said_first_whether_methods_agree(text):
    expected = "Bisection does not agree with the best method for the same units."
    assert text.index(expected) < text.index("Halved pair, mean of A and B")
    agreeing = replace(sure().agreements[0], agrees=True)
    assert agreement_sentence((agreeing,)) == (
        "The methods that can be compared agree within their uncertainty."
    )
    assert agreement_sentence((replace(agreeing, agrees=None),)) == ""


def test_units_that_lie_apart_are_named(text):
    expected = "The 3 units lie most apart on 160 m: 0.58 to 0.67 dB of heat loss, most in"
    assert expected in text


def test_units_stand_side_by_side_band_by_band():
    table = units_table(sure(), "en")
    assert [column.label for column in table.columns] == [
        name.replace(" ", "\u00a0") for name in NAMES
    ]
    heads = [(row.head, row.sub) for group in table.groups for row in group]
    assert heads == [
        ("unit A", "loss"),
        (None, "\u00b1"),
        (None, "SWR"),
        ("unit B", "loss"),
        (None, "\u00b1"),
        (None, "SWR"),
    ]


def test_units_whose_match_alone_is_known_are_named():
    alone = samples.load_only().chosen
    result = replace(sure(), units=(alone, replace(alone, unit="B")))
    expected = "Of A and B alone only the match was measured, with the bench resistor as it is"
    assert units_sentences(result, "en")[1].startswith(expected)


def test_methods_that_cannot_be_compared_say_why():
    one = Agreement(
        method=Method.SERIES_RESISTOR,
        unit="A",
        against=Method.TERMINATIONS,
        agrees=None,
        reason="the two sweeps differ in range",
    )
    expected = "not comparable with terminations: the two sweeps differ in range"
    assert agreement_words(one, "en") == expected


# --- what makes it uncertain ---------------------------------------------------------------------


def test_budget_names_the_largest_and_advice_what_would_help(text):
    assert "Tracking makes the figures most uncertain over all bands" in text
    assert "the largest single part is load match on 10 m, ± 0.065 dB." in text
    assert "noise < 0.001" in text
    assert (
        "A load sweep of unit A and of unit B would take 40 m from ± 0.091 to ± 0.031 dB." in text
    )


def test_the_largest_contribution_of_each_band_is_bold():
    source = report("sure", BENCH)
    assert len(re.findall(r'<td class="most">', source)) == len(samples.BANDS)
    assert '<td class="most">0.065</td>' in source


def test_assumptions_are_said_as_such(text):
    assert "1000 draws of all that is not known exactly (JCGM 101)" in text
    assert "assumed by its grade, and not measured: handheld grade for evening" in text
    assert "stated by the workshop: evening (load match)" in text
    assert "Check sweeps of known parts condition the draws" in text
    assert (
        "pair-again.s2p was taken as pair-ab.s2p was: their S-parameters differ by 0.0005" in text
    )
    assert "No allowance is made for one unit standing for others" in text
    assert "Stray capacitance at load main: 3.13 ± 0.34 pF" in text


def test_without_intervals_nothing_is_said_of_them():
    assert "How sure it is" not in Page(report("full")).text


# --- limits --------------------------------------------------------------------------------------


def test_limits_are_judged_band_by_band_and_for_the_build(text):
    assert text.index("Fails its limits. SWR on 10 m.") < text.index("Band by band")
    assert "only where the whole 95 % interval does; between them it is undecided" in text
    assert "40 m 1.500 ± 0.050 2 pass 85.60 ± 0.90 85 undecided" in text
    assert "10 m 2.20 ± 0.10 2 fail not measured 85 not measured" in re.sub("[\u2007]", "", text)


def test_the_build_passes_only_without_a_doubt():
    judged = {one.judgement: one for one in sure().limits}
    doubtful = (judged[Judgement.PASS], judged[Judgement.UNDECIDED])
    assert limits_words(doubtful) == (
        "Limits undecided.",
        "Efficiency on 40 m is too close to the limit to tell.",
    )
    assert limits_words((judged[Judgement.PASS], judged[Judgement.NOT_MEASURED])) == (
        "Keeps to the limits that could be judged.",
        "Not measured: Efficiency on 10 m.",
    )
    assert limits_words((judged[Judgement.PASS],)) == ("Keeps to all limits.", "")
    assert limits_words((judged[Judgement.NOT_MEASURED],)) == ("", "")


def test_a_cell_says_when_only_a_part_was_judged():
    judged = {one.judgement: one for one in sure().limits}
    lacking = judged[Judgement.NOT_MEASURED]
    assert limits_short((judged[Judgement.PASS], lacking)) == "pass in part"
    assert limits_short((judged[Judgement.FAIL], lacking)) == "fail"
    assert limits_short((lacking,)) == "not judged"
    assert limits_short(()) == "no limits"


# --- index and terminal --------------------------------------------------------------------------


def test_index_shows_intervals_verdicts_and_limits():
    one = sure()
    comparison = samples.comparison(one, BASELINE, judged=True)
    text = Page(index(rows=[published(one, comparison), published(BASELINE)])).text
    assert re.search(r"87\.\d\d ± 0\.\d\d 8\d\.\d ± \d\.\d 10 m", text)
    assert "better on 10 fail 10 m PDF" in text
    assert "is the baseline no limits PDF" in text


def test_terminal_shows_intervals_in_line():
    console = Console(width=200, record=True, file=None, force_terminal=False, quiet=False)
    with console.capture() as capture:
        print_bands(console, sure(), BENCH)
    lines = capture.get().splitlines()
    assert any(line.startswith("Fails its limits. SWR on 10 m.") for line in lines)
    means = [line for line in lines if re.match(r"\d+ m +mean", line)]
    places = {line.index("±") for line in means}
    assert len(means) == len(samples.BANDS)
    assert len(places) == 1
