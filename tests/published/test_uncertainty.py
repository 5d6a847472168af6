"""Propagation of distributions and analyzer errors against printed examples.

Sources. JCGM 100:2008 (GUM) example H.2: readings and results as carried by a measurement
institute's open test suite, not read in the guide itself. JCGM 101:2008 clauses 9.2 and 9.4:
printed values from memory, matched by computing. EA-4/02 supplement 1, example S7: result read in
a published input file of a teaching example, contributions from memory. EURAMET cg-12 v2.0, limits
of a reflection and of mismatch in transmission: formulas from memory; the numbers beside them were
computed from the same flow graph by other code, none is printed.
"""

from __future__ import annotations

from dataclasses import replace
from itertools import product

import numpy as np
import pytest
from measurements import curves_of
from scipy.stats import ncx2

from reportgen.model import Band, Figure, MeasuredBand
from reportgen.physics.bands import in_bands
from reportgen.physics.network import Scattering
from reportgen.physics.quantities import decibel_loss, swr_of_reflection
from reportgen.physics.residuals import PortResiduals, reflection_corrected, seen_through
from reportgen.physics.uncertainty import Spread, half_width, interval, with_intervals

DRAWS = 200_000


def rng() -> np.random.Generator:
    return np.random.default_rng(101)


def standard_uncertainty(draws: np.ndarray) -> float:
    """Of what is near Gaussian."""
    return half_width(draws) / 1.96


# --- JCGM 100 H.2: resistance and reactance from simultaneous readings ---------------------------

VOLTAGE_V = (5.007, 4.994, 5.005, 4.990, 4.999)
CURRENT_A = (19.663e-3, 19.639e-3, 19.640e-3, 19.685e-3, 19.678e-3)
PHASE_RAD = (1.0456, 1.0438, 1.0468, 1.0428, 1.0433)
READINGS = np.array([VOLTAGE_V, CURRENT_A, PHASE_RAD])


def impedance_draws(covariance: np.ndarray) -> dict[str, np.ndarray]:
    v, i, phi = rng().multivariate_normal(READINGS.mean(axis=1), covariance, DRAWS).T
    return {"R": v * np.cos(phi) / i, "X": v * np.sin(phi) / i, "Z": v / i}


def test_simultaneous_readings():
    """Printed: 127.732(71), 219.847(295), 254.260(236) ohm; r = -0.588, -0.485, 0.993."""
    draws = impedance_draws(np.cov(READINGS) / 5)
    printed = {"R": (127.732, 0.071), "X": (219.847, 0.295), "Z": (254.260, 0.236)}
    for name, (value, u) in printed.items():
        assert np.median(draws[name]) == pytest.approx(value, abs=0.003)
        assert standard_uncertainty(draws[name]) == pytest.approx(u, rel=0.01)
    r = np.corrcoef([draws["R"], draws["X"], draws["Z"]])
    assert r[0, 1] == pytest.approx(-0.588, abs=0.005)
    assert r[0, 2] == pytest.approx(-0.485, abs=0.005)
    assert r[1, 2] == pytest.approx(0.993, abs=0.001)


def test_a_difference_of_correlated_figures_needs_common_draws():
    """Z - X: u^2 = 0.236^2 + 0.295^2 - 2 0.993 0.236 0.295, by the printed correlation."""
    draws = impedance_draws(np.cov(READINGS) / 5)
    expected = np.sqrt(0.23634**2 + 0.29558**2 - 2 * 0.99251 * 0.23634 * 0.29558)
    assert standard_uncertainty(draws["Z"] - draws["X"]) == pytest.approx(expected, rel=0.02)


# --- JCGM 101 9.2: sums of four ------------------------------------------------------------------


def rectangular(deviation: float) -> np.ndarray:
    return np.sqrt(3) * deviation


SUMS = [
    ("four Gaussian", lambda one: one.normal(size=(4, DRAWS)).sum(axis=0), 3.92, 0.03),
    (
        "four rectangular",
        lambda one: one.uniform(-rectangular(1), rectangular(1), (4, DRAWS)).sum(axis=0),
        3.88,
        0.03,
    ),
    (
        "one of them ten times as wide",
        lambda one: (
            one.uniform(-rectangular(1), rectangular(1), (3, DRAWS)).sum(axis=0)
            + one.uniform(-rectangular(10), rectangular(10), DRAWS)
        ),
        17.0,
        0.1,
    ),
]


@pytest.mark.parametrize(("name", "drawn", "end", "within"), SUMS, ids=[one[0] for one in SUMS])
def test_sum_of_four(name, drawn, end, within):
    """Printed ends of the 95 % interval; 1.96 standard deviations would give 19.9 in the third."""
    low, high = interval(drawn(rng()))
    assert (low, high) == (pytest.approx(-end, abs=within), pytest.approx(end, abs=within))


# --- JCGM 101 9.4: a squared reflection coefficient ----------------------------------------------

U = 0.005
BAND = Band(name="band", from_hz=14e6, to_hz=14.35e6)
HZ = np.linspace(14e6, 14.35e6, 3)


def squared(x1: float) -> np.ndarray:
    """Draws of x1^2 + x2^2, both parts with u = 0.005, x2 about 0."""
    parts = rng().normal([[x1], [0]], U, size=(2, DRAWS))
    return np.asarray((parts**2).sum(axis=0))


@pytest.mark.parametrize(
    ("x1", "u", "shortest"),
    [(0.0, 50e-6, (0, 150e-6)), (0.01, 112e-6, (0, 367e-6)), (0.05, 502e-6, (1590e-6, 3543e-6))],
)
def test_squared_reflection(x1, u, shortest):
    """The printed intervals are the shortest ones; ours leave out as much on either side."""
    draws = squared(x1)
    assert np.std(draws) == pytest.approx(u, rel=0.01)
    assert np.mean((draws >= shortest[0]) & (draws <= shortest[1])) == pytest.approx(0.95, abs=5e-3)
    exact = U**2 * ncx2.ppf([0.025, 0.975], 2, max((x1 / U) ** 2, 1e-12))
    assert interval(draws) == pytest.approx(exact, rel=0.03)


def reflection_figures(x1: float) -> dict[str, Figure]:
    """What a band shows where a reflection of x1 was seen, the same at all its frequencies."""
    seen = curves_of(HZ, reflection=x1**2)
    drawn = replace(seen, reflection_ratio=np.tile(squared(x1)[:, None], (1, HZ.size)))
    bands = in_bands(seen, [BAND], 1.0)
    (band,) = with_intervals(bands, Spread(seen=seen, drawn=drawn), 1.0)
    assert isinstance(band, MeasuredBand)
    return band.figures


def test_no_reflection_seen_still_leaves_an_uncertain_match():
    """First order would give u = 0; abs(gamma)^2 is exponential about a mean of 50e-6."""
    figures = reflection_figures(0.0)
    ends = -50e-6 * np.log([0.975, 0.025])
    found = figures["return_loss_db"]
    assert found.mean is None
    assert found.low95 == pytest.approx(decibel_loss(ends[1]), abs=0.05)
    assert found.high95 == pytest.approx(decibel_loss(ends[0]), abs=0.3)
    assert figures["swr"].mean == 1
    assert figures["swr"].low95 > 1
    assert figures["swr"].high95 == pytest.approx(swr_of_reflection(ends[1]), abs=5e-4)


def test_first_order_where_it_holds():
    """u of SWR is 2 u(rho) / (1 - rho)^2, of return loss 8.686 u(rho) / rho, by calculus."""
    rho = rng().normal(0.2, 0.0005, DRAWS)
    assert standard_uncertainty(swr_of_reflection(rho**2)) == pytest.approx(0.0015625, rel=0.01)
    rho = rng().normal(0.1, 0.001, DRAWS)
    assert standard_uncertainty(decibel_loss(rho**2)) == pytest.approx(0.086859, rel=0.01)


# --- EA-4/02 S7: a budget in decibels ------------------------------------------------------------

STEP_ATTENUATOR_DB = (0.0090, 0.0025, 0.0011, 0.0200, 0.0017, 0.0003, 0.0019, 0.0020, 0.0020)
"""Standard uncertainties: standard, drift, detector, mismatch, leakage, levels and zeros."""


def test_step_attenuator():
    """Printed: 30.043 dB, u = 0.0224 dB, U = 0.045 dB; the interval from draws of Gaussians."""
    parts = rng().normal(size=(len(STEP_ATTENUATOR_DB), DRAWS)).T * STEP_ATTENUATOR_DB
    draws = 30.040 + 0.003 + parts.sum(axis=1)
    assert np.median(draws) == pytest.approx(30.043, abs=5e-4)
    assert standard_uncertainty(draws) == pytest.approx(0.0224, rel=0.01)
    assert half_width(draws) == pytest.approx(0.045, abs=0.0015)  # k = 2 there, 1.96 here


# --- limits of an analyzer's errors --------------------------------------------------------------


def port(**residuals: complex) -> PortResiduals:
    """Ideal but for what is named, at one frequency."""
    ideal = {"directivity": 0, "source_match": 0, "load_match": 0, "isolation": 0}
    ideal |= {"reflection_tracking": 1, "transmission_tracking": 1}
    return PortResiduals(**{name: np.array([value]) for name, value in (ideal | residuals).items()})


def two_port(s11: complex, s22: complex, s21: complex) -> Scattering:
    return Scattering(*(np.array([value], complex) for value in (s11, s21, s21, s22)))


THRU = two_port(0, 0, 1)
SIGNS = (1, -1)


def through_db(s: Scattering, source_match: complex, load_match: complex) -> float:
    """Through gain as an analyzer of these matches shows it."""
    forward = port(source_match=source_match, load_match=load_match)
    return float(20 * np.log10(abs(seen_through(s, forward, port()).s21[0])))


@pytest.mark.parametrize(
    ("one", "other", "more_db", "less_db"),
    [
        (0.2, 0.1, 0.1720, -0.1755),
        (0.1, 0.1, 0.0864, -0.0873),
        (1 / 3, 1 / 3, 0.9151, -1.0230),
    ],
)
def test_mismatch_limits(one, other, more_db, less_db):
    """20 log10(1 +- abs(Ga Gb)) is the loss of a thru between a source and a load not matched."""
    losses_db = [-through_db(THRU, one, sign * other) for sign in SIGNS]
    assert max(losses_db) == pytest.approx(more_db, abs=6e-5)
    assert min(losses_db) == pytest.approx(less_db, abs=6e-5)


@pytest.mark.parametrize(
    ("s11", "s22", "more_db", "less_db"),
    [(0.1, 0.1, 0.02782, -0.02789), (0.2, 0.3, 0.06336, -0.06380)],
)
def test_mismatch_of_a_two_port_against_the_thru(s11, s22, more_db, less_db):
    """S21 = 0.9, port matches of 36 and 38 dB, phases at their worst.

    20 log10((1 +- sum) / (1 -+ M L)) counts every term at its worst, which the product term of the
    lower limit cannot be together with the others: there the formula is a bound.
    """
    source, load = 10 ** (-36 / 20), 10 ** (-38 / 20)
    errors_db = []
    for a, b, c, d, phase in product(SIGNS, SIGNS, SIGNS, SIGNS, (1, 1j)):
        s = two_port(a * s11, b * s22, 0.9 * phase)
        shown = through_db(s, c * source, d * load) - through_db(THRU, c * source, d * load)
        errors_db.append(20 * np.log10(0.9) - shown)
    assert max(errors_db) == pytest.approx(more_db, abs=1e-5)
    assert less_db - 5e-6 < min(errors_db) < 0.99 * less_db


DIRECTIVITY, TRACKING, SOURCE_MATCH = 10 ** (-40 / 20), 0.005, 10 ** (-36 / 20)


@pytest.mark.parametrize(
    ("rho", "limit", "low_db", "high_db"),
    [
        (0.0316, 0.010174, 27.58, 33.38),
        (0.1, 0.010659, 19.12, 20.98),
        (0.3162, 0.013180, 9.65, 10.37),
    ],
)
def test_one_port_at_the_limits(rho, limit, low_db, high_db):
    """Directivity 40 dB, tracking 0.005, source match 36 dB: D + T rho + M rho^2 and more."""
    true = two_port(rho, 0, 0)
    worst = [
        port(
            directivity=sign * DIRECTIVITY,
            reflection_tracking=1 + sign * TRACKING,
            source_match=sign * SOURCE_MATCH,
        )
        for sign in SIGNS
    ]
    most, least = (abs(seen_through(true, one, port()).s11[0]) for one in worst)
    assert most - rho == pytest.approx(limit, abs=2e-6)
    assert -20 * np.log10([most, least]) == pytest.approx([low_db, high_db], abs=0.006)
    for one in worst:
        seen = seen_through(true, one, port()).s11
        np.testing.assert_allclose(reflection_corrected(seen, one), rho, rtol=1e-12)
