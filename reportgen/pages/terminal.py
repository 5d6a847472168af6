"""Findings and the band table as a terminal prints them; foreign text loses its control codes."""

from __future__ import annotations

from collections.abc import Sequence

from rich.console import Console
from rich.table import Table as TerminalTable
from rich.text import Text

from reportgen.model import BenchSheet, BuildResult, FailedBuild, Finding, Severity
from reportgen.pages import sentences
from reportgen.pages.band_tables import band_table
from reportgen.pages.plain_text import clean_text
from reportgen.pages.tables import Row
from reportgen.pages.wording import METHOD_NAMES

_STYLES = {Severity.ERROR: "bold red", Severity.WARNING: "yellow", Severity.NOTE: "dim"}


def print_findings(console: Console, heading: str, findings: Sequence[Finding]) -> None:
    """Findings of one build, the gravest first; nothing where there are none."""
    if not findings:
        return
    order = list(Severity)
    console.print(Text(clean_text(heading), style="bold"))
    for finding in sorted(findings, key=lambda one: order.index(one.severity)):
        console.print(_finding_text(finding), soft_wrap=True)


def _finding_text(finding: Finding) -> Text:
    place = ": ".join(
        [
            part
            for part in (
                finding.file,
                f"line {finding.line}" if finding.line else None,
                finding.key,
            )
            if part
        ]
    )
    message = f"{place}: {finding.message}" if place else finding.message
    text = Text(f"  {finding.severity.value:8}", style=_STYLES[finding.severity])
    text.append(clean_text(message), style="default")
    if finding.remedy:
        text.append(f"; {clean_text(finding.remedy)}", style="dim")
    return text


def print_failed(console: Console, failed: Sequence[FailedBuild]) -> None:
    """Builds that were not published, and why."""
    for one in failed:
        print_findings(console, f"{one.key}: not published", one.findings)


def print_bands(console: Console, result: BuildResult, bench: BenchSheet) -> None:
    """The verdict and the band table of one build."""
    sheet = result.build.sheet
    console.print(Text(clean_text(sheet.name), style="bold"))
    console.print(Text(clean_text(sentences.verdict(result, bench.locale))), soft_wrap=True)
    table = band_table(result, bench)
    if table is not None:
        shown = TerminalTable(box=None, pad_edge=False, header_style="dim")
        shown.add_column(table.corner)
        shown.add_column("")
        for column in table.columns:
            shown.add_column(Text(f"{column.label}\n{column.unit}"), justify="right")
        for group in table.groups:
            for row in group:
                shown.add_row(*_cells(row, len(table.columns)))
        console.print(shown)
    console.print(Text(f"method: {METHOD_NAMES[result.chosen.method]}", style="dim"))


def _cells(row: Row, columns: int) -> list[Text]:
    head = [Text(clean_text(row.head or "")), Text(clean_text(row.sub or ""), style="dim")]
    if row.words is not None:
        return [*head, Text(clean_text(row.words))]
    cells = [Text(clean_text(cell.text)) for cell in row.cells]
    return [*head, *cells, *([Text("")] * (columns - len(cells)))]
