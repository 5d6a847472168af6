"""What concerns all builds of a run: the long table and the index, from what is published."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, field
from pathlib import Path

from reportgen import __version__
from reportgen.errors import OutputError
from reportgen.model import BenchSheet, FailedBuild, Finding, Severity
from reportgen.output.csv_tables import LONG_HEAD, csv_bytes, long_csv_lines
from reportgen.output.manifest import OutputFile
from reportgen.output.placing import place_file, place_parts
from reportgen.pages.index import render_index_html
from reportgen.published import RESULTS_FILE, PublishedBuild, published_build, read_document


@dataclass(frozen=True, kw_only=True, slots=True)
class Overview:
    """What was written, and what could not be read for it."""

    outputs: tuple[OutputFile, ...]
    findings: tuple[Finding, ...]


@dataclass(frozen=True, slots=True)
class _LongTable:
    """The long table, build by build; notes meanwhile what the index needs of each."""

    out: Path
    keys: Sequence[str]
    builds: list[PublishedBuild] = field(default_factory=list)
    unreadable: list[Finding] = field(default_factory=list)

    def parts(self) -> Iterator[bytes]:
        yield csv_bytes(LONG_HEAD)
        for key in self.keys:
            try:
                document = read_document(self.out / key / RESULTS_FILE)
                published, lines = published_build(document), long_csv_lines(document)
            except OutputError as error:
                self.unreadable.append(_unreadable(key, error))
                continue
            self.builds.append(published)
            yield csv_bytes(lines)


def place_index_files(
    out: Path,
    keys: Sequence[str],
    *,
    bench: BenchSheet,
    failed: Sequence[FailedBuild],
    findings: Sequence[Finding],
    baseline_key: str | None,
) -> Overview:
    """`results.csv` and, after it, `index.html`.

    Parameters
    ----------
    out : Path
        The output folder, opened.
    keys : sequence of str
        Keys of the builds that have a page, in their order.
    bench : BenchSheet
        What is common to all builds.
    failed : sequence of FailedBuild
        Those that are not published, or only as they were before.
    findings : sequence of Finding
        About the runs folder itself.
    baseline_key : str or None
        Key of the build that the others are compared with.
    """
    table = _LongTable(out, keys)
    csv = place_parts(out, "results.csv", table.parts())
    index = render_index_html(
        table.builds,
        bench=bench,
        failed=failed,
        standing=[one.key for one in failed if has_page(out, one.key)],
        findings=[*findings, *table.unreadable],
        baseline_key=baseline_key,
        program_version=__version__,
    )
    page = place_file(out, "index.html", index.encode("utf-8"))
    return Overview(outputs=(csv, page), findings=tuple(table.unreadable))


def has_page(out: Path, key: str) -> bool:
    """Whether a build has a page, of this run or of an earlier one."""
    return (out / key / "report.html").is_file()


def _unreadable(key: str, error: OutputError) -> Finding:
    return Finding(
        severity=Severity.WARNING,
        code="unreadable-results",
        message=f"{key}: {error}",
        remedy="publish it again",
    )
