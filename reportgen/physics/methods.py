"""The methods as plans: which sweeps each needs, and how figures follow from them.

A plan computes at any frequencies within its sweeps, from the sweeps as taken or from draws.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, field, replace

import numpy as np

from reportgen.errors import NotMeasurable
from reportgen.model import (
    BuildSheet,
    ComplexArray,
    Finding,
    Method,
    RealArray,
    Severity,
    Sweep,
)
from reportgen.physics.bisection import (
    Halved,
    StrayFit,
    fit_stray,
    load_squared,
    ratio_by_load,
    section_arms,
    unit_of_pair,
)
from reportgen.physics.grid import common_grid
from reportgen.physics.halves import Half
from reportgen.physics.loads import LoadSweeps, resistor_s
from reportgen.physics.network import (
    Chain,
    efficiency_ratio,
    impedance_of_reflection,
    reflection_ratio,
)
from reportgen.physics.pairs import Pair, pair_scattering
from reportgen.physics.seen import AS_SWEPT, Seen
from reportgen.physics.winding import (
    Arms,
    Frame,
    arms_of,
    arms_seen,
    low_capacitor_s,
    open_ratio,
)
from reportgen.physics.winding_fit import MISFIT_LIMIT, Circuit, fit_circuit

_MOST_THROUGH = 1.05
_MOST_GAIN_SHARE = 0.05

NOT_DETERMINED_PF = 3.0
"""A stray known no better than this is not determined by the data [pF]."""


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Computed:
    """What a plan gives over frequency; each (..., F), None: not measured by this method.

    `chain` is the unit itself, `arms` its circuit, `strays` the fits of each load by name.
    """

    efficiency_ratio: RealArray | None = None
    reflection_ratio: RealArray | None = None
    halved_pair_ratio: RealArray | None = None
    chain: Chain | None = None
    arms: Arms | None = None
    strays: Mapping[str, StrayFit] = field(default_factory=dict)


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Plan:
    """One method on one set of sweeps.

    `unit` is None for a mean over `units`; `load_ohm` is the load that the figures hold for. Where
    they hold for what was really on the high side instead, `had` is what was there. `readings`:
    single readings, with nothing between them.
    """

    method: Method
    unit: str | None
    units: tuple[str, ...]
    load_ohm: float
    sweeps: tuple[Sweep, ...]
    compute: Callable[[RealArray, Seen], Computed]
    had: LoadSweeps | None = None
    readings: bool = False
    reason: str | None = None
    findings: tuple[Finding, ...] = ()


# --- halves and what closes them -----------------------------------------------------------------


@dataclass(frozen=True, slots=True, eq=False)
class ClosedHalf:
    """A half with the equivalent circuit that was fitted to it."""

    half: Half
    circuit: Circuit

    def arms(self, halved: Halved, frequency_hz: RealArray, seen: Seen) -> Arms:
        """The circuit as the half shows it; the lumped section where no circuit fits."""
        frame = self.circuit.frame
        if self.circuit.believed:
            circuit = seen.circuit(self.circuit, self.half.view)
            return arms_seen(halved, arms_of(circuit.parameters, frame, frequency_hz))
        capacitor_s = low_capacitor_s(frame, frequency_hz)
        series_ohm, shunt_s = section_arms(halved, capacitor_s)
        nothing = np.zeros_like(series_ohm)
        wire_ohm = series_ohm.real
        return Arms(nothing, capacitor_s, series_ohm, shunt_s, nothing, np.zeros(1), wire_ohm)

    def expected_ratio(self, arms: Arms, frequency_hz: RealArray, seen: Seen) -> ComplexArray:
        """Voltage ratio A of the unit, high side open, without any load sweep [ratio]."""
        off = seen.closing_ratio(self.circuit, frequency_hz)
        return np.asarray(open_ratio(arms) / self.circuit.frame.turns_ratio * off)


def close_half(half: Half, sheet: BuildSheet) -> ClosedHalf:
    """A half with its equivalent circuit, fitted on the swept points that it has.

    Raises
    ------
    NotMeasurable
        Its sweeps share no range.
    """
    grid = common_grid(half.sweeps, ())
    halved, through = half.view(grid.frequency_hz, AS_SWEPT)
    _refuse_what_is_no_half(half, halved, through)
    return ClosedHalf(half, fit_circuit(halved, frame_of_sheet(sheet), grid.frequency_hz))


def _refuse_what_is_no_half(half: Half, halved: Halved, through: RealArray | None) -> None:
    files = ", ".join(sweep.file for sweep in half.sweeps)
    if not all(np.isfinite(part).all() for part in (halved.z_open_ohm, halved.p, halved.q)):
        raise NotMeasurable(
            f"{files}: nothing passes, or open and short look the same: this is no pair of "
            "transformers"
        )
    if through is not None and np.mean(through**2 > _MOST_THROUGH) > _MOST_GAIN_SHARE:
        raise NotMeasurable(f"{files}: more comes out than goes in; no passive pair does that")


def frame_of_sheet(sheet: BuildSheet) -> Frame:
    """What the sidecar says of a build's circuit."""
    capacitor = sheet.compensation
    farad = capacitor.capacitor_pf * 1e-12
    low = capacitor.side == "low"
    return Frame(
        turns_ratio=sheet.winding.turns_ratio,
        low_capacitor_f=farad if low else 0.0,
        low_capacitor_spread=capacitor.tolerance_percent / 100 / np.sqrt(3),
        high_capacitor_f=0.0 if low else farad,
        loss_tangent=capacitor.loss_tangent or 0.0,
    )


def computed_of_chain(chain: Chain, sheet: BuildSheet, through: RealArray | None) -> Computed:
    """Efficiency and match of a unit with the nominal load."""
    load_ohm = sheet.nominal_load_ohm
    return Computed(
        efficiency_ratio=efficiency_ratio(chain, load_ohm),
        reflection_ratio=reflection_ratio(chain, load_ohm, sheet.match.source_ohm),
        halved_pair_ratio=through,
        chain=chain,
    )


def closed_by_circuit(closed: ClosedHalf, sheet: BuildSheet) -> Plan:
    """Bisection of a pair, or the like for one unit: nothing but the half and its circuit."""
    half = closed.half

    def compute(frequency_hz: RealArray, seen: Seen) -> Computed:
        halved, through = half.view(frequency_hz, seen)
        arms = closed.arms(halved, frequency_hz, seen)
        ratio = closed.expected_ratio(arms, frequency_hz, seen)
        return replace(computed_of_chain(unit_of_pair(halved, ratio), sheet, through), arms=arms)

    return Plan(
        method=half.alone,
        unit=half.unit,
        units=half.units,
        load_ohm=sheet.nominal_load_ohm,
        sweeps=half.sweeps,
        compute=compute,
        findings=(*half.findings, *_circuit_findings(closed)),
    )


def closed_by_loads(closed: ClosedHalf, loads: Sequence[LoadSweeps], sheet: BuildSheet) -> Plan:
    """A half closed by load sweeps of its units; t^2 is the mean over units and loads.

    Parameters
    ----------
    closed : ClosedHalf
        The half, and the circuit that tells the loads' strays.
    loads : sequence of LoadSweeps
        At least one, all of units of the half.
    sheet : BuildSheet
        For the nominal load.
    """
    half = closed.half

    def compute(frequency_hz: RealArray, seen: Seen) -> Computed:
        halved, through = half.view(frequency_hz, seen)
        arms = closed.arms(halved, frequency_hz, seen)
        expected = closed.expected_ratio(arms, frequency_hz, seen)
        squared = [
            load_squared(halved, impedance_of_reflection(one.reflection(frequency_hz, seen)))
            for one in loads
        ]
        strays = _fit_strays(loads, squared, expected, frequency_hz, seen)
        admittances_s = [
            resistor_s(one, frequency_hz, seen)
            + 2j * np.pi * frequency_hz * used_stray_f(one, strays[one.stray_key], seen)
            for one in loads
        ]
        mean = np.mean([s * y for s, y in zip(squared, admittances_s, strict=True)], axis=0)
        chain = unit_of_pair(halved, ratio_by_load(mean, 1.0, expected))
        return replace(computed_of_chain(chain, sheet, through), arms=arms, strays=strays)

    return Plan(
        method=half.loaded,
        unit=half.unit,
        units=half.units,
        load_ohm=sheet.nominal_load_ohm,
        sweeps=(*half.sweeps, *(one.sweep for sweeps in loads for one in sweeps.measurements)),
        compute=compute,
        findings=(*half.findings, *_circuit_findings(closed)),
    )


def _fit_strays(
    loads: Sequence[LoadSweeps],
    squared: Sequence[ComplexArray],
    expected: ComplexArray,
    frequency_hz: RealArray,
    seen: Seen,
) -> dict[str, StrayFit]:
    """The stray of each load, from the mean over the units swept with it."""
    fits = {}
    for name in dict.fromkeys(one.stray_key for one in loads):
        same = [(one, s) for one, s in zip(loads, squared, strict=True) if one.stray_key == name]
        mean = np.mean([s for _, s in same], axis=0)
        known_s = resistor_s(same[0][0], frequency_hz, seen)
        fits[name] = fit_stray(mean, expected, known_s, frequency_hz)
    return fits


def used_stray_f(sweeps: LoadSweeps, fit: StrayFit, seen: Seen) -> float | RealArray:
    """The stray to compute with, (..., 1): stated, or fitted where the data determine it [F]."""
    if sweeps.load.stray_pf != "fit":
        return seen.stray_f(sweeps.name, sweeps.load.stray_pf)
    determined = fit.spread_f <= NOT_DETERMINED_PF * 1e-12
    return np.where(determined, fit.stray_f, 0.0)[..., None]


def _circuit_findings(closed: ClosedHalf) -> tuple[Finding, ...]:
    if closed.circuit.believed:
        return ()
    return (
        Finding(
            severity=Severity.WARNING,
            code="no-circuit-fits",
            file=closed.half.sweeps[0].file,
            message="the sweeps look like no winding with the turns and the capacitor entered "
            f"(misfit {closed.circuit.misfit_ratio:.3f} where {MISFIT_LIMIT} is allowed); each "
            "frequency was closed by itself, which may be 0.2 dB off",
            remedy="check turns and capacitor in build.toml and the calibration, or sweep the "
            "units with a known load",
        ),
    )


# --- half of the through loss --------------------------------------------------------------------


def halving(pair: Pair, sheet: BuildSheet) -> Plan:
    """Half of the through loss of a pair: common practice, and not the loss of a unit."""

    def compute(frequency_hz: RealArray, seen: Seen) -> Computed:
        return Computed(halved_pair_ratio=np.abs(pair_scattering(pair, frequency_hz, seen).s21))

    return Plan(
        method=Method.HALVING,
        unit=None,
        units=pair.units,
        load_ohm=sheet.nominal_load_ohm,
        sweeps=pair.sweeps,
        compute=compute,
        reason="half of a through loss holds the mismatch between the two units: it is not the "
        "heat loss of one",
    )
