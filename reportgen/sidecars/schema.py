"""JSON Schema of both sidecars, draft 2020-12, for editors that check and complete TOML.

It knows keys, kinds and ranges. What hangs together across keys (a load that nobody defines, a
file that is not there) is told by `inspect` alone.
"""

from __future__ import annotations

import json
from typing import Any

from pydantic import TypeAdapter

from reportgen.model import BenchSheet, BuildSheet, Setup, Sheet
from reportgen.sidecars.key_words import KEYS, SETUP_WORDS, SHEET_TITLES

DIALECT = "https://json-schema.org/draft/2020-12/schema"

Schema = dict[str, Any]


def schema_text(of: str) -> str:
    """JSON Schema of `build.toml` ("build") or `runs.toml` ("runs")."""
    kind = {"build": BuildSheet, "runs": BenchSheet}[of]
    return json.dumps(sidecar_schema(kind), indent=2, ensure_ascii=False)


def sidecar_schema(kind: type[Sheet]) -> Schema:
    """The schema of `BenchSheet` or `BuildSheet`, titles and descriptions in words."""
    whole: Schema = TypeAdapter(kind).json_schema()
    parts = whole.pop("$defs")
    by_name = {sheet.__name__: sheet for sheet in KEYS}
    described = {
        name: _setups(part) if name == Setup.__name__ else _table(part, by_name[name])
        for name, part in parts.items()
    }
    return {"$schema": DIALECT, **_table(whole, kind), "$defs": described}


def _table(table: Schema, kind: type[Sheet]) -> Schema:
    """One table, its keys described."""
    words = KEYS[kind]
    properties = {
        name: _key(schema, words[name].words, words[name].example)
        for name, schema in table["properties"].items()
    }
    return {**table, "title": SHEET_TITLES[kind], "properties": properties}


def _key(schema: Schema, words: str, example: Any) -> Schema:
    """One key. TOML has no null: what may be left out just has no default."""
    described = {name: value for name, value in schema.items() if name != "title"}
    kinds = [one for one in described.pop("anyOf", []) if one != {"type": "null"}]
    if len(kinds) == 1:
        described |= kinds[0]
    elif kinds:
        described["anyOf"] = kinds
    if described.get("default", 0) in (None, "", [], {}):
        del described["default"]
    if isinstance(example, str | int | float | list | dict):
        described["examples"] = [example]
    return {"description": words, **described}


def _setups(schema: Schema) -> Schema:
    meanings = "; ".join(f"{setup.value}: {words}" for setup, words in SETUP_WORDS.items())
    return {**schema, "title": "Set-up", "description": meanings}
