r"""Folders and files made to do harm, row by row of what is known to be tried.

=====================================  =========================================================
threat                                 test (here, unless a file is named)
=====================================  =========================================================
pickle named as a sweep                test_touchstone_hostile, test_hostile_runs: never run;
                                       `test_nothing_that_runs_or_unpacks_is_called`
links out of the tree, loops           test_scan, test_builds; in the sidecar's own names: here
pipes, sockets, devices                test_scan
deep and huge trees                    test_scan; many links, many folders: here
paths in a sidecar                     test_scan for each name; `test_no_sidecar_leads_elsewhere`
sidecar: size, nesting, big integers   test_sidecar; thousands of mistakes, thousands of keys: here
numbers that are none, vast or tiny    `test_number_that_means_nothing_is_refused`
port and point bombs                   test_touchstone, test_touchstone_two; `test_what_a_header_
                                       promises_takes_no_room`
gzip, zip, other packed files          test_touchstone, test_touchstone_hostile
HTML, templates, CSS, SVG              test_hostile_runs on what is published; test_pages,
                                       test_templates, test_charts
fetches and attachments of a PDF       test_hostile_runs (a server counts), test_pdf
pages that take for ever               texts are cut (test_plain_text), tables bounded (here), a
                                       worker is stopped (test_workers)
formulas in CSV                        test_documents; `test_cell_is_no_formula_for_anybody`
control and bidirectional characters   test_plain_text, test_hostile_runs
names that are not UTF-8               test_scan, test_hostile_runs
names that a system keeps for itself   test_scan
keys that are alike                    test_scan; `test_names_alike_to_other_systems_...`
output within input                    test_publish, test_command_line
a file that changes meanwhile          `test_hash_is_of_what_was_read`
escapes for a terminal                 test_command_line, test_hostile_runs
secrets in what is published           test_hostile_runs
long error texts                       `test_message_is_short_whatever_it_quotes`, test_fuzz
one bad file                           test_builds, test_publish, test_hostile_runs
=====================================  =========================================================
"""

from __future__ import annotations

import ast
import hashlib
import time
import tracemalloc
import unicodedata
from pathlib import Path

import pytest
from small_runs import BUILD, SWEEP, write_build, write_runs
from sweep_files import OPTION, one_port, verdict

import reportgen
from reportgen.errors import InputRejected
from reportgen.intake import builds
from reportgen.intake.builds import open_runs, read_build
from reportgen.intake.paths import build_keys
from reportgen.intake.remarks import MOST_ALIKE, MOST_ERRORS
from reportgen.intake.scan import ScanLimits, scan_runs
from reportgen.intake.sidecar import parse_bench, parse_build
from reportgen.intake.spot_readings import parse_spot_readings
from reportgen.model import BenchSheet, Finding
from reportgen.output.csv_tables import _harmless
from reportgen.pages.line_breaks import columns_of, kept_text

HEAD = 'name = "x"\n[winding]\nlow_turns = 3\nhigh_turns = 24\n'
SECONDS = 10.0  # what is measured takes a tenth of a second to one; it took minutes


def mistakes(text: str) -> tuple[Finding, ...]:
    with pytest.raises(InputRejected) as caught:
        parse_build(text.encode(), file="build.toml", bench=BenchSheet())
    return caught.value.findings


def bench_mistakes(text: str) -> tuple[Finding, ...]:
    with pytest.raises(InputRejected) as caught:
        parse_bench(text.encode(), file="runs.toml")
    return caught.value.findings


# --- nothing runs --------------------------------------------------------------------------------

RUNS = {"eval", "exec", "compile", "__import__", "Network", "NetworkSet", "read_all", "system"}
UNPACKS = {"pickle", "shelve", "marshal", "zipfile", "tarfile", "gzip", "subprocess", "xml", "yaml"}


def test_nothing_that_runs_or_unpacks_is_called():
    """`skrf.Network(path)` and `read_all` try a pickle first; re.compile is no compile()."""
    for module in Path(reportgen.__file__).parent.rglob("*.py"):
        for node in ast.walk(ast.parse(module.read_text("utf-8"))):
            if isinstance(node, ast.Import | ast.ImportFrom):
                of = getattr(node, "module", None)
                names = {of} if of else {alias.name for alias in node.names}
                assert not {str(name).split(".")[0] for name in names} & UNPACKS, module
            elif isinstance(node, ast.Call):
                called = node.func
                name = called.id if isinstance(called, ast.Name) else getattr(called, "attr", "")
                assert name not in RUNS or ast.unparse(called) == "re.compile", (module, name)


# --- trees ---------------------------------------------------------------------------------------


def test_very_many_links_are_counted(tmp_path: Path) -> None:
    for number in range(MOST_ALIKE + 7):
        (tmp_path / f"{number:04}.s1p").symlink_to("nowhere")
    scan = scan_runs(tmp_path)
    assert len(scan.findings) == MOST_ALIKE + 1
    assert scan.findings[-1].message.startswith("7 more findings of the kind `link`")


def test_very_many_folders_are_counted(tmp_path: Path) -> None:
    for name in "abcde":
        (tmp_path / name).mkdir()
    scan = scan_runs(tmp_path, ScanLimits(folders=3))
    assert [finding.message for finding in scan.findings] == ["more than 3 folders: 2 left out"]


def test_of_a_folder_beyond_all_limits_the_first_names_are_taken(tmp_path: Path) -> None:
    for number in range(9):
        (tmp_path / f"{number}.s1p").write_text("x")
    scan = scan_runs(tmp_path, ScanLimits(files=2, folders=1))
    assert scan.files == ("0.s1p", "1.s1p")
    assert [one.message for one in scan.findings] == [
        "more than 2 files: 7 files and 0 whole folders left out"
    ]


def test_sweeps_that_nothing_names_are_counted_and_of_however_many_ports(tmp_path: Path) -> None:
    folder = write_build(tmp_path / "alder", "Alder")
    for number in range(MOST_ALIKE):
        (folder / f"{number}.s{number}p").write_text(SWEEP)
    (folder / "0-LOAD.S1P").write_text(SWEEP)
    runs = open_runs(write_runs(tmp_path))
    found = read_build(runs, runs.folders[0]).findings
    assert {finding.code for finding in found} >= {"unnamed-sweep"}
    unnamed = [finding for finding in found if finding.code == "unnamed-sweep"]
    assert len(unnamed) == MOST_ALIKE + 1
    assert "0-LOAD.S1P" in {finding.file for finding in unnamed}
    assert unnamed[-1].message.startswith("1 more")


def test_folders_without_a_sidecar_cost_no_square_of_their_number(tmp_path: Path) -> None:
    paths = [f"{number}/a.s1p" for number in range(5000)]
    began = time.perf_counter()
    assert len(list(builds.stray_files(paths))) == 5000
    assert time.perf_counter() - began < SECONDS


# --- names ---------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    "name",
    [
        "../a.s1p",
        "/etc/passwd",
        "C:/a.s1p",
        "C:\\a.s1p",
        "\\\\host\\share\\a.s1p",
        "a\x00.s1p",
        "~/a.s1p",
        "https://example.org/a.s1p",
        "file:///etc/passwd",
        "raw/../../a.s1p",
        ".",
        "..",
        "a.s1p/",
        "\u202e.s1p",
    ],
)
@pytest.mark.parametrize("table", ["sweep", "thermal"])
def test_no_sidecar_leads_elsewhere(name: str, table: str) -> None:
    escaped = "".join(f"\\u{ord(c):04x}" if ord(c) < 32 or c in '"\\' else c for c in name)
    rest = 'setup = "open"' if table == "sweep" else "power_w = 50\nfrequency_mhz = 7"
    found = mistakes(f'{HEAD}[[{table}]]\nfile = "{escaped}"\n{rest}\n')
    assert [(one.code, one.key) for one in found] == [("unsafe-file-name", f"{table}[1].file")]


@pytest.mark.parametrize("link", ["link.s1p", "folder/a.s1p"])
def test_named_link_is_not_followed(tmp_path: Path, link: str) -> None:
    outside = tmp_path / "outside"
    outside.mkdir()
    (outside / "a.s1p").write_text(SWEEP)
    folder = write_build(tmp_path / "runs" / "alder", "Alder")
    (folder / "link.s1p").symlink_to(outside / "a.s1p")
    (folder / "folder").symlink_to(outside)
    more = f'[[sweep]]\nfile = "{link}"\nsetup = "open"\n'
    (folder / "build.toml").write_text(BUILD.format(name="Alder") + more)
    runs = open_runs(write_runs(tmp_path / "runs"))
    build = read_build(runs, runs.folders[0])
    assert [one.sweep.file for one in build.measurements] == ["a-load.s1p"]
    assert link not in {one.file for one in build.inputs}


def test_names_alike_to_other_systems_get_keys_that_differ(tmp_path: Path) -> None:
    composed, apart = (unicodedata.normalize(form, "gr\u00f6\u00dfe") for form in ("NFC", "NFD"))
    folders = ["Alder", "alder", "ALDER", composed, apart, "con", "CON", "con.", "x" * 61, "x" * 62]
    keys = build_keys(folders, root_name="bench")
    assert len({key.casefold() for key in keys.values()}) == len(folders)
    assert not {"con", "nul", "aux"} & set(keys.values())


def test_stems_alike_are_different_sweeps(tmp_path: Path) -> None:
    folder = write_build(tmp_path / "alder", "Alder")
    (folder / "A-load.S1P").write_text(SWEEP.replace("-0.050", "-0.060"))
    more = '[[sweep]]\nfile = "A-load.S1P"\nsetup = "load"\nrepeat = 2\n'
    (folder / "build.toml").write_text(BUILD.format(name="Alder") + more)
    runs = open_runs(write_runs(tmp_path))
    build = read_build(runs, runs.folders[0])
    assert [one.sweep.file for one in build.measurements] == ["a-load.s1p", "A-load.S1P"]
    assert len({one.sha256 for one in build.inputs}) == 3


# --- sidecars ------------------------------------------------------------------------------------

MANY = 3000
FLOODS = {
    "unknown keys": "".join(f"key{number} = 1\n" for number in range(MANY)),
    "empty sweeps": "[[sweep]]\n" * MANY,
    "wrong sweeps": '[[sweep]]\nfile = "../a"\nsetup = "load"\nload = "x"\n' * MANY,
    "empty parts": "[[part]]\n" * MANY,
    "unknown tables": "".join(f"[table{number}]\n" for number in range(MANY)),
}
BENCH_FLOODS = {
    "empty bands": "[[own_band]]\n" * MANY,
    "bands of one name": '[[own_band]]\nname = "x"\nfrom_mhz = 1\nto_mhz = 2\n' * MANY,
    "limits for no band": "".join(f"[limits.band{number}]\n" for number in range(MANY)),
    "bands unknown": 'bands = ["x"' + ', "x"' * MANY + "]\n",
}


@pytest.mark.parametrize("text", FLOODS.values(), ids=FLOODS)
def test_flood_of_mistakes_is_told_in_part_and_at_once(text: str) -> None:
    began = time.perf_counter()
    found = mistakes(HEAD + text if not text.startswith("key") else text)
    assert time.perf_counter() - began < SECONDS
    assert len(found) == MOST_ERRORS + 1
    assert found[-1].code == "too-many-mistakes"


@pytest.mark.parametrize("text", BENCH_FLOODS.values(), ids=BENCH_FLOODS)
def test_flood_of_mistakes_of_the_bench_likewise(text: str) -> None:
    began = time.perf_counter()
    found = bench_mistakes(text)
    assert time.perf_counter() - began < SECONDS
    assert len(found) == MOST_ERRORS + 1


@pytest.mark.parametrize("table", ["record", "loads"])
def test_more_keys_than_a_page_can_show_are_refused(table: str) -> None:
    value = "1" if table == "record" else "{ resistance_ohm = 50 }"
    keys = "".join(f"key{number} = {value}\n" for number in range(201))
    found = mistakes(f"{HEAD}[{table}]\n{keys}")
    assert [(one.code, one.key, one.message) for one in found] == [
        ("too-many-keys", table, "found 201 keys, expected at most 200")
    ]
    parse_build(
        f"{HEAD}[{table}]\n{keys.partition('key200')[0]}".encode(),
        file="build.toml",
        bench=BenchSheet(),
    )


@pytest.mark.parametrize(
    ("line", "code"),
    [
        ("[match]\nload_ohm = nan", "wrong-value"),
        ("[match]\nload_ohm = inf", "wrong-value"),
        ("[match]\nload_ohm = 1e400", "wrong-value"),
        ("[match]\nload_ohm = 1e7", "wrong-value"),
        ("[match]\nload_ohm = 0", "wrong-value"),
        ("[match]\nload_ohm = -50", "wrong-value"),
        ("[match]\nload_ohm = 1e-300", "too-small"),
        ("[match]\nsource_ohm = 5e-324", "too-small"),
        ("[rating]\npower_w = 9223372036854775808", "wrong-value"),
        ("[rating]\nload_swr = 0.5", "wrong-value"),
        ("[record]\nx = nan", "wrong-value"),
        ("[record]\nx = 9223372036854775808", "wrong-value"),
        ("[core]\nouter_mm = 1e-12\ninner_mm = 1e-13\nheight_mm = 1", "too-small"),
    ],
)
def test_number_that_means_nothing_is_refused(line: str, code: str) -> None:
    assert {one.code for one in mistakes(f"{HEAD}{line}\n")} == {code}


@pytest.mark.parametrize("turns", [("1e-5", "24"), ("3", "0.001"), ("0.5", "999")])
def test_turns_beyond_reason_are_refused(turns: tuple[str, str]) -> None:
    low, high = turns
    (found,) = mistakes(f'name = "x"\n[winding]\nlow_turns = {low}\nhigh_turns = {high}\n')
    assert (found.code, found.key) == ("turns-ratio", "winding.high_turns")


# --- sweeps --------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    "content",
    [
        "[Version] 2.0\n# MHz S RI R 50\n[Number of Ports] 999999999\n[Network Data]\n1 0 0\n",
        "[Version] 2.0\n# MHz S RI R 50\n[Number of Ports] 1\n[Number of Frequencies] 999999999\n"
        "[Network Data]\n1 0 0\n[End]\n",
        "[Version] 2.0\n# MHz S RI R 50\n[Number of Ports] 2\n[Two-Port Data Order] 12_21\n"
        "[Number of Frequencies] 200001\n[Number of Noise Frequencies] 999999999\n"
        "[Network Data]\n1 0 0\n[Noise Data]\n1\n[End]\n",
    ],
)
def test_what_a_header_promises_takes_no_room(content: str) -> None:
    tracemalloc.start()
    was_read, _ = verdict(content, file="a.ts")
    _, peak = tracemalloc.get_traced_memory()
    tracemalloc.stop()
    assert not was_read
    assert peak < 2**20


@pytest.mark.parametrize("file", ["a.s99p", "a.s999p"])
def test_name_of_many_ports_takes_no_room(file: str) -> None:
    was_read, findings = verdict(OPTION + one_port(1), file=file)
    assert (was_read, findings[0].code) == (False, "port-count")


SWEEP_FLOODS = {
    "keywords": "[Version] 2.0\n" + "[Colour] red\n" * MANY,
    "one keyword again": "[Version] 2.0\n" * MANY,
    "option tokens": "# " + "x " * MANY + "\n1 0 0\n",
    "references": "# R " + "7x " * MANY + "\n1 0 0\n",
}


@pytest.mark.parametrize("content", SWEEP_FLOODS.values(), ids=SWEEP_FLOODS)
def test_sweep_full_of_mistakes_is_given_up(content: str) -> None:
    began = time.perf_counter()
    was_read, findings = verdict(content, file="a.ts")
    assert time.perf_counter() - began < SECONDS
    assert not was_read
    assert len(findings) == MOST_ERRORS + 1
    assert findings[-1].code == "too-many-mistakes"


def test_second_option_line_full_of_mistakes_is_one() -> None:
    content = OPTION + "# " + "x " * MANY + "\n" + one_port(1)
    _, findings = verdict(content)
    assert [one.code for one in findings] == ["second-option-line"]


def test_readings_full_of_mistakes_are_given_up() -> None:
    data = b"frequency_mhz,through_loss_db\n" + b"x\n" * 100_000
    began = time.perf_counter()
    with pytest.raises(InputRejected) as caught:
        parse_spot_readings(data, file="a.csv")
    assert time.perf_counter() - began < SECONDS
    assert len(caught.value.findings) == MOST_ERRORS + 1


@pytest.mark.parametrize(
    "content",
    [
        OPTION + "\x1b" * 9000 + "\n",
        OPTION + "1 0 " + "9x" * 4000 + "\n",
        "# " + "\u202e" * 9000 + "\n1 0 0\n",
        "[Version] 2.0\n[" + "\x07" * 9000 + "]\n",
        "<" + "html " * 9000,
        "\u0663" * 9000,
    ],
)
def test_message_is_short_whatever_it_quotes(content: str) -> None:
    _, findings = verdict(content, file="a.ts")
    assert findings
    for finding in findings:
        assert len(finding.message) < 400
        kinds = {unicodedata.category(letter)[0] for letter in finding.message + finding.remedy}
        assert "C" not in kinds


# --- while reading, and after --------------------------------------------------------------------


def test_hash_is_of_what_was_read(tmp_path: Path, monkeypatch) -> None:
    """A file that is exchanged behind the reader's back: hash and figures are of the same bytes."""
    runs = open_runs(write_runs(tmp_path, "alder"))
    file = tmp_path / "alder" / "a-load.s1p"
    before = file.read_bytes()
    real = builds.parse_touchstone

    def exchanging(data: bytes, **settings):
        file.write_text(SWEEP.replace("-0.050", "0.9"))
        return real(data, **settings)

    monkeypatch.setattr(builds, "parse_touchstone", exchanging)
    build = read_build(runs, runs.folders[0])
    assert file.read_bytes() != before
    (sweep,) = [one for one in build.inputs if one.file == "a-load.s1p"]
    assert sweep.sha256 == build.measurements[0].sweep.sha256
    assert sweep.sha256 == hashlib.sha256(before).hexdigest()
    assert build.measurements[0].sweep.s[0, 0, 0].imag == -0.05


@pytest.mark.parametrize(
    ("cell", "shown"),
    [
        ("\n=1+1", "' =1+1"),
        ("  =1+1", "'  =1+1"),
        ("\uff1d1+1", "'\uff1d1+1"),
        ("a;=1+1", "a;'=1+1"),
        ("a; @x", "a;' @x"),
        ("a\x00\x1b[31m\u202eb", "a  [31m b"),
        ("1:49 on a ring; 40 m", "1:49 on a ring; 40 m"),
    ],
)
def test_cell_is_no_formula_for_anybody(cell: str, shown: str) -> None:
    """OWASP, CSV injection: full-width forms too, and cells that another separator would make."""
    assert _harmless(cell) == shown


def test_word_without_an_end_is_broken_at_once() -> None:
    began = time.perf_counter()
    kept, lines = kept_text("[U+202E]" * 2000, 2, 50.0, columns_of)
    assert time.perf_counter() - began < SECONDS
    assert lines == 2
    assert kept.endswith("\u2026")
