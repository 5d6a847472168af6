"""Everything that can go wrong on purpose, as one tree.

ReportError
+-- UsageError        the call itself is wrong: exit status 2
+-- InputRejected     one input (a sweep, a sidecar) cannot be used; carries its findings
+-- NotMeasurable     the sweeps of a build do not allow a figure; carries the reason
+-- OutputError       the pages cannot be written
"""

from __future__ import annotations

from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from reportgen.model import Finding


class ReportError(Exception):
    """Root of every error that this program raises on purpose."""


class UsageError(ReportError):
    """The command line asks for something that cannot be done."""


class InputRejected(ReportError):
    """An input cannot be used; `findings` says all that is wrong with it.

    Parameters
    ----------
    findings : tuple of Finding
        At least one of them is an error.
    """

    def __init__(self, findings: tuple[Finding, ...]) -> None:
        super().__init__("; ".join(finding.message for finding in findings))
        self.findings = findings


class NotMeasurable(ReportError):
    """The sweeps that are there do not give the quantity; the message is the reason."""


class OutputError(ReportError):
    """The pages cannot be written where they were asked for."""
