"""Published pages in a real browser: nothing fails, nothing is fetched, nothing is out of reach.

WCAG 2.2, success criteria 1.4.10 (reflow at 320 px), 2.1.1 (keyboard), 2.4.7 (focus visible).
"""

from __future__ import annotations

import pytest
from opened_pages import Opened, open_page

from reportgen.pages.look import DARK, LIGHT

SCHEMES = pytest.mark.parametrize("scheme", ["light", "dark"])
NARROWEST_SHOP = 480  # px: what a shop leaves for the words beside its pictures
PAPER_WIDTH = 718  # px of 1/96 in: A4 less two margins of 10 mm


def problems(pages: dict[str, Opened], **shown: object) -> list[tuple[str, str]]:
    """What is out of reach, cut off or covered, page by page."""
    found = []
    for name, opened in pages.items():
        opened.show(**shown)
        found += [(name, sentence) for sentence in opened.measure("problems")]
    return found


# --- what is asked for, and what goes wrong ------------------------------------------------------


def test_every_page_is_looked_at(pages, published, listings) -> None:
    assert len(pages) + len(listings) == len(list(published[1].rglob("*.html")))
    assert "index.html" in pages
    assert len(pages) >= 9


def test_a_page_asks_for_nothing_but_itself(pages) -> None:
    for opened in pages.values():
        others = [url for url in opened.asked_for if not url.startswith("data:")]
        assert others == [opened.page.url]


def test_nothing_goes_wrong(pages) -> None:
    assert {name: one.complaints for name, one in pages.items() if one.complaints} == {}


def test_letters_of_the_page_are_used(pages) -> None:
    for opened in pages.values():
        for face in ("400 16px", "600 16px"):
            assert opened.page.evaluate(f"document.fonts.check('{face} \"Source Sans Pro\"')")
        statuses = opened.page.evaluate("[...document.fonts].map((font) => font.status)")
        assert statuses == ["loaded", "loaded"]


def test_a_page_that_fetches_and_fails_is_noticed(context, tmp_path) -> None:
    path = tmp_path / "bad.html"
    path.write_text(
        "<!doctype html><title>x</title><img alt src='missing.png'><script>throw 1</script>"
        "<p style='position:absolute;left:380px;white-space:nowrap'>reaches beyond</p>"
        "<p style='position:absolute;left:380px;white-space:nowrap'>lies upon it</p>"
        "<div style='width:9px;height:1.2em;overflow:hidden;white-space:nowrap'>too long</div>"
        "<div class='unnamed' style='width:9px;overflow:auto;white-space:nowrap'>too long</div>"
    )
    bad = open_page(context, path)
    bad.show(width=390)
    assert (tmp_path / "missing.png").as_uri() in bad.asked_for
    assert len(bad.complaints) == 2
    assert bad.measure("problems") == [
        "the page is wider than its window: 118 px too many",
        "beyond the page: reaches beyond",
        "beyond the page: lies upon it",
        "cut off: too long",
        "one upon the other: reaches beyond / lies upon it",
        "scrolls without a name or the keyboard: unnamed",
    ]
    bad.page.close()


# --- room ----------------------------------------------------------------------------------------


@pytest.mark.parametrize("width", [320, 390, 768, 1280])
def test_everything_has_room(pages, width: int) -> None:
    assert problems(pages, width=width) == []


def test_a_page_can_be_printed(pages) -> None:
    assert problems(pages, width=PAPER_WIDTH, media="print") == []


def test_a_listing_can_be_pasted(listings, context) -> None:
    for name, path in listings.items():
        opened = open_page(context, path)
        opened.show(width=NARROWEST_SHOP)
        assert opened.measure("problems") == [], name
        assert opened.complaints == [], name
        assert opened.asked_for == [opened.page.url], name
        opened.page.close()


# --- light and dark ------------------------------------------------------------------------------


@SCHEMES
def test_the_page_follows_the_scheme_of_the_reader(pages, scheme: str) -> None:
    expected = {"light": LIGHT, "dark": DARK}[scheme]
    for opened in pages.values():
        opened.show(scheme=scheme)
        assert colours(opened) == [rgb(expected.paper), rgb(expected.ink)]


def test_paper_is_white_whatever_the_scheme(pages) -> None:
    for opened in pages.values():
        opened.show(media="print", scheme="dark")
        assert colours(opened) == [rgb(LIGHT.paper), rgb(LIGHT.ink)]


def colours(opened: Opened) -> list[str]:
    style = "getComputedStyle(document.body)"
    return opened.page.evaluate(f"[{style}.backgroundColor, {style}.color]")


def rgb(colour: str) -> str:
    return "rgb({}, {}, {})".format(*bytes.fromhex(colour.removeprefix("#")))


# --- keyboard ------------------------------------------------------------------------------------


@pytest.mark.parametrize("width", [390, 1280])
def test_the_keyboard_reaches_everything_and_shows_where_it_is(pages, width: int) -> None:
    for name, opened in pages.items():
        opened.show(width=width)
        count = opened.measure("fromTheTop")
        stops = []
        for _ in range(count):
            opened.page.keyboard.press("Tab")
            stops.append(opened.measure("focused"))
        assert [stop and stop["place"] for stop in stops] == list(range(count)), name
        assert all(stop["ring"] >= 2 and stop["inView"] for stop in stops), name
        assert {stop["colour"] for stop in stops} <= {rgb(LIGHT.match)}, name


def test_every_link_leads_somewhere(pages, published) -> None:
    for name, opened in pages.items():
        hrefs = "[...document.querySelectorAll('a')].map((one) => one.getAttribute('href'))"
        for href in opened.page.evaluate(hrefs):
            target, _, place = href.partition("#")
            assert not target or (published[1] / name).parent.joinpath(target).is_file(), href
            assert not place or opened.page.locator(f"#{place}").count() == 1, href
