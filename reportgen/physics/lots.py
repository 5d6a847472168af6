"""Several units of one build: how far apart they are, and how well a connection repeats."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from reportgen.model import (
    Lot,
    LotBand,
    MeasuredBand,
    Measurement,
    MethodResult,
    Repeatability,
)
from reportgen.physics.grid import resampled


def lot_of(units: Sequence[MethodResult]) -> Lot | None:
    """The spread over units, in the bands in which all have a loss; None with less than two.

    Parameters
    ----------
    units : sequence of MethodResult
        One for each unit.
    """
    losses = {unit.unit: found for unit in units if unit.unit and (found := _losses_db(unit))}
    if len(losses) < 2:
        return None
    first = next(iter(losses.values()))
    shared = [band for band in first if all(band in found for found in losses.values())]
    by_band = {band: {unit: found[band] for unit, found in losses.items()} for band in shared}
    return Lot(
        units=tuple(losses),
        bands=tuple(_lot_band(band, by_unit) for band, by_unit in by_band.items()),
    )


def _losses_db(unit: MethodResult) -> dict[str, float]:
    figures = {
        band.band.name: band.figures["heat_loss_db"].mean
        for band in unit.bands
        if isinstance(band, MeasuredBand) and "heat_loss_db" in band.figures
    }
    return {name: mean for name, mean in figures.items() if mean is not None}


def _lot_band(band: str, by_unit: dict[str, float]) -> LotBand:
    return LotBand(
        band=band,
        least_db=min(by_unit.values()),
        greatest_db=max(by_unit.values()),
        standard_deviation_db=float(np.std(list(by_unit.values()), ddof=1)),
        worst_unit=max(by_unit, key=lambda unit: by_unit[unit]),
    )


def find_repeatability(measurements: Sequence[Measurement]) -> tuple[Repeatability, ...]:
    """Every repeated sweep against the first of its kind, over the range that both cover."""
    first: dict[tuple[object, ...], Measurement] = {}
    found = []
    for one in measurements:
        entry = one.entry
        key = (entry.setup, entry.unit, entry.units, entry.load, entry.calibration)
        other = first.setdefault(key, one)
        if other is not one and entry.repeat != other.entry.repeat:
            found.append(_repeat(one, other))
    return tuple(found)


def _repeat(one: Measurement, other: Measurement) -> Repeatability:
    hz = one.sweep.frequency_hz
    both = (hz >= other.sweep.frequency_hz[0]) & (hz <= other.sweep.frequency_hz[-1])
    difference = resampled(one.sweep, hz[both]) - resampled(other.sweep, hz[both])
    rms = float(np.sqrt(np.mean(np.abs(difference) ** 2))) if both.any() else 0.0
    return Repeatability(file=one.sweep.file, of=other.sweep.file, rms_ratio=rms)
