"""Worst SWR and mean heat loss of a build made otherwise, with their intervals."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import reduce

import numpy as np

from reportgen.model import BuildSheet, Interval, MeasuredBand, RealArray
from reportgen.physics.quantities import decibel_loss, swr_of_reflection
from reportgen.physics.rewound import (
    Capacitor,
    Making,
    Rewindable,
    Unit,
    interpolated,
    kept,
    units_of,
)
from reportgen.physics.solve import Solved


@dataclass(frozen=True, kw_only=True, slots=True)
class BandOutcome:
    """One band: the worst SWR in it and the mean heat loss over it [dB]."""

    band: str
    swr: Interval
    heat_loss_db: Interval


@dataclass(frozen=True, kw_only=True, slots=True)
class Outcome:
    """Into a load: the worst SWR of all bands, the heat loss of the mean over bands [dB], each."""

    load_ohm: float
    swr: Interval
    heat_loss_db: Interval
    bands: tuple[BandOutcome, ...]


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class _Sampled:
    """The build at some frequencies: which lie in each band, and the weights of means over it."""

    build: Rewindable
    inside: tuple[slice, ...]
    means: RealArray

    def figures(self, making: Making, load_ohm: float) -> RealArray:
        """Worst SWR of each band and of all, then heat loss likewise, (..., 2 bands + 2)."""
        ratios = self.build.ratios(making, load_ohm)
        worst = [ratios.reflection[..., one].max(axis=-1) for one in self.inside]
        reflection = np.stack([*worst, np.max(worst, axis=0)], axis=-1)
        efficiency = ratios.efficiency @ self.means
        mean = efficiency.mean(axis=-1, keepdims=True)
        loss = decibel_loss(np.concatenate([efficiency, mean], axis=-1))
        return np.concatenate([swr_of_reflection(reflection), loss], axis=-1)


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Predictor:
    """The build on the swept points of its bands, and on the draws' few points."""

    sheet: BuildSheet
    bands: tuple[MeasuredBand, ...]
    swept: _Sampled
    few: _Sampled
    drawn: _Sampled

    @property
    def made(self) -> Making:
        """The build as it is."""
        return self.swept.build.made

    @property
    def load_ohm(self) -> float:
        """The nominal load [ohm]."""
        return self.sheet.nominal_load_ohm

    def outcome(self, making: Making, load_ohm: float) -> Outcome:
        """The figures into a load; draws move them as they do on their few points."""
        value, few, drawn = (
            one.figures(making, load_ohm) for one in (self.swept, self.few, self.drawn)
        )
        moved = np.where(np.isfinite(value) & np.isfinite(few), value + drawn - few, drawn)
        half = len(self.bands) + 1
        moved[..., :half] = np.maximum(moved[..., :half], 1)
        ends = np.quantile(moved, [0.025, 0.975], axis=0, method="inverted_cdf")
        intervals = [_interval(*three) for three in zip(value, *ends, strict=True)]
        swr, loss = intervals[:half], intervals[half:]
        return Outcome(
            load_ohm=load_ohm,
            swr=swr[-1],
            heat_loss_db=loss[-1],
            bands=tuple(
                BandOutcome(band=band.band.name, swr=worst, heat_loss_db=mean)
                for band, worst, mean in zip(self.bands, swr[:-1], loss[:-1], strict=True)
            ),
        )

    def reflected(self, making: Making, load_ohm: float) -> tuple[RealArray, RealArray]:
        """Worst SWR of all bands, and power reflected in the mean over them [ratio].

        (V,) each for capacitors (V, 1).
        """
        reflection = self.swept.build.ratios(making, load_ohm).reflection
        worst = swr_of_reflection(reflection.max(axis=-1))
        return worst, (reflection @ self.swept.means).mean(axis=-1)


def _interval(value: float, low: float, high: float) -> Interval:
    ends = [float(end) if np.isfinite(end) else None for end in (low, high)]
    return Interval(value=float(value), low95=ends[0], high95=ends[1])


def _inside(band: MeasuredBand, frequency_hz: RealArray) -> slice:
    low, high = band.covered_hz
    return slice(
        int(np.searchsorted(frequency_hz, low)),
        int(np.searchsorted(frequency_hz, high, side="right")),
    )


def _means(frequency_hz: RealArray, inside: Sequence[slice]) -> RealArray:
    """Weights of the means over bands by the trapezoid rule, (F, bands)."""
    weights = np.zeros((frequency_hz.size, len(inside)))
    for place, one in enumerate(inside):
        gaps = np.diff(frequency_hz[one]) / np.ptp(frequency_hz[one])
        weights[one, place] = (np.append(gaps, 0) + np.append(0, gaps)) / 2
    return weights


def predictor_of(
    group: Sequence[Solved], sheet: BuildSheet, bands: Sequence[MeasuredBand]
) -> Predictor | None:
    """None where the method knows no chain or no circuit, or draws cover no band."""
    ratio = sheet.winding.turns_ratio
    curves_hz = [one.result.curves.frequency_hz for one in group]
    draws_hz = [one.spread.seen.frequency_hz for one in group]
    shared = reduce(np.intersect1d, draws_hz)
    bands = [band for band in bands if shared[_inside(band, shared)].size > 1]
    if not bands:
        return None
    hz, shared = (_in_any(bands, each) for each in (curves_hz[0], shared))
    swept = units_of(
        [one.computed for one in group], ratio, [interpolated(hz, each) for each in curves_hz]
    )
    at = [kept(np.isin(each, shared)) for each in draws_hz]
    few = units_of([one.spread.without for one in group], ratio, at)
    drawn = units_of([one.spread.computed for one in group], ratio, at)
    if swept is None or few is None or drawn is None:
        return None
    return Predictor(
        sheet=sheet,
        bands=tuple(bands),
        swept=_sampled(_rewindable(sheet, hz, swept), bands),
        few=_sampled(_rewindable(sheet, shared, few), bands),
        drawn=_sampled(_rewindable(sheet, shared, drawn), bands),
    )


def _in_any(bands: Sequence[MeasuredBand], frequency_hz: RealArray) -> RealArray:
    wanted = [frequency_hz[_inside(band, frequency_hz)] for band in bands]
    return np.unique(np.concatenate(wanted))


def _sampled(build: Rewindable, bands: Sequence[MeasuredBand]) -> _Sampled:
    inside = tuple(_inside(band, build.frequency_hz) for band in bands)
    return _Sampled(build=build, inside=inside, means=_means(build.frequency_hz, inside))


def _rewindable(sheet: BuildSheet, hz: RealArray, units: tuple[Unit, ...]) -> Rewindable:
    winding, entered = sheet.winding, sheet.compensation
    return Rewindable(
        frequency_hz=hz,
        units=units,
        made=Making(
            low_turns=winding.low_turns,
            high_turns=winding.high_turns,
            stack=sheet.core.stack if sheet.core else 1,
        ),
        capacitor=Capacitor(
            side=entered.side,
            entered_f=entered.capacitor_pf * 1e-12,
            loss_tangent=entered.loss_tangent or 0.0,
        ),
        source_ohm=sheet.match.source_ohm,
    )
