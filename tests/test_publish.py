"""What a run may not do: stop at one failure, take pages away, write where it should not."""

from __future__ import annotations

import json
import logging
import shutil
from pathlib import Path

import pytest
from small_runs import BENCH, contents, write_build, write_runs

from reportgen import one_build
from reportgen.errors import InputRejected, OutputError, UsageError
from reportgen.pipeline import Outcome, Request, publish

pytestmark = pytest.mark.usefixtures("few_draws")


def publish_here(runs: Path, out: Path, **asked: object) -> Outcome:
    return publish(Request(runs=runs, out=out, **asked), lambda *_: None)


# --- what fails, and what stays ------------------------------------------------------------------


def test_a_failed_build_keeps_its_pages_and_is_named(tmp_path: Path) -> None:
    runs, out = write_runs(tmp_path / "runs", "alder", "birch"), tmp_path / "out"
    assert publish_here(runs, out).failed == ()
    before = contents(out / "alder")
    (runs / "alder" / "build.toml").write_text('nam = "Alder"')
    outcome = publish_here(runs, out)
    assert [one.key for one in outcome.failed] == ["alder"]
    assert (outcome.made, outcome.published) == ((), 1)
    assert contents(out / "alder") == before
    index = (out / "index.html").read_text()
    assert "did you mean" in index
    assert "alder/report.html" in index
    assert "1 build published, 1 not" in index
    publish_here(runs, out)
    assert contents(out / "alder") == before, "a second failure took the pages away"


def test_a_fault_of_the_program_is_that_builds_alone(tmp_path: Path, monkeypatch) -> None:
    real = one_build.measure

    def faulty(build, *arguments):
        if build.key == "alder":
            raise RuntimeError("unforeseen")
        return real(build, *arguments)

    monkeypatch.setattr(one_build, "measure", faulty)
    runs = write_runs(tmp_path / "runs", "alder", "birch")
    outcome = publish_here(runs, tmp_path / "out")
    (failed,) = outcome.failed
    assert failed.findings[0].code == "fault"
    assert "RuntimeError in test_publish.py" in failed.findings[0].message
    assert (tmp_path / "out" / "birch" / "report.html").is_file()


def test_a_letter_that_no_font_has_fails_no_build(tmp_path: Path) -> None:
    runs = write_runs(tmp_path / "runs", "alder")
    write_build(runs / "birch", "\N{CJK UNIFIED IDEOGRAPH-6E2C}")
    outcome = publish_here(runs, tmp_path / "out")
    assert outcome.failed == ()
    assert (tmp_path / "out" / "birch" / "report.pdf").read_bytes().startswith(b"%PDF-")


def test_a_page_that_cannot_be_set_is_that_builds_alone(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    def failing(page: str, *_: object) -> bytes:
        if "Birch" in page:
            raise OutputError("the page could not be set: no room")
        return b"%PDF-"

    monkeypatch.setattr("reportgen.pages.report.write_pdf", failing)
    runs = write_runs(tmp_path / "runs", "alder")
    write_build(runs / "birch", "Birch")
    outcome = publish_here(runs, tmp_path / "out")
    assert [one.key for one in outcome.failed] == ["birch"]
    assert "no room" in outcome.failed[0].findings[-1].message
    assert (tmp_path / "out" / "alder" / "report.html").is_file()


def test_a_broken_bench_file_stops_all_and_writes_nothing(tmp_path: Path) -> None:
    runs = write_runs(tmp_path / "runs", "alder", bench="powr_w = 3")
    with pytest.raises(InputRejected, match="powr_w"):
        publish_here(runs, tmp_path / "out")
    assert not (tmp_path / "out").exists()


def test_a_folder_without_builds_takes_no_pages_away(tmp_path: Path) -> None:
    runs, out = write_runs(tmp_path / "runs", "alder"), tmp_path / "out"
    publish_here(runs, out)
    before = contents(out)
    with pytest.raises(InputRejected, match="no build was found"):
        publish_here(write_runs(tmp_path / "empty"), out)
    assert contents(out) == before


def test_a_build_that_is_gone_loses_its_pages_and_nothing_else(tmp_path: Path) -> None:
    runs, out = write_runs(tmp_path / "runs", "alder", "birch", "cedar"), tmp_path / "out"
    publish_here(runs, out)
    (out / "alder" / "photo.jpg").write_bytes(b"mine")
    (out / "notes").mkdir()
    (out / "notes" / "a.txt").write_bytes(b"mine")
    shutil.rmtree(runs / "alder")
    shutil.rmtree(runs / "birch")
    publish_here(runs, out)
    found = set(contents(out))
    assert {name for name in found if "/" in name and not name.startswith("cedar/")} == {
        "alder/photo.jpg", "notes/a.txt"
    }  # fmt: skip
    assert not (out / "birch").exists()
    assert "birch" not in (out / "index.html").read_text()


def test_a_manifest_that_was_tampered_with_removes_nothing_outside(tmp_path: Path) -> None:
    runs, out = write_runs(tmp_path / "runs", "alder"), tmp_path / "out"
    publish_here(runs, out)
    (tmp_path / "mine.txt").write_text("mine")
    manifest = json.loads((out / "manifest.json").read_bytes())
    files = ("../mine.txt", "gone/../../mine.txt", "index.html", "/etc/hostname")
    outputs = [{"file": name, "sha256": ""} for name in files]
    manifest["builds"].append({"key": "gone", "folder": "gone", "published": True,
                               "inputs": [], "outputs": outputs})  # fmt: skip
    (out / "manifest.json").write_text(json.dumps(manifest))
    publish_here(runs, out)
    assert (tmp_path / "mine.txt").read_text() == "mine"


def test_an_interrupted_move_is_mended_by_the_next_run(tmp_path: Path) -> None:
    runs, out = write_runs(tmp_path / "runs", "alder"), tmp_path / "out"
    publish_here(runs, out)
    before = contents(out)
    (out / "alder").rename(out / ".reportgen-old-alder")
    (out / ".reportgen-new-alder").mkdir()
    publish_here(runs, out)
    assert contents(out) == before


# --- what is asked for ---------------------------------------------------------------------------


def test_only_one_build(tmp_path: Path) -> None:
    runs, out = write_runs(tmp_path / "runs", "alder", "birch"), tmp_path / "out"
    publish_here(runs, out, only=("birch",))
    assert not (out / "alder").exists()
    assert "alder/report.html" not in (out / "index.html").read_text()
    publish_here(runs, out)
    before = contents(out / "alder")
    publish_here(runs, out, only=("birch",))
    assert contents(out / "alder") == before
    assert "alder/report.html" in (out / "index.html").read_text()


@pytest.mark.parametrize("asked", [{"baseline": "aldre"}, {"only": ("aldre",)}])
def test_an_unknown_key_names_the_nearest(tmp_path: Path, asked) -> None:
    runs = write_runs(tmp_path / "runs", "alder", "birch")
    with pytest.raises(UsageError, match=r"no build has the key 'aldre'; did you mean alder\?"):
        publish_here(runs, tmp_path / "out", **asked)
    assert not (tmp_path / "out").exists()


def test_the_baseline_asked_for_stands_in_every_comparison(tmp_path: Path) -> None:
    bench = 'baseline = "gone"\n' + BENCH
    runs, out = write_runs(tmp_path / "runs", "alder", "birch", bench=bench), tmp_path / "out"
    outcome = publish_here(runs, out, baseline="birch")
    assert outcome.findings == ()
    alder, birch = (json.loads((out / key / "results.json").read_bytes())["baseline"]
                    for key in ("alder", "birch"))  # fmt: skip
    assert alder["key"] == "birch"
    assert birch is None


def test_a_baseline_that_fails_is_said_and_the_others_are_published(tmp_path: Path) -> None:
    bench = 'baseline = "alder"\n' + BENCH
    runs, out = write_runs(tmp_path / "runs", "alder", "birch", bench=bench), tmp_path / "out"
    (runs / "alder" / "a-load.s1p").unlink()
    outcome = publish_here(runs, out)
    assert [finding.code for finding in outcome.findings] == ["no-baseline"]
    assert (out / "birch" / "report.html").is_file()


@pytest.mark.parametrize("where", ["runs", ".", "runs/alder", "runs/alder/pages"])
def test_pages_do_not_come_to_lie_among_sweeps(tmp_path: Path, where: str) -> None:
    runs = write_runs(tmp_path / "runs", "alder")
    before = contents(tmp_path)
    with pytest.raises(UsageError, match="--out"):
        publish_here(runs, tmp_path / where)
    assert contents(tmp_path) == before


def test_pages_in_the_runs_folder_are_no_input(tmp_path: Path) -> None:
    runs = write_runs(tmp_path / "runs", "alder")
    publish_here(runs, runs / "published")
    before = contents(runs)
    outcome = publish_here(runs, runs / "published")
    assert outcome.findings == ()
    assert contents(runs) == before


def test_a_folder_of_somebody_else_is_refused(tmp_path: Path) -> None:
    runs = write_runs(tmp_path / "runs", "alder")
    (tmp_path / "out").mkdir()
    (tmp_path / "out" / "letter.txt").write_text("mine")
    with pytest.raises(OutputError, match="did not make"):
        publish_here(runs, tmp_path / "out")
    assert contents(tmp_path / "out") == {"letter.txt": b"mine"}


def test_a_folder_that_is_one_build(tmp_path: Path) -> None:
    folder = write_build(tmp_path / "alder", "Alder")
    (folder / "runs.toml").write_text(BENCH)
    publish_here(folder, tmp_path / "out")
    assert (tmp_path / "out" / "alder" / "report.html").is_file()


def test_nothing_is_logged(tmp_path: Path, caplog) -> None:
    with caplog.at_level(logging.WARNING):
        publish_here(write_runs(tmp_path / "runs", "alder"), tmp_path / "out")
    assert caplog.records == []
