"""The index: ranking, heat by band, and what is missing."""

import re

import pytest
import result_samples as samples
from page_reader import Page, index, published

from reportgen.pages.index import shared_bands


@pytest.fixture(scope="module")
def source():
    return index()


@pytest.fixture(scope="module")
def page(source):
    return Page(source)


def test_builds_are_ranked_by_mean_efficiency(page):
    text = page.text
    assert "5 builds published, 1 not; the most efficient is" in text
    assert text.index("1 Alder") < text.index("3 Rowan") < text.index("4 Birch")
    assert "\u2013 Hazel" in text
    assert "Ranked by mean efficiency over what all share: 160 m, 80 m" in text
    assert "is the baseline" in text


def test_index_links_each_build_to_its_pages(page):
    links = [found["href"] for found in page.all("a")]
    for key in ("alder", "birch", "rowan", "hazel"):
        assert f"{key}/report.html" in links
        assert f"{key}/report.pdf" in links


def test_heat_loss_is_tinted_by_strength(source):
    cells = re.findall(r'<td class="tint-(\d)">([\d.]+)', source)
    strongest = max(cells, key=lambda cell: float(cell[1]))
    weakest = min(cells, key=lambda cell: float(cell[1]))
    assert strongest[0] == "4"
    assert weakest[0] == "0"
    assert [level for level, _ in sorted(cells, key=lambda cell: float(cell[1]))] == sorted(
        level for level, _ in cells
    )


def test_what_failed_is_named_with_its_reason(page):
    text = page.text
    assert "elder Its earlier page still stands; it does not show" in text
    assert 'Error build.toml, line 7, winding.low_turns : found "3 turns"' in text


def test_only_bands_that_all_share_count():
    builds = [published(one) for one in (samples.full(), samples.partial(), samples.load_only())]
    assert shared_bands(builds)[-1] == "15 m"
    assert shared_bands([]) == ()


def test_an_index_without_builds_is_still_a_page():
    page = Page(index(rows=[], failed=(), findings=()))
    assert "No build could be published." in page.text
    assert "0 builds published." in page.text
