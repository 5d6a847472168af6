"""Intervals of every figure by Monte Carlo on the sweeps.

A thousand draws: the ends of a 95 % interval are then themselves known to about 5 % of its half
width (one standard deviation), so its first digit means something and its second nearly does.

References
----------
.. [1] JCGM 101:2008, clauses 5 (propagation) and 7.7 (coverage interval from sorted draws).
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field, replace
from typing import Any

import numpy as np
from numpy.typing import NDArray

from reportgen.model import Band, BandResult, Curves, Figure, MeasuredBand, RealArray
from reportgen.physics.bands import mean_ratio
from reportgen.physics.methods import Computed, Plan
from reportgen.physics.quantities import BY_KEY, Better, Quantity
from reportgen.physics.seen import AS_SWEPT, Seen

DRAWS = 1000
"""Number of draws."""

RATIOS = ("efficiency_ratio", "reflection_ratio", "halved_pair_ratio")
"""What the curves of a method hold."""

_BETWEEN_BANDS = 16
_POINTS_IN_BAND = 3
_LOW, _HIGH = 0.025, 0.975


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Spread:
    """What draws of the inputs do to the curves of a method.

    `seen` holds curves of (F,) without draws, `drawn` of (K, F), at the same few frequencies;
    `computed` is all that the plan made of the draws, `without` of no draws; `shift` what check
    sweeps added to each curve of `seen`, (F,).
    """

    seen: Curves
    drawn: Curves
    computed: Computed = field(default_factory=Computed)
    without: Computed = field(default_factory=Computed)
    shift: Mapping[str, RealArray] = field(default_factory=dict)


def draw_grid(from_hz: float, to_hz: float, bands: Sequence[Band]) -> RealArray:
    """Where draws are computed: edges and centre of each band, and some points between [Hz]."""
    between = np.geomspace(from_hz, to_hz, _BETWEEN_BANDS)
    inside = [np.linspace(band.from_hz, band.to_hz, _POINTS_IN_BAND) for band in bands]
    marks = np.unique(np.concatenate([*inside, between, [from_hz, to_hz]]))
    return np.asarray(marks[(marks >= from_hz) & (marks <= to_hz)])


def spread_of(plan: Plan, frequency_hz: RealArray, drawn: Seen) -> Spread:
    """One plan with draws of its inputs at `frequency_hz`, within its sweeps."""
    computed, without = (plan.compute(frequency_hz, seen) for seen in (drawn, AS_SWEPT))
    seen = curves_of(without, frequency_hz)
    return Spread(
        seen=seen,
        drawn=_with_values(curves_of(computed, frequency_hz), seen),
        computed=computed,
        without=without,
    )


def _with_values(drawn: Curves, seen: Curves) -> Curves:
    """Draws without the few that a resonance left without a value: they count as what was seen."""
    parts: dict[str, Any] = {}
    for name in RATIOS:
        ratio = getattr(drawn, name)
        if ratio is not None:
            parts[name] = np.where(np.isnan(ratio), getattr(seen, name), ratio)
    return replace(drawn, **parts)


def curves_of(
    computed: Computed, frequency_hz: RealArray, native: NDArray[np.bool_] | None = None
) -> Curves:
    """What a plan computed, as curves; by default every point counts as swept."""
    return Curves(
        frequency_hz=frequency_hz,
        native=np.ones(frequency_hz.size, dtype=bool) if native is None else native,
        efficiency_ratio=computed.efficiency_ratio,
        reflection_ratio=computed.reflection_ratio,
        halved_pair_ratio=computed.halved_pair_ratio,
    )


# --- figures -------------------------------------------------------------------------------------


def with_intervals(
    bands: Sequence[BandResult], spread: Spread, power_w: float
) -> tuple[BandResult, ...]:
    """The same band figures with their 95 % intervals."""
    return tuple(
        _band_with_intervals(band, spread, power_w) if isinstance(band, MeasuredBand) else band
        for band in bands
    )


def _band_with_intervals(band: MeasuredBand, spread: Spread, power_w: float) -> MeasuredBand:
    inside = in_range(spread, band)
    if np.count_nonzero(inside) < 2:
        return band
    figures = {
        key: _with_intervals(BY_KEY[key], figure, spread, inside, power_w)
        for key, figure in band.figures.items()
    }
    return replace(band, figures=figures)


def in_range(spread: Spread, band: MeasuredBand) -> NDArray[np.bool_]:
    """Which of the draws' frequencies lie in the covered part of a band."""
    hz = spread.seen.frequency_hz
    return np.asarray((hz >= band.covered_hz[0]) & (hz <= band.covered_hz[1]))


def _with_intervals(
    quantity: Quantity,
    figure: Figure,
    spread: Spread,
    inside: NDArray[np.bool_],
    power_w: float,
) -> Figure:
    low, high = interval(mean_draws(quantity, figure, spread, inside, power_w))
    worst_low, worst_high = interval(_worst_draws(quantity, figure, spread, inside, power_w))
    return replace(figure, low95=low, high95=high, worst_low95=worst_low, worst_high95=worst_high)


def mean_draws(
    quantity: Quantity,
    figure: Figure,
    spread: Spread,
    inside: NDArray[np.bool_],
    power_w: float,
) -> RealArray:
    """Draws of a band's mean, (K,): the figure, moved as the draws move it on their few points."""
    hz = spread.seen.frequency_hz[inside]
    seen, drawn = (
        quantity.value(mean_ratio(hz, ratio[..., inside]), power_w)
        for ratio in _ratios(quantity, spread)
    )
    return _moved(figure.mean, seen, drawn)


def _worst_draws(
    quantity: Quantity,
    figure: Figure,
    spread: Spread,
    inside: NDArray[np.bool_],
    power_w: float,
) -> RealArray:
    seen, drawn = (
        _worst(quantity, quantity.value(ratio[..., inside], power_w))
        for ratio in _ratios(quantity, spread)
    )
    return _moved(figure.worst, seen, drawn)


def _ratios(quantity: Quantity, spread: Spread) -> tuple[RealArray, RealArray]:
    seen, drawn = quantity.ratio(spread.seen), quantity.ratio(spread.drawn)
    assert seen is not None
    assert drawn is not None
    return seen, drawn


def _moved(figure: float | None, seen: RealArray, drawn: RealArray) -> RealArray:
    return drawn if figure is None else np.asarray(figure + drawn - seen)


def _worst(quantity: Quantity, values: RealArray) -> RealArray:
    """The worst over frequency, in the quantity's own sense; (..., F) to (...)."""
    lowest = quantity.better is Better.HIGHER
    return np.asarray(values.min(axis=-1) if lowest else values.max(axis=-1))


def interval(draws: RealArray) -> tuple[float | None, float | None]:
    """Ends of the probabilistically symmetric 95 % interval [1]_; None: infinite."""
    ends = np.quantile(_known(draws), [_LOW, _HIGH], method="inverted_cdf")
    low, high = (float(end) if np.isfinite(end) else None for end in ends)
    return low, high


def _known(draws: RealArray) -> RealArray:
    """Draws that have a value; all of them where most have none."""
    known = draws[~np.isnan(draws)]
    return known if known.size > draws.size / 2 else draws


def half_width(draws: RealArray) -> float:
    """Half of the 95 % interval of draws."""
    low, high = np.quantile(_known(draws), [_LOW, _HIGH], method="inverted_cdf")
    return float(high - low) / 2


# --- curves and means ----------------------------------------------------------------------------


def efficiency_ribbon(curves: Curves, spread: Spread) -> tuple[RealArray, RealArray] | None:
    """Ends of the 95 % interval of efficiency at each point of `curves`, (F,) each [ratio]."""
    seen, drawn = spread.seen.efficiency_ratio, spread.drawn.efficiency_ratio
    if curves.efficiency_ratio is None or seen is None or drawn is None:
        return None
    ends = np.quantile(drawn, [_LOW, _HIGH], axis=0) - seen
    low, high = (
        curves.efficiency_ratio + np.interp(curves.frequency_hz, spread.seen.frequency_hz, end)
        for end in ends
    )
    return low, high


def mean_spread(spreads: Sequence[Spread]) -> Spread:
    """Spread of the mean over several units or pairs, at the frequencies that all share."""
    shared = spreads[0].seen.frequency_hz
    for spread in spreads[1:]:
        shared = np.intersect1d(shared, spread.seen.frequency_hz)
    picked = [_picked(spread, shared) for spread in spreads]
    return Spread(
        seen=mean_curves([one.seen for one in picked]),
        drawn=mean_curves([one.drawn for one in picked]),
    )


def _picked(spread: Spread, frequency_hz: RealArray) -> Spread:
    kept = np.isin(spread.seen.frequency_hz, frequency_hz)
    return Spread(seen=_at(spread.seen, kept), drawn=_at(spread.drawn, kept))


def _at(curves: Curves, kept: NDArray[np.bool_]) -> Curves:
    parts = {
        name: None if (part := getattr(curves, name)) is None else part[..., kept]
        for name in RATIOS
    }
    return Curves(frequency_hz=curves.frequency_hz[kept], native=curves.native[kept], **parts)


def mean_curves(parts: Sequence[Curves]) -> Curves:
    """Mean of curves on the same grid; what one of them lacks is left out."""
    means = {}
    for name in RATIOS:
        values = [getattr(one, name) for one in parts]
        lacking = any(value is None for value in values)
        means[name] = None if lacking else np.mean(values, axis=0)
    return Curves(frequency_hz=parts[0].frequency_hz, native=parts[0].native, **means)
