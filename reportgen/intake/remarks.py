"""What a reader has to say about one sweep file, collected until the file is read or given up."""

from __future__ import annotations

import unicodedata
from collections import Counter
from collections.abc import Iterable, Sequence
from typing import NoReturn

import numpy as np
from numpy.typing import NDArray

from reportgen.errors import InputRejected
from reportgen.model import Finding, Severity

MOST_ERRORS = 100
MOST_ALIKE = 100

_QUOTE_LENGTH = 80
_LISTED = 5
_UNSEEN = {"Cc", "Cf", "Cs", "Co", "Cn", "Zl", "Zp"}


class Remarks:
    """Findings about one file in the order in which they were made.

    Parameters
    ----------
    file : str
        Name of the file as the findings give it.
    most_errors : int, optional
        The file is given up at the next one.
    """

    def __init__(self, file: str, *, most_errors: int = MOST_ERRORS) -> None:
        self.file = file
        self.most_errors = most_errors
        self._found: list[Finding] = []
        self._errors = 0

    @property
    def findings(self) -> tuple[Finding, ...]:
        """All findings so far."""
        return tuple(self._found)

    @property
    def rejected(self) -> bool:
        """Whether one of them is an error."""
        return self._errors > 0

    def note(self, code: str, message: str, remedy: str, line: int | None = None) -> None:
        """Something worth knowing."""
        self._add(Severity.NOTE, code, message, remedy, line)

    def warn(self, code: str, message: str, remedy: str, line: int | None = None) -> None:
        """Something that may make the figures wrong."""
        self._add(Severity.WARNING, code, message, remedy, line)

    def error(self, code: str, message: str, remedy: str, line: int | None = None) -> None:
        """Something that keeps the file from being used; reading may go on to find more.

        Raises
        ------
        InputRejected
            There were too many before.
        """
        self._errors += 1
        if self._errors > self.most_errors:
            message = f"more than {self.most_errors} mistakes; the others are not told"
            self._add(Severity.ERROR, "too-many-mistakes", message, "is this the right file?", line)
            raise InputRejected(self.findings)
        self._add(Severity.ERROR, code, message, remedy, line)

    def reject(self, code: str, message: str, remedy: str, line: int | None = None) -> NoReturn:
        """Something after which nothing else in the file makes sense.

        Raises
        ------
        InputRejected
            Always.
        """
        self.error(code, message, remedy, line)
        raise InputRejected(self.findings)

    def stop_if_rejected(self) -> None:
        """Give the file up when an error was found.

        Raises
        ------
        InputRejected
            With every finding so far.
        """
        if self.rejected:
            raise InputRejected(self.findings)

    def _add(
        self, severity: Severity, code: str, message: str, remedy: str, line: int | None
    ) -> None:
        self._found.append(
            Finding(
                severity=severity,
                code=code,
                message=message,
                remedy=remedy,
                file=self.file,
                line=line,
            )
        )


def shortened(findings: Iterable[Finding]) -> tuple[Finding, ...]:
    """Findings without those of a kind that was told 100 times; how many they are is told."""
    kept: list[Finding] = []
    counts: Counter[tuple[Severity, str]] = Counter()
    for finding in findings:
        kind = (finding.severity, finding.code)
        counts[kind] += 1
        if counts[kind] <= MOST_ALIKE:
            kept.append(finding)
    return (
        *kept,
        *(_left_out(*kind, count) for kind, count in counts.items() if count > MOST_ALIKE),
    )


def _left_out(severity: Severity, code: str, count: int) -> Finding:
    message = f"{count - MOST_ALIKE} more findings of the kind `{code}`; they are not listed"
    return Finding(severity=severity, code=code, message=message, remedy="mend the others first")


def quoted(text: str) -> str:
    r"""Foreign text as a message shows it: unseen characters as `\u202e`, cut at 80 characters."""
    shown = "".join(_visible(character) for character in text[: _QUOTE_LENGTH + 1])
    if len(shown) > _QUOTE_LENGTH:
        shown = shown[: _QUOTE_LENGTH - 3] + "..."
    return f'"{shown}"'


def _visible(character: str) -> str:
    if unicodedata.category(character) in _UNSEEN:
        return character.encode("unicode_escape").decode("ascii")
    return character


def listed_lines(lines: Sequence[int] | NDArray[np.int64]) -> str:
    """Line numbers in words: `line 3`, `lines 3, 4 and 9`, `lines 3, 4, 5, 6, 7 and 12 more`."""
    numbers = [str(int(line)) for line in lines[:_LISTED]]
    if len(lines) > _LISTED:
        numbers.append(f"{len(lines) - _LISTED} more")
    if len(numbers) == 1:
        return f"line {numbers[0]}"
    return f"lines {', '.join(numbers[:-1])} and {numbers[-1]}"
