"""The shape of a sidecar: which keys stand where, of which kind, within which range.

The data classes of the model say what is expected; here their type hints become the words of a
message, whatever kind of mistake the validation found.
"""

from __future__ import annotations

import difflib
import json
from collections.abc import Iterable, Iterator, Mapping
from dataclasses import fields, is_dataclass
from datetime import date, datetime, time
from enum import StrEnum
from functools import cache
from itertools import islice
from types import NoneType, UnionType
from typing import (
    Annotated,
    Any,
    Literal,
    TypeVar,
    Union,
    cast,
    get_args,
    get_origin,
    get_type_hints,
)

from annotated_types import Ge, Gt, Le, Len, Lt
from pydantic import TypeAdapter, ValidationError

from reportgen.intake.remarks import MOST_ERRORS
from reportgen.intake.sidecar_text import Path, Problem, Tree, is_toml_integer, shown_value
from reportgen.model import Sheet

SheetT = TypeVar("SheetT", bound=Sheet)

_UNITS = {
    "ohm": "ohms",
    "pf": "picofarads",
    "mhz": "megahertz",
    "mm": "millimetres",
    "mt": "milliteslas",
    "w": "watts",
    "v": "volts",
    "c": "degrees Celsius",
    "db": "decibels",
    "percent": "per cent",
    "turns": "turns",
}
_MOST_COMPARED = 500
_SANITY_BOUND = 1e6  # a cap this high is only worth mentioning to who exceeds it


def check_shape(kind: type[SheetT], tree: Tree) -> tuple[SheetT | None, list[Problem]]:
    """The sheet that a tree of TOML tables describes, or None and what is wrong with it.

    Of very many problems only the first are found, one more than are told of a file.
    """
    hint: Any = kind
    try:
        return _adapter(hint).validate_json(_as_json(hint, tree)), []
    except ValidationError as error:
        return None, list(islice(_problems(kind, tree, error), MOST_ERRORS + 1))


def right_shape(kind: type[SheetT], tree: Tree) -> SheetT | None:
    """The sheet that a tree of TOML tables describes, if it is one."""
    hint: Any = kind
    try:
        return cast("SheetT", _adapter(hint).validate_json(_as_json(hint, tree)))
    except ValidationError:
        return None


def _problems(kind: Any, tree: Tree, error: ValidationError) -> Iterator[Problem]:
    told: set[Path] = set()
    for detail in error.errors(include_url=False, include_context=False, include_input=False):
        problem = _problem(kind, tree, detail["loc"], detail["type"])
        # a value that may be of several kinds is complained about once for each kind
        if problem.path not in told:
            told.add(problem.path)
            yield problem


@cache
def _adapter(kind: Any) -> TypeAdapter[Any]:
    return TypeAdapter(kind)


@cache
def _hints(kind: Any) -> dict[str, Any]:
    """Keys of a table and the kinds of their values."""
    hints = get_type_hints(kind, include_extras=True)
    return {key.name: hints[key.name] for key in fields(kind)}


def own_keys(kind: Any) -> list[str]:
    """Keys of tables in which everybody may name keys as they like."""
    return [key for key, hint in _hints(kind).items() if get_origin(_bare(hint)) is dict]


# --- from TOML's types to those that strict validation of JSON takes -----------------------------


def _as_json(kind: Any, tree: Tree) -> str:
    """The tree as JSON. What JSON would let pass but TOML should not is made unacceptable."""
    return json.dumps(_plain(tree, kind))


def _plain(value: Any, hint: Any) -> Any:
    hint = _bare(hint)
    if isinstance(value, dict):
        return {key: _plain(item, _inner(hint, key)) for key, item in value.items()}
    if isinstance(value, list):
        return [_plain(item, _inner(hint, 0)) for item in value]
    if hint is date and (not isinstance(value, date) or isinstance(value, datetime)):
        return True
    if get_origin(hint) is Literal and type(value) not in map(type, get_args(hint)):
        return []  # true would pass for 1
    if isinstance(value, date | time):
        return value.isoformat()
    if isinstance(value, int) and not is_toml_integer(value):
        return float("inf")
    return value


def _bare(hint: Any) -> Any:
    """A hint without ranges and without None."""
    while True:
        if get_origin(hint) is Annotated:
            hint = get_args(hint)[0]
        elif get_origin(hint) in (Union, UnionType) and len(_kinds(hint)) == 1:
            hint = _kinds(hint)[0]
        else:
            return hint


def _kinds(hint: Any) -> list[Any]:
    return [kind for kind in get_args(hint) if kind is not NoneType]


def _inner(hint: Any, part: str | int) -> Any:
    """Hint of what stands under a key or at a position of a value; None where nothing may."""
    hint = bare = _bare(hint)
    if is_dataclass(hint) and isinstance(part, str):
        return _hints(bare).get(part)
    if get_origin(hint) is tuple and isinstance(part, int):
        return get_args(hint)[0]
    if get_origin(hint) is dict and isinstance(part, str):
        return get_args(hint)[1]
    return None


# --- from a failed validation to a problem -------------------------------------------------------


def _problem(kind: Any, tree: Tree, location: tuple[str | int, ...], code: str) -> Problem:
    """What is wrong at the place that a validation error names."""
    path: Path = ()
    hint: Any = kind
    wrong_name = location[-1] == "[key]" and code.startswith("string_")
    for part in location[:-1] if wrong_name else location:
        inner = _inner(hint, part)
        if inner is None and not is_dataclass(_bare(hint)):
            break  # the rest names one of several kinds, not a place
        path, hint, outer = (*path, part), inner, _bare(hint)
    if code == "unexpected_keyword_argument":
        return _unknown_key(path, _hints(outer), kind)
    if wrong_name:
        message = f"found the name {shown_value(path[-1])}, expected 1 to 120 characters"
        return Problem(path, "wrong-name", message, "give it a name of that length")
    if code == "missing":
        message = f"missing, expected {_expected(hint, str(path[-1]))}"
        return Problem(path, "missing-key", message, f"add `{path[-1]}`")
    return _wrong_value(path, _value_at(tree, path), hint)


def _unknown_key(path: Path, known: Mapping[str, Any], kind: Any) -> Problem:
    name = str(path[-1])
    message = f"unknown key {shown_value(name)}"
    near = nearest(name, known)
    if near:
        return Problem(path, "unknown-key", message, f"did you mean `{near}`?")
    tables = [key for key, hint in _hints(kind).items() if _inner(hint, name) is not None]
    tables = [key for key in tables if is_dataclass(_bare(_hints(kind)[key]))]
    if tables:
        remedy = f"move it into the table [{tables[0]}]"
    else:
        remedy = f"remove it; the keys here are {', '.join(known)}"
    return Problem(path, "unknown-key", message, remedy)


def nearest(name: str, known: Iterable[str]) -> str | None:
    """The known name most like a misspelt one, if any is like it; of very many the first count."""
    by_case = {candidate.casefold(): candidate for candidate in islice(known, _MOST_COMPARED)}
    close = difflib.get_close_matches(name.casefold()[:120], by_case, n=1)
    return by_case[close[0]] if close else None


def _wrong_value(path: Path, value: Any, hint: Any) -> Problem:
    key = next(str(part) for part in reversed(path) if isinstance(part, str))
    expected = _expected(hint, key, value)
    if isinstance(path[-1], int) and is_dataclass(_bare(hint)):
        expected = f"a table [[{key}]]"
        hint = tuple[hint, ...]
    message = f"found {shown_value(value)}, expected {expected}"
    return Problem(path, "wrong-value", message, _remedy(key, value, _bare(hint)))


def _value_at(tree: Any, path: Path) -> Any:
    for part in path:
        tree = tree[part]
    return tree


def _remedy(key: str, value: Any, hint: Any) -> str:
    """What to do about a value of the wrong kind or outside its range."""
    if choices := _choices(hint):
        near = nearest(value, choices) if isinstance(value, str) else None
        return f'did you mean "{near}"?' if near else "choose one of these"
    if hint is date:
        return "write year-month-day, without quotes and without a time"
    if hint is bool:
        return "write true or false, without quotes"
    if is_dataclass(hint) or get_origin(hint) is dict:
        return f"write the heading [{key}] and the keys on lines below it"
    if get_origin(hint) is tuple:
        return _list_remedy(key, hint)
    if hint is str:
        return "write a text of that length" if isinstance(value, str) else "write it in quotes"
    if isinstance(value, str):
        return "write the bare number, without quotes and without a unit"
    return "enter the value" if value == 0 else "correct the value"


def _list_remedy(key: str, hint: Any) -> str:
    if is_dataclass(_inner(hint, 0)):
        return f"write the heading [[{key}]], in double brackets, once for each entry"
    return f'write a list such as {key} = ["A", "B"]'


# --- what was expected, in words -----------------------------------------------------------------


def _choices(hint: Any) -> list[str]:
    """The texts that a closed list of choices allows."""
    if isinstance(hint, type) and issubclass(hint, StrEnum):
        return [choice.value for choice in hint]
    if get_origin(hint) is Literal and all(isinstance(choice, str) for choice in get_args(hint)):
        return list(get_args(hint))
    return []


def _expected(hint: Any, key: str, value: object = None) -> str:
    """A kind of value in words, with its range and the unit that the key's name ends in."""
    bare = _bare(hint)
    limits = _limits(hint)
    if get_origin(bare) in (Union, UnionType):
        return " or ".join(_expected(kind, key, value) for kind in _kinds(bare))
    if choices := _choices(bare):
        return _listed([shown_value(choice) for choice in choices])
    if get_origin(bare) is Literal:
        return _listed([shown_value(choice) for choice in get_args(bare)])
    if bare is str:
        return f"a text{_length(limits)}"
    if bare in (int, float):
        return _number(bare, key) + _range(limits, value)
    if bare is bool:
        return "true or false"
    if bare is date:
        return "a date such as 2026-10-04"
    if get_origin(bare) is tuple:
        inner = _inner(bare, 0)
        what = f"tables [[{key}]]" if is_dataclass(inner) else "a list of texts"
        size = _length(limits, "entries") if isinstance(value, list) else ""
        return what + size.replace(" of", " with", 1)
    return f"a table [{key}]"


def _listed(choices: list[str]) -> str:
    *most, last = choices
    return f"{', '.join(most)} or {last}" if most else last


def _limits(hint: Any) -> list[Any]:
    """Ranges and lengths noted beside a hint, also inside an optional one."""
    noted: list[Any] = []
    while get_origin(hint) is Annotated or (
        get_origin(hint) in (Union, UnionType) and len(_kinds(hint)) == 1
    ):
        noted += [note for note in get_args(hint)[1:] if isinstance(note, Ge | Gt | Le | Lt | Len)]
        hint = get_args(hint)[0] if get_origin(hint) is Annotated else _kinds(hint)[0]
    return noted


def _number(kind: Any, key: str) -> str:
    unit = _UNITS.get(key.rsplit("_", 1)[-1])
    number = "a whole number" if kind is int else "a number"
    return f"{number} of {unit}" if unit else number


def _range(limits: list[Any], value: object) -> str:
    words = []
    for limit in limits:
        if isinstance(limit, Gt):
            words.append(f"above {limit.gt:g}")
        elif isinstance(limit, Ge):
            words.append(f"at least {limit.ge:g}")
        elif isinstance(limit, Le):
            words.append(f"at most {limit.le:g}")
        elif isinstance(limit, Lt) and _worth_saying(limit.lt, value):
            words.append(f"below {limit.lt:,.0f}".replace(",", " "))
    return f" {' and '.join(words)}" if words else ""


def _worth_saying(bound: Any, value: object) -> bool:
    return bool(bound < _SANITY_BOUND or (isinstance(value, int | float) and value >= bound))


def _length(limits: list[Any], unit: str = "characters") -> str:
    sizes = [limit for limit in limits if isinstance(limit, Len)]
    if not sizes:
        return ""
    least, most = sizes[0].min_length, sizes[0].max_length
    if least == most:
        return f" of {most} {unit}"
    return f" of {least} to {most} {unit}" if least else f" of at most {most} {unit}"
