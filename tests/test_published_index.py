"""The index in a real browser: ranked by any figure, filtered, complete without scripts."""

from __future__ import annotations

import re
from itertools import pairwise

import pytest
from opened_pages import open_page

FIGURE = re.compile(r"[-\u2212]?\d+(?:\.\d+)?")


@pytest.fixture
def index(published, context):
    """The index as it is when opened."""
    opened = open_page(context, published[1] / "index.html")
    opened.show()
    yield opened
    assert opened.complaints == []
    opened.page.close()


def builds(index, table: str = ".ranking") -> list[str]:
    """Names of the builds shown in a table, from the top."""
    return index.page.locator(f"{table} tbody tr:visible th a").all_inner_texts()


def status(index) -> str:
    return index.page.get_by_role("status").inner_text()


def heads(index) -> list[str]:
    return index.page.locator(".ranking thead th button").all_inner_texts()


def figures(index, head: int) -> list[float]:
    """Figures of the column below a head that ranks, those known, from the top."""
    label = "th:has(button)"
    place = index.page.locator(f".ranking thead {label}").nth(head)
    column = place.evaluate("(cell) => cell.cellIndex")
    texts = index.page.locator(f".ranking tbody td:nth-child({column + 1})").all_inner_texts()
    found = [FIGURE.match(text.strip()) for text in texts]
    known = [float(match[0].replace("\u2212", "-")) for match in found if match]
    assert all(found[: len(known)]), "what is not known comes last"
    return known


def test_at_first_the_most_efficient_is_on_top(index) -> None:
    efficiency = figures(index, 1)
    assert len(efficiency) == 7  # one build has no efficiency
    assert efficiency == sorted(efficiency, reverse=True)
    assert status(index) == "8 of 8 builds shown. Order: Efficiency, best first."
    assert builds(index) == builds(index, ".grid")


def test_every_head_ranks_and_turns_round(index) -> None:
    count = len(heads(index))
    assert count >= 4
    for place in range(1, count):
        button = index.page.locator(".ranking thead button").nth(place)
        if button.locator("xpath=..").get_attribute("aria-sort") is None:
            button.click()
        for words in ("best first", "worst first"):
            assert status(index).endswith(f", {words}.")
            order = sorted_as(index, place)
            found = figures(index, place)
            pairs = list(pairwise(found))
            assert len(found) >= 7
            assert all(a <= b if order == "ascending" else a >= b for a, b in pairs), place
            assert builds(index) == builds(index, ".grid")
            button.click()


def sorted_as(index, place: int) -> str:
    """The order that the one sorted head tells a screen reader."""
    said = index.page.locator(".ranking thead th[aria-sort]")
    assert said.count() == 1
    head = index.page.locator(".ranking thead th:has(button)").nth(place)
    assert head.get_attribute("aria-sort") == said.get_attribute("aria-sort")
    return said.get_attribute("aria-sort")


@pytest.mark.parametrize("key", ["Enter", "Space"])
def test_the_keyboard_ranks_by_name(index, key: str) -> None:
    index.page.locator(".ranking thead button").first.focus()
    index.page.keyboard.press(key)
    assert builds(index) == sorted(builds(index))
    assert status(index).endswith("Order: Build, A to Z.")
    assert index.page.evaluate("document.activeElement.tagName") == "BUTTON"


def test_words_filter_and_all_come_back(index) -> None:
    field = index.page.get_by_label("Find")
    field.fill("bir")
    assert builds(index) == builds(index, ".grid") == ["Birch"]
    assert status(index).startswith("1 of 8 builds shown.")
    field.fill("no such build")
    assert builds(index) == []
    assert status(index).startswith("0 of 8 builds shown.")
    index.page.get_by_role("button", name="Show all").click()
    index.page.wait_for_function("document.querySelector('[role=status]').textContent[0] == '8'")
    assert len(builds(index)) == 8
    assert field.input_value() == ""


@pytest.mark.parametrize(
    ("name", "label"), [("standing", "Against the baseline"), ("judgement", "Limits")]
)
def test_choices_part_the_builds(index, name: str, label: str) -> None:
    """Each choice shows the builds that its number tells of; none is in two of them."""
    choice = index.page.locator(f"select[name={name}]")
    assert choice.evaluate("(one) => one.labels[0].firstChild.data").strip() == label
    values = choice.locator("option").evaluate_all("(all) => all.map((one) => one.value)")
    shown = {}
    for value in values:
        choice.select_option(value)
        shown[value] = builds(index)
    everything = shown.pop("")
    assert len(everything) == 8
    parts = [build for found in shown.values() for build in found]
    assert all(shown.values())
    assert len(parts) == len(set(parts)) <= 8


def test_what_moves_is_told_and_has_names(index) -> None:
    search = index.page.get_by_role("search")
    assert search.count() == 1
    for field in search.locator("input, select").all():
        assert field.evaluate("(one) => one.labels[0].innerText.trim().length") > 3
    for button in index.page.get_by_role("button").all():
        box = button.bounding_box()
        assert min(box["width"], box["height"]) >= 24  # WCAG 2.2, 2.5.8


def test_the_index_is_complete_without_scripts(index, published, chromium) -> None:
    rows = "tbody tr:visible"
    with chromium.new_context(java_script_enabled=False) as context:
        page = context.new_page()
        page.goto((published[1] / "index.html").as_uri())
        plain = page.locator(rows).all_inner_texts()
        assert page.locator("form:visible, button:visible").count() == 0
    assert plain == index.page.locator(rows).all_inner_texts()
    assert len(plain) >= 16
