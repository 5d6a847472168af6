"""Axes over frequency: bands shaded and named, two scales, curves, limits."""

from __future__ import annotations

import math
import re
from collections.abc import Sequence

from matplotlib.axes import Axes
from matplotlib.collections import LineCollection, PolyCollection
from matplotlib.figure import Figure
from matplotlib.ticker import NullLocator

from reportgen.model import Band, RealArray
from reportgen.pages.canvas import (
    NARROW,
    RIBBON_STRENGTH,
    Size,
    label_style,
    name_in_chart,
    new_figure,
    size_of,
    text_style,
    text_width,
)
from reportgen.pages.look import LIGHT

_TICKS_MHZ = (0.1, 0.2, 0.5, 1, 2, 3, 5, 7, 10, 14, 20, 30, 50, 100, 200, 500)
_METRES = re.compile(r"(\d+) m")
_LABEL_GAP = 4.0
_MOST_LABEL_ROWS = 3
_BOTTOM_LINES = 2.0
_LEAST_LIMIT = 11.0  # pt
DASHES = (0, (4, 2.2))


def frequency_figure(
    size: Size, from_hz: float, to_hz: float, bands: Sequence[Band]
) -> tuple[Figure, Axes]:
    """Axes over log frequency, the bands shaded and named above."""
    low, high = from_hz / 1e6, to_hz / 1e6
    rows = _label_rows(size, low, high, bands)
    top = size.line * (size.head_lines + 1 + max((row for *_, row in rows), default=0))
    figure, axes = new_figure(size, size.height, top + 2, _BOTTOM_LINES * size.letters)
    axes.set_xscale("log")
    axes.set_xlim(low, high)
    axes.xaxis.set_minor_locator(NullLocator())
    ticks = _frequency_ticks(size, low, high)
    axes.set_xticks(ticks, [f"{tick:g}" for tick in ticks], minor=False, **label_style(size))
    _name_frequency_axis(figure, size)
    _shade(axes, bands)
    for text, x_mhz, row in rows:
        _name_band(axes, size, text, x_mhz, row)
    return figure, axes


def _name_frequency_axis(figure: Figure, size: Size) -> None:
    x = (size.width - size.right + 8) / size.width
    y = (_BOTTOM_LINES * size.letters - 4) / size.height
    figure.text(x, y, "MHz", va="top", **label_style(size))


def _name_band(axes: Axes, size: Size, text: str, x_mhz: float, row: int) -> None:
    axes.annotate(
        text,
        (x_mhz, 1),
        xycoords=("data", "axes fraction"),
        xytext=(0, 3 + size.line * row),
        textcoords="offset points",
        ha="center",
        va="bottom",
        annotation_clip=False,
        **text_style(size),
    )


def _shade(axes: Axes, bands: Sequence[Band]) -> None:
    boxes = [
        [(low, 0), (low, 1), (high, 1), (high, 0)]
        for low, high in ((band.from_hz / 1e6, band.to_hz / 1e6) for band in bands)
    ]
    shading = PolyCollection(
        boxes,
        facecolor=LIGHT.shade,
        edgecolor=LIGHT.shade,
        linewidth=1.2,
        transform=axes.get_xaxis_transform(),
        zorder=0,
    )
    axes.add_collection(shading, autolim=False)


def _label_rows(
    size: Size, low: float, high: float, bands: Sequence[Band]
) -> list[tuple[str, float, int]]:
    """Text, place and row of each band's name; a name that finds no free row is left out."""
    per_factor = size.plot_width / _log_ratio(high, low)
    free = [float("-inf")] * _MOST_LABEL_ROWS
    placed: list[tuple[str, float, int]] = []
    for text, band in zip(_short_names(bands, size), bands, strict=True):
        centre_mhz = (band.from_hz * band.to_hz) ** 0.5 / 1e6
        x = per_factor * _log_ratio(centre_mhz, low)
        half = text_width(text, size) / 2
        row = next((row for row, end in enumerate(free) if x - half >= end), None)
        if row is not None and text:
            free[row] = x + half + _LABEL_GAP
            placed.append((text, centre_mhz, row))
    return placed


def _log_ratio(high: float, low: float) -> float:
    return math.log(high / low)


def _short_names(bands: Sequence[Band], size: Size) -> list[str]:
    """Names as drawn: on a narrow chart the unit of metre bands stands once, on the first."""
    names = [name_in_chart(band.name) for band in bands]
    if size.width == NARROW.width:
        names = [
            _METRES.sub(r"\1", name) if index and _METRES.fullmatch(name) else name
            for index, name in enumerate(names)
        ]
    return names


def _frequency_ticks(size: Size, low: float, high: float) -> list[float]:
    inside = [tick for tick in _TICKS_MHZ if low <= tick <= high]
    while len(inside) > size.frequency_ticks:
        inside = inside[::2] if len(inside) % 2 else inside[1::2]
    return inside or [float(f"{low:.3g}"), float(f"{high:.3g}")]


def set_value_axis(
    axes: Axes, edges: tuple[float, float], ticks: Sequence[float], labels: Sequence[str]
) -> None:
    """The left scale, a hairline at each of its ticks."""
    size = size_of(axes)
    axes.set_ylim(*edges)
    axes.set_yticks(ticks, labels, minor=False, **label_style(size))
    axes.hlines(
        [tick for tick in ticks if tick != edges[0]],
        *axes.get_xlim(),
        color=LIGHT.hairline,
        linewidth=0.5,
        zorder=0.5,
    )


def add_second_scale(axes: Axes, places: Sequence[float], labels: Sequence[str]) -> None:
    """A scale on the right that reads the same curve in other units."""
    size = size_of(axes)
    for place, label in zip(places, labels, strict=True):
        axes.annotate(
            label,
            (1, place),
            xycoords=("axes fraction", "data"),
            xytext=(4, 0),
            textcoords="offset points",
            va="center_baseline",
            annotation_clip=False,
            **label_style(size),
        )


def spaced(places: Sequence[float], edges: tuple[float, float], size: Size) -> list[int]:
    """Indices of those ticks that keep a line's distance from the one before."""
    per_unit = (size.height - (size.head_lines + 3) * size.line) / (edges[1] - edges[0])
    kept: list[int] = []
    for index, place in enumerate(places):
        if not kept or abs(place - places[kept[-1]]) * per_unit >= 1.7 * size.letters:
            kept.append(index)
    return kept


def title_scales(figure: Figure, size: Size, left: str, right: str) -> None:
    """The two scales' names above the plot, at either edge: beside the key, or in a line below."""
    y = 1 - (size.head_lines - 0.5) * size.line / size.height
    for text, x, side in ((left, 0.0, "left"), (right, 1.0, "right")):
        figure.text(x, y, text, ha=side, va="center_baseline", **label_style(size))


def add_curve(axes: Axes, frequency_mhz: RealArray, value: RealArray, colour: str) -> None:
    """This build's curve."""
    axes.plot(frequency_mhz, value, color=colour, linewidth=1.7, zorder=3)


def add_ribbon(
    axes: Axes, frequency_mhz: RealArray, low: RealArray, high: RealArray, colour: str
) -> None:
    """The 95 % interval around a curve, behind all lines."""
    axes.fill_between(
        frequency_mhz, low, high, color=colour, alpha=RIBBON_STRENGTH, linewidth=0, zorder=1
    )


def add_baseline(axes: Axes, frequency_mhz: RealArray, value: RealArray) -> None:
    """The baseline's curve, dashed."""
    axes.plot(frequency_mhz, value, color=LIGHT.baseline, linewidth=1.1, linestyle=DASHES, zorder=2)


def add_limits(axes: Axes, segments: Sequence[tuple[float, float, float]]) -> None:
    """Acceptance limits: a line across each band that has one, long enough to be seen."""
    if segments:
        low, high = axes.get_xlim()
        least = _log_ratio(high, low) * _LEAST_LIMIT / size_of(axes).plot_width
        lines = [_widened(*segment, math.exp(least / 2)) for segment in segments]
        drawn = LineCollection(lines, color=LIGHT.ink, linewidth=2.2, zorder=2.5)
        axes.add_collection(drawn, autolim=False)


def _widened(low: float, high: float, level: float, factor: float) -> list[tuple[float, float]]:
    centre = math.sqrt(low * high)
    return [(min(low, centre / factor), level), (max(high, centre * factor), level)]
