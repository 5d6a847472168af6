"""What to wind next: the measured build with other capacitors, turns, stacks, loads, an antenna.

Everything here is predicted from the sweeps of the present build; nothing of it was measured.

References
----------
.. [1] IEC 60063:2015, table of the E24 series (values from memory).
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace

import numpy as np

from reportgen.model import Build, MeasuredBand, RealArray
from reportgen.physics.antennas import AntennaForecast, antenna_forecasts
from reportgen.physics.outcomes import Outcome, Predictor, predictor_of
from reportgen.physics.rewound import Making
from reportgen.physics.solve import Solved

E24 = (
    *(1.0, 1.1, 1.2, 1.3, 1.5, 1.6, 1.8, 2.0, 2.2, 2.4, 2.7, 3.0),
    *(3.3, 3.6, 3.9, 4.3, 4.7, 5.1, 5.6, 6.2, 6.8, 7.5, 8.2, 9.1),
)
"""One decade of the E24 series [1]_."""

LOAD_FACTORS = (0.5, 0.7, 1.0, 1.4, 2.0)
"""Loads that are tried, over the nominal one [ratio]."""

_RANGE_PF = {"low": (10.0, 470.0), "high": (1.0, 47.0)}
_NEIGHBOURING_TURNS = (-1, 1)
_NEIGHBOURING_RATIOS = (-2, -1, 1, 2)


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class CapacitorForecast:
    """Other capacitors across the same side; 0 pF is none.

    `worst_swr` and `reflected_ratio` (mean over the bands), (V,), belong to `capacitor_pf` (V,).
    `best_pf` has the least worst SWR, `least_reflected_pf` the least reflected power: where the
    lowest band's SWR is the core's doing the two may lie far apart. `present_pf` is as entered;
    `now` is the build as measured, `then` with `best_pf`, both into the nominal load.
    """

    side: str
    capacitor_pf: RealArray
    worst_swr: RealArray
    reflected_ratio: RealArray
    present_pf: float
    best_pf: float
    least_reflected_pf: float
    now: Outcome
    then: Outcome

    @property
    def better(self) -> bool:
        """True when the best value is sure to beat the one that is there: its whole interval."""
        then = self.then.swr
        return (then.value if then.high95 is None else then.high95) < self.now.swr.value


@dataclass(frozen=True, kw_only=True, slots=True)
class WindingForecast:
    """Another winding or stack, with the present capacitor and with the best one for it.

    `stack` is None where the core is not given; `own_load` tells the load that goes with its turns
    from the present build's nominal load.
    """

    low_turns: float
    high_turns: float
    stack: int | None
    own_load: bool
    present_capacitor: Outcome
    best_pf: float
    best_capacitor: Outcome


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Forecast:
    """Predictions, and in words what they assume."""

    capacitor: CapacitorForecast
    turns: tuple[WindingForecast, ...]
    ratios: tuple[WindingForecast, ...]
    stacks: tuple[WindingForecast, ...]
    loads: tuple[Outcome, ...]
    antennas: tuple[AntennaForecast, ...]
    assumes: tuple[str, ...]


@np.errstate(divide="ignore", invalid="ignore", over="ignore")
def forecast_of(
    group: Sequence[Solved], build: Build, bands: Sequence[MeasuredBand]
) -> Forecast | None:
    """What to wind next; None where the result's method knows no chain or no circuit.

    Parameters
    ----------
    group : sequence of Solved
        The result's method, once for each pair or unit.
    build : Build
        Turns, load, capacitor, core, and the sweeps of antennas.
    bands : sequence of MeasuredBand
        The result's bands; their worst SWR is what a capacitor is chosen by.
    """
    predictor = predictor_of(group, build.sheet, bands)
    if predictor is None:
        return None
    return Forecast(
        capacitor=_capacitor(predictor),
        turns=tuple(_turns(predictor)),
        ratios=tuple(_ratios(predictor)),
        stacks=tuple(_stacks(predictor)),
        loads=tuple(
            predictor.outcome(predictor.made, factor * predictor.load_ohm)
            for factor in LOAD_FACTORS
        ),
        antennas=antenna_forecasts(group, build, bands),
        assumes=tuple(_assumes(build, group)),
    )


# --- what is tried -------------------------------------------------------------------------------


def capacitor_values_pf(side: str) -> RealArray:
    """None (0), and the E24 values that come into question across a side [pF]."""
    low, high = _RANGE_PF[side]
    values = np.array([round(e * 10.0**decade, 1) for decade in (0, 1, 2) for e in E24])
    return np.array([0.0, *values[(values >= low) & (values <= high)]])


@dataclass(frozen=True, slots=True, eq=False)
class _Tried:
    """Capacitors that were tried, (V,) each: value [pF], worst SWR, reflected power [ratio]."""

    capacitor_pf: RealArray
    worst_swr: RealArray
    reflected_ratio: RealArray

    @property
    def best_pf(self) -> float:
        """The value with the least worst SWR [pF]."""
        return float(self.capacitor_pf[np.argmin(self.worst_swr)])


def _with(making: Making, capacitor_pf: float | RealArray) -> Making:
    return replace(making, capacitor_f=1e-12 * capacitor_pf)


def _tried(predictor: Predictor, making: Making, load_ohm: float) -> _Tried:
    values_pf = capacitor_values_pf(predictor.sheet.compensation.side)
    return _Tried(values_pf, *predictor.reflected(_with(making, values_pf[:, None]), load_ohm))


def _capacitor(predictor: Predictor) -> CapacitorForecast:
    made, entered = predictor.made, predictor.sheet.compensation
    tried = _tried(predictor, made, predictor.load_ohm)
    return CapacitorForecast(
        side=entered.side,
        capacitor_pf=tried.capacitor_pf,
        worst_swr=tried.worst_swr,
        reflected_ratio=tried.reflected_ratio,
        present_pf=entered.capacitor_pf,
        best_pf=tried.best_pf,
        least_reflected_pf=float(tried.capacitor_pf[np.argmin(tried.reflected_ratio)]),
        now=predictor.outcome(made, predictor.load_ohm),
        then=predictor.outcome(_with(made, tried.best_pf), predictor.load_ohm),
    )


def _turns(predictor: Predictor) -> Iterator[WindingForecast]:
    """More and fewer turns at the same ratio, where the high turns stay whole."""
    made = predictor.made
    for step in _NEIGHBOURING_TURNS:
        low = made.low_turns + step
        high = made.high_turns * low / made.low_turns
        if low > 0 and abs(high - round(high)) < 1e-9:
            yield _winding(predictor, replace(made, low_turns=low, high_turns=float(round(high))))


def _ratios(predictor: Predictor) -> Iterator[WindingForecast]:
    """More and fewer turns of the high side: into the present load, and into their own."""
    made = predictor.made
    for step in _NEIGHBOURING_RATIOS:
        if made.high_turns + step > 0:
            making = replace(made, high_turns=made.high_turns + step)
            yield _winding(predictor, making)
            yield _winding(predictor, making, own_load=True)


def _stacks(predictor: Predictor) -> Iterator[WindingForecast]:
    """One ring more and one fewer, where the core is given."""
    core = predictor.sheet.core
    for step in (-1, 1) if core else ():
        if predictor.made.stack + step > 0:
            yield _winding(predictor, replace(predictor.made, stack=predictor.made.stack + step))


def _winding(predictor: Predictor, making: Making, *, own_load: bool = False) -> WindingForecast:
    other = (making.turns_ratio / predictor.made.turns_ratio) ** 2 if own_load else 1.0
    load_ohm = predictor.load_ohm * other
    best_pf = _tried(predictor, making, load_ohm).best_pf
    return WindingForecast(
        low_turns=making.low_turns,
        high_turns=making.high_turns,
        stack=making.stack if predictor.sheet.core else None,
        own_load=own_load,
        present_capacitor=predictor.outcome(making, load_ohm),
        best_pf=best_pf,
        best_capacitor=predictor.outcome(_with(making, best_pf), load_ohm),
    )


# --- in words ------------------------------------------------------------------------------------


def _assumes(build: Build, group: Sequence[Solved]) -> Iterator[str]:
    sheet = build.sheet
    loss = sheet.compensation.loss_tangent
    yield "all of this is predicted from the sweeps of the present build; none of it was measured"
    yield (
        "the circuit says how a unit divides into lead, capacitor, winding and core; what the "
        "measured unit has beyond its circuit stays as it is"
    )
    yield (
        "the capacitor: the old one is taken out as "
        + ("entered" if sheet.compensation.side == "high" else "the circuit has it")
        + ", the new one goes into its place behind the same lead, has exactly its value and "
        + ("no loss" if not loss else f"the loss tangent entered, {loss:g}")
    )
    yield (
        "the turns: the core's impedance, leakage and winding resistance go with the square of the "
        "low side's turns, the winding is laid as before, and the capacitance across the high side "
        "stays"
    )
    yield (
        "the ratio: more or fewer turns of the high side leave leakage and winding resistance as "
        "referred to the low side"
    )
    if sheet.core is not None:
        yield (
            "the stack: the core's impedance goes with the number of rings; leakage and winding "
            "resistance stay, though a turn about a taller stack is longer: the match in the "
            "highest bands comes out worse than said"
        )
    yield "the loads are resistances without reactance"
    yield (
        "the intervals hold what the sweeps leave uncertain, not how far these assumptions are off"
    )
    if any(one.spread.shift for one in group):
        yield "what check sweeps say of the calibration is not used here"
