"""Sweeps and artefacts as they may really be: an axis of draws in front of the frequency.

Contributions can be drawn one by one, which gives the budget.
"""

from __future__ import annotations

from collections.abc import Mapping
from enum import StrEnum

import numpy as np

from reportgen.model import (
    Calibration,
    ComplexArray,
    Load,
    Measurement,
    RealArray,
    Setup,
)
from reportgen.physics.grid import resampled
from reportgen.physics.network import Scattering, reflection_of_impedance
from reportgen.physics.residuals import (
    Limits,
    PortResiduals,
    disc,
    gain,
    generator,
    limits_of,
    one_path_corrected,
    reflection_corrected,
    trace_noise_ratio,
    two_port_corrected,
)
from reportgen.physics.seen import Seen, View
from reportgen.physics.winding import SPREAD
from reportgen.physics.winding_fit import Circuit, refitted


class Contribution(StrEnum):
    """What makes a figure uncertain."""

    NOISE = "noise"
    DIRECTIVITY = "directivity"
    SOURCE_MATCH = "source match"
    LOAD_MATCH = "load match"
    TRACKING = "tracking"
    ISOLATION = "isolation"
    DRIFT = "drift and connection"
    LOAD = "load resistor"
    UNMEASURED = "path not measured"
    CLOSING = "closing of the half"


ALL = frozenset(Contribution)

UNMEASURED_RATIO = 0.02
"""Standard deviation of S22 - S11 of a pair of like units, where S22 was not measured [ratio]."""

STATED_STRAY_F = 0.3e-12
"""Standard deviation of a stray capacitance that the sidecar states [F]."""

CLOSING_RATIO = 0.004
"""By what the closing of a half may be off at 10 MHz, as a standard deviation [ratio]."""

_SILENT_DB = 400.0
_PERCENT = 0.01


class Drawn(Seen):
    """Draws of every input of one build; arrays are (K, F).

    Parameters
    ----------
    calibrations : mapping of str to Calibration
        By name; a sweep without one counts as handheld, on a calibration of its build's own.
    owner : str
        The build's key.
    draws : int
        How many.
    contributions : frozenset of Contribution
        What is drawn; everything else stays as it was seen.
    """

    def __init__(
        self,
        calibrations: Mapping[str, Calibration],
        owner: str,
        draws: int,
        contributions: frozenset[Contribution] = ALL,
    ) -> None:
        self.calibrations, self.owner, self.draws = calibrations, owner, draws
        self.contributions = contributions
        self._circuits: dict[int, tuple[Circuit, Circuit]] = {}
        self._sweeps: dict[tuple[str, bytes], Scattering] = {}
        self._ports: dict[tuple[object, ...], PortResiduals] = {}

    # --- sweeps ----------------------------------------------------------------------------------

    def one_port(self, one: Measurement, frequency_hz: RealArray) -> ComplexArray:
        """Draws of the reflection of a one-port sweep, or at port 1 of a two-port sweep."""
        if one.sweep.ports == 2:
            return self.two_port(one, frequency_hz).s11
        seen = self._as_connected(one, frequency_hz, 0, 0)
        return reflection_corrected(seen, self._port(one, frequency_hz, 1))

    def two_port(self, one: Measurement, frequency_hz: RealArray) -> Scattering:
        """Draws of a two-port sweep; the same ones each time they are asked for."""
        key = (one.sweep.sha256, frequency_hz.tobytes())
        if key not in self._sweeps:
            self._sweeps[key] = self._two_port(one, frequency_hz)
        return self._sweeps[key]

    def _two_port(self, one: Measurement, frequency_hz: RealArray) -> Scattering:
        s11 = self._as_connected(one, frequency_hz, 0, 0)
        s21 = self._as_connected(one, frequency_hz, 1, 0)
        forward = self._port(one, frequency_hz, 1)
        if one.sweep.one_path:
            guess = self._unmeasured(one, s11, frequency_hz)
            found = one_path_corrected(s11, s21, forward, guess)
            if one.entry.setup is not Setup.BACK_TO_BACK:
                return found
            return Scattering(found.s11, found.s12, found.s21, found.s11 + guess - s11)
        s22 = self._as_connected(one, frequency_hz, 1, 1)
        s12 = self._as_connected(one, frequency_hz, 0, 1)
        seen = Scattering(s11, s12, s21, s22)
        return two_port_corrected(seen, forward, self._port(one, frequency_hz, 2))

    def _as_connected(
        self, one: Measurement, frequency_hz: RealArray, i: int, j: int
    ) -> ComplexArray:
        """One parameter without this sweep's noise, drift and connection."""
        swept = resampled(one.sweep, frequency_hz)[i, j]
        added, factor = self._of_the_moment(one, frequency_hz, 2 * i + j)
        return np.asarray((swept - added) / factor)

    def as_swept_again(
        self, one: Measurement, shown: ComplexArray, frequency_hz: RealArray, which: int
    ) -> ComplexArray:
        """What the analyzer shows, with a sweep's noise, drift and connection on it."""
        added, factor = self._of_the_moment(one, frequency_hz, which)
        return np.asarray(shown * factor + added)

    def _of_the_moment(
        self, one: Measurement, frequency_hz: RealArray, which: int
    ) -> tuple[ComplexArray, RealArray]:
        """Draws of what one sweep alone has: noise and drift (K, F), and a gain (K, 1)."""
        limits = self._limits(one)
        rng = generator("sweep", one.sweep.sha256, which)
        noise = rng.normal(size=(2, self.draws, frequency_hz.size)) / np.sqrt(2)
        level = self._if(Contribution.NOISE, self._noise_ratio(one, which, limits))
        drift_db = self._if(Contribution.DRIFT, limits.drift_db, _SILENT_DB)
        connection_db = self._if(Contribution.DRIFT, limits.connection_db)
        drift = disc(rng, self.draws, drift_db, frequency_hz)
        factor = gain(rng, self.draws, connection_db)
        return np.asarray(drift + level * (noise[0] + 1j * noise[1])), factor

    def _noise_ratio(self, one: Measurement, which: int, limits: Limits) -> float:
        """As the sidecar states it, as the trace shows it, or as the grade assumes [ratio]."""
        calibration = self.calibrations.get(one.entry.calibration or "", Calibration())
        seen = trace_noise_ratio(one.sweep.s[:, which // 2, which % 2])
        if calibration.noise_db is not None or seen is None:
            return float(10 ** (-limits.noise_db / 20))
        return seen

    def _unmeasured(
        self, one: Measurement, s11: ComplexArray, frequency_hz: RealArray
    ) -> ComplexArray:
        """S22 of a one-path sweep: that of a pair is like S11, that of a resistor is known."""
        if one.entry.setup is Setup.SERIES_RESISTOR and one.load is not None:
            behind_ohm = 2 * one.load.resistance_ohm
            return np.full_like(s11, reflection_of_impedance(behind_ohm))
        if one.entry.setup is not Setup.BACK_TO_BACK:
            return s11
        rng = generator("unmeasured", self.owner, *sorted(one.entry.pair))
        off = self._smooth(rng, frequency_hz)
        return np.asarray(s11 + self._if(Contribution.UNMEASURED, UNMEASURED_RATIO) * off)

    def _smooth(self, rng: np.random.Generator, frequency_hz: RealArray) -> ComplexArray:
        """(K, F) complex draws of unit variance that bend little over 30 MHz."""
        x = frequency_hz / 30e6
        parts = rng.normal(size=(3, 2, self.draws, 1)) / np.sqrt(2)
        a, b, c = parts[:, 0] + 1j * parts[:, 1]
        return np.asarray((a + b * np.cos(np.pi * x) + c * np.sin(np.pi * x)) / np.sqrt(2))

    # --- calibrations ----------------------------------------------------------------------------

    def _name(self, one: Measurement) -> str:
        name = one.entry.calibration
        return f"of {self.owner}" if name is None else name

    def _limits(self, one: Measurement) -> Limits:
        return limits_of(self.calibrations.get(one.entry.calibration or "", Calibration()))

    def ports(
        self, one: Measurement, frequency_hz: RealArray
    ) -> tuple[PortResiduals, PortResiduals]:
        """The residuals that a sweep was taken with, forward and backward."""
        return self._port(one, frequency_hz, 1), self._port(one, frequency_hz, 2)

    def _port(self, one: Measurement, frequency_hz: RealArray, port: int) -> PortResiduals:
        """The residuals of one direction, the same for every sweep of a calibration."""
        key = (self._name(one), one.sweep.one_path, port, frequency_hz.tobytes())
        if key not in self._ports:
            self._ports[key] = self._drawn_port(one, frequency_hz, port)
        return self._ports[key]

    def _drawn_port(self, one: Measurement, frequency_hz: RealArray, port: int) -> PortResiduals:
        limits, name = self._limits(one), self._name(one)
        match_db = limits.one_path_load_match_db if one.sweep.one_path else limits.load_match_db

        def residual(what: Contribution, limit_db: float) -> ComplexArray:
            limit_db = self._if(what, limit_db, _SILENT_DB)
            rng = generator("calibration", name, port, what)
            return disc(rng, self.draws, limit_db, frequency_hz)

        def tracking(which: str) -> RealArray:
            limit_db = self._if(Contribution.TRACKING, limits.tracking_db)
            return gain(generator("calibration", name, port, which), self.draws, limit_db)

        return PortResiduals(
            residual(Contribution.DIRECTIVITY, limits.directivity_db),
            residual(Contribution.SOURCE_MATCH, limits.source_match_db),
            residual(Contribution.LOAD_MATCH, match_db),
            tracking("reflection"),
            tracking("transmission"),
            residual(Contribution.ISOLATION, limits.isolation_db),
        )

    def _if(self, what: Contribution, value: float, otherwise: float = 0.0) -> float:
        return value if what in self.contributions else otherwise

    # --- artefacts -------------------------------------------------------------------------------

    def resistance_ohm(self, name: str, load: Load) -> RealArray:
        """Draws of a load's resistance, uniform within its tolerance, (K, 1) [ohm]."""
        half_width = self._if(Contribution.LOAD, _PERCENT * load.tolerance_percent)
        rng = generator("load", name, load.resistance_ohm)
        off = rng.uniform(-half_width, half_width, size=(self.draws, 1))
        return np.asarray(load.resistance_ohm * (1 + off))

    def body_f(self, name: str, load: Load) -> RealArray:
        """Draws of the capacitance across a load's body: itself, give or take as much, (K, 1)."""
        body_f = load.body_pf * 1e-12
        half_width = self._if(Contribution.LOAD, body_f)
        rng = generator("body", name, load.resistance_ohm)
        return np.asarray(body_f + rng.uniform(-half_width, half_width, size=(self.draws, 1)))

    def stray_f(self, name: str, entered_pf: float) -> RealArray:
        """Draws of a stray capacitance that the sidecar states, (K, 1) [F]."""
        spread = self._if(Contribution.LOAD, STATED_STRAY_F)
        rng = generator("stray", name, entered_pf)
        return np.asarray(entered_pf * 1e-12 + spread * rng.normal(size=(self.draws, 1)))

    # --- closing ---------------------------------------------------------------------------------

    def circuit(self, circuit: Circuit, view: View) -> Circuit:
        """The circuit as fitted to the draws, its expectations drawn too."""
        if id(circuit) not in self._circuits:
            rng = generator("circuit", self.owner, circuit.parameters.tobytes())
            expected = rng.normal(size=(self.draws, SPREAD.size))
            expected = self._if(Contribution.CLOSING, 1.0) * expected
            drawn, _ = view(circuit.points_hz, self)
            self._circuits[id(circuit)] = (circuit, refitted(circuit, drawn, expected))
        return self._circuits[id(circuit)][1]

    def closing_ratio(self, circuit: Circuit, frequency_hz: RealArray) -> ComplexArray:
        """Draws of a factor by which the closing is off."""
        rng = generator("closing", self.owner, circuit.parameters.tobytes())
        spread = CLOSING_RATIO * (1 + frequency_hz / 10e6)
        spread = self._if(Contribution.CLOSING, 1.0) * spread
        return np.asarray(np.exp(spread * self._smooth(rng, frequency_hz)))
