"""What a report says on a screen, and in which order."""

import re
from dataclasses import replace

import heat_and_forecast_samples as heat
import pytest
import result_samples as samples
from page_reader import BASELINE, CASES, Page, report

from reportgen.model import Limits, Verdict
from reportgen.pages.report import render_report_html


@pytest.fixture(scope="module")
def sources():
    return {name: report(name) for name in CASES}


@pytest.fixture(scope="module")
def pages(sources):
    return {name: Page(source) for name, source in sources.items()}


def test_report_leads_with_verdict_and_three_figures(pages):
    text = pages["full"].text
    assert "On 10 bands from 160 m to 10 m, 82 to 90 % of the power that enters reaches" in text
    assert "Mean efficiency 87.2 % over 10 bands" in text
    assert "Worst SWR in a band 1.85 on 10 m, at 29.7 MHz" in text
    assert "Most heat at 60 W 10.6 W on 10 m" in text
    assert text.index("Alder") < text.index("On 10 bands") < text.index("Band by band")


def test_simulated_data_carries_a_banner_and_measured_data_none(pages):
    assert "Simulated data." in pages["full"].text
    assert "Simulated data." not in pages["load only"].text
    assert "Simulated data." not in pages["hostile"].text


def test_sections_come_in_order(pages):
    text = pages["full"].text
    order = [
        "Band by band",
        "Efficiency is 90.1",
        "Against the baseline",
        "SWR is 1.85",
        "At 60 W the build turns",
        "How it was measured",
        "All methods side by side",
        "Bandwidths",
        "Unit by unit",
        "Findings",
        "The build",
        "Parts list.",
        "Cautions",
        "Provenance",
    ]
    places = [text.index(words) for words in order]
    assert places == sorted(places)


def test_every_quantity_has_a_column(pages):
    text = pages["full"].text
    for label in (
        "Efficiency",
        "Heat loss",
        "Mismatch loss",
        "Total loss",
        "Delivered",
        "Return loss",
        "SWR",
        "Halved pair",
        "Heat",
    ):
        assert f" {label} " in text


def test_figures_without_interval_have_the_places_of_the_table(sources):
    assert re.search(r"<td class=\"\">86\.6</td>\s*<td class=\"\">0\.62</td>", sources["full"])


def test_intervals_set_the_digits_and_are_shown(pages):
    text = pages["judged"].text
    assert "After \u00b1 stands the half-width of the 95 % interval" in text
    assert "0.623 \u00b1 0.019" in text
    assert "\u22120.126 \u00b1 0.021" in text
    assert "Against the baseline, Birch: better on all 10 bands." in text
    assert text.count("better") >= 11


def test_without_uncertainty_there_is_no_verdict(pages):
    text = pages["full"].text
    assert "On 10 of 10 bands its mean heat loss is below that of the baseline, Birch." in text
    assert "The uncertainty of the difference is not known, so no band is judged." in text
    assert not any(verdict.value in text for verdict in (Verdict.BETTER, Verdict.WORSE))


def test_without_loss_the_reason_is_given(pages):
    text = pages["load only"].text
    assert "The match was measured and the loss was not" in text
    assert "a back-to-back pair or an open and a short would give it" in text
    assert "Efficiency not measured" in text
    assert "It cannot be compared with the baseline, Birch: this build's loss was not" in text


def test_partial_and_missing_bands_say_so(pages):
    text = pages["partial"].text
    assert "The sweeps cover 15 m only in part and 12 m and 10 m not at all." in text
    assert "12 m not measured: the sweeps end at 22 MHz" in text
    assert "only 21.0\u201321.2 MHz of the band: the sweeps end at 21.2 MHz" in text
    assert "2 points in the band, figures interpolated" in text


def test_no_band_at_all_is_said(pages):
    assert "No band was measured" in pages["no band"].text


def test_how_it_was_measured(pages):
    text = pages["full"].text
    assert "Bartlett" in text
    assert "The figures are the mean over units A and B, for a load of 3200 \u03a9." in text
    assert "evening: handheld grade, 2026-10-04" in text
    assert "Stray capacitance at load main: 3.1 pF, named by the sweeps themselves." in text
    assert "load spare: not determined: its reactance is too small to be seen." in text
    assert "common practice, and not the loss of a unit" in text


def test_bandwidths_tell_when_the_sweep_ended_them(pages):
    text = pages["full"].text
    assert "SWR at most 2 1.50\u201329.8 MHz begins where the sweep begins" in text
    assert "Efficiency at least 85 % 2.11\u201323.4 MHz both ends were measured" in text


def test_findings_say_what_to_do(pages):
    text = pages["full"].text
    assert "Warning pair-ab.s2p : S12 and S22 are zero throughout" in text
    assert (
        'What to do: sweep the pair once more the other way round and name it with units = ["B"'
        in text
    )


def test_provenance(pages):
    text = pages["full"].text
    assert "pair-ab.s2p 1001 b2b2b2b2b2b2 " in text
    assert "reportgen 1.2.3" in text


def test_the_baseline_is_called_that():
    source = render_report_html(
        BASELINE, comparison=None, baseline=None, bench=samples.BENCH, program_version="1"
    )
    assert "This build is the baseline" in Page(source).text


def test_figures_keep_to_their_side_of_a_limit():
    worst = samples.full().chosen.bands[-1].figures["swr"].worst
    bench = replace(samples.BENCH, limits={"10 m": Limits(swr=round(worst, 2))})
    shown = "1.84" if worst < round(worst, 2) else "1.86"
    assert f" {shown} " in Page(report("full", bench)).text


def test_the_same_result_gives_the_same_page(sources):
    assert report("full") == sources["full"]


# --- where the heat goes -------------------------------------------------------------------------


def page_of(result, forecast=None) -> str:
    return render_report_html(
        result,
        comparison=None,
        baseline=None,
        bench=samples.BENCH,
        program_version="1",
        forecast=forecast,
    )


def test_where_the_heat_goes():
    text = Page(page_of(heat.with_split(heat.split()))).text
    assert (
        "The core makes 94.2 \u00b1 4.2 % of the heat on 80 m, where its share is largest, and "
        "65.5 \u00b1 4.2 % on 10 m." in text
    )
    assert "188 \u00b1 17 nH of leakage inductance, leads included" in text
    assert "6.47 \u00b1 0.35 µH of magnetising inductance at 1.5 MHz; its coupling there is" in text
    assert "Winding, W 1.0 1.0 1.0 Core, W 7.3 7.3 7.3 Capacitor, W 0.2 0.2 0.2" in text
    assert "Core's share, % 94.2 91.1 65.5 \u00b1 4.2 4.2 4.2" in text
    assert text.index("At 60 W the build turns") < text.index("Where the heat goes")
    assert text.index("Where the heat goes") < text.index("How it was measured")


def test_one_band_has_no_largest_share_and_a_lossless_capacitor_no_row():
    found = heat.split(capacitor_w=0.0)
    text = Page(page_of(heat.with_split(replace(found, bands=found.bands[1:2])))).text
    assert "The core makes 91.1 \u00b1 4.2 % of the heat on 40 m." in text
    assert "Capacitor, W" not in text


def test_permeability_is_drawn_and_told_where_the_core_is_known():
    page = Page(page_of(heat.with_split(heat.split())))
    assert (
        "real part 535 \u00b1 28 at 1.5 MHz, lossy part at most 230 \u00b1 26 at 6.0" in page.text
    )
    (alt,) = {
        one["aria-label"]
        for one in page.all("div")
        if "permeability" in (one.get("aria-label") or "")
    }
    assert "Real part, dashed: 535 \u00b1 28 at 1.5\u00a0MHz, 500" in alt.replace(
        "\u00a0\u00b1\u00a0", " \u00b1 "
    )
    assert "lossy part" not in page_of(heat.with_split(heat.split(core=False)))


def test_heat_that_is_not_divided_has_a_reason(pages):
    assert "Heat was not measured, so it cannot be divided." in pages["load only"].text
    reason = "The method of the result (Bisection with load) does not tell the winding from the"
    assert reason in pages["full"].text
    assert "leakage inductance" not in pages["full"].text


# --- what to wind next ---------------------------------------------------------------------------


def predicted(**changes) -> str:
    return Page(page_of(samples.full(), heat.forecast(**changes))).text


def test_what_to_wind_next_is_marked_as_predicted():
    text = predicted()
    section = text[text.index("What to wind next") : text.index("How it was measured")]
    assert section.startswith(
        "What to wind next Predicted, not measured. With 150 pF instead of 68 pF across the low "
        "side the worst SWR would be 2.251 \u00b1 0.052 instead of 2.333. Least power over the "
        "bands would be reflected with 75 pF."
    )
    assert "Predicted, not measured, into 3200 \u03a9" in section
    assert "3 : 24 as it is 68 2.333 \u00b1 0.052 1.200 \u00b1 0.051" in section
    assert "4 : 32 same ratio 91 1.445 \u00b1 0.052" in section
    assert "3 : 24 stack of 2 rings 91 1.367" in section
    assert "What this assumes stands at the end of the section." in section
    assert section.strip().endswith("without reactance. None of it was measured.")


def test_neighbours_into_another_load_and_further_ones_are_left_out():
    text = predicted()
    assert "3 : 23 other ratio 91 1.797" in text
    assert "1.500" not in text
    assert "1.61" not in text
    assert "9.99" not in text


@pytest.mark.parametrize(
    ("found", "said"),
    [
        (heat.capacitor(then=2.4), "No other value is sure to give a lower worst SWR than the"),
        (
            heat.capacitor(then=2.4, present_pf=0.0),
            "No other value is sure to give a lower worst SWR than none.",
        ),
        (heat.capacitor(best_pf=0.0), "Without the 68 pF across the low side the worst SWR would"),
        (heat.capacitor(present_pf=0.0), "With 150 pF instead of none across the low side"),
    ],
)
def test_what_is_said_of_the_capacitor(found, said):
    text = predicted(capacitor=found)
    assert said in text
    assert ("other capacitor" in text) == found.better


def test_without_a_forecast_there_is_no_such_section(pages):
    assert "What to wind next" not in pages["full"].text
    assert "What to wind next" not in pages["load only"].text


def test_into_antennas():
    text = predicted(antennas=(heat.antenna(),))
    assert "Into the antenna of wire.s1p :" in text
    assert "40 m 87.1 \u00b1 1.2 1.723 \u00b1 0.041 81.2 \u00b1 1.4" in text
    assert "10 m the antenna was not swept there" in text


def test_foreign_names_in_both_sections_are_escaped():
    band = replace(heat.split().bands[0], band=samples.HOSTILE)
    found = replace(heat.split(core=False), bands=(band,))
    told = heat.forecast(antennas=(heat.antenna(samples.HOSTILE),), assumes=(samples.HOSTILE,))
    source = page_of(heat.with_split(found), told)
    assert "<script>alert" not in source
    assert source.count("&lt;script&gt;alert") >= 4


def test_every_set_up_used_is_drawn_once(pages):
    """With its name below and the same in words for those who do not see it."""
    page = pages["full"]
    drawn = [one for one in page.all("div") if one.get("class") == "circuit"]
    used = {entry.entry.setup for entry in CASES["full"][0].build.measurements}
    assert len(drawn) == len(used)
    assert all(one["role"] == "img" and len(one["aria-label"]) > 40 for one in drawn)
    assert page.text.index("Back to back") < page.text.index("Sweeps, and how they were taken.")
