"""Workers that die, hang, or outlive the program that started them."""

from __future__ import annotations

import os
import signal
import subprocess
import sys
import time
from concurrent.futures import Executor, Future
from pathlib import Path

import pytest
from small_runs import contents, write_runs

from reportgen import every_build, one_build
from reportgen.output.workers import ThisProcess, Workers, each_done, how_it_ended
from reportgen.pipeline import Request, publish

LIMIT_S = 2.0


def start(letter: str) -> None:
    os.environ["LETTER"] = letter


def work(what: str) -> str:
    """Something that a worker is asked to do; it runs in another process."""
    if what == "die":
        os.kill(os.getpid(), signal.SIGKILL)
    if what == "hang":
        time.sleep(60)
    if what == "fail":
        raise ValueError("no such thing")
    return what + os.environ["LETTER"]


def test_a_task_that_ends_its_worker_fails_alone() -> None:
    tasks = ["a", "die", "b", "hang", "c", "fail", "d"]
    with Workers(2, LIMIT_S, start, "!") as workers:
        assert isinstance(workers, Executor)
        found = {
            task: future.exception() or future.result()
            for task, future in each_done(workers, 2, work, tasks)
        }
    assert [found[one] for one in "abcd"] == ["a!", "b!", "c!", "d!"]
    said = {task: how_it_ended(found[task], LIMIT_S) for task in ("die", "hang", "fail")}
    assert said == {
        "die": "the worker process was ended from outside (status -9)",
        "hang": "it took more than 2 s and was stopped",
        "fail": "the worker process failed: ValueError: no such thing",
    }


def test_few_tasks_are_under_way_at_a_time() -> None:
    class Counting(Executor):
        def __init__(self) -> None:
            self.waiting: list[Future[int]] = []
            self.most = 0

        def submit(self, function, /, *arguments, **named):
            future: Future[int] = Future()
            self.waiting.append(future)
            self.most = max(self.most, len(self.waiting))
            if len(self.waiting) == 6 or arguments == (99,):
                while self.waiting:
                    self.waiting.pop().set_result(0)
            return future

    counting = Counting()
    assert len(list(each_done(counting, 3, abs, range(100)))) == 100
    assert counting.most == 6


def test_this_process_does_one_task_after_the_other() -> None:
    done = each_done(ThisProcess(start, "?"), 0, work, ["a", "fail", "b"])
    assert [future.exception() or future.result() for _, future in done][::2] == ["a?", "b?"]


PROGRAM = f"""
import sys
sys.path.insert(0, {str(Path(__file__).parent)!r})
from test_workers import Workers, pid_then_hang, start
if __name__ == "__main__":
    workers = Workers(2, 60, start, "")
    for path in sys.argv[1:]:
        workers.submit(pid_then_hang, path)
    print("started", flush=True)
    sys.stdin.read()
"""


def pid_then_hang(path: str) -> None:
    Path(path).write_text(str(os.getpid()))
    time.sleep(60)


def test_no_worker_outlives_a_program_that_is_killed(tmp_path: Path) -> None:
    (tmp_path / "program.py").write_text(PROGRAM)
    notes = [tmp_path / "1", tmp_path / "2"]
    program = subprocess.Popen(
        [sys.executable, tmp_path / "program.py", *notes], stdin=subprocess.PIPE
    )
    wait_until(lambda: all(note.exists() and note.read_text() for note in notes))
    program.kill()
    program.communicate()
    wait_until(lambda: not any(is_alive(int(note.read_text())) for note in notes))


def is_alive(process: int) -> bool:
    """Whether a process runs; one that ended and that nobody has asked after does not."""
    try:
        state = Path(f"/proc/{process}/stat").read_text().rpartition(")")[2].split()[0]
    except (FileNotFoundError, ProcessLookupError):
        return False
    return state != "Z"


def wait_until(holds, limit_s: float = 30.0) -> None:
    end = time.monotonic() + limit_s
    while not holds():
        assert time.monotonic() < end, "waited in vain"
        time.sleep(0.02)


# --- a build that ends its worker ----------------------------------------------------------------


def start_with_bad_builds(task: one_build.Task) -> None:
    """Start a worker in which birch is fatal, and cedar never comes to an end."""
    real = one_build.read_build

    def read(runs, folder):
        if folder.key in ("birch", "cedar"):
            work({"birch": "die", "cedar": "hang"}[folder.key])
        return real(runs, folder)

    one_build.read_build = read
    one_build.build_files = lambda *_: {"report.html": b"page"}
    one_build.start(task)


def test_a_build_that_ends_its_worker_fails_alone_and_is_tried_again(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, few_draws: None
) -> None:
    runs, out = (
        write_runs(tmp_path / "runs", "alder", "birch", "cedar", "dogwood"),
        tmp_path / "out",
    )
    with monkeypatch.context() as patch:
        patch.setattr(every_build, "start", start_with_bad_builds)
        outcome = publish(Request(runs=runs, out=out, jobs=2, patience_s=6.0), lambda *_: None)
    assert [one.key for one in outcome.made] == ["alder", "dogwood"]
    said = {one.key: one.findings[0].message for one in outcome.failed}
    assert said == {
        "birch": "the worker process was ended from outside (status -9)",
        "cedar": "it took more than 6 s and was stopped",
    }
    assert "was ended from outside" in (out / "index.html").read_text()
    assert set(contents(out / "dogwood")) == {"report.html"}
    monkeypatch.setattr(one_build, "build_files", lambda *_: {"report.html": b"page"})
    outcome = publish(Request(runs=runs, out=out), lambda *_: None)
    assert [one.key for one in outcome.made] == ["birch", "cedar"]
