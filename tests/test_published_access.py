"""Published pages for everybody: names, roles, landmarks, headings, and text that can be read.

axe-core (Deque) checks what a program can of WCAG 2.2 and of good practice. It takes long over
contrast, so it does that on two pages, and `measure_page.js` on all of them. Charts are pictures
with words for them: their insides are taken out for axe, which would take long over them too.
"""

from __future__ import annotations

import pytest
from conftest import missing
from opened_pages import open_page

STANDARDS = ["wcag2a", "wcag2aa", "wcag21a", "wcag21aa", "wcag22aa", "best-practice"]
ON_A_TELEPHONE = ["scrollable-region-focusable", "target-size", "meta-viewport"]
SCHEMES = pytest.mark.parametrize("scheme", ["light", "dark"])
RUN = """async (options) => {
  const charts = [...document.querySelectorAll("svg")];
  const insides = charts.map((chart) => [...chart.childNodes]);
  charts.forEach((chart) => chart.replaceChildren());
  const { violations, passes } = await axe.run(document, options);
  charts.forEach((chart, place) => chart.replaceChildren(...insides[place]));
  const places = violations.flatMap(({ id, nodes }) => nodes.map((node) => `${id}: ${node.html}`));
  return { places, passed: passes.map(({ id }) => id) };
}"""


@pytest.fixture(scope="session")
def axe() -> str:
    """The script of axe-core."""
    try:
        from axe_playwright_python.base import AXE_SCRIPT
    except ModuleNotFoundError:
        missing("axe-core is not installed: pip install -e '.[browser]'")
    return AXE_SCRIPT


def violations(opened, axe: str, kind: str, wanted: list[str], **rules: bool) -> list[str]:
    """Places on a page that break a rule, one line each."""
    if not opened.page.evaluate("'axe' in window"):
        opened.page.evaluate(axe)
    options = {
        "runOnly": {"type": kind, "values": wanted},
        "rules": {name.replace("_", "-"): {"enabled": on} for name, on in rules.items()},
        "resultTypes": ["violations"],
        "preload": False,
    }
    checked = opened.page.evaluate(RUN, options)
    assert checked["passed"]
    return [place[:200] for place in checked["places"]]


def test_axe_sees_what_is_wrong(context, axe, tmp_path) -> None:
    path = tmp_path / "bad.html"
    path.write_text("<!doctype html><p style='color:#aaa'>faint</p><img src='data:,'><a href='#'>")
    opened = open_page(context, path)
    broken = {place.split(":")[0] for place in violations(opened, axe, "tag", STANDARDS)}
    assert {"color-contrast", "document-title", "html-has-lang", "image-alt", "link-name"} <= broken
    assert opened.measure("faint") == ["2.3 to 1: faint"]
    opened.page.close()


def test_no_rule_is_broken(pages, axe) -> None:
    for name, opened in pages.items():
        opened.show()
        assert violations(opened, axe, "tag", STANDARDS, color_contrast=False) == [], name


def test_no_rule_is_broken_by_a_listing(listings, context, axe) -> None:
    opened = open_page(context, listings["alder"])
    assert violations(opened, axe, "tag", STANDARDS) == []
    opened.page.close()


def test_a_telephone_can_be_used(pages, axe) -> None:
    for name, opened in pages.items():
        opened.show(width=390)
        assert violations(opened, axe, "rule", ON_A_TELEPHONE) == [], name


@SCHEMES
def test_text_stands_out(pages, scheme: str) -> None:
    for name, opened in pages.items():
        opened.show(scheme=scheme)
        assert opened.measure("faint") == [], name


@SCHEMES
@pytest.mark.parametrize("name", ["index.html", "portable-elder/report.html"])
def test_axe_finds_no_faint_text_either(pages, axe, name: str, scheme: str) -> None:
    pages[name].show(scheme=scheme)
    assert violations(pages[name], axe, "rule", ["color-contrast"]) == []
