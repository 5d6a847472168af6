"""Finished files in place: whole or not at all, and nothing of anybody else touched."""

from __future__ import annotations

import fcntl
import os
from pathlib import Path

import pytest
from small_runs import contents

from reportgen.errors import OutputError
from reportgen.model import OUTPUT_MARKER
from reportgen.output import placing
from reportgen.output.placing import open_output, place_build, place_file, remove_files


def test_a_new_folder_is_made_and_marked(tmp_path: Path) -> None:
    out = tmp_path / "a" / "b"
    with open_output(out):
        assert (out / OUTPUT_MARKER).is_file()


def test_an_empty_folder_is_taken(tmp_path: Path) -> None:
    with open_output(tmp_path):
        place_file(tmp_path, "index.html", b"1")
    assert contents(tmp_path)["index.html"] == b"1"


def test_a_folder_with_files_of_others_is_refused(tmp_path: Path) -> None:
    (tmp_path / "letter.txt").write_text("mine")
    with pytest.raises(OutputError, match="holds files that this program did not make"):
        open_output(tmp_path).__enter__()
    assert contents(tmp_path) == {"letter.txt": b"mine"}


def test_a_file_is_no_folder(tmp_path: Path) -> None:
    (tmp_path / "out").write_text("mine")
    with pytest.raises(OutputError, match="is a file, expected a folder"):
        open_output(tmp_path / "out").__enter__()


def test_two_runs_do_not_write_at_once(tmp_path: Path) -> None:
    with open_output(tmp_path):
        pass
    with (tmp_path / OUTPUT_MARKER).open("r+") as other:
        fcntl.flock(other, fcntl.LOCK_EX)
        with pytest.raises(OutputError, match="another run is writing"):
            open_output(tmp_path).__enter__()


def test_a_build_replaces_the_earlier_one_whole(tmp_path: Path) -> None:
    with open_output(tmp_path):
        place_build(tmp_path, "alder", {"report.html": b"old", "card.png": b"old"})
        place_build(tmp_path, "alder", {"report.html": b"new"}, {"report.html", "card.png"})
    assert contents(tmp_path / "alder") == {"report.html": b"new"}


def test_what_others_put_beside_the_pages_stays(tmp_path: Path) -> None:
    with open_output(tmp_path):
        place_build(tmp_path, "alder", {"report.html": b"old"})
        (tmp_path / "alder" / "photos").mkdir()
        (tmp_path / "alder" / "photos" / "1.jpg").write_bytes(b"photo")
        (tmp_path / "alder" / "link").symlink_to("nowhere")
        place_build(tmp_path, "alder", {"report.html": b"new"}, {"report.html"})
    assert contents(tmp_path / "alder") == {"photos/1.jpg": b"photo", "report.html": b"new"}
    assert os.readlink(tmp_path / "alder" / "link") == "nowhere"


@pytest.mark.parametrize("kind", ["file", "link"])
def test_a_name_taken_by_something_else_is_refused(tmp_path: Path, kind: str) -> None:
    with open_output(tmp_path):
        if kind == "file":
            (tmp_path / "alder").write_text("mine")
        else:
            (tmp_path / "alder").symlink_to(tmp_path / "elsewhere")
        with pytest.raises(OutputError, match="alder is in the way"):
            place_build(tmp_path, "alder", {"report.html": b"new"})
    assert (tmp_path / "alder").is_symlink() or (tmp_path / "alder").read_text() == "mine"


def test_a_disk_that_fails_leaves_the_earlier_pages(tmp_path: Path, monkeypatch) -> None:
    def full(*_: object) -> None:
        raise OSError(28, "No space left on device")

    with open_output(tmp_path):
        place_build(tmp_path, "alder", {"report.html": b"old"})
        monkeypatch.setattr(placing, "_write", full)
        with pytest.raises(OutputError, match="No space left on device"):
            place_build(tmp_path, "alder", {"report.html": b"new"}, {"report.html"})
    assert (tmp_path / "alder" / "report.html").read_bytes() == b"old"


# --- interrupted moves: the three states in which a move can stop --------------------------------


def interrupted(out: Path, *folders: str) -> dict[str, bytes]:
    """What stands after the next command has opened an output left with some folders."""
    with open_output(out):
        pass
    for name in folders:
        (out / name).mkdir()
        (out / name / "report.html").write_text(name)
    with open_output(out):
        found = contents(out)
    del found[OUTPUT_MARKER]
    return found


def test_stopped_while_writing_the_new_pages(tmp_path: Path) -> None:
    assert interrupted(tmp_path, "alder", ".reportgen-new-alder") == {"alder/report.html": b"alder"}


def test_stopped_with_the_old_pages_moved_away(tmp_path: Path) -> None:
    found = interrupted(tmp_path, ".reportgen-old-alder", ".reportgen-new-alder")
    assert found == {"alder/report.html": b".reportgen-old-alder"}


def test_stopped_before_the_old_pages_were_removed(tmp_path: Path) -> None:
    assert interrupted(tmp_path, "alder", ".reportgen-old-alder") == {"alder/report.html": b"alder"}


# --- removing ------------------------------------------------------------------------------------


def test_only_what_was_written_is_removed(tmp_path: Path) -> None:
    (tmp_path / "alder").mkdir()
    (tmp_path / "birch").mkdir()
    for name in ("alder/report.html", "alder/photo.jpg", "birch/report.html"):
        (tmp_path / name).write_text("x")
    remove_files(tmp_path, ["alder/report.html", "birch/report.html", "cedar/report.html"])
    assert set(contents(tmp_path)) == {"alder/photo.jpg"}
    assert not (tmp_path / "birch").exists()


def test_a_link_is_not_followed_when_removing(tmp_path: Path) -> None:
    (tmp_path / "mine.txt").write_text("mine")
    (tmp_path / "alder").mkdir()
    (tmp_path / "alder" / "report.html").symlink_to(tmp_path / "mine.txt")
    remove_files(tmp_path, ["alder/report.html"])
    assert (tmp_path / "mine.txt").read_text() == "mine"
    assert (tmp_path / "alder" / "report.html").is_symlink()
