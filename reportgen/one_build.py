"""One build, from its folder to its pages: read, measure, compare, draw, render, place.

What is common to a run goes to every build as one `Task`; what a build leaves behind beside its
pages is one `Made`.
"""

from __future__ import annotations

import traceback
from collections.abc import Callable, Mapping
from dataclasses import dataclass, field, replace
from pathlib import Path
from typing import TypeVar

from reportgen.build_files import build_files
from reportgen.errors import InputRejected, NotMeasurable, OutputError
from reportgen.intake.builds import BuildFolder, Runs, read_build
from reportgen.model import BuildResult, FailedBuild, Finding, InputFile, Severity
from reportgen.output.manifest import BuildRecord, OutputFile, output_file
from reportgen.output.placing import place_build
from reportgen.physics.compare import compare
from reportgen.physics.measure import Measured, measure

Done = TypeVar("Done")


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Task:
    """What every build of a run needs; `out` None: compute, write nothing.

    `earlier` names what an earlier run wrote, by key.
    """

    runs: Runs
    baseline: BuildResult | None = None
    out: Path | None = None
    only: tuple[str, ...] = ()
    earlier: Mapping[str, BuildRecord] = field(default_factory=dict)


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Made:
    """A build that was computed: what was wrong with it, read for it and written for it.

    No figures: those of a published build stand in its `results.json`.
    """

    key: str
    folder: str
    findings: tuple[Finding, ...]
    inputs: tuple[InputFile, ...]
    outputs: tuple[OutputFile, ...] = ()


def make_build(task: Task, folder: BuildFolder) -> Made | FailedBuild:
    """One build from its folder to its pages; any failure is that build's alone."""
    return _guarded(folder, lambda: _made(task, folder))


def measure_baseline(runs: Runs, folder: BuildFolder) -> BuildResult | FailedBuild:
    """The build that the others are compared with."""
    return _guarded(folder, lambda: _measured(Task(runs=runs), folder).result)


def _guarded(folder: BuildFolder, step: Callable[[], Done]) -> Done | FailedBuild:
    try:
        return step()
    except InputRejected as rejected:
        return FailedBuild(key=folder.key, folder=folder.folder, findings=rejected.findings)
    except OutputError:
        raise
    except Exception as error:
        fault = _fault(error)
        return FailedBuild(key=folder.key, folder=folder.folder, findings=(fault,))


def _measured(task: Task, folder: BuildFolder) -> Measured:
    build = read_build(task.runs, folder)
    try:
        return measure(build, task.runs.bench, task.runs.bands)
    except NotMeasurable as error:
        raise InputRejected((*build.findings, _not_measurable(error))) from error


def _made(task: Task, folder: BuildFolder) -> Made:
    written = task.out is not None and (not task.only or folder.key in task.only)
    baseline = task.baseline
    if baseline is not None and baseline.build.key == folder.key:
        if not written:
            return _made_of(baseline)
        baseline = None
    measured = _measured(task, folder)
    made = _made_of(measured.result)
    return replace(made, outputs=_placed(task, measured, baseline)) if written else made


def _made_of(result: BuildResult) -> Made:
    build = result.build
    return Made(key=build.key, folder=build.folder, findings=result.findings, inputs=build.inputs)


def _placed(task: Task, measured: Measured, baseline: BuildResult | None) -> tuple[OutputFile, ...]:
    """Everything that is published of a build, written."""
    assert task.out is not None
    result, bench = measured.result, task.runs.bench
    comparison = None if baseline is None else compare(result, baseline)
    try:
        files = build_files(result, comparison, baseline, bench, measured.forecast())
    except OutputError as error:
        raise InputRejected((*result.findings, _not_drawn(error))) from error
    key = result.build.key
    place_build(task.out, key, files, _names_of(task.earlier.get(key)))
    return tuple(output_file(f"{key}/{name}", data) for name, data in files.items())


def _names_of(record: BuildRecord | None) -> set[str]:
    """File names that an earlier run wrote for a build."""
    return set() if record is None else {one.file.rpartition("/")[2] for one in record.outputs}


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
    return Finding(
        severity=Severity.ERROR,
        code="fault",
        message=f"a fault of this program: {type(error).__name__} in {Path(frame.filename).name}, "
        f"line {frame.lineno}: {str(error)[:80]}",
        remedy="please report it with this folder; the other builds are not touched",
    )
