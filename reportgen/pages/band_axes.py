"""Axes with one row for each band, and watts across."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

from matplotlib.axes import Axes
from matplotlib.figure import Figure

from reportgen.pages.canvas import (
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


def band_figure(size: Size, names: Sequence[str], head_lines: int) -> tuple[Figure, Axes]:
    """Axes with one row for each band, the first at the top, and room for lines above."""
    top, bottom = size.line * head_lines + 4, 2.0 * size.letters
    labels = [name_in_chart(name) for name in names]
    widest = max(text_width(label, size) for label in labels)
    size = replace(size, left=max(size.left, widest + 8))
    figure, axes = new_figure(size, size.row * len(names) + top + bottom, top, bottom)
    axes.set_ylim(len(names) - 0.5, -0.5)
    axes.set_yticks(range(len(names)), labels, minor=False, **text_style(size))
    return figure, axes


def set_watt_axis(axes: Axes, low: float, high: float) -> None:
    """The scale of watts, from zero."""
    size = size_of(axes)
    gap = _round_gap((high - low) / 5)
    ticks = [gap * index for index in range(int(low // gap), int(high // gap) + 2)]
    axes.set_xlim(ticks[0], ticks[-1])
    labels = [f"{tick:g}" for tick in ticks[:-1]] + [f"{ticks[-1]:g} W"]
    axes.set_xticks(ticks, labels, minor=False, **label_style(size))
    axes.vlines(ticks, *axes.get_ylim(), color=LIGHT.hairline, linewidth=0.5, zorder=0.5)
    axes.spines["bottom"].set_visible(False)


def _round_gap(about: float) -> float:
    power = 10.0 ** int(f"{max(about, 1e-9):e}".partition("e")[2])
    return float(f"{next(step for step in (1, 2, 5, 10) if step * power >= about) * power:g}")


def add_stems(
    axes: Axes, values: Sequence[float], rivals: Sequence[float | None], colour: str
) -> None:
    """A line from zero to a dot for each value; a ring for what it is compared with."""
    rows = range(len(values))
    axes.hlines(rows, 0, values, color=colour, linewidth=1.7, zorder=2)
    axes.plot(values, rows, "o", color=colour, markersize=5.5, zorder=4, clip_on=False)
    known = [(rival, row) for row, rival in enumerate(rivals) if rival is not None]
    if known:
        axes.plot(
            *zip(*known, strict=True),
            "o",
            color=LIGHT.baseline,
            markerfacecolor="none",
            markeredgewidth=1.1,
            markersize=6.5,
            zorder=3,
            clip_on=False,
        )


def add_intervals(
    axes: Axes, ends: Sequence[tuple[float | None, float | None]], colour: str
) -> None:
    """The 95 % interval of each row as a broad, light line behind the dot."""
    known = [
        (row, low, high)
        for row, (low, high) in enumerate(ends)
        if low is not None and high is not None
    ]
    if known:
        rows, lows, highs = zip(*known, strict=True)
        axes.hlines(rows, lows, highs, color=colour, alpha=RIBBON_STRENGTH, linewidth=7, zorder=1.5)


def add_figures(axes: Axes, labels: Sequence[str]) -> None:
    """The figure of each row, in a column at the right edge."""
    size = size_of(axes)
    for row, label in enumerate(labels):
        axes.annotate(
            label,
            (1, row),
            xycoords=("axes fraction", "data"),
            xytext=(size.right, 0),
            textcoords="offset points",
            ha="right",
            va="center_baseline",
            annotation_clip=False,
            **text_style(size),
        )
