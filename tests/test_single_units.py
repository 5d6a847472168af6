"""Three pairs, terminations, series resistor and straight-through sweeps: exact without a fault.

All through `measure_build`; the units are unequal and of another make than any fitted circuit.
"""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from measurements import build_of, load_swept, pair_swept, sheet_of
from simulation.bench import matrix_of, sweep_of
from simulation.transformer import Unit, chain_of_unit, random_unit, twin_of

from reportgen.model import (
    BenchSheet,
    BuildResult,
    BuildSheet,
    ComplexArray,
    Load,
    Measurement,
    Method,
    MethodResult,
    Setup,
    SweepEntry,
)
from reportgen.physics.allocations import amateur_bands
from reportgen.physics.halves import find_halves
from reportgen.physics.measure import measure_build
from reportgen.physics.network import (
    Chain,
    efficiency_ratio,
    reflection_of_impedance,
    scattering_of_chain,
    series_arm,
    shunt_arm,
)
from reportgen.physics.pairs import find_pairs

pytestmark = pytest.mark.usefixtures("few_draws")

HZ = np.linspace(1.5e6, 30e6, 60)
OMEGA = 2 * np.pi * HZ
BANDS = amateur_bands(2)
RESISTOR_OHM = 3000.0
BODY_PF = 0.15
LOAD = Load(resistance_ohm=RESISTOR_OHM, stray_pf=3.0, body_pf=BODY_PF)


@pytest.fixture(scope="module")
def design() -> Unit:
    return random_unit(np.random.default_rng(8))


@pytest.fixture(scope="module")
def sheet(design) -> BuildSheet:
    return sheet_of(design.low_turns, design.high_turns, design.capacitor_f * 1e12)


@pytest.fixture(scope="module")
def units(design) -> dict[str, Chain]:
    rng = np.random.default_rng(4)
    return {name: chain_of_unit(twin_of(design, rng, 0.05), HZ) for name in "ABC"}


def methods_of(sheet: BuildSheet, sweeps: list[Measurement], method: Method) -> list[MethodResult]:
    result = measure_build(build_of(sheet, sweeps), BenchSheet(), BANDS)
    return [one for one in result.methods if one.method is method]


def off_db(found: MethodResult, chain: Chain, load_ohm: float | ComplexArray) -> float:
    efficiency = found.curves.efficiency_ratio[found.curves.native]
    true = efficiency_ratio(chain, load_ohm)
    return float(np.max(np.abs(10 * np.log10(efficiency / true))))


def one_port(setup: Setup, unit: str, z_ohm: ComplexArray) -> Measurement:
    file = f"{unit}-{setup}.s1p"
    gamma = reflection_of_impedance(z_ohm)[:, None, None]
    return Measurement(
        entry=SweepEntry(file=file, setup=setup, unit=unit), sweep=sweep_of(file, HZ, gamma)
    )


def two_port(setup: Setup, chain: Chain, *, one_path: bool = False) -> Measurement:
    s = matrix_of(scattering_of_chain(chain))
    if one_path:
        s[:, :, 1] = 0
    return Measurement(
        entry=SweepEntry(file=f"{setup}.s2p", setup=setup, unit="A", load="main"),
        sweep=sweep_of(f"{setup}.s2p", HZ, s, one_path=one_path),
        load=LOAD if setup is Setup.SERIES_RESISTOR else None,
    )


# --- halves closed by a load ---------------------------------------------------------------------


def pairs(units: dict[str, Chain]) -> list[Measurement]:
    return [
        pair_swept(HZ, {name: units[name] for name in names}, file=f"{names}.s2p")
        for names in ("AB", "CA", "BC")
    ]


@pytest.fixture(scope="module")
def three(units, sheet) -> BuildResult:
    """Three pairs, one of them entered the other way round, and a load sweep of each unit."""
    loads = [load_swept(HZ, name, units[name], LOAD, true_pf=3.0) for name in units]
    return measure_build(build_of(sheet, [*pairs(units), *loads]), BenchSheet(), BANDS)


@pytest.mark.parametrize(
    ("method", "limit_db"), [(Method.THREE_PAIRS_LOAD, 1e-6), (Method.THREE_PAIRS, 0.06)]
)
def test_three_pairs_tell_three_unequal_units_apart(three, units, sheet, method, limit_db):
    """Exactly where each is closed by its load."""
    found = [one for one in three.methods if one.method is method]
    assert sorted(one.unit for one in found) == ["A", "B", "C"]
    for one in found:
        assert one.units == (one.unit,)
        assert off_db(one, units[one.unit], sheet.nominal_load_ohm) < limit_db


def test_two_pairs_are_not_three(units):
    some = pairs(units)[:2]
    halves = find_halves(find_pairs(some), some)
    assert [half.alone for half in halves] == [Method.BISECTION, Method.BISECTION]


def terminated(chain: Chain) -> list[Measurement]:
    return [
        one_port(Setup.OPEN, "A", chain.a / chain.c),
        one_port(Setup.SHORT, "A", chain.b / chain.d),
    ]


def test_open_short_and_load_give_the_unit_exactly(units, sheet):
    load = load_swept(HZ, "A", units["A"], LOAD, true_pf=3.0)
    sweeps = [*terminated(units["A"]), load]
    (found,) = methods_of(sheet, sweeps, Method.TERMINATIONS)
    assert found.unit == "A"
    assert off_db(found, units["A"], sheet.nominal_load_ohm) < 1e-6


def test_open_of_one_unit_and_short_of_another_are_nothing(units, sheet):
    opened, shorted = terminated(units["A"])
    load = load_swept(HZ, "A", units["A"], LOAD, true_pf=3.0)
    other = replace(shorted, entry=replace(shorted.entry, unit="B"))
    assert methods_of(sheet, [opened, other, load], Method.TERMINATIONS) == []


# --- series resistor and straight through --------------------------------------------------------


def resistor_ohm() -> ComplexArray:
    return 1 / (1 / RESISTOR_OHM + 1j * OMEGA * BODY_PF * 1e-12)


@pytest.mark.parametrize("one_path", [True, False])
def test_series_resistor_is_exact_for_the_load_it_had(units, sheet, one_path):
    """|S21|^2 (Re Zs + 50)/50 / (1 - |S11|^2), port 2 being part of the load."""
    whole = units["A"] @ series_arm(resistor_ohm())
    sweep = two_port(Setup.SERIES_RESISTOR, whole, one_path=one_path)
    (found,) = methods_of(sheet, [sweep], Method.SERIES_RESISTOR)
    assert (found.unit, found.load_ohm) == ("A", RESISTOR_OHM + 50)
    assert off_db(found, units["A"], resistor_ohm() + 50) < 1e-6


def test_stray_before_the_series_resistor_belongs_to_its_load(units, sheet):
    """The power into the load it really had, stray included, is what comes out."""
    stray_s = 1j * OMEGA * 3e-12
    whole = units["A"] @ shunt_arm(stray_s) @ series_arm(resistor_ohm())
    (found,) = methods_of(
        sheet, [two_port(Setup.SERIES_RESISTOR, whole, one_path=True)], Method.SERIES_RESISTOR
    )
    assert off_db(found, units["A"], 1 / (1 / (resistor_ohm() + 50) + stray_s)) < 1e-6


def test_series_resistor_closes_a_pair_too(units, sheet):
    """Its S11 is a load sweep with Zs + 50 ohm."""
    equal = {"A": units["A"], "B": units["A"]}
    whole = units["A"] @ shunt_arm(1j * OMEGA * 3e-12) @ series_arm(resistor_ohm())
    sweeps = [pair_swept(HZ, equal), two_port(Setup.SERIES_RESISTOR, whole, one_path=True)]
    (found,) = methods_of(sheet, sweeps, Method.BISECTION_LOAD)
    assert off_db(found, units["A"], sheet.nominal_load_ohm) < 1e-6


def test_straight_through_is_exact_without_a_fault(units, sheet):
    (found,) = methods_of(sheet, [two_port(Setup.DIRECT, units["A"])], Method.DIRECT)
    assert (found.unit, found.load_ohm) == ("A", sheet.nominal_load_ohm)
    assert off_db(found, units["A"], sheet.nominal_load_ohm) < 1e-6
