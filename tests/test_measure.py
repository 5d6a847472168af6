"""One build measured: which method is the result, means over pairs, bands, power, refusals."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from measurements import build_of, load_swept, pair_swept, sheet_of
from simulation.bench import sweep_of
from simulation.transformer import Unit, chain_of_unit, random_unit, twin_of

from reportgen.errors import NotMeasurable
from reportgen.model import (
    BenchSheet,
    Build,
    BuildResult,
    BuildSheet,
    Finding,
    Limits,
    Load,
    MeasuredBand,
    Measurement,
    Method,
    NotMeasured,
    Rating,
    Setup,
    Severity,
    SweepEntry,
)
from reportgen.physics.allocations import amateur_bands
from reportgen.physics.measure import measure_build
from reportgen.physics.network import Chain

pytestmark = pytest.mark.usefixtures("few_draws")

HZ = np.linspace(1.5e6, 30e6, 96)
BANDS = amateur_bands(2)
LOAD = Load(resistance_ohm=3200.0)


@pytest.fixture(scope="module")
def design() -> Unit:
    return random_unit(np.random.default_rng(7))


@pytest.fixture(scope="module")
def sheet(design) -> BuildSheet:
    return sheet_of(design.low_turns, design.high_turns, design.capacitor_f * 1e12)


@pytest.fixture(scope="module")
def units(design) -> dict[str, Chain]:
    """Four, each a little different."""
    rng = np.random.default_rng(3)
    return {name: chain_of_unit(twin_of(design, rng, 0.05), HZ) for name in "ABCD"}


def pair(units: dict[str, Chain], names: str) -> Measurement:
    return pair_swept(HZ, {name: units[name] for name in names}, file=f"{names}.s2p")


def loaded(units: dict[str, Chain], name: str) -> Measurement:
    return load_swept(HZ, name, units[name], LOAD, true_pf=4)


def cut(one: Measurement, part: slice) -> Measurement:
    """Some of the points of a sweep."""
    sweep = one.sweep
    return replace(one, sweep=sweep_of(sweep.file, sweep.frequency_hz[part], sweep.s[part]))


def measure(build: Build, **bench: object) -> BuildResult:
    return measure_build(build, BenchSheet(**bench), BANDS)


@pytest.fixture(scope="module")
def one_pair(units, sheet) -> BuildResult:
    return measure(build_of(sheet, [pair(units, "AB")]))


# --- the result ----------------------------------------------------------------------------------


def test_pair_alone_is_bisected(one_pair):
    assert one_pair.chosen.method is Method.BISECTION
    assert {one.method for one in one_pair.methods} == {Method.HALVING, Method.BISECTION}
    assert one_pair.units == ()


def test_load_sweep_alone_is_load_only(units, sheet):
    result = measure(build_of(sheet, [loaded(units, "A")]))
    assert result.chosen.method is Method.LOAD_ONLY
    assert [one.unit for one in result.units] == ["A"]


def test_pair_with_load_sweeps_shows_all_methods_and_takes_one_with_loss(units, sheet):
    build = build_of(sheet, [pair(units, "AB"), loaded(units, "A"), loaded(units, "B")])
    result = measure(build)
    assert [one.method for one in result.methods].count(Method.LOAD_ONLY) == 2
    assert {one.method for one in result.methods} == {
        Method.HALVING,
        Method.BISECTION,
        Method.BISECTION_LOAD,
        Method.LOAD_ONLY,
    }
    assert result.chosen.method in {Method.BISECTION, Method.BISECTION_LOAD}


def test_method_with_loss_in_more_bands_wins(units, sheet):
    """Load sweeps that end at 8 MHz close the pair in four bands; the pair alone gives ten."""
    part = slice(0, int(np.searchsorted(HZ, 8e6)))
    loads = [cut(loaded(units, name), part) for name in "AB"]
    result = measure(build_of(sheet, [pair(units, "AB"), *loads]))
    assert Method.BISECTION_LOAD in {one.method for one in result.methods}
    assert result.chosen.method is Method.BISECTION


def test_load_sweep_elsewhere_leaves_the_pair_and_says_so(units, sheet):
    low, high = slice(0, 40), slice(50, 96)
    build = build_of(sheet, [cut(pair(units, "AB"), low), cut(loaded(units, "A"), high)])
    result = measure(build)
    assert result.chosen.method is Method.BISECTION
    (found,) = (one for one in result.findings if one.code == "not-measurable")
    assert (found.severity, found.file) == ("warning", "AB.s2p")
    assert found.message == (
        "left out: the sweeps AB.s2p, a-load.s1p have less than two frequencies in common"
    )
    assert found.remedy == "sweep all set-ups of a build over the same range"


def test_several_pairs_give_their_mean(units, sheet):
    both = measure(build_of(sheet, [pair(units, "AB"), pair(units, "CD")]))
    assert [one.method for one in both.methods].count(Method.BISECTION) == 2
    assert (both.chosen.unit, both.chosen.units) == (None, ("A", "B", "C", "D"))
    parts = [one.curves for one in both.methods if one.method is Method.BISECTION]
    for name in ("efficiency_ratio", "reflection_ratio", "halved_pair_ratio"):
        mean = (getattr(parts[0], name) + getattr(parts[1], name)) / 2
        np.testing.assert_allclose(getattr(both.chosen.curves, name), mean, rtol=1e-12)
    assert np.max(np.abs(parts[0].efficiency_ratio / parts[1].efficiency_ratio - 1)) > 1e-3


def test_mean_over_pairs_stays_where_all_of_them_were_swept(units, sheet):
    short = cut(pair(units, "CD"), slice(20, 60))
    result = measure(build_of(sheet, [pair(units, "AB"), short]))
    hz = result.chosen.curves.frequency_hz
    assert short.sweep.frequency_hz[0] <= hz[0]
    assert hz[-1] <= short.sweep.frequency_hz[-1]


def test_two_load_sweeps_alone_give_their_mean(units, sheet):
    result = measure(build_of(sheet, [loaded(units, "A"), loaded(units, "B")]))
    assert (result.chosen.unit, result.chosen.units) == (None, ("A", "B"))
    assert [one.unit for one in result.units] == ["A", "B"]


# --- bands, power, bandwidths --------------------------------------------------------------------


def test_without_a_choice_only_bands_that_a_sweep_touches_are_listed(one_pair):
    names = [band.band.name for band in one_pair.chosen.bands]
    assert names == [band.name for band in BANDS if band.name != "6 m"]


def test_bands_that_the_bench_names_are_all_listed(units, sheet):
    result = measure(build_of(sheet, [pair(units, "AB")]), bands=("6 m",))
    six = result.chosen.bands[-1]
    assert isinstance(six, NotMeasured)
    assert six.reason == "not covered: the sweep runs from 1.5 to 30 MHz"


def heat_w(result: BuildResult) -> float:
    band = result.chosen.bands[3]
    assert isinstance(band, MeasuredBand)
    return band.figures["heat_w"].mean


def test_power_of_the_build_goes_before_that_of_the_bench(units, sheet, one_pair):
    rated = replace(sheet, rating=Rating(power_w=20.0))
    result = measure(build_of(rated, [pair(units, "AB")]), power_w=60.0)
    assert (result.power_w, one_pair.power_w) == (20.0, 100.0)
    assert heat_w(result) == pytest.approx(heat_w(one_pair) / 5)


def test_bandwidths_keep_to_the_limits_of_all_bands(units, sheet, one_pair):
    limits = {"all": Limits(swr=3, efficiency_percent=50), "40 m": Limits(swr=1.1)}
    result = measure(build_of(sheet, [pair(units, "AB")]), limits=limits)
    assert {one.criterion for one in result.bandwidths} == {"swr <= 3", "efficiency >= 50 %"}
    assert {one.criterion for one in one_pair.bandwidths} <= {"swr <= 2", "efficiency >= 80 %"}


# --- findings and refusals -----------------------------------------------------------------------


def test_same_build_same_figures(units, sheet, one_pair):
    again = measure(build_of(sheet, [pair(units, "AB")]))
    assert again.chosen.bands == one_pair.chosen.bands


def test_findings_of_reading_stay_first_and_none_comes_twice(units, sheet):
    read = Finding(severity=Severity.NOTE, code="x", message="seen while reading")
    build = replace(build_of(sheet, [pair(units, "AB")]), findings=(read, read))
    assert measure(build).findings == (read,)


def check_sweep(setup: Setup, file: str) -> Measurement:
    gamma = np.zeros((HZ.size, 1, 1), complex)
    return Measurement(entry=SweepEntry(file=file, setup=setup), sweep=sweep_of(file, HZ, gamma))


def test_nothing_that_a_method_can_use(sheet):
    build = build_of(sheet, [check_sweep(Setup.LOAD_CHECK, "check.s1p")])
    with pytest.raises(NotMeasurable) as raised:
        measure(build)
    assert str(raised.value).startswith(
        "no method can use the sweeps that are there (load-check): loss needs two units back to "
        "back"
    )


def test_single_point_cannot_be_measured(units, sheet):
    build = build_of(sheet, [cut(pair(units, "AB"), slice(5, 6))])
    with pytest.raises(NotMeasurable) as raised:
        measure(build)
    assert "the sweep AB.s2p has less than two frequencies" in str(raised.value)
