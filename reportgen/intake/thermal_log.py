"""Temperature logs under power, as CSV."""

from __future__ import annotations

import hashlib

import numpy as np

from reportgen.intake.number_lines import read_number
from reportgen.intake.remarks import Remarks, listed_lines, quoted
from reportgen.intake.sweep_text import decode_text
from reportgen.model import Finding, RealArray, ThermalLog

COLUMNS = ("time_s", "core_c", "ambient_c")
MAX_BYTES = 2**24
MAX_ROWS = 100_000

_COLDEST_C, _HOTTEST_C = -60.0, 500.0
_HOTTEST_ROOM_C = 60.0  # above: degrees Fahrenheit, or a box measured for its room


def parse_thermal_log(data: bytes, *, file: str) -> tuple[ThermalLog, tuple[Finding, ...]]:
    """A log with the columns `time_s`, `core_c` and `ambient_c` in any order; others are left out.

    Parameters
    ----------
    data : bytes
        CSV with a heading, separated by commas, with decimal points; lines above the heading that
        begin with # are comments.
    file : str
        Name of the file for findings.

    Raises
    ------
    InputRejected
        With all that is wrong in the file.
    """
    remarks = Remarks(file)
    text = decode_text(data, remarks, max_bytes=MAX_BYTES)
    written = text.split("\n")
    above = next((at for at, line in enumerate(written) if not line.startswith("#")), 0)
    heading, *rows = written[above:]
    if sum(1 for row in rows if row.strip()) > MAX_ROWS:
        remarks.reject("log-too-long", f"more than {MAX_ROWS} rows", "log less often")
    columns = _columns(heading, above + 1, remarks)
    values, lines = _read_rows(rows, above + 2, columns, remarks)
    remarks.stop_if_rejected()
    if not lines:
        remarks.reject("no-data", "no rows below the heading", "enter a line for each reading")
    _check(values, np.array(lines), remarks)
    remarks.stop_if_rejected()
    time_s, core_c, ambient_c = (np.ascontiguousarray(column) for column in values.T)
    log = ThermalLog(
        file=file,
        sha256=hashlib.sha256(data).hexdigest(),
        time_s=time_s,
        core_c=core_c,
        ambient_c=ambient_c,
    )
    return log, remarks.findings


def _columns(heading: str, line: int, remarks: Remarks) -> tuple[int, list[int]]:
    """How many columns there are, and where ours stand."""
    names = [cell.strip().lower() for cell in heading.split(",")]
    missing = [name for name in COLUMNS if names.count(name) != 1]
    if missing:
        remarks.reject(
            "log-header",
            f"the heading is {quoted(heading)}; expected one column each of "
            f"{', '.join(COLUMNS)}, separated by commas (not found once: {', '.join(missing)})",
            "name the columns so; seconds and degrees Celsius",
            line,
        )
    return len(names), [names.index(name) for name in COLUMNS]


def _read_rows(
    rows: list[str], first: int, columns: tuple[int, list[int]], remarks: Remarks
) -> tuple[RealArray, list[int]]:
    """Numbers of our columns, (N, 3), and the line of each row."""
    count, places = columns
    values: list[list[float]] = []
    lines: list[int] = []
    stray: list[int] = []
    for line, row in enumerate(rows, start=first):
        if not row.strip():
            continue
        cells = row.split(",")
        found = [read_number(cells[at].strip()) for at in places] if len(cells) == count else []
        numbers = [value for value in found if value is not None and np.isfinite(value)]
        if len(numbers) == len(COLUMNS):
            values.append(numbers)
            lines.append(line)
        else:
            stray.append(line)
    if stray:
        remarks.error(
            "log-line",
            f"found {quoted(rows[stray[0] - first])}, expected {count} columns, numbers with "
            f"decimal points in ours: {listed_lines(stray)}",
            "correct the lines or take them out",
            stray[0],
        )
    return np.array(values).reshape(-1, len(COLUMNS)), lines


def _check(values: RealArray, lines: np.ndarray, remarks: Remarks) -> None:
    """Clock and units."""
    time_s, core_c, ambient_c = values.T
    back = lines[1:][np.diff(time_s) < 0]
    if back.size:
        remarks.error(
            "log-clock",
            f"the clock goes back at {listed_lines(back)}; expected time that ascends",
            "one log a file, from one start",
            int(back[0]),
        )
    beyond = ((values[:, 1:] < _COLDEST_C) | (values[:, 1:] > _HOTTEST_C)).any(axis=1)
    if beyond.any():
        remarks.error(
            "log-temperature",
            f"temperatures below {_COLDEST_C:.0f} or above {_HOTTEST_C:.0f} C in "
            f"{listed_lines(lines[beyond])}",
            "is a thermometer off, or the log in another unit?",
            int(lines[beyond][0]),
        )
    elif np.median(ambient_c) > _HOTTEST_ROOM_C:
        remarks.error(
            "log-unit",
            f"surroundings of {np.median(ambient_c):.0f} C; expected at most "
            f"{_HOTTEST_ROOM_C:.0f} C",
            "are these degrees Fahrenheit or kelvin? Convert to Celsius",
        )
    if np.median(core_c - ambient_c) < 0:
        remarks.warn(
            "log-swapped",
            "the core is colder than its surroundings",
            "are the columns core_c and ambient_c exchanged?",
        )
