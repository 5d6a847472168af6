"""The whole story: scan, read, measure, compare, draw, render, place.

Builds are independent of each other, the baseline alone goes first; `one_build` tells what happens
to each.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator, Sequence
from concurrent.futures import ProcessPoolExecutor
from concurrent.futures.process import BrokenProcessPool
from contextlib import contextmanager
from dataclasses import dataclass, replace
from difflib import get_close_matches
from itertools import repeat
from multiprocessing import get_context
from pathlib import Path

from reportgen import __version__
from reportgen.errors import InputRejected, OutputError, UsageError
from reportgen.intake.builds import BuildFolder, Runs, open_runs, read_build
from reportgen.model import BuildResult, FailedBuild, Finding, InputFile, Severity
from reportgen.one_build import Made, Task, make_build, measure_baseline
from reportgen.output.manifest import (
    MANIFEST_FILE,
    BuildRecord,
    OutputFile,
    manifest_document,
    output_file,
    read_earlier,
)
from reportgen.output.placing import open_output, place_file, place_parts, remove_files
from reportgen.physics.measure import Measured, measure
from reportgen.published import RESULTS_FILE, PublishedBuild, published_build, read_document

Announce = Callable[[str, int, int], None]


@dataclass(frozen=True, kw_only=True, slots=True)
class Request:
    """What `publish` was asked for; `only` names keys, empty: all."""

    runs: Path
    out: Path
    baseline: str | None = None
    only: tuple[str, ...] = ()
    jobs: int = 1


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Outcome:
    """What became of a run."""

    made: tuple[Made, ...]
    failed: tuple[FailedBuild, ...]
    findings: tuple[Finding, ...]

    def worst(self) -> Severity | None:
        """Severity of the worst finding of the whole run."""
        found = [finding.severity for finding in self.findings]
        found += [finding.severity for one in self.made for finding in one.findings]
        if self.failed or Severity.ERROR in found:
            return Severity.ERROR
        return Severity.WARNING if Severity.WARNING in found else next(iter(found), None)


def publish(request: Request, announce: Announce) -> Outcome:
    """Everything of a runs folder, published.

    Raises
    ------
    UsageError
        The call asks for something that cannot be done.
    InputRejected
        `runs.toml` cannot be used, or there is no build; nothing was written.
    OutputError
        The pages cannot be written.
    """
    runs, baseline = _opened(request)
    _refuse_tangle(request.out, runs)
    with open_output(request.out):
        earlier = read_earlier(request.out)
        task = Task(
            runs=runs, baseline=baseline, out=request.out, only=request.only, earlier=earlier
        )
        outcome = _make_all(task, request.jobs, announce)
        key = None if baseline is None else baseline.build.key
        return _place_index(request.out, runs, key, outcome, earlier)


def inspect(path: Path, jobs: int, announce: Announce) -> Outcome:
    """What is wrong or worth knowing about a runs folder; writes nothing."""
    return _make_all(Task(runs=open_runs(path)), jobs, announce)


def measure_folder(path: Path) -> tuple[Measured, Runs]:
    """One build folder, computed.

    Raises
    ------
    UsageError
        It is no build folder.
    InputRejected, NotMeasurable
        Nothing can be computed from it.
    """
    runs, folder = _find_build(path)
    return measure(read_build(runs, folder), runs.bench, runs.bands), runs


# --- what is asked for -----------------------------------------------------------------------


def _opened(request: Request) -> tuple[Runs, BuildResult | None]:
    runs = open_runs(request.runs)
    if not runs.folders:
        raise InputRejected((*runs.findings, _no_build()))
    keys = [folder.key for folder in runs.folders]
    for key in (*request.only, *([request.baseline] if request.baseline else [])):
        if key not in keys:
            raise UsageError(_no_such_key(key, keys))
    if request.baseline is not None:
        bench = replace(runs.bench, baseline=request.baseline)
        known = tuple(one for one in runs.findings if one.code != "unknown-baseline")
        runs = replace(runs, bench=bench, findings=known)
    return _with_baseline(runs)


def _no_build() -> Finding:
    return Finding(
        severity=Severity.ERROR,
        code="no-build",
        message="no build was found; earlier pages were left as they are",
        remedy="a build is a folder that holds a build.toml and its sweeps",
    )


def _no_such_key(key: str, keys: Sequence[str]) -> str:
    near = get_close_matches(key, keys, n=1)
    known = f"did you mean {near[0]}?" if near else f"there are: {', '.join(keys) or 'none'}"
    return f"no build has the key {key[:80]!r}; {known}"


def _with_baseline(runs: Runs) -> tuple[Runs, BuildResult | None]:
    """The baseline build, computed; a finding where it cannot be."""
    folder = next((one for one in runs.folders if one.key == runs.bench.baseline), None)
    if folder is None:
        return runs, None
    baseline = measure_baseline(runs, folder)
    if isinstance(baseline, BuildResult):
        return runs, baseline
    finding = Finding(
        severity=Severity.ERROR,
        code="no-baseline",
        file=f"{folder.folder}/build.toml",
        message=f"the baseline {folder.key} cannot be computed, so no build was compared with it",
        remedy="mend its errors, or choose another baseline",
    )
    return replace(runs, findings=(*runs.findings, finding)), None


def _refuse_tangle(out: Path, runs: Runs) -> None:
    """Pages must not come to lie where sweeps are looked for, nor the other way round."""
    place, root = out.resolve(), runs.root.resolve()
    if place == root or place in root.parents:
        raise UsageError(f"--out {out} holds the runs folder; choose a folder of its own")
    for folder in runs.folders:
        if folder.folder != "." and place.is_relative_to(root / folder.folder):
            raise UsageError(f"--out {out} lies in the build {folder.folder}; choose another")


def _find_build(path: Path) -> tuple[Runs, BuildFolder]:
    if not (path / "build.toml").is_file():
        raise UsageError(f"{path} holds no build.toml; name the folder of one build")
    place = path.resolve()
    above = [folder for folder in place.parents if (folder / "runs.toml").is_file()]
    root = place if (place / "runs.toml").is_file() else next(iter(above), place.parent)
    runs = open_runs(root)
    for folder in runs.folders:
        if (root / folder.folder).resolve() == place:
            return runs, folder
    raise UsageError(f"{path} was not found from {root}; is it a link or a hidden folder?")


# --- builds ----------------------------------------------------------------------------------


def _make_all(task: Task, jobs: int, announce: Announce) -> Outcome:
    """Every build of the runs folder; one that fails does not stop the others."""
    folders = task.runs.folders
    made: list[Made] = []
    failed: list[FailedBuild] = []
    with _workers(min(jobs, len(folders))) as run:
        for count, one in enumerate(run(make_build, repeat(task), folders), start=1):
            (made if isinstance(one, Made) else failed).append(one)  # type: ignore[arg-type]
            announce(folders[count - 1].key, count, len(folders))
    return Outcome(made=tuple(made), failed=tuple(failed), findings=task.runs.findings)


@contextmanager
def _workers(jobs: int) -> Iterator[Callable[..., Iterator[Made | FailedBuild]]]:
    if jobs <= 1:
        yield map
        return
    try:
        with ProcessPoolExecutor(jobs, mp_context=get_context("spawn")) as pool:
            yield pool.map
    except BrokenProcessPool as error:
        raise OutputError("a worker was ended from outside; try again with --jobs 1") from error


# --- index -----------------------------------------------------------------------------------


def _place_index(
    out: Path,
    runs: Runs,
    baseline_key: str | None,
    outcome: Outcome,
    earlier: dict[str, BuildRecord],
) -> Outcome:
    """What concerns all builds, and the index last; made from what is published, on the disk."""
    from reportgen.output.documents import json_bytes
    from reportgen.pages.index import render_index_html

    records = _records(outcome, earlier)
    kept = {output.file for record in records for output in record.outputs}
    remove_files(
        out, [o.file for record in earlier.values() for o in record.outputs if o.file not in kept]
    )
    keys = [one.key for one in outcome.made if _has_page(out, one.key)]
    rows, unreadable, table = _place_long_table(out, keys)
    outcome = replace(outcome, findings=(*outcome.findings, *unreadable))
    index = render_index_html(
        rows,
        bench=runs.bench,
        failed=outcome.failed,
        standing=[one.key for one in outcome.failed if _has_page(out, one.key)],
        findings=outcome.findings,
        baseline_key=baseline_key,
        program_version=__version__,
    ).encode("utf-8")
    manifest = manifest_document(
        program_version=__version__,
        baseline=baseline_key,
        inputs=runs.inputs,
        builds=records,
        outputs=[table, output_file("index.html", index)],
    )
    place_file(out, MANIFEST_FILE, json_bytes(manifest))
    place_file(out, "index.html", index)
    return outcome


def _place_long_table(
    out: Path, keys: Sequence[str]
) -> tuple[list[PublishedBuild], list[Finding], OutputFile]:
    """`results.csv`, written build by build; with what the index needs of each."""
    from reportgen.output.csv_tables import LONG_HEAD, csv_bytes, long_csv_lines

    rows: list[PublishedBuild] = []
    unreadable: list[Finding] = []

    def parts() -> Iterator[bytes]:
        yield csv_bytes(LONG_HEAD)
        for key in keys:
            try:
                document = read_document(out / key / RESULTS_FILE)
                published, lines = published_build(document), long_csv_lines(document)
            except OutputError as error:
                unreadable.append(_unreadable(key, error))
                continue
            rows.append(published)
            yield csv_bytes(lines)

    sha256 = place_parts(out, "results.csv", parts())
    return rows, unreadable, OutputFile(file="results.csv", sha256=sha256)


def _unreadable(key: str, error: OutputError) -> Finding:
    return Finding(
        severity=Severity.WARNING,
        code="unreadable-results",
        message=f"{key}: {error}",
        remedy="publish it again",
    )


def _has_page(out: Path, key: str) -> bool:
    """Whether a build has a page: of this run, or of an earlier one where it was passed over."""
    return (out / key / "report.html").is_file()


def _records(outcome: Outcome, earlier: dict[str, BuildRecord]) -> list[BuildRecord]:
    """Each build's record; where nothing was written this time, the earlier files still count."""
    records = [_record(one.key, one.folder, one.inputs, one.outputs) for one in outcome.made]
    records += [_record(one.key, one.folder, (), ()) for one in outcome.failed]
    return [
        replace(record, outputs=earlier[record.key].outputs)
        if not record.outputs and record.key in earlier
        else record
        for record in sorted(records, key=lambda record: record.key)
    ]


def _record(
    key: str, folder: str, inputs: tuple[InputFile, ...], outputs: tuple[OutputFile, ...]
) -> BuildRecord:
    return BuildRecord(
        key=key, folder=folder, published=bool(outputs), inputs=inputs, outputs=outputs
    )
