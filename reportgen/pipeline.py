"""The whole story: scan, decide what changed, read, measure, compare, draw, render, place.

`every_build` tells which builds are made and what becomes of them, `one_build` what happens to
each, `index_files` what is made of all.
"""

from __future__ import annotations

from collections import Counter
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field, replace
from difflib import get_close_matches
from pathlib import Path
from typing import TYPE_CHECKING

from reportgen import __version__
from reportgen.errors import InputRejected, UsageError
from reportgen.every_build import PATIENCE_S, Announce, Crew, Publishing
from reportgen.intake.builds import BuildFolder, Runs, open_runs, read_build
from reportgen.model import FailedBuild, Finding, Severity
from reportgen.one_build import Job, Made, Task
from reportgen.output.fingerprints import Seen
from reportgen.output.manifest import MANIFEST_FILE, Manifest, manifest_document, remove_journal
from reportgen.output.placing import open_output, place_file, remove_files
from reportgen.output.unchanged import look_at, state_of

if TYPE_CHECKING:
    from reportgen.physics.measure import Measured


@dataclass(frozen=True, kw_only=True, slots=True)
class Request:
    """What `publish` was asked for.

    `only` names keys, empty: all. `jobs` is the number of worker processes, 0: none, everything
    is done in this one. `seen` is what lies in the runs folder, where that is known.
    """

    runs: Path
    out: Path
    baseline: str | None = None
    only: tuple[str, ...] = ()
    jobs: int = 0
    patience_s: float = PATIENCE_S
    force: bool = False
    seen: Seen | None = None


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Outcome:
    """What became of a run.

    `made` are the builds made by it; `unchanged` counts the findings, by severity, of those that
    were not made again, and `published` all builds whose pages are those of their inputs.
    """

    made: tuple[Made, ...]
    failed: tuple[FailedBuild, ...]
    findings: tuple[Finding, ...]
    unchanged: Mapping[str, int] = field(default_factory=dict)
    published: int = 0
    builds: int = 0

    def worst(self) -> Severity | None:
        """Severity of the worst finding of the whole run."""
        found = {finding.severity for finding in self.findings}
        found |= {finding.severity for one in self.made for finding in one.findings}
        found |= {Severity(name) for name in self.unchanged}
        if self.failed:
            return Severity.ERROR
        return next((severity for severity in Severity if severity in found), None)


def publish(request: Request, announce: Announce) -> Outcome:
    """Everything of a runs folder, published; what has not changed is not made again.

    Raises
    ------
    UsageError
        The call asks for something that cannot be done.
    InputRejected
        `runs.toml` cannot be used, or there is no build; nothing was written.
    OutputError
        The pages cannot be written.
    """
    seen = look_at(request.runs) if request.seen is None else request.seen
    runs = _opened(request)
    _refuse_tangle(request.out, runs)
    with open_output(request.out):
        publishing = Publishing(
            runs, seen or {}, request.out, only=request.only, force=request.force or seen is None
        )
        publishing.make_all(Crew(request.jobs, request.patience_s), announce)
        known = seen is not None and not publishing.stale
        state = state_of(seen or {}, request.runs, request.baseline) if known else None
        return _concluded(publishing, state)


def _concluded(done: Publishing, state: str | None) -> Outcome:
    """What concerns all builds: pages of builds that are gone, the index, the manifest last."""
    from reportgen.index_files import has_page, place_index_files
    from reportgen.output.documents import finding_document, json_bytes

    runs, out = done.runs, done.out
    keys = [folder.key for folder in runs.folders]
    records = {key: done.records[key] for key in keys if key in done.records}
    kept = {output.file for record in records.values() for output in record.outputs}
    remove_files(out, [one.file for one in done.standing.outputs() if one.file not in kept])
    overview = place_index_files(
        out,
        [key for key in keys if key not in done.failed and has_page(out, key)],
        bench=runs.bench,
        failed=[done.failed[key] for key in keys if key in done.failed],
        findings=done.findings,
        baseline_key=done.baseline_key,
    )
    findings = (*done.findings, *overview.findings)
    manifest = Manifest(
        builds=records,
        outputs=(*done.beside(), *overview.outputs),
        findings=tuple(finding_document(one) for one in findings),
        state=state,
    )
    inputs = [{"file": o.file, "sha256": o.sha256, "points": o.points} for o in runs.inputs]
    document = manifest_document(
        manifest, program_version=__version__, baseline=done.baseline_key, inputs=inputs
    )
    place_file(out, MANIFEST_FILE, json_bytes(document))
    remove_journal(out)
    return _outcome(done, findings, keys)


def _outcome(done: Publishing, findings: tuple[Finding, ...], keys: Sequence[str]) -> Outcome:
    unchanged: Counter[str] = Counter()
    for key in done.kept:
        unchanged.update(done.records[key].findings)
    return Outcome(
        made=tuple(done.made[key] for key in keys if key in done.made),
        failed=tuple(done.failed[key] for key in keys if key in done.failed),
        findings=findings,
        unchanged=unchanged,
        published=len({*done.made, *done.kept} - {*done.failed}),
        builds=len(keys),
    )


def inspect(path: Path, jobs: int, announce: Announce) -> Outcome:
    """What is wrong or worth knowing about a runs folder; writes nothing."""
    runs, crew = open_runs(path), Crew(jobs)
    results: dict[str, Made | FailedBuild] = {}
    with crew.hire(Task(runs=runs)) as workers:
        every = [Job(folder=folder) for folder in runs.folders]
        for job, result in crew.each_made(workers, every):
            results[job.folder.key] = result
            announce(job.folder.key, len(results), len(every))
    ordered = [results[folder.key] for folder in runs.folders]
    return Outcome(
        made=tuple(one for one in ordered if isinstance(one, Made)),
        failed=tuple(one for one in ordered if isinstance(one, FailedBuild)),
        findings=runs.findings,
        builds=len(ordered),
    )


def measure_folder(path: Path) -> tuple[Measured, Runs]:
    """One build folder, computed.

    Raises
    ------
    UsageError
        It is no build folder.
    InputRejected, NotMeasurable
        Nothing can be computed from it.
    """
    from reportgen.physics.measure import measure

    runs, folder = find_build(path)
    return measure(read_build(runs, folder), runs.bench, runs.bands), runs


# --- what is asked for -----------------------------------------------------------------------


def _opened(request: Request) -> Runs:
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
    return runs


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


def _refuse_tangle(out: Path, runs: Runs) -> None:
    """Pages must not come to lie where sweeps are looked for, nor the other way round."""
    place, root = out.resolve(), runs.root.resolve()
    if place == root or place in root.parents:
        raise UsageError(f"--out {out} holds the runs folder; choose a folder of its own")
    for folder in runs.folders:
        if folder.folder != "." and place.is_relative_to(root / folder.folder):
            raise UsageError(f"--out {out} lies in the build {folder.folder}; choose another")


def find_build(path: Path) -> tuple[Runs, BuildFolder]:
    """The runs folder of a build folder, and its place in it.

    Raises
    ------
    UsageError
        It is no build folder.
    """
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
