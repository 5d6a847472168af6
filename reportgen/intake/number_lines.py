"""What counts as a number, and data lines read one by one with a remark for what is none.

This is the slow way, taken when a file is not a plain table of numbers.
"""

from __future__ import annotations

import math
import re
from collections.abc import Iterable
from dataclasses import dataclass, replace

from reportgen.intake.remarks import Remarks, listed_lines, quoted
from reportgen.intake.sweep_text import Line, SweepLines

_BLANKS = re.compile(r"[ \t]+")
_BLANKS_OR_SEMICOLON = re.compile(r"[ \t]*;[ \t]*|[ \t]+")
_BEYOND_PLAIN = re.compile(r"[^0-9+\-.eE \t]")
_BEGINS_LIKE_NUMBER = re.compile(r"[+\-\u2212.,]*\d|[+-]?(?:nan|inf)\b", re.IGNORECASE)
_NUMBER = re.compile(r"[+-]?(?:\d+(?:\.\d*)?|\.\d+)(?:[eEdD][+-]?\d+)?", re.ASCII)
_COMMA_NUMBER = re.compile(r"[+-]?(?:\d+(?:,\d*)?|,\d+)(?:[eEdD][+-]?\d+)?", re.ASCII)
_NO_VALUE = re.compile(
    r"(?P<sign>[+-]?)(?:(?P<infinite>inf|infinity|1\.?#inf0*)"
    r"|nan(?:\([a-z0-9]*\))?|1\.?#(?:ind|qnan|snan)0*)",
    re.ASCII | re.IGNORECASE,
)


def read_number(token: str, decimal: str = ".") -> float | None:
    """Value of a token, nan or infinite where it is written so; None when it is no number.

    Takes ASCII digits, one decimal sign, and an exponent after E or D. What other readers let
    pass (`1_000`, digits of other scripts, a Unicode minus) is no number.

    Parameters
    ----------
    token : str
        Text without blanks.
    decimal : "." or ","
        The decimal sign.
    """
    if (_NUMBER if decimal == "." else _COMMA_NUMBER).fullmatch(token):
        plain = token.replace(",", ".").replace("d", "e").replace("D", "e")
        return float(plain)
    return _unusual_number(token)


def _unusual_number(token: str) -> float | None:
    match = _NO_VALUE.fullmatch(token)
    if match is None:
        return None
    value = math.inf if match["infinite"] else math.nan
    return -value if match["sign"] == "-" else value


def has_d_exponent(token: str) -> bool:
    """Whether a number is written as FORTRAN does, `1D6`."""
    return ("d" in token or "D" in token) and _NUMBER.fullmatch(token.replace(",", ".")) is not None


def is_decimal_comma(token: str) -> bool:
    """Whether a token is a number with a comma where a point belongs."""
    return "," in token and _COMMA_NUMBER.fullmatch(token) is not None


@dataclass(frozen=True, slots=True)
class NumberLine:
    """A data line: how many tokens it has, the numbers up to the first token that is none."""

    line: Line
    count: int
    values: list[float]
    stray: str | None = None

    @property
    def is_text(self) -> bool:
        """Whether the line does not even begin like a number."""
        return self.stray is not None and not _BEGINS_LIKE_NUMBER.match(self.line.text)


def read_number_lines(lines: SweepLines, remarks: Remarks, decimal: str) -> list[NumberLine]:
    """Every data line, without the text before and behind the data.

    Each kind of mistake is remarked once, at the first line that has it.
    """
    read = [_number_line(line, decimal) for line in lines.data]
    if decimal == ",":
        _remark_commas(read, remarks)
    read = _without_header(_without_footer(read, remarks), remarks)
    if lines.ends_open and read:
        read[-1] = _cut_short(read[-1])
    _remark_strays(read, remarks, decimal)
    _remark_d_exponents(read, remarks)
    return read


def _number_line(line: Line, decimal: str) -> NumberLine:
    if decimal == "." and not _BEYOND_PLAIN.search(line.text):
        try:  # of these characters alone float() takes what is a number by our rule
            values = [float(token) for token in line.text.split()]
        except ValueError:
            pass
        else:
            return NumberLine(line, len(values), values)
    return _number_line_by_token(line, decimal)


def _number_line_by_token(line: Line, decimal: str) -> NumberLine:
    tokens = _tokens(line.text, decimal)
    values: list[float] = []
    for token in tokens:
        value = read_number(token, decimal)
        if value is None:
            return NumberLine(line, len(tokens), values, stray=token)
        values.append(value)
    return NumberLine(line, len(tokens), values)


def _tokens(text: str, decimal: str) -> list[str]:
    return (_BLANKS if decimal == "." else _BLANKS_OR_SEMICOLON).split(text)


# --- text around the data --------------------------------------------------------------------


def _without_footer(read: list[NumberLine], remarks: Remarks) -> list[NumberLine]:
    end = len(read)
    while end and read[end - 1].is_text:
        end -= 1
    if end == len(read) or end == 0:
        return read
    first = read[end].line
    remarks.warn(
        "footer",
        f"text follows the data: {quoted(first.text)}; it was left out",
        "put `!` before it, and see whether the sweep is complete",
        first.number,
    )
    return read[:end]


def _without_header(read: list[NumberLine], remarks: Remarks) -> list[NumberLine]:
    begin = next((at for at, row in enumerate(read) if not row.is_text), len(read))
    if begin == 0:
        return read
    first = read[0].line
    if "," in first.text or ";" in first.text:
        remarks.error(
            "csv-table",
            f"the line {quoted(first.text)} looks like the heading of a CSV table; "
            "expected Touchstone text",
            "export the sweep as a Touchstone version 1 file",
            first.number,
        )
    elif begin == len(read):
        remarks.error(
            "no-numbers",
            f"no line begins with a number; the first is {quoted(first.text)}",
            "is this a sweep file? Export it as a Touchstone version 1 file",
            first.number,
        )
    else:
        remarks.error(
            "text-before-data",
            f"text stands before the data: {quoted(first.text)}; expected numbers",
            "put `!` before it",
            first.number,
        )
    return read[begin:]


def _cut_short(last: NumberLine) -> NumberLine:
    """The last line of a file that ends inside it: half a number at its end does not count."""
    if last.stray is not None and len(last.values) == last.count - 1:
        return replace(last, count=last.count - 1, stray=None)
    return last


# --- what is no number -----------------------------------------------------------------------


def _remark_strays(read: Iterable[NumberLine], remarks: Remarks, decimal: str) -> None:
    kinds: dict[str, list[NumberLine]] = {}
    for row in read:
        if row.stray is not None:
            kinds.setdefault(_kind_of_stray(row, decimal), []).append(row)
    for code, rows in kinds.items():
        message, remedy = _explained(code, rows[0])
        if len(rows) > 1:
            message += f"; the same in {listed_lines([row.line.number for row in rows[1:]])}"
        remarks.error(code, message, remedy, rows[0].line.number)


def _kind_of_stray(row: NumberLine, decimal: str) -> str:
    text, stray = row.line.text, row.stray or ""
    if decimal == ",":
        return "decimal-mismatch" if read_number(stray) is not None else "not-a-number"
    tokens = _tokens(text, ",")
    commas = [is_decimal_comma(token) for token in tokens]
    if any(commas) and all(
        comma or read_number(token) is not None for comma, token in zip(commas, tokens, strict=True)
    ):
        return "decimal-comma" if len(tokens) > 1 else "separator"
    if "," in stray or ";" in stray:
        return "separator"
    return "not-a-number"


def _explained(code: str, row: NumberLine) -> tuple[str, str]:
    stray = row.stray or ""
    if code == "decimal-comma":
        return (
            f"decimal comma in {quoted(stray)}; expected a decimal point",
            'convert the file, or set `decimal = ","` for this sweep',
        )
    if code == "decimal-mismatch":
        return (
            f'`decimal = ","` is set but the line has the number {quoted(stray)}',
            "take the setting out, or write all numbers with a comma",
        )
    if code == "separator":
        return (
            f"the line {quoted(row.line.text)} is separated by commas or semicolons; "
            "expected blanks (is it a CSV table?)",
            "export the sweep as a Touchstone version 1 file",
        )
    return (
        f"{quoted(stray)} is not a number{_foreign(stray)}",
        "correct the line, or export the sweep again",
    )


def _foreign(token: str) -> str:
    """Which characters of a token cannot be part of a number, where that is not to be seen."""
    points = [f"U+{ord(character):04X}" for character in token[:80] if not character.isascii()]
    return f" (it holds {points[0]}, outside ASCII)" if points else ""


def _remark_d_exponents(read: Iterable[NumberLine], remarks: Remarks) -> None:
    lines = [
        row.line
        for row in read
        if row.stray is None and ("d" in row.line.text or "D" in row.line.text)
    ]
    found = [
        (line, token)
        for line in lines
        for token in _BLANKS_OR_SEMICOLON.split(line.text)
        if has_d_exponent(token)
    ]
    if found:
        line, token = found[0]
        count = len({line.number for line, _ in found})
        remarks.warn(
            "d-exponent",
            f"exponent written with D in {quoted(token)} ({count} lines in all); read as E",
            "export with E for other readers",
            line.number,
        )


def _remark_commas(read: Iterable[NumberLine], remarks: Remarks) -> None:
    first = next((row.line for row in read if row.stray is None and "," in row.line.text), None)
    if first is not None:
        remarks.warn(
            "decimal-comma-read",
            f"numbers with a decimal comma, as in {quoted(first.text)}, were read as set by "
            '`decimal = ","`',
            "check one value against the instrument",
            first.number,
        )
