"""The example runs: what the script writes, read with the intended findings, of realistic size."""

from __future__ import annotations

import re
import tomllib
from functools import cache

import numpy as np
import pytest
from simulation.hollin_bank import EXAMPLES
from simulation.transformer import true_efficiency_ratio
from simulation.workshop import BENCH_SHEET
from write_example_runs import EXAMPLE_RUNS, example_texts, main, unit_of

from reportgen.intake.builds import Runs, open_runs, read_build
from reportgen.intake.sidecar import parse_bench, parse_build
from reportgen.model import Build, BuildResult, MeasuredBand, Method, Setup, Severity
from reportgen.physics.compare import compare
from reportgen.physics.measure import measure_build

NUMBER = re.compile(r"-?\d+(?:\.\d+)?")
LARGEST_BYTES = 1_200_000
EXAMPLE_OF_KEY = {example.folder.replace("/", "-"): example for example in EXAMPLES}


@cache
def written() -> dict[str, str]:
    return dict(example_texts())


@cache
def runs() -> Runs:
    return open_runs(EXAMPLE_RUNS)


@cache
def builds() -> dict[str, Build]:
    return {folder.key: read_build(runs(), folder) for folder in runs().folders}


@cache
def results() -> dict[str, BuildResult]:
    return {
        key: measure_build(build, runs().bench, runs().bands) for key, build in builds().items()
    }


def figures(key: str, quantity: str) -> list[float]:
    """Means of a quantity over the bands of a build's result."""
    bands = [band for band in results()[key].chosen.bands if isinstance(band, MeasuredBand)]
    return [band.figures[quantity].mean for band in bands if quantity in band.figures]


# --- the folder and the script -------------------------------------------------------------------


def test_the_folder_holds_the_files_that_the_script_writes() -> None:
    files = (path for path in EXAMPLE_RUNS.rglob("*") if path.is_file())
    assert {path.relative_to(EXAMPLE_RUNS).as_posix() for path in files} == set(written())


@pytest.mark.parametrize("file", sorted(written()))
def test_a_file_is_what_the_script_writes(file: str) -> None:
    there, new = (EXAMPLE_RUNS / file).read_text("utf-8"), written()[file]
    if file.endswith(".toml"):
        assert there == new
        return
    assert NUMBER.sub("0", there) == NUMBER.sub("0", new)
    numbers = [NUMBER.findall(text) for text in (there, new)]
    tolerance = [10.0 ** -len(number.partition(".")[2]) for number in numbers[1]]
    gap = np.abs(np.array(numbers[0], float) - np.array(numbers[1], float))
    assert np.all(gap <= 1.001 * np.array(tolerance))


def test_twice_gives_the_same_bytes(tmp_path, monkeypatch) -> None:
    monkeypatch.setattr("sys.argv", ["write_example_runs.py", str(tmp_path)])
    main()
    assert all((tmp_path / file).read_bytes() == text.encode() for file, text in written().items())


def test_the_folder_is_small() -> None:
    assert sum(path.stat().st_size for path in EXAMPLE_RUNS.rglob("*.*")) < LARGEST_BYTES


@pytest.mark.parametrize("file", sorted(written()))
def test_every_file_says_that_it_is_simulated(file: str) -> None:
    first = written()[file].splitlines()[0]
    assert first[0] == ("#" if file.endswith((".toml", ".csv")) else "!")
    assert "simulated" in first
    if file.endswith("build.toml"):
        assert tomllib.loads(written()[file])["record"]["data"] == "simulated"


def test_sidecars_say_what_the_sheets_hold() -> None:
    assert parse_bench(written()["runs.toml"].encode(), file="runs.toml") == BENCH_SHEET
    for example in EXAMPLES:
        text = written()[f"{example.folder}/build.toml"]
        sheet = parse_build(text.encode(), file="build.toml", bench=BENCH_SHEET)
        assert sheet == example.sheet


# --- what is in it -------------------------------------------------------------------------------


def test_eight_builds_one_in_a_folder_below() -> None:
    assert set(builds()) == set(EXAMPLE_OF_KEY)
    assert len(builds()) == 8
    assert builds()["portable-elder"].folder == "portable/elder"
    assert runs().bench.baseline == "alder"


def test_ratios_of_the_trade_are_there() -> None:
    squares = {round(build.sheet.winding.turns_ratio**2) for build in builds().values()}
    assert squares == {9, 16, 49, 64}


def test_set_ups_are_there() -> None:
    used = {one.entry.setup for build in builds().values() for one in build.measurements}
    assert used == {
        Setup.BACK_TO_BACK, Setup.LOAD, Setup.OPEN, Setup.SHORT,
        Setup.SERIES_RESISTOR, Setup.RESISTOR_CHECK, Setup.THRU_CHECK, Setup.ANTENNA,
    }  # fmt: skip
    pairs = {one.entry.pair for one in builds()["hazel"].measurements}
    assert pairs == {("A", "B"), ("A", "C"), ("B", "C")}
    assert {one.entry.pair for one in builds()["cedar"].measurements} == {("A", "B"), ("B", "A")}
    assert max(one.entry.repeat for one in builds()["willow"].measurements) == 2


def test_formats_and_units_of_frequency_are_mixed() -> None:
    options = {
        tuple(re.search(r"^# (\w+) S (\w+) R 50$", text, re.MULTILINE).groups())
        for file, text in written().items()
        if not file.endswith((".toml", ".csv"))
    }
    assert {unit for unit, _ in options} == {"Hz", "kHz", "MHz", "GHz"}
    assert {form for _, form in options} == {"RI", "MA", "DB"}


def test_methods_that_give_the_results() -> None:
    assert {key: result.chosen.method for key, result in results().items()} == {
        "alder": Method.BISECTION_LOAD,
        "birch": Method.BISECTION_LOAD,
        "cedar": Method.BISECTION,
        "hazel": Method.BISECTION,
        "linden": Method.BISECTION_LOAD,
        "rowan": Method.BISECTION_LOAD,
        "willow": Method.BISECTION_LOAD,
        "portable-elder": Method.LOAD_ONLY,
    }


def test_only_the_intended_warnings() -> None:
    found = {
        (key, finding.code, finding.file)
        for key, result in results().items()
        for finding in result.findings
        if finding.severity is not Severity.NOTE
    }
    assert found == {
        ("linden", "few-points", "pair-ab.s2p"),
        ("linden", "few-points", "a-load.s1p"),
        ("linden", "few-points", "b-load.s1p"),
        ("willow", "asymmetric-pair", "pair-ab.s2p"),
        ("willow", "asymmetric-pair", "pair-ab-again.s2p"),
    }
    assert runs().findings == ()


def test_notes_come_from_one_path_sweeps() -> None:
    notes = {
        finding.code
        for result in results().values()
        for finding in result.findings
        if finding.severity is Severity.NOTE
    }
    assert notes == {"one-path", "one-path-pair"}


# --- how large the figures are -------------------------------------------------------------------


@pytest.mark.parametrize("key", sorted(EXAMPLE_OF_KEY))
def test_figures_are_of_realistic_size(key: str) -> None:
    losses, returns = figures(key, "heat_loss_db"), figures(key, "return_loss_db")
    assert len(returns) >= 10
    assert min(returns) > 7
    assert 12 < np.median(returns) < 25
    assert max(returns) < 40, "a band may hold the notch of the match"
    assert len(losses) == (0 if key == "portable-elder" else 11)
    assert all(0.2 < loss_db < 1.5 for loss_db in losses)


@pytest.mark.parametrize("key", sorted(set(EXAMPLE_OF_KEY) - {"portable-elder"}))
def test_figures_are_near_the_simulated_truth(key: str) -> None:
    """Within 0.13 dB, which a one-path pair of unequal units may be off."""
    example, result = EXAMPLE_OF_KEY[key], results()[key]
    band_hz = np.array([band.band.centre_hz for band in result.chosen.bands])
    true = [
        true_efficiency_ratio(unit_of(example, name), band_hz, result.chosen.load_ohm)
        for name in result.chosen.units
    ]
    true_db = -10 * np.log10(np.mean(true, axis=0))
    assert np.abs(figures(key, "heat_loss_db") - true_db).max() < 0.13


def test_one_build_beats_the_baseline_one_equals_it_one_is_worse() -> None:
    def mean_difference_db(key: str) -> float:
        bands = compare(results()[key], results()["alder"]).bands
        return float(np.mean([band.heat_loss_db for band in bands]))

    assert mean_difference_db("birch") < -0.2
    assert abs(mean_difference_db("hazel")) < 0.05
    assert mean_difference_db("rowan") > 0.4


def test_fitted_strays_are_those_of_short_leads() -> None:
    strays = {
        key: fitted.value
        for key, result in results().items()
        for fitted in result.fitted
        if fitted.value is not None and fitted.of.removeprefix("loads.").isalpha()
    }
    assert set(strays) == {"alder", "birch", "linden", "rowan", "willow"}
    assert all(2.5 < stray_pf < 5.5 for stray_pf in strays.values())
