"""One unit from three or more known terminations of any kind, by least squares.

References
----------
.. [1] G. A. Deschamps, J. Appl. Phys. 24, 1046-1050 (1953) (cited from memory).
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from reportgen.errors import NotMeasurable
from reportgen.model import (
    BuildSheet,
    ComplexArray,
    Finding,
    Measurement,
    Method,
    RealArray,
    Setup,
    Severity,
)
from reportgen.physics.grid import common_grid
from reportgen.physics.loads import LoadSweeps, load_had_ohm
from reportgen.physics.methods import Computed, Plan, computed_of_chain
from reportgen.physics.network import (
    ANALYZER_OHM,
    Scattering,
    chain_of_scattering,
    ideal_transformer,
    reflection_of_impedance,
)
from reportgen.physics.seen import AS_SWEPT, Seen

FEWEST = 3


@dataclass(frozen=True, slots=True, eq=False)
class Termination:
    """Sweeps of a unit with one thing on its high side; `load` None: open or short."""

    measurements: tuple[Measurement, ...]
    load: LoadSweeps | None = None

    def seen(self, frequency_hz: RealArray, seen: Seen) -> ComplexArray:
        """Reflection at the low side, (..., F) [ratio]."""
        found = [seen.one_port(one, frequency_hz) for one in self.measurements]
        return np.asarray(np.mean(found, axis=0))

    def known(self, frequency_hz: RealArray, seen: Seen, scale_ohm: float) -> ComplexArray:
        """Reflection of what is on the high side, re a resistance, (..., F) [ratio].

        A stray that was to be fitted is taken as none: without open and short nothing names it.
        """
        if self.load is None:
            short = self.measurements[0].entry.setup is Setup.SHORT
            return np.full(frequency_hz.shape, -1.0 if short else 1.0, dtype=complex)
        entered = self.load.load.stray_pf
        stray_f = 0.0 if entered == "fit" else seen.stray_f(self.load.name, entered)
        load_ohm = load_had_ohm(self.load, stray_f, frequency_hz, seen)
        return reflection_of_impedance(load_ohm, scale_ohm)


def known_load_plans(
    measurements: Sequence[Measurement], loads: Sequence[LoadSweeps], sheet: BuildSheet
) -> list[Plan]:
    """A plan for each unit with three or more terminations that are not open, short and loads."""
    plans = []
    for unit in dict.fromkeys(one.entry.unit or "A" for one in measurements):
        ends = [
            Termination(group)
            for setup in (Setup.OPEN, Setup.SHORT)
            if (group := _of(measurements, setup, unit))
        ]
        ended = len(ends) == len((Setup.OPEN, Setup.SHORT))
        ends += [Termination(one.measurements, one) for one in loads if one.unit == unit]
        if len(ends) >= FEWEST and not ended:
            plans.append(_plan(unit, ends, sheet))
    return plans


def _of(measurements: Sequence[Measurement], setup: Setup, unit: str) -> tuple[Measurement, ...]:
    return tuple(
        one for one in measurements if one.entry.setup is setup and (one.entry.unit or "A") == unit
    )


def _plan(unit: str, ends: Sequence[Termination], sheet: BuildSheet) -> Plan:
    scale_ohm = sheet.nominal_load_ohm

    def compute(frequency_hz: RealArray, seen: Seen) -> Computed:
        a, b, c, _ = _bilinear(ends, frequency_hz, seen, scale_ohm)
        through = np.sqrt(a - b * c)
        mixed = chain_of_scattering(Scattering(b, through, through, -c))
        chain = mixed @ ideal_transformer(np.sqrt(scale_ohm / ANALYZER_OHM))
        return computed_of_chain(chain, sheet, None)

    sweeps = tuple(one.sweep for end in ends for one in end.measurements)
    return Plan(
        method=Method.TERMINATIONS,
        unit=unit,
        units=(unit,),
        load_ohm=scale_ohm,
        sweeps=sweeps,
        compute=compute,
        findings=_residual(unit, ends, scale_ohm),
    )


def _bilinear(
    ends: Sequence[Termination], frequency_hz: RealArray, seen: Seen, scale_ohm: float
) -> tuple[ComplexArray, ComplexArray, ComplexArray, RealArray]:
    """The map from the load's reflection to the one seen, and the residual (..., F) [ratio].

    Notes
    -----
    seen = (a known + b)/(c known + 1) is linear in a, b, c [1]_: b = S11, c = -S22,
    a = S12^2 - S11 S22, the high side's parameters re `scale_ohm`, the low side's re 50 ohm.
    """
    knowns = [one.known(frequency_hz, seen, scale_ohm) for one in ends]
    parts = np.broadcast_arrays(*knowns, *(one.seen(frequency_hz, seen) for one in ends))
    known, shown = (np.stack(group, axis=-1) for group in (parts[: len(ends)], parts[len(ends) :]))
    rows = np.stack([known, np.ones_like(known), -known * shown], axis=-1)
    solution = np.linalg.pinv(rows) @ shown[..., None]
    off = np.abs((rows @ solution - shown[..., None])[..., 0])
    a, b, c = (solution[..., index, 0] for index in range(3))
    return a, b, c, np.sqrt(np.mean(off**2, axis=-1))


def _residual(unit: str, ends: Sequence[Termination], scale_ohm: float) -> tuple[Finding, ...]:
    """What more terminations than needed leave unexplained."""
    if len(ends) == FEWEST:
        return ()
    sweeps = [one.sweep for end in ends for one in end.measurements]
    try:
        hz = common_grid(sweeps, ()).frequency_hz
    except NotMeasurable:
        return ()  # the plan itself says so
    *_, residual = _bilinear(ends, hz, AS_SWEPT, scale_ohm)
    rms = float(np.sqrt(np.mean(residual**2)))
    return (
        Finding(
            severity=Severity.NOTE,
            code="terminations-residual",
            file=sweeps[0].file,
            message=f"{len(ends)} terminations of unit {unit} leave a residual of {rms:.4f} in "
            "reflection (root mean square)",
            remedy="compare it with the directivity of the calibration; a larger one means a load "
            "or its stray is not as entered",
        ),
    )
