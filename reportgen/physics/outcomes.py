"""Worst SWR and mean heat loss of a build made otherwise, with their intervals."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from reportgen.model import BuildSheet, Interval, MeasuredBand, RealArray
from reportgen.physics.quantities import decibel_loss, swr_of_reflection
from reportgen.physics.rewound import (
    Capacitor,
    Making,
    Ratios,
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
class Predictor:
    """The build on the swept points of its bands, and on the draws' few points."""

    sheet: BuildSheet
    bands: tuple[MeasuredBand, ...]
    swept: Rewindable
    few: Rewindable
    drawn: Rewindable

    @property
    def made(self) -> Making:
        """The build as it is."""
        return self.swept.made

    @property
    def load_ohm(self) -> float:
        """The nominal load [ohm]."""
        return self.sheet.nominal_load_ohm

    def outcome(self, making: Making, load_ohm: float) -> Outcome:
        """The figures into a load; draws move them as they do on their few points."""
        value, few, drawn = (
            self._figures(one.ratios(making, load_ohm), one.frequency_hz)
            for one in (self.swept, self.few, self.drawn)
        )
        moved = np.where(np.isfinite(value) & np.isfinite(few), value + drawn - few, drawn)
        moved[..., : len(self.bands) + 1] = np.maximum(moved[..., : len(self.bands) + 1], 1)
        ends = np.quantile(moved, [0.025, 0.975], axis=0, method="inverted_cdf")
        intervals = [_interval(*three) for three in zip(value, *ends, strict=True)]
        swr, loss = intervals[: len(intervals) // 2], intervals[len(intervals) // 2 :]
        return Outcome(
            load_ohm=load_ohm,
            swr=swr[-1],
            heat_loss_db=loss[-1],
            bands=tuple(
                BandOutcome(band=band.band.name, swr=worst, heat_loss_db=mean)
                for band, worst, mean in zip(self.bands, swr[:-1], loss[:-1], strict=True)
            ),
        )

    def _figures(self, ratios: Ratios, frequency_hz: RealArray) -> RealArray:
        """Worst SWR of each band and of all, then heat loss likewise, (..., 2 bands + 2)."""
        inside = [_inside(band, frequency_hz) for band in self.bands]
        reflection = np.stack([ratios.reflection[..., one].max(axis=-1) for one in inside], axis=-1)
        efficiency = ratios.efficiency @ _means(frequency_hz, inside)
        worst = reflection.max(axis=-1, keepdims=True)
        mean = efficiency.mean(axis=-1, keepdims=True)
        return np.concatenate(
            [
                swr_of_reflection(np.concatenate([reflection, worst], axis=-1)),
                decibel_loss(np.concatenate([efficiency, mean], axis=-1)),
            ],
            axis=-1,
        )

    def reflected(self, making: Making, load_ohm: float) -> tuple[RealArray, RealArray]:
        """Worst SWR of all bands, and power reflected in the mean over them [ratio].

        (V,) each for capacitors (V, 1).
        """
        reflection = self.swept.ratios(making, load_ohm).reflection
        hz = self.swept.frequency_hz
        means = _means(hz, [_inside(band, hz) for band in self.bands])
        return swr_of_reflection(reflection.max(axis=-1)), (reflection @ means).mean(axis=-1)


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
    """None where the method knows no chain or no circuit, or no band was measured."""
    if not bands:
        return None
    ratio = sheet.winding.turns_ratio
    curves_hz = [one.result.curves.frequency_hz for one in group]
    hz = _in_any(bands, curves_hz[0])
    swept = units_of(
        [one.computed for one in group], ratio, [interpolated(hz, each) for each in curves_hz]
    )
    draws_hz = [one.spread.seen.frequency_hz for one in group]
    shared = draws_hz[0]
    for each in draws_hz[1:]:
        shared = np.intersect1d(shared, each)
    shared = _in_any(bands, shared)
    at = [kept(np.isin(each, shared)) for each in draws_hz]
    few = units_of([one.spread.without for one in group], ratio, at)
    drawn = units_of([one.spread.computed for one in group], ratio, at)
    if swept is None or few is None or drawn is None:
        return None
    return Predictor(
        sheet=sheet,
        bands=tuple(bands),
        swept=_rewindable(sheet, hz, swept),
        few=_rewindable(sheet, shared, few),
        drawn=_rewindable(sheet, shared, drawn),
    )


def _in_any(bands: Sequence[MeasuredBand], frequency_hz: RealArray) -> RealArray:
    wanted = [frequency_hz[_inside(band, frequency_hz)] for band in bands]
    return np.unique(np.concatenate(wanted))


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
