"""Report and index on a screen: what they say, and what they must never hold."""

import re
from dataclasses import replace
from html.parser import HTMLParser
from itertools import pairwise

import pytest
import result_samples as samples

from reportgen.model import Limits, Verdict
from reportgen.pages.index import render_index_html, shared_bands
from reportgen.pages.report import render_report_html

VOID = {"meta", "img", "br", "link", "input", "hr", "path", "use"}


class Page(HTMLParser):
    """A page taken apart: its text without style sheets, its elements, unbalanced tags."""

    def __init__(self, source: str) -> None:
        super().__init__(convert_charrefs=True)
        self.words: list[str] = []
        self.elements: list[tuple[str, dict[str, str | None]]] = []
        self.open: list[str] = []
        self.feed(source)
        self.close()
        self.text = re.sub(r"\s+", " ", " ".join(self.words))

    def handle_starttag(self, tag, attrs):
        self.elements.append((tag, dict(attrs)))
        if tag not in VOID:
            self.open.append(tag)

    def handle_startendtag(self, tag, attrs):
        self.elements.append((tag, dict(attrs)))

    def handle_endtag(self, tag):
        assert self.open.pop() == tag

    def handle_data(self, data):
        if "style" not in self.open and "svg" not in self.open:
            self.words.append(data)

    def all(self, tag: str) -> list[dict[str, str | None]]:
        return [attributes for name, attributes in self.elements if name == tag]


BASELINE = samples.full(1.2, "Birch", "birch")
CASES = {
    "full": (samples.full(), BASELINE, False),
    "judged": (samples.full(u95=0.03), BASELINE, True),
    "load only": (samples.load_only(), BASELINE, False),
    "partial": (samples.partial(), None, False),
    "hostile": (samples.hostile(), None, False),
    "no band": (
        replace(samples.load_only(), chosen=replace(samples.load_only().chosen, bands=())),
        None,
        False,
    ),
}


def report(name: str, bench=samples.BENCH) -> str:
    result, baseline, judged = CASES[name]
    comparison = baseline and samples.comparison(result, baseline, judged=judged)
    return render_report_html(
        result, comparison=comparison, baseline=baseline, bench=bench, program_version="1.2.3"
    )


def index(**changes) -> str:
    results = [samples.full(), BASELINE, samples.partial(), samples.load_only(), samples.hostile()]
    rows = [
        (one, None if one is BASELINE else samples.comparison(one, BASELINE)) for one in results
    ]
    settings = {
        "bench": samples.BENCH,
        "failed": samples.FAILED,
        "standing": ["elder"],
        "findings": samples.FINDINGS,
        "baseline_key": "birch",
        "program_version": "1.2.3",
    } | changes
    return render_index_html(settings.pop("rows", rows), **settings)


@pytest.fixture(scope="module")
def sources():
    return {name: report(name) for name in CASES} | {"index": index()}


@pytest.fixture(scope="module")
def pages(sources):
    return {name: Page(source) for name, source in sources.items()}


# --- what no page may hold -----------------------------------------------------------------------


def test_elements_are_balanced(pages):
    assert all(page.open == [] for page in pages.values())


def test_no_script_and_nothing_from_elsewhere(sources, pages):
    for name, page in pages.items():
        assert not {tag for tag, _ in page.elements} & {"script", "iframe", "object", "link", "img"}
        for tag, attributes in page.elements:
            for attribute, value in attributes.items():
                assert not attribute.startswith("on"), (name, tag)
                if attribute in ("href", "src", "xlink:href"):
                    assert re.fullmatch(r"(#[\w-]+|[a-z0-9-]+/report\.(html|pdf))", value), value
        addresses = set(re.findall(r'url\((?!#)["\']?([a-z]+:[^,"\')]*)', sources[name]))
        assert addresses == {"data:font/ttf;base64"}


def test_the_policy_forbids_what_is_not_needed(pages):
    expected = "default-src 'none'; img-src data:; style-src 'unsafe-inline'; font-src data:"
    for page in pages.values():
        metas = page.all("meta")
        assert {"http-equiv": "Content-Security-Policy", "content": expected} in metas


def test_no_placeholder_for_a_missing_figure_is_ever_printed(pages):
    for page in pages.values():
        assert not re.search(r"\b(nan|NaN|None|inf|True|False|Undefined)\b", page.text)


def test_no_empty_cell_in_a_table_of_figures(sources):
    for source in sources.values():
        assert not re.search(r'<td class="(soft)?">\s*</td>', source)


def test_identifiers_are_unique(pages):
    for page in pages.values():
        names = [found["id"] for _, found in page.elements if "id" in found]
        assert len(names) == len(set(names))


def test_headings_descend_by_one(pages):
    for page in pages.values():
        levels = [int(tag[1]) for tag, _ in page.elements if re.fullmatch("h[1-6]", tag)]
        assert levels[0] == 1
        assert levels.count(1) == 1
        assert all(after - before <= 1 for before, after in pairwise(levels))


def test_tables_have_captions_and_scopes_and_pictures_have_words(pages):
    for page in pages.values():
        assert len(page.all("caption")) == len(page.all("table"))
        assert all(head.get("scope") in ("row", "col") for head in page.all("th"))
        for attributes in page.all("div"):
            if attributes.get("role") == "img":
                assert len(attributes["aria-label"]) > 40
        assert page.all("html") == [{"lang": "en"}]
        assert len(page.all("main")) == 1


# --- foreign text --------------------------------------------------------------------------------


def test_hostile_text_is_shown_and_does_nothing(pages):
    for name in ("hostile", "index"):
        text = pages[name].text
        assert "<script>alert(1)</script>[U+202E]\"'{{7*7}} $x$ [U+0007] =cmd() & </style>" in text


def test_hostile_text_stays_inside_its_attribute():
    bench = replace(samples.BENCH, title='a" onmouseover="x\' y', publisher="</title><b>")
    page = Page(report("full", bench))
    assert 'a" onmouseover="x\' y' in page.text
    assert "</title><b>" in page.text


# --- what a report says --------------------------------------------------------------------------


def test_report_leads_with_verdict_and_three_figures(pages):
    text = pages["full"].text
    assert (
        "On 10 bands from 160 m to 10 m, 82 to 90 % of the power that enters reaches" in text
    )
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
    assert "95 % is the interval that holds the mean" in text
    assert "0.623" in text
    assert "0.603\u20130.642" in text
    assert "\u22120.126 \u00b1 0.021" in text
    assert "Against the baseline, Birch: better on 10." in text
    assert text.count("better") >= 11


def test_without_uncertainty_there_is_no_verdict(pages):
    text = pages["full"].text
    assert "On 10 of 10 bands its mean heat loss is below that of the baseline, Birch." in text
    assert "The uncertainty of the difference is not known yet, so no band is judged." in text
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
    assert "Halved pair, common practice" in text


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


def test_cautions_stand_on_every_page(pages):
    for page in pages.values():
        for words in (
            "Local codes and licensed practice come first",
            "hot enough to burn skin",
            "High radio-frequency voltage.",
            "Exposure.",
            "Licence.",
            "nothing of saturation, of breakdown",
            "One unit is not a lot.",
        ):
            assert words in page.text


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


# --- the index -----------------------------------------------------------------------------------


def test_builds_are_ranked_by_mean_efficiency(pages):
    text = pages["index"].text
    assert "5 builds published, 1 not; the most efficient is" in text
    assert text.index("1 Alder") < text.index("3 Rowan") < text.index("4 Birch")
    assert "\u2013 Hazel" in text
    assert "Ranked by mean efficiency over what all share: 160 m, 80 m" in text
    assert "is the baseline" in text


def test_index_links_each_build_to_its_pages(pages):
    links = [found["href"] for found in pages["index"].all("a")]
    for key in ("alder", "birch", "rowan", "hazel"):
        assert f"{key}/report.html" in links
        assert f"{key}/report.pdf" in links


def test_heat_loss_is_tinted_by_strength(sources):
    cells = re.findall(r'<td class="tint-(\d)">([\d.]+)', sources["index"])
    strongest = max(cells, key=lambda cell: float(cell[1]))
    weakest = min(cells, key=lambda cell: float(cell[1]))
    assert strongest[0] == "4"
    assert weakest[0] == "0"
    assert [level for level, _ in sorted(cells, key=lambda cell: float(cell[1]))] == sorted(
        level for level, _ in cells
    )


def test_what_failed_is_named_with_its_reason(pages):
    text = pages["index"].text
    assert "elder Its earlier page still stands; it does not show" in text
    assert 'Error build.toml, line 7, winding.low_turns : found "3 turns"' in text


def test_only_bands_that_all_share_count():
    assert shared_bands([samples.full(), samples.partial(), samples.load_only()])[-1] == "15 m"
    assert shared_bands([]) == ()


def test_an_index_without_builds_is_still_a_page():
    page = Page(index(rows=[], failed=(), findings=()))
    assert "No build could be published." in page.text
    assert "0 builds published." in page.text
