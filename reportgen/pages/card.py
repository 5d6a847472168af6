"""The card of a build: one page of paper, and two pictures for a listing."""

from __future__ import annotations

from dataclasses import dataclass, replace

from markupsafe import Markup

from reportgen.model import BenchSheet
from reportgen.pages.card_chart import BandPlace, chart_height, draw_bands, rows_shown
from reportgen.pages.card_picture import draw_square, draw_wide
from reportgen.pages.drawing import Drawing, Letters, drawable_text, new_drawing
from reportgen.pages.kit_words import (
    SHORT_CAUTION,
    SIMULATED,
    BandLine,
    KitWords,
    below_headline,
    card_facts,
)
from reportgen.pages.line_breaks import ELLIPSIS, kept_text
from reportgen.pages.pdf import write_pdf
from reportgen.pages.templates import read_style, render

_ROOM_PT = {"A4": (482.0, 714.0), "Letter": (498.0, 664.0)}
"""Width and height between the margins of `card.css`."""
_NAMES = (("short", 38.0, 41.0, 1), ("long", 26.0, 28.0, 2), ("longer", 17.0, 18.5, 3))
"""Class, letters, line and most lines of a name."""
_LETTERS_PT = 10.0
_ROW_PT = (11.0, 19.0)
_LABELS_PT = 80.0
_FACT_LINES = {"Power": 4}


@dataclass(frozen=True, kw_only=True, slots=True)
class CardPage:
    """Everything that the template of a card prints, as text cut to the lines it may have."""

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
    width, height = _ROOM_PT[bench.paper]
    page, used = _page(words, width, program_version)
    chart = _chart(words, width, height - used, bench.locale)
    style = Markup(read_style("card.css"))  # our own style sheet
    text = render("card.html", page=page, paper=False, style=style)
    return write_pdf(text, {"bands": chart.svg()}, bench.paper)


def _chart(words: KitWords, width: float, height: float, locale: str) -> Drawing:
    """The bands, in rows as high as the page leaves room for."""
    least, most = _ROW_PT
    row = (height - chart_height(words, _LETTERS_PT, 0)) / rows_shown(words)
    row = min(max(row, least), most)
    letters = min(_LETTERS_PT, row / 1.25)
    drawing = new_drawing(width, chart_height(words, letters, row))
    place = BandPlace(left=0, top=0, width=width, letters=letters, row=row)
    draw_bands(drawing, words, place, locale)
    return drawing


def _page(words: KitWords, width: float, program_version: str) -> tuple[CardPage, float]:
    """The page, and the height of all that stands on it beside the chart."""
    name_size, name, used = _name(words, width)
    publisher, _ = _kept(words.publisher, Letters(size=10.0), width, 1)
    summary, summary_lines = _kept(words.summary, Letters(size=10.5), width, 2)
    coverage, coverage_lines = _kept(words.coverage, Letters(size=9.0), width, 2)
    facts, facts_height = _facts(words, width - _LABELS_PT)
    used += 24 * bool(words.publisher) + 23 + 32 * words.simulated
    used += 106 if words.drawn == "efficiency_ratio" else 134
    used += (5 + 14 * summary_lines) * bool(summary) + (6 + 12 * coverage_lines) * bool(coverage)
    page = CardPage(
        words=replace(words, name=name, publisher=publisher, summary=summary, coverage=coverage),
        name_size=name_size,
        below=below_headline(words),
        alt=bands_alt(words),
        facts=facts,
        caution=SHORT_CAUTION,
        program_version=program_version,
    )
    return page, used + facts_height


def _kept(text: str, letters: Letters, room: float, most: int) -> tuple[str, int]:
    """What of a text fits into so many lines, and how many it takes."""
    return kept_text(drawable_text(text), most, room, letters.width)


def _name(words: KitWords, width: float) -> tuple[str, str, float]:
    """A class of the style sheet, the name as it is shown, and the height that it takes."""
    for look, size, line, most in _NAMES:
        letters = Letters(size=size, face="Semibold")
        name, lines = _kept(words.name, letters, width, most)
        found = (look, name, line * lines)
        if not name.endswith(ELLIPSIS):
            break
    return found


def _facts(words: KitWords, room: float) -> tuple[tuple[tuple[str, str, str], ...], float]:
    """The facts as they are shown, and the height that they take."""
    letters, found, height = Letters(size=9.5), [], 16.0
    for label, text, accent in card_facts(words):
        shown, lines = _kept(text, letters, room, _FACT_LINES.get(label, 2))
        found.append((label, shown, accent))
        height += 5.7 + 12.4 * lines
    return tuple(found), height


# --- pictures --------------------------------------------------------------------------------


def card_pictures(words: KitWords, locale: str) -> tuple[bytes, bytes]:
    """The card as PNG, 1200 by 630 and 1200 by 1200; their text fields say what they show."""
    told = {"Title": drawable_text(words.name), "Description": picture_alt(words)}
    return draw_wide(words, locale).png(told), draw_square(words, locale).png(told)


# --- in words --------------------------------------------------------------------------------


def bands_alt(words: KitWords) -> str:
    """The chart in words: every band."""
    lossy = words.drawn == "efficiency_ratio"
    opening = "Dot chart of mean efficiency" if lossy else "Dot chart of the worst SWR"
    sure = ", with 95\u00a0% intervals" if words.intervals else ""
    bands = "; ".join(_band_words(band, lossy) for band in words.bands)
    return drawable_text(f"{opening} by band{sure}: {bands or 'none'}.")


def _band_words(band: BandLine, lossy: bool) -> str:
    if band.reason:
        return f"{band.name} not measured"
    efficiency = f"{band.efficiency.strip()}\u00a0%, " if lossy else ""
    return f"{band.name} {efficiency}worst SWR {band.swr.strip()}"


def picture_alt(words: KitWords) -> str:
    """A picture of the card in words, for those who do not see it."""
    head = words.headline
    simulated = f" {SIMULATED[0]}" if words.simulated else ""
    lines = " ".join(f"{line.rstrip('.')}." for line in below_headline(words))
    facts = " ".join(f"{label}: {text.rstrip('.')}." for label, text, _ in card_facts(words))
    return drawable_text(
        f"{words.name}, {words.ratio}, {words.turns}.{simulated} {head.label}: {head.figure}. "
        f"{lines} {bands_alt(words)} {facts} {SHORT_CAUTION}"
    )
