"""The drawing surface of charts: sizes, fixed axes, letters, the key, and the SVG that results.

Matplotlib without pyplot: no state is shared between charts. Text stays text, in the letters of
the page around it.
"""

from __future__ import annotations

import io
import re
from dataclasses import dataclass
from functools import cache
from typing import Any

import matplotlib
from matplotlib.axes import Axes
from matplotlib.figure import Figure
from matplotlib.font_manager import FontProperties
from matplotlib.ft2font import FT2Font
from matplotlib.lines import Line2D

from reportgen.pages.look import FAMILY, LIGHT, font_path

POINTS_PER_INCH = 72


@dataclass(frozen=True, kw_only=True, slots=True)
class Chart:
    """A drawing with its takeaway as title and the same in words as its alternative text."""

    name: str
    title: str
    alt: str
    svg: str
    narrow_svg: str


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
    head_lines: int

    @property
    def line(self) -> float:
        """Height of a line of text [pt]."""
        return 1.45 * self.letters

    @property
    def plot_width(self) -> float:
        """Width of the plot itself [pt]."""
        return self.width - self.left - self.right


WIDE = Size(
    width=520,
    height=152,
    left=34,
    right=34,
    letters=8.6,
    value_ticks=7,
    frequency_ticks=8,
    row=15.5,
    head_lines=1,
)
NARROW = Size(
    width=264,
    height=226,
    left=27,
    right=27,
    letters=9.2,
    value_ticks=6,
    frequency_ticks=5,
    row=17,
    head_lines=2,
)


# --- what all charts share -----------------------------------------------------------------------


@cache
def _font() -> FontProperties:
    return FontProperties(fname=font_path("Regular"))


def name_in_chart(name: str) -> str:
    """A band's name as a chart can draw it; empty where the font lacks a letter."""
    short = name if len(name) <= 14 else name[:13] + "\u2026"
    return short if all(ord(letter) in drawable() for letter in short) else ""


@cache
def drawable() -> frozenset[int]:
    """Code points of the letters that the font has."""
    return frozenset(FT2Font(font_path("Regular")).get_charmap())


def text_style(size: Size, colour: str = LIGHT.ink) -> dict[str, Any]:
    """How text is set: in ink, in the letters of the page, a dollar sign being just that."""
    font = _font().copy()
    font.set_size(size.letters)
    return {"fontproperties": font, "color": colour, "parse_math": False}


def label_style(size: Size) -> dict[str, Any]:
    """How the text of a scale is set."""
    return text_style(size, LIGHT.soft)


def new_figure(size: Size, height: float, top: float, bottom: float) -> tuple[Figure, Axes]:
    """A figure with one plot in it, all edges fixed [pt]."""
    figure = Figure(figsize=(size.width / POINTS_PER_INCH, height / POINTS_PER_INCH))
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


@dataclass(frozen=True, kw_only=True, slots=True)
class Sample:
    """One entry of the key: a piece of line, a dot, or both."""

    text: str
    colour: str
    dash: Any = "none"
    width: float = 1.1
    marker: str = ""
    fill: str = "none"
    strength: float = 1.0


RIBBON_STRENGTH = 0.22
"""How much of its colour an interval shows: light enough for all lines to stand out."""


def interval_sample(colour: str) -> Sample:
    """How an interval stands in the key."""
    return Sample(
        text="95\u00a0% interval", colour=colour, dash="-", width=6, strength=RIBBON_STRENGTH
    )


def add_key(figure: Figure, size: Size, samples: list[Sample], *, from_left: float) -> None:
    """What is which, on the top line; nothing where there is only one thing to see."""
    if len(samples) < 2:
        return
    height = figure.get_figheight() * POINTS_PER_INCH
    y, x = height - size.line / 2, from_left
    line, gap = (18.0, 14.0) if size.head_lines == 1 else (12.0, 10.0)
    for sample in samples:
        _add_sample(figure, (x / size.width, y / height), line / size.width, sample)
        x += line + 4
        style = text_style(size)
        figure.text(x / size.width, y / height, sample.text, va="center_baseline", **style)
        x += text_width(sample.text, size) + gap


def _add_sample(figure: Figure, at: tuple[float, float], width: float, sample: Sample) -> None:
    x, y = at
    common: dict[str, Any] = {
        "color": sample.colour,
        "alpha": sample.strength if sample.strength < 1 else None,
        "transform": figure.transFigure,
    }
    if sample.dash != "none":
        line = [x, x + width]
        drawn = Line2D(line, [y, y], linestyle=sample.dash, linewidth=sample.width, **common)
        drawn.set_solid_capstyle("butt")
        figure.add_artist(drawn)
    if sample.marker:
        dot = [x + width / 2]
        mark = Line2D(dot, [y], linestyle="none", marker=sample.marker, markersize=5, **common)
        mark.set_markerfacecolor(sample.fill)
        figure.add_artist(mark)


def size_of(axes: Axes) -> Size:
    """The size that a chart was begun with."""
    width = axes.bbox.width / axes.get_position().width / axes.figure.dpi * POINTS_PER_INCH
    return WIDE if abs(width - WIDE.width) < 1 else NARROW


def text_width(text: str, size: Size) -> float:
    """Width of a line of chart text, as near as spacing needs it [pt]."""
    return 0.5 * size.letters * len(text)


def svg_text(figure: Figure) -> str:
    """The figure as SVG: the same text each time, no date, no names of programs."""
    buffer = io.StringIO()
    settings: Any = {"svg.hashsalt": "reportgen", "svg.fonttype": "none", "path.simplify": False}
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
