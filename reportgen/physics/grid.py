"""The frequencies at which the sweeps of one method are put together.

A grid holds the points of the coarsest sweep within the range that all cover, and in addition
the edges and centres of the bands. Between swept points the complex values are interpolated
linearly; beyond the ends of a sweep nothing is ever made up.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from reportgen.errors import NotMeasurable
from reportgen.model import Band, ComplexArray, RealArray, Sweep


@dataclass(frozen=True, slots=True, eq=False)
class Grid:
    """Ascending frequencies (F,) [Hz]; `native` (F,) is false at points that were not swept."""

    frequency_hz: RealArray
    native: NDArray[np.bool_]


def common_grid(sweeps: Sequence[Sweep], bands: Sequence[Band]) -> Grid:
    """Frequencies for a set of sweeps.

    Raises
    ------
    NotMeasurable
        The sweeps have no range, or less than two points of it, in common.
    """
    low = max(sweep.frequency_hz[0] for sweep in sweeps)
    high = min(sweep.frequency_hz[-1] for sweep in sweeps)
    swept = min((_within(sweep.frequency_hz, low, high) for sweep in sweeps), key=len)
    if len(swept) < 2:
        raise NotMeasurable(
            f"the sweeps {', '.join(sweep.file for sweep in sweeps)} have less than two "
            "frequencies in common"
            if len(sweeps) > 1
            else f"the sweep {sweeps[0].file} has less than two frequencies"
        )
    marks = [hz for band in bands for hz in (band.from_hz, band.centre_hz, band.to_hz)]
    added = np.setdiff1d(_within(np.array(sorted({*marks, low, high})), low, high), swept)
    frequency_hz = np.concatenate([swept, added])
    order = np.argsort(frequency_hz)
    return Grid(frequency_hz[order], (np.arange(frequency_hz.size) < swept.size)[order])


def _within(frequency_hz: RealArray, low: float, high: float) -> RealArray:
    return frequency_hz[(frequency_hz >= low) & (frequency_hz <= high)]


def resampled(sweep: Sweep, frequency_hz: RealArray) -> ComplexArray:
    """Scattering parameters at frequencies within the sweep, (n, n, F) complex [ratio]."""
    ports = range(sweep.ports)
    at = np.empty((sweep.ports, sweep.ports, frequency_hz.size), dtype=complex)
    for i in ports:
        for j in ports:
            swept = sweep.s[:, i, j]
            at[i, j] = np.interp(frequency_hz, sweep.frequency_hz, swept)
    return at
