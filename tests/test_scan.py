"""The walk through a runs folder: what is found, what is passed over and why."""

from __future__ import annotations

import os
import socket
from pathlib import Path

import pytest

from reportgen.errors import InputRejected
from reportgen.intake.paths import build_keys, file_name_problem, read_bytes, shown
from reportgen.intake.scan import Scan, ScanLimits, scan_runs
from reportgen.model import OUTPUT_MARKER


def put(root: Path, *files: str, content: bytes = b"x") -> None:
    for file in files:
        path = root / file
        path.parent.mkdir(parents=True, exist_ok=True)
        path.write_bytes(content)


def told(scan: Scan) -> list[tuple[str, str | None]]:
    return [(finding.code, finding.file) for finding in scan.findings]


# --- what is found -------------------------------------------------------------------------------


def test_files_come_sorted_with_forward_slashes(tmp_path: Path) -> None:
    put(tmp_path, "b/z.s1p", "b/a.s1p", "a/inner/x.toml", "runs.toml", "a.txt")
    scan = scan_runs(tmp_path)
    assert scan.files == ("a.txt", "a/inner/x.toml", "b/a.s1p", "b/z.s1p", "runs.toml")
    assert scan.findings == ()


def test_hidden_files_and_folders_are_passed_over_in_silence(tmp_path: Path) -> None:
    put(tmp_path, ".git/a.s1p", "a/.b.s1p", "a/c.s1p")
    assert scan_runs(tmp_path) == Scan(files=("a/c.s1p",), findings=())


def test_folder_with_our_marker_is_passed_over_with_all_below(tmp_path: Path) -> None:
    put(tmp_path, f"published/{OUTPUT_MARKER}", "published/x.s1p", "published/alder/x.s1p", "a.s1p")
    assert scan_runs(tmp_path) == Scan(files=("a.s1p",), findings=())


# --- what is not followed ------------------------------------------------------------------------


def test_links_are_told_and_not_followed(tmp_path: Path) -> None:
    runs = tmp_path / "runs"
    put(tmp_path, "secret/a.s1p", "runs/b.s1p")
    (runs / "folder").symlink_to(tmp_path / "secret")
    (runs / "file.s1p").symlink_to(tmp_path / "secret/a.s1p")
    (runs / "loop").symlink_to(runs)
    (runs / "nowhere").symlink_to(tmp_path / "gone")
    scan = scan_runs(runs)
    assert scan.files == ("b.s1p",)
    assert told(scan) == [("link", name) for name in ("file.s1p", "folder", "loop", "nowhere")]


def test_pipes_and_sockets_are_told_and_not_opened(tmp_path: Path) -> None:
    os.mkfifo(tmp_path / "pipe.s1p")
    with socket.socket(socket.AF_UNIX) as server:
        server.bind(str(tmp_path / "s"))
        assert told(scan_runs(tmp_path)) == [("not-a-file", "pipe.s1p"), ("not-a-file", "s")]


def test_name_that_is_not_utf8_is_told_in_escapes(tmp_path: Path) -> None:
    try:
        put(tmp_path, os.fsdecode(b"caf\xe9.s1p"), os.fsdecode(b"\xff/a.s1p"))
    except OSError:
        pytest.skip("the file system takes UTF-8 names only")
    scan = scan_runs(tmp_path)
    assert scan.files == ()
    assert told(scan) == [("name-not-utf8", r"caf\xe9.s1p"), ("name-not-utf8", r"\xff")]


@pytest.mark.skipif(os.geteuid() == 0, reason="root may read everything")
def test_folder_that_may_not_be_read_is_told(tmp_path: Path) -> None:
    put(tmp_path, "a/x.s1p", "b/y.s1p")
    (tmp_path / "a").chmod(0)
    scan = scan_runs(tmp_path)
    (tmp_path / "a").chmod(0o700)
    assert scan.files == ("b/y.s1p",)
    assert told(scan) == [("unreadable", "a")]


# --- limits --------------------------------------------------------------------------------------


def test_folders_too_deep_are_told_and_the_others_read(tmp_path: Path) -> None:
    put(tmp_path, "1/2/x.s1p", "1/2/3/x.s1p")
    scan = scan_runs(tmp_path, ScanLimits(depth=2))
    assert scan.files == ("1/2/x.s1p",)
    assert told(scan) == [("too-deep", "1/2/3")]


def test_standard_depth_is_twelve(tmp_path: Path) -> None:
    twelve = "/".join("abcdefghijkl")
    put(tmp_path, f"{twelve}/x.s1p", f"{twelve}/m/x.s1p")
    assert scan_runs(tmp_path).files == (f"{twelve}/x.s1p",)


def test_files_past_the_limit_are_counted(tmp_path: Path) -> None:
    put(tmp_path, *(f"a/{n}.s1p" for n in range(5)), "b/x.s1p", "c/x.s1p")
    scan = scan_runs(tmp_path, ScanLimits(files=3))
    assert scan.files == ("a/0.s1p", "a/1.s1p", "a/2.s1p")
    (finding,) = scan.findings
    assert finding.message == "more than 3 files: 2 files and 2 whole folders left out"


def test_file_too_large_is_named(tmp_path: Path) -> None:
    put(tmp_path, "big.s1p", content=b"x" * 11)
    put(tmp_path, "film.mp4", content=b"x" * 11)  # never read, so never too large
    scan = scan_runs(tmp_path, ScanLimits(file_bytes=10))
    assert scan.files == ("film.mp4",)
    assert told(scan) == [("too-large", "big.s1p")]


def test_files_past_the_sum_of_bytes_are_counted(tmp_path: Path) -> None:
    put(tmp_path, "a.s1p", "b.s1p", "c.s1p", content=b"x" * 2**20)
    scan = scan_runs(tmp_path, ScanLimits(all_bytes=2**20))
    assert scan.files == ("a.s1p",)
    assert [finding.message for finding in scan.findings] == [
        "more than 1 MB to read: 2 files left out"
    ]


# --- opening -------------------------------------------------------------------------------------


def rejection(root: Path, file: str, at_most: int = 100) -> str:
    with pytest.raises(InputRejected) as caught:
        read_bytes(root, file, file=file, at_most=at_most)
    return caught.value.findings[0].code


def test_bytes_are_those_of_the_file(tmp_path: Path) -> None:
    put(tmp_path, "a/b.s1p", content=b"\x00\xff\r\n")
    assert read_bytes(tmp_path, "a/b.s1p", file="b.s1p", at_most=4) == b"\x00\xff\r\n"


def test_no_link_is_opened_whether_file_or_folder_on_the_way(tmp_path: Path) -> None:
    put(tmp_path, "out/a.s1p", "runs/x")
    (tmp_path / "runs/link.s1p").symlink_to(tmp_path / "out/a.s1p")
    (tmp_path / "runs/folder").symlink_to(tmp_path / "out")
    assert rejection(tmp_path / "runs", "link.s1p") == "link"
    # a link in place of a folder is, to the system, no folder
    assert rejection(tmp_path / "runs", "folder/a.s1p") in ("link", "missing-file")


def test_what_is_no_regular_file_is_refused_without_waiting(tmp_path: Path) -> None:
    os.mkfifo(tmp_path / "pipe")
    put(tmp_path, "folder/x")
    assert rejection(tmp_path, "pipe") == "not-a-file"
    assert rejection(tmp_path, "folder") == "not-a-file"


def test_missing_and_large_files_are_refused(tmp_path: Path) -> None:
    put(tmp_path, "a.s1p", content=b"x" * 101)
    assert rejection(tmp_path, "b.s1p") == "missing-file"
    assert rejection(tmp_path, "a.s1p/b") == "missing-file"
    assert rejection(tmp_path, "a.s1p") == "too-large"


# --- names of files ------------------------------------------------------------------------------


@pytest.mark.parametrize("name", ["a.s1p", "raw/a-load.s1p", "Größe 1.s2p", "a..b.s1p"])
def test_names_inside_the_folder_are_safe(name: str) -> None:
    assert file_name_problem(name) is None


@pytest.mark.parametrize(
    "name",
    [
        "/etc/passwd",
        "../a.s1p",
        "raw/../../a.s1p",
        "C:a.s1p",
        "raw\\a.s1p",
        "\\\\host\\share",
        "~/a.s1p",
        "file:///a.s1p",
        "https://example.org/a.s1p",
        "a\0.s1p",
        "a\u202e.s1p",
        "./a.s1p",
        "",
        ".hidden/a.s1p",
    ],
)
def test_names_that_lead_elsewhere_are_not(name: str) -> None:
    assert file_name_problem(name) is not None


# --- keys, and names as shown --------------------------------------------------------------------


@pytest.mark.parametrize(
    ("folder", "key"),
    [
        ("alder", "alder"),
        ("2026/Alder, new winding", "2026-alder-new-winding"),
        ("Größe_3", "grosse-3"),
        ("con", "con-build"),
        ("AUX", "aux-build"),
        ("com1", "com1-build"),
        ("index", "index-build"),
        ("...", "build"),
        ("測定", "build"),
        (".", "bench"),
        ("x" * 100, "x" * 60),
    ],
)
def test_key_is_a_slug_of_the_path(folder: str, key: str) -> None:
    assert build_keys([folder], root_name="bench") == {folder: key}


def test_only_equal_keys_get_a_hash_and_it_is_that_of_the_path() -> None:
    # sha256 of "a b" and "a/b" by coreutils' sha256sum
    assert build_keys(["a b", "a/b", "c"], root_name="bench") == {
        "a b": "a-b-c8687a08",
        "a/b": "a-b-c14cddc0",
        "c": "c",
    }


def test_long_equal_keys_stay_within_sixty_characters() -> None:
    keys = build_keys(["y" * 61, "y" * 62], root_name="bench")
    assert {len(key) for key in keys.values()} == {60}
    assert len(set(keys.values())) == 2


def test_key_that_looks_like_a_hashed_one_makes_no_clash() -> None:
    keys = build_keys(["a b", "a/b", "a-b-c8687a08"], root_name="bench")
    assert len(set(keys.values())) == 3


def test_unseen_characters_are_shown_as_escapes() -> None:
    assert shown("a\u202eb\x1b[31m") == r"a\u202eb\x1b[31m"
    assert shown(os.fsdecode(b"caf\xe9")) == r"caf\xe9"
    assert shown("Größe") == "Größe"
