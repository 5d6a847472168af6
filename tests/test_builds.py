"""From a runs folder to its builds: which folder is one, and what its files hold."""

from __future__ import annotations

import hashlib
from pathlib import Path

import pytest

from reportgen.errors import InputRejected, UsageError
from reportgen.intake.builds import Runs, open_runs, read_build
from reportgen.model import OUTPUT_MARKER, Build, Finding, Load, Setup, Severity

FREQUENCIES_MHZ = (7.0, 7.05, 7.1, 7.15, 7.2)
ONE_PORT = "# MHz S RI R 50\n" + "".join(f"{f} 0.5 0.1\n" for f in FREQUENCIES_MHZ)
PAIR = "# MHz S RI R 50\n" + "".join(
    f"{f} 0.1 0 0.9 -0.2 0.9 -0.2 0.1 0\n" for f in FREQUENCIES_MHZ
)
HEAD = 'name = "Alder"\nwinding = { low_turns = 3, high_turns = 24 }\n'
OPEN = '[[sweep]]\nfile = "a-open.s1p"\nsetup = "open"\n'
LOAD = '[[sweep]]\nfile = "a-load.s1p"\nsetup = "load"\n'


def put(root: Path, files: dict[str, str]) -> Runs:
    for file, text in files.items():
        path = root / file
        path.parent.mkdir(parents=True, exist_ok=True)
        path.write_text(text, encoding="utf-8")
    return open_runs(root)


def only_build(root: Path, files: dict[str, str]) -> Build:
    runs = put(root, files)
    (folder,) = runs.folders
    return read_build(runs, folder)


def codes(findings: tuple[Finding, ...]) -> list[str]:
    return [finding.code for finding in findings]


# --- the runs folder -----------------------------------------------------------------------------


def test_what_is_no_folder_is_an_error_of_the_call(tmp_path: Path) -> None:
    with pytest.raises(UsageError, match="is no folder"):
        open_runs(tmp_path / "gone")


def test_our_own_output_is_no_runs_folder(tmp_path: Path) -> None:
    with pytest.raises(UsageError, match="is an output folder"):
        put(tmp_path, {OUTPUT_MARKER: ""})


def test_broken_bench_file_is_rejected(tmp_path: Path) -> None:
    with pytest.raises(InputRejected) as caught:
        put(tmp_path, {"runs.toml": "powr_w = 3"})
    assert codes(caught.value.findings) == ["unknown-key"]


def test_bench_file_that_is_a_link_is_rejected(tmp_path: Path) -> None:
    (tmp_path / "runs.toml").symlink_to(tmp_path / "elsewhere.toml")
    with pytest.raises(InputRejected) as caught:
        open_runs(tmp_path)
    assert codes(caught.value.findings) == ["link"]


def test_without_a_bench_file_every_known_band_counts(tmp_path: Path) -> None:
    runs = open_runs(tmp_path)
    assert runs.folders == ()
    assert len(runs.bands) == 11
    assert runs.bench.bands is None


def test_named_bands_come_by_frequency_own_ones_among_them(tmp_path: Path) -> None:
    bench = """\
bands = ["40 m", "Coast", "80 m"]
own_band = [{ name = "Coast", from_mhz = 4.063, to_mhz = 4.438 }]
"""
    runs = put(tmp_path, {"runs.toml": bench})
    assert [band.name for band in runs.bands] == ["80 m", "Coast", "40 m"]
    assert runs.bands[1].from_hz == pytest.approx(4.063e6)
    assert runs.inputs[0].sha256 == hashlib.sha256(bench.encode()).hexdigest()


def test_builds_come_by_path_each_with_its_own_files(tmp_path: Path) -> None:
    files = ["b/build.toml", "b/raw/x.s1p", "b/c/build.toml", "b/c/y.s1p", "a/build.toml"]
    runs = put(tmp_path, dict.fromkeys(files, ""))
    assert [(build.key, build.folder, build.files) for build in runs.folders] == [
        ("a", "a", ("build.toml",)),
        ("b", "b", ("build.toml", "raw/x.s1p")),
        ("b-c", "b/c", ("build.toml", "y.s1p")),
    ]
    assert runs.findings == ()


def test_runs_folder_may_be_a_build_itself(tmp_path: Path) -> None:
    root = tmp_path / "Alder 2"
    build = only_build(root, {"build.toml": HEAD + OPEN, "a-open.s1p": ONE_PORT})
    assert (build.key, build.folder) == ("alder-2", ".")
    assert codes(build.findings) == []


def test_sweep_beside_the_bench_file_belongs_to_no_build(tmp_path: Path) -> None:
    runs = put(tmp_path, {"runs.toml": "", "a.s2p": PAIR, "notes/read.txt": ""})
    assert [(finding.code, finding.file) for finding in runs.findings] == [("no-sidecar", ".")]


def test_known_baseline_is_no_finding(tmp_path: Path) -> None:
    runs = put(tmp_path, {"runs.toml": 'baseline = "a-b"', "a/b/build.toml": ""})
    assert runs.findings == ()


# --- one build -----------------------------------------------------------------------------------


def test_build_holds_its_sweeps_and_what_was_read(tmp_path: Path) -> None:
    sidecar = HEAD + OPEN + '[[sweep]]\nfile = "raw/ab.s2p"\nsetup = "back-to-back"\n'
    build = only_build(
        tmp_path,
        {"x/build.toml": sidecar, "x/a-open.s1p": ONE_PORT, "x/raw/ab.s2p": PAIR},
    )
    assert [measurement.entry.setup for measurement in build.measurements] == [
        Setup.OPEN,
        Setup.BACK_TO_BACK,
    ]
    assert build.measurements[0].entry.unit == "A"
    assert build.measurements[1].entry.units == ("A", "B")
    assert build.measurements[1].sweep.s[0, 1, 0] == 0.9 - 0.2j
    hashed = {each.file: (each.sha256, each.points) for each in build.inputs}
    assert hashed == {
        "build.toml": (hashlib.sha256(sidecar.encode()).hexdigest(), None),
        "a-open.s1p": (hashlib.sha256(ONE_PORT.encode()).hexdigest(), 5),
        "raw/ab.s2p": (hashlib.sha256(PAIR.encode()).hexdigest(), 5),
    }
    assert build.findings == ()


def test_load_of_the_build_goes_before_that_of_the_bench(tmp_path: Path) -> None:
    build = only_build(
        tmp_path,
        {
            "runs.toml": "[loads.main]\nresistance_ohm = 3185\n",
            "x/build.toml": HEAD + LOAD + "[loads.main]\nresistance_ohm = 2450\n",
            "x/a-load.s1p": ONE_PORT,
        },
    )
    (measurement,) = build.measurements
    assert measurement.load == Load(resistance_ohm=2450)
    assert measurement.entry.load == "main"


def test_setup_without_a_resistor_carries_no_load(tmp_path: Path) -> None:
    bench = "[loads.main]\nresistance_ohm = 3185\n"
    files = {"runs.toml": bench, "x/build.toml": HEAD + OPEN, "x/a-open.s1p": ONE_PORT}
    assert only_build(tmp_path, files).measurements[0].load is None


def test_settings_of_a_sweep_reach_its_reader(tmp_path: Path) -> None:
    sidecar = HEAD + OPEN + 'frequency_unit = "MHz"\ndecimal = ","\n'
    sweep = ONE_PORT.replace("# MHz S RI R 50\n", "").replace(".", ",")
    build = only_build(tmp_path, {"x/build.toml": sidecar, "x/a-open.s1p": sweep})
    assert list(build.measurements[0].sweep.frequency_hz) == [f * 1e6 for f in FREQUENCIES_MHZ]


def test_reversed_ports_reach_the_reader(tmp_path: Path) -> None:
    pair = '[[sweep]]\nfile = "ab.s2p"\nsetup = "back-to-back"\nreverse_ports = true\n'
    uneven = PAIR.replace(" 0.1 0\n", " 0.12 0\n")
    build = only_build(tmp_path, {"x/build.toml": HEAD + pair, "x/ab.s2p": uneven})
    assert build.measurements[0].sweep.s[0, 0, 0] == 0.12


def test_one_broken_sweep_leaves_the_others(tmp_path: Path) -> None:
    build = only_build(
        tmp_path,
        {
            "x/build.toml": HEAD + OPEN + LOAD + "[loads.main]\nresistance_ohm = 2450\n",
            "x/a-open.s1p": ONE_PORT,
            "x/a-load.s1p": "<html>\n",
        },
    )
    assert [measurement.sweep.file for measurement in build.measurements] == ["a-open.s1p"]
    errors = [finding for finding in build.findings if finding.severity is Severity.ERROR]
    assert [finding.file for finding in errors] == ["a-load.s1p"]
    # a change of the broken file must be seen as one: its hash is kept
    assert [(each.file, each.points) for each in build.inputs][-1] == ("a-load.s1p", None)


def test_linked_sweep_is_not_followed(tmp_path: Path) -> None:
    (tmp_path / "out.s1p").write_text(ONE_PORT)
    runs = tmp_path / "runs"
    (runs / "x").mkdir(parents=True)
    (runs / "x/a-load.s1p").symlink_to(tmp_path / "out.s1p")
    load = "[loads.main]\nresistance_ohm = 2450\n"
    build = only_build(runs, {"x/build.toml": HEAD + OPEN + LOAD + load, "x/a-open.s1p": ONE_PORT})
    assert [(finding.code, finding.file) for finding in build.findings] == [("link", "a-load.s1p")]


def test_nothing_left_tells_every_reason(tmp_path: Path) -> None:
    with pytest.raises(InputRejected) as caught:
        only_build(tmp_path, {"x/build.toml": HEAD + OPEN, "x/a-open.s1p": "", "x/b.s1p": ONE_PORT})
    assert codes(caught.value.findings)[1:] == ["unnamed-sweep", "no-sweep"]
    assert caught.value.findings[0].file == "a-open.s1p"


def test_sidecar_that_has_gone_since_the_scan_is_rejected(tmp_path: Path) -> None:
    runs = put(tmp_path, {"x/build.toml": HEAD + OPEN, "x/a-open.s1p": ONE_PORT})
    (tmp_path / "x/build.toml").unlink()
    with pytest.raises(InputRejected) as caught:
        read_build(runs, runs.folders[0])
    assert codes(caught.value.findings) == ["missing-file"]


def test_missing_log_and_missing_readings_are_errors_too(tmp_path: Path) -> None:
    sidecar = (
        HEAD + OPEN + '[[sweep]]\nfile = "screen.csv"\nsetup = "spot"\n'
        '[[thermal]]\nfile = "warm.csv"\npower_w = 50\nfrequency_mhz = 7.1\n'
    )
    build = only_build(tmp_path, {"x/build.toml": sidecar, "x/a-open.s1p": ONE_PORT})
    assert [(finding.code, finding.key) for finding in build.findings] == [
        ("missing-file", "sweep[2].file"),
        ("missing-file", "thermal[1].file"),
    ]
