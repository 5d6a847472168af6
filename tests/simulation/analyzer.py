"""A network analyzer with the faults that its calibration leaves.

Residuals are limits: complex numbers uniform in a disc, turning with frequency by a delay; the
same for every sweep of one calibration. Noise and drift are new with each sweep.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from reportgen.physics.network import Chain, Scattering, scattering_of_chain


@dataclass(frozen=True, kw_only=True)
class Grade:
    """Limits of the residuals [dB], the noise [dB below full scale], the drift."""

    directivity_db: float
    source_match_db: float
    load_match_db: float
    tracking_db: float
    isolation_db: float
    noise_db: float
    drift_db: float
    connection_db: float


BENCH = Grade(
    directivity_db=46, source_match_db=42, load_match_db=40, tracking_db=0.03,
    isolation_db=90, noise_db=86, drift_db=70, connection_db=0.01,
)  # fmt: skip
HANDHELD = Grade(
    directivity_db=40, source_match_db=36, load_match_db=33, tracking_db=0.05,
    isolation_db=70, noise_db=74, drift_db=60, connection_db=0.02,
)  # fmt: skip
ONE_PATH_LOAD_MATCH_DB = 26.0
LONGEST_DELAY_S = 17e-9


@dataclass(frozen=True)
class PortResiduals:
    """Faults of one direction over frequency, complex (F,)."""

    directivity: np.ndarray
    source_match: np.ndarray
    load_match: np.ndarray
    reflection_tracking: np.ndarray
    transmission_tracking: np.ndarray
    isolation: np.ndarray


def _disc(rng: np.random.Generator, limit_db: float, frequency_hz: np.ndarray) -> np.ndarray:
    radius = 10 ** (-limit_db / 20) * np.sqrt(rng.uniform())
    delay_s = rng.uniform(-LONGEST_DELAY_S, LONGEST_DELAY_S)
    turn = rng.uniform(0, 2 * np.pi)
    return radius * np.exp(1j * (turn - 2 * np.pi * frequency_hz * delay_s))


def _tracking(rng: np.random.Generator, limit_db: float) -> float:
    return float(10 ** (rng.uniform(-limit_db, limit_db) / 20))


class Analyzer:
    """One calibrated analyzer; every method takes one sweep."""

    def __init__(
        self,
        grade: Grade,
        frequency_hz: np.ndarray,
        rng: np.random.Generator,
        *,
        one_path: bool = False,
    ) -> None:
        self.grade, self.frequency_hz, self.rng, self.one_path = grade, frequency_hz, rng, one_path
        match_db = ONE_PATH_LOAD_MATCH_DB if one_path else grade.load_match_db
        self.ports = tuple(self._port(match_db) for _ in range(2))

    def _port(self, load_match_db: float) -> PortResiduals:
        grade, f, rng = self.grade, self.frequency_hz, self.rng
        return PortResiduals(
            _disc(rng, grade.directivity_db, f),
            _disc(rng, grade.source_match_db, f),
            _disc(rng, load_match_db, f),
            np.full(f.shape, _tracking(rng, grade.tracking_db), dtype=complex),
            np.full(f.shape, _tracking(rng, grade.tracking_db), dtype=complex),
            _disc(rng, grade.isolation_db, f),
        )

    def _as_seen(self, value: np.ndarray) -> np.ndarray:
        """With this sweep's drift and noise."""
        grade, rng = self.grade, self.rng
        drift = _disc(rng, grade.drift_db, self.frequency_hz)
        noise = rng.normal(size=value.shape) + 1j * rng.normal(size=value.shape)
        gain = _tracking(rng, grade.connection_db)
        return value * gain + drift + noise * 10 ** (-grade.noise_db / 20) / np.sqrt(2)

    def sweep_one_port(self, reflection: np.ndarray) -> np.ndarray:
        """(F,) reflection as port 1 shows it."""
        port = self.ports[0]
        seen = port.directivity + port.reflection_tracking * reflection / (
            1 - port.source_match * reflection
        )
        return self._as_seen(seen)

    def sweep_two_port(self, chain: Chain) -> Scattering:
        """Scattering parameters as seen; S12 and S22 zero when only one path is measured."""
        true = scattering_of_chain(chain)
        s11, s21 = self._direction(self.ports[0], true)
        if self.one_path:
            return Scattering(s11, np.zeros_like(s11), s21, np.zeros_like(s11))
        s22, s12 = self._direction(self.ports[1], true.reversed())
        return Scattering(s11, s12, s21, s22)

    def _direction(self, port: PortResiduals, s: Scattering) -> tuple[np.ndarray, np.ndarray]:
        determinant = s.s11 * s.s22 - s.s12 * s.s21
        below = (
            1 - port.source_match * s.s11 - port.load_match * s.s22
            + port.source_match * port.load_match * determinant
        )  # fmt: skip
        reflected = (s.s11 - port.load_match * determinant) / below
        through = s.s21 / below
        return (
            self._as_seen(port.directivity + port.reflection_tracking * reflected),
            self._as_seen(port.isolation + port.transmission_tracking * through),
        )
