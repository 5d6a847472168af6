"""Warnings about sweeps that a passive build cannot show.

The thresholds are common practice or our own; what is checked is that each warning comes just above
its threshold, stays away just below, says which value at which frequency, and that simulated sweeps
of sound builds do not draw those that point to a single faulty sweep.
"""

from __future__ import annotations

from dataclasses import replace
from datetime import date

import numpy as np
import pytest
from simulation.analyzer import BENCH, HANDHELD, Analyzer, Grade
from simulation.transformer import Unit, chain_of_unit, random_unit, twin_of

from reportgen.intake.plausibility import check_dates, check_sweep
from reportgen.model import (
    Band,
    BenchSheet,
    BuildSheet,
    Calibration,
    ComplexArray,
    Finding,
    Measurement,
    RealArray,
    Setup,
    Severity,
    Sweep,
    SweepEntry,
    Winding,
)

GRID_HZ = np.linspace(1e6, 31e6, 301)
BAND_40_M = Band(name="40 m", from_hz=7.0e6, to_hz=7.3e6)
BAND_30_M = Band(name="30 m", from_hz=10.1e6, to_hz=10.15e6)
BAND_6_M = Band(name="6 m", from_hz=50e6, to_hz=52e6)


def measurement(
    s: ComplexArray, *, setup: Setup, frequency_hz: RealArray = GRID_HZ, one_path: bool = False
) -> Measurement:
    return Measurement(
        entry=SweepEntry(file="x", setup=setup),
        sweep=Sweep(
            file="x",
            sha256="",
            frequency_hz=frequency_hz,
            s=s,
            reference_ohm=(50.0,) * s.shape[-1],
            one_path=one_path,
        ),
    )


def one_port(s11: complex, *, at: dict[int, complex] | None = None) -> Measurement:
    s = np.full((len(GRID_HZ), 1, 1), s11, dtype=complex)
    for place, value in (at or {}).items():
        s[place] = value
    return measurement(s, setup=Setup.OPEN)


def two_port(
    *,
    setup: Setup = Setup.BACK_TO_BACK,
    s11: complex = 0.1,
    s21: complex = 0.9,
    s12: complex = 0.9,
    s22: complex = 0.1,
    one_path: bool = False,
    at: dict[int, complex] | None = None,
) -> Measurement:
    s = np.full((len(GRID_HZ), 2, 2), [[s11, s12], [s21, s22]], dtype=complex)
    for place, value in (at or {}).items():
        s[place, 1, 0] = s[place, 0, 1] = value
    return measurement(s, setup=setup, one_path=one_path)


def messages(taken: Measurement, *bands: Band) -> list[str]:
    found = check_sweep(taken, bands)
    assert all(finding.severity is Severity.WARNING and finding.file == "x" for finding in found)
    return [finding.message for finding in found]


def codes(taken: Measurement) -> list[str]:
    return [finding.code for finding in check_sweep(taken, ())]


# --- power ---------------------------------------------------------------------------------------


def test_reflection_just_below_the_limit_is_let_pass() -> None:
    assert messages(one_port(1.0049j)) == []


def test_reflection_above_the_limit_is_told_with_its_place() -> None:
    told = messages(one_port(1.0, at={100: 1.02, 101: 1.01}))
    assert told == [
        "more power out than in: |S11| reaches 1.0200 at 11 MHz, too much at 2 of 301 points"
    ]


def test_excess_never_reads_as_the_limit_itself() -> None:
    assert "reaches 1.0051 at" in messages(one_port(1.005001))[0]


def test_reflection_of_port_2_counts_only_where_measured() -> None:
    assert "|S22| reaches 1.1000" in messages(two_port(s22=1.1, setup=Setup.DIRECT))[0]
    assert messages(two_port(s22=1.1, s12=0, setup=Setup.DIRECT, one_path=True)) == []


@pytest.mark.parametrize(("s21", "expected"), [(0.9, []), (0.92, ["power-above-1"])])
def test_sum_of_reflected_and_passed_power(s21: float, expected: list[str]) -> None:
    # 0.43^2 + 0.9^2 = 0.995, 0.43^2 + 0.92^2 = 1.031
    assert codes(two_port(s11=0.43, s22=0.43, s21=s21, s12=s21)) == expected


def test_gain_on_more_than_a_twentieth_of_the_points() -> None:
    assert messages(two_port(s11=0, s22=0, s21=1.2, s12=1.2)) == [
        "|S21| reaches 1.2000 at 1 MHz: gain at 301 of 301 points, which no passive build has"
    ]
    few = dict.fromkeys(range(15), 1.06 + 0j)  # 15 of 301 are just under 5 %
    assert codes(two_port(s11=0, s22=0, s21=1, s12=1, at=few)) == ["power-above-1"]
    assert codes(two_port(s11=0, s22=0, s21=1, s12=1, at=few | {15: 1.06})) == ["gain"]


# --- the two paths and the two ports -------------------------------------------------------------


@pytest.mark.parametrize(("s12", "expected"), [(0.8801, []), (0.8799, ["not-reciprocal"])])
def test_paths_that_differ(s12: float, expected: list[str]) -> None:
    assert codes(two_port(s12=s12)) == expected


def test_path_that_was_not_measured_is_not_compared() -> None:
    assert codes(two_port(s12=0, s22=0, one_path=True)) == []
    assert codes(two_port(s21=0)) == []


@pytest.mark.parametrize(("s22", "expected"), [(0.199, []), (0.201, ["asymmetric-pair"])])
def test_pair_with_unequal_ends(s22: float, expected: list[str]) -> None:
    assert codes(two_port(s22=s22)) == expected


def test_unequal_ends_are_nothing_odd_for_a_single_unit() -> None:
    assert codes(two_port(s22=0.4, setup=Setup.DIRECT)) == []


# --- single points -------------------------------------------------------------------------------


def test_spikes_are_listed_by_frequency() -> None:
    at = {40: 0.5 + 0j, 90: 0.5 + 0j}
    assert messages(two_port(at=at)) == ["|S21| has spikes at 5 MHz, 10 MHz"]


def test_many_spikes_are_counted() -> None:
    at = dict.fromkeys(range(20, 160, 20), 0.5 + 0j)
    assert messages(two_port(at=at)) == [
        "|S21| has spikes at 3 MHz, 5 MHz, 7 MHz, 9 MHz, 11 MHz and 2 more"
    ]


@pytest.mark.parametrize(("step_db", "expected"), [(0.39, []), (0.41, ["spikes"])])
def test_spike_exceeds_four_tenths_of_a_decibel(step_db: float, expected: list[str]) -> None:
    assert codes(two_port(at={50: 0.9 * 10 ** (-step_db / 20)})) == expected


def test_notch_of_a_good_match_is_no_spike() -> None:
    notch = (GRID_HZ / 7e6 - 1) / (GRID_HZ / 7e6 + 1)  # passes through zero: -inf dB
    s = notch.astype(complex).reshape(-1, 1, 1)
    assert codes(measurement(s, setup=Setup.LOAD)) == []


def test_noise_raises_what_counts_as_a_spike() -> None:
    noise_db = np.random.default_rng(3).normal(scale=0.3, size=len(GRID_HZ))
    at = {place: complex(0.7 * 10 ** (step / 20)) for place, step in enumerate(noise_db)}
    assert np.max(np.abs(noise_db)) > 0.4
    assert codes(two_port(at=at)) == []


# --- points in a band ----------------------------------------------------------------------------


def test_bands_with_few_points_are_named_together() -> None:
    # 301 points from 1 to 31 MHz: 7.0 7.1 7.2 7.3, and 10.1
    assert messages(one_port(0.5), BAND_40_M, BAND_30_M, BAND_6_M) == [
        "fewer than 5 points in a band: 40 m has 4, 30 m has 1"
    ]


def test_band_with_five_points_is_enough() -> None:
    five_hz = np.linspace(7.0e6, 7.3e6, 5)
    s = np.full((5, 1, 1), 0.5, dtype=complex)
    taken = measurement(s, setup=Setup.LOAD, frequency_hz=five_hz)
    assert messages(taken, BAND_40_M) == []


def test_single_point_is_judged_like_any_other() -> None:
    s = np.full((1, 1, 1), 1.5, dtype=complex)
    taken = measurement(s, setup=Setup.LOAD, frequency_hz=np.array([7.1e6]))
    assert [finding.code for finding in check_sweep(taken, (BAND_40_M,))] == [
        "power-above-1",
        "few-points",
    ]


# --- simulated sweeps of known truth -------------------------------------------------------------


def pair_as_seen(first: Unit, second: Unit, grade: Grade, seed: int) -> Measurement:
    chain = chain_of_unit(first, GRID_HZ) @ chain_of_unit(second, GRID_HZ).reversed()
    seen = Analyzer(grade, GRID_HZ, np.random.default_rng(seed)).sweep_two_port(chain)
    s = np.array([[seen.s11, seen.s12], [seen.s21, seen.s22]]).transpose(2, 0, 1).copy()
    return measurement(s, setup=Setup.BACK_TO_BACK)


@pytest.mark.parametrize("grade", [BENCH, HANDHELD], ids=["bench", "handheld"])
def test_sound_pairs_are_called_neither_unequal_nor_spiky_nor_amplifying(grade: Grade) -> None:
    for seed in range(40):
        rng = np.random.default_rng(seed)
        unit = random_unit(rng)
        found = codes(pair_as_seen(unit, twin_of(unit, rng), grade, seed))
        assert set(found) <= {"not-reciprocal", "power-above-1"}


def test_pair_in_which_one_capacitor_is_100_pf_larger_is_called_unequal() -> None:
    for seed in range(10):
        unit = random_unit(np.random.default_rng(seed))
        other = replace(unit, capacitor_f=unit.capacitor_f + 100e-12)
        assert "asymmetric-pair" in codes(pair_as_seen(unit, other, BENCH, seed))


# --- dates ---------------------------------------------------------------------------------------


def dated(measured_on: date | None, **performed_on: date) -> list[tuple[str | None, str | None]]:
    calibrations = {name: Calibration(performed_on=day) for name, day in performed_on.items()}
    entry = SweepEntry(file="x", setup=Setup.OPEN, calibration="evening")
    winding = Winding(low_turns=3, high_turns=24)
    sheet = BuildSheet(name="Alder", winding=winding, measured_on=measured_on, sweep=(entry,))
    found: tuple[Finding, ...] = check_dates(sheet, BenchSheet(calibrations=calibrations))
    return [(finding.file, finding.key) for finding in found]


def test_dates_in_order_are_let_pass() -> None:
    assert dated(date(2026, 10, 4), evening=date(2026, 10, 4)) == []
    assert dated(None, evening=date(2026, 10, 4)) == []


def test_date_of_a_reset_clock() -> None:
    assert dated(date(2009, 12, 31)) == [("build.toml", "measured_on")]
    assert dated(date(2010, 1, 1)) == []
    early = dated(date(2026, 1, 1), evening=date(2000, 1, 1))
    assert early == [("runs.toml", "calibrations.evening.performed_on")]


def test_only_the_calibration_that_a_sweep_names_counts() -> None:
    before = date(2026, 10, 3)
    after = date(2026, 10, 4)
    assert dated(before, evening=after, other=before) == [("build.toml", "measured_on")]
    assert dated(before, evening=before, other=after) == []
