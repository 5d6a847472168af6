"""The listing of a build, to paste into a shop: Markdown, HTML and plain text of the same words."""

from __future__ import annotations

import re
from collections.abc import Iterator, Sequence
from dataclasses import dataclass

from reportgen.pages.display import DASH, NOT_MEASURED
from reportgen.pages.kit_words import (
    CAUTIONS,
    INTERVALS,
    SIMULATED,
    BandLine,
    KitWords,
    below_headline,
)
from reportgen.pages.line_breaks import broken, columns_of, first_lines
from reportgen.pages.plain_text import clean_text
from reportgen.pages.templates import render

TEXT_COLUMNS = 72
_LONGEST_BAND = 20
_LOSSY = (("efficiency", "Efficiency, %"), ("heat_loss", "Heat loss, dB"), ("swr", "Worst SWR"))
_MATCH = (("swr", "Worst SWR"),)


@dataclass(frozen=True, kw_only=True, slots=True)
class ListingRow:
    """A band's figures, or the words that stand instead of them."""

    name: str
    figures: tuple[str, ...] = ()
    words: str = ""


@dataclass(frozen=True, kw_only=True, slots=True)
class ListingTable:
    """The band table of a listing."""

    heads: tuple[str, ...]
    rows: tuple[ListingRow, ...]


def listing_table(words: KitWords) -> ListingTable:
    """Efficiency and heat loss with their intervals, and worst SWR, by band."""
    columns = _LOSSY if words.drawn == "efficiency_ratio" else _MATCH
    return ListingTable(
        heads=tuple(label for _, label in columns),
        rows=tuple(_row(band, [key for key, _ in columns]) for band in words.bands),
    )


def _row(band: BandLine, keys: Sequence[str]) -> ListingRow:
    if band.reason:
        return ListingRow(name=band.name, words=f"{NOT_MEASURED}: {band.reason}")
    texts = (getattr(band, key) for key in keys)
    return ListingRow(
        name=band.name,
        figures=tuple(DASH if text.strip() == NOT_MEASURED else text for text in texts),
    )


def listing_notes(words: KitWords) -> tuple[str, ...]:
    """What must be known to read the table."""
    intervals = (INTERVALS,) if words.intervals and words.drawn == "efficiency_ratio" else ()
    return (*intervals, *(f"{band.name}: {band.note}." for band in words.bands if band.note))


def listing_headline(words: KitWords) -> tuple[str, str]:
    """Efficiency, and how sure it is; or that it was not measured, and why."""
    stop = "." if words.no_loss else ""
    rest = "; ".join(below_headline(words)).rstrip(".")
    return f"{words.headline.label}: {words.headline.figure}{stop}", f"{rest}."


def listing_facts(words: KitWords) -> tuple[tuple[str, str], ...]:
    """Label, or none, and words of each paragraph below the table."""
    on = f", {words.measured_on}" if words.measured_on else ""
    by = f" by {words.publisher}" if words.publisher else ""
    facts = (
        ("Worst SWR", f"{words.worst_swr}."),
        ("Power", words.power),
        ("How measured", f"{words.method}{on}{by}."),
    )
    return tuple((label, text) for label, text in facts if text)


# --- HTML ------------------------------------------------------------------------------------


def render_listing_html(words: KitWords) -> bytes:
    """A piece of a page; letters beyond ASCII as references, so that no editor garbles them."""
    text = render(
        "listing.html",
        words=words,
        headline=listing_headline(words),
        simulated=SIMULATED,
        table=listing_table(words),
        notes=listing_notes(words),
        facts=listing_facts(words),
        cautions=CAUTIONS,
    )
    return text.encode("ascii", "xmlcharrefreplace")


# --- Markdown --------------------------------------------------------------------------------

_MARKUP = re.compile(r"([\\`*_\[\]|~#$!^{}])")
_LIST_MARK = re.compile(r"^([-+=]|\d+(?=[.)](?:\s|$)))")
_LINK = re.compile(r"(:(?=\S)|@|(?<=www)\.)", re.IGNORECASE)
_ENTITIES = str.maketrans({"&": "&amp;", "<": "&lt;", ">": "&gt;"})


def markdown_text(text: str) -> str:
    """Foreign text that no Markdown reader takes for markup, HTML or an address."""
    plain = _MARKUP.sub(r"\\\1", clean_text(text).translate(_ENTITIES))
    plain = _LINK.sub(lambda found: f"&#{ord(found[0])};", plain)
    return _LIST_MARK.sub(lambda found: f"&#{ord(found[0][0])};{found[0][1:]}", plain)


def render_listing_markdown(words: KitWords) -> bytes:
    """Markdown with a pipe table."""
    return ("\n\n".join(_markdown_blocks(words)) + "\n").encode("utf-8")


def _markdown_blocks(words: KitWords) -> Iterator[str]:
    safe = markdown_text
    yield f"## {safe(words.name)}"
    if words.summary:
        yield safe(words.summary)
    if words.simulated:
        yield f"**{SIMULATED[0]}** {SIMULATED[1]}"
    yield (
        f"{safe(words.ratio)}, {safe(words.turns)}. Capacitor: {safe(words.capacitor)}. "
        f"Core: {safe(words.core)}."
    )
    bold, rest = listing_headline(words)
    yield f"**{safe(bold)}** {safe(rest)}"
    yield _markdown_table(listing_table(words))
    yield from map(safe, listing_notes(words))
    for label, text in listing_facts(words):
        yield f"**{label}.** {safe(text)}" if label else safe(text)
    if words.parts:
        yield "**In the kit**"
        yield "\n".join(f"- {safe(part)}" for part in words.parts)
    yield "**Cautions**"
    yield "\n".join(f"- {safe(caution)}" for caution in CAUTIONS)
    yield safe(words.provenance)


def _markdown_table(table: ListingTable) -> str:
    lines = [("Band", *table.heads), ("---", *("---:" for _ in table.heads))]
    for row in table.rows:
        cells = row.figures or (row.words, *("" for _ in table.heads[1:]))
        texts = (" ".join(text.split()) for text in (row.name, *cells))  # padding goes
        lines.append(tuple(map(markdown_text, texts)))
    return "\n".join(f"| {' | '.join(line)} |" for line in lines)


# --- plain text ------------------------------------------------------------------------------


def render_listing_text(words: KitWords) -> bytes:
    """Plain text, at most 72 columns wide, in UTF-8."""
    return ("\n\n".join(_text_blocks(words)) + "\n").encode("utf-8")


def _text_blocks(words: KitWords) -> Iterator[str]:
    name = _wrapped(words.name)
    yield f"{name}\n{'=' * min(TEXT_COLUMNS, max(map(columns_of, name.splitlines())))}"
    if words.summary:
        yield _wrapped(words.summary)
    if words.simulated:
        yield _wrapped(" ".join(SIMULATED).upper())
    yield _wrapped(
        f"{words.ratio}, {words.turns}. Capacitor: {words.capacitor}. Core: {words.core}."
    )
    yield _wrapped(" ".join(listing_headline(words)))
    yield _text_table(listing_table(words))
    for text in listing_notes(words):
        yield _wrapped(text)
    for label, text in listing_facts(words):
        yield _wrapped(f"{label}: {text}" if label else text)
    if words.parts:
        yield "In the kit\n" + "\n".join(_item(part) for part in words.parts)
    yield "Cautions\n" + "\n".join(_item(caution) for caution in CAUTIONS)
    yield _wrapped(words.provenance)


def _typed(text: str) -> str:
    """Text as a typewriter has it: cleaned, every space an ordinary one."""
    return re.sub("[\u00a0\u2007\u2009]", " ", clean_text(text))


def _wrapped(text: str, room: int = TEXT_COLUMNS) -> str:
    return "\n".join(broken(_typed(text), room, columns_of))


def _item(text: str) -> str:
    return "- " + _wrapped(text, TEXT_COLUMNS - 2).replace("\n", "\n  ")


def _text_table(table: ListingTable) -> str:
    """Columns of figures set to the right, names to the left."""
    cells = [table.heads, *(row.figures for row in table.rows if row.figures)]
    widths = [max(len(line[place]) for line in cells) for place in range(len(table.heads))]
    room = min(_LONGEST_BAND, TEXT_COLUMNS - sum(widths) - 2 * len(widths))
    names = ["Band", *(_name(row, room) for row in table.rows)]
    first = max(map(columns_of, names))
    lines = [_text_line(names[0], first, table.heads, widths)]
    lines.append("-" * columns_of(lines[0]))
    for name, row in zip(names[1:], table.rows, strict=True):
        if row.figures:
            lines.append(_text_line(name, first, row.figures, widths))
        else:
            words = _wrapped(row.words, TEXT_COLUMNS - first - 2).splitlines()
            lines += [
                _padded("" if index else name, first) + "  " + one
                for index, one in enumerate(words)
            ]
    return "\n".join(lines)


def _name(row: ListingRow, room: int) -> str:
    name = _typed(row.name)
    return name if columns_of(name) <= room else first_lines([name, ""], 1, room, columns_of)[0]


def _text_line(name: str, first: int, texts: Sequence[str], widths: Sequence[int]) -> str:
    figures = (f"{text:>{width}}" for text, width in zip(texts, widths, strict=True))
    line = "  ".join((_padded(name, first), *figures))
    return re.sub("[\u00a0\u2007\u2009]", " ", line).rstrip()


def _padded(text: str, columns: int) -> str:
    return text + " " * (columns - columns_of(text))
