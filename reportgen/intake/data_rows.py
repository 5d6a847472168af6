"""From data lines to a table of numbers, one row for each frequency."""

from __future__ import annotations

import math
import re
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from reportgen.intake.number_lines import NumberLine, read_number_lines
from reportgen.intake.remarks import Remarks, listed_lines
from reportgen.intake.sweep_text import Line, SweepLines
from reportgen.model import RealArray

PORTS_OF_COLUMNS = {3: 1, 9: 2}
NOISE_COLUMNS = 5
_PLAIN = b"0123456789+-.eE \t\n"
_NAMED_PORTS = re.compile(r"\.s(\d{1,3})p$", re.IGNORECASE | re.ASCII)
_USUAL_SHARE = 20  # one in so many of the last numbers may be shorter than the usual width


@dataclass(frozen=True, slots=True, eq=False)
class Rows:
    """Numbers as they stand in the file: (F, 3) or (F, 9), and the line of each row.

    No rows and no columns: they could not be read, and a remark says why.
    """

    values: RealArray
    lines: NDArray[np.int64]

    def __len__(self) -> int:
        return len(self.lines)

    @property
    def ports(self) -> int:
        """Number of ports, 1 or 2; 0 without rows."""
        return PORTS_OF_COLUMNS.get(self.values.shape[1], 0)

    @property
    def frequency(self) -> RealArray:
        """As it stands in the file [unit of the option line]."""
        return self.values[:, :1].ravel()


NO_ROWS = Rows(np.empty((0, 0)), np.empty(0, dtype=np.int64))


def read_rows(lines: SweepLines, remarks: Remarks, *, decimal: str = ".", max_points: int) -> Rows:
    """The table of numbers; empty when an error was remarked."""
    if not lines.data:
        remarks.error(
            "no-data",
            "no data rows, nothing but comments or an option line; expected numbers",
            "sweep again",
        )
        return NO_ROWS
    rows = _read_table(lines.data) if decimal == "." else None
    if rows is None:
        rows = _read_line_by_line(lines, remarks, decimal)
    if lines.ends_open and len(rows) and rows.lines[-1] == lines.data[-1].number:
        _remark_short_end(lines.data, remarks)
    if len(rows) > max_points:
        remarks.error(
            "too-many-points",
            f"the file has {len(rows)} points; at most {max_points} are read",
            "sweep fewer points, or split the file",
        )
        return NO_ROWS
    return rows


def _read_table(data: list[Line]) -> Rows | None:
    """Fast way for a clean file; None when anything is unusual."""
    texts = [line.text for line in data]
    block = "\n".join(texts)
    if not block.isascii() or block.encode("ascii").translate(None, _PLAIN):
        return None
    try:
        values = np.loadtxt(texts, comments=None, ndmin=2)
    except ValueError:
        return None
    if values.shape[1] not in PORTS_OF_COLUMNS:
        return None
    return Rows(values, np.array([line.number for line in data]))


def _remark_short_end(data: list[Line], remarks: Remarks) -> None:
    """Warn when the very last number is shorter than nearly all above it."""
    *widths, last = (len(line.text.rsplit(None, 1)[-1].lstrip("+-")) for line in data)
    if widths and last < sorted(widths)[len(widths) // _USUAL_SHARE]:
        remarks.warn(
            "last-number-short",
            "the file ends without a line end, and its last number is shorter than those above it; "
            "it may have been cut off",
            "compare the last row with the instrument, or remove it",
            data[-1].number,
        )


# --- line by line ----------------------------------------------------------------------------


def _read_line_by_line(lines: SweepLines, remarks: Remarks, decimal: str) -> Rows:
    read = read_number_lines(lines, remarks, decimal)
    if not read or any(row.stray and {",", ";"} & set(row.stray) for row in read):
        return NO_ROWS  # the columns cannot be counted
    pattern = _pattern([row.count for row in read])
    if pattern is None:
        _remark_column_count(read[0], remarks)
        return NO_ROWS
    read = _without_noise(read, pattern, remarks)
    records = [read[at : at + len(pattern)] for at in range(0, len(read), len(pattern))]
    records = _whole(records, pattern, remarks)
    if remarks.rejected:
        return NO_ROWS
    if len(pattern) > 1:
        _remark_wrapped(read[0], pattern, remarks)
    values = np.array([[v for row in record for v in row.values] for record in records])
    return Rows(values, np.array([record[0].line.number for record in records]))


def _pattern(counts: list[int]) -> tuple[int, ...] | None:
    """How many numbers the lines of one frequency hold, `(9,)` or wrapped as in `(5, 4)`."""
    for span in range(1, 10):
        first, second = tuple(counts[:span]), tuple(counts[span : 2 * span])
        if sum(first) in PORTS_OF_COLUMNS and second in (first, ()):
            return first
    return (counts[0],) if counts[0] in PORTS_OF_COLUMNS else None


def _remark_column_count(first: NumberLine, remarks: Remarks) -> None:
    if first.count == NOISE_COLUMNS:
        remarks.error(
            "five-columns",
            "the first data line has 5 numbers (perhaps only S11 and S21); expected 9 (two ports) "
            "or 3 (one port)",
            "export all four S parameters, with zeros for what was not measured",
            first.line.number,
        )
    else:
        remarks.error(
            "column-count",
            f"the first data line has {first.count} numbers; "
            "expected 3 (one port) or 9 (two ports)",
            "export one or two ports as a Touchstone version 1 file",
            first.line.number,
        )


def _without_noise(
    read: list[NumberLine], pattern: tuple[int, ...], remarks: Remarks
) -> list[NumberLine]:
    """The network data alone: noise data are lines of five behind a drop in frequency."""
    begin = len(read)
    while begin and read[begin - 1].count == NOISE_COLUMNS and read[begin - 1].stray is None:
        begin -= 1
    if sum(pattern) == NOISE_COLUMNS or begin in (0, len(read)) or begin % len(pattern):
        return read
    firsts = (row.values[0] for row in read[: begin : len(pattern)] if row.values)
    highest = max(firsts, default=-math.inf)
    if sum(pattern) != max(PORTS_OF_COLUMNS) or read[begin].values[0] > highest:
        return read
    remarks.note(
        "noise-data",
        f"noise data ignored ({len(read) - begin} lines of 5 numbers from line "
        f"{read[begin].line.number} on)",
        "nothing to do",
        read[begin].line.number,
    )
    return read[:begin]


def _whole(
    records: list[list[NumberLine]], pattern: tuple[int, ...], remarks: Remarks
) -> list[list[NumberLine]]:
    """The records that have every number; the last one may be dropped, none in the middle."""
    broken = [record for record in records if [row.count for row in record] != list(pattern)]
    if not broken:
        return records
    if broken == records[-1:] and len(records) > 1:
        line, message = _broken(broken[0], pattern)
        remarks.warn(
            "last-row-broken",
            f"{message}; dropped",
            "see whether the sweep was saved completely",
            line,
        )
        return records[:-1]
    line, message = _broken(broken[0], pattern)
    if len(broken) > 1:
        message += f"; the same in {listed_lines([record[0].line.number for record in broken[1:]])}"
    remarks.error("row-broken", message, "correct the file, or export the sweep again", line)
    return records


def _broken(record: list[NumberLine], pattern: tuple[int, ...]) -> tuple[int, str]:
    line = record[0].line.number
    return line, f"the row has {sum(row.count for row in record)} of {sum(pattern)} numbers"


def _remark_wrapped(first: NumberLine, pattern: tuple[int, ...], remarks: Remarks) -> None:
    remarks.warn(
        "wrapped-lines",
        f"each frequency is spread over {len(pattern)} lines; it was read, but version 1 allows "
        "one line only for one and two ports",
        "export with one line for each frequency, for other readers",
        first.line.number,
    )


# --- the name --------------------------------------------------------------------------------


def named_ports(file: str) -> int | None:
    """The number of ports that the name of a file promises; None where it promises none."""
    match = _NAMED_PORTS.search(file)
    return int(match[1]) if match else None


def check_name(file: str, rows: Rows, remarks: Remarks) -> None:
    """Compare the ports that the name of the file promises with the columns found."""
    named = named_ports(file)
    if named is None:
        return
    if named not in PORTS_OF_COLUMNS.values():
        remarks.error(
            "port-count",
            f"the file is named for {named} ports; only one and two ports are read",
            "export the two ports that matter as .s2p",
        )
    elif rows.ports not in (0, named):
        words = {1: "one port", 2: "two ports"}[rows.ports]
        remarks.error(
            "name-and-columns",
            f"the file named .s{named}p has {rows.values.shape[1]} columns ({words})",
            f"rename it to .s{rows.ports}p, or export it again",
            int(rows.lines[0]),
        )
