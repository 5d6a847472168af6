"""What is made again and what is not, and that it makes no difference to the bytes."""

from __future__ import annotations

import json
import os
import shutil
import subprocess
import sys
from collections.abc import Callable, Iterator
from pathlib import Path

import pytest
from small_runs import BENCH, contents, write_build, write_runs

from reportgen import every_build, one_build
from reportgen.__main__ import main
from reportgen.model import OUTPUT_MARKER
from reportgen.output import fingerprints, unchanged
from reportgen.output.documents import json_bytes, results_document
from reportgen.output.fingerprints import MARKER, seen_files
from reportgen.output.workers import ThisProcess
from reportgen.pipeline import Outcome, Request, publish

pytestmark = pytest.mark.usefixtures("few_draws", "plain_pages")
WITH_BASELINE = 'baseline = "alder"\n' + BENCH
ALL = ("alder", "birch", "cedar")


def publish_here(runs: Path, out: Path, **asked: object) -> Outcome:
    return publish(Request(runs=runs, out=out, **asked), lambda *_: None)


def made(outcome: Outcome) -> tuple[str, ...]:
    return tuple(one.key for one in outcome.made)


def plain_files(result, comparison, *_: object) -> dict[str, bytes]:
    """Instead of pages that take most of the time to draw; the results are real."""
    document = results_document(result, comparison, program_version="0")
    page = f"{result.build.sheet.name} {comparison}".encode()
    return {"report.html": page, "report.pdf": b"%PDF-", "results.json": json_bytes(document)}


@pytest.fixture(scope="module")
def plain_pages() -> Iterator[None]:
    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(one_build, "build_files", plain_files)
        yield


@pytest.fixture(scope="module")
def first(tmp_path_factory, few_draws, plain_pages) -> Path:
    """Three builds, one of them the baseline, published: `runs` and `out` in one folder."""
    folder = tmp_path_factory.mktemp("first")
    publish_here(write_runs(folder / "runs", *ALL, bench=WITH_BASELINE), folder / "out")
    return folder


@pytest.fixture
def here(first: Path, tmp_path: Path) -> Path:
    """A copy of it, to be changed; times are those of the copy."""
    shutil.copytree(first, tmp_path / "here")
    return tmp_path / "here"


# --- nothing changed -----------------------------------------------------------------------------


def run_of_its_own(here: Path, *options: str) -> subprocess.CompletedProcess[str]:
    """A run of its own; what it imported is printed at its end."""
    code = (
        "import sys; from reportgen.__main__ import main; status = main(sys.argv[1:]); "
        "print(*(name for name, one in sys.modules.items() if one)); sys.exit(status)"
    )
    command = [sys.executable, "-c", code, "publish", "runs", "--out", "out", *options]
    return subprocess.run(command, cwd=here, capture_output=True, text=True, check=False)


def test_a_run_in_which_nothing_changed_imports_nothing_slow(here: Path) -> None:
    before = contents(here)
    done = run_of_its_own(here)
    said, imported = done.stdout.splitlines()
    assert (done.returncode, said) == (
        0, "3 of 3 builds published, all unchanged; open out/index.html"
    )  # fmt: skip
    before_main = {"__main__", "sitecustomize", "usercustomize", "_distutils_hack"}
    foreign = {name.split(".")[0] for name in imported.split()} - sys.stdlib_module_names
    foreign = {name for name in foreign if not name.startswith("__editable__")}
    assert foreign - before_main == {"reportgen"}
    assert "dataclasses" not in imported.split()
    assert contents(here) == before


@pytest.mark.parametrize("options", [["--only", "birch"], ["--jobs", "1"], ["--strict"]])
def test_options_that_change_no_page(here: Path, options: list[str]) -> None:
    assert "all unchanged" in run_of_its_own(here, *options).stdout


def test_a_rejected_build_is_told_again_in_the_same_words(
    here: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    monkeypatch.setattr(every_build, "Workers", lambda _jobs, _limit_s, *start: ThisProcess(*start))
    monkeypatch.chdir(here)
    sidecar = here / "runs" / "birch" / "build.toml"
    sidecar.write_text(sidecar.read_text().replace("low_turns", "low_turn"))
    (here / "runs" / "link.s1p").symlink_to("nowhere")
    assert main(["publish", "runs", "--out", "out"]) == 1
    first_said = capsys.readouterr()
    done = run_of_its_own(here)
    assert done.returncode == 1
    assert "numpy" not in done.stdout
    assert done.stderr == first_said.err
    assert 'unknown key "low_turn"' in done.stderr
    assert done.stdout.startswith("2 of 3 builds published, all unchanged")


def test_warnings_of_unchanged_builds_count_and_are_pointed_to(here: Path) -> None:
    (here / "runs" / "birch" / "spare.s1p").write_text("")
    outcome = publish_here(here / "runs", here / "out")
    assert made(outcome) == ("birch",)
    done = run_of_its_own(here)
    assert done.returncode == 0
    assert done.stderr == "unchanged builds: 1 warning; their reports tell them\n"
    assert run_of_its_own(here, "--strict").returncode == 1


def test_the_marker_has_one_name() -> None:
    assert MARKER == OUTPUT_MARKER


# --- what is made again --------------------------------------------------------------------------


def edit_sweep(here: Path) -> None:
    sweep = here / "runs" / "birch" / "a-load.s1p"
    sweep.write_text(sweep.read_text().replace("0.110", "0.111"))


def edit_sidecar(here: Path) -> None:
    write_build(here / "runs" / "birch", "Birch again")


def add_file(here: Path) -> None:
    (here / "runs" / "birch" / "spare.s1p").write_text("")


def edit_baseline(here: Path) -> None:
    sweep = here / "runs" / "alder" / "a-load.s1p"
    sweep.write_text(sweep.read_text().replace("0.110", "0.111"))


def edit_bench(here: Path) -> None:
    (here / "runs" / "runs.toml").write_text(WITH_BASELINE.replace("Made up", "Other"))


def edit_page(here: Path) -> None:
    page = here / "out" / "birch" / "report.html"
    page.write_bytes(page.read_bytes().replace(b"Birch", b"Bench"))


def remove_page(here: Path) -> None:
    (here / "out" / "birch" / "report.pdf").unlink()


def remove_baseline(here: Path) -> None:
    (here / "out" / ".baseline.json").unlink()


def damage_baseline(here: Path) -> None:
    kept = here / "out" / ".baseline.json"
    kept.write_text(kept.read_text().replace("1", "2"))


def remove_index(here: Path) -> None:
    (here / "out" / "index.html").unlink()


def edit_table(here: Path) -> None:
    table = here / "out" / "results.csv"
    table.write_bytes(table.read_bytes().replace(b"alder", b"older"))


def add_build(here: Path) -> None:
    write_build(here / "runs" / "dogwood", "Dogwood")


def remove_build(here: Path) -> None:
    shutil.rmtree(here / "runs" / "cedar")


def damage_manifest(here: Path) -> None:
    (here / "out" / "manifest.json").write_text("{")


def leave_all(here: Path) -> None:
    """Nothing."""


@pytest.mark.parametrize(
    ("change", "again"),
    [
        (edit_sweep, ("birch",)),
        (edit_sidecar, ("birch",)),
        (add_file, ("birch",)),
        (edit_baseline, ALL),
        (edit_bench, ALL),
        (edit_page, ("birch",)),
        (remove_page, ("birch",)),
        (remove_baseline, ()),
        (damage_baseline, ()),
        (remove_index, ()),
        (edit_table, ()),
        (add_build, ("dogwood",)),
        (remove_build, ()),
        (damage_manifest, ALL),
        (leave_all, ()),
    ],
    ids=lambda one: one.__name__ if callable(one) else "",
)
def test_what_changed_is_made_again_as_if_from_scratch(
    here: Path, change: Callable[[Path], None], again: tuple[str, ...]
) -> None:
    change(here)
    assert made(publish_here(here / "runs", here / "out")) == again
    publish_here(here / "runs", here / "scratch")
    assert contents(here / "out") == contents(here / "scratch")
    assert made(publish_here(here / "runs", here / "out")) == ()


def test_force_makes_everything_again(here: Path) -> None:
    before = contents(here / "out")
    assert made(publish_here(here / "runs", here / "out", force=True)) == ALL
    assert contents(here / "out") == before


def test_another_baseline_on_the_command_line(here: Path) -> None:
    assert made(publish_here(here / "runs", here / "out", baseline="birch")) == ALL
    assert made(publish_here(here / "runs", here / "out", baseline="birch")) == ()


def test_another_program_makes_everything_again(here: Path, monkeypatch) -> None:
    for module in (every_build, unchanged):
        monkeypatch.setattr(module, "program_fingerprint", lambda: "newer")
    assert made(publish_here(here / "runs", here / "out")) == ALL


def test_the_program_is_its_modules_templates_and_libraries(tmp_path: Path, monkeypatch) -> None:
    package = tmp_path / "lib" / "reportgen"
    for name in ("templates", "output"):
        (package / name).mkdir(parents=True)
    monkeypatch.setattr(fingerprints, "__file__", str(package / "output" / "fingerprints.py"))
    monkeypatch.setattr(sys, "path", [str(tmp_path / "lib")])
    found = []
    for path in ("model.py", "templates/report.html", "templates/shared.css", "model.py"):
        (package / path).write_text(str(len(found)))
        found.append(fingerprints.program_fingerprint.__wrapped__())
    (tmp_path / "lib" / "numpy-2.0.dist-info").mkdir()
    found.append(fingerprints.program_fingerprint.__wrapped__())
    (tmp_path / "lib" / "black-2.0.dist-info").mkdir()
    assert fingerprints.program_fingerprint.__wrapped__() == found[-1]
    assert len(set(found)) == len(found)


def test_only_leaves_the_others_to_the_next_run(here: Path) -> None:
    edit_sweep(here)
    edit_page(here)
    write_build(here / "runs" / "cedar", "Cedar again")
    outcome = publish_here(here / "runs", here / "out", only=("birch",))
    assert (made(outcome), outcome.published, outcome.builds) == (("birch",), 2, 3)
    assert made(publish_here(here / "runs", here / "out")) == ("cedar",)


def test_the_baseline_is_measured_once_and_not_for_others(here: Path, monkeypatch) -> None:
    real, measured = one_build.measure, []

    def counted(build, *arguments):
        measured.append(build.key)
        return real(build, *arguments)

    monkeypatch.setattr(one_build, "measure", counted)
    publish_here(here / "runs", here / "scratch")
    assert sorted(measured) == list(ALL)
    del measured[:]
    edit_sweep(here)
    publish_here(here / "runs", here / "out")
    assert measured == ["birch"]


def test_what_failed_by_a_fault_is_tried_again_what_was_rejected_is_not(
    here: Path, monkeypatch
) -> None:
    (here / "runs" / "cedar" / "build.toml").write_text("nonsense")
    edit_sweep(here)

    def faulty(*_: object) -> None:
        raise MemoryError

    with monkeypatch.context() as patch:
        patch.setattr(one_build, "measure", faulty)
        outcome = publish_here(here / "runs", here / "out")
    assert [one.key for one in outcome.failed] == ["birch", "cedar"]
    read, real = [], one_build.read_build
    monkeypatch.setattr(one_build, "read_build", lambda *a: read.append(a[1].key) or real(*a))
    outcome = publish_here(here / "runs", here / "out")
    assert [one.key for one in outcome.failed] == ["cedar"]
    assert read == ["birch"]


def test_a_folder_with_more_than_is_looked_at_is_made_anew_each_time(
    here: Path, monkeypatch
) -> None:
    monkeypatch.setattr(fingerprints, "ENTRIES", 5)
    assert made(publish_here(here / "runs", here / "out")) == ALL
    assert json.loads((here / "out" / "manifest.json").read_bytes())["state"] is None
    monkeypatch.undo()
    assert "all unchanged" not in run_of_its_own(here).stdout


# --- interrupted ---------------------------------------------------------------------------------


def test_an_interrupted_run_goes_on_where_it_was(tmp_path: Path, monkeypatch) -> None:
    runs = write_runs(tmp_path / "runs", *ALL, bench=WITH_BASELINE)
    real = every_build.place_build

    def interrupted(out: Path, key: str, *arguments: object) -> None:
        if key == "cedar":
            raise KeyboardInterrupt
        real(out, key, *arguments)

    with monkeypatch.context() as patch:
        patch.setattr(every_build, "place_build", interrupted)
        with pytest.raises(KeyboardInterrupt):
            publish_here(runs, tmp_path / "out")
    assert not (tmp_path / "out" / "index.html").exists()
    outcome = publish_here(runs, tmp_path / "out")
    assert (made(outcome), outcome.published) == (("cedar",), 3)
    publish_here(runs, tmp_path / "scratch")
    assert contents(tmp_path / "out") == contents(tmp_path / "scratch")


# --- what is seen of a runs folder ---------------------------------------------------------------


def test_what_is_no_input_is_not_seen(tmp_path: Path) -> None:
    runs = write_runs(tmp_path / "runs", "alder")
    before = seen_files(runs)
    (runs / ".git").mkdir()
    (runs / ".git" / "HEAD").write_text("x")
    (runs / "published").mkdir()
    (runs / "published" / MARKER).write_text("")
    (runs / "published" / "a.s1p").write_text("")
    assert seen_files(runs) == before
    assert set(before) == {"runs.toml", "alder/build.toml", "alder/a-load.s1p"}


def test_links_and_pipes_are_seen_and_not_opened(tmp_path: Path) -> None:
    runs = write_runs(tmp_path / "runs", "alder")
    (runs / "alder" / "link.s1p").symlink_to("/etc/hostname")
    os.mkfifo(runs / "alder" / "pipe.s1p")
    (runs / os.fsdecode(b"\xff.s1p")).write_text("")
    seen = seen_files(runs)
    assert (seen["alder/link.s1p"], seen["alder/pipe.s1p"]) == ("link", "special")
    assert fingerprints.fingerprint_of_seen(seen)


def test_what_is_too_large_to_be_read_is_not_hashed(tmp_path: Path) -> None:
    with (tmp_path / "large.s2p").open("wb") as file:
        file.truncate(fingerprints.FILE_BYTES + 1)
    assert seen_files(tmp_path) == {"large.s2p": f"{fingerprints.FILE_BYTES + 1} bytes"}


@pytest.mark.parametrize("key", ["..", "a/..", "", "."])
def test_a_record_of_another_place_removes_nothing(here: Path, key: str) -> None:
    (here / "mine.txt").write_text("mine")
    manifest = json.loads((here / "out" / "manifest.json").read_bytes())
    outputs = [{"file": f"{key}/mine.txt", "sha256": "", "bytes": 4}]
    manifest["builds"].append({"key": key, "folder": "x", "published": True,
                               "inputs": [], "outputs": outputs})  # fmt: skip
    (here / "out" / "manifest.json").write_text(json.dumps(manifest))
    publish_here(here / "runs", here / "out")
    assert (here / "mine.txt").read_text() == "mine"
