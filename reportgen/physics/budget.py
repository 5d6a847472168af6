"""What makes a figure uncertain, and which further sweep would help most."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, replace

import numpy as np

from reportgen.model import (
    Advice,
    BudgetLine,
    Build,
    Calibration,
    Load,
    MeasuredBand,
    Measurement,
    Method,
    RealArray,
    Setup,
    Sweep,
    SweepEntry,
)
from reportgen.physics.bands import mean_ratio
from reportgen.physics.drawn import ALL, Contribution, Drawn
from reportgen.physics.grid import common_grid
from reportgen.physics.methods import Plan
from reportgen.physics.network import (
    Chain,
    Scattering,
    input_impedance_ohm,
    reflection_of_impedance,
    resistor_ohm,
    scattering_of_chain,
)
from reportgen.physics.plans import find_plans
from reportgen.physics.quantities import decibel_loss
from reportgen.physics.seen import AS_SWEPT

BUDGET_DRAWS = 100
"""Draws of each contribution by itself: its u95, 1.96 deviations, is then known to 7 %."""

COVERAGE_FACTOR = 1.96

USUAL_STRAY_F = 4e-12
"""Across a load on short leads; one that had none would promise too much [F]."""

_SMALLEST_SHARE = 0.1
_WORTH_A_SWEEP = 0.8
_POINTS = 3
_MOST_SWEEPS = 20
_WITHOUT_LOSS = (Method.HALVING, Method.LOAD_ONLY)


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Question:
    """Whose uncertainty is asked about: the plans of the result, in its bands with loss."""

    build: Build
    calibrations: Mapping[str, Calibration]
    plans: tuple[Plan, ...]
    bands: tuple[MeasuredBand, ...]

    def u95_db(
        self, plans: Sequence[Plan], contributions: frozenset[Contribution]
    ) -> dict[str, float]:
        """Of the mean heat loss of each band, from some contributions alone [dB]."""
        drawn = Drawn(self.calibrations, self.build.key, BUDGET_DRAWS, contributions)
        hz = np.unique(np.concatenate([_of_band(band) for band in self.bands]))
        ratios = [plan.compute(hz, drawn).efficiency_ratio for plan in plans]
        ratio = np.mean([one for one in ratios if one is not None], axis=0)
        return {band.band.name: _u95_db(ratio, hz, band) for band in self.bands}

    def stated_u95_db(self, name: str) -> float | None:
        """Half of the interval that the result states for a band's mean heat loss [dB]."""
        figure = next(band.figures["heat_loss_db"] for band in self.bands if band.band.name == name)
        if figure.low95 is None or figure.high95 is None:
            return None
        return (figure.high95 - figure.low95) / 2


def _of_band(band: MeasuredBand) -> RealArray:
    return np.linspace(*band.covered_hz, _POINTS)


def _u95_db(ratio: RealArray, frequency_hz: RealArray, band: MeasuredBand) -> float:
    inside = np.isin(frequency_hz, _of_band(band))
    losses = decibel_loss(mean_ratio(frequency_hz[inside], ratio[:, inside]))
    finite = losses[np.isfinite(losses)]
    return COVERAGE_FACTOR * float(np.std(finite)) if finite.size else 0.0


def find_budget(question: Question) -> tuple[BudgetLine, ...]:
    """Each contribution alone, the largest first; those that hardly count are left out."""
    lines = [
        BudgetLine(contribution=one.value, u95_db=question.u95_db(question.plans, frozenset({one})))
        for one in Contribution
    ]
    lines.sort(key=_size, reverse=True)
    return tuple(line for line in lines if _size(line) > _SMALLEST_SHARE * _size(lines[0]))


def _size(line: BudgetLine) -> float:
    return float(np.mean(list(line.u95_db.values())))


# --- what to sweep next --------------------------------------------------------------------------


def find_advice(question: Question) -> tuple[Advice, ...]:
    """Further sweeps that would shrink the interval, each tried with a made-up sweep.

    The sweep is what an analyzer without faults would show of the unit as it was computed; the
    draws then are those of the real sweeps. Few draws tell by which factor the interval shrinks;
    the factor is applied to the interval that is stated. Nothing is tried of a build with very
    many sweeps: each trial computes all of them anew.
    """
    if len(question.build.measurements) > _MOST_SWEEPS:
        return ()
    now = question.u95_db(question.plans, ALL)
    found = []
    for words, extra in _candidates(question):
        then = _u95_with(question, extra)
        band = max(then, key=lambda name: now[name] - then[name], default=None)
        if band is not None and then[band] < _WORTH_A_SWEEP * now[band]:
            stated = question.stated_u95_db(band) or now[band]
            shrunk = stated * then[band] / now[band]
            found.append(Advice(sweep=words, band=band, u95_db=stated, u95_then_db=shrunk))
    return tuple(sorted(found, key=lambda one: one.u95_then_db / one.u95_db))


def _u95_with(question: Question, extra: Sequence[Measurement]) -> dict[str, float]:
    """The least interval that the methods give with further sweeps [dB]."""
    build = replace(question.build, measurements=(*question.build.measurements, *extra))
    files = {one.sweep.file for one in extra}
    plans = [plan for plan in find_plans(build)[0] if plan.method not in _WITHOUT_LOSS]
    tried = []
    for method in dict.fromkeys(plan.method for plan in plans):
        same = [plan for plan in plans if plan.method is method]
        if any(sweep.file in files for plan in same for sweep in plan.sweeps):
            tried.append(question.u95_db(same, ALL))
    return min(tried, key=lambda then: float(np.mean(list(then.values()))), default={})


def _candidates(question: Question) -> Iterator[tuple[str, tuple[Measurement, ...]]]:
    """What could be swept besides, in words, and as sweeps of the unit as computed."""
    plan = question.plans[0]
    grid = common_grid(plan.sweeps, ())
    chain = plan.compute(grid.frequency_hz, AS_SWEPT).chain
    if chain is None or any(band.covered_hz[0] < grid.frequency_hz[0] for band in question.bands):
        return
    maker = _Maker(question.build, chain, grid.frequency_hz, _calibration_of(question.build))
    swept = {(one.entry.setup, one.entry.unit or "A") for one in question.build.measurements}
    units = plan.units[:2]
    if plan.method is Method.BISECTION and not any((Setup.LOAD, unit) in swept for unit in units):
        words = f"a load sweep of {' and of '.join(f'unit {unit}' for unit in units)}"
        yield words, tuple(maker.load(unit) for unit in units)
    pair = next(
        (one for one in question.build.measurements if one.entry.setup is Setup.BACK_TO_BACK), None
    )
    ways = {one.entry.pair for one in question.build.measurements if one.entry.units is not None}
    if pair is not None and pair.sweep.one_path and pair.entry.pair[::-1] not in ways:
        yield "the pair swept again the other way round", (maker.other_way(pair),)
    if not {(Setup.OPEN, units[0]), (Setup.SHORT, units[0])} <= swept:
        yield (
            f"sweeps of unit {units[0]} with its high side open, shorted and loaded",
            tuple(maker.terminations(units[0])),
        )


def _calibration_of(build: Build) -> str | None:
    return build.measurements[0].entry.calibration


@dataclass(frozen=True, slots=True, eq=False)
class _Maker:
    """Makes sweeps of a unit as it was computed."""

    build: Build
    chain: Chain
    frequency_hz: RealArray
    calibration: str | None

    def load(self, unit: str) -> Measurement:
        load_ohm = self.build.sheet.nominal_load_ohm
        load = Load(resistance_ohm=load_ohm, tolerance_percent=0.5)
        had_ohm = resistor_ohm(load_ohm, USUAL_STRAY_F, self.frequency_hz)
        gamma = reflection_of_impedance(input_impedance_ohm(self.chain, had_ohm))
        return self._one_port(unit, Setup.LOAD, gamma, load)

    def terminations(self, unit: str) -> Iterator[Measurement]:
        yield self.load(unit)
        opened, shorted = self.chain.a / self.chain.c, self.chain.b / self.chain.d
        yield self._one_port(unit, Setup.OPEN, reflection_of_impedance(opened))
        yield self._one_port(unit, Setup.SHORT, reflection_of_impedance(shorted))

    def other_way(self, pair: Measurement) -> Measurement:
        s = scattering_of_chain(self.chain @ self.chain.reversed())
        entry = replace(pair.entry, file="made up: other way round", units=pair.entry.pair[::-1])
        return Measurement(entry=entry, sweep=self._sweep(entry.file, _forward(s), one_path=True))

    def _one_port(
        self, unit: str, setup: Setup, gamma: np.ndarray, load: Load | None = None
    ) -> Measurement:
        file = f"made up: {setup.value} of {unit}"
        entry = SweepEntry(
            file=file,
            setup=setup,
            unit=unit,
            load=None if load is None else "made up",
            calibration=self.calibration,
        )
        sweep = self._sweep(file, gamma[:, None, None], one_path=False)
        return Measurement(entry=entry, sweep=sweep, load=load)

    def _sweep(self, file: str, s: np.ndarray, *, one_path: bool) -> Sweep:
        return Sweep(
            file=file,
            sha256=file,
            frequency_hz=self.frequency_hz.copy(),
            s=s,
            reference_ohm=(50.0,) * s.shape[-1],
            one_path=one_path,
        )


def _forward(s: Scattering) -> np.ndarray:
    """(F, 2, 2) with the column of port 2 not measured."""
    nothing = np.zeros_like(s.s11)
    return np.moveaxis(np.array([[s.s11, nothing], [s.s21, nothing]]), -1, 0)
