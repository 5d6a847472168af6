"""Foreign text broken into lines that fit, by whatever measures their width."""

from __future__ import annotations

import unicodedata
from collections.abc import Callable, Iterator, Sequence

Measure = Callable[[str], float]
ELLIPSIS = "\u2026"


def broken(text: str, room: float, measure: Measure) -> list[str]:
    """Lines no wider than the room; a word that is wider by itself is cut."""
    lines: list[str] = []
    for piece in _pieces(text, room, measure):
        longer = f"{lines[-1]} {piece}" if lines else piece
        if lines and measure(longer) <= room:
            lines[-1] = longer
        else:
            lines.append(piece)
    return lines


def _pieces(text: str, room: float, measure: Measure) -> Iterator[str]:
    for word in text.split(" "):
        rest = word
        while len(rest) > 1 and measure(rest) > room:
            kept = 1
            while measure(rest[: kept + 1]) <= room:
                kept += 1
            yield rest[:kept]
            rest = rest[kept:]
        if rest:
            yield rest


def first_lines(lines: Sequence[str], most: int, room: float, measure: Measure) -> list[str]:
    """The first few lines; an ellipsis ends them where some are left out."""
    if len(lines) <= most:
        return list(lines)
    last = lines[most - 1]
    while last and measure(last + ELLIPSIS) > room:
        last = last[:-1]
    return [*lines[: most - 1], last.rstrip() + ELLIPSIS]


def kept_text(text: str, most: int, room: float, measure: Measure) -> tuple[str, int]:
    """What of a text fits into so many lines, an ellipsis where that is not all; its lines."""
    lines = broken(text, room, measure)
    if len(lines) <= most:
        return text, len(lines)
    end = 0
    for line in (kept := first_lines(lines, most, room, measure)):
        end = text.index(line.removesuffix(ELLIPSIS), end) + len(line.removesuffix(ELLIPSIS))
    return text[:end] + ELLIPSIS, len(kept)


def shortened(text: str, most: int) -> str:
    """A text of at most so many characters; an ellipsis ends it where some are left out."""
    return text if len(text) <= most else text[: most - 1].rstrip() + ELLIPSIS


def columns_of(text: str) -> int:
    """Columns that a text takes where all letters are equally wide.

    References
    ----------
    Unicode Standard Annex 11: wide and fullwidth letters take two. Combining marks take none.
    """
    return sum(
        0 if unicodedata.combining(letter) else 2 if _is_wide(letter) else 1 for letter in text
    )


def _is_wide(letter: str) -> bool:
    return unicodedata.east_asian_width(letter) in ("W", "F")
