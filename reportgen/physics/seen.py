"""How sweeps and known artefacts enter a method: as they stand, or as they may really be.

A method asks a `Seen` for its inputs. This one gives every sweep as it was taken and every value
as it was entered; another gives draws of both, with an axis of draws in front of the frequency.
"""

from __future__ import annotations

from collections.abc import Callable

import numpy as np

from reportgen.model import ComplexArray, Load, Measurement, RealArray
from reportgen.physics.bisection import Halved
from reportgen.physics.grid import resampled
from reportgen.physics.network import Scattering
from reportgen.physics.winding_fit import Circuit

View = Callable[[RealArray, "Seen"], tuple[Halved, RealArray | None]]
"""Gives a half at frequencies, and the root of its pair's through power if it has one [ratio]."""


class Seen:
    """Sweeps as taken, values as entered; arrays are (F,)."""

    def one_port(self, one: Measurement, frequency_hz: RealArray) -> ComplexArray:
        """Reflection of a one-port sweep, or at port 1 of a two-port sweep [ratio]."""
        return np.asarray(resampled(one.sweep, frequency_hz)[0, 0])

    def two_port(self, one: Measurement, frequency_hz: RealArray) -> Scattering:
        """A two-port sweep; what was not measured is taken from symmetry.

        A one-path sweep gives S22 = S11, a guess, and S12 = S21, which reciprocity makes sure.
        """
        s = resampled(one.sweep, frequency_hz)
        if one.sweep.one_path:
            return Scattering(s[0, 0], s[1, 0], s[1, 0], s[0, 0])
        return Scattering(s[0, 0], s[0, 1], s[1, 0], s[1, 1])

    def resistance_ohm(self, name: str, load: Load) -> float | RealArray:
        """Resistance of the load called `name` [ohm]; draws are (K, 1)."""
        del name
        return load.resistance_ohm

    def body_f(self, name: str, load: Load) -> float | RealArray:
        """Capacitance across the load's body, in series set-ups [F]; draws are (K, 1)."""
        del name
        return load.body_pf * 1e-12

    def stray_f(self, name: str, entered_pf: float) -> float | RealArray:
        """A stray capacitance that the sidecar states [F]; draws are (K, 1)."""
        del name
        return entered_pf * 1e-12

    def circuit(self, circuit: Circuit, view: View) -> Circuit:
        """The equivalent circuit of the half that `view` gives; draws have (K, 12) parameters."""
        del view
        return circuit

    def closing_ratio(self, circuit: Circuit, frequency_hz: RealArray) -> float | ComplexArray:
        """By what the closing of a half may be off, as a factor of the voltage ratio [ratio]."""
        del circuit, frequency_hz
        return 1.0


AS_SWEPT = Seen()
