"""The lines of a Touchstone file, sorted by what they are."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import NamedTuple

from reportgen.intake.remarks import Remarks, quoted

BLANKS = " \t"
LONGEST_LINE = 10_000


class Line(NamedTuple):
    """A line without its comment and outer blanks, and its number counted from 1."""

    number: int
    text: str


@dataclass(frozen=True, slots=True)
class SweepLines:
    """The lines of a file by kind; `ends_open`: the last line has data and no line end."""

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
            lines.comments.append(Line(number, comment))
        if content := content.strip(BLANKS):
            _sort_in(Line(number, content), lines)
    _refuse_long_lines(lines, remarks)
    return lines


def _sort_in(line: Line, lines: SweepLines) -> None:
    if line.text.startswith("#"):
        lines.options.append(line)
    elif line.text.startswith("[") and not lines.data:
        lines.keywords.append(line)
    else:
        lines.data.append(line)


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


def refuse_version_2(lines: SweepLines, remarks: Remarks) -> None:
    """Give up on a keyword before the data: version 1 has none.

    Raises
    ------
    InputRejected
        A line in front of the data begins with `[`.
    """
    if lines.keywords:
        line = lines.keywords[0]
        remarks.reject(
            "touchstone-2",
            f"Touchstone 2.x: found the keyword {quoted(line.text)}; only version 1 is read",
            "export as version 1",
            line.number,
        )
