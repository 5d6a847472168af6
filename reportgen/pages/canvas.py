"""The drawing surface of charts: fixed axes, band shading, scales, keys, and SVG text.

Matplotlib without pyplot: no state is shared between charts. Text is drawn as paths.
"""

from __future__ import annotations

import io
import re
from collections.abc import Sequence
from dataclasses import dataclass
from functools import cache

import matplotlib
from matplotlib.axes import Axes
from matplotlib.collections import LineCollection, PolyCollection
from matplotlib.figure import Figure
from matplotlib.font_manager import FontProperties
from matplotlib.ft2font import FT2Font
from matplotlib.lines import Line2D
from matplotlib.ticker import NullLocator

from reportgen.model import Band, RealArray
from reportgen.pages.look import FAMILY, LIGHT, font_path

_TICKS_MHZ = (0.1, 0.2, 0.5, 1, 2, 3, 5, 7, 10, 14, 20, 30, 50, 100, 200, 500)
_METRES = re.compile(r"(\d+) m")
_POINTS_PER_INCH = 72
_LABEL_GAP = 4.0
_MOST_LABEL_ROWS = 3


@dataclass(frozen=True, kw_only=True, slots=True)
class Size:
    """A chart's width and height, its margins and its letters [pt]."""

    width: float
    height: float
    left: float
    right: float
    letters: float
    value_ticks: int
    frequency_ticks: int
    row: float

    @property
    def plot_width(self) -> float:
        """Width of the plot itself [pt]."""
        return self.width - self.left - self.right


WIDE = Size(
    width=520,
    height=212,
    left=34,
    right=34,
    letters=8.6,
    value_ticks=7,
    frequency_ticks=8,
    row=15.5,
)
NARROW = Size(
    width=264,
    height=220,
    left=27,
    right=27,
    letters=9.2,
    value_ticks=6,
    frequency_ticks=5,
    row=17,
)


# --- what all charts share -----------------------------------------------------------------------


@cache
def _font(face: str) -> FontProperties:
    return FontProperties(fname=font_path(face))


@cache
def _drawable() -> frozenset[int]:
    return frozenset(FT2Font(font_path("Regular")).get_charmap())


def _text_style(size: Size, colour: str = LIGHT.ink, face: str = "Regular") -> dict[str, object]:
    font = _font(face).copy()
    font.set_size(size.letters)
    return {"fontproperties": font, "color": colour, "parse_math": False}


def _new_figure(size: Size, height: float, top: float, bottom: float) -> tuple[Figure, Axes]:
    figure = Figure(figsize=(size.width / _POINTS_PER_INCH, height / _POINTS_PER_INCH))
    figure.patch.set_visible(False)
    box = (
        size.left / size.width,
        bottom / height,
        size.plot_width / size.width,
        (height - top - bottom) / height,
    )
    axes = figure.add_axes(box)
    axes.patch.set_visible(False)
    for side in ("top", "right", "left"):
        axes.spines[side].set_visible(False)
    axes.spines["bottom"].set(color=LIGHT.soft, linewidth=0.6)
    axes.tick_params(length=0, pad=4)
    return figure, axes


def _label_style(size: Size) -> dict[str, object]:
    return _text_style(size, LIGHT.soft)


def add_key(
    figure: Figure, size: Size, colour: str, *, baseline: bool, limit: bool, dots: bool = False
) -> None:
    """What is which, on the top line; nothing where there is only one thing to see."""
    entries = [("this build", colour, "-", "o", colour)]
    if baseline:
        entries.append(("baseline", LIGHT.baseline, "--", "o", "none"))
    if limit:
        entries.append(("limit", LIGHT.ink, ":", "", "none"))
    if len(entries) == 1:
        return
    height = figure.get_figheight() * _POINTS_PER_INCH
    y, x = height - 0.62 * size.letters, size.left
    for text, line_colour, dash, marker, fill in entries:
        _key_sample(figure, (x, y), height, size, line_colour, "" if dots else dash)
        if dots:
            _key_dot(figure, (x + 9, y), height, size, line_colour, marker, fill)
        style = _text_style(size)
        figure.text((x + 22) / size.width, y / height, text, va="center_baseline", **style)
        x += 22 + text_width(text, size) + 16


def _key_sample(
    figure: Figure, at: tuple[float, float], height: float, size: Size, colour: str, dash: str
) -> None:
    x, y = at
    line = Line2D(
        [x / size.width, (x + 18) / size.width],
        [y / height] * 2,
        color=colour,
        linestyle=dash or "none",
        linewidth=1.7 if dash == "-" else 1.1,
        transform=figure.transFigure,
    )
    if dash:
        figure.add_artist(line)


def _key_dot(
    figure: Figure,
    at: tuple[float, float],
    height: float,
    size: Size,
    colour: str,
    marker: str,
    fill: str,
) -> None:
    x, y = at
    dot = Line2D(
        [x / size.width],
        [y / height],
        color=colour,
        linestyle="none",
        marker=marker,
        markersize=5,
        markerfacecolor=fill,
        transform=figure.transFigure,
    )
    figure.add_artist(dot)


def text_width(text: str, size: Size) -> float:
    """Width of a line of chart text, as near as spacing needs it [pt]."""
    return 0.5 * size.letters * len(text)


def svg_text(figure: Figure) -> str:
    """The figure as SVG: the same text each time, no date, no names of programs."""
    buffer = io.StringIO()
    settings = {"svg.hashsalt": "reportgen", "svg.fonttype": "none", "path.simplify": False}
    nothing = {"Date": None, "Creator": None, "Format": None, "Type": None}
    with matplotlib.rc_context(settings):
        figure.savefig(buffer, format="svg", metadata=nothing)
    return _plain_svg(buffer.getvalue())


_PROLOGUE = re.compile(r"\A.*?(?=<svg)", re.DOTALL)
_ASIDES = re.compile(r"\s*<metadata>.*?</metadata>|\s*<style.*?</style>|\s*<!--.*?-->", re.DOTALL)
_FAMILIES = re.compile("font-family: [^;]*")
_TURNED_BY_NOTHING = re.compile(r' transform="rotate\(-?0 [^"]*"')
_LINE_ENDS = re.compile(r"\n\s*")


def _plain_svg(text: str) -> str:
    """Without prologue, metadata, comments and the style sheet that would reach the whole page."""
    body = _ASIDES.sub("", _PROLOGUE.sub("", text))
    body = re.sub(r"<defs>\s*</defs>", "", body)
    body = _FAMILIES.sub(f"font-family: '{FAMILY}'", _TURNED_BY_NOTHING.sub("", body))
    body = re.sub(r"<svg ", '<svg stroke-linejoin="round" stroke-linecap="butt" ', body, count=1)
    return _LINE_ENDS.sub("\n", body).strip()


# --- charts over frequency -----------------------------------------------------------------------


def frequency_figure(
    size: Size, from_hz: float, to_hz: float, bands: Sequence[Band]
) -> tuple[Figure, Axes]:
    """Axes over log frequency, the bands shaded and named above."""
    low, high = from_hz / 1e6, to_hz / 1e6
    rows = _label_rows(size, low, high, bands)
    top = 2.6 * size.letters + 1.25 * size.letters * (1 + max((row for *_, row in rows), default=0))
    figure, axes = _new_figure(size, size.height, top, 2.4 * size.letters)
    axes.set_xscale("log")
    axes.set_xlim(low, high)
    axes.xaxis.set_minor_locator(NullLocator())
    ticks = _frequency_ticks(size, low, high)
    labels = [f"{tick:g}" for tick in ticks]
    axes.set_xticks(ticks, labels, **_label_style(size))
    figure.text(
        1 - size.right / size.width + 5 / size.width,
        (2.4 * size.letters - 4) / size.height,
        "MHz",
        va="top",
        **_label_style(size),
    )
    _shade(axes, bands)
    for text, x, row in rows:
        axes.annotate(
            text,
            (x, 1),
            xycoords=("data", "axes fraction"),
            xytext=(0, 3 + 1.25 * size.letters * row),
            textcoords="offset points",
            ha="center",
            va="bottom",
            annotation_clip=False,
            **_text_style(size),
        )
    return figure, axes


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
    return float(matplotlib.scale.np.log(high / low))


def _short_names(bands: Sequence[Band], size: Size) -> list[str]:
    """Names as drawn: on a narrow chart the unit of metre bands stands once, on the first."""
    names = [name_in_chart(band.name) for band in bands]
    if size is NARROW:
        names = [
            _METRES.sub(r"\1", name) if index and _METRES.fullmatch(name) else name
            for index, name in enumerate(names)
        ]
    return names


def name_in_chart(name: str) -> str:
    """A band's name as a chart can draw it; empty where the font lacks a letter."""
    short = name if len(name) <= 14 else name[:13] + "…"
    return short if all(ord(letter) in _drawable() for letter in short) else ""


def _frequency_ticks(size: Size, low: float, high: float) -> list[float]:
    inside = [tick for tick in _TICKS_MHZ if low <= tick <= high]
    while len(inside) > size.frequency_ticks:
        inside = inside[::2] if len(inside) % 2 else inside[1::2]
    return inside or [float(f"{low:.3g}"), float(f"{high:.3g}")]


def set_value_axis(
    axes: Axes, edges: tuple[float, float], ticks: Sequence[float], labels: Sequence[str]
) -> None:
    """The left scale, a hairline at each of its ticks."""
    size = _size_of(axes)
    axes.set_ylim(*edges)
    axes.set_yticks(ticks, labels, **_label_style(size))
    axes.hlines(
        [tick for tick in ticks if tick != edges[0]],
        *axes.get_xlim(),
        color=LIGHT.hairline,
        linewidth=0.5,
        zorder=0.5,
    )


def _size_of(axes: Axes) -> Size:
    width = axes.get_figure(root=True).get_figwidth() * _POINTS_PER_INCH
    return WIDE if abs(width - WIDE.width) < 1 else NARROW


def add_second_scale(axes: Axes, places: Sequence[float], labels: Sequence[str]) -> None:
    """A scale on the right that reads the same curve in other units."""
    size = _size_of(axes)
    for place, label in zip(places, labels, strict=True):
        axes.annotate(
            label,
            (1, place),
            xycoords=("axes fraction", "data"),
            xytext=(4, 0),
            textcoords="offset points",
            va="center_baseline",
            annotation_clip=False,
            **_label_style(size),
        )


def spaced(places: Sequence[float], edges: tuple[float, float], size: Size) -> list[int]:
    """Indices of those ticks that keep a line's distance from the one before."""
    per_unit = (size.height - 6 * size.letters) / (edges[1] - edges[0])
    kept: list[int] = []
    for index, place in enumerate(places):
        if not kept or abs(place - places[kept[-1]]) * per_unit >= 1.7 * size.letters:
            kept.append(index)
    return kept


def title_scales(figure: Figure, size: Size, left: str, right: str) -> None:
    """The two scales' names, above the plot at either edge, in the line below the key."""
    height = figure.get_figheight() * _POINTS_PER_INCH
    box = figure.axes[0].get_position()
    y = min(box.y1 + 0.9 * size.letters / height, 1.0)
    _ = y
    for text, x, side in ((left, 0.0, "left"), (right, 1.0, "right")):
        figure.text(x, 1 - 2.4 * size.letters / height, text, ha=side, va="center", **_label_style(size))


def add_curve(axes: Axes, frequency_mhz: RealArray, value: RealArray, colour: str) -> None:
    """This build's curve."""
    axes.plot(frequency_mhz, value, color=colour, linewidth=1.7, zorder=3)


def add_baseline(axes: Axes, frequency_mhz: RealArray, value: RealArray) -> None:
    """The baseline's curve, dashed."""
    axes.plot(
        frequency_mhz, value, color=LIGHT.baseline, linewidth=1.1, linestyle=(0, (4, 2.2)), zorder=2
    )


def add_limits(axes: Axes, segments: Sequence[tuple[float, float, float]]) -> None:
    """Acceptance limits: a dotted line across each band that has one."""
    if segments:
        lines = [[(low, level), (high, level)] for low, high, level in segments]
        drawn = LineCollection(lines, color=LIGHT.ink, linewidth=1.2, linestyle=":", zorder=2.5)
        axes.add_collection(drawn, autolim=False)


# --- charts by band ------------------------------------------------------------------------------


def band_figure(size: Size, names: Sequence[str]) -> tuple[Figure, Axes]:
    """Axes with one row for each band, the first at the top."""
    height = size.row * len(names) + 4.2 * size.letters
    figure, axes = _new_figure(size, height, 1.8 * size.letters, 2.4 * size.letters)
    axes.set_ylim(len(names) - 0.5, -0.5)
    axes.set_yticks(range(len(names)), [name_in_chart(name) for name in names], **_text_style(size))
    return figure, axes


def set_watt_axis(axes: Axes, low: float, high: float) -> None:
    """The scale of watts, from zero."""
    size = _size_of(axes)
    gap = _round_gap((high - low) / 5)
    ticks = [gap * index for index in range(int(low // gap), int(high // gap) + 2)]
    axes.set_xlim(ticks[0], ticks[-1])
    labels = [f"{tick:g}" for tick in ticks[:-1]] + [f"{ticks[-1]:g} W"]
    axes.set_xticks(ticks, labels, **_label_style(size))
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


def add_figures(
    axes: Axes,
    values: Sequence[float],
    rivals: Sequence[float | None],
    labels: Sequence[str],
    gap: float,
) -> None:
    """The figure of each row, right of whatever stands furthest right."""
    size = _size_of(axes)
    low, high = axes.get_xlim()
    for row, (value, rival, label) in enumerate(zip(values, rivals, labels, strict=True)):
        near = rival if rival is not None and value < rival < value + gap * (high - low) else value
        axes.annotate(
            label,
            (near, row),
            xytext=(7, 0),
            textcoords="offset points",
            va="center_baseline",
            annotation_clip=False,
            **_text_style(size),
        )
    _ = low
