"""The command line as it is typed: exit statuses, messages without a traceback, what is printed."""

from __future__ import annotations

import subprocess
import sys
from pathlib import Path

import pytest
from small_runs import BENCH, contents, write_build, write_runs

from reportgen import __version__
from reportgen.__main__ import main
from reportgen.output.workers import ThisProcess

pytestmark = pytest.mark.usefixtures("few_draws")


def in_this_process(_jobs: int, _limit_s: float, *start: object) -> ThisProcess:
    """Instead of workers, which take seconds to start."""
    return ThisProcess(*start)


@pytest.fixture
def run(capsys, monkeypatch):
    """Call a command, builds one after the other: its exit status and what it said."""
    monkeypatch.setattr("reportgen.every_build.Workers", in_this_process)

    def call(*arguments: object) -> tuple[int, str, str]:
        try:
            status = main([str(argument) for argument in arguments])
        except SystemExit as leaving:
            status = int(leaving.code or 0)
        said = capsys.readouterr()
        assert "Traceback" not in said.err
        return status, said.out, said.err

    return call


# --- the call itself is wrong: 2 -----------------------------------------------------------------


@pytest.mark.parametrize(
    ("arguments", "words"),
    [
        ([], "the following arguments are required: COMMAND"),
        (["publsh", "x"], "invalid choice: 'publsh'"),
        (["publish"], "the following arguments are required: RUNS"),
        (["publish", "x", "--jobs", "0"], "found '0', expected a whole number above 0"),
        (["publish", "x", "--jobs", "two"], "found 'two', expected a whole number above 0"),
        (["inspect", "x", "--out", "y"], "unrecognized arguments: --out y"),
        (["publish", "/nowhere/at/all"], "is no folder; name the folder that holds the builds"),
        (["inspect", "/nowhere/at/all"], "is no folder; name the folder that holds the builds"),
        (["table", "/nowhere/at/all"], "holds no build.toml; name the folder of one build"),
    ],
)
def test_a_wrong_call_is_said(run, arguments: list[str], words: str) -> None:
    status, out, err = run(*arguments)
    assert (status, out) == (2, "")
    assert words in err


@pytest.mark.parametrize("option", ["--baseline", "--only"])
def test_an_unknown_key_is_a_wrong_call(run, tmp_path: Path, option: str) -> None:
    runs = write_runs(tmp_path / "runs", "alder", "birch")
    status, out, err = run("publish", runs, "--out", tmp_path / "out", option, "brich")
    assert (status, out) == (2, "")
    assert err == "reportgen: no build has the key 'brich'; did you mean birch?\n"
    assert not (tmp_path / "out").exists()


def test_pages_among_the_sweeps_are_a_wrong_call(run, tmp_path: Path) -> None:
    runs = write_runs(tmp_path / "runs", "alder")
    status, _, err = run("publish", runs, "--out", runs)
    assert status == 2
    assert "holds the runs folder; choose a folder of its own" in err


def test_an_output_folder_is_no_runs_folder(run, tmp_path: Path) -> None:
    run("publish", write_runs(tmp_path / "runs", "alder"), "--out", tmp_path / "out")
    status, _, err = run("inspect", tmp_path / "out")
    assert status == 2
    assert "is an output folder" in err


# --- publish -------------------------------------------------------------------------------------


def test_all_published(run, tmp_path: Path) -> None:
    runs, out = write_runs(tmp_path / "runs", "alder"), tmp_path / "out"
    said = f"1 of 1 builds published; open {out / 'index.html'}\n"
    assert run("publish", runs, "--out", out) == (0, said, "")


def test_by_default_the_pages_go_to_published(run, tmp_path: Path, monkeypatch) -> None:
    monkeypatch.chdir(tmp_path)
    assert run("publish", write_runs(tmp_path / "runs", "alder"))[0] == 0
    assert (tmp_path / "published" / "index.html").is_file()


def test_a_rejected_build_gives_1_and_the_rest_is_published(run, tmp_path: Path) -> None:
    runs, out = write_runs(tmp_path / "runs", "alder", "birch"), tmp_path / "out"
    sidecar = runs / "alder" / "build.toml"
    sidecar.write_text(sidecar.read_text().replace("low_turns", "low_turn"))
    status, said, err = run("publish", runs, "--out", out)
    assert (status, said) == (1, f"1 of 2 builds published; open {out / 'index.html'}\n")
    assert "alder: not published\n" in err
    assert 'line 4: winding.low_turn: unknown key "low_turn"; did you mean `low_turns`?' in err
    assert (out / "birch" / "report.pdf").is_file()


def test_a_broken_bench_file_gives_1_and_nothing_is_written(run, tmp_path: Path) -> None:
    runs = write_runs(tmp_path / "runs", "alder", bench="bands = 40")
    status, out, err = run("publish", runs, "--out", tmp_path / "out")
    assert (status, out) == (1, "")
    assert err.startswith("nothing was done\n  error   runs.toml: ")
    assert not (tmp_path / "out").exists()


def test_an_empty_folder_gives_1_and_nothing_is_written(run, tmp_path: Path) -> None:
    status, _, err = run("publish", write_runs(tmp_path / "runs"), "--out", tmp_path / "out")
    assert status == 1
    assert "no build was found" in err
    assert not (tmp_path / "out").exists()


def test_a_folder_of_somebody_else_gives_1(run, tmp_path: Path) -> None:
    (tmp_path / "out").mkdir()
    (tmp_path / "out" / "letter.txt").write_text("mine")
    runs = write_runs(tmp_path / "runs", "alder")
    status, _, err = run("publish", runs, "--out", tmp_path / "out")
    assert status == 1
    assert "choose an empty folder for --out" in err
    assert contents(tmp_path / "out") == {"letter.txt": b"mine"}


def test_strict_counts_warnings_as_errors(run, tmp_path: Path) -> None:
    runs, out = write_runs(tmp_path / "runs", "alder"), tmp_path / "out"
    (runs / "alder" / "spare.s1p").write_text("")
    assert run("publish", runs, "--out", out)[0] == 0
    assert run("publish", runs, "--out", out, "--strict")[0] == 1
    assert run("inspect", runs)[0] == 0
    assert run("inspect", runs, "--strict")[0] == 1


def test_only_counts_what_was_written(run, tmp_path: Path) -> None:
    runs, out = write_runs(tmp_path / "runs", "alder", "birch"), tmp_path / "out"
    status, said, _ = run("publish", runs, "--out", out, "--only", "birch")
    assert (status, said.split(";")[0]) == (0, "1 of 2 builds published")


def test_a_hostile_name_reaches_no_terminal(run, tmp_path: Path) -> None:
    runs = write_runs(tmp_path / "runs")
    folder = write_build(runs / "alder", "A\\u001b[31m\\u202e")
    (folder / "a-load.s1p").unlink()
    status, out, err = run("inspect", runs)
    assert status == 1
    assert "\x1b" not in out + err
    write_build(runs / "alder", "A\\u001b[31m\\u202e")
    status, out, err = run("table", runs / "alder")
    assert status == 0 or "cannot be seen" in err
    assert not set("\x1b\u202e") & set(out + err)


# --- inspect -------------------------------------------------------------------------------------


def test_nothing_to_report(run, tmp_path: Path) -> None:
    runs = write_runs(tmp_path / "runs", "alder")
    before = contents(tmp_path)
    assert run("inspect", runs) == (0, "nothing to report\n", "")
    assert contents(tmp_path) == before


def test_findings_are_told_with_their_place_the_gravest_first(run, tmp_path: Path) -> None:
    runs = write_runs(tmp_path / "runs", "alder")
    sidecar = runs / "alder" / "build.toml"
    more = '[[sweep]]\nfile = "a-lod.s1p"\nsetup = "load"\nunit = "B"\n'
    sidecar.write_text(sidecar.read_text() + more)
    (runs / "alder" / "spare.s1p").write_text("")
    status, out, _ = run("inspect", runs)
    assert status == 1
    lines = out.splitlines()
    assert lines[0] == "alder"
    assert [line.split()[0] for line in lines[1:]] == ["error", "warning"]
    assert '"a-lod.s1p" is not there; did you mean "a-load.s1p"?' in lines[1]
    assert "spare.s1p: no [[sweep]] in build.toml names this file" in lines[2]


def test_a_folder_without_builds(run, tmp_path: Path) -> None:
    assert run("inspect", tmp_path) == (
        1, "no build was found: a build is a folder that holds a build.toml\n", ""
    )  # fmt: skip


# --- table ---------------------------------------------------------------------------------------


@pytest.fixture
def wide(monkeypatch) -> None:
    monkeypatch.setenv("COLUMNS", "200")


def test_the_band_table_of_one_build(run, tmp_path: Path, wide) -> None:
    runs = write_runs(tmp_path / "runs", "alder")
    status, out, err = run("table", runs / "alder")
    assert (status, err) == (0, "")
    lines = out.splitlines()
    assert lines[0] == "Alder"
    assert "the loss was not" in lines[1]
    assert lines[2].split() == ["Mismatch", "loss", "Return", "loss", "SWR"]
    assert lines[3].split() == ["Band", "dB", "dB"]
    assert lines[4].split()[:3] == ["40", "m", "mean"]
    assert lines[-1] == "method: Load only"


def test_a_narrow_terminal_loses_no_column(run, tmp_path: Path, monkeypatch) -> None:
    runs = write_runs(tmp_path / "runs", "alder")
    shown = {}
    for columns in ("200", "40"):
        monkeypatch.setenv("COLUMNS", columns)
        shown[columns] = run("table", runs / "alder")[1]
    assert sorted(set(shown["200"].split())) == sorted(set(shown["40"].split()))
    assert max(len(line) for line in shown["40"].splitlines()[3:-1]) <= 40


def test_a_band_that_was_not_measured_says_why(run, tmp_path: Path, wide) -> None:
    bench = BENCH.replace('["40 m"]', '["40 m", "10 m"]')
    runs = write_runs(tmp_path / "runs", "alder", bench=bench)
    assert "10 m  not measured: not covered" in run("table", runs / "alder")[1]


def test_the_bench_file_above_counts(run, tmp_path: Path, wide) -> None:
    runs = write_runs(tmp_path / "runs", "portable/alder")
    status, out, _ = run("table", runs / "portable" / "alder")
    assert status == 0
    assert "80 m" not in out


def test_a_build_that_cannot_be_read(run, tmp_path: Path) -> None:
    runs = write_runs(tmp_path / "runs", "alder")
    (runs / "alder" / "a-load.s1p").write_text("<html>")
    status, out, err = run("table", runs / "alder")
    assert (status, out) == (1, "")
    assert err.startswith("nothing was done\n  error   a-load.s1p: ")


# --- the program itself --------------------------------------------------------------------------


def test_version_and_help(run) -> None:
    assert run("--version") == (0, f"reportgen {__version__}\n", "")
    status, out, _ = run("--help")
    assert status == 0
    assert all(command in out for command in ("publish", "inspect", "table"))


def test_a_reader_that_stops_early_is_no_fault(tmp_path: Path) -> None:
    runs = write_runs(tmp_path / "runs", "alder")
    program = f"{sys.executable} -m reportgen table {runs / 'alder'}"
    done = subprocess.run(
        ["bash", "-c", f"set -o pipefail; {program} | true"], capture_output=True, check=False
    )
    assert b"Traceback" not in done.stderr
    assert b"BrokenPipe" not in done.stderr


def test_help_comes_without_slow_imports() -> None:
    code = "import sys, reportgen.__main__ as m; m.command_line(); print(*sys.modules)"
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert not {"numpy", "pandas", "matplotlib", "weasyprint", "shutil"} & set(done.stdout.split())
