"""Pairs alone, through `measure_build`, on sweeps without a fault and units of known truth."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from measurements import build_of, pair_swept, sheet_of
from simulation.bench import sweep_of
from simulation.transformer import Unit, chain_of_unit, random_unit, twin_of
from two_ports import back_to_back

from reportgen.errors import NotMeasurable
from reportgen.model import (
    BenchSheet,
    Build,
    BuildResult,
    BuildSheet,
    Measurement,
    Method,
    MethodResult,
)
from reportgen.physics.allocations import amateur_bands
from reportgen.physics.bisection import halve_pair, section_arms, unit_of_pair
from reportgen.physics.measure import measure_build
from reportgen.physics.network import (
    Chain,
    efficiency_ratio,
    ideal_transformer,
    reflection_ratio,
    series_arm,
    shunt_arm,
)

pytestmark = pytest.mark.usefixtures("few_draws")

HZ = np.linspace(1.5e6, 30e6, 96)
BANDS = amateur_bands(2)


def measured(build: Build | BuildResult, method: Method) -> MethodResult:
    result = build if isinstance(build, BuildResult) else measure_build(build, BenchSheet(), BANDS)
    (found,) = (one for one in result.methods if one.method is method)
    return found


def swept(found: MethodResult, name: str = "efficiency_ratio") -> np.ndarray:
    """Values at the points of the sweep."""
    values = getattr(found.curves, name)[found.curves.native]
    assert values.shape == HZ.shape
    return values


def off_db(found: np.ndarray, true: np.ndarray) -> np.ndarray:
    return 10 * np.log10(found / true)


@pytest.fixture(scope="module")
def design() -> Unit:
    return random_unit(np.random.default_rng(8))


@pytest.fixture(scope="module")
def sheet(design) -> BuildSheet:
    return sheet_of(design.low_turns, design.high_turns, design.capacitor_f * 1e12)


@pytest.fixture(scope="module")
def twins(design) -> dict[str, Chain]:
    rng = np.random.default_rng(12)
    return {name: chain_of_unit(twin_of(design, rng), HZ) for name in "AB"}


@pytest.fixture(scope="module")
def plain(twins, sheet) -> BuildResult:
    """The twins swept once, both paths, joined the right way round."""
    return measure_build(build_of(sheet, [pair_swept(HZ, twins)]), BenchSheet(), BANDS)


def test_bisection_of_two_equal_units_is_their_efficiency_and_match(design, sheet):
    """The unit is of another make than the circuit that closes it: 0.06 dB is what that costs."""
    unit = chain_of_unit(design, HZ)
    build = build_of(sheet, [pair_swept(HZ, {"A": unit, "B": unit})])
    found = measured(build, Method.BISECTION)
    load_ohm = sheet.nominal_load_ohm
    assert found.load_ohm == load_ohm == 50 * (design.high_turns / design.low_turns) ** 2
    assert np.max(np.abs(off_db(swept(found), efficiency_ratio(unit, load_ohm)))) < 0.06
    true = reflection_ratio(unit, load_ohm, 50.0)
    assert np.max(np.abs(swept(found, "reflection_ratio") - true)) < 0.02


def test_bisection_of_unequal_units_is_the_mean_of_them(twins, sheet, plain):
    found = measured(plain, Method.BISECTION)
    assert (found.unit, found.units) == (None, ("A", "B"))
    true = [efficiency_ratio(unit, sheet.nominal_load_ohm) for unit in twins.values()]
    assert np.max(np.abs(off_db(swept(found), np.mean(true, axis=0)))) < 0.06


def test_halving_is_the_root_of_what_comes_through_and_no_loss_of_a_unit(twins, plain):
    found = measured(plain, Method.HALVING)
    through = np.abs(back_to_back(twins["A"], twins["B"]).s21)
    np.testing.assert_allclose(swept(found, "halved_pair_ratio"), through, rtol=1e-12)
    assert found.curves.efficiency_ratio is None
    assert found.reason == (
        "half of a through loss holds the mismatch between the two units: it is not the heat loss "
        "of one"
    )


def test_halved_figure_stands_beside_the_bisection(plain):
    np.testing.assert_array_equal(
        swept(measured(plain, Method.BISECTION), "halved_pair_ratio"),
        swept(measured(plain, Method.HALVING), "halved_pair_ratio"),
    )


# --- ways to sweep the same pair -----------------------------------------------------------------


def turned(twins: dict[str, Chain]) -> dict[str, Chain]:
    return dict(reversed(twins.items()))


def ways(twins: dict[str, Chain]) -> dict[str, list[Measurement]]:
    plain = pair_swept(HZ, twins)
    return {
        "joined the wrong way round": [pair_swept(HZ, twins, wrong_way_round=True)],
        "one path, both ways": [
            pair_swept(HZ, twins, file="ab.s2p", one_path=True),
            pair_swept(HZ, turned(twins), file="ba.s2p", one_path=True),
        ],
        "one path, both ways, one of them joined wrong": [
            pair_swept(HZ, twins, file="ab.s2p", one_path=True, wrong_way_round=True),
            pair_swept(HZ, turned(twins), file="ba.s2p", one_path=True),
        ],
        "from the other side": [pair_swept(HZ, turned(twins))],
        "twice": [plain, replace(plain, entry=replace(plain.entry, repeat=2))],
        "twice, with opposite errors": [
            replace(plain, sweep=sweep_of(f"{sign}.s2p", HZ, plain.sweep.s + sign * 0.01))
            for sign in (1, -1)
        ],
    }


@pytest.mark.parametrize("way", ways({"A": series_arm(HZ), "B": series_arm(HZ)}))
def test_figures_do_not_depend_on_the_way_of_sweeping(twins, sheet, plain, way):
    other = measured(build_of(sheet, ways(twins)[way]), Method.BISECTION)
    np.testing.assert_allclose(swept(other), swept(measured(plain, Method.BISECTION)), rtol=1e-6)


def test_one_path_alone_is_off_a_little_and_says_so(twins, sheet, plain):
    build = build_of(sheet, [pair_swept(HZ, twins, one_path=True)])
    result = measure_build(build, BenchSheet(), BANDS)
    both, one = (swept(measured(found, Method.BISECTION)) for found in (plain, result))
    assert 1e-4 < np.max(np.abs(off_db(one, both))) < 0.3
    assert "one-path-pair" in [one.code for one in result.findings]


def test_wrong_polarity_is_a_finding_of_the_build(twins, sheet, plain):
    wrong = build_of(sheet, [pair_swept(HZ, twins, wrong_way_round=True)])
    found = measure_build(wrong, BenchSheet(), BANDS).findings
    assert [one.code for one in found] == ["polarity"]
    assert plain.findings == ()


# --- where no circuit fits -----------------------------------------------------------------------


def no_winding() -> Chain:
    """Resistors and a trap: its open and short impedance are none of a winding on a core."""
    omega = 2 * np.pi * HZ
    trap = shunt_arm(1 / (0.2 + 1j * omega * 4e-7 + 1 / (1j * omega * 4e-10)))
    row = series_arm(20 + 0j * omega) @ trap @ series_arm(1j * omega * 3e-7)
    return row @ ideal_transformer(np.full(HZ.shape, 7.0))


@pytest.fixture(scope="module")
def odd() -> BuildResult:
    """Such a pair measured."""
    unit = no_winding()
    build = build_of(sheet_of(2, 14), [pair_swept(HZ, {"A": unit, "B": unit})])
    return measure_build(build, BenchSheet(), BANDS)


def test_where_no_circuit_fits_each_frequency_is_closed_by_the_section(odd):
    unit = no_winding()
    halved = halve_pair(back_to_back(unit, unit))
    series, shunt = section_arms(halved, 0j * HZ)
    closed = unit_of_pair(halved, (1 + series * shunt) / 7)
    found = swept(measured(odd, Method.BISECTION))
    np.testing.assert_allclose(found, efficiency_ratio(closed, 2450.0), rtol=1e-6)


def test_where_no_circuit_fits_a_finding_says_so(odd):
    (found,) = (one for one in odd.findings if one.code == "no-circuit-fits")
    assert (found.severity, found.file) == ("warning", "pair.s2p")
    assert "like no winding with the turns and the capacitor entered" in found.message
    assert found.message.endswith(
        "where 0.02 is allowed); each frequency was closed by itself, which may be 0.2 dB off"
    )
    assert found.remedy == (
        "check turns and capacitor in build.toml and the calibration, or sweep the units with a "
        "known load"
    )


def test_sweeps_of_one_pair_without_a_common_range(twins, sheet):
    whole = pair_swept(HZ, twins)
    parts = [
        replace(whole, sweep=sweep_of(f"{name}.s2p", HZ[part], whole.sweep.s[part]))
        for name, part in (("low", slice(0, 40)), ("high", slice(60, 96)))
    ]
    with pytest.raises(NotMeasurable) as raised:
        measure_build(build_of(sheet, parts), BenchSheet(), BANDS)
    assert "left out: the sweeps low.s2p, high.s2p have less than two frequencies in common" in str(
        raised.value
    )
