"""The index: ranking, heat by band, lots, what is missing; and its script in a browser."""

from __future__ import annotations

import re
from dataclasses import replace

import pytest
import result_samples as samples
from opened_pages import open_page
from page_reader import BASELINE, Page, index, published
from sure_samples import sure

from reportgen.model import BandComparison, Comparison, Lot, LotBand, Verdict
from reportgen.pages.heat_grid import heat_grid, tint_edges
from reportgen.pages.look import TINTS
from reportgen.pages.ranking import (
    FIGURES,
    lines,
    ranked,
    shared_bands,
    shared_words,
)
from reportgen.pages.standing import against_words, standing


@pytest.fixture(scope="module")
def source():
    return index()


@pytest.fixture(scope="module")
def page(source):
    return Page(source)


def build(level: float, name: str, **changes):
    """A published build whose loss is so many times the usual one."""
    result = samples.full(level, name, name.lower(), u95=0.03)
    return replace(published(result, samples.comparison(result, BASELINE)), **changes)


def hotter(one, factor: float):
    """The same build at so many times the power."""
    bands = []
    for band in one.bands:
        heat = band.figures["heat_w"]
        more = replace(heat, mean=factor * heat.mean, low95=None, high95=None)
        bands.append(replace(band, figures=band.figures | {"heat_w": more}))
    return replace(one, bands=tuple(bands), power_w=factor * one.power_w)


def compared(*verdicts: Verdict | None) -> Comparison:
    bands = tuple(
        BandComparison(
            band=f"band {place}",
            heat_loss_db=0.1 if verdict is not Verdict.NOT_MEASURED else None,
            heat_w=None,
            verdict=verdict,
        )
        for place, verdict in enumerate(verdicts)
    )
    return Comparison(key="birch", name="Birch", bands=bands)


# --- ranking -------------------------------------------------------------------------------------


def test_builds_are_ranked_by_mean_efficiency(page):
    text = page.text
    assert "5 builds published, 1 not; the most efficient is" in text
    assert text.index("1 Alder") < text.index("3 Rowan") < text.index("4 Birch")
    assert "\u2013 Hazel" in text
    assert "Figures are over the 8 bands that all with a loss share, from 160 m to 15 m." in text
    assert "Ranked by mean efficiency." in text
    assert "is the baseline" in text


def test_index_links_each_build_to_its_pages(page):
    links = [found["href"] for found in page.all("a")]
    for key in ("alder", "birch", "rowan", "hazel"):
        assert f"{key}/report.html" in links
        assert f"{key}/report.pdf" in links


def test_only_bands_that_all_share_count():
    builds = [published(one) for one in (samples.full(), samples.partial(), samples.load_only())]
    assert shared_bands(builds)[-1] == "15 m"
    assert shared_bands([]) == ()
    two = "Figures are over what all with a loss share: 40 m and 20 m."
    assert shared_words(("40 m", "20 m")) == two


def test_each_figure_has_an_order_of_its_own():
    """The build that is asked to stand most is last in heat, and first in efficiency."""
    builds = [hotter(build(1.0, "Ash"), 9), build(1.5, "Beech"), build(1.2, "Cherry")]
    shared = shared_bands(builds)
    order = ranked(builds, shared)
    places = {line.name: line.places for line in lines(order, shared, None, "en")}
    assert [one.heading.label for one in FIGURES] == [
        "Efficiency", "Worst band", "Most heat", "SWR"
    ]  # fmt: skip
    assert places["Ash"] == (1, 1, 1, 3, 1)
    assert places["Beech"] == (2, 3, 3, 2, 3)
    assert places["Cherry"] == (3, 2, 2, 1, 2)


def test_what_was_not_measured_has_no_place_and_stands_last():
    builds = [published(samples.load_only()), build(1.0, "Ash")]
    shared = shared_bands(builds)
    order = ranked(builds, shared)
    assert [one.name for one in order] == ["Ash", "Hazel"]
    last = lines(order, shared, None, "en")[-1]
    assert last.place == "\u2013"
    assert last.places[1:4] == (0, 0, 0)
    assert last.places[4] > 0
    assert last.figures[0].text == "not measured"


@pytest.mark.parametrize(
    ("verdicts", "expected", "words"),
    [
        ((Verdict.BETTER, Verdict.SAME), "better", "better on 1, same on 1"),
        ((Verdict.WORSE, Verdict.WORSE), "worse", "worse on 2"),
        ((Verdict.BETTER, Verdict.WORSE), "mixed", "better on 1, worse on 1"),
        ((Verdict.SAME, Verdict.NOT_MEASURED), "same", "same on 1"),
        ((Verdict.NOT_MEASURED,), "unknown", "not comparable"),
        ((None,), "unknown", "less loss on 0 of 1, not judged"),
    ],
)
def test_how_a_build_stands_against_the_baseline(verdicts, expected, words):
    assert standing(compared(*verdicts)) == expected
    assert against_words(compared(*verdicts)) == words


def test_without_a_baseline_nothing_is_compared():
    assert (standing(None), against_words(None)) == ("unknown", "no baseline")
    text = Page(index(rows=[published(samples.full())], baseline_key=None)).text
    assert "no baseline" in text
    assert "Against the baseline" not in text


def test_a_simulated_build_among_measured_ones_is_marked(page):
    assert "Partly simulated data." in page.text
    assert "Alder simulated" in page.text
    assert "Hazel simulated" not in page.text
    assert "Simulated data. These sweeps were computed" in Page(index(rows=[build(1, "Ash")])).text


# --- heat by band --------------------------------------------------------------------------------


def test_heat_loss_is_tinted_by_strength(source):
    cells = re.findall(r'<td class="tint-(\d)">([\d.]+)', source)
    by_loss = sorted(cells, key=lambda cell: float(cell[1]))
    assert by_loss[-1][0] == "4"
    assert by_loss[0][0] == "0"
    assert [level for level, _ in by_loss] == sorted(level for level, _ in cells)


@pytest.mark.parametrize(
    ("low", "high", "edges"),
    [
        (0.274, 1.248, (0.25, 0.5, 0.75, 1.0, 1.25)),
        (0.3, 0.3, (0.3, 0.301)),
        (0.0, 1.0, (0.0, 0.25, 0.5, 0.75, 1.0, 1.25)),
        (-0.1, 3.2, (-1.0, 0.0, 1.0, 2.0, 3.0, 4.0)),
        (0.011, 0.0149, (0.011, 0.012, 0.013, 0.014, 0.015)),
    ],
)
def test_tints_change_at_round_figures(low: float, high: float, edges):
    assert tint_edges(low, high) == edges
    assert len(edges) - 1 <= len(TINTS)


def test_a_figure_never_prints_on_the_other_side_of_its_tint():
    band = published(samples.full()).bands[0]
    figure = replace(band.figures["heat_loss_db"], mean=0.4999999, low95=0.46, high95=0.54)
    near = replace(band, figures=band.figures | {"heat_loss_db": figure})
    one = build(1.0, "Ash", bands=(near,))
    grid = heat_grid([one, build(2.5, "Beech")], None, "en")
    assert grid.rows[0].cells[0].text.strip("\u2007") == "0.499"


def test_signs_say_how_a_band_compares(page):
    result = samples.full()
    one = published(result, samples.comparison(result, BASELINE, judged=True))
    page = Page(index(rows=[one, published(BASELINE)]))
    signs = [found for found in page.all("span") if found.get("role") == "img"]
    assert [found["aria-label"] for found in signs] == ["less loss"] * len(samples.BANDS)
    assert "Against Birch: \u25bc less loss" in page.text
    assert "more loss" not in page.text


def test_bands_stand_in_the_order_of_frequency(page):
    heads = page.text.partition("Heat loss by band")[2]
    assert heads.index("160\u00a0m".replace("\u00a0", " ")) < heads.index("10 m")


# --- lots ----------------------------------------------------------------------------------------


def test_units_of_a_lot_are_shown_where_they_differ_most():
    close = LotBand(
        band="40 m", least_db=0.5, greatest_db=0.6, standard_deviation_db=0.05, worst_unit="C"
    )
    apart = LotBand(
        band="10 m", least_db=0.41, greatest_db=0.73, standard_deviation_db=0.16, worst_unit="B"
    )
    one = build(1.0, "Ash", lot=Lot(units=("A", "B", "C"), bands=(close, apart)))
    text = Page(index(rows=[one])).text
    assert "Ash A, B and C 10 m 0.41 0.73 0.16 B, on 1 of 2 bands" in text
    assert "Units of one build" not in Page(index(rows=[build(1.0, "Ash")])).text


# --- what is missing -----------------------------------------------------------------------------


def test_what_failed_is_named_with_its_reason(page):
    text = page.text
    assert "elder Its earlier page still stands; it does not show" in text
    assert 'Error build.toml, line 7, winding.low_turns : found "3 turns"' in text


def test_an_index_without_builds_is_still_a_page():
    page = Page(index(rows=[], failed=(), findings=()))
    assert "No build could be published." in page.text
    assert "0 builds published." in page.text
    assert page.all("script") == []


def test_two_builds_need_no_script():
    source = index(rows=[build(1, "Ash"), build(2, "Beech")])
    assert "script-src" not in source
    assert Page(source).all("form") == []


# --- the script ----------------------------------------------------------------------------------


@pytest.fixture
def opened(context, tmp_path):
    rows = [
        build(1.0, "Ash", comparison=compared(Verdict.BETTER)),
        build(1.3, "Beech", comparison=compared(Verdict.WORSE), limits=sure().limits),
        build(1.2, "Cherry", comparison=compared(Verdict.SAME)),
        published(samples.load_only()),
    ]
    path = tmp_path / "index.html"
    path.write_text(index(rows=rows), encoding="utf-8")
    found = open_page(context, path)
    yield found
    assert found.complaints == []
    found.page.close()


def order(opened) -> list[str]:
    return opened.page.locator(".ranking tbody tr:visible th a").all_inner_texts()


def said(opened) -> str:
    return opened.page.get_by_role("status").inner_text()


def test_the_head_of_a_column_ranks_by_it(opened):
    assert order(opened) == ["Ash", "Cherry", "Beech", "Hazel"]
    assert said(opened) == "4 of 4 builds shown. Order: Efficiency, best first."
    head = opened.page.get_by_role("button", name="SWR")
    head.press("Enter")
    assert said(opened) == "4 of 4 builds shown. Order: SWR, best first."
    assert opened.page.locator("th[aria-sort=ascending]").inner_text().startswith("SWR")
    head.press("Space")
    assert opened.page.locator("th[aria-sort]").get_attribute("aria-sort") == "descending"
    assert order(opened)[0] in ("Beech", "Hazel")
    ranks = opened.page.locator(".ranking tbody tr td:first-child").all_inner_texts()
    assert ranks == ["4", "3", "2", "1"]
    assert opened.page.locator(".grid tbody th").all_inner_texts() == order(opened)


def test_what_has_no_figure_stays_last(opened):
    head = opened.page.get_by_role("button", name="Most heat")
    for first in ("Ash", "Beech"):
        head.click()
        assert order(opened)[0] == first
        assert order(opened)[-1] == "Hazel"


def test_by_name_leaves_the_ranks(opened):
    opened.page.get_by_role("button", name="Build", exact=True).click()
    assert order(opened) == ["Ash", "Beech", "Cherry", "Hazel"]
    assert said(opened).endswith("Order: Build, A to Z.")
    ranks = opened.page.locator(".ranking tbody tr td:first-child").all_inner_texts()
    assert ranks == ["1", "3", "2", "\u2013"]


def test_filters_leave_what_fits_in_every_table(opened):
    opened.page.get_by_label("Find").fill("bee")
    assert order(opened) == ["Beech"]
    assert opened.page.locator(".grid tbody tr:visible").count() == 1
    assert said(opened).startswith("1 of 4 builds shown.")
    opened.page.get_by_role("button", name="Show all").click()
    opened.page.wait_for_function("document.querySelector('[role=status]').textContent[0] == '4'")
    assert len(order(opened)) == 4
    opened.page.get_by_label("Against the baseline").select_option("worse")
    assert order(opened) == ["Beech"]
    opened.page.get_by_label("Limits").select_option("no limits")
    assert order(opened) == []
    assert said(opened).startswith("0 of 4 builds shown.")
