"""The card of a build: one page of paper, and two pictures for a listing."""

from __future__ import annotations

from dataclasses import dataclass, replace

from markupsafe import Markup

from reportgen.model import BenchSheet
from reportgen.pages.card_chart import BandPlace, chart_height, draw_bands
from reportgen.pages.card_picture import draw_square, draw_wide
from reportgen.pages.drawing import Drawing, drawable_text, new_drawing
from reportgen.pages.kit_words import (
    SHORT_CAUTION,
    SIMULATED,
    BandLine,
    KitWords,
    below_headline,
    card_facts,
)
from reportgen.pages.line_breaks import shortened
from reportgen.pages.pdf import write_pdf
from reportgen.pages.templates import read_style, render

_PAPER_WIDTH_PT = {"A4": 482.0, "Letter": 499.0}
_LETTERS_PT = 10.0
_ROWS_PT = (15.0, 19.0)
_ROOM_PT = 270.0
_LONGEST_NAME = 240
_LONGEST_SUMMARY = 240
_LONGEST_FACT = 240
_LONG_NAME, _LONGER_NAME = 24, 60


@dataclass(frozen=True, kw_only=True, slots=True)
class CardPage:
    """Everything that the template of a card prints, as text."""

    words: KitWords
    name_size: str
    below: tuple[str, ...]
    alt: str
    facts: tuple[tuple[str, str, str], ...]
    caution: str
    program_version: str


def render_card_pdf(words: KitWords, bench: BenchSheet, program_version: str) -> bytes:
    """The card as one tagged page on the bench's paper.

    Raises
    ------
    OutputError
        The page could not be set without a complaint.
    """
    name = drawable_text(words.name)
    page = CardPage(
        words=replace(
            words,
            name=shortened(name, _LONGEST_NAME),
            summary=shortened(drawable_text(words.summary), _LONGEST_SUMMARY),
            publisher=shortened(drawable_text(words.publisher), _LONGEST_NAME),
        ),
        name_size=_name_size(name),
        below=below_headline(words),
        alt=bands_alt(words),
        facts=tuple(
            (label, shortened(drawable_text(text), _LONGEST_FACT), accent)
            for label, text, accent in card_facts(words)
        ),
        caution=SHORT_CAUTION,
        program_version=program_version,
    )
    style = Markup(read_style("card.css"))  # our own style sheet
    text = render("card.html", page=page, paper=False, style=style)
    return write_pdf(text, {"bands": _chart(words, bench).svg()}, bench.paper)


def _name_size(name: str) -> str:
    """A class of the style sheet: long names are set smaller."""
    if len(name) > _LONGER_NAME:
        return "longer"
    return "long" if len(name) > _LONG_NAME else "short"


def _chart(words: KitWords, bench: BenchSheet) -> Drawing:
    low, high = _ROWS_PT
    row = min(high, max(low, _ROOM_PT / max(len(words.bands), 1)))
    width = _PAPER_WIDTH_PT[bench.paper]
    drawing = new_drawing(width, chart_height(words, _LETTERS_PT, row))
    place = BandPlace(left=0, top=0, width=width, letters=_LETTERS_PT, row=row)
    draw_bands(drawing, words, place, bench.locale)
    return drawing


def card_pictures(words: KitWords, locale: str) -> tuple[bytes, bytes]:
    """The card as PNG, 1200 by 630 and 1200 by 1200; their text fields say what they show."""
    told = {"Title": drawable_text(words.name), "Description": picture_alt(words)}
    return draw_wide(words, locale).png(told), draw_square(words, locale).png(told)


# --- in words ------------------------------------------------------------------------------------


def bands_alt(words: KitWords) -> str:
    """The chart in words: every band."""
    lossy = words.drawn == "efficiency_ratio"
    opening = "Dot chart of mean efficiency" if lossy else "Dot chart of the worst SWR"
    bands = "; ".join(_band_words(band, lossy) for band in words.bands)
    return drawable_text(f"{opening} by band, with 95\u00a0% intervals: {bands}.")


def _band_words(band: BandLine, lossy: bool) -> str:
    if band.reason:
        return f"{band.name} not measured"
    efficiency = f"{band.efficiency.strip()}\u00a0%, " if lossy else ""
    return f"{band.name} {efficiency}worst SWR {band.swr.strip()}"


def picture_alt(words: KitWords) -> str:
    """A picture of the card in words, for those who do not see it."""
    head = words.headline
    simulated = f" {SIMULATED[0]}" if words.simulated else ""
    lines = " ".join(f"{line}." for line in below_headline(words))
    facts = " ".join(f"{label}: {text.rstrip('.')}." for label, text, _ in card_facts(words))
    return drawable_text(
        f"{words.name}, {words.ratio}, {words.turns}.{simulated} {head.label}: {head.figure}. "
        f"{lines} {bands_alt(words)} {facts} {SHORT_CAUTION}"
    )
