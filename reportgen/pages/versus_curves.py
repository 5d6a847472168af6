"""Curves of several builds over frequency: efficiency with its intervals, and SWR."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace

import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure
from matplotlib.lines import Line2D

from reportgen.model import Band, BuildResult, RealArray
from reportgen.pages import versus_words
from reportgen.pages.canvas import (
    NARROW,
    RIBBON_STRENGTH,
    WIDE,
    Chart,
    Size,
    label_style,
    svg_text,
    text_style,
    text_width,
)
from reportgen.pages.curve_charts import regular_ticks, thinned
from reportgen.pages.display import decimal_sign
from reportgen.pages.frequency_axes import add_limits, frequency_figure, set_value_axis
from reportgen.pages.look import LIGHT, SERIES, Series
from reportgen.physics.quantities import BY_KEY

_SAMPLE = 20.0
_WORST_SWR = 5.0
_SWR_GAPS = (0.05, 0.1, 0.2, 0.5, 1.0)
_RIBBON_POINTS = 60


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Drawn:
    """One build as it is drawn: how, under which name, and its curve with its interval."""

    series: Series
    label: str
    mhz: RealArray
    value: RealArray
    ribbon: tuple[RealArray, RealArray, RealArray] | None = None

    @property
    def colour(self) -> str:
        """The colour on light ground, which stands for that of the page's scheme."""
        return str(getattr(LIGHT, self.series.colour))


def draw_efficiencies(
    results: Sequence[BuildResult],
    names: Sequence[str],
    bands: Sequence[Band],
    limits: Mapping[str, float],
    locale: str,
) -> Chart | None:
    """Efficiency over frequency, per cent; None where no build has one."""
    builds = [
        _percent_curve(result, series, name)
        for result, series, name in zip(results, SERIES, names, strict=False)
        if result.chosen.curves.efficiency_ratio is not None
    ]
    if not builds:
        return None
    values = _in_bands(builds, bands)
    low = min(90.0, 5 * np.floor((float(values.min()) - 1) / 5))
    edges = (float(low), float(max(100.0, 5 * np.ceil(values.max() / 5))))
    lines = {name: 100 * value for name, value in limits.items()}
    title, alt = versus_words.efficiency(results, names, locale)
    drawings = [
        _curves(size, builds, bands, edges, _whole_ticks(edges, size), "efficiency, %", lines)
        for size in (WIDE, NARROW)
    ]
    return Chart(name="efficiency", title=title, alt=alt, svg=drawings[0], narrow_svg=drawings[1])


def _percent_curve(result: BuildResult, series: Series, name: str) -> Drawn:
    curves = result.chosen.curves
    assert curves.efficiency_ratio is not None
    mhz, low, high = curves.frequency_hz / 1e6, curves.efficiency_low95, curves.efficiency_high95
    ribbon = None if low is None or high is None else (mhz, 100 * low, 100 * high)
    value = 100 * _single(curves.efficiency_ratio)
    return Drawn(series=series, label=name, mhz=mhz, value=value, ribbon=ribbon)


def draw_swrs(
    results: Sequence[BuildResult],
    names: Sequence[str],
    bands: Sequence[Band],
    limits: Mapping[str, float],
    locale: str,
) -> Chart | None:
    """SWR over frequency; None where no build has one."""
    builds = [
        _swr_curve(result, series, name)
        for result, series, name in zip(results, SERIES, names, strict=False)
        if result.chosen.curves.reflection_ratio is not None
    ]
    if not builds:
        return None
    most = float(np.max(_in_bands(builds, bands), initial=1.5))
    edges = (1.0, float(min(_WORST_SWR, np.ceil(4 * most + 0.2) / 4)))
    title, alt = versus_words.swr(results, names, locale)
    drawings = [
        _curves(size, builds, bands, edges, _swr_ticks(edges, size, locale), "SWR", limits)
        for size in (WIDE, NARROW)
    ]
    return Chart(name="swr", title=title, alt=alt, svg=drawings[0], narrow_svg=drawings[1])


def _swr_curve(result: BuildResult, series: Series, name: str) -> Drawn:
    curves = result.chosen.curves
    assert curves.reflection_ratio is not None
    swr = BY_KEY["swr"].value(_single(curves.reflection_ratio), 1.0)
    value = np.asarray(np.minimum(swr, 10 * _WORST_SWR))
    return Drawn(series=series, label=name, mhz=curves.frequency_hz / 1e6, value=value)


def _single(ratio: RealArray) -> RealArray:
    """The first of several draws: the one without any error drawn."""
    return np.asarray(ratio.reshape(-1, ratio.shape[-1])[0])


def _in_bands(builds: Sequence[Drawn], bands: Sequence[Band]) -> RealArray:
    """The values inside the bands: what the scale must show."""
    parts = [
        one.value[(one.mhz >= band.from_hz / 1e6) & (one.mhz <= band.to_hz / 1e6)]
        for one in builds
        for band in bands
    ]
    values = np.concatenate([part for part in parts if part.size] or [one.value for one in builds])
    return np.asarray(values[np.isfinite(values)])


_Ticks = tuple[Sequence[float], Sequence[str]]


def _whole_ticks(edges: tuple[float, float], size: Size) -> _Ticks:
    ticks = regular_ticks(*edges, size)
    return ticks, [f"{tick:.0f}" for tick in ticks]


def _swr_ticks(edges: tuple[float, float], size: Size, locale: str) -> _Ticks:
    ticks = regular_ticks(*edges, size, _SWR_GAPS)
    return ticks, [f"{tick:.3g}".replace(".", decimal_sign(locale)) for tick in ticks]


def _curves(
    size: Size,
    builds: Sequence[Drawn],
    bands: Sequence[Band],
    edges: tuple[float, float],
    ticks: _Ticks,
    scale: str,
    limits: Mapping[str, float],
) -> str:
    labels = [short_name(one.label, size) for one in builds]
    widest = max(text_width(label, size) for label in labels)
    size = replace(size, right=_SAMPLE + 1.1 * widest + 12, height=1.18 * size.height, head_lines=1)
    shown = _shown(builds, bands)
    low, high = _span(builds, shown)
    figure, axes = frequency_figure(size, 1e6 * low, 1e6 * high, shown)
    set_value_axis(axes, edges, *ticks)
    _title_scale(figure, size, scale, with_limits=bool(limits))
    for place, one in enumerate(builds):
        _add_build(axes, one, low, high, on_top=len(builds) - place)
    if limits:
        add_limits(axes, _limit_lines(shown, limits))
    _add_labels(figure, axes, size, builds, labels, high)
    return svg_text(figure)


def _title_scale(figure: Figure, size: Size, scale: str, *, with_limits: bool) -> None:
    """The scale's name above the plot, and what a dotted line is."""
    y = 1 - 0.5 * size.line / size.height
    figure.text(0, y, scale, va="center_baseline", **label_style(size))
    if with_limits:
        x = size.left + text_width(scale, size)
        ends = [x / size.width, (x + _SAMPLE) / size.width]
        dotted = Line2D(ends, [y, y], color=LIGHT.ink, linewidth=2.2)
        dotted.set_transform(figure.transFigure)
        figure.add_artist(dotted)
        at = (x + _SAMPLE + 4) / size.width
        figure.text(at, y, "limit", va="center_baseline", **label_style(size))


def short_name(label: str, size: Size) -> str:
    """A name as the narrow chart has room for it."""
    most = 9 if size.width == NARROW.width else 14
    return label if len(label) <= most else label[: most - 1] + "\u2026"


def _shown(builds: Sequence[Drawn], bands: Sequence[Band]) -> list[Band]:
    """Bands that some curve reaches into."""
    return [
        band
        for band in bands
        if any(one.mhz[0] < band.to_hz / 1e6 and band.from_hz / 1e6 < one.mhz[-1] for one in builds)
    ]


def _span(builds: Sequence[Drawn], bands: Sequence[Band]) -> tuple[float, float]:
    if not bands:
        return min(one.mhz[0] for one in builds), max(one.mhz[-1] for one in builds)
    edges = [edge / 1e6 for band in bands for edge in (band.from_hz, band.to_hz)]
    return 0.86 * min(edges), 1.06 * max(edges)


def _limit_lines(
    bands: Sequence[Band], limits: Mapping[str, float]
) -> list[tuple[float, float, float]]:
    return [
        (band.from_hz / 1e6, band.to_hz / 1e6, limits[band.name])
        for band in bands
        if band.name in limits
    ]


def _add_build(axes: Axes, one: Drawn, low: float, high: float, *, on_top: int) -> None:
    if one.ribbon is not None:
        mhz, below, above = one.ribbon
        inside = np.flatnonzero((mhz >= low) & (mhz <= high))
        kept = inside[np.unique(np.linspace(0, len(inside) - 1, _RIBBON_POINTS).astype(int))]
        axes.fill_between(
            mhz[kept],
            below[kept],
            above[kept],
            color=one.colour,
            alpha=RIBBON_STRENGTH,
            linewidth=0,
            zorder=1,
        )
    shown = (one.mhz >= low) & (one.mhz <= high)
    (line,) = axes.plot(
        *thinned(one.mhz[shown], one.value[shown]),
        color=one.colour,
        linewidth=1.6,
        zorder=2 + 0.1 * on_top,
    )
    if one.series.dash:
        line.set_dashes(one.series.dash)


# --- names beside the curves ---------------------------------------------------------------------


def _add_labels(
    figure: Figure,
    axes: Axes,
    size: Size,
    builds: Sequence[Drawn],
    labels: Sequence[str],
    high_mhz: float,
) -> None:
    """Each build's name where its curve ends, a piece of its line before it."""
    box = axes.get_position()
    ends = [_end(one, axes, high_mhz) for one in builds]
    low, high = size.height * box.y0, size.height * box.y1
    heights = _parted([low + end * (high - low) for end in ends], size.line, low, high)
    left = size.width - size.right + 4
    for one, label, height in zip(builds, labels, heights, strict=True):
        y = height / size.height
        sample = Line2D(
            [left / size.width, (left + _SAMPLE) / size.width],
            [y, y],
            color=one.colour,
            linewidth=1.6,
            transform=figure.transFigure,
        )
        if one.series.dash:
            sample.set_dashes(one.series.dash)
        figure.add_artist(sample)
        x = (left + _SAMPLE + 4) / size.width
        figure.text(x, y, label, va="center_baseline", **text_style(size))


def _end(one: Drawn, axes: Axes, high_mhz: float) -> float:
    """Height of a curve's last point, in parts of the axes."""
    inside = one.value[one.mhz <= high_mhz]
    low, high = axes.get_ylim()
    last = inside[-1] if inside.size else low
    return float(np.clip((last - low) / (high - low), 0, 1))


def _parted(heights: Sequence[float], gap: float, low: float, high: float) -> list[float]:
    """The same heights, in the same order, at least a gap apart and within the plot."""
    order = np.argsort(heights, kind="stable")
    found = np.asarray(heights, dtype=float)[order]
    for place in range(1, len(found)):
        found[place] = max(found[place], found[place - 1] + gap)
    found[-1] = min(found[-1], high)
    for place in range(len(found) - 2, -1, -1):
        found[place] = min(found[place], found[place + 1] - gap)
    found = found + max(0.0, low - found[0])
    return [float(found[place]) for place in np.argsort(order)]
