"""One folder per mistake under `bad_runs/`, with every sentence that it must give beside it.

A sentence is: severity, place, what was found and expected, and behind the bar what to do.
"""

from __future__ import annotations

from pathlib import Path

import pytest

from reportgen.errors import InputRejected
from reportgen.intake.builds import open_runs, read_build
from reportgen.model import Finding

BAD_RUNS = Path(__file__).parent / "bad_runs"


def all_findings(root: Path) -> list[Finding]:
    try:
        runs = open_runs(root)
    except InputRejected as rejected:
        return list(rejected.findings)
    found = list(runs.findings)
    for folder in runs.folders:
        try:
            found += read_build(runs, folder).findings
        except InputRejected as rejected:
            found += rejected.findings
    return found


def sentence(finding: Finding) -> str:
    line = f":{finding.line}" if finding.line else ""
    key = f": {finding.key}" if finding.key else ""
    place = f"{finding.severity}: {finding.file}{line}{key}"
    return f"{place}: {finding.message} | {finding.remedy}".rstrip(" |")


@pytest.mark.parametrize("case", sorted(folder.name for folder in BAD_RUNS.iterdir()))
def test_every_mistake_is_told_in_these_words(case: str) -> None:
    expected = (BAD_RUNS / case / "sentences.txt").read_text("utf-8").splitlines()
    assert expected
    assert [sentence(finding) for finding in all_findings(BAD_RUNS / case)] == expected
