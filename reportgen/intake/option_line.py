"""The option line of a Touchstone file, `# MHz S RI R 50`, and comments that contradict it.

References
----------
.. [1] Touchstone File Format Specification, version 2.1, IBIS Open Forum, 26 January 2024,
       pages 6 to 9.
"""

from __future__ import annotations

import re
from collections import deque
from dataclasses import dataclass, field, replace

from reportgen.intake.number_lines import read_number
from reportgen.intake.remarks import Remarks, quoted
from reportgen.intake.sweep_text import LONGEST_LINE, Line, SweepLines

EXAMPLE = "# MHz S MA R 50"
HERTZ_PER_UNIT = {"Hz": 1.0, "kHz": 1e3, "MHz": 1e6, "GHz": 1e9}
LARGEST_REFERENCE_OHM = 1e7

_NOUNS = {"unit": "frequency unit", "parameter": "parameter", "format": "number format"}
_WORDS = {
    **{unit.lower(): ("unit", unit) for unit in HERTZ_PER_UNIT},
    **{letter.lower(): ("parameter", letter) for letter in "SZYGH"},
    **{name.lower(): ("format", name) for name in ("MA", "DB", "RI")},
}
_BLANKS = re.compile(r"[ \t]+")
_IMPEDANCE = re.compile(
    r"(?:port|reference|ref\.?|system|characteristic)[ _]*impedances?|\bz_?(?:0|o|ref)\b",
    re.IGNORECASE,
)
_INDEX = re.compile(r"\[\d+\]|\(\d+\)")
_COMMENT_NUMBER = re.compile(r"(?<![\w.])\d+(?:\.\d*)?(?:[eE][+-]?\d+)?", re.ASCII)


@dataclass(frozen=True, slots=True, kw_only=True)
class Option:
    """What an option line says; missing items have the values of [1]_, page 6.

    `found` tells whether there is an option line with anything on it, `unit_found` whether it
    names a unit. Neither counts when two lines are compared, nor do the lines. `normalized`: Z data
    are divided by the reference, as they are in version 1.
    """

    unit: str = "GHz"
    parameter: str = "S"
    format: str = "MA"
    reference_ohm: tuple[float, ...] = (50.0,)
    found: bool = field(default=True, compare=False)
    unit_found: bool = field(default=True, compare=False)
    line: int | None = field(default=None, compare=False)
    reference_line: int | None = field(default=None, compare=False)
    normalized: bool = field(default=True, compare=False)


def read_option_line(
    lines: SweepLines, remarks: Remarks, *, decimal: str = ".", normalized: bool = True
) -> Option:
    """What the first option line says; every mistake in it is remarked."""
    if not lines.options:
        return Option(found=False, unit_found=False, normalized=normalized)
    first, *others = lines.options
    option = replace(_parse(first, remarks, decimal), normalized=normalized)
    _check_parameter(option, remarks)
    if lines.data and first.number > lines.data[0].number:
        remarks.error(
            "option-line-late",
            f"the option line stands behind the first data line (line {lines.data[0].number}); "
            "it must come before all data",
            "move it to the top of the file",
            first.number,
        )
    _compare_with_first(option, others, remarks, decimal)
    return option


def _parse(line: Line, remarks: Remarks, decimal: str) -> Option:
    words = deque(word for word in _BLANKS.split(line.text[1:]) if word)
    found: dict[str, str] = {}
    references: tuple[float, ...] = ()
    anything = bool(words)
    seen_r = False
    while words:
        word = words.popleft()
        kind, value = _WORDS.get(word.lower(), ("", ""))
        if kind in found:
            _remark_twice(f"the {_NOUNS[kind]}", word, line, remarks)
        elif kind:
            found[kind] = value
        elif _begins_reference(word) and seen_r:
            _take_reference(word, words, line, _unheard(), decimal)
            _remark_twice("the reference", word, line, remarks)
        elif _begins_reference(word):
            seen_r = True
            references = _take_reference(word, words, line, remarks, decimal)
        else:
            _remark_unknown(word, line, remarks)
    return Option(
        unit=found.get("unit", "GHz"),
        parameter=found.get("parameter", "S"),
        format=found.get("format", "MA"),
        reference_ohm=references or (50.0,),
        found=anything,
        unit_found="unit" in found,
        line=line.number,
        reference_line=line.number,
    )


def _begins_reference(word: str) -> bool:
    return word[0] in "rR" and (len(word) == 1 or _looks_like_value(word[1:]))


def _looks_like_value(word: str) -> bool:
    return any(character.isdigit() for character in word) or read_number(word) is not None


def _take_reference(
    word: str, words: deque[str], line: Line, remarks: Remarks, decimal: str
) -> tuple[float, ...]:
    """The numbers behind R, taken off `words`; `word` may be R with a number glued to it."""
    values = [word[1:]] if len(word) > 1 else []
    while words and _looks_like_value(words[0]):
        values.append(words.popleft())
    if not values:
        remarks.error(
            "reference-missing",
            "nothing stands behind R; expected the reference in ohms",
            f"write it as in `{EXAMPLE}`",
            line.number,
        )
    if len(values) > 1 and words:
        remarks.error(
            "reference-not-last",
            f"{quoted(words[0])} follows the references of the ports, {quoted(' '.join(values))}; "
            "one reference for each port must come last on the option line",
            "move R and its numbers to the end of the line",
            line.number,
        )
    ohms = [read_reference(value, line.number, remarks, decimal) for value in values]
    if len(word) > 1 and ohms[0] is not None:
        remarks.warn(
            "reference-glued",
            f"no blank behind R in {quoted(word)}; read as a reference of {ohms[0]:g} ohm",
            "put a blank behind R, since other readers take 50 ohm for it",
            line.number,
        )
    return tuple(ohm for ohm in ohms if ohm is not None)


def read_reference(value: str, line: int, remarks: Remarks, decimal: str) -> float | None:
    """A reference [ohm]; None when it can be none, which is remarked."""
    ohm = read_number(value, decimal)
    if ohm is not None and 0 < ohm < LARGEST_REFERENCE_OHM:
        return ohm
    remarks.error(
        "reference-value",
        f"the reference is {quoted(value)}; "
        f"expected a real number of ohms above 0 and below {LARGEST_REFERENCE_OHM:g}",
        "write the reference of the calibration, such as 50",
        line,
    )
    return None


def _remark_twice(item: str, word: str, line: Line, remarks: Remarks) -> None:
    remarks.error(
        "option-twice",
        f"option line: {quoted(word)} gives {item} a second time",
        "leave one of the two",
        line.number,
    )


def _remark_unknown(word: str, line: Line, remarks: Remarks) -> None:
    remarks.error(
        "option-unknown",
        f"option line: unknown token {quoted(word)}; expected a unit (Hz, kHz, MHz, GHz), "
        "a parameter (S, Z), a format (MA, DB, RI), or R and a number of ohms",
        f"write it as in `{EXAMPLE}`",
        line.number,
    )


def _check_parameter(option: Option, remarks: Remarks) -> None:
    if option.parameter == "Z" and option.normalized:
        remarks.warn(
            "z-parameters",
            f"Z data are normalised to R ({ohms(option.reference_ohm)} ohm) in version 1, and were "
            "read so; many programs write them in ohms",
            "check one value, or export S parameters",
            option.line,
        )
    elif option.parameter not in "SZ":
        remarks.error(
            "parameter-unsupported",
            f"the file holds {option.parameter} parameters; only S (and Z) are supported",
            "export S parameters",
            option.line,
        )


def _compare_with_first(first: Option, others: list[Line], remarks: Remarks, decimal: str) -> None:
    alike: set[str] = set()
    for line in others:
        if line.text in alike:
            continue
        unheard = _unheard()
        if _parse(line, unheard, decimal) != first or unheard.rejected:
            remarks.error(
                "second-option-line",
                f"a second option line {quoted(line.text)} differs from the first "
                f"(line {first.line}); only one is expected",
                "remove the wrong one; if two sweeps are in the file, split it",
                line.number,
            )
            return
        alike.add(line.text)


def _unheard() -> Remarks:
    """Remarks that nobody gets to see; a line is too short for more."""
    return Remarks("", most_errors=LONGEST_LINE)


def ohms(values: tuple[float, ...]) -> str:
    """References in words: `50`, or `50/200` where the ports differ."""
    return "/".join(f"{value:g}" for value in values)


# --- comments ----------------------------------------------------------------------------------


def remark_impedance_comments(comments: list[Line], option: Option, remarks: Remarks) -> None:
    """One remark for all comments that state a reference: none of them is believed."""
    stated: dict[float, int] = {}
    for comment in comments:
        if match := _IMPEDANCE.search(comment.text):
            rest = _INDEX.sub(" ", comment.text[match.end() :])
            for number in _COMMENT_NUMBER.findall(rest)[:8]:
                stated.setdefault(float(number), comment.number)
    stated.pop(0.0, None)  # the imaginary part of a pair
    if not stated:
        return
    others = {ohm: line for ohm, line in stated.items() if ohm not in option.reference_ohm}
    report = remarks.warn if others else remarks.note
    ohm, line = next(iter((others or stated).items()))
    report(
        "impedance-in-comment",
        f"a comment mentions a port impedance of {ohm:g} ohm, ignored; "
        f"the reference is taken to be {ohms(option.reference_ohm)} ohm",
        "if the comment is right, put the number behind R on the option line"
        " (or behind [Reference])",
        line,
    )
