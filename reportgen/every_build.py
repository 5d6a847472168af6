"""Every build of a run: which have to be made, by whom, and what becomes of them.

Workers make builds and write nothing; this process alone writes, one build after the other.
"""

from __future__ import annotations

from collections import Counter
from collections.abc import Callable, Iterator, Sequence
from concurrent.futures import Executor, Future
from dataclasses import dataclass, replace
from pathlib import Path

from reportgen.intake.builds import BuildFolder, Runs
from reportgen.model import FailedBuild, Finding, Severity
from reportgen.one_build import RETRIED, Job, Made, Task, ended_build, make_build, start
from reportgen.output.baseline import BASELINE_FILE, kept_baseline
from reportgen.output.documents import finding_document
from reportgen.output.fingerprints import Seen, fingerprint, program_fingerprint
from reportgen.output.manifest import (
    BuildRecord,
    Document,
    OutputFile,
    output_file,
    write_in_journal,
)
from reportgen.output.placing import place_build, place_file, remove_files
from reportgen.output.standing import BuildFingerprints, read_standing
from reportgen.output.workers import ThisProcess, Workers, each_done, how_it_ended

Announce = Callable[[str, int, int], None]


PATIENCE_S = 120.0
"""Time that one build may take [s]."""


@dataclass(frozen=True, slots=True)
class Crew:
    """Who makes the builds: worker processes (0: this process), and their time for each [s]."""

    jobs: int = 0
    patience_s: float = PATIENCE_S

    def hire(self, task: Task) -> Executor:
        """The workers; they are started with the first build."""
        if self.jobs == 0:
            return ThisProcess(start, task)
        return Workers(self.jobs, self.patience_s, start, task)

    def result(self, job: Job, future: Future[Made | FailedBuild]) -> Made | FailedBuild:
        """What became of a build, also where its worker was ended."""
        try:
            return future.result()
        except Exception as error:
            words = how_it_ended(error, self.patience_s)
            return ended_build(job.folder, words)

    def each_made(
        self, workers: Executor, jobs: Sequence[Job]
    ) -> Iterator[tuple[Job, Made | FailedBuild]]:
        """Builds as they are done."""
        for job, future in each_done(workers, self.jobs, make_build, jobs):
            yield job, self.result(job, future)


class Publishing:
    """Builds of a runs folder on their way into the output folder.

    Parameters
    ----------
    runs, seen : Runs, mapping of str to str
        The runs folder, and everything in it with hashes, taken before.
    out : Path
        The output folder, opened.
    only : tuple of str
        Keys of the builds to be made; empty: all.
    force : bool
        Make also what has not changed.
    """

    def __init__(
        self, runs: Runs, seen: Seen, out: Path, *, only: tuple[str, ...], force: bool
    ) -> None:
        self.runs, self.out, self.only, self.force = runs, out, only, force
        bench = seen.get("runs.toml", ""), runs.bench.baseline or ""
        settings = fingerprint([program_fingerprint(), *bench])
        self.fingerprints = BuildFingerprints(seen, settings)
        self.standing = read_standing(out)
        self.records: dict[str, BuildRecord] = {}
        self.made: dict[str, Made] = {}
        self.failed: dict[str, FailedBuild] = {}
        self.findings = list(runs.findings)
        self.kept: set[str] = set()
        self.baseline_sha256: str | None = None
        self.stale = False

    @property
    def baseline_key(self) -> str | None:
        """Key of the build that the others were compared with."""
        return None if self.baseline_sha256 is None else self.runs.bench.baseline

    def beside(self) -> tuple[OutputFile, ...]:
        """What stands beside the pages of builds: the baseline."""
        if self.baseline_sha256 is None:
            return ()
        return (output_file(BASELINE_FILE, (self.out / BASELINE_FILE).read_bytes()),)

    def make_all(self, crew: Crew, announce: Announce) -> None:
        """Make what has changed; one that fails does not stop the others."""
        task = Task(runs=self.runs, baseline_file=self.out / BASELINE_FILE)
        with crew.hire(task) as workers:
            self._provide_baseline(crew, workers)
            jobs = list(self._jobs())
            for count, (job, result) in enumerate(crew.each_made(workers, jobs), start=1):
                self._settle(job, result)
                announce(job.folder.key, count, len(jobs))

    # --- the baseline ----------------------------------------------------------------------------

    def _provide_baseline(self, crew: Crew, workers: Executor) -> None:
        """The baseline beside the pages: kept from before, or made first, its pages with it."""
        folder = next((f for f in self.runs.folders if f.key == self.runs.bench.baseline), None)
        if folder is None:
            remove_files(self.out, [BASELINE_FILE])
            return
        job = self._job(folder)
        kept = kept_baseline(self.out / BASELINE_FILE, job.fingerprint)
        unchanged = self.standing.unchanged(folder.key, job.fingerprint)
        if kept and not self.force:
            self.baseline_sha256 = kept
        elif self.force or unchanged is None or unchanged.published:
            self._make_baseline(crew, workers, job, again=unchanged is None)
        if self.baseline_sha256 is None:
            remove_files(self.out, [BASELINE_FILE])
            self.findings.append(_no_baseline(folder))

    def _make_baseline(self, crew: Crew, workers: Executor, job: Job, *, again: bool) -> None:
        job = replace(job, pages=job.pages and (again or self.force))
        result = crew.result(job, workers.submit(make_build, job))
        if isinstance(result, Made) and result.baseline is not None:
            place_file(self.out, BASELINE_FILE, result.baseline)
            self.baseline_sha256 = kept_baseline(self.out / BASELINE_FILE, job.fingerprint)
        if job.pages or isinstance(result, FailedBuild):
            self._settle(job, result)

    # --- which builds ----------------------------------------------------------------------------

    def _jobs(self) -> Iterator[Job]:
        """Builds that have to be made; of the others the record holds."""
        for folder in self.runs.folders:
            if folder.key in self.records:
                continue
            job = self._job(folder)
            record = self.standing.unchanged(folder.key, job.fingerprint)
            if job.pages and (self.force or record is None):
                yield job
            elif record is not None:
                self._keep(record)
            else:
                self._pass_over(folder)

    def _job(self, folder: BuildFolder) -> Job:
        is_baseline = folder.key == self.runs.bench.baseline
        with_ = "is the baseline" if is_baseline else self.baseline_sha256 or ""
        return Job(
            folder=folder,
            fingerprint=self.fingerprints.of(folder.key, folder.folder, folder.files, with_),
            pages=not self.only or folder.key in self.only,
            baseline_sha256=None if is_baseline else self.baseline_sha256,
            is_baseline=is_baseline,
        )

    def _keep(self, record: BuildRecord) -> None:
        self.records[record.key] = record
        self.kept.add(record.key)
        if not record.published:
            findings = tuple(_read_finding(one) for one in record.failure)
            self.failed[record.key] = FailedBuild(
                key=record.key, folder=record.folder, findings=findings
            )

    def _pass_over(self, folder: BuildFolder) -> None:
        """A build that has changed, and that this run was not asked for."""
        self.stale = True
        record = self.standing.record(folder.key)
        if record is not None:
            self.records[folder.key] = record

    # --- what becomes of them --------------------------------------------------------------------

    def _settle(self, job: Job, result: Made | FailedBuild) -> None:
        """Note what became of a build, then move its pages in."""
        if isinstance(result, FailedBuild):
            record = self._record_of_failure(job, result)
            self.failed[record.key] = result
        else:
            record = _record(job, result)
            self.made[record.key] = replace(result, files={}, baseline=None)
        self.records[record.key] = record
        write_in_journal(self.out, record)
        if isinstance(result, Made):
            place_build(self.out, record.key, result.files, self.standing.names_of(record.key))

    def _record_of_failure(self, job: Job, failed: FailedBuild) -> BuildRecord:
        """Why a build is not published; pages of an earlier run stand, and stay ours."""
        earlier = self.standing.record(failed.key)
        return BuildRecord(
            key=failed.key,
            folder=failed.folder,
            published=False,
            fingerprint=job.fingerprint,
            retry=any(one.code in RETRIED for one in failed.findings),
            outputs=() if earlier is None else earlier.outputs,
            failure=tuple(finding_document(one) for one in failed.findings),
        )


def _record(job: Job, made: Made) -> BuildRecord:
    outputs = (output_file(f"{made.key}/{name}", data) for name, data in made.files.items())
    inputs = ({"file": o.file, "sha256": o.sha256, "points": o.points} for o in made.inputs)
    return BuildRecord(
        key=made.key,
        folder=made.folder,
        published=True,
        fingerprint=job.fingerprint,
        inputs=tuple(inputs),
        outputs=tuple(outputs),
        findings=Counter(one.severity.value for one in made.findings),
    )


def _read_finding(document: Document) -> Finding:
    return Finding(**{**document, "severity": Severity(document["severity"])})


def _no_baseline(folder: BuildFolder) -> Finding:
    return Finding(
        severity=Severity.ERROR,
        code="no-baseline",
        file=f"{folder.folder}/build.toml",
        message=f"the baseline {folder.key} cannot be computed, so no build was compared with it",
        remedy="mend its errors, or choose another baseline",
    )
