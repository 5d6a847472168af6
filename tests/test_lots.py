"""Spread over the units of a build, and how well a connection repeats."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from measurements import curves_of, pair_swept
from simulation.bench import sweep_of
from simulation.transformer import chain_of_unit, random_unit

from reportgen.model import Band, Measurement, Method, MethodResult
from reportgen.physics.bands import in_bands
from reportgen.physics.lots import find_repeatability, lot_of

BANDS = (
    Band(name="40 m", from_hz=7.0e6, to_hz=7.3e6),
    Band(name="20 m", from_hz=14.0e6, to_hz=14.35e6),
)


def unit_result(unit: str | None, loss_db: float | None, high_hz: float = 20e6) -> MethodResult:
    hz = np.arange(6e6, high_hz, 50e3)
    curves = curves_of(hz, None if loss_db is None else 10 ** (-loss_db / 10), 0.01)
    return MethodResult(
        method=Method.TERMINATIONS,
        unit=unit,
        units=("A",) if unit is None else (unit,),
        load_ohm=2450.0,
        curves=curves,
        bands=in_bands(curves, BANDS, 100.0),
    )


def test_lot_of_three():
    lot = lot_of([unit_result("A", 0.4), unit_result("B", 0.7), unit_result("C", 0.5)])
    assert lot.units == ("A", "B", "C")
    assert [one.band for one in lot.bands] == ["40 m", "20 m"]
    for one in lot.bands:
        assert one.least_db == pytest.approx(0.4)
        assert one.greatest_db == pytest.approx(0.7)
        assert one.worst_unit == "B"
        assert one.standard_deviation_db == pytest.approx(np.sqrt(0.07 / 3))  # 0.0233 over n - 1


def test_only_bands_that_all_have():
    lot = lot_of([unit_result("A", 0.4), unit_result("B", 0.7, high_hz=10e6)])
    assert [one.band for one in lot.bands] == ["40 m"]


def test_one_unit_with_a_loss_is_no_lot():
    assert lot_of([unit_result("A", 0.4), unit_result("B", None)]) is None
    assert lot_of([unit_result("A", 0.4), unit_result(None, 0.5)]) is None


# --- repeatability -------------------------------------------------------------------------------

HZ = np.linspace(1.5e6, 30e6, 96)
CHAIN = chain_of_unit(random_unit(np.random.default_rng(2)), HZ)


def pair(file: str, repeat: int, added: float = 0.0, part: slice = slice(None)) -> Measurement:
    one = pair_swept(HZ, {"A": CHAIN, "B": CHAIN}, file=file)
    sweep = sweep_of(file, HZ[part], one.sweep.s[part] + added)
    return replace(one, entry=replace(one.entry, repeat=repeat), sweep=sweep)


def test_repeats_against_the_first():
    found = find_repeatability([pair("1", 1), pair("2", 2, 0.003), pair("3", 3, -0.001j)])
    assert [(one.file, one.of) for one in found] == [("2", "1"), ("3", "1")]
    assert [one.rms_ratio for one in found] == pytest.approx([0.003, 0.001])


def test_repeat_over_the_range_that_both_cover():
    (found,) = find_repeatability([pair("1", 1, part=slice(0, 50)), pair("2", 2, 0.002)])
    assert found.rms_ratio == pytest.approx(0.002)


def test_other_set_ups_are_no_repeats():
    first, other = pair("1", 1), pair("2", 2, 0.1)
    for change in ({"units": ("B", "A")}, {"calibration": "other"}):
        moved = replace(other, entry=replace(other.entry, **change))
        assert find_repeatability([first, moved]) == ()
