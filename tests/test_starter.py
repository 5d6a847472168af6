"""Starter sidecars: what is guessed from real folders, what has to be entered, what is publishable,
and names that mean no good."""

from __future__ import annotations

import re
import shutil
import tomllib
from pathlib import Path

import pytest
from hypothesis import given
from hypothesis import strategies as st
from small_runs import SWEEP

from reportgen.__main__ import main
from reportgen.errors import InputRejected
from reportgen.intake.sidecar import parse_bench, parse_build
from reportgen.model import BenchSheet, Setup
from reportgen.sidecars.bench_starter import bench_starter
from reportgen.sidecars.file_words import words_of_file
from reportgen.sidecars.found import look_into
from reportgen.sidecars.starter import build_starter
from reportgen.sidecars.toml_text import comment, entry, toml_key, toml_value

EXAMPLES = Path(__file__).parents[1] / "example_runs"
FOLDERS = sorted(path.parent for path in EXAMPLES.rglob("build.toml"))

pytestmark = pytest.mark.usefixtures("few_draws")


@pytest.fixture
def run(capsys, monkeypatch):
    monkeypatch.setattr("os.cpu_count", lambda: 1)

    def call(*arguments: object) -> tuple[int, str, str]:
        status = main([str(argument) for argument in arguments])
        said = capsys.readouterr()
        return status, said.out, said.err

    return call


def bare_copy(folder: Path, to: Path) -> Path:
    """Sweeps of an example without its sidecar."""
    shutil.copytree(folder, to)
    (to / "build.toml").unlink()
    return to


def starter_of(folder: Path, bench: BenchSheet | None = None) -> str:
    return build_starter(look_into(folder), bench or BenchSheet()).text


# --- guesses on the examples ---------------------------------------------------------------------


@pytest.mark.parametrize("folder", FOLDERS, ids=lambda folder: folder.name)
@pytest.mark.parametrize("renamed", [False, True], ids=["named", "renamed"])
def test_set_ups_and_units_of_the_examples(folder: Path, renamed: bool, tmp_path: Path) -> None:
    """All set-ups are right; also where the names say nothing. Units are right by the names."""
    true = tomllib.loads((folder / "build.toml").read_text())["sweep"]
    copy = tmp_path / "build"
    copy.mkdir()
    expected = {}
    for place, each in enumerate(true):
        suffix = Path(each["file"]).suffix
        file = f"x{place}{suffix}" if renamed else each["file"].replace("/", "-")
        shutil.copy(folder / each["file"], copy / file)
        expected[file] = each
    told = tomllib.loads(starter_of(copy))["sweep"]
    assert {each["file"]: each["setup"] for each in told} == {
        file: each["setup"] for file, each in expected.items()
    }
    for each in told if not renamed else ():
        want = expected[each["file"]]
        assert each.get("units") == want.get("units")
        if "unit" in each:
            assert each["unit"] == want["unit"]


@pytest.mark.parametrize("folder", FOLDERS, ids=lambda folder: folder.name)
def test_nothing_is_in_doubt_in_the_examples(folder: Path, tmp_path: Path) -> None:
    flat = tmp_path / "build"
    flat.mkdir()
    for path in folder.rglob("*.s?p"):
        shutil.copy(path, flat / path.name)
    assert [one.file for one in look_into(flat).sweeps if one.guess.others] == []


# --- from an empty folder to pages ---------------------------------------------------------------


def test_a_starter_with_its_turns_entered_is_published(run, tmp_path: Path) -> None:
    """As somebody new would do it: sidecar, publish (refused), enter, table, publish."""
    runs = tmp_path / "runs"
    runs.mkdir()
    folder = bare_copy(EXAMPLES / "alder", runs / "alder")
    assert run("sidecar", "--bench", runs)[0] == 0
    bench = runs / "runs.toml"
    bench.write_text(bench.read_text().replace("#bands", "bands"))
    status, out, _ = run("sidecar", folder)
    assert status == 0
    assert "to be entered: winding.low_turns, winding.high_turns, loads.main.resistance_ohm" in out
    status, _, err = run("publish", runs, "--out", tmp_path / "out")
    assert status == 1
    place = "winding.low_turns: found 0, expected a number of turns above 0 and below 1 000"
    assert f"{place}; enter the value" in err
    assert not (tmp_path / "out" / "alder").exists()
    enter(folder, low_turns=3, high_turns=24, resistance_ohm=3185)
    status, out, err = run("table", folder)
    assert (status, err) == (0, "")
    assert "method: Bisection with load" in out
    assert run("publish", runs, "--out", tmp_path / "out")[0] == 0
    assert (tmp_path / "out" / "alder" / "report.html").is_file()


def enter(folder: Path, **values: float) -> None:
    """Put a value in place of each 0 that a starter leaves."""
    sidecar = folder / "build.toml"
    text = sidecar.read_text()
    for key, value in values.items():
        text = text.replace(f"\n{key} = 0 ", f"\n{key} = {value} ")
    sidecar.write_text(text)


def test_every_sweep_of_every_kind_is_published(run, tmp_path: Path) -> None:
    folder = bare_copy(EXAMPLES / "rowan", tmp_path / "rowan")
    assert run("sidecar", folder)[0] == 0
    enter(folder, low_turns=2, high_turns=14, resistance_ohm=2410)
    assert run("table", folder)[0] == 0


def test_what_the_bench_knows_several_of_is_to_be_entered(run, tmp_path: Path) -> None:
    shutil.copy(EXAMPLES / "runs.toml", tmp_path)
    folder = bare_copy(EXAMPLES / "alder", tmp_path / "alder")
    _, out, _ = run("sidecar", folder)
    assert "sweep[1].load, sweep[1].calibration" in out
    assert "no runs.toml" not in out
    text = (folder / "build.toml").read_text().replace("\n# ", " ")
    suggested = re.search(r"turns of about 1 to ([0-9.]+) with main \(3185 ohm\)", text)
    assert suggested
    assert float(suggested[1]) == pytest.approx(8, rel=0.1)
    enter(folder, low_turns=3, high_turns=24)
    _, _, err = run("table", folder)
    assert 'sweep[1].load: no load is named "?"; name one of these: "main", "middle"' in err
    assert 'sweep[1].calibration: no calibration is named "?"; name one of these' in err


# --- never over what is there --------------------------------------------------------------------


def test_a_sidecar_is_never_overwritten(run, tmp_path: Path) -> None:
    folder = bare_copy(EXAMPLES / "alder", tmp_path / "alder")
    (folder / "build.toml").write_text("mine")
    status, out, err = run("sidecar", folder)
    assert (status, out) == (2, "")
    assert "build.toml is there already and was left as it is; move it away" in err
    assert (folder / "build.toml").read_text() == "mine"


def test_a_link_in_its_place_is_not_followed(run, tmp_path: Path) -> None:
    folder = bare_copy(EXAMPLES / "alder", tmp_path / "alder")
    (folder / "build.toml").symlink_to(tmp_path / "elsewhere")
    assert run("sidecar", folder)[0] == 2
    assert not (tmp_path / "elsewhere").exists()


def test_a_bench_file_is_never_overwritten(run, tmp_path: Path) -> None:
    (tmp_path / "runs.toml").write_text("mine")
    status, _, err = run("sidecar", "--bench", tmp_path)
    assert status == 2
    assert "runs.toml is there already" in err
    assert (tmp_path / "runs.toml").read_text() == "mine"


@pytest.mark.parametrize("arguments", [[], ["--bench"]])
def test_a_folder_that_is_not_there(run, tmp_path: Path, arguments: list[str]) -> None:
    status, _, err = run("sidecar", *arguments, tmp_path / "nowhere")
    assert status == 2
    assert "is no folder" in err


def test_a_folder_of_folders_is_told_what_to_call(run, tmp_path: Path) -> None:
    for name in ("alder", "portable/elder", "done"):
        (tmp_path / name).mkdir(parents=True)
        (tmp_path / name / "a-load.s1p").write_text(SWEEP)
    (tmp_path / "done" / "build.toml").write_text("")
    status, out, err = run("sidecar", tmp_path)
    assert (status, out) == (2, "")
    named = f"for each build: {tmp_path}/alder, {tmp_path}/portable/elder\n"
    assert err.endswith(named)
    assert not (tmp_path / "build.toml").exists()


def test_a_folder_without_a_sweep(run, tmp_path: Path) -> None:
    status, _, err = run("sidecar", tmp_path)
    assert status == 2
    assert "holds no sweep; put its .s1p and .s2p files there first" in err


# --- what else lies there ------------------------------------------------------------------------


def test_tables_are_known_by_their_heading(tmp_path: Path) -> None:
    (tmp_path / "a.csv").write_text("frequency_mhz,through_loss_db\n7.1,0.8\n")
    (tmp_path / "b.CSV").write_text("\ufeffcore_c, time_s , ambient_c,note\n")
    (tmp_path / "c.csv").write_text("date,price\n")
    tree = tomllib.loads(text := starter_of(tmp_path))
    assert [(each["file"], each["setup"]) for each in tree["sweep"]] == [("a.csv", "spot")]
    assert '#[[thermal]]\n#file = "b.CSV"' in text
    assert "c.csv" not in text


def test_a_sweep_that_cannot_be_read_is_left_out_with_its_reason(tmp_path: Path) -> None:
    (tmp_path / "a-load.s1p").write_text(SWEEP)
    (tmp_path / "b.s1p").write_text("<html>")
    tree = tomllib.loads(text := starter_of(tmp_path))
    assert [each["file"] for each in tree["sweep"]] == ["a-load.s1p"]
    assert "# left out: b.s1p: " in text


def test_the_same_connection_twice_is_a_repeat(tmp_path: Path) -> None:
    for name in ("a-load.s1p", "a-load-again.s1p", "b-load.s1p"):
        (tmp_path / name).write_text(SWEEP)
    told = tomllib.loads(starter_of(tmp_path))["sweep"]
    assert [(each["file"], each.get("repeat")) for each in told] == [
        ("a-load-again.s1p", None), ("a-load.s1p", 2), ("b-load.s1p", None),
    ]  # fmt: skip


def test_a_narrow_sweep_goes_by_its_name_and_says_what_else_it_may_be(tmp_path: Path) -> None:
    (tmp_path / "a-open.s1p").write_text(SWEEP)
    text = starter_of(tmp_path)
    assert tomllib.loads(text)["sweep"][0]["setup"] == "open"
    assert "# by the name; of itself it says: little is reflected" in text
    assert 'else it may be "load" or "antenna"' in text.replace("\n# ", " ")


# --- everything that may be added ----------------------------------------------------------------


def in_use(text: str) -> str:
    """A starter with every `#` without a blank taken away."""
    return "".join(
        line[1:] if line.startswith("#") and not line.startswith("# ") else line
        for line in text.splitlines(keepends=True)
    )


def test_all_that_is_out_of_use_in_a_build_can_be_used(tmp_path: Path) -> None:
    (tmp_path / "a-load.s1p").write_text(SWEEP)
    text = in_use(starter_of(tmp_path)).replace("turns = 0", "turns = 3")
    text = text.replace("resistance_ohm = 0", "resistance_ohm = 450")
    sheet = parse_build(text.encode(), file="build.toml", bench=BenchSheet())
    assert sheet.core is not None
    assert sheet.rating.power_w == 60
    assert [part.quantity for part in sheet.part] == [1]
    assert sheet.record["operator"] == "bench 1"
    assert sheet.match.load_ohm == 3200
    assert sheet.compensation.capacitor_pf == 82
    assert sheet.loads["main"].stray_pf == "fit"


def test_all_that_is_out_of_use_in_a_bench_file_can_be_used() -> None:
    assert parse_bench(bench_starter().encode(), file="runs.toml") == BenchSheet()
    sheet = parse_bench(in_use(bench_starter()).encode(), file="runs.toml")
    assert sheet.baseline == "alder"
    assert sheet.limits["all"].swr == 2
    assert sheet.duty == {"voice, processed": 50}


# --- names ---------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("file", "ports", "setups", "units"),
    [
        ("pair-ab.s2p", 2, (Setup.BACK_TO_BACK,), ("A", "B")),
        ("pairs/BC.s2p", 2, (Setup.BACK_TO_BACK,), ("B", "C")),
        ("B2B unit 3 unit 7.s2p", 2, (Setup.BACK_TO_BACK,), ("3", "7")),
        ("a-load.s1p", 1, (Setup.LOAD,), ("A",)),
        ("unit1_open.s1p", 1, (Setup.OPEN,), ("1",)),
        ("load-check.s1p", 1, (Setup.LOAD_CHECK, Setup.LOAD), ()),
        ("resistor.s2p", 2, (Setup.SERIES_RESISTOR, Setup.RESISTOR_CHECK), ()),
        ("thru.s2p", 2, (Setup.THRU_CHECK,), ()),
        ("a-series.s2p", 2, (Setup.SERIES_RESISTOR,), ("A",)),
        ("wire-20m.s1p", 1, (Setup.ANTENNA,), ()),
        ("0417.s1p", 1, (), ()),
        ("\u00e4.s1p", 1, (), ()),
    ],
)
def test_what_a_name_says(
    file: str, ports: int, setups: tuple[Setup, ...], units: tuple[str, ...]
) -> None:
    words = words_of_file(file, ports)
    assert (words.setups, words.units) == (setups, units)


@given(st.text(max_size=40))
def test_any_text_comes_back_out_of_toml(text: str) -> None:
    line = entry(text, {text: [text, 1, True, 0.5]}, text)
    assert all("\n" not in part for part in line)
    assert tomllib.loads("\n".join(line)) == {text: {text: [text, 1, True, 0.5]}}
    assert tomllib.loads("\n".join(comment(text))) == {}
    assert tomllib.loads(f"{toml_key(text)} = {toml_value(text)}") == {text: text}


@pytest.mark.parametrize(
    "name",
    [
        'a"]\nschema = 2\n[x.s1p',
        "a'load\".s1p",
        "a#load.s1p",
        "a\u202eload.s1p",
        "a\x7f.s1p",
        "ä.s1p",
    ],
)
def test_a_name_that_means_no_good_changes_nothing_else(name: str, tmp_path: Path) -> None:
    folder = tmp_path / 'x"\n[core]'
    folder.mkdir()
    (folder / "b-load.s1p").write_text(SWEEP)
    (folder / name).write_text(SWEEP)
    text = starter_of(folder)
    tree = tomllib.loads(text)
    assert set(tree) == {"schema", "name", "winding", "sweep", "loads"}
    assert tree["schema"] == 1
    named = {each["file"] for each in tree["sweep"]}
    assert named in ({"b-load.s1p", name}, {"b-load.s1p"})
    assert name in named or "left out: " in text
    with pytest.raises(InputRejected) as caught:
        parse_build(text.encode(), file="build.toml", bench=BenchSheet())
    assert {each.key for each in caught.value.findings} == {
        "winding.low_turns", "winding.high_turns", "loads.main.resistance_ohm",
    }  # fmt: skip
