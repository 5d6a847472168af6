"""Findings and the band table as a terminal prints them; foreign text loses its control codes."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Sequence

from rich.console import Console
from rich.text import Text

from reportgen.model import BenchSheet, BuildResult, FailedBuild, Finding, Severity
from reportgen.pages import sentences
from reportgen.pages.band_tables import band_table
from reportgen.pages.limits import limits_words
from reportgen.pages.plain_text import clean_text
from reportgen.pages.tables import Row, Table
from reportgen.pages.uncertainty import advice_sentences
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
    """The verdict, the limits, the band table and the advice of one build."""
    sheet = result.build.sheet
    console.print(Text(clean_text(sheet.name), style="bold"))
    console.print(Text(clean_text(sentences.verdict(result, bench.locale))), soft_wrap=True)
    opening, causes = limits_words(result.limits)
    if opening:
        console.print(Text(clean_text(f"{opening} {causes}".rstrip())), soft_wrap=True)
    table = band_table(result, bench)
    if table is not None:
        for block in _blocks(table, console.width):
            console.print(Text("\n".join(block)), soft_wrap=True)
    for sentence in advice_sentences(result.advice, bench.locale):
        console.print(Text(clean_text(sentence), style="dim"), soft_wrap=True)
    console.print(Text(f"method: {METHOD_NAMES[result.chosen.method]}", style="dim"))


def _blocks(table: Table, width: int) -> Iterator[list[str]]:
    """The table as lines of text; columns that find no room go into a further block."""
    rows = [row for group in table.groups for row in group]
    heads = _padded(["", table.corner, *[clean_text(row.head or "") for row in rows]], str.ljust)
    subs = _padded(["", "", *[clean_text(row.sub or "") for row in rows]], str.ljust)
    lines = [f"{head}  {sub}" for head, sub in zip(heads, subs, strict=True)]
    room = width - len(lines[0])
    for columns in _fitting(_column_texts(table, rows), room):
        block = ["".join(parts) for parts in zip(lines, *columns, strict=True)]
        words = [f"  {clean_text(row.words)}" if row.words else "" for row in rows]
        yield [
            (line.rstrip() + text).rstrip()
            for line, text in zip(block, ["", "", *words], strict=True)
        ]


def _column_texts(table: Table, rows: Sequence[Row]) -> list[list[str]]:
    """Every column, its two lines of head first, padded to one width."""
    columns = []
    for place, column in enumerate(table.columns):
        cells = [clean_text(row.cells[place].text) if row.cells else "" for row in rows]
        columns.append(_padded([column.label, column.unit, *cells], str.rjust, gap="  "))
    return columns


def _padded(texts: Sequence[str], pad: Callable[[str, int], str], gap: str = "") -> list[str]:
    width = max(len(text) for text in texts)
    return [gap + pad(text, width) for text in texts]


def _fitting(columns: Sequence[list[str]], room: int) -> Iterator[list[list[str]]]:
    """The columns in groups that fit, at least one in each."""
    group: list[list[str]] = []
    for column in columns:
        if group and sum(len(one[0]) for one in [*group, column]) > room:
            yield group
            group = []
        group.append(column)
    yield group
