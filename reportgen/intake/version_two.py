"""The part of the reader that is of Touchstone 2.x: what its keywords say, and its free-form data.

Of the data comes the table that version 1 has, so that all behind it is one reader.

References
----------
.. [1] Touchstone File Format Specification, version 2.1, IBIS Open Forum, 26 January 2024,
       pages 8 to 15 and 25.
"""

from __future__ import annotations

import re
from dataclasses import replace

import numpy as np

from reportgen.intake.data_rows import NO_ROWS, NOISE_COLUMNS, PORTS_OF_COLUMNS, Rows, named_ports
from reportgen.intake.keywords import Block, read_blocks
from reportgen.intake.number_lines import read_number_lines
from reportgen.intake.option_line import Option, read_option_line, read_reference
from reportgen.intake.remarks import Remarks, quoted
from reportgen.intake.sweep_text import SweepLines

Blocks = dict[str, Block]

_WHOLE_NUMBER = re.compile(r"0{0,8}[1-9][0-9]{0,8}", re.ASCII)
_VERSIONS = ("2.0", "2.1")
_ORDERS = ("21_12", "12_21")
_FORMATS = ("Full", "Lower", "Upper")

# which numbers of a point make frequency, N11, N21, N12, N22; pages 9 to 12 and 15 of [1]
_ONE_PORT = (0, 1, 2)
_TRIANGLE = (0, 1, 2, 3, 4, 3, 4, 5, 6)
_FULL = {"21_12": (0, 1, 2, 3, 4, 5, 6, 7, 8), "12_21": (0, 1, 2, 5, 6, 3, 4, 7, 8)}


def read_version_two(
    lines: SweepLines, remarks: Remarks, *, decimal: str, max_points: int
) -> tuple[Option, Rows]:
    """The option line with the references of [Reference], and the data as version 1 has them.

    Raises
    ------
    InputRejected
        The keywords do not say how the data are to be read.
    """
    blocks, options = read_blocks(lines, remarks)
    _read_choice(blocks, "Version", _VERSIONS, remarks)
    option = read_option_line(
        SweepLines(options=options), remarks, decimal=decimal, normalized=False
    )
    ports = _read_ports(blocks, remarks)
    option = _with_reference(option, blocks, ports, remarks, decimal)
    columns = _read_columns(blocks, ports, remarks)
    _check_points(blocks, remarks, max_points)
    _check_noise(blocks, ports, remarks)
    remarks.stop_if_rejected()
    rows = _read_rows(blocks, columns, remarks, decimal)
    _remark_noise(blocks, remarks, decimal)
    return option, rows


# --- keywords --------------------------------------------------------------------------------


def _read_choice(blocks: Blocks, name: str, choices: tuple[str, ...], remarks: Remarks) -> str:
    """The argument of a keyword, in whatever case; the first choice where there is none."""
    block = blocks.get(name)
    if block is None or not block.argument:
        return choices[0]
    for choice in choices:
        if block.argument.lower() == choice.lower():
            return choice
    remarks.error(
        "argument-value",
        f"[{name}] is {quoted(block.argument)}; expected {' or '.join(choices)}",
        "correct the line, or export the sweep again",
        block.line,
    )
    return choices[0]


def _read_count(blocks: Blocks, name: str, remarks: Remarks) -> int:
    """A whole number above 0; 0 where there is none."""
    block = blocks.get(name)
    if block is None or not block.argument:
        return 0
    if _WHOLE_NUMBER.fullmatch(block.argument):
        return int(block.argument)
    remarks.error(
        "argument-value",
        f"[{name}] is {quoted(block.argument)}; expected a whole number above 0",
        "correct the line, or export the sweep again",
        block.line,
    )
    return 0


def _read_ports(blocks: Blocks, remarks: Remarks) -> int:
    """Number of ports, 1 or 2; 0 where it is not known."""
    ports = _read_count(blocks, "Number of Ports", remarks)
    if not ports:
        return 0
    line = blocks["Number of Ports"].line
    if ports not in PORTS_OF_COLUMNS.values():
        remarks.error(
            "port-count",
            f"[Number of Ports] is {ports}; only one and two ports are read",
            "export the two ports that matter",
            line,
        )
        return 0
    named = named_ports(remarks.file)
    if named not in (None, ports):
        remarks.error(
            "name-and-ports",
            f"the file named .s{named}p has [Number of Ports] {ports}",
            f"rename it to .s{ports}p or .ts, or export it again",
            line,
        )
    return ports


def _read_columns(blocks: Blocks, ports: int, remarks: Remarks) -> tuple[int, ...]:
    """Which numbers of a point are the columns of version 1."""
    order = _read_choice(blocks, "Two-Port Data Order", _ORDERS, remarks)
    matrix = _read_choice(blocks, "Matrix Format", _FORMATS, remarks)
    block = blocks.get("Two-Port Data Order")
    if ports == 2 and block is None:
        remarks.error(
            "keyword-missing",
            "the keyword [Two-Port Data Order] is missing; expected 21_12 or 12_21, since two "
            "ports have no order of their own in version 2",
            "add it in front of [Network Data]; 21_12 is the order of version 1",
        )
    elif ports == 1 and block is not None:
        remarks.error(
            "keyword-not-allowed",
            "[Two-Port Data Order] stands in a file of one port; expected it with two ports only",
            "take it out, or correct [Number of Ports]",
            block.line,
        )
    if ports == 1:
        return _ONE_PORT
    return _FULL[order] if matrix == "Full" else _TRIANGLE


def _check_points(blocks: Blocks, remarks: Remarks, max_points: int) -> None:
    points = _read_count(blocks, "Number of Frequencies", remarks)
    if points > max_points:
        remarks.error(
            "too-many-points",
            f"[Number of Frequencies] is {points}; at most {max_points} points are read",
            "sweep fewer points, or split the file",
            blocks["Number of Frequencies"].line,
        )


def _with_reference(
    option: Option, blocks: Blocks, ports: int, remarks: Remarks, decimal: str
) -> Option:
    """The option with the references of [Reference], which prevail: pages 10 to 12 of [1]_."""
    block = blocks.get("Reference")
    if block is None or not ports:
        return option
    words = [(word, block.line) for word in block.argument.split()]
    words += [(word, line.number) for line in block.lines for word in line.text.split()]
    if len(words) != ports:
        remarks.error(
            "reference-count",
            f"found {len(words)} {'value' if len(words) == 1 else 'values'} behind [Reference]; "
            f"expected {ports}, one real number of ohms for each port",
            "correct the numbers behind [Reference]",
            block.line,
        )
        return option
    ohms = [read_reference(word, line, remarks, decimal) for word, line in words]
    references = tuple(ohm for ohm in ohms if ohm is not None)
    return replace(option, reference_ohm=references, reference_line=block.line)


def _check_noise(blocks: Blocks, ports: int, remarks: Remarks) -> None:
    """Noise data and their number come together, with two ports only: pages 10 to 12 of [1]_."""
    noise, count = blocks.get("Noise Data"), blocks.get("Number of Noise Frequencies")
    if noise is None and count is not None:
        remarks.error(
            "keyword-not-allowed",
            "[Number of Noise Frequencies] stands in a file without [Noise Data]; expected both "
            "or none",
            "take it out, or see whether the file was saved completely",
            count.line,
        )
    elif noise is not None and count is None:
        remarks.error(
            "keyword-missing",
            "the keyword [Number of Noise Frequencies] is missing; expected it with [Noise Data]",
            "add it in front of [Network Data], or take the noise data out",
            noise.line,
        )
    if noise is not None and ports == 1:
        remarks.error(
            "keyword-not-allowed",
            "[Noise Data] stands in a file of one port; expected it with two ports only",
            "take it out, or correct [Number of Ports]",
            noise.line,
        )
    _read_count(blocks, "Number of Noise Frequencies", remarks)


# --- data ------------------------------------------------------------------------------------


def _read_rows(blocks: Blocks, columns: tuple[int, ...], remarks: Remarks, decimal: str) -> Rows:
    """The network data in the columns of version 1."""
    count, data = blocks["Number of Frequencies"], blocks["Network Data"]
    table = _read_table(count, data, max(columns) + 1, remarks, decimal)
    if not len(table) or not _is_ascending(table, remarks):
        return NO_ROWS
    return Rows(table.values[:, list(columns)], table.lines)


def _remark_noise(blocks: Blocks, remarks: Remarks, decimal: str) -> None:
    """The noise data are counted, five numbers a point, and left: page 25 of [1]_."""
    if "Noise Data" not in blocks:
        return
    count, data = blocks["Number of Noise Frequencies"], blocks["Noise Data"]
    if points := len(_read_table(count, data, NOISE_COLUMNS, remarks, decimal)):
        remarks.note(
            "noise-data",
            f"noise data ignored ({points} points from line {data.line} on)",
            "nothing to do",
            data.line,
        )


def _read_table(count: Block, data: Block, width: int, remarks: Remarks, decimal: str) -> Rows:
    """One row for each point, which begins after `width` numbers wherever the lines end.

    Empty when an error was remarked: numbers that are none, or not as many as `count` says.
    """
    read = read_number_lines(SweepLines(data=data.lines), remarks, decimal)
    numbers = np.array([value for row in read for value in row.values])
    points, expected = int(count.argument), int(count.argument) * width
    if len(numbers) != expected and not remarks.rejected:
        remarks.error(
            "number-count",
            f"[{data.name}] holds {len(numbers)} numbers; expected {expected}: {width} for each of "
            f"{points} points, as [{count.name}] in line {count.line} says",
            "see whether the file was saved completely, or correct the keywords",
            data.line,
        )
    if remarks.rejected:
        return NO_ROWS
    lines = np.repeat([row.line.number for row in read], [len(row.values) for row in read])
    return Rows(numbers.reshape(points, width), lines[::width])


def _is_ascending(rows: Rows, remarks: Remarks) -> bool:
    """Whether no frequency falls: a sign that numbers are missing here and too many there."""
    drops = np.flatnonzero(np.diff(rows.frequency) < 0)
    if not len(drops):
        return True
    at = int(drops[0])
    remarks.error(
        "frequency-falls",
        f"point {at + 2} begins with the frequency {rows.frequency[at + 1]:g} behind "
        f"{rows.frequency[at]:g}; expected ascending frequencies",
        "see whether a number is missing or one too many before it, or sweep upwards",
        int(rows.lines[at + 1]),
    )
    return False
