"""JSON Schema of both sidecars: valid itself, and of one mind with the reader about shape."""

from __future__ import annotations

import json
import tomllib
from dataclasses import fields
from datetime import date
from functools import cache
from pathlib import Path
from typing import Any

import pytest
from jsonschema import Draft202012Validator

from reportgen.__main__ import main
from reportgen.intake.sidecar_shape import check_shape
from reportgen.model import BenchSheet, BuildSheet, Setup, Sheet
from reportgen.sidecars.key_words import KEYS, SETUP_WORDS, SHEET_TITLES
from reportgen.sidecars.schema import sidecar_schema

ROOT = Path(__file__).parents[1]
TESTS = ROOT / "tests"
KINDS: dict[str, type[Sheet]] = {"build.toml": BuildSheet, "runs.toml": BenchSheet}
GOOD = sorted(
    path
    for root in (ROOT / "example_runs", TESTS / "accepted_sidecars")
    for path in root.rglob("*.toml")
)
NO_TOML = {"not-toml", "same-table-twice", "latin-1-sidecar"}
BAD = sorted(
    path
    for path in (TESTS / "bad_runs").rglob("*.toml")
    if path.name in KINDS and not NO_TOML & set(path.parts)
)
SHAPE_IS_WRONG = {"later-schema", "misspelt-keys", "quoted-number", "wrong-kinds"}


def name_of(path: Path) -> str:
    return path.relative_to(ROOT).as_posix()


@cache
def validator_of(file: str) -> Draft202012Validator:
    return Draft202012Validator(sidecar_schema(KINDS[file]))


def complaints(path: Path) -> list[str]:
    """Where the schema finds fault with a sidecar; dates as editors hand them on, as text."""
    tree = json.loads(
        json.dumps(tomllib.loads(path.read_text("utf-8-sig")), default=date.isoformat)
    )
    return [error.json_path for error in validator_of(path.name).iter_errors(tree)]


@pytest.mark.parametrize("kind", KINDS.values(), ids=KINDS)
def test_schema_is_valid_itself(kind: type[Sheet]) -> None:
    schema = sidecar_schema(kind)
    Draft202012Validator.check_schema(schema)
    assert schema["$schema"] == Draft202012Validator.META_SCHEMA["$id"]


@pytest.mark.parametrize("path", GOOD, ids=name_of)
def test_good_sidecars_are_valid(path: Path) -> None:
    assert complaints(path) == []


@pytest.mark.parametrize("path", BAD, ids=name_of)
def test_schema_and_reader_are_of_one_mind_about_shape(path: Path) -> None:
    tree = tomllib.loads(path.read_text("utf-8-sig"))
    problems = check_shape(KINDS[path.name], tree)[1]
    assert bool(complaints(path)) == bool(problems)


def test_some_shapes_are_wrong() -> None:
    wrong = {path.relative_to(TESTS / "bad_runs").parts[0] for path in BAD if complaints(path)}
    assert wrong >= SHAPE_IS_WRONG


def test_an_unknown_key_and_a_wrong_kind_are_told_at_their_place() -> None:
    found = complaints(TESTS / "bad_runs" / "wrong-kinds" / "alder" / "build.toml")
    assert {"$.core", "$.winding.isolated", "$.sweep[0].units", "$.rating"} <= set(found)


# --- words ---------------------------------------------------------------------------------------


def test_every_key_has_words() -> None:
    sheets = {each.__name__ for each in Sheet.__subclasses__()}
    assert {each.__name__ for each in KEYS} == {each.__name__ for each in SHEET_TITLES} == sheets
    for kind, words in KEYS.items():
        assert set(words) == {each.name for each in fields(kind)}, kind.__name__  # type: ignore[arg-type]
        assert all(key.words for key in words.values())
    assert set(SETUP_WORDS) == set(Setup)


@pytest.mark.parametrize("kind", KINDS.values(), ids=KINDS)
def test_every_example_is_valid(kind: type[Sheet]) -> None:
    schema = sidecar_schema(kind)
    tables = [schema, *(part for part in schema["$defs"].values() if "properties" in part)]
    seen = 0
    for key in (key for table in tables for key in table["properties"].values()):
        validator = Draft202012Validator({**key, "$defs": schema["$defs"]})
        for example in key.get("examples", []):
            validator.validate(example)
            seen += 1
    assert seen > 10


@pytest.mark.parametrize("kind", KINDS.values(), ids=KINDS)
def test_titles_and_descriptions_are_words(kind: type[Sheet]) -> None:
    schema = sidecar_schema(kind)
    parts = [schema, *schema["$defs"].values()]
    assert all(" " in part["title"] or part["title"] in WORDS_ALONE for part in parts)
    keys: list[dict[str, Any]] = [
        key for part in parts for key in part.get("properties", {}).values()
    ]
    assert all(key["description"] and "title" not in key for key in keys)
    assert "null" not in json.dumps(schema)


WORDS_ALONE = {"Winding", "Set-up"}


# --- the command ---------------------------------------------------------------------------------


@pytest.mark.parametrize(("word", "kind"), [("build", BuildSheet), ("runs", BenchSheet)])
def test_the_command_prints_the_schema(capsys, word: str, kind: type[Sheet]) -> None:
    assert main(["schema", word]) == 0
    assert json.loads(capsys.readouterr().out) == sidecar_schema(kind)
