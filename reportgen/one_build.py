"""One build, from its folder to its pages: read, measure, compare, draw, render.

What is common to a run is a `Task`, given once to each process that makes builds; each build is a
`Job`, and what comes of it, files included, is a `Made`. Nothing is written here.
"""

from __future__ import annotations

import traceback
from collections.abc import Mapping
from dataclasses import dataclass, field, replace
from functools import lru_cache
from pathlib import Path

from reportgen.build_files import build_files
from reportgen.errors import InputRejected, NotMeasurable, OutputError
from reportgen.intake.builds import BuildFolder, Runs, read_build
from reportgen.model import BuildResult, FailedBuild, Finding, InputFile, Severity
from reportgen.output.baseline import baseline_bytes, read_baseline
from reportgen.physics.compare import compare
from reportgen.physics.measure import Measured, measure

RETRIED = frozenset({"fault", "not-drawn", "worker-ended"})
"""Codes of what fails a build without being the fault of its inputs."""


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Task:
    """What every build of a run needs; `baseline_file` holds the baseline, once it is known."""

    runs: Runs
    baseline_file: Path | None = None


@dataclass(frozen=True, kw_only=True, slots=True)
class Job:
    """One build to be made.

    `fingerprint` : of all that decides what is published of it.
    `pages` : false where nothing is to be published of it.
    `baseline_sha256` : of the baseline that it is compared with; None: with none.
    `is_baseline` : it is the one that the others are compared with.
    """

    folder: BuildFolder
    fingerprint: str = ""
    pages: bool = False
    baseline_sha256: str | None = None
    is_baseline: bool = False


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Made:
    """A build that was computed: what was wrong with it, read for it, and to be published of it.

    No figures but in the files; `baseline` is the build as others need it to compare with.
    """

    key: str
    folder: str
    findings: tuple[Finding, ...]
    inputs: tuple[InputFile, ...]
    files: Mapping[str, bytes] = field(default_factory=dict)
    baseline: bytes | None = None


_task: Task | None = None


def start(task: Task) -> None:
    """Take note of what is common to all builds that this process will make."""
    global _task
    _task = task


def make_build(job: Job) -> Made | FailedBuild:
    """One build from its folder to its pages; any failure is that build's alone."""
    folder = job.folder
    assert _task is not None
    try:
        return _made(_task, job)
    except InputRejected as rejected:
        return FailedBuild(key=folder.key, folder=folder.folder, findings=rejected.findings)
    except Exception as error:
        fault = _fault(error)
        return FailedBuild(key=folder.key, folder=folder.folder, findings=(fault,))


def _made(task: Task, job: Job) -> Made:
    measured = _measured(task, job.folder)
    result = measured.result
    made = Made(
        key=job.folder.key,
        folder=job.folder.folder,
        findings=result.findings,
        inputs=result.build.inputs,
        baseline=baseline_bytes(result, job.fingerprint) if job.is_baseline else None,
    )
    return replace(made, files=_files(task, job, measured)) if job.pages else made


def _measured(task: Task, folder: BuildFolder) -> Measured:
    build = read_build(task.runs, folder)
    try:
        return measure(build, task.runs.bench, task.runs.bands)
    except NotMeasurable as error:
        raise InputRejected((*build.findings, _not_measurable(error))) from error


def _files(task: Task, job: Job, measured: Measured) -> dict[str, bytes]:
    """Everything that is published of a build."""
    result, baseline = measured.result, None
    if job.baseline_sha256 is not None and task.baseline_file is not None:
        baseline = _baseline(task.baseline_file, job.baseline_sha256)
    comparison = None if baseline is None else compare(result, baseline)
    try:
        return build_files(result, comparison, baseline, task.runs.bench, measured.forecast())
    except OutputError as error:
        raise InputRejected((*result.findings, _not_drawn(error))) from error


@lru_cache(maxsize=1)
def _baseline(path: Path, sha256: str) -> BuildResult:  # noqa: ARG001  (read again when it changes)
    return read_baseline(path)


# --- what went wrong -----------------------------------------------------------------------------


def ended_build(folder: BuildFolder, words: str) -> FailedBuild:
    """A build that a worker could not finish."""
    finding = Finding(
        severity=Severity.ERROR,
        code="worker-ended",
        message=words,
        remedy="publish again; where it happens again, sweep fewer points or give it more time "
        "(--patience)",
    )
    return FailedBuild(key=folder.key, folder=folder.folder, findings=(finding,))


def _not_measurable(error: NotMeasurable) -> Finding:
    return Finding(
        severity=Severity.ERROR,
        code="not-measurable",
        file="build.toml",
        message=str(error),
        remedy="add the sweep that is missing; the README lists what each set-up gives",
    )


def _not_drawn(error: OutputError) -> Finding:
    return Finding(
        severity=Severity.ERROR,
        code="not-drawn",
        file="build.toml",
        message=str(error),
        remedy="please report it with this folder; the other builds are not touched",
    )


def _fault(error: Exception) -> Finding:
    """An error that nobody foresaw, told without a traceback."""
    frame = traceback.extract_tb(error.__traceback__)[-1]
    # the text of the system's errors holds paths of this machine
    words = error.strerror if isinstance(error, OSError) else str(error)
    return Finding(
        severity=Severity.ERROR,
        code="fault",
        message=f"a fault of this program: {type(error).__name__} in {Path(frame.filename).name}, "
        f"line {frame.lineno}: {(words or '')[:80]}",
        remedy="please report it with this folder; the other builds are not touched",
    )
