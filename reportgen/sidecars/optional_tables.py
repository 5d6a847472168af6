"""Tables that a sidecar may have, each key with an example, its meaning and its default."""

from __future__ import annotations

from dataclasses import MISSING, Field, fields
from typing import Any

from reportgen.model import Sheet
from reportgen.sidecars.key_words import KEYS
from reportgen.sidecars.toml_text import comment, entry, toml_value


def optional_table(heading: str, kind: type[Sheet], words: str) -> list[str]:
    """A whole table out of use, below a line that says what it is for.

    Parameters
    ----------
    heading : str
        With its brackets.
    kind : type of Sheet
        What may stand in it.
    words : str
        What it is for, and what holds without it.
    """
    names = [each.name for each in fields(kind)]  # type: ignore[arg-type]
    return ["", *comment(words), f"#{heading}", *optional_keys(kind, *names)]


def optional_keys(kind: type[Sheet], *names: str) -> list[str]:
    """Some keys of a table out of use: an example, its meaning, its default."""
    known: dict[str, Field[Any]] = {each.name: each for each in fields(kind)}  # type: ignore[arg-type]
    return [line for name in names for line in _optional_key(kind, known[name])]


def _optional_key(kind: type[Sheet], key: Field[Any]) -> list[str]:
    meaning = KEYS[kind][key.name]
    default = "" if key.default in (MISSING, None, "", ()) else f"; default {_plain(key.default)}"
    return entry(key.name, meaning.example, meaning.words + default, in_use=False)


def _plain(default: Any) -> str:
    return f"{default:g}" if isinstance(default, float) else toml_value(default)
