"""A sheet of the model as the text of its sidecar; most defaults go without saying."""

from __future__ import annotations

import json
from collections.abc import Iterator
from dataclasses import MISSING, fields, is_dataclass
from datetime import date

from reportgen.model import Sheet

WORTH_SAYING = ("region", "grade", "stray_pf", "side", "tolerance_percent", "load_swr")


def sidecar_text(sheet: Sheet, comment: str) -> str:
    """TOML of a `BenchSheet` or `BuildSheet`, below a comment."""
    return "\n".join([f"# {comment}", "schema = 1", *_lines(_said(sheet), ""), ""])


def _said(sheet: Sheet) -> dict[str, object]:
    """What the sheet says beyond its defaults, and some of those."""
    values = {each.name: (getattr(sheet, each.name), each) for each in fields(sheet)}
    return {
        name: value
        for name, (value, each) in values.items()
        if name in WORTH_SAYING
        or value
        != (each.default_factory() if each.default_factory is not MISSING else each.default)
    }


def _lines(table: dict[str, object], path: str) -> Iterator[str]:
    """Plain keys first, tables behind them: TOML allows no other order."""
    for key, value in table.items():
        if not _is_table(value):
            yield f"{_key(key)} = {_plain(value)}"
    for key, value in table.items():
        below = f"{path}.{_key(key)}" if path else _key(key)
        if isinstance(value, dict) and all(map(_is_table, value.values())):
            yield from _lines(value, below)
        elif isinstance(value, tuple) and _is_table(value):
            for each in value:
                yield from ("", f"[[{below}]]", *_lines(_said(each), below))
        elif _is_table(value):
            inner = value if isinstance(value, dict) else _said(value)
            yield from ("", f"[{below}]", *_lines(inner, below))


def _is_table(value: object) -> bool:
    first = value[0] if isinstance(value, tuple) and value else value
    return is_dataclass(first) or isinstance(value, dict)


def _key(name: str) -> str:
    return name if name.replace("_", "").replace("-", "").isalnum() else json.dumps(name)


def _plain(value: object) -> str:
    if isinstance(value, date):
        return value.isoformat()
    if isinstance(value, tuple):
        return f"[{', '.join(map(_plain, value))}]"
    if isinstance(value, str):
        return json.dumps(str(value), ensure_ascii=False)
    return json.dumps(value)
