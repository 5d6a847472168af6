"""A measured unit with parts of its circuit changed: other capacitor, other turns, other stack.

The unit is walked through part by part, volts and amperes from one side to the other. What its
measured chain holds beyond the circuit stays as it is, so that nothing changed gives the measured
unit back exactly.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from reportgen.model import ComplexArray, RealArray
from reportgen.physics.methods import Computed
from reportgen.physics.network import Chain, Impedance
from reportgen.physics.winding import Arms

Taking = Callable[[ComplexArray], ComplexArray]
_Pair = tuple[ComplexArray, ComplexArray]


@dataclass(frozen=True, kw_only=True, slots=True)
class Making:
    """How a build is made: turns of both sides, rings in the stack, capacitor.

    `capacitor_f` is (..., 1) or a number [F]; None: the one that is there.
    """

    low_turns: float
    high_turns: float
    stack: int = 1
    capacitor_f: float | RealArray | None = None

    @property
    def turns_ratio(self) -> float:
        """High-side turns over low-side turns [ratio]."""
        return self.high_turns / self.low_turns


@dataclass(frozen=True, kw_only=True, slots=True)
class Capacitor:
    """The capacitor as the sidecar has it: its side, value [F] and loss tangent [ratio]."""

    side: str
    entered_f: float
    loss_tangent: float


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Unit:
    """A unit as its circuit and the rest of its measured chain, which lies on the high side."""

    arms: Arms
    rest: Chain


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Ratios:
    """Efficiency and reflected power at the low side, (..., F) each [ratio]."""

    efficiency: RealArray
    reflection: RealArray


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Rewindable:
    """Units of one build at (F,) frequencies, ready to be changed; draws lead."""

    frequency_hz: RealArray
    units: tuple[Unit, ...]
    made: Making
    capacitor: Capacitor
    source_ohm: float

    def ratios(self, making: Making, load_ohm: Impedance) -> Ratios:
        """Mean over the units, made otherwise, into a load [ohm]."""
        found = [self._of_unit(unit, making, load_ohm) for unit in self.units]
        if len(found) == 1:
            return found[0]
        return Ratios(
            efficiency=np.mean([one.efficiency for one in found], axis=0),
            reflection=np.mean([one.reflection for one in found], axis=0),
        )

    def _of_unit(self, unit: Unit, making: Making, load_ohm: Impedance) -> Ratios:
        """With 1 A in the load, which takes Re Z, the low side takes Re(V1 conj I1).

        Notes
        -----
        gamma = (V1 - R I1)/(V1 + R I1) with the source's resistance R.
        """
        load = np.asarray(load_ohm, dtype=complex)
        high = unit.rest.a * load + unit.rest.b, unit.rest.c * load + unit.rest.d
        volts, amperes = _to_low(self._arms(unit.arms, making), making.turns_ratio, *high)
        entering = volts.real * amperes.real + volts.imag * amperes.imag
        matched = self.source_ohm * amperes
        return Ratios(
            efficiency=load.real / entering,
            reflection=_squared(volts - matched) / _squared(volts + matched),
        )

    def _arms(self, arms: Arms, making: Making) -> Arms:
        """The circuit made otherwise.

        Notes
        -----
        Series arm with the square of the low turns; core with 1/(turns^2 stack); capacitance across
        the high side stays, so that it goes with the square of the turns ratio when referred.
        """
        turns = making.low_turns / self.made.low_turns
        ratio = making.turns_ratio / self.made.turns_ratio
        if (making.low_turns, making.high_turns, making.stack) != _windings(self.made):
            arms = replace(
                arms,
                series_ohm=arms.series_ohm * turns**2,
                shunt_s=arms.shunt_s / (turns**2 * making.stack / self.made.stack),
                high_s=arms.high_s * ratio**2,
            )
        return self._with_capacitor(arms, making)

    def _with_capacitor(self, arms: Arms, making: Making) -> Arms:
        if making.capacitor_f is None:
            return arms
        lossy = 2 * np.pi * self.frequency_hz * (1j + self.capacitor.loss_tangent)
        if self.capacitor.side == "low":
            return replace(arms, capacitor_s=np.asarray(making.capacitor_f * lossy))
        old_s = 2j * np.pi * self.frequency_hz * self.capacitor.entered_f
        change_s = making.capacitor_f * lossy - old_s
        return replace(arms, high_s=arms.high_s + change_s * making.turns_ratio**2)


def _squared(value: ComplexArray) -> RealArray:
    return np.asarray(value.real**2 + value.imag**2)


def _windings(making: Making) -> tuple[float, float, int]:
    return making.low_turns, making.high_turns, making.stack


def taken_apart(chain: Chain, arms: Arms, turns_ratio: float) -> Unit:
    """A unit by its measured chain and its circuit: rest = circuit^-1 chain."""
    a, c = _to_high(arms, turns_ratio, chain.a, chain.c)
    b, d = _to_high(arms, turns_ratio, chain.b, chain.d)
    return Unit(arms=arms, rest=Chain(a, b, c, d))


def units_of(
    computed: Sequence[Computed], turns_ratio: float, at: Sequence[Taking]
) -> tuple[Unit, ...] | None:
    """Units taken apart at some frequencies; None where a method knows no chain or no circuit.

    Parameters
    ----------
    computed : sequence of Computed
        One for each unit or pair.
    turns_ratio : float
        [ratio].
    at : sequence of callables
        For each, what takes the values wanted out of those computed.
    """
    units = []
    for one, take in zip(computed, at, strict=True):
        if one.chain is None or one.arms is None:
            return None
        chain, arms = one.chain, one.arms
        chosen = Arms(
            take(arms.lead_ohm),
            take(arms.capacitor_s),
            take(arms.series_ohm),
            take(arms.shunt_s),
            take(arms.high_s),
            arms.share,
            take(arms.wire_ohm.astype(np.complex128)).real,
        )
        elements = (take(part) for part in (chain.a, chain.b, chain.c, chain.d))
        units.append(taken_apart(Chain(*elements), chosen, turns_ratio))
    return tuple(units)


def interpolated(frequency_hz: RealArray, computed_hz: RealArray) -> Taking:
    """Takes (F,) values computed at some frequencies to others between them."""
    return lambda values: np.asarray(np.interp(frequency_hz, computed_hz, values))


def kept(where: NDArray[np.bool_]) -> Taking:
    """Takes those of (..., F) values that are wanted."""
    return lambda values: values[..., where]


def _to_low(arms: Arms, turns_ratio: float, volts: ComplexArray, amperes: ComplexArray) -> _Pair:
    """Volts and amperes at the low side from those at the high side of the circuit."""
    behind = arms.share * arms.series_ohm
    volts, amperes = volts / turns_ratio, amperes * turns_ratio
    amperes = amperes + arms.high_s * volts
    volts = volts + behind * amperes
    amperes = amperes + arms.shunt_s * volts
    volts = volts + (arms.series_ohm - behind) * amperes
    amperes = amperes + arms.capacitor_s * volts
    return volts + arms.lead_ohm * amperes, amperes


def _to_high(arms: Arms, turns_ratio: float, volts: ComplexArray, amperes: ComplexArray) -> _Pair:
    """The way back."""
    behind = arms.share * arms.series_ohm
    volts = volts - arms.lead_ohm * amperes
    amperes = amperes - arms.capacitor_s * volts
    volts = volts - (arms.series_ohm - behind) * amperes
    amperes = amperes - arms.shunt_s * volts
    volts = volts - behind * amperes
    amperes = amperes - arms.high_s * volts
    return volts * turns_ratio, amperes / turns_ratio
