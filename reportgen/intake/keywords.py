"""The keywords of a Touchstone 2.x file, each with what belongs to it: names, order, repetition.

References
----------
.. [1] Touchstone File Format Specification, version 2.1, IBIS Open Forum, 26 January 2024,
       pages 4 and 10 to 14. That the keywords between [Number of Ports] and [Network Data] may
       stand in any order is from memory.
"""

from __future__ import annotations

import re
from dataclasses import dataclass, field
from difflib import get_close_matches

from reportgen.intake.remarks import Remarks, quoted
from reportgen.intake.sweep_text import BLANKS, Line, SweepLines

# the keywords of one or two ports, and their place in a file
_PLACES = {
    "Version": 0,  # the option line has place 1
    "Number of Ports": 2,
    "Two-Port Data Order": 3,
    "Number of Frequencies": 3,
    "Number of Noise Frequencies": 3,
    "Reference": 3,
    "Matrix Format": 3,
    "Begin Information": 3,
    "Network Data": 4,
    "Noise Data": 5,
    "End": 6,
}
_OPTION_PLACE = 1
_MANDATORY = ("Version", "Number of Ports", "Number of Frequencies", "Network Data", "End")
_NO_ARGUMENT = {"Begin Information", "Network Data", "Noise Data", "End"}
_WITH_LINES = {"Reference", "Network Data", "Noise Data"}
_IN_ORDER = (
    "[Version], option line, [Number of Ports], the other keywords, [Network Data], "
    "[Noise Data] if any, [End]"
)
_KEYWORD = re.compile(r"[ \t]*\[([^\]]*)\]")
_SPELLED = {name.lower(): name for name in _PLACES}


@dataclass(frozen=True, slots=True)
class Block:
    """A keyword, the text behind it on its line, and the lines up to the next keyword."""

    name: str
    line: int
    argument: str
    lines: list[Line] = field(default_factory=list)


def read_blocks(lines: SweepLines, remarks: Remarks) -> tuple[dict[str, Block], list[Line]]:
    """The keywords of a file by name, and its option lines; every mistake is remarked.

    Raises
    ------
    InputRejected
        No [Version], or an information section without an end.
    """
    _refuse_without_version(lines, remarks)
    in_order = sorted([*lines.options, *lines.keywords, *lines.data])
    in_order = _without_information(in_order, remarks)
    found, options = _sorted(in_order, remarks)
    blocks: dict[str, Block] = {}
    for block in found:
        if blocks.setdefault(block.name, block) is not block:
            remarks.error(
                "keyword-twice",
                f"the keyword [{block.name}] stands there a second time; the first is in line "
                f"{blocks[block.name].line}, and one is expected",
                "leave one of the two",
                block.line,
            )
        _check_text(block, remarks)
    _check_order(list(blocks.values()), options, remarks)
    _check_complete(blocks, remarks)
    return blocks, options


def _name(line: Line) -> str:
    """What stands between the brackets, in small letters."""
    match = _KEYWORD.match(line.text)
    return match[1].strip(BLANKS).lower() if match else ""


def _refuse_without_version(lines: SweepLines, remarks: Remarks) -> None:
    if all(_name(line) != "version" for line in lines.keywords):
        line = lines.keywords[0]
        remarks.reject(
            "version-missing",
            f"found the keyword {quoted(line.text)} but no [Version]; keywords are of Touchstone "
            "2.x, and expected [Version] 2.0 or 2.1 as the first line",
            "put [Version] first, or take the keywords out of a version 1 file",
            line.number,
        )


def _without_information(lines: list[Line], remarks: Remarks) -> list[Line]:
    """The lines but those from behind [Begin Information] to [End Information]."""
    kept = []
    begin = None
    for line in lines:
        if begin is None:
            kept.append(line)
            begin = line if _name(line) == "begin information" else None
        elif _name(line) == "end information":
            begin = None
    if begin is not None:
        remarks.reject(
            "information-open",
            "[Begin Information] has no end; expected [End Information] behind it",
            "put [End Information] behind the text",
            begin.number,
        )
    return kept


def _sorted(lines: list[Line], remarks: Remarks) -> tuple[list[Block], list[Line]]:
    """Blocks and option lines; whatever follows [End] is text of that block."""
    blocks: list[Block] = []
    options = []
    ended = False
    for line in lines:
        text = line.text.lstrip(BLANKS)
        if ended:
            blocks[-1].lines.append(line)
        elif text.startswith("#"):
            options.append(line)
        elif not text.startswith("["):
            blocks[-1].lines.append(line)  # a keyword stands before all data
        else:
            blocks.append(_block(line, remarks))
            ended = blocks[-1].name == "End"
    return [block for block in blocks if block.name], options


def _block(line: Line, remarks: Remarks) -> Block:
    """The keyword of a line; without a name when it is none, which is remarked."""
    name = _SPELLED.get(_name(line), "")
    if not name:
        _remark_unknown(line, remarks)
    elif line.text[0] in BLANKS:
        remarks.error(
            "keyword-indented",
            f"blanks stand before the keyword [{name}]; expected it in column 1",
            "take the blanks out",
            line.number,
        )
    return Block(name, line.number, line.text.partition("]")[2].strip(BLANKS))


def _remark_unknown(line: Line, remarks: Remarks) -> None:
    name = _name(line)
    if name == "mixed-mode order":
        remarks.error(
            "mixed-mode",
            f"found {quoted(line.text)}: mixed-mode parameters are not read",
            "export single-ended S parameters of one or two ports",
            line.number,
        )
    elif name == "end information":
        remarks.error(
            "information-not-begun",
            "[End Information] without a [Begin Information] before it",
            "put [Begin Information] before the text, or take the keyword out",
            line.number,
        )
    else:
        nearest = get_close_matches(name[:80], _SPELLED, n=1)
        hint = f"did you mean [{_SPELLED[nearest[0]]}]?" if nearest else "take the line out"
        remarks.error(
            "keyword-unknown",
            f"unknown keyword {quoted(line.text)}; expected one of "
            f"{', '.join(f'[{known}]' for known in _PLACES)}",
            hint,
            line.number,
        )


def _check_text(block: Block, remarks: Remarks) -> None:
    """Text is where text belongs: behind a keyword, and on the lines below it."""
    if block.name in _NO_ARGUMENT and block.argument:
        remarks.error(
            "argument-unexpected",
            f"{quoted(block.argument)} stands behind [{block.name}]; expected nothing on its line",
            "put it on a line of its own, or take it out",
            block.line,
        )
    elif block.name not in _NO_ARGUMENT | _WITH_LINES and not block.argument:
        remarks.error(
            "argument-missing",
            f"nothing stands behind [{block.name}]; expected its value on the same line",
            "write it there",
            block.line,
        )
    if block.lines and block.name == "End":
        remarks.error(
            "text-after-end",
            f"{quoted(block.lines[0].text)} stands behind [End]; expected nothing but comments",
            "take it out; if a second sweep follows, split the file",
            block.lines[0].number,
        )
    elif block.lines and block.name not in _WITH_LINES:
        remarks.error(
            "text-between-keywords",
            f"{quoted(block.lines[0].text)} stands below [{block.name}]; expected a keyword",
            "put data below [Network Data], and `!` before a comment",
            block.lines[0].number,
        )


def _check_order(blocks: list[Block], options: list[Line], remarks: Remarks) -> None:
    items = [(block.line, _PLACES[block.name], f"[{block.name}]") for block in blocks]
    items += [(option.number, _OPTION_PLACE, "the option line") for option in options[:1]]
    latest = (0, 0, "")
    for item in sorted(items):
        line, place, words = item
        if place < latest[1]:
            remarks.error(
                "keyword-order",
                f"{words} stands behind {latest[2]} (line {latest[0]}); expected {_IN_ORDER}",
                "move it to its place",
                line,
            )
        else:
            latest = item


def _check_complete(blocks: dict[str, Block], remarks: Remarks) -> None:
    for name in _MANDATORY:
        if name not in blocks:
            remarks.error(
                "keyword-missing",
                f"the keyword [{name}] is missing; expected {_IN_ORDER}",
                "see whether the file was saved completely, or add it",
            )
