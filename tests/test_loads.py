"""Load sweeps, through `measure_build`: what they close, the stray they name, what they contradict.

The sweeps have no fault; the units are of another make than the circuit that tells the stray.
"""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from measurements import build_of, load_swept, pair_swept, sheet_of
from simulation.bench import sweep_of
from simulation.transformer import Unit, chain_of_unit, random_unit, twin_of

from reportgen.model import (
    BenchSheet,
    Build,
    BuildResult,
    BuildSheet,
    Finding,
    Load,
    Measurement,
    Method,
    MethodResult,
)
from reportgen.physics.allocations import amateur_bands
from reportgen.physics.measure import measure_build
from reportgen.physics.network import (
    Chain,
    efficiency_ratio,
    input_impedance_ohm,
    reflection_of_impedance,
    resistor_ohm,
)

pytestmark = pytest.mark.usefixtures("few_draws")

HZ = np.linspace(1.5e6, 30e6, 96)
BANDS = amateur_bands(2)
LOAD_OHM = 2450.0
TRUE_PF = 3.7


@pytest.fixture(scope="module")
def design() -> Unit:
    return replace(random_unit(np.random.default_rng(8)), low_turns=3, high_turns=21)


@pytest.fixture(scope="module")
def sheet(design) -> BuildSheet:
    return sheet_of(design.low_turns, design.high_turns, design.capacitor_f * 1e12)


@pytest.fixture(scope="module")
def twins(design) -> dict[str, Chain]:
    rng = np.random.default_rng(12)
    return {name: chain_of_unit(twin_of(design, rng), HZ) for name in "AB"}


def swept(
    twins: dict[str, Chain], *, loaded: str = "AB", true_ohm: float = LOAD_OHM, **entered: object
) -> list[Measurement]:
    """The pair, and units with a load that has 3.7 pF across it, whatever is entered."""
    load = Load(**({"resistance_ohm": LOAD_OHM} | entered))
    return [
        pair_swept(HZ, twins),
        *(
            load_swept(HZ, name, twins[name], load, true_pf=TRUE_PF, true_ohm=true_ohm)
            for name in loaded
        ),
    ]


def result_of(sheet: BuildSheet, measurements: list[Measurement]) -> BuildResult:
    return measure_build(build_of(sheet, measurements), BenchSheet(), BANDS)


def by(result: BuildResult, method: Method) -> MethodResult:
    (found,) = (one for one in result.methods if one.method is method)
    return found


def finding(result: BuildResult, code: str) -> Finding:
    (found,) = (one for one in result.findings if one.code == code)
    return found


def worst_db(found: MethodResult, chains: list[Chain], load_ohm: float) -> float:
    """Largest error of the efficiency at the swept points."""
    true = np.mean([efficiency_ratio(chain, load_ohm) for chain in chains], axis=0)
    efficiency = found.curves.efficiency_ratio[found.curves.native]
    return float(np.max(np.abs(10 * np.log10(efficiency / true))))


# --- closing a pair ------------------------------------------------------------------------------


def test_exact_load_and_stray_close_a_pair_of_equal_units_exactly(design, sheet):
    unit = chain_of_unit(design, HZ)
    equal = {"A": unit, "B": unit}
    result = result_of(sheet, swept(equal, stray_pf=TRUE_PF))
    closed = by(result, Method.BISECTION_LOAD)
    assert worst_db(closed, [unit], sheet.nominal_load_ohm) < 1e-6
    assert worst_db(by(result, Method.BISECTION), [unit], sheet.nominal_load_ohm) > 1e-4
    assert result.findings == ()


def test_turns_do_not_matter_where_a_load_closes_the_pair(design, sheet):
    """The turns ratio entered 2 % wrong: 0.17 dB for a pair alone, nothing here."""
    unit = chain_of_unit(design, HZ)
    measurements = swept({"A": unit, "B": unit}, stray_pf=TRUE_PF)
    wrong = sheet_of(3, 21 * 1.02, design.capacitor_f * 1e12)
    result = result_of(replace(wrong, match=replace(wrong.match, load_ohm=2450.0)), measurements)
    assert worst_db(by(result, Method.BISECTION_LOAD), [unit], 2450.0) < 1e-6
    assert worst_db(by(result, Method.BISECTION), [unit], 2450.0) > 0.01


@pytest.fixture(scope="module")
def fitted(twins, sheet) -> BuildResult:
    """Unequal units, both loaded, the stray to be fitted."""
    return result_of(sheet, swept(twins))


def test_stray_is_found_and_used(fitted, twins, sheet):
    (stray,) = fitted.fitted
    assert (stray.quantity, stray.of, stray.reason) == ("stray_pf", "loads.main", None)
    assert stray.value == pytest.approx(TRUE_PF, abs=0.3)
    closed = by(fitted, Method.BISECTION_LOAD)
    assert (closed.unit, closed.units) == (None, ("A", "B"))
    assert worst_db(closed, list(twins.values()), sheet.nominal_load_ohm) < 0.06


def test_stray_left_out_would_cost_a_lot(twins, sheet):
    """What finding it is worth: entered as 0 pF, it is off by much more, and said to be."""
    result = result_of(sheet, swept(twins, stray_pf=0.0))
    closed = by(result, Method.BISECTION_LOAD)
    assert worst_db(closed, list(twins.values()), sheet.nominal_load_ohm) > 0.2
    found = finding(result, "stray-contradicted")
    assert (found.severity, found.key) == ("warning", "loads.main.stray_pf")
    assert found.message.startswith("the sidecar says 0 pF, the sweeps say 3.")
    assert found.message.endswith(" pF; the sidecar's value was used")
    assert result.fitted == ()


def test_nothing_is_contradicted_where_nothing_is_wrong(fitted):
    assert fitted.findings == ()


def test_wrong_resistance_is_said(twins, sheet):
    result = result_of(sheet, swept(twins, resistance_ohm=2000.0))
    found = finding(result, "load-contradicted")
    assert (found.severity, found.key) == ("warning", "loads.main.resistance_ohm")
    assert found.message.startswith(
        "the sidecar says 2000 ohm; with the turns entered, the sweeps look like 2.4"
    )
    assert found.remedy == "check the load's value and the turns"


def test_tolerable_resistance_is_not(twins, sheet):
    result = result_of(sheet, swept(twins, resistance_ohm=2300.0))
    assert "load-contradicted" not in {one.code for one in result.findings}


def test_fit_at_its_bound_is_said(design, sheet):
    unit = chain_of_unit(design, HZ)
    load = Load(resistance_ohm=LOAD_OHM)
    result = result_of(
        sheet,
        [
            pair_swept(HZ, {"A": unit, "B": unit}),
            *(load_swept(HZ, name, unit, load, true_pf=60) for name in "AB"),
        ],
    )
    assert finding(result, "stray-at-bound").message == (
        "the fit of the load's stray capacitance ran to its bound of 25 pF"
    )


def test_stray_below_three_megahertz_is_not_determined_and_not_used(design, sheet):
    """It turns the load by atan(w R C), which costs -10 log cos of that: 0.06 dB at 2.9 MHz."""
    low_hz = np.linspace(1.5e6, 2.9e6, 60)
    unit = chain_of_unit(design, low_hz)
    load = Load(resistance_ohm=LOAD_OHM)
    result = result_of(
        sheet,
        [
            pair_swept(low_hz, {"A": unit, "B": unit}),
            *(load_swept(low_hz, name, unit, load, true_pf=TRUE_PF) for name in "AB"),
        ],
    )
    (stray,) = result.fitted
    assert stray.value is None
    assert stray.reason.startswith("not determined: ")
    found = by(result, Method.BISECTION_LOAD)
    turn = np.arctan(2 * np.pi * low_hz[-1] * LOAD_OHM * TRUE_PF * 1e-12)
    cost_db = -10 * np.log10(np.cos(turn))
    assert worst_db(found, [unit], sheet.nominal_load_ohm) == pytest.approx(cost_db, abs=0.02)


def test_one_unit_loaded_stands_for_both_and_is_said(twins, sheet):
    result = result_of(sheet, swept(twins, loaded="B"))
    found = finding(result, "one-unit-loaded")
    assert (found.severity, found.file) == ("note", "b-load.s1p")
    assert found.message == (
        "unit A was not swept with a load; unit B stands for both, so their difference is in the "
        "figures"
    )
    assert found.remedy == 'add a sweep with setup = "load", unit = "A"'


def test_load_sweep_of_a_third_unit_closes_nothing(twins, design, sheet):
    third = load_swept(HZ, "C", chain_of_unit(design, HZ), Load(resistance_ohm=LOAD_OHM))
    result = result_of(sheet, [pair_swept(HZ, twins), third])
    assert {one.method for one in result.methods} == {
        Method.HALVING,
        Method.BISECTION,
        Method.LOAD_ONLY,
    }


def test_repeats_of_a_load_sweep_are_averaged(twins, sheet):
    """Opposite errors of two sweeps cancel."""
    pair, *loads = swept(twins, stray_pf=TRUE_PF)
    spoilt = [
        replace(one, sweep=sweep_of(f"{one.sweep.file}{sign}", HZ, one.sweep.s + sign * 0.02))
        for one in loads
        for sign in (1, -1)
    ]
    plain, mean = (
        by(result_of(sheet, [pair, *some]), Method.BISECTION_LOAD) for some in (loads, spoilt)
    )
    np.testing.assert_allclose(
        mean.curves.efficiency_ratio, plain.curves.efficiency_ratio, rtol=1e-9
    )


# --- a load sweep alone --------------------------------------------------------------------------


def alone(design: Unit, sheet: BuildSheet) -> Build:
    load = Load(resistance_ohm=2300.0)
    return build_of(sheet, [load_swept(HZ, "B", chain_of_unit(design, HZ), load, true_pf=2)])


def test_load_sweep_alone_gives_the_match_with_the_load_it_had(design, sheet):
    result = measure_build(alone(design, sheet), BenchSheet(), BANDS)
    found = by(result, Method.LOAD_ONLY)
    assert (found.unit, found.units, found.load_ohm) == ("B", ("B",), 2300.0)
    z_in = input_impedance_ohm(chain_of_unit(design, HZ), resistor_ohm(2300.0, 2e-12, HZ))
    true = np.abs(reflection_of_impedance(z_in)) ** 2
    np.testing.assert_allclose(found.curves.reflection_ratio[found.curves.native], true)


def test_load_sweep_alone_refers_the_match_to_the_source(design, sheet):
    other = replace(sheet, match=replace(sheet.match, source_ohm=75.0))
    found = by(measure_build(alone(design, other), BenchSheet(), BANDS), Method.LOAD_ONLY)
    z_in = input_impedance_ohm(chain_of_unit(design, HZ), resistor_ohm(2300.0, 2e-12, HZ))
    true = np.abs((z_in - 75) / (z_in + 75)) ** 2
    np.testing.assert_allclose(found.curves.reflection_ratio[found.curves.native], true)


def test_load_sweep_alone_says_why_there_is_no_loss(design, sheet):
    found = by(measure_build(alone(design, sheet), BenchSheet(), BANDS), Method.LOAD_ONLY)
    assert found.curves.efficiency_ratio is None
    assert found.reason == (
        "loss is not measured: a load sweep shows the match only; sweep two units back to back "
        "to get it"
    )
