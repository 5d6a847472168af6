"""Every reported quantity in every band, from curves over frequency."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from reportgen.model import (
    Band,
    BandResult,
    Curves,
    Figure,
    MeasuredBand,
    NotMeasured,
    RealArray,
)
from reportgen.physics.quantities import QUANTITIES, Better, Quantity

FEW_POINTS = 5
"""With fewer swept points inside a band its figures count as interpolated."""

WIDEST_GAP = 0.1
"""Neighbouring points further apart than this part of the band's centre say nothing of it."""


def in_bands(curves: Curves, bands: Sequence[Band], power_w: float) -> tuple[BandResult, ...]:
    """Figures of every quantity in each band.

    Parameters
    ----------
    curves : Curves
        Without draws; its grid holds the edges and centres of the bands that it covers.
    bands : sequence of Band
        The bands asked about.
    power_w : float
        Power that enters the build, for its heat [W].
    """
    return tuple(_in_band(curves, band, power_w) for band in bands)


def readings_in_bands(
    curves: Curves, bands: Sequence[Band], power_w: float
) -> tuple[BandResult, ...]:
    """Figures of single readings: their mean in each band that holds one, nothing between them."""
    return tuple(_readings_in_band(curves, band, power_w) for band in bands)


def _readings_in_band(curves: Curves, band: Band, power_w: float) -> BandResult:
    hz = curves.frequency_hz
    inside = (hz >= band.from_hz) & (hz <= band.to_hz)
    count = int(np.count_nonzero(inside))
    if not count:
        return NotMeasured(band=band, reason="no reading inside")
    figures = {}
    for quantity in QUANTITIES:
        ratio = quantity.ratio(curves)
        if ratio is not None:
            values = quantity.value(ratio[inside], power_w)
            mean = quantity.value(np.mean(ratio[inside], keepdims=True), power_w)
            worst = int(
                np.argmin(values) if quantity.better is Better.HIGHER else np.argmax(values)
            )
            figures[quantity.key] = Figure(
                mean=_finite(mean[0]),
                worst=_finite(values[worst]),
                centre=None,
                worst_at_hz=float(hz[inside][worst]),
            )
    return MeasuredBand(
        band=band,
        covered_hz=(band.from_hz, band.to_hz),
        points=count,
        interpolated=False,
        figures=figures,
        reason="one reading" if count == 1 else f"{count} readings",
    )


def _in_band(curves: Curves, band: Band, power_w: float) -> BandResult:
    hz = curves.frequency_hz
    low, high = max(band.from_hz, hz[0]), min(band.to_hz, hz[-1])
    if low >= high:
        return NotMeasured(
            band=band,
            reason=f"not covered: the sweep runs from {_mhz(hz[0])} to {_mhz(hz[-1])} MHz",
        )
    inside = (hz >= low) & (hz <= high)
    gap_hz = _widest_gap_hz(hz[curves.native], low, high)
    if gap_hz > WIDEST_GAP * band.centre_hz:
        return NotMeasured(
            band=band,
            reason=f"not enough points: neighbouring ones are {gap_hz / 1e6:.3g} MHz apart",
        )
    points = int(np.count_nonzero(inside & curves.native))
    partial = (low, high) != (band.from_hz, band.to_hz)
    return MeasuredBand(
        band=band,
        covered_hz=(float(low), float(high)),
        points=points,
        interpolated=points < FEW_POINTS,
        figures=_figures(curves, inside, band.centre_hz, power_w),
        reason=_reason(band, float(low), float(high), points, partial),
    )


def _widest_gap_hz(native_hz: RealArray, low: float, high: float) -> float:
    """Largest distance between the swept points that bracket or lie in a range [Hz]."""
    first = max(int(np.searchsorted(native_hz, low, side="right")) - 1, 0)
    last = int(np.searchsorted(native_hz, high, side="left"))
    gaps = np.diff(native_hz[first : last + 1])
    return float(gaps.max()) if gaps.size else 0.0


def _reason(band: Band, low: float, high: float, points: int, partial: bool) -> str | None:
    said = []
    if partial:
        said.append(
            f"covers {_mhz(low)} to {_mhz(high)} MHz of "
            f"{_mhz(band.from_hz)} to {_mhz(band.to_hz)} MHz"
        )
    if points < FEW_POINTS:
        count = {0: "no swept point", 1: "1 swept point"}.get(points, f"{points} swept points")
        said.append(f"{count} inside, interpolated")
    return "; ".join(said) or None


def _mhz(hz: float) -> str:
    return f"{hz / 1e6:.4f}".rstrip("0").rstrip(".")


def _figures(
    curves: Curves, inside: NDArray[np.bool_], centre_hz: float, power_w: float
) -> dict[str, Figure]:
    figures = {}
    for quantity in QUANTITIES:
        ratio = quantity.ratio(curves)
        if ratio is not None:
            figures[quantity.key] = _figure(
                quantity, curves.frequency_hz, ratio, inside, centre_hz, power_w
            )
    return figures


def _figure(
    quantity: Quantity,
    frequency_hz: RealArray,
    ratio: RealArray,
    inside: NDArray[np.bool_],
    centre_hz: float,
    power_w: float,
) -> Figure:
    """Mean of the ratio by frequency, its worst point, its value at the centre."""
    hz, within = frequency_hz[inside], ratio[inside]
    values = quantity.value(within, power_w)
    worst = _worst_place(quantity, values)
    mean = np.array([mean_ratio(hz, within)])
    centre = np.interp([centre_hz], hz, within) if hz[0] <= centre_hz <= hz[-1] else None
    return Figure(
        mean=_finite(quantity.value(mean, power_w)[0]),
        worst=_finite(values[worst]),
        centre=None if centre is None else _finite(quantity.value(centre, power_w)[0]),
        worst_at_hz=float(hz[worst]),
    )


def _worst_place(quantity: Quantity, values: RealArray) -> int:
    return int(np.argmin(values) if quantity.better is Better.HIGHER else np.argmax(values))


def mean_ratio(frequency_hz: RealArray, ratio: RealArray) -> RealArray:
    """Mean over frequency by the trapezoid rule; (..., F) to (...) [ratio]."""
    width = frequency_hz[-1] - frequency_hz[0]
    return np.asarray(np.trapezoid(ratio, frequency_hz, axis=-1) / width)


def _finite(value: float) -> float | None:
    return float(value) if np.isfinite(value) else None
