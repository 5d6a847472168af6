"""A run that is killed, or whose disk fails, at every step at which it touches the disk.

The run is forked off this process with pages that are made at once, so that each of some hundred
steps can be tried: before the step the process ends without a word, as when it is killed, or the
step fails. What is left is looked at; then the next run mends it.
"""

from __future__ import annotations

import errno
import fcntl
import os
import shutil
from collections.abc import Callable
from pathlib import Path

import pytest
from small_runs import contents, write_runs

from reportgen import every_build, one_build
from reportgen.errors import OutputError
from reportgen.model import OUTPUT_MARKER
from reportgen.one_build import Job, Made
from reportgen.output import placing
from reportgen.output.manifest import JOURNAL_FILE
from reportgen.output.placing import NEW, OLD
from reportgen.pipeline import Request, publish

pytestmark = pytest.mark.usefixtures("few_draws")
TOUCHING = ("rename", "replace", "mkdir", "unlink", "rmdir", "fsync")
KEYS = ("alder", "birch")
KILLED, CLEAN_ERROR, DONE = 9, 3, 0
MINE = {"alder/photo.jpg": b"mine", "notes/a.txt": b"mine"}


@pytest.fixture(scope="module")
def results(tmp_path_factory, few_draws) -> dict[str, bytes]:
    """A `results.json` for each build."""
    folder = tmp_path_factory.mktemp("real")
    runs = write_runs(folder / "runs", *KEYS)
    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(one_build, "build_files", results_alone)
        publish(Request(runs=runs, out=folder / "out"), lambda *_: None)
    return {key: (folder / "out" / key / "results.json").read_bytes() for key in KEYS}


def results_alone(result, comparison, *_: object) -> dict[str, bytes]:
    from reportgen.output.documents import json_bytes, results_document

    return {"results.json": json_bytes(results_document(result, comparison, program_version="0"))}


@pytest.fixture
def pages_at_once(results, monkeypatch) -> None:
    """Each page holds the sidecar's edition, so that a mixture of two is seen."""

    def make(job: Job) -> Made:
        key, runs = job.folder.key, one_build._task.runs
        edition = (runs.root / job.folder.folder / "build.toml").read_bytes()[-1:]
        files = {"report.html": edition, "report.pdf": edition, f"{edition.decode()}.csv": edition}
        files["results.json"] = results[key] + b" " * int(edition)
        return Made(key=key, folder=job.folder.folder, findings=(), inputs=(), files=files)

    monkeypatch.setattr(every_build, "make_build", make)


def write_edition(runs: Path, edition: int) -> None:
    for key in KEYS:
        sidecar = runs / key / "build.toml"
        sidecar.write_text(f"{sidecar.read_text().partition('# ')[0]}# {edition}")


def publish_here(folder: Path, out: str = "out") -> None:
    publish(Request(runs=folder / "runs", out=folder / out), lambda *_: None)


@pytest.fixture
def start(tmp_path: Path, pages_at_once: None) -> Path:
    """The first edition published, files of somebody else among its pages; the second to come."""
    write_edition(write_runs(tmp_path / "start" / "runs", *KEYS), 1)
    publish_here(tmp_path / "start")
    for name, data in MINE.items():
        (tmp_path / "start" / "out" / name).parent.mkdir(exist_ok=True)
        (tmp_path / "start" / "out" / name).write_bytes(data)
    write_edition(tmp_path / "start" / "runs", 2)
    return tmp_path / "start"


# --- one run with one fault ----------------------------------------------------------------------


def with_fault(folder: Path, step: int, fault: Callable[[], None]) -> int:
    """Exit status of a process that publishes, and that meets a fault at its n-th step."""
    child = os.fork()
    if child == 0:
        status = KILLED
        try:
            _bring_fault(step, fault)
            publish_here(folder)
            status = DONE
        except OutputError:
            status = CLEAN_ERROR
        finally:
            os._exit(status)
    return os.waitstatus_to_exitcode(os.waitpid(child, 0)[1])


def _bring_fault(step: int, fault: Callable[[], None]) -> None:
    steps = iter(range(step))

    def before(real: Callable[..., object]) -> Callable[..., object]:
        def call(*arguments: object, **named: object) -> object:
            if next(steps, None) is None:
                fault()
            return real(*arguments, **named)

        return call

    for name in TOUCHING:
        setattr(os, name, before(getattr(os, name)))


def kill() -> None:
    os._exit(KILLED)


def disk_full() -> None:
    raise OSError(errno.ENOSPC, os.strerror(errno.ENOSPC))


def editions(out: Path, key: str) -> set[bytes]:
    """Editions of the pages that stand of a build, its old folder where it was moved away."""
    folder = out / key if (out / key).is_dir() else out / f"{OLD}{key}"
    found = {path.name: path.read_bytes() for path in folder.iterdir()}
    edition = found["report.html"]
    assert f"{edition.decode()}.csv" in found, "a page of another edition"
    spaces = len(found["results.json"]) - len(found["results.json"].rstrip())
    return {edition, found["report.pdf"], str(spaces - 1).encode()}


@pytest.mark.parametrize(
    ("fault", "ends"),
    [(kill, KILLED), (disk_full, CLEAN_ERROR)],
    ids=["killed", "disk full"],
)
def test_old_or_new_pages_and_the_next_run_mends(
    start: Path, tmp_path: Path, fault: Callable[[], None], ends: int
) -> None:
    shutil.copytree(start, tmp_path / "whole")
    publish_here(tmp_path / "whole")
    wanted = contents(tmp_path / "whole" / "out")
    assert wanted["alder/report.html"] == b"2"
    assert MINE.items() <= wanted.items()
    for step in range(1000):
        here = tmp_path / f"{step}"
        shutil.copytree(start, here)
        status = with_fault(here, step, fault)
        if status == DONE:
            break
        assert status == ends, step
        for key in KEYS:
            assert editions(here / "out", key) in ({b"1"}, {b"2"}), (step, key)
        publish_here(here)
        assert contents(here / "out") == wanted, step
        shutil.rmtree(here)
    assert step > 30, "hardly a step was tried"


def test_a_first_run_that_is_killed_leaves_nothing_in_the_way(
    tmp_path: Path, pages_at_once: None
) -> None:
    write_edition(write_runs(tmp_path / "start" / "runs", *KEYS), 1)
    for step in range(1000):
        here = tmp_path / f"{step}"
        shutil.copytree(tmp_path / "start", here)
        if with_fault(here, step, kill) == DONE:
            break
        publish_here(here)
        assert editions(here / "out", "alder") == {b"1"}
        assert not [name for name in os.listdir(here / "out") if name.startswith((NEW, OLD))]
        assert not (here / "out" / JOURNAL_FILE).exists()
    assert step > 15


def test_a_disk_that_fills_leaves_no_half_written_pages(start: Path, monkeypatch) -> None:
    real = placing._write

    def full(path: Path, parts: object) -> None:
        real(path, [b"half"])
        disk_full()

    with monkeypatch.context() as patch:
        patch.setattr(placing, "_write", full)
        with pytest.raises(OutputError, match="No space left on device; nothing more was written"):
            publish_here(start)
    assert not [name for name in os.listdir(start / "out") if name.startswith((NEW, OLD))]


def test_another_run_is_writing(start: Path) -> None:
    before = contents(start / "out")
    with (start / "out" / OUTPUT_MARKER).open() as other:
        fcntl.flock(other, fcntl.LOCK_EX)
        with pytest.raises(OutputError, match=r"another run is writing .*; wait until it has"):
            publish_here(start)
    assert contents(start / "out") == before


def test_what_looks_like_ours_and_is_not_stays(start: Path) -> None:
    for name in (".new-alder", ".old-birch", "cedar"):
        (start / "out" / name).mkdir()
        (start / "out" / name / "letter.txt").write_text("mine")
    publish_here(start)
    for name in (".new-alder", ".old-birch", "cedar"):
        assert (start / "out" / name / "letter.txt").read_text() == "mine"
