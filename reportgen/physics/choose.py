"""The result among the methods: the one with the smallest interval, as a mean over its units."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

import numpy as np

from reportgen.model import Band, Curves, Method, MethodResult, RealArray
from reportgen.physics.bands import in_bands
from reportgen.physics.solve import Solved, bands_with_loss, with_ribbon
from reportgen.physics.uncertainty import RATIOS, Spread, mean_spread, with_intervals

PREFERENCE = (
    Method.BISECTION_LOAD,
    Method.THREE_PAIRS_LOAD,
    Method.TERMINATIONS,
    Method.THREE_PAIRS,
    Method.BISECTION,
    Method.SERIES_RESISTOR,
    Method.DIRECT,
    Method.LOAD_ONLY,
    Method.HALVING,
)
"""Which method is the result where their intervals are equal."""


def chosen_of(
    solved: Sequence[Solved], bands: Sequence[Band], power_w: float
) -> tuple[list[Solved], MethodResult, Spread]:
    """The method with loss in most bands and then the smallest interval; several: their mean."""
    groups: dict[Method, list[Solved]] = {}
    for one in solved:
        groups.setdefault(one.plan.method, []).append(one)
    means = [(group, *_mean_of(group, bands, power_w)) for group in groups.values()]
    return min(means, key=lambda mean: rank(mean[1]))


def rank(result: MethodResult) -> tuple[int, float, int]:
    """Least is best: bands with loss, mean width of their intervals, preference."""
    losses = [band.figures["heat_loss_db"] for band in bands_with_loss(result.bands)]
    widths = [
        figure.high95 - figure.low95
        for figure in losses
        if figure.high95 is not None and figure.low95 is not None
    ]
    width = float(np.mean(widths)) if widths else float("inf")
    return -len(losses), round(width, 4), PREFERENCE.index(result.method)


def _mean_of(
    group: Sequence[Solved], bands: Sequence[Band], power_w: float
) -> tuple[MethodResult, Spread]:
    """The mean over several pairs or units, on the points of the first that all cover."""
    first = group[0].result
    if len(group) == 1:
        return first, group[0].spread
    low = max(one.result.curves.frequency_hz[0] for one in group)
    high = min(one.result.curves.frequency_hz[-1] for one in group)
    inside = (first.curves.frequency_hz >= low) & (first.curves.frequency_hz <= high)
    if np.count_nonzero(inside) < 2:
        return first, group[0].spread
    hz = first.curves.frequency_hz[inside]
    parts = {name: _mean_ratio([one.result.curves for one in group], name, hz) for name in RATIOS}
    curves = Curves(frequency_hz=hz, native=first.curves.native[inside], **parts)
    spread = mean_spread([one.spread for one in group])
    result = replace(
        first,
        unit=None,
        units=tuple(dict.fromkeys(unit for one in group for unit in one.result.units)),
        curves=with_ribbon(curves, spread),
        bands=with_intervals(in_bands(curves, bands, power_w), spread, power_w),
    )
    return result, spread


def _mean_ratio(parts: Sequence[Curves], name: str, frequency_hz: RealArray) -> RealArray | None:
    found = [(one.frequency_hz, getattr(one, name)) for one in parts]
    if any(ratio is None for _, ratio in found):
        return None
    return np.asarray(np.mean([np.interp(frequency_hz, hz, ratio) for hz, ratio in found], axis=0))
