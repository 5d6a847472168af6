"""How far the methods are from the truth on seeded populations of simulated builds.

The units are of another make than the circuit that the methods fit, the two of a pair are unequal,
capacitor and load are off by their tolerance, the load has a stray, the analyzer its residuals.
Figures without intervals, and straight from the plans: the intervals have tests of their own.
"""

from __future__ import annotations

import numpy as np
from simulation.bench import KnownBuild, known_build

from reportgen.model import MeasuredBand, Method
from reportgen.physics.allocations import amateur_bands
from reportgen.physics.bands import in_bands, mean_ratio
from reportgen.physics.grid import common_grid
from reportgen.physics.methods import Plan
from reportgen.physics.plans import find_plans
from reportgen.physics.seen import AS_SWEPT
from reportgen.physics.uncertainty import curves_of

BANDS = tuple(band for band in amateur_bands(2) if band.to_hz < 30e6)
METHODS = (Method.HALVING, Method.BISECTION, Method.BISECTION_LOAD)


def losses_db(plan: Plan) -> list[float]:
    """Mean heat loss of each band; of halving, its halved figure."""
    grid = common_grid(plan.sweeps, BANDS)
    curves = curves_of(plan.compute(grid.frequency_hz, AS_SWEPT), grid.frequency_hz, grid.native)
    key = "halved_pair_db" if plan.method is Method.HALVING else "heat_loss_db"
    return [
        band.figures[key].mean
        for band in in_bands(curves, BANDS, 100.0)
        if isinstance(band, MeasuredBand)
    ]


def true_losses_db(known: KnownBuild) -> np.ndarray:
    """Of the mean efficiency of both units over each band."""
    bands_hz = [np.linspace(band.from_hz, band.to_hz, 25) for band in BANDS]
    means = [mean_ratio(hz, known.true_efficiency_ratio(hz, ("A", "B"))) for hz in bands_hz]
    return -10 * np.log10(means)


def errors_db(builds: int, seed: int, grade: str) -> dict[Method, np.ndarray]:
    """Computed minus true loss of every band of every build, by method."""
    rng = np.random.default_rng(seed)
    found: dict[Method, list[np.ndarray]] = {method: [] for method in METHODS}
    for _ in range(builds):
        known = known_build(rng, grade=grade)
        true_db = true_losses_db(known)
        for plan in find_plans(known.build)[0]:
            if plan.method in METHODS:
                found[plan.method].append(losses_db(plan) - true_db)
    return {method: np.concatenate(errors) for method, errors in found.items()}


def within(errors: np.ndarray) -> float:
    """Limit that holds 95 % of the errors."""
    return float(np.percentile(np.abs(errors), 95))


def test_bench_grade():
    errors = errors_db(40, 20, "bench")
    assert {method: one.size for method, one in errors.items()} == dict.fromkeys(METHODS, 400)
    for method in (Method.BISECTION, Method.BISECTION_LOAD):
        assert within(errors[method]) < 0.05
        assert abs(np.mean(errors[method])) < 0.01
    assert np.max(np.abs(errors[Method.HALVING])) > 1
    assert within(errors[Method.HALVING]) > 10 * within(errors[Method.BISECTION])


def test_handheld_grade():
    errors = errors_db(15, 21, "handheld")
    for method in (Method.BISECTION, Method.BISECTION_LOAD):
        assert errors[method].size == 150
        assert within(errors[method]) < 0.10
