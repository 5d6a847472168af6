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
"""Which method is the result where their intervals are as good as equal."""

AS_GOOD_AS_EQUAL = 1.05
"""Intervals within so much of each other are equal: draws alone make such a difference."""

WORTH_FEWER_UNITS = 2.0
"""A method that speaks of fewer units is the result only when so many times surer."""


def chosen_of(
    solved: Sequence[Solved], bands: Sequence[Band], power_w: float
) -> tuple[list[Solved], MethodResult, Spread]:
    """The result: loss in most bands, of most units, and then the smallest interval.

    A method that gives several units or pairs counts as their mean.
    """
    groups: dict[Method, list[Solved]] = {}
    for one in solved:
        groups.setdefault(one.plan.method, []).append(one)
    means = [(group, *_mean_of(group, bands, power_w)) for group in groups.values()]
    most_bands = max(len(bands_with_loss(result.bands)) for _, result, _ in means)
    field = [mean for mean in means if len(bands_with_loss(mean[1].bands)) == most_bands]
    most_units = max(len(result.units) for _, result, _ in field)
    complete = [mean for mean in field if len(mean[1].units) == most_units]
    surest = min(width_db(result) for _, result, _ in field)
    if WORTH_FEWER_UNITS * surest >= min(width_db(result) for _, result, _ in complete):
        field, surest = complete, min(width_db(result) for _, result, _ in complete)
    near = [mean for mean in field if width_db(mean[1]) <= AS_GOOD_AS_EQUAL * surest]
    return min(near or field, key=lambda mean: PREFERENCE.index(mean[1].method))


def rank(result: MethodResult) -> tuple[int, float, int]:
    """Least is best: bands with loss, mean width of their intervals, preference."""
    count = len(bands_with_loss(result.bands))
    return -count, round(width_db(result), 4), PREFERENCE.index(result.method)


def width_db(result: MethodResult) -> float:
    """Mean width of the intervals of heat loss over the bands; inf where it is not known [dB]."""
    figures = [band.figures["heat_loss_db"] for band in bands_with_loss(result.bands)]
    widths = [
        figure.high95 - figure.low95
        for figure in figures
        if figure.high95 is not None and figure.low95 is not None
    ]
    return float(np.mean(widths)) if widths else float("inf")


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
