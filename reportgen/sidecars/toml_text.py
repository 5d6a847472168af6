"""Values, keys and comments as TOML has them, whatever characters are in them."""

from __future__ import annotations

import json
import re
from datetime import date
from typing import Any

from reportgen.pages.plain_text import clean_text

_WIDTH = 98
_COLUMN = 31
_BARE = re.compile(r"[A-Za-z0-9_-]+", re.ASCII)


def toml_value(value: Any) -> str:
    """A value on one line."""
    if isinstance(value, str):
        return json.dumps(str(value), ensure_ascii=False).replace("\x7f", "\\u007f")
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, date):
        return value.isoformat()
    if isinstance(value, list | tuple):
        return f"[{', '.join(map(toml_value, value))}]"
    if isinstance(value, dict):
        return f"{{ {', '.join(f'{toml_key(k)} = {toml_value(v)}' for k, v in value.items())} }}"
    return repr(value)


def toml_key(name: str) -> str:
    """A key, in quotes where TOML wants them."""
    return name if _BARE.fullmatch(name) else toml_value(name)


def comment(text: str) -> list[str]:
    """A comment, broken into lines; foreign text in it can end no line."""
    lines = [""]
    for word in clean_text(text).split(" "):
        if lines[-1] and len(lines[-1]) + len(word) + 1 > _WIDTH:
            lines.append("")
        lines[-1] = f"{lines[-1]} {word}".lstrip()
    return [f"# {line}" for line in lines]


def entry(key: str, value: Any, words: str = "", *, in_use: bool = True) -> list[str]:
    """A key with its value, and what is to be said of it behind, or above where it is long.

    Out of use it stands behind a `#` without a blank, which is to be taken away.
    """
    line = ("" if in_use else "#") + f"{toml_key(key)} = {toml_value(value)}"
    said = clean_text(words)
    if len(said) + _COLUMN + 3 > _WIDTH:
        return [*comment(said), line]
    return [f"{line:<{_COLUMN}} # {said}" if said else line]
