"""The methods: from the sweeps of a build to efficiency and match over frequency.

Each function computes one method on one grid. The algebra takes draws in front of the frequency.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from reportgen.model import (
    Band,
    BuildSheet,
    ComplexArray,
    Curves,
    Finding,
    Fitted,
    Method,
    RealArray,
    Severity,
)
from reportgen.physics.bisection import (
    Halved,
    halve_pair,
    section_ratio,
    unit_of_pair,
)
from reportgen.physics.grid import Grid, common_grid
from reportgen.physics.network import (
    Chain,
    Scattering,
    efficiency_ratio,
    reflection_ratio,
)
from reportgen.physics.pairs import (
    Pair,
    oriented_scatterings,
    pair_findings,
    scattering_of_pair,
)
from reportgen.physics.winding import (
    Circuit,
    Frame,
    arms_of,
    circuit_ratio,
    fit_circuit,
    low_capacitor_s,
)


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Solved:
    """What one method gives over frequency, before it is put into bands."""

    method: Method
    unit: str | None
    units: tuple[str, ...]
    load_ohm: float
    curves: Curves
    reason: str | None = None
    fitted: tuple[Fitted, ...] = ()
    findings: tuple[Finding, ...] = ()


@dataclass(frozen=True, slots=True, eq=False)
class ClosedPair:
    """A pair on a grid of its own, and the circuit that closes it."""

    pair: Pair
    grid: Grid
    circuit: Circuit


# --- pairs alone ---------------------------------------------------------------------------------


def close_pair(pair: Pair, sheet: BuildSheet, bands: Sequence[Band]) -> ClosedPair:
    """A pair with its equivalent circuit, fitted on its own points.

    Raises
    ------
    NotMeasurable
        The sweeps of the pair share no range.
    """
    grid = common_grid(pair.sweeps, bands)
    swept_hz = grid.frequency_hz[grid.native]
    halved = halve_pair(pair_scattering(pair, swept_hz))
    return ClosedPair(pair, grid, fit_circuit(halved, frame_of_sheet(sheet), swept_hz))


def pair_scattering(pair: Pair, frequency_hz: RealArray) -> Scattering:
    """A pair's scattering matrix at frequencies within its sweeps."""
    return scattering_of_pair(pair, oriented_scatterings(pair, frequency_hz))


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


def closing_ratio(halved: Halved, circuit: Circuit, frequency_hz: RealArray) -> ComplexArray:
    """Voltage ratio A of a unit, its high side open, from a pair alone [ratio].

    By the fitted circuit, or by the lumped section at each frequency where no circuit fits.
    """
    frame = circuit.frame
    if not circuit.believed:
        capacitor_s = low_capacitor_s(frame, frequency_hz)
        return section_ratio(halved, capacitor_s, frame.turns_ratio)
    arms = arms_of(circuit.parameters, frame, frequency_hz)
    return circuit_ratio(halved, arms) / frame.turns_ratio


def curves_of_chain(chain: Chain, grid: Grid, sheet: BuildSheet, pair: Scattering) -> Curves:
    """Efficiency and match with the nominal load, and the pair's halved figure beside them."""
    load_ohm = sheet.nominal_load_ohm
    return Curves(
        frequency_hz=grid.frequency_hz,
        native=grid.native,
        efficiency_ratio=efficiency_ratio(chain, load_ohm),
        reflection_ratio=reflection_ratio(chain, load_ohm, sheet.match.source_ohm),
        halved_pair_ratio=np.abs(pair.s21),
    )


def halving(closed: ClosedPair, sheet: BuildSheet) -> Solved:
    """Half of the through loss of a pair: common practice, and not the loss of a unit."""
    s = pair_scattering(closed.pair, closed.grid.frequency_hz)
    return Solved(
        method=Method.HALVING,
        unit=None,
        units=closed.pair.units,
        load_ohm=sheet.nominal_load_ohm,
        curves=Curves(
            frequency_hz=closed.grid.frequency_hz,
            native=closed.grid.native,
            halved_pair_ratio=np.abs(s.s21),
        ),
        reason="half of a through loss holds the mismatch between the two units: it is not the "
        "heat loss of one",
    )


def bisection(closed: ClosedPair, sheet: BuildSheet) -> Solved:
    """The mean of two units from their pair alone."""
    hz = closed.grid.frequency_hz
    s = pair_scattering(closed.pair, hz)
    halved = halve_pair(s)
    chain = unit_of_pair(halved, closing_ratio(halved, closed.circuit, hz))
    return Solved(
        method=Method.BISECTION,
        unit=None,
        units=closed.pair.units,
        load_ohm=sheet.nominal_load_ohm,
        curves=curves_of_chain(chain, closed.grid, sheet, s),
        findings=(*pair_findings(closed.pair), *_circuit_findings(closed)),
    )


def _circuit_findings(closed: ClosedPair) -> tuple[Finding, ...]:
    if closed.circuit.believed:
        return ()
    return (
        Finding(
            severity=Severity.WARNING,
            code="no-circuit-fits",
            file=closed.pair.sweeps[0].file,
            message="the pair behaves like no winding with the turns and the capacitor entered "
            f"(misfit {closed.circuit.misfit_ratio:.3f} where "
            "0.02 is allowed); each frequency was closed by itself, which may be 0.2 dB off",
            remedy="check turns and capacitor in build.toml and the calibration, or sweep the "
            "units with a known load",
        ),
    )
