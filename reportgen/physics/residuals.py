"""What a calibration leaves uncorrected, as draws, and sweeps corrected by them.

A residual is a complex number uniform in the disc whose radius is its limit, turning with frequency
by a delay; tracking is uniform in decibels. All sweeps of one calibration share its residuals, so
they are seeded by its name; drift, connection and noise are each sweep's own.

References
----------
.. [1] JCGM 101:2008, propagation of distributions using a Monte Carlo method.
.. [2] D. Rytting, network analyzer error models and calibration methods (12-term model; cited
   from memory).
"""

from __future__ import annotations

import hashlib
from dataclasses import dataclass

import numpy as np

from reportgen.model import Calibration, ComplexArray, RealArray
from reportgen.physics.network import Scattering

LONGEST_DELAY_S = 17e-9
"""By which a residual turns with frequency, either way [s]."""

ONE_PATH_LOAD_MATCH_DB = 26.0
"""Match of an uncorrected port 2 when only one path is measured [dB]."""

_FEWEST_FOR_NOISE = 25


@dataclass(frozen=True, kw_only=True, slots=True)
class Limits:
    """Limits of the residuals [dB]; tracking and connection either way; noise is a level."""

    directivity_db: float
    source_match_db: float
    load_match_db: float
    tracking_db: float
    isolation_db: float
    noise_db: float
    drift_db: float
    connection_db: float
    one_path_load_match_db: float = ONE_PATH_LOAD_MATCH_DB


GRADES = {
    "handheld": Limits(
        directivity_db=40,
        source_match_db=36,
        load_match_db=33,
        tracking_db=0.05,
        isolation_db=70,
        noise_db=74,
        drift_db=60,
        connection_db=0.02,
    ),
    "bench": Limits(
        directivity_db=46,
        source_match_db=42,
        load_match_db=40,
        tracking_db=0.03,
        isolation_db=90,
        noise_db=86,
        drift_db=70,
        connection_db=0.01,
    ),
}
"""Assumed where the sidecar says nothing."""


def limits_of(calibration: Calibration) -> Limits:
    """A calibration's limits: what the sidecar says, the grade's assumption elsewhere."""
    assumed = GRADES[calibration.grade]
    names = (name for name in Limits.__dataclass_fields__ if hasattr(calibration, name))
    stated = {name: getattr(calibration, name) for name in names}
    kept = {name: value for name, value in stated.items() if value is not None}
    if "load_match_db" in kept:
        kept["one_path_load_match_db"] = kept["load_match_db"]
    values = {name: getattr(assumed, name) for name in Limits.__dataclass_fields__}
    return Limits(**(values | kept))


def generator(*names: object) -> np.random.Generator:
    """A generator that the same names always seed alike."""
    digest = hashlib.sha256("\0".join(str(name) for name in names).encode()).digest()
    return np.random.default_rng(np.frombuffer(digest, dtype=np.uint32))


def disc(
    rng: np.random.Generator, draws: int, limit_db: float, frequency_hz: RealArray
) -> ComplexArray:
    """(K, F) complex numbers, uniform in the disc of the limit, turning with frequency."""
    radius = 10 ** (-limit_db / 20) * np.sqrt(rng.uniform(size=(draws, 1)))
    turn = rng.uniform(0, 2 * np.pi, size=(draws, 1))
    delay_s = rng.uniform(-LONGEST_DELAY_S, LONGEST_DELAY_S, size=(draws, 1))
    return np.asarray(radius * np.exp(1j * (turn - 2 * np.pi * frequency_hz * delay_s)))


def gain(rng: np.random.Generator, draws: int, limit_db: float) -> RealArray:
    """(K, 1) factors, uniform in decibels between the limits [ratio]."""
    return np.asarray(10 ** (rng.uniform(-limit_db, limit_db, size=(draws, 1)) / 20))


def trace_noise_ratio(swept: ComplexArray) -> float | None:
    """Noise of a trace from its own fourth differences, in which what is smooth vanishes [ratio].

    None where there are too few points. A standard deviation of the complex value; by the median,
    so spikes do not count.

    Notes
    -----
    The weights 1, -4, 6, -4, 1 give 70 times the variance; the square of a complex Gaussian has
    its median at ln 2 times its mean.
    """
    if swept.size < _FEWEST_FOR_NOISE:
        return None
    fourth = np.diff(swept, n=4)
    return float(np.sqrt(np.median(np.abs(fourth) ** 2) / (70 * np.log(2))))


@dataclass(frozen=True, slots=True, eq=False)
class PortResiduals:
    """Residuals of one direction, (K, F) or (K, 1) each [ratio]."""

    directivity: ComplexArray
    source_match: ComplexArray
    load_match: ComplexArray
    reflection_tracking: RealArray
    transmission_tracking: RealArray
    isolation: ComplexArray


def reflection_corrected(seen: ComplexArray, port: PortResiduals) -> ComplexArray:
    """True reflection from the one that is seen [ratio].

    Notes
    -----
    Seen = D + R G / (1 - M G), with directivity D, tracking R and source match M.
    """
    rest = seen - port.directivity
    return np.asarray(rest / (port.reflection_tracking + port.source_match * rest))


def two_port_corrected(
    seen: Scattering, forward: PortResiduals, backward: PortResiduals
) -> Scattering:
    """True scattering matrix from the one that is seen, both paths measured.

    Notes
    -----
    The inverse of the 12-term model [2]_.
    """
    n11 = (seen.s11 - forward.directivity) / forward.reflection_tracking
    n21 = (seen.s21 - forward.isolation) / forward.transmission_tracking
    n22 = (seen.s22 - backward.directivity) / backward.reflection_tracking
    n12 = (seen.s12 - backward.isolation) / backward.transmission_tracking
    product = n21 * n12
    below = (1 + n11 * forward.source_match) * (1 + n22 * backward.source_match)
    below = below - product * forward.load_match * backward.load_match
    return Scattering(
        (n11 * (1 + n22 * backward.source_match) - forward.load_match * product) / below,
        n12 * (1 + n11 * (forward.source_match - backward.load_match)) / below,
        n21 * (1 + n22 * (backward.source_match - forward.load_match)) / below,
        (n22 * (1 + n11 * forward.source_match) - backward.load_match * product) / below,
    )


def seen_through(true: Scattering, forward: PortResiduals, backward: PortResiduals) -> Scattering:
    """What the analyzer shows of a two-port [ratio]; the 12-term model [2]_."""
    s11, s21 = _seen_from(forward, true)
    s22, s12 = _seen_from(backward, true.reversed())
    return Scattering(s11, s12, s21, s22)


def _seen_from(port: PortResiduals, s: Scattering) -> tuple[ComplexArray, ComplexArray]:
    determinant = s.s11 * s.s22 - s.s12 * s.s21
    below = 1 - port.source_match * s.s11 - port.load_match * s.s22
    below = below + port.source_match * port.load_match * determinant
    reflected = (s.s11 - port.load_match * determinant) / below
    return (
        np.asarray(port.directivity + port.reflection_tracking * reflected),
        np.asarray(port.isolation + port.transmission_tracking * s.s21 / below),
    )


def one_path_corrected(
    s11: ComplexArray, s21: ComplexArray, port: PortResiduals, s22: ComplexArray
) -> Scattering:
    """True scattering matrix from the forward path and a guess of S22; S12 = S21.

    Notes
    -----
    Seen S11 = D + R (S11 - L d)/n and S21 = X + T S21/n, n = 1 - M S11 - L S22 + M L d with
    d = S11 S22 - S21^2; a few rounds from the values seen settle it.
    """
    n11 = (s11 - port.directivity) / port.reflection_tracking
    n21 = (s21 - port.isolation) / port.transmission_tracking
    true11, true21 = n11, n21
    for _ in range(6):
        determinant = true11 * s22 - true21 * true21
        below = 1 - port.source_match * true11 - port.load_match * s22
        below = below + port.source_match * port.load_match * determinant
        true11, true21 = n11 * below + port.load_match * determinant, n21 * below
    return Scattering(true11, true21, true21, s22 + np.zeros_like(true11))
