"""Which method is the result: loss in most bands, then the smallest interval, then preference."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from measurements import curves_of

from reportgen.model import Band, Method, MethodResult
from reportgen.physics.bands import in_bands
from reportgen.physics.choose import chosen_of, rank
from reportgen.physics.methods import Computed, Plan
from reportgen.physics.quantities import decibel_loss
from reportgen.physics.solve import Solved
from reportgen.physics.uncertainty import Spread, with_intervals

BANDS = (
    Band(name="40 m", from_hz=7.0e6, to_hz=7.3e6),
    Band(name="20 m", from_hz=14.0e6, to_hz=14.35e6),
)
DRAWS = 500


def solved(
    method: Method, deviation: float, *, units: str = "AB", mean: float = 0.8, high_hz: float = 20e6
) -> Solved:
    """A method that found one efficiency, with draws of that standard deviation."""
    hz = np.unique([*np.arange(6e6, high_hz, 50e3), 7.0e6, 7.15e6, 7.3e6])
    seen = curves_of(hz, mean, 0.01)
    off = deviation * np.random.default_rng(len(units)).normal(size=(DRAWS, 1))
    drawn = replace(
        seen,
        efficiency_ratio=seen.efficiency_ratio + off,
        reflection_ratio=np.full((DRAWS, hz.size), 0.01),
    )
    spread = Spread(seen=seen, drawn=drawn)
    plan = Plan(
        method=method, unit=None, units=tuple(units), load_ohm=2450.0, sweeps=(),
        compute=lambda frequency_hz, seen: Computed(),
    )  # fmt: skip
    result = MethodResult(
        method=method,
        unit=None,
        units=tuple(units),
        load_ohm=2450.0,
        curves=seen,
        bands=with_intervals(in_bands(seen, BANDS, 100.0), spread, 100.0),
    )
    return Solved(plan=plan, result=result, spread=spread, computed=Computed())


def chosen(*found: Solved) -> MethodResult:
    return chosen_of(found, BANDS, 100.0)[1]


@pytest.mark.parametrize("turn", [1, -1])
def test_smallest_interval_wins_whatever_the_order(turn):
    known, unsure = solved(Method.SERIES_RESISTOR, 0.002), solved(Method.BISECTION_LOAD, 0.004)
    assert chosen(*[known, unsure][::turn]).method is Method.SERIES_RESISTOR


def test_loss_in_more_bands_goes_before_a_smaller_interval():
    narrow, wide = solved(Method.BISECTION, 0.001, high_hz=10e6), solved(Method.DIRECT, 0.05)
    assert chosen(narrow, wide).method is Method.DIRECT


def test_preference_between_equals():
    found = [solved(method, 0.002) for method in (Method.BISECTION, Method.BISECTION_LOAD)]
    assert rank(found[0].result)[:2] == rank(found[1].result)[:2]
    assert chosen(*found).method is Method.BISECTION_LOAD


def test_several_of_a_method_give_their_mean_with_its_interval():
    """Two pairs that err independently: the mean is known better by the root of two."""
    one = solved(Method.BISECTION, 0.01, units="AB", mean=0.8)
    other = solved(Method.BISECTION, 0.01, units="CDE", mean=0.7)
    found = chosen(one, other)
    assert (found.unit, found.units) == (None, ("A", "B", "C", "D", "E"))
    figure = found.bands[0].figures["heat_loss_db"]
    assert figure.mean == pytest.approx(decibel_loss(0.75))
    u95_db = (figure.high95 - figure.low95) / 2
    assert u95_db == pytest.approx(1.96 * 4.343 * 0.01 / np.sqrt(2) / 0.75, rel=0.15)
