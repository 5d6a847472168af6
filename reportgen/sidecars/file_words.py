"""What the name of a sweep file says: set-up and units, as people at a bench name their files."""

from __future__ import annotations

import re
from dataclasses import dataclass
from itertools import pairwise

from reportgen.model import Setup

_WORDS: dict[int, dict[Setup, set[str]]] = {
    1: {
        Setup.ANTENNA: {"antenna", "ant", "aerial", "wire"},
        Setup.OPEN: {"open"},
        Setup.SHORT: {"short", "shorted"},
        Setup.LOAD_CHECK: {"check", "checks", "bare", "resistor", "loadcheck"},
        Setup.LOAD: {"load", "loaded", "loads", "terminated"},
    },
    2: {
        Setup.THRU_CHECK: {"thru", "through", "fixture"},
        Setup.BACK_TO_BACK: {"pair", "pairs", "b2b", "back", "backtoback"},
        Setup.DIRECT: {"direct", "straight"},
        Setup.SERIES_RESISTOR: {"series", "resistor"},
        Setup.RESISTOR_CHECK: {"check", "checks", "bare", "resistor"},
    },
}
_PAIR = re.compile(r"([a-h])([a-h])")
_UNIT = re.compile(r"(?:unit|no|nr)([a-z]|\d{1,3})|([a-h])")
_NUMBERED = {"unit", "no", "nr"}


@dataclass(frozen=True, kw_only=True, slots=True)
class FileWords:
    """Set-ups that a name may speak of, the likeliest first, and units."""

    setups: tuple[Setup, ...]
    units: tuple[str, ...]


def words_of_file(file: str, ports: int) -> FileWords:
    """What the name of a sweep of so many ports says, the folders above it included."""
    words = _split(file)
    setups = tuple(setup for setup, known in _WORDS[ports].items() if known & set(words))
    return FileWords(setups=setups, units=_units(words))


def _split(file: str) -> list[str]:
    """Words of a path in small letters, without its suffix; `unit 1` in one."""
    stem = file.rpartition(".")[0].casefold()
    words = [word for word in re.split(r"[^a-z0-9]+", stem) if word]
    return [
        f"{word}{after}" if word in _NUMBERED else word for word, after in pairwise([*words, ""])
    ]


def _units(words: list[str]) -> tuple[str, ...]:
    """Units in the order in which the name has them: `ab`, `a-b`, `unit1`."""
    for word in words:
        pair = _PAIR.fullmatch(word)
        if pair and pair[1] != pair[2]:
            return pair[1].upper(), pair[2].upper()
    found = [match[1] or match[2] for word in words if (match := _UNIT.fullmatch(word))]
    return tuple(dict.fromkeys(name.upper() for name in found))
