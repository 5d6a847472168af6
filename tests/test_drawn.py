"""Draws of sweeps and artefacts: what moves, by how much, and what two builds have in common."""

from __future__ import annotations

from dataclasses import replace
from types import SimpleNamespace

import numpy as np
import pytest
from measurements import build_of, load_swept, pair_swept, sheet_of
from scipy.stats import kstest
from simulation.transformer import chain_of_unit, random_unit, twin_of

from reportgen.model import BenchSheet, BuildResult, Calibration, Load, Measurement
from reportgen.physics.allocations import amateur_bands
from reportgen.physics.compare import compare
from reportgen.physics.drawn import ALL, CLOSING_RATIO, UNMEASURED_RATIO, Contribution, Drawn
from reportgen.physics.measure import measure_build
from reportgen.physics.pairs import find_pairs, scattering_of_pair
from reportgen.physics.seen import AS_SWEPT
from reportgen.physics.uncertainty import half_width

SWEPT_HZ = np.linspace(1.5e6, 30e6, 60)
HZ = np.array([2e6, 7e6, 29e6])
DRAWS = 400
LOAD = Load(resistance_ohm=2450.0, tolerance_percent=2.0, body_pf=0.2)
CALIBRATIONS = {"cal": Calibration(grade="handheld")}
DESIGN = random_unit(np.random.default_rng(12))


def on_calibration(one: Measurement, name: str | None = "cal") -> Measurement:
    return replace(one, entry=replace(one.entry, calibration=name))


def units(seed: int) -> dict:
    rng = np.random.default_rng(seed)
    return {name: chain_of_unit(twin_of(DESIGN, rng), SWEPT_HZ) for name in "AB"}


PAIR = on_calibration(pair_swept(SWEPT_HZ, units(1)))
ONE_PATH = on_calibration(pair_swept(SWEPT_HZ, units(1), one_path=True))
LOADED = on_calibration(load_swept(SWEPT_HZ, "A", units(1)["A"], LOAD))


def drawn_by(contributions: frozenset[Contribution] = ALL, owner: str = "alder") -> Drawn:
    return Drawn(CALIBRATIONS, owner, DRAWS, contributions)


def inputs(seen: Drawn) -> dict[str, np.ndarray]:
    """Every input that draws may move."""
    pair, one_path = seen.two_port(PAIR, HZ), seen.two_port(ONE_PATH, HZ)
    circuit = SimpleNamespace(parameters=np.zeros(12))
    return {
        "reflection": seen.one_port(LOADED, HZ),
        "s11": pair.s11,
        "s21": pair.s21,
        "guess of s22": 1 + one_path.s22 - one_path.s11,
        "resistance": seen.resistance_ohm("main", LOAD),
        "body": seen.body_f("main", LOAD),
        "stray": seen.stray_f("main", 4.0),
        "closing": seen.closing_ratio(circuit, HZ),
    }


REFLECTED = {"reflection", "s11"}
MOVED = {
    Contribution.NOISE: {*REFLECTED, "s21"},
    Contribution.DIRECTIVITY: REFLECTED,
    Contribution.SOURCE_MATCH: {*REFLECTED, "s21"},
    Contribution.LOAD_MATCH: {"s11", "s21"},
    Contribution.TRACKING: {*REFLECTED, "s21"},
    Contribution.ISOLATION: {"s21"},
    Contribution.DRIFT: {*REFLECTED, "s21"},
    Contribution.LOAD: {"resistance", "body", "stray"},
    Contribution.UNMEASURED: {"guess of s22"},
    Contribution.CLOSING: {"closing"},
}


@pytest.mark.parametrize("one", list(Contribution))
def test_each_contribution_moves_what_it_should_and_nothing_else(one, monkeypatch):
    monkeypatch.setattr("reportgen.physics.drawn.trace_noise_ratio", lambda swept: None)
    found = inputs(drawn_by(frozenset({one})))
    moved = {
        name
        for name, draws in found.items()
        if np.max(np.std(draws, axis=0)) > 1e-9 * np.max(np.abs(draws))
    }
    assert moved == MOVED[one]


def test_an_unmeasured_path_makes_the_pair_less_sure():
    """S22 - S11 of the pair moves with its draws, and the pair's matrix keeps it."""
    (pair,) = find_pairs([ONE_PATH])
    only = drawn_by(frozenset({Contribution.UNMEASURED}))
    s = scattering_of_pair(pair, [only.two_port(ONE_PATH, HZ)])
    assert np.std(s.s22 - s.s11, axis=0) == pytest.approx(UNMEASURED_RATIO, rel=0.25)


def test_nothing_drawn_is_what_was_swept():
    silent = drawn_by(frozenset())
    np.testing.assert_allclose(
        silent.one_port(LOADED, HZ), np.tile(AS_SWEPT.one_port(LOADED, HZ), (DRAWS, 1)), rtol=1e-12
    )
    for name in ("s11", "s12", "s21", "s22"):
        swept = getattr(AS_SWEPT.two_port(PAIR, HZ), name)
        found = getattr(silent.two_port(PAIR, HZ), name)
        np.testing.assert_allclose(found, np.tile(swept, (DRAWS, 1)), rtol=1e-12, atol=1e-15)


def test_draws_lie_about_what_was_swept():
    found, swept = drawn_by().two_port(PAIR, HZ), AS_SWEPT.two_port(PAIR, HZ)
    for name in ("s11", "s12", "s21", "s22"):
        draws, centre = getattr(found, name), getattr(swept, name)
        off = np.abs(draws.mean(axis=0) - centre) / (np.std(draws, axis=0) / np.sqrt(DRAWS))
        assert np.max(off) < 4
        assert np.min(np.std(draws, axis=0)) > 1e-3


def test_the_same_sweep_is_drawn_once():
    drawn = drawn_by()
    assert drawn.two_port(PAIR, HZ) is drawn.two_port(PAIR, HZ)
    np.testing.assert_array_equal(drawn.two_port(PAIR, HZ).s21, drawn_by().two_port(PAIR, HZ).s21)


def test_noise_is_that_of_the_trace_unless_stated():
    hz = np.linspace(1.5e6, 30e6, 401)
    white = np.random.default_rng(1).normal(size=(2, 401)) / np.sqrt(2)
    quiet = load_swept(hz, "A", chain_of_unit(DESIGN, hz), LOAD)
    s = quiet.sweep.s + 5e-3 * (white[0] + 1j * white[1])[:, None, None]
    noisy = on_calibration(replace(quiet, sweep=replace(quiet.sweep, s=s)))
    only = frozenset({Contribution.NOISE})
    stated = Drawn({"cal": Calibration(noise_db=60.0)}, "alder", DRAWS, only)
    assert np.std(drawn_by(only).one_port(noisy, HZ)[:, 0]) == pytest.approx(5e-3, rel=0.2)
    assert np.std(stated.one_port(noisy, HZ)[:, 0]) == pytest.approx(1e-3, rel=0.1)


# --- artefacts -----------------------------------------------------------------------------------


def test_resistance_is_uniform_within_its_tolerance():
    draws = drawn_by().resistance_ohm("main", LOAD)[:, 0] / 2450
    assert kstest(draws, "uniform", (0.98, 0.04)).pvalue > 0.01


def test_body_is_itself_give_or_take_as_much():
    draws_pf = drawn_by().body_f("main", LOAD)[:, 0] * 1e12
    assert kstest(draws_pf, "uniform", (0, 0.4)).pvalue > 0.01


def test_stated_stray_has_a_standard_deviation_of_three_tenths_of_a_picofarad():
    draws_pf = drawn_by().stray_f("main", 4.0)[:, 0] * 1e12
    assert kstest(draws_pf, "norm", (4.0, 0.3)).pvalue > 0.01


def test_closing_is_off_more_at_higher_frequency():
    draws = drawn_by().closing_ratio(SimpleNamespace(parameters=np.zeros(12)), HZ)
    expected = CLOSING_RATIO * (1 + HZ / 10e6)
    assert np.std(draws, axis=0) == pytest.approx(expected, rel=0.2)


# --- what two builds share -----------------------------------------------------------------------


def test_a_calibration_is_the_same_for_every_build():
    ours, theirs = (drawn_by(owner=owner).ports(PAIR, HZ)[0] for owner in ("alder", "birch"))
    np.testing.assert_array_equal(ours.directivity, theirs.directivity)
    np.testing.assert_array_equal(ours.transmission_tracking, theirs.transmission_tracking)


def test_sweeps_without_a_calibration_share_nothing_between_builds():
    alone = on_calibration(PAIR, None)
    ours, theirs = (drawn_by(owner=owner).ports(alone, HZ)[0] for owner in ("alder", "birch"))
    assert abs(np.corrcoef(ours.directivity.real.T, theirs.directivity.real.T)[0, 3]) < 0.2


def measured(key: str, seed: int, calibration: str | None) -> BuildResult:
    """A pair of one design; the units of every seed differ by a few percent."""
    sheet = sheet_of(DESIGN.low_turns, DESIGN.high_turns, DESIGN.capacitor_f * 1e12)
    pair = on_calibration(pair_swept(SWEPT_HZ, units(seed), file=f"{key}.s2p"), calibration)
    bench = BenchSheet(calibrations=CALIBRATIONS)
    return measure_build(build_of(sheet, [pair], key), bench, amateur_bands(2)[3:4])


@pytest.fixture
def intervals_only(monkeypatch):
    monkeypatch.setattr("reportgen.physics.measure.DRAWS", DRAWS)
    for name in ("find_budget", "find_advice"):
        monkeypatch.setattr(f"reportgen.physics.measure.{name}", lambda question: ())


def test_difference_of_like_builds_is_known_better_than_either(intervals_only):
    ours, theirs = measured("alder", 1, "cal"), measured("birch", 2, "cal")
    (band,) = compare(ours, theirs).bands
    (alone,) = compare(measured("alder", 1, None), measured("birch", 2, None)).bands
    each = [half_width(one.loss_draws_db["40 m"]) for one in (ours, theirs)]
    assert band.heat_loss_u95_db < 0.95 * min(each)
    assert band.heat_loss_u95_db < 0.7 * np.hypot(*each)
    assert alone.heat_loss_u95_db == pytest.approx(np.hypot(*each), rel=0.15)
