"""Foreign text, made safe to look at: what cannot be seen is shown by its code point.

References
----------
.. [1] Unicode Standard Annex 44, general categories; DerivedCoreProperties.txt,
       Default_Ignorable_Code_Point.
"""

from __future__ import annotations

import re
import unicodedata
from collections.abc import Iterable

LONGEST_TEXT = 2000

_INVISIBLE_CATEGORIES = frozenset({"Cc", "Cf", "Cs", "Co", "Cn", "Zl", "Zp"})
_INVISIBLE_RANGES = (
    (0x034F, 0x034F),
    (0x115F, 0x1160),
    (0x17B4, 0x17B5),
    (0x180B, 0x180F),
    (0x2800, 0x2800),  # not ignorable by [1], and blank all the same
    (0x3164, 0x3164),
    (0xFE00, 0xFE0F),
    (0xFFA0, 0xFFA0),
    (0xE0000, 0xE0FFF),
)
# Most text: nothing in it needs a closer look, which takes long.
_PLAIN = re.compile("[ -~\u00a0-\u00ac\u00ae-\u017f\u2007\u2009\u2013\u2212]*")
_BLANKS = re.compile(r"[\t\r\n\f\v ]+")
_LINE_END = re.compile(r"\r\n?|\n")
_STACKED_MARKS = 3
_SPACES = "\u0020\u00a0\u2007\u2009"  # those that numbers are set with


def clean_text(text: str) -> str:
    """Foreign text made safe to look at: what cannot be seen is shown as `[U+202E]`.

    Control, format, bidirectional, private and unassigned characters and blank look-alikes
    become visible, runs of blanks one space, piles of combining marks are cut at three. What is
    longer than 2000 characters is cut, marked by an ellipsis.
    """
    composed = unicodedata.normalize("NFC", _BLANKS.sub(" ", _cut(text)))
    if _PLAIN.fullmatch(composed):
        return composed.strip(" ")
    return _cut("".join(_visible(_unpiled(composed))).strip(" "))


def _cut(text: str) -> str:
    return text if len(text) <= LONGEST_TEXT else text[: LONGEST_TEXT - 1] + "…"


def text_lines(text: str) -> tuple[str, ...]:
    """The lines of a longer text, without the empty ones."""
    return tuple(line for line in _LINE_END.split(text[:LONGEST_TEXT]) if line.strip())


def _unpiled(text: str) -> Iterable[str]:
    marks = 0
    for character in text:
        marks = marks + 1 if unicodedata.category(character) in ("Mn", "Me") else 0
        if marks <= _STACKED_MARKS:
            yield character


def _visible(characters: Iterable[str]) -> Iterable[str]:
    for character in characters:
        if unicodedata.category(character) == "Zs":
            yield character if character in _SPACES else " "
        else:
            yield f"[U+{ord(character):04X}]" if _invisible(character) else character


def _invisible(character: str) -> bool:
    if unicodedata.category(character) in _INVISIBLE_CATEGORIES:
        return True
    return any(low <= ord(character) <= high for low, high in _INVISIBLE_RANGES)
