"""The text of a sidecar: bytes in, plain TOML tables out, and how paths and values are shown."""

from __future__ import annotations

import re
import tomllib
import unicodedata
from collections import Counter
from datetime import date, time
from typing import Any, NamedTuple

from reportgen.errors import InputRejected
from reportgen.model import Finding, Severity

MAX_BYTES = 256 * 1024
MAX_DEPTH = 16
_INTEGER_BITS = 64
_SHOWN_LENGTH = 80
_KEY_PARTS = 500  # the parser's time grows with the square of the parts of a dotted key

_COMPLAINTS = {
    "Expected newline or end of document": "something stands behind the value",
    "Invalid statement": "the line is neither a key with a value nor a [table]",
    "Invalid initial character for a key": "the key begins with a character that needs quotes",
    "Expected '=' after a key": "no `=` behind the key",
    "Expected ']]'": "the heading [[...]] is not closed",
    "Expected ']'": "the heading [...] is not closed",
    "Cannot overwrite a value": "the key is given twice",
    "Cannot declare": "the table is given twice",
    "Cannot mutate": "the table is closed and takes no more keys",
    "Duplicate inline table key": "the key is given twice",
    "Unclosed array": "the list is not closed",
    "Unclosed inline table": "the table in braces is not closed",
    "Unterminated string": "the text is not closed by a quote",
    "Unescaped": "a backslash in text stands doubled, or the text in single quotes",
    "Illegal character": "a control character stands in the text",
    "Found invalid character": "a control character stands in the line",
    "Invalid date": "no such date or time",
    "Invalid value": "the value is missing or none that TOML knows",
}

# the beginning of a line that opens a table, or gives a key its value
_HEADING = re.compile(r"\s*(\[\[?)([^\[\]#]+)\]")
_KEY = re.compile(r"""\s*([\w.-]+|"[^"]+")\s*=""")

Path = tuple[str | int, ...]
Tree = dict[str, Any]


class Problem(NamedTuple):
    """One thing wrong in a sidecar, at a path of keys and list positions (from 0)."""

    path: Path
    code: str
    message: str
    remedy: str

    def finding(self, file: str, line: int | None = None) -> Finding:
        """The problem as an error of the file."""
        return Finding(
            severity=Severity.ERROR,
            code=self.code,
            message=self.message,
            remedy=self.remedy,
            file=file,
            line=line,
            key=key_path(self.path),
        )


def key_path(path: Path) -> str:
    """A path as TOML writes it, entries of a list counted from 1: `sweep[2].load`.

    A name that TOML would not take bare stands in quotes: `limits."40 m".swr`.
    """
    text = ""
    for part in path:
        if isinstance(part, int):
            text += f"[{part + 1}]"
        else:
            text += ("." if text else "") + _key(part)
    return text


def _key(name: str) -> str:
    return name if re.fullmatch(r"[A-Za-z0-9_-]{1,80}", name) else shown_value(name)


def shown_value(value: object) -> str:
    """A value as it would stand in the file, on one line, cut at 80 characters."""
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, int):
        return str(value) if is_toml_integer(value) else "an integer of more than 64 bits"
    if isinstance(value, str):
        return f'"{_cut("".join(_visible(c) for c in value[: _SHOWN_LENGTH + 1]))}"'
    if isinstance(value, date | time):
        return value.isoformat()
    if isinstance(value, list):
        return _cut(f"[{', '.join(shown_value(item) for item in value[:_SHOWN_LENGTH])}]")
    return "a table" if isinstance(value, dict) else str(value)


def _visible(character: str) -> str:
    unseen = unicodedata.category(character)[0] == "C" or character in '"\\'
    return character.encode("unicode_escape").decode("ascii") if unseen else character


def _cut(text: str) -> str:
    return text if len(text) <= _SHOWN_LENGTH else text[: _SHOWN_LENGTH - 3] + "..."


def is_toml_integer(value: int) -> bool:
    """Whether the integer fits into the 64 bits that TOML promises."""
    return (value if value >= 0 else ~value).bit_length() < _INTEGER_BITS


# --- reading ---------------------------------------------------------------------------------


def parse_toml(data: bytes, *, file: str) -> Tree:
    """The tables of a TOML file of at most 256 KiB.

    Raises
    ------
    InputRejected
        Too large, not UTF-8, not TOML (with the line), or nested too deeply.
    """
    text = _decoded(data, file)
    if any(part.count(".") > _KEY_PARTS for part in text.replace("\n", "=").split("=")):
        raise _nested(file)
    try:
        tree = tomllib.loads(text)
    except tomllib.TOMLDecodeError as error:
        raise _syntax_error(error, text, file) from error
    except RecursionError as error:
        raise _nested(file) from error
    except ValueError as error:  # more digits than Python converts
        digits = re.search(r"[0-9_]{4301,}", text)
        line = _line(text, digits.start()) if digits else None
        message = "a number has more than 4300 digits"
        raise _rejected(file, "toml-syntax", message, "correct the number", line) from error
    if _depth(tree) > MAX_DEPTH:
        raise _nested(file)
    return tree


def _decoded(data: bytes, file: str) -> str:
    if len(data) > MAX_BYTES:
        message = f"the file has {len(data)} bytes; a sidecar has at most {MAX_BYTES}"
        raise _rejected(file, "too-large", message, "is this the right file? Shorten it")
    if data.startswith((b"\xff\xfe", b"\xfe\xff")):
        message = "the file is in UTF-16, expected UTF-8"
        raise _rejected(file, "not-utf8", message, "save it as UTF-8", 1)
    try:
        return data.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        found = f"found the byte 0x{data[error.start]:02x}, expected UTF-8"
        line = data.count(b"\n", 0, error.start) + 1
        raise _rejected(file, "not-utf8", found, "save the file as UTF-8", line) from error


def _syntax_error(error: Exception, text: str, file: str) -> InputRejected:
    """The parser's complaint in our words, its position moved into the finding."""
    reason, _, where = str(error).rpartition(" (at ")
    position = re.match(r"line (\d+), column (\d+)", where)
    line = int(position[1]) if position else _line(text.rstrip(), len(text))
    place = f"column {position[2]}" if position else "end of the file"
    complaint = next(
        (words for start, words in _COMPLAINTS.items() if reason.startswith(start)),
        _cut("".join(c for c in reason if unicodedata.category(c)[0] != "C")),
    )
    remedy = "correct this line: text stands in quotes, numbers take a point and no unit"
    return _rejected(file, "toml-syntax", f"not valid TOML ({place}): {complaint}", remedy, line)


def key_lines(text: str) -> dict[str, int]:
    """Line of every heading and key, by its path; empty when unsure.

    Only headings and keys that begin a line are looked at; with a text of several lines in the
    file there could be lines that only look like them.
    """
    places: dict[str, int] = {}
    if '"""' in text or "'''" in text:
        return places
    heading = ""
    seen: Counter[str] = Counter()
    for number, line in enumerate(text.split("\n"), start=1):
        if match := _HEADING.match(line):
            heading = _spelled(match[2])
            if match[1] == "[[":
                seen[heading] += 1
                heading += f"[{seen[heading]}]"
            places.setdefault(heading, number)
        elif match := _KEY.match(line):
            name = _spelled(match[1])
            places.setdefault(f"{heading}.{name}" if heading else name, number)
    return places


def line_of(path: Path, places: dict[str, int]) -> int | None:
    """Line of the key at a path, or of the last heading on the way to it."""
    ends = (key_path(path[:end]) for end in range(len(path), 0, -1))
    return next((places[end] for end in ends if end in places), None)


def _spelled(name: str) -> str:
    """A dotted name as `key_path` spells it, when it is written without needless quotes."""
    return re.sub(r"\s*\.\s*", ".", name.strip())


def _line(text: str, position: int) -> int:
    return text.count("\n", 0, position) + 1


def _depth(tree: Tree) -> int:
    """Levels of tables and lists inside each other, found without recursion."""
    depth = 0
    level: list[Any] = [tree]
    while level:
        depth += 1
        nodes = [list(node.values()) if isinstance(node, dict) else node for node in level]
        level = [item for node in nodes for item in node if isinstance(item, dict | list)]
    return depth


def _nested(file: str) -> InputRejected:
    message = f"tables or lists stand more than {MAX_DEPTH} deep inside each other"
    return _rejected(file, "toml-nesting", message, "a sidecar needs 4 levels: remove the others")


def _rejected(
    file: str, code: str, message: str, remedy: str, line: int | None = None
) -> InputRejected:
    finding = Finding(
        severity=Severity.ERROR, code=code, message=message, remedy=remedy, file=file, line=line
    )
    return InputRejected((finding,))
