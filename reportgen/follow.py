"""Publish, then publish again whenever a file of the runs folder has changed and come to rest.

A sweep that is still being written is waited for: nothing is read before size and time of every
file have stood still for a while.
"""

from __future__ import annotations

import os
import signal
import time
from collections.abc import Callable, Iterator, Mapping
from dataclasses import dataclass
from pathlib import Path

from rich.console import Console
from rich.text import Text

from reportgen.errors import InputRejected, ReportError
from reportgen.intake.paths import shown
from reportgen.intake.scan import is_sweep, scan_runs
from reportgen.model import Finding
from reportgen.pages.changes import figure_moves
from reportgen.pages.plain_text import clean_text
from reportgen.pages.terminal import print_findings
from reportgen.pipeline import Outcome, Request
from reportgen.published import RESULTS_FILE, PublishedBuild, read_published

POLL_S = 0.5
"""Time between two looks at the folder [s]."""
SETTLE_S = 1.0
"""For so long every file has to stand still before it is read [s]."""
PATIENCE_S = 15.0
"""After so long it is said that files do not come to rest [s]."""

RUNS_FOLDER = "runs folder"
_MOST_NAMED = 12

Stamps = dict[str, tuple[int, int, int]]
"""Size, time of the last change [ns] and number of every file, by path."""


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Standing:
    """A published build as it stands on the disk; `stamp` is another when it is made again."""

    build: PublishedBuild
    stamp: tuple[int, int]


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Round:
    """What came of publishing once; `outcome` None: it failed as a whole, by `error`."""

    outcome: Outcome | None
    error: ReportError | None
    before: Mapping[str, Standing]
    after: Mapping[str, Standing]


class Interrupts:
    """Ctrl-C, also where a library swallows it: exceptions in callbacks from C go nowhere."""

    def __init__(self) -> None:
        self.heard = False

    def __enter__(self) -> Interrupts:
        self.before = signal.signal(signal.SIGINT, self._hear)
        return self

    def __exit__(self, *_: object) -> None:
        signal.signal(signal.SIGINT, self.before)

    def _hear(self, *_: object) -> None:
        self.heard = True
        raise KeyboardInterrupt

    def check(self) -> None:
        """Raise what was heard and swallowed."""
        if self.heard:
            raise KeyboardInterrupt

    def sleep(self, seconds: float) -> None:
        """Sleep, unless it was heard."""
        self.check()
        time.sleep(seconds)


class Watch:
    """The files of a runs folder that a run reads, looked at again and again."""

    def __init__(
        self,
        root: Path,
        *,
        tell: Callable[[str], None],
        clock: Callable[[], float] = time.monotonic,
        sleep: Callable[[float], None] = time.sleep,
    ) -> None:
        self.root, self.tell, self.clock, self.sleep = root, tell, clock, sleep

    def settled(self) -> Stamps:
        """The files, once all have stood still."""
        stamps = self._look()
        started = still_since = self.clock()
        told = False
        while self.clock() - still_since < SETTLE_S:
            self.sleep(POLL_S)
            now = self._look()
            if now != stamps:
                restless, stamps, still_since = changed_words(stamps, now), now, self.clock()
                if not told and still_since - started > PATIENCE_S:
                    self.tell(f"waiting until the files rest: {'; '.join(restless)}")
                    told = True
        return stamps

    def settled_otherwise(self, before: Stamps) -> Stamps:
        """The files, once they are others than before and have stood still."""
        while True:
            while self._look() == before:
                self.sleep(POLL_S)
            now = self.settled()
            if now != before:
                return now

    def _look(self) -> Stamps:
        stamps: Stamps = {}
        for file in scan_runs(self.root).files:
            if not is_sweep(file) and not file.lower().endswith((".toml", ".csv")):
                continue
            try:
                found = os.stat(self.root / file, follow_symlinks=False)
            except OSError:  # gone since the folder was listed
                continue
            stamps[file] = (found.st_size, found.st_mtime_ns, found.st_ino)
        return stamps


def follow(
    request: Request,
    *,
    publish: Callable[[Request], Outcome],
    report: Callable[[Round], None],
    watch: Watch,
) -> None:
    """Publish now and after every change; ends by being interrupted.

    Parameters
    ----------
    request : Request
        What is published, and where to.
    publish : callable
        Publishes once.
    report : callable
        Gets every round.
    watch : Watch
        Looks at the runs folder.

    Raises
    ------
    ReportError
        The very first time, nothing could be published; later that is only reported.
    """
    files = watch.settled()
    before = standing(request.out)
    first = True
    while True:
        outcome, error = _attempt(publish, request, first)
        after = standing(request.out)
        report(Round(outcome=outcome, error=error, before=before, after=after))
        first, before = False, after
        now = watch.settled_otherwise(files)
        for line in changed_words(files, now):
            watch.tell(line)
        files = now


def _attempt(
    publish: Callable[[Request], Outcome], request: Request, first: bool
) -> tuple[Outcome | None, ReportError | None]:
    try:
        return publish(request), None
    except ReportError as error:
        if first:
            raise
        return None, error


def standing(out: Path) -> dict[str, Standing]:
    """Every build that is published, by key."""
    found = {}
    for path in sorted(out.glob(f"*/{RESULTS_FILE}")):
        build = read_published(path)
        if build is not None:
            stat = path.stat()
            found[build.key] = Standing(build=build, stamp=(stat.st_mtime_ns, stat.st_ino))
    return found


# --- in words ------------------------------------------------------------------------------------


def changed_words(before: Stamps, after: Stamps) -> tuple[str, ...]:
    """Files that came, changed and went: `changed: alder/a-load.s1p`."""
    groups = {
        "added": sorted(after.keys() - before.keys()),
        "changed": sorted(one for one in after.keys() & before.keys() if after[one] != before[one]),
        "removed": sorted(before.keys() - after.keys()),
    }
    return tuple(f"{word}: {_listed(files)}" for word, files in groups.items() if files)


def _listed(files: list[str]) -> str:
    more = f" and {len(files) - _MOST_NAMED} more" if len(files) > _MOST_NAMED else ""
    return ", ".join(shown(file) for file in files[:_MOST_NAMED]) + more


def round_words(one: Round) -> Iterator[str]:
    """What a round changed: builds made again, come and gone, and how figures moved."""
    again = sorted(
        key
        for key in one.after.keys() & one.before.keys()
        if one.after[key].stamp != one.before[key].stamp
    )
    failed = [each.key for each in one.outcome.failed] if one.outcome else []
    for word, keys in (
        ("not published", failed),
        ("made again", again),
        ("new", sorted(one.after.keys() - one.before.keys())),
        ("gone", sorted(one.before.keys() - one.after.keys())),
    ):
        if keys:
            yield f"{word}: {', '.join(keys)}"
    for key in again:
        if moves := figure_moves(one.before[key].build, one.after[key].build):
            yield f"{key}: {moves}"


class Told:
    """What a terminal is told, round by round; it remembers the findings that it has told."""

    def __init__(self, console: Console, request: Request) -> None:
        self.console, self.request = console, request
        self.findings: Mapping[str, tuple[Finding, ...]] | None = None

    def line(self, text: str) -> None:
        """One line, safe to look at."""
        self.console.print(Text(clean_text(text)), soft_wrap=True)

    def round(self, one: Round) -> None:
        """Everything that a round changed; a run that failed as a whole, with its reason."""
        for line in round_words(one):
            self.line(line)
        if isinstance(one.error, InputRejected):
            print_findings(self.console, "nothing was published", one.error.findings)
        elif one.error is not None:
            self.line(f"nothing was published: {one.error}")
        if one.outcome is not None:
            self._new_and_gone(one, one.outcome)
            count = f"{one.outcome.published} of {one.outcome.builds} builds published"
            self.line(f"{count}; open {self.request.out / 'index.html'}")
        self.line(f"following {self.request.runs}; Ctrl-C ends it")

    def _new_and_gone(self, one: Round, outcome: Outcome) -> None:
        """Findings that were not told before, and those that no longer hold."""
        known = findings_of(one.before) if self.findings is None else self.findings
        findings = findings_of(one.after)
        for failed in outcome.failed:  # its earlier pages stand, and what was said of them
            findings[failed.key] = (*failed.findings, *findings.get(failed.key, ()))
        findings[RUNS_FOLDER] = outcome.findings
        for place in dict.fromkeys([*findings, *known]):
            now, before = findings.get(place, ()), known.get(place, ())
            print_findings(self.console, place, [each for each in now if each not in before])
            for each in before:
                if each not in now:
                    where = f"{each.file}: " if each.file else ""
                    self.line(f"no longer: {place}: {where}{each.message}")
        self.findings = findings


def findings_of(standing: Mapping[str, Standing]) -> dict[str, tuple[Finding, ...]]:
    """Findings of published builds by key."""
    return {key: one.build.findings for key, one in standing.items()}
