"""What the comments of a sweep file say about its reference, and that it is not believed."""

from __future__ import annotations

import re

from reportgen.intake.option_line import Option, ohms
from reportgen.intake.remarks import Remarks
from reportgen.intake.sweep_lines import Line

_IMPEDANCE = re.compile(
    r"(?:port|reference|ref\.?|system|characteristic)[ _]*impedances?|\bz_?(?:0|o|ref)\b",
    re.IGNORECASE,
)
_INDEX = re.compile(r"\[\d+\]|\(\d+\)")
_COMMENT_NUMBER = re.compile(r"(?<![\w.])\d+(?:\.\d*)?(?:[eE][+-]?\d+)?", re.ASCII)


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
        "if the comment is right, put the number behind R on the option line",
        line,
    )
