"""Load sweeps: low side swept, a known resistor on the high side."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from reportgen.model import (
    ComplexArray,
    Finding,
    Load,
    Measurement,
    RealArray,
    Setup,
    Severity,
)
from reportgen.physics.bisection import FIT_BOUND_PF, StrayFit
from reportgen.physics.network import ANALYZER_OHM
from reportgen.physics.seen import Seen

RESISTANCE_DOUBT = 0.1
"""A load that seems to differ by more than this part from what was entered is a finding."""

_STRAY_DOUBT_PF = 1.0


@dataclass(frozen=True, slots=True, eq=False)
class LoadSweeps:
    """The sweeps of one unit with one load, called `name` in the sidecar.

    `series`: the load is a resistor in series to port 2, so the port's 50 ohm belong to it.
    """

    unit: str
    name: str
    load: Load
    measurements: tuple[Measurement, ...]
    series: bool = False

    @property
    def stray_key(self) -> str:
        """What tells its stray from others: the same resistor sits elsewhere in series."""
        return f"{self.name}, in series" if self.series else self.name

    def reflection(self, frequency_hz: RealArray, seen: Seen) -> ComplexArray:
        """Mean of the sweeps at frequencies within all of them, (..., F) [ratio]."""
        found = [seen.one_port(one, frequency_hz) for one in self.measurements]
        return np.asarray(np.mean(found, axis=0))


def find_load_sweeps(measurements: Sequence[Measurement]) -> tuple[LoadSweeps, ...]:
    """Sweeps with a load by unit and load, in the order of their first sweep."""
    found: dict[tuple[str, str, Setup], list[Measurement]] = {}
    for one in measurements:
        if one.entry.setup in (Setup.LOAD, Setup.SERIES_RESISTOR) and one.load is not None:
            key = (one.entry.unit or "A", one.entry.load or "load", one.entry.setup)
            found.setdefault(key, []).append(one)
    return tuple(
        LoadSweeps(unit, name, load, tuple(group), series=setup is Setup.SERIES_RESISTOR)
        for (unit, name, setup), group in found.items()
        if (load := group[0].load) is not None
    )


def resistor_s(sweeps: LoadSweeps, frequency_hz: RealArray, seen: Seen) -> ComplexArray:
    """Admittance of what is on the high side, its stray to ground left out [siemens]."""
    conductance_s = 1 / np.asarray(seen.resistance_ohm(sweeps.name, sweeps.load))
    if not sweeps.series:
        return conductance_s + np.zeros_like(frequency_hz) * 1j
    omega = 2 * np.pi * frequency_hz
    body_s = conductance_s + 1j * omega * seen.body_f(sweeps.name, sweeps.load)
    return np.asarray(1 / (1 / body_s + ANALYZER_OHM))


def load_had_ohm(
    sweeps: LoadSweeps, stray_f: float | RealArray, frequency_hz: RealArray, seen: Seen
) -> ComplexArray:
    """What was really on the high side, a stray of (..., 1) farad included [ohm]."""
    stray_s = 2j * np.pi * frequency_hz * stray_f
    return np.asarray(1 / (resistor_s(sweeps, frequency_hz, seen) + stray_s))


def load_findings(sweeps: LoadSweeps, fit: StrayFit) -> tuple[Finding, ...]:
    """Where the sweeps contradict what the sidecar says of a load."""
    return (*_stray_findings(sweeps, fit), *_resistance_findings(sweeps, fit))


def _stray_findings(sweeps: LoadSweeps, fit: StrayFit) -> tuple[Finding, ...]:
    stray_pf, spread_pf = float(fit.stray_f) * 1e12, float(fit.spread_f) * 1e12
    entered = sweeps.load.stray_pf
    if abs(stray_pf) >= FIT_BOUND_PF:
        return (
            Finding(
                severity=Severity.WARNING,
                code="stray-at-bound",
                file=sweeps.measurements[0].sweep.file,
                key=f"loads.{sweeps.name}.stray_pf",
                message="the fit of the load's stray capacitance ran to its bound of "
                f"{stray_pf:.0f} pF",
                remedy="check which load and which unit this sweep belongs to",
            ),
        )
    if entered == "fit" or abs(stray_pf - entered) <= max(_STRAY_DOUBT_PF, 2 * spread_pf):
        return ()
    return (
        Finding(
            severity=Severity.WARNING,
            code="stray-contradicted",
            file=sweeps.measurements[0].sweep.file,
            key=f"loads.{sweeps.name}.stray_pf",
            message=f"the sidecar says {entered:g} pF, the sweeps say {stray_pf:.1f} pF; "
            "the sidecar's value was used",
            remedy='set stray_pf = "fit", or measure the resistor on its leads again',
        ),
    )


def _resistance_findings(sweeps: LoadSweeps, fit: StrayFit) -> tuple[Finding, ...]:
    ratio = float(fit.resistance_ratio)
    if abs(ratio - 1) <= RESISTANCE_DOUBT:
        return ()
    return (
        Finding(
            severity=Severity.WARNING,
            code="load-contradicted",
            file=sweeps.measurements[0].sweep.file,
            key=f"loads.{sweeps.name}.resistance_ohm",
            message=f"the sidecar says {sweeps.load.resistance_ohm:g} ohm; with the turns "
            f"entered, the sweeps look like {sweeps.load.resistance_ohm * ratio:.3g} ohm",
            remedy="check the load's value and the turns",
        ),
    )


def one_unit_only(units: Sequence[str], loads: Sequence[LoadSweeps]) -> tuple[Finding, ...]:
    """A note where a pair is closed by the load sweep of one of its units."""
    missing = [unit for unit in units if unit not in {one.unit for one in loads}]
    if not missing:
        return ()
    return (
        Finding(
            severity=Severity.NOTE,
            code="one-unit-loaded",
            file=loads[0].measurements[0].sweep.file,
            message=f"unit {missing[0]} was not swept with a load; unit {loads[0].unit} stands "
            "for both, so their difference is in the figures",
            remedy=f'add a sweep with setup = "load", unit = "{missing[0]}"',
        ),
    )
