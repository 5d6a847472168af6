"""Measurements without any fault, from units of known chain matrix."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from simulation.bench import matrix_of, sweep_of
from two_ports import back_to_back

from reportgen.model import (
    Build,
    BuildSheet,
    Compensation,
    Curves,
    Load,
    Measurement,
    RealArray,
    Setup,
    SweepEntry,
    Winding,
)
from reportgen.physics.network import (
    Chain,
    input_impedance_ohm,
    reflection_of_impedance,
    resistor_ohm,
)


def pair_swept(
    frequency_hz: RealArray,
    units: dict[str, Chain],
    *,
    file: str = "pair.s2p",
    one_path: bool = False,
    wrong_way_round: bool = False,
) -> Measurement:
    """Two units back to back, the first of the two on port 1."""
    first, second = units
    s = back_to_back(units[first], units[second])
    matrices = matrix_of(s.negated() if wrong_way_round else s)
    if one_path:
        matrices[:, :, 1] = 0
    return Measurement(
        entry=SweepEntry(file=file, setup=Setup.BACK_TO_BACK, units=(first, second)),
        sweep=sweep_of(file, frequency_hz, matrices, one_path=one_path),
    )


def load_swept(
    frequency_hz: RealArray,
    unit: str,
    chain: Chain,
    load: Load,
    *,
    true_pf: float = 0.0,
    true_ohm: float | None = None,
    file: str | None = None,
) -> Measurement:
    """A unit with a resistor on its high side, which may differ from what is entered."""
    z = resistor_ohm(true_ohm or load.resistance_ohm, true_pf * 1e-12, frequency_hz)
    gamma = reflection_of_impedance(input_impedance_ohm(chain, z))
    file = file or f"{unit.lower()}-load.s1p"
    return Measurement(
        entry=SweepEntry(file=file, setup=Setup.LOAD, unit=unit, load="main"),
        sweep=sweep_of(file, frequency_hz, gamma[:, None, None]),
        load=load,
    )


def sheet_of(low_turns: float, high_turns: float, capacitor_pf: float = 0.0) -> BuildSheet:
    """The sidecar of a build, as short as it can be."""
    return BuildSheet(
        name="Simulated",
        winding=Winding(low_turns=low_turns, high_turns=high_turns),
        compensation=Compensation(capacitor_pf=capacitor_pf),
    )


def build_of(sheet: BuildSheet, measurements: Sequence[Measurement], key: str = "alder") -> Build:
    """A build as it comes from its folder."""
    return Build(key=key, folder=key, sheet=sheet, measurements=tuple(measurements))


def curves_of(
    frequency_hz: RealArray,
    efficiency: RealArray | float | None = None,
    reflection: RealArray | float | None = None,
    halved: RealArray | float | None = None,
    native: np.ndarray | None = None,
) -> Curves:
    """Curves, a single number standing for a flat one."""

    def flat(value: RealArray | float | None) -> RealArray | None:
        return None if value is None else np.broadcast_to(value, frequency_hz.shape).astype(float)

    return Curves(
        frequency_hz=frequency_hz,
        native=np.ones(frequency_hz.shape, bool) if native is None else native,
        efficiency_ratio=flat(efficiency),
        reflection_ratio=flat(reflection),
        halved_pair_ratio=flat(halved),
    )
