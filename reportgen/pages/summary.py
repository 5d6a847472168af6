"""What the sentences and key figures are about: the bands of a result, and their extremes."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from math import isfinite, nan
from typing import Protocol

import numpy as np

from reportgen.model import (
    Band,
    BandResult,
    BenchSheet,
    BuildResult,
    Curves,
    Figure,
    MeasuredBand,
)
from reportgen.physics.judge import limits_of_band
from reportgen.physics.over_bands import efficiency_covariance, half_width_over_bands
from reportgen.physics.quantities import BY_KEY, QUANTITIES, Better
from reportgen.published import BandCovariance, says_simulated


@dataclass(frozen=True, kw_only=True, slots=True)
class BandValue:
    """A quantity's value in one band."""

    band: Band
    value: float
    at_hz: float | None = None
    low95: float | None = None
    high95: float | None = None


class HasBands(Protocol):
    """A method's result, or a published build."""

    @property
    def bands(self) -> tuple[BandResult, ...]:
        """The bands, measured or not."""
        ...


def measured_bands(method: HasBands) -> tuple[MeasuredBand, ...]:
    """The bands that have figures."""
    return tuple(band for band in method.bands if isinstance(band, MeasuredBand))


def figure_of(band: MeasuredBand, key: str) -> Figure | None:
    """A quantity's figure in a band; None where it was not measured."""
    figure = band.figures.get(key)
    return figure if figure is not None and usable(figure.mean) else None


def usable(value: float | None) -> bool:
    """True for a number that can be printed and drawn."""
    return value is not None and isfinite(value)


def means(method: HasBands, key: str) -> tuple[BandValue, ...]:
    """Means over each band, in the order of the bands."""
    pairs = ((band, figure_of(band, key)) for band in measured_bands(method))
    return tuple(
        BandValue(band=band.band, value=figure.mean, low95=figure.low95, high95=figure.high95)
        for band, figure in pairs
        if figure is not None and figure.mean is not None
    )


def worsts(method: HasBands, key: str) -> tuple[BandValue, ...]:
    """Worst values within each band, in the order of the bands; infinite ones are kept."""
    pairs = ((band, band.figures.get(key)) for band in measured_bands(method))
    return tuple(
        BandValue(
            band=band.band,
            value=figure.worst,
            at_hz=figure.worst_at_hz,
            low95=figure.worst_low95,
            high95=figure.worst_high95,
        )
        for band, figure in pairs
        if figure is not None and figure.worst is not None and figure.worst == figure.worst
    )


def worst_of(values: Sequence[BandValue], key: str) -> BandValue | None:
    """The worst of several bands, in the quantity's own sense."""
    pick = min if BY_KEY[key].better is Better.HIGHER else max
    return pick(values, key=lambda one: one.value) if values else None


def best_of(values: Sequence[BandValue], key: str) -> BandValue | None:
    """The best of several bands, in the quantity's own sense."""
    pick = max if BY_KEY[key].better is Better.HIGHER else min
    return pick(values, key=lambda one: one.value) if values else None


def mean_over_bands(
    method: HasBands, key: str, power_w: float, names: Iterable[str] | None = None
) -> float | None:
    """The quantity that follows from the mean efficiency of the bands, each counted once.

    Parameters
    ----------
    method : HasBands
        Whose bands count.
    key : str
        `efficiency_ratio` or what follows from it: `heat_loss_db`, `heat_w`.
    power_w : float
        The rated power [W].
    names : iterable of str, optional
        The bands that count; None where one of them is missing. Default: all measured ones.
    """
    found = {one.band.name: one.value for one in means(method, "efficiency_ratio")}
    wanted = list(found) if names is None else list(names)
    if not wanted or any(name not in found for name in wanted):
        return None
    ratio = np.array([float(np.mean([found[name] for name in wanted]))])
    value = float(BY_KEY[key].value(ratio, power_w)[0])
    return value if isfinite(value) else None


def interval_over_bands(
    bands: HasBands,
    covariance: BandCovariance | None,
    key: str,
    power_w: float,
    names: Iterable[str] | None = None,
) -> tuple[float | None, float | None]:
    """Ends of the 95 % interval of what `mean_over_bands` gives; `names` as there.

    One rule for a build's own pages and for the index, which has no draws.
    """
    mean = mean_over_bands(bands, "efficiency_ratio", power_w, names)
    wanted = [one.band.name for one in means(bands, "efficiency_ratio")] if names is None else names
    if mean is None or covariance is None:
        return None, None
    half = half_width_over_bands(covariance.bands, covariance.matrix, list(wanted))
    if half is None:
        return None, None
    ends = np.asarray(BY_KEY[key].value(np.array([mean - half, mean + half]), power_w))
    low, high = (float(end) if isfinite(end) else None for end in np.sort(ends))
    return low, high


def covariance_of(result: BuildResult) -> BandCovariance | None:
    """How the band means of a result vary together."""
    found = efficiency_covariance(result.loss_draws_db)
    if found is None:
        return None
    return BandCovariance(bands=found[0], matrix=tuple(map(tuple, found[1].tolist())))


def limits_by_quantity(bench: BenchSheet, band: str, power_w: float) -> dict[str, float]:
    """What the workshop's limits of one band mean for every reported quantity."""
    limits = dict(limits_of_band(bench, band))
    efficiency, swr = limits.get("efficiency_ratio"), limits.get("swr")
    reflection = None if swr is None else ((swr - 1) / (swr + 1)) ** 2
    curves = Curves(
        frequency_hz=np.array([nan]),
        native=np.array([False]),
        efficiency_ratio=None if efficiency is None else np.array([efficiency]),
        reflection_ratio=None if reflection is None else np.array([reflection]),
    )
    ratios = {quantity.key: quantity.ratio(curves) for quantity in QUANTITIES}
    found = {
        key: float(BY_KEY[key].value(ratio, power_w)[0])
        for key, ratio in ratios.items()
        if ratio is not None
    }
    return {key: value for key, value in (found | limits).items() if isfinite(value)}


def is_simulated(result: BuildResult) -> bool:
    """True when the record says that the sweeps were simulated."""
    return says_simulated(result.build.sheet)
