"""Check sweeps: what contradicts a calibration, and figures that are known better for them."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from accuracy import BANDS, Case, cases_of
from simulation.bench import KnownBuild, known_build, sweep_of

from reportgen.model import Calibration, Finding, Measurement, Setup
from reportgen.physics.checks import check_findings, conditioned, find_checks
from reportgen.physics.drawn import Drawn
from reportgen.physics.single_units import direct_plans
from reportgen.physics.uncertainty import spread_of

CHECKED = (Setup.THRU_CHECK, Setup.RESISTOR_CHECK)


def swept(seed: int, *setups: Setup, grade: str = "handheld") -> KnownBuild:
    """Only some sweeps of a build that was swept in every way."""
    known = known_build(np.random.default_rng(seed), everything=True, checks=True, grade=grade)
    kept = [one for one in known.build.measurements if one.entry.setup in setups]
    return replace(known, build=replace(known.build, measurements=tuple(kept)))


def drawn_for(grade: str = "handheld", draws: int = 200) -> Drawn:
    return Drawn({"cal": Calibration(grade=grade)}, "simulated", draws)


def with_through(one: Measurement, factor: float) -> Measurement:
    """The same sweep with more or less coming through."""
    s = one.sweep.s.copy()
    s[:, 1, 0] *= factor
    return replace(one, sweep=sweep_of(one.sweep.file, one.sweep.frequency_hz, s))


# --- findings ------------------------------------------------------------------------------------


def found_of(measurements: tuple[Measurement, ...], grade: str = "handheld") -> list[Finding]:
    return list(check_findings(measurements, drawn_for(grade)))


@pytest.mark.parametrize("grade", ["bench", "handheld"])
def test_good_checks_are_no_finding(grade):
    for seed in range(8):
        assert found_of(swept(seed, *CHECKED, grade=grade).build.measurements, grade) == []


def test_a_thru_that_contradicts_its_grade_is_a_finding():
    """5 % less than all is 0.45 dB; the grade allows 0.05 dB of tracking and little more."""
    (thru,) = swept(1, Setup.THRU_CHECK).build.measurements
    (found,) = found_of((with_through(thru, 0.95),))
    assert (found.code, found.severity, found.file) == (
        "check-contradicts-grade",
        "warning",
        "thru.s2p",
    )
    assert "the limits of the calibration cal allow" in found.message


def test_a_resistor_of_another_value_is_a_finding():
    (bare,) = swept(1, Setup.RESISTOR_CHECK).build.measurements
    other = replace(bare, load=replace(bare.load, resistance_ohm=2 * bare.load.resistance_ohm))
    assert found_of((bare,)) == []
    assert [one.code for one in found_of((other,))] == ["check-contradicts-grade"]


def test_checks_of_a_calibration_that_nothing_used_are_left_alone():
    series, thru = swept(1, Setup.SERIES_RESISTOR, Setup.THRU_CHECK).build.measurements
    later = replace(thru, entry=replace(thru.entry, calibration="later"))
    assert find_checks([series, thru]) == (thru,)
    assert find_checks([series, later]) == ()


# --- conditioning --------------------------------------------------------------------------------


def test_a_thru_says_what_the_tracking_is():
    """A thru shown too small: the analyzer shows all too small, so more came through the unit."""
    direct, thru = swept(3, Setup.DIRECT, Setup.THRU_CHECK).build.measurements
    (plan,) = direct_plans([direct], swept(3).build.sheet)
    drawn = drawn_for(draws=400)
    spread = spread_of(plan, np.linspace(2e6, 29e6, 5), drawn)
    low, high = (conditioned(spread, [with_through(thru, by)], drawn) for by in (0.997, 1.003))
    assert np.all(low.shift["efficiency_ratio"] > high.shift["efficiency_ratio"])
    assert conditioned(spread, [], drawn) is spread


def test_checks_shrink_the_interval_and_keep_the_truth_inside(monkeypatch):
    """Of the series resistor, twelve builds; all draws, since two sweeps are regressed on them."""
    for name in ("find_budget", "find_advice"):
        monkeypatch.setattr(f"reportgen.physics.measure.{name}", lambda question: ())

    def cases(*setups: Setup) -> list[Case]:
        return [
            case
            for seed in range(12)
            for case in cases_of(swept(seed, Setup.SERIES_RESISTOR, *setups), "handheld")
        ]

    without, with_checks = cases(), cases(*CHECKED)
    assert len(with_checks) == len(without) == 12 * len(BANDS)
    assert np.mean([case.held for case in with_checks]) >= 0.9
    u95_db, checked_u95_db = (
        np.array([case.u95_db for case in found]) for found in (without, with_checks)
    )
    assert np.median(checked_u95_db / u95_db) < 0.7
    errors_db, checked_errors_db = (
        np.array([case.error_db for case in found]) for found in (without, with_checks)
    )
    assert np.std(checked_errors_db) < 0.9 * np.std(errors_db)
