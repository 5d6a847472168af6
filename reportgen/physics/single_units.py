"""Methods that need one unit and no half: load sweep alone, series resistor, straight through."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from reportgen.model import BuildSheet, Measurement, Method, RealArray, Setup
from reportgen.physics.loads import LoadSweeps, load_had_ohm
from reportgen.physics.methods import Computed, Plan, computed_of_chain
from reportgen.physics.network import (
    ANALYZER_OHM,
    Scattering,
    chain_of_scattering,
    impedance_of_reflection,
    reflection_of_impedance,
)
from reportgen.physics.seen import Seen


def load_only(sweeps: LoadSweeps, sheet: BuildSheet) -> Plan:
    """The match of one unit with the load it had; loss is not measured so."""

    def compute(frequency_hz: RealArray, seen: Seen) -> Computed:
        z_in_ohm = impedance_of_reflection(sweeps.reflection(frequency_hz, seen))
        gamma = reflection_of_impedance(z_in_ohm, sheet.match.source_ohm)
        return Computed(reflection_ratio=np.abs(gamma) ** 2)

    return Plan(
        method=Method.LOAD_ONLY,
        unit=sweeps.unit,
        units=(sweeps.unit,),
        load_ohm=sweeps.load.resistance_ohm,
        sweeps=tuple(one.sweep for one in sweeps.measurements),
        compute=compute,
        reason="loss is not measured: a load sweep shows the match only; sweep two units back "
        "to back to get it",
    )


def series_resistor(sweeps: LoadSweeps, sheet: BuildSheet) -> Plan:
    """One unit with its high side through a known resistor to port 2.

    Notes
    -----
    efficiency = |S21|^2 (Re(Zs + 50)/50) / (1 - |S11|^2), into the load that it had, which is
    Zs + 50 ohm with whatever stray lies across it; port 2 is matched once the sweep is corrected.
    """

    def compute(frequency_hz: RealArray, seen: Seen) -> Computed:
        found = [seen.two_port(one, frequency_hz) for one in sweeps.measurements]
        s11 = np.mean([s.s11 for s in found], axis=0)
        s21 = np.mean([s.s21 for s in found], axis=0)
        load_ohm = load_had_ohm(sweeps, 0.0, frequency_hz, seen)
        entering = 1 - np.abs(s11) ** 2
        gamma = reflection_of_impedance(impedance_of_reflection(s11), sheet.match.source_ohm)
        return Computed(
            efficiency_ratio=np.abs(s21) ** 2 * load_ohm.real / ANALYZER_OHM / entering,
            reflection_ratio=np.abs(gamma) ** 2,
        )

    return Plan(
        method=Method.SERIES_RESISTOR,
        unit=sweeps.unit,
        units=(sweeps.unit,),
        load_ohm=sweeps.load.resistance_ohm + ANALYZER_OHM,
        sweeps=tuple(one.sweep for one in sweeps.measurements),
        compute=compute,
        had=sweeps,
    )


def direct_plans(measurements: Sequence[Measurement], sheet: BuildSheet) -> list[Plan]:
    """Each unit straight on the analyzer with both sides; needs both paths."""
    found: dict[str, list[Measurement]] = {}
    for one in measurements:
        if one.entry.setup is Setup.DIRECT and not one.sweep.one_path:
            found.setdefault(one.entry.unit or "A", []).append(one)
    return [_direct(unit, group, sheet) for unit, group in found.items()]


def _direct(unit: str, group: Sequence[Measurement], sheet: BuildSheet) -> Plan:
    def compute(frequency_hz: RealArray, seen: Seen) -> Computed:
        found = [seen.two_port(one, frequency_hz) for one in group]
        through = np.mean([(s.s12 + s.s21) / 2 for s in found], axis=0)
        mean = Scattering(
            np.mean([s.s11 for s in found], axis=0),
            through,
            through,
            np.mean([s.s22 for s in found], axis=0),
        )
        return computed_of_chain(chain_of_scattering(mean), sheet, None)

    return Plan(
        method=Method.DIRECT,
        unit=unit,
        units=(unit,),
        load_ohm=sheet.nominal_load_ohm,
        sweeps=tuple(one.sweep for one in group),
        compute=compute,
    )
