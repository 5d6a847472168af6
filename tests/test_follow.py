"""Publishing again after each change: what is waited for, what is told, how it ends."""

from __future__ import annotations

import contextlib
import io
import os
import signal
import subprocess
import sys
import threading
from collections.abc import Callable, Iterator
from dataclasses import replace
from pathlib import Path

import pytest
from rich.console import Console
from small_runs import SWEEP, write_build, write_runs

from reportgen.errors import OutputError, UsageError
from reportgen.follow import (
    PATIENCE_S,
    POLL_S,
    SETTLE_S,
    Interrupts,
    Round,
    Standing,
    Told,
    Watch,
    changed_words,
    follow,
    round_words,
    standing,
)
from reportgen.model import OUTPUT_MARKER
from reportgen.pages.changes import figure_moves
from reportgen.pipeline import Outcome, Request, publish

pytestmark = pytest.mark.usefixtures("few_draws")


class Time:
    """A clock that only sleeping moves on; what is planned happens at its time."""

    def __init__(self) -> None:
        self.now_s = 0.0
        self.planned: list[tuple[float, Callable[[], None]]] = []

    def at(self, second: float, act: Callable[[], None]) -> None:
        self.planned.append((second, act))
        self.planned.sort(key=lambda one: one[0])

    def clock(self) -> float:
        return self.now_s

    def sleep(self, seconds: float) -> None:
        self.now_s += seconds
        while self.planned and self.planned[0][0] <= self.now_s:
            self.planned.pop(0)[1]()
        if self.now_s > 3600:
            raise KeyboardInterrupt


def interrupt() -> None:
    raise KeyboardInterrupt


@pytest.fixture
def runs(tmp_path: Path) -> Path:
    return write_runs(tmp_path / "runs", "alder")


@pytest.fixture
def time() -> Time:
    return Time()


def watch(runs: Path, time: Time, told: list[str]) -> Watch:
    return Watch(runs, tell=told.append, clock=time.clock, sleep=time.sleep)


# --- what is waited for --------------------------------------------------------------------------


def test_a_sweep_that_is_being_written_is_waited_for(runs: Path, time: Time) -> None:
    """Half of it lands, the rest 0.8 s later: one change, and only once all has stood still."""
    looking = watch(runs, time, [])
    before = looking.settled()
    new = runs / "alder" / "b-load.s1p"
    time.at(10.0, lambda: new.write_text(SWEEP[:100]))
    time.at(10.8, lambda: new.write_text(SWEEP))
    after = looking.settled_otherwise(before)
    assert after["alder/b-load.s1p"][0] == len(SWEEP)
    assert 10.8 + SETTLE_S <= time.now_s <= 10.8 + SETTLE_S + 3 * POLL_S


def test_a_file_that_comes_and_goes_is_no_change(runs: Path, time: Time) -> None:
    looking = watch(runs, time, [])
    before = looking.settled()
    passing, lasting = runs / "alder" / "x.s1p", runs / "alder" / "y.s1p"
    time.at(5, lambda: passing.write_text("1"))
    time.at(5.5, passing.unlink)
    time.at(20, lambda: lasting.write_text("1"))
    assert changed_words(before, looking.settled_otherwise(before)) == ("added: alder/y.s1p",)
    assert time.now_s >= 20


@pytest.mark.parametrize("name", [".hidden.s1p", "notes.txt", "build.toml~", "photo.jpg"])
def test_what_no_run_reads_is_no_change(runs: Path, time: Time, name: str) -> None:
    looking = watch(runs, time, [])
    before = looking.settled()
    (runs / "alder" / name).write_text("x")
    assert looking.settled() == before


def test_pages_inside_the_runs_folder_are_no_change(runs: Path, time: Time) -> None:
    looking = watch(runs, time, [])
    before = looking.settled()
    (runs / "published").mkdir()
    for name in (OUTPUT_MARKER, "results.csv"):
        (runs / "published" / name).write_text("x")
    assert looking.settled() == before


def test_another_file_in_the_same_place_is_a_change(runs: Path, time: Time) -> None:
    """Same size and same time, as a copy program leaves them."""
    looking = watch(runs, time, [])
    before = looking.settled()
    sweep, new = runs / "alder" / "a-load.s1p", runs / "alder" / "new"
    new.write_text(SWEEP.replace("0.100", "0.200"))
    seen = sweep.stat()
    os.utime(new, ns=(seen.st_atime_ns, seen.st_mtime_ns))
    new.replace(sweep)
    after = looking.settled()
    assert changed_words(before, after) == ("changed: alder/a-load.s1p",)


def test_files_that_do_not_rest_are_named_once(runs: Path, time: Time) -> None:
    told: list[str] = []
    log = runs / "alder" / "warmup.csv"
    for step in range(1, 80):
        time.at(step / 2, lambda step=step: log.write_text("x" * step))
    watch(runs, time, told).settled()
    assert told == ["waiting until the files rest: changed: alder/warmup.csv"]
    assert time.now_s >= 39.5 + SETTLE_S > PATIENCE_S


def test_many_changes_are_counted() -> None:
    before = {"gone.s1p": (1, 1, 1)}
    after = {f"{number:02}.s1p": (1, 1, 1) for number in range(20)}
    added, removed = changed_words(before, after)
    assert added.startswith("added: 00.s1p, 01.s1p")
    assert added.endswith(" and 8 more")
    assert removed == "removed: gone.s1p"


# --- the loop ------------------------------------------------------------------------------------


class Followed:
    """`follow` on a folder, with real publishing: every round and all that was said."""

    def __init__(self, runs: Path, time: Time) -> None:
        self.request = Request(runs=runs, out=runs.parent / "out")
        self.screen = io.StringIO()
        self.told = Told(Console(file=self.screen, width=200), self.request)
        self.rounds: list[Round] = []
        self.time = time
        self.publish: Callable[[Request], Outcome] = lambda request: publish(
            request, lambda *_: None
        )

    def report(self, one: Round) -> None:
        self.rounds.append(one)
        self.told.round(one)

    def run(self) -> None:
        looking = Watch(
            self.request.runs, tell=self.told.line, clock=self.time.clock, sleep=self.time.sleep
        )
        with pytest.raises(KeyboardInterrupt):
            follow(self.request, publish=self.publish, report=self.report, watch=looking)

    @property
    def said(self) -> str:
        return self.screen.getvalue()


@pytest.fixture
def followed(runs: Path, time: Time) -> Followed:
    return Followed(runs, time)


def test_a_changed_sweep_is_published_and_the_figure_told(followed: Followed, runs: Path) -> None:
    sweep = runs / "alder" / "a-load.s1p"
    followed.time.at(60, lambda: sweep.write_text(SWEEP.replace("-0.050", "-0.350")))
    followed.time.at(120, interrupt)
    followed.run()
    assert len(followed.rounds) == 2
    lines = followed.said.splitlines()
    assert "new: alder" in lines
    second = lines[lines.index("changed: alder/a-load.s1p") :]
    assert second[1] == "made again: alder"
    assert second[2] == "alder: 40 m SWR 1.40 -> 2.25"
    assert second[-1] == f"following {runs}; Ctrl-C ends it"


def test_a_new_build_and_one_that_goes(followed: Followed, runs: Path) -> None:
    followed.time.at(60, lambda: write_build(runs / "birch", "Birch"))

    def remove() -> None:
        for path in (runs / "birch").iterdir():
            path.unlink()

    followed.time.at(120, remove)
    followed.time.at(180, interrupt)
    followed.run()
    assert "added: birch/a-load.s1p, birch/build.toml\n" in followed.said
    assert "new: birch\n" in followed.said
    assert "removed: birch/a-load.s1p, birch/build.toml\n" in followed.said
    assert "gone: birch\n" in followed.said
    assert not (runs.parent / "out" / "birch").exists()


def test_a_broken_sidecar_is_told_and_it_goes_on(followed: Followed, runs: Path) -> None:
    sidecar = runs / "alder" / "build.toml"
    text = sidecar.read_text()
    followed.time.at(60, lambda: sidecar.write_text(text.replace("low_turns", "low_turn")))
    followed.time.at(120, lambda: sidecar.write_text(text))
    followed.time.at(180, interrupt)
    followed.run()
    assert "not published: alder" in followed.said
    assert 'winding.low_turn: unknown key "low_turn"' in followed.said
    assert 'no longer: alder: build.toml: unknown key "low_turn"' in followed.said
    assert "0 of 1 builds published" in followed.said
    assert len(followed.rounds) == 3


def test_a_broken_bench_file_is_told_and_it_goes_on(followed: Followed, runs: Path) -> None:
    bench = runs / "runs.toml"
    text = bench.read_text()
    followed.time.at(60, lambda: bench.write_text("bands = 40"))
    followed.time.at(120, lambda: bench.write_text(text + "# again\n"))
    followed.time.at(180, interrupt)
    followed.run()
    assert "nothing was published\n  error   runs.toml: line 1: bands" in followed.said
    assert [one.outcome is None for one in followed.rounds] == [False, True, False]


def test_a_finding_is_told_once_and_again_when_it_is_gone(followed: Followed, runs: Path) -> None:
    spare = runs / "alder" / "spare.s1p"
    followed.time.at(60, lambda: spare.write_text(SWEEP))
    followed.time.at(120, lambda: (runs / "runs.toml").write_text("title = 'x'\n" + BENCH_REST))
    followed.time.at(180, spare.unlink)
    followed.time.at(240, interrupt)
    followed.run()
    message = "spare.s1p: no [[sweep]] in build.toml names this file"
    assert followed.said.count(f"  warning {message}") == 1
    assert followed.said.count(f"no longer: alder: {message}") == 1


BENCH_REST = 'bands = ["40 m"]\n[loads.main]\nresistance_ohm = 3200\n'


def nothing(request: Request) -> Outcome:
    """In place of publishing, where only the loop counts."""
    return Outcome(made=(), failed=(), findings=())


def test_a_change_while_publishing_is_not_missed(followed: Followed, runs: Path) -> None:
    times = []

    def slow(request: Request) -> Outcome:
        times.append(followed.time.now_s)
        if len(times) == 1:
            write_build(runs / "birch", "Birch")
        return nothing(request)

    followed.publish = slow
    followed.time.at(60, interrupt)
    followed.run()
    assert "added: birch/a-load.s1p, birch/build.toml\n" in followed.said
    assert len(times) == 2
    assert times[1] - times[0] <= SETTLE_S + 2 * POLL_S


def test_what_fails_at_first_ends_it(followed: Followed) -> None:
    def refuse(request: Request) -> Outcome:
        raise UsageError("no such thing")

    with pytest.raises(UsageError):
        follow(
            followed.request,
            publish=refuse,
            report=followed.report,
            watch=watch(followed.request.runs, followed.time, []),
        )


def test_a_locked_output_is_told_and_it_goes_on(followed: Followed, runs: Path) -> None:
    times = []

    def busy(request: Request) -> Outcome:
        times.append(1)
        if len(times) == 2:
            raise OutputError("another run is writing out")
        return nothing(request)

    followed.publish = busy
    for at in (60, 120):
        followed.time.at(
            at, lambda at=at: (runs / "runs.toml").write_text(f"# {at}\n" + BENCH_REST)
        )
    followed.time.at(180, interrupt)
    followed.run()
    assert "nothing was published: another run is writing out" in followed.said
    assert len(times) == 3


def test_hostile_names_reach_no_terminal(followed: Followed, runs: Path) -> None:
    followed.publish = nothing
    followed.time.at(60, lambda: (runs / "alder" / "\x1b[31m\u202e.s1p").write_text(SWEEP))
    followed.time.at(120, interrupt)
    followed.run()
    assert "added: alder/" in followed.said
    assert not set("\x1b\u202e") & set(followed.said)


# --- in words ------------------------------------------------------------------------------------


@pytest.fixture
def built(runs: Path) -> Standing:
    publish(Request(runs=runs, out=runs.parent / "out"), lambda *_: None)
    return standing(runs.parent / "out")["alder"]


def test_no_move_no_words(built: Standing) -> None:
    assert figure_moves(built.build, built.build) == ""


def test_a_band_that_is_no_longer_measured_is_told(built: Standing) -> None:
    other = replace(built.build, bands=())
    assert figure_moves(other, built.build).startswith("40 m SWR not measured -> 1.")
    assert list(round_words(Round(outcome=None, error=None, before={}, after={}))) == []


# --- as a process --------------------------------------------------------------------------------


def lines_until(stream, word: str) -> Iterator[str]:
    for line in stream:
        yield line
        if word in line:
            return


def test_an_interrupt_that_a_library_swallows_is_not_lost() -> None:
    before = signal.getsignal(signal.SIGINT)
    with Interrupts() as interrupts:
        interrupts.check()
        with contextlib.suppress(KeyboardInterrupt):  # as a callback of a C library does
            signal.raise_signal(signal.SIGINT)
        with pytest.raises(KeyboardInterrupt):
            interrupts.check()
        with pytest.raises(KeyboardInterrupt):
            interrupts.sleep(1000)
    assert signal.getsignal(signal.SIGINT) is before


@pytest.mark.parametrize("midway", [False, True], ids=["while it waits", "while it publishes"])
def test_a_real_process_publishes_again_and_ends_by_an_interrupt(
    runs: Path, tmp_path: Path, midway: bool
) -> None:
    call = [sys.executable, "-m", "reportgen", "follow", runs, "--out", tmp_path / "out"]
    process = subprocess.Popen(
        [*map(str, call)],
        stdout=subprocess.PIPE,
        stderr=subprocess.STDOUT,
        text=True,
        start_new_session=True,
    )
    limit = threading.Timer(240, process.kill)
    limit.start()
    try:
        assert "publishing" in process.stdout.readline()
        if not midway:
            first = list(lines_until(process.stdout, "following"))
            assert "new: alder\n" in first
            (runs / "alder" / "a-load.s1p").write_text(SWEEP.replace("-0.050", "-0.350"))
            second = list(lines_until(process.stdout, "following"))
            assert second[:2] == ["changed: alder/a-load.s1p\n", "made again: alder\n"]
        else:
            threading.Event().wait(4)
        os.killpg(process.pid, signal.SIGINT)
        rest = process.stdout.read()
        assert process.wait() == 0
        # an interrupt in the middle of a line that is being written leaves it to be written again
        assert rest.splitlines()[-1] == "stopped; what was published stands"
        assert "Traceback" not in rest
    finally:
        limit.cancel()
        process.kill()
        process.stdout.close()
        process.wait()
