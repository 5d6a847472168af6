"""From the bytes of a sweep file to its lines: what is no text is named, the rest is sorted."""

from __future__ import annotations

import codecs
import re
from dataclasses import dataclass, field
from typing import NamedTuple

from reportgen.intake.remarks import Remarks, quoted

BLANKS = " \t"
LONGEST_LINE = 10_000

_AGAIN = "export the sweep again as a Touchstone version 1 text file"

# first bytes, code, what the file is, what to do
_NOT_TEXT = (
    (b"\x1f\x8b", "gzip-data", "gzip data", "unpack the file"),
    (b"BZh", "packed-data", "bzip2 data", "unpack the file"),
    (b"\xfd7zXZ\x00", "packed-data", "xz data", "unpack the file"),
    (b"7z\xbc\xaf\x27\x1c", "packed-data", "a 7z archive", "unpack the sweep files from it"),
    (b"PK\x03\x04", "zip-archive", "a zip archive", "unpack the sweep files from it"),
    (b"\x89PNG", "picture", "a PNG picture", _AGAIN),
    (b"%PDF-", "pdf-document", "a PDF document", _AGAIN),
)
_PICKLE = re.compile(rb"\x80[\x02-\x05]|c[\w.]+\n[\w.]+\n[(]|[(](dp|lp|i)")

# UTF-32 first: its little-endian mark begins with that of UTF-16
_WIDE = (
    (codecs.BOM_UTF32_LE, "utf-32", "UTF-32"),
    (codecs.BOM_UTF32_BE, "utf-32", "UTF-32"),
    (codecs.BOM_UTF16_LE, "utf-16", "UTF-16"),
    (codecs.BOM_UTF16_BE, "utf-16", "UTF-16"),
)


def decode_text(data: bytes, remarks: Remarks, *, max_bytes: int) -> str:
    """The text of a file with plain line ends, control characters at its end removed.

    Plain ASCII, UTF-8 and Latin-1 are taken silently: only comments hold more than ASCII.

    Raises
    ------
    InputRejected
        Too large, empty, or no text.
    """
    _refuse_size(data, remarks, max_bytes)
    _refuse_other_kinds(data, remarks)
    text = _without_tail(_decoded(data, remarks), remarks)
    if text.lstrip().startswith("<"):
        first = text.lstrip().partition("\n")[0].rstrip()
        remarks.reject(
            "html-page",
            f"the file begins with {quoted(first)}: an HTML page, perhaps a failed download",
            "fetch the sweep file itself again",
        )
    if "\0" in text:
        before = text[: text.index("\0")]
        remarks.reject(
            "binary-data",
            "a NUL byte stands in the text: binary data, or UTF-16 without a byte-order mark",
            "save the file as plain text (ASCII or UTF-8)",
            before.count("\n") + 1,
        )
    return text


def _refuse_size(data: bytes, remarks: Remarks, max_bytes: int) -> None:
    if not data:
        remarks.reject("empty-file", "the file is empty (0 bytes)", "save the sweep again")
    if len(data) > max_bytes:
        remarks.reject(
            "too-large",
            f"the file has {len(data)} bytes; at most {max_bytes} are read",
            "sweep fewer points, or split the file",
        )


def _refuse_other_kinds(data: bytes, remarks: Remarks) -> None:
    for magic, code, kind, remedy in _NOT_TEXT:
        if data.startswith(magic):
            remarks.reject(code, f"the file is {kind}, expected Touchstone text", remedy)
    if _PICKLE.match(data):
        remarks.reject(
            "pickle-data",
            "the file is a Python pickle, expected Touchstone text; it was not opened, "
            "for a pickle can run any program",
            "do not load it anywhere; " + _AGAIN,
        )


def _decoded(data: bytes, remarks: Remarks) -> str:
    for mark, encoding, name in _WIDE:
        if data.startswith(mark):
            return _decoded_wide(data, encoding, name, remarks)
    try:
        text = data.decode("utf-8-sig")
    except UnicodeDecodeError:
        text = data.decode("cp1252", errors="replace")
    return _with_plain_line_ends(text)


def _decoded_wide(data: bytes, encoding: str, name: str, remarks: Remarks) -> str:
    try:
        text = data.decode(encoding)
    except UnicodeDecodeError:
        remarks.reject(
            "bad-encoding",
            f"the file begins as {name} but does not go on as such",
            "save the file as plain text (ASCII or UTF-8)",
        )
    remarks.warn(
        "wide-encoding",
        f"the file is in {name}, where Touchstone wants ASCII; it was read",
        "save the file as plain text (ASCII or UTF-8)",
    )
    return _with_plain_line_ends(text)


def _with_plain_line_ends(text: str) -> str:
    return text.replace("\r\n", "\n").replace("\r", "\n")


def _without_tail(text: str, remarks: Remarks) -> str:
    kept = text.rstrip("\x1a\0 \t\n")
    tail = text[len(kept) :]
    controls = tail.lstrip(" \t\n")
    if not controls:
        return text
    remarks.warn(
        "control-at-end",
        "Ctrl-Z or NUL characters stand at the end of the file; they were removed",
        "compare the end of the file with the sweep on the instrument",
        text[: len(text) - len(controls)].count("\n") + 1,
    )
    return kept + tail.replace("\x1a", "").replace("\0", "")


# --- lines -------------------------------------------------------------------------------------


class Line(NamedTuple):
    """A line without its comment and outer blanks, and its number counted from 1."""

    number: int
    text: str


@dataclass(frozen=True, slots=True)
class SweepLines:
    """The lines of a file by kind; `ends_open`: the last line has data and no line end.

    Keywords keep the blanks before them, since they have to begin in column 1.
    """

    options: list[Line] = field(default_factory=list)
    keywords: list[Line] = field(default_factory=list)
    comments: list[Line] = field(default_factory=list)
    data: list[Line] = field(default_factory=list)
    ends_open: bool = False


def split_lines(text: str, remarks: Remarks, *, max_lines: int) -> SweepLines:
    """The lines of a file by kind.

    Raises
    ------
    InputRejected
        More lines than `max_lines`, or a line too long to be one.
    """
    count = text.count("\n")
    if count > max_lines:
        remarks.reject(
            "too-many-lines",
            f"the file has {count} lines; at most {max_lines} are read",
            "sweep fewer points, or split the file",
        )
    lines = SweepLines(ends_open=bool(text.rpartition("\n")[2].partition("!")[0].strip(BLANKS)))
    for number, raw in enumerate(text.split("\n"), start=1):
        content, mark, comment = raw.partition("!")
        if mark and comment:
            lines.comments.append(Line(number, comment[:LONGEST_LINE]))
        if content := content.rstrip(BLANKS):
            _sort_in(number, content, lines)
    _refuse_long_lines(lines, remarks)
    return lines


def _sort_in(number: int, content: str, lines: SweepLines) -> None:
    text = content.lstrip(BLANKS)
    if text.startswith("#"):
        lines.options.append(Line(number, text))
    elif text.startswith("[") and (lines.keywords or not lines.data):  # behind data, a footer
        lines.keywords.append(Line(number, content))
    else:
        lines.data.append(Line(number, text))


def _refuse_long_lines(lines: SweepLines, remarks: Remarks) -> None:
    for line in (*lines.options, *lines.data):
        if len(line.text) > LONGEST_LINE:
            remarks.reject(
                "line-too-long",
                f"the line has {len(line.text)} characters before any comment; "
                f"at most {LONGEST_LINE} are read",
                "save the sweep with one frequency a line",
                line.number,
            )
