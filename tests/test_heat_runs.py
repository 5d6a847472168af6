"""From a temperature log in a build's folder to the power that it stands, on the examples."""

from dataclasses import replace
from pathlib import Path

import pytest
from simulation.hollin_bank import ALDER, BIRCH
from simulation.workshop import Example
from write_example_runs import EXAMPLE_RUNS

from reportgen.intake.builds import open_runs, read_build
from reportgen.model import BuildResult, Severity
from reportgen.physics.heat_runs import efficiency_at
from reportgen.physics.measure import measure_build


def result_of(example: Example, **changed) -> BuildResult:
    runs = open_runs(EXAMPLE_RUNS)
    folder = next(one for one in runs.folders if one.folder == example.folder)
    build = read_build(runs, folder)
    build = replace(build, sheet=replace(build.sheet, **changed))
    return measure_build(build, runs.bench, runs.bands)


@pytest.mark.parametrize("example", [ALDER, BIRCH], ids=lambda one: one.folder)
def test_log_gives_back_what_it_was_made_of(example: Example) -> None:
    """The heat comes from the sweeps alone; the log was simulated from the unit's true loss. How
    often intervals hold the truth is asked of many logs in test_thermal.py, not of one. The bounds
    are some 1.2 times the heat's own 95 % (4 to 5 %), and three times that of the time constant.
    """  # fmt: skip
    found = result_of(example).thermal
    resistance, tau_s = found.fit.resistance_k_per_w, found.fit.time_constant_s
    assert resistance.value == pytest.approx(example.made.resistance_k_per_w, rel=0.05)
    assert tau_s.value == pytest.approx(example.made.time_constant_s, rel=0.03)
    assert resistance.low95 < resistance.value < resistance.high95 < 1.1 * resistance.value


def test_permitted_power_ends_at_the_limit_in_the_hottest_surroundings() -> None:
    result = result_of(ALDER)
    permitted = result.thermal.permitted
    assert (permitted.limit_c, permitted.limit_of, permitted.ambient_max_c) == (90, "core", 40)
    least = permitted.limiting
    (worst,) = [one for one in result.stress.bands if one.band == least.band]
    heat_w = worst.heat_w / result.power_w * least.power_w
    assert result.thermal.fit.resistance_k_per_w.value * heat_w == pytest.approx(90 - 40)
    assert least.power_w < result.power_w  # so it gets too hot at the rated power, in time
    (band,) = [one for one in permitted.bands if one.band == least.band]
    assert 0 < band.minutes_to_limit < 60


def test_without_a_temperature_limit_no_power_follows() -> None:
    core = replace(ALDER.sheet.core, temperature_limit_c=None)
    found = result_of(ALDER, core=core).thermal
    assert found.permitted is None
    assert found.reason == "no temperature limit is given, so no power follows from the log"


def test_log_at_a_frequency_that_was_not_swept_is_told(tmp_path: Path) -> None:
    runs = open_runs(EXAMPLE_RUNS)
    build = read_build(runs, next(one for one in runs.folders if one.folder == "alder"))
    (run,) = build.heat_runs
    beyond = replace(run, entry=replace(run.entry, frequency_mhz=50.1))
    result = measure_build(replace(build, heat_runs=(beyond,)), runs.bench, runs.bands)
    assert result.thermal is None
    (finding,) = [one for one in result.findings if one.code == "log-without-loss"]
    assert finding.severity is Severity.WARNING
    assert finding.message == (
        "no sweep tells the efficiency at 50.1 MHz, so the heat during this log is not known"
    )
    assert efficiency_at(result.chosen, 50.1e6) is None
