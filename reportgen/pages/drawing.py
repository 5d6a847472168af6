"""A surface to draw on freely: places from the top left corner, text measured before it is set.

One unit is a point on paper and a pixel in a picture, so that both are drawn by the same lines.
"""

from __future__ import annotations

import io
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from functools import cache
from typing import Any

import matplotlib
from matplotlib.backends.backend_agg import FigureCanvasAgg
from matplotlib.collections import LineCollection
from matplotlib.figure import Figure
from matplotlib.font_manager import FontProperties
from matplotlib.ft2font import FT2Font
from matplotlib.lines import Line2D
from matplotlib.transforms import Affine2D, Transform
from PIL import Image
from PIL.PngImagePlugin import PngInfo

from reportgen.pages.canvas import POINTS_PER_INCH, drawable, svg_text
from reportgen.pages.look import FACES, LIGHT, font_path
from reportgen.pages.plain_text import clean_text

Place = tuple[float, float]
_COMPRESSION = 3


@dataclass(frozen=True, kw_only=True, slots=True)
class Letters:
    """How a text is set."""

    size: float
    face: str = "Regular"
    colour: str = LIGHT.ink

    def width(self, text: str) -> float:
        """Width of a line of text."""
        return self.size * sum(_advance(self.face, letter) for letter in text)


@cache
def _advance(face: str, letter: str) -> float:
    """Width of a letter over the size of letters."""
    font = _metrics(face)
    return float(font.load_char(ord(letter)).linearHoriAdvance) / 65536 / font.units_per_EM


@cache
def _metrics(face: str) -> FT2Font:
    font = FT2Font(font_path(face))
    font.set_size(font.units_per_EM, POINTS_PER_INCH)
    return font


@cache
def _font(face: str, size: float) -> FontProperties:
    return FontProperties(fname=font_path(face), size=size, weight=FACES[face])


def drawable_text(text: str) -> str:
    """Foreign text made safe to look at; letters that the font lacks stand as `[U+6F22]`."""
    return "".join(
        letter if ord(letter) in drawable() else f"[U+{ord(letter):04X}]"
        for letter in clean_text(text)
    )


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Drawing:
    """A figure that is drawn upon."""

    figure: Figure
    down: Transform

    def write(self, at: Place, text: str, letters: Letters, side: str = "left") -> None:
        """A line of text on its baseline; a dollar sign is just that."""
        self.figure.text(
            *at,
            text,
            fontproperties=_font(letters.face, letters.size),
            color=letters.colour,
            parse_math=False,
            ha=side,
            va="baseline",
            transform=self.down,
        )

    def write_lines(self, at: Place, lines: Sequence[str], letters: Letters, line: float) -> float:
        """Lines of text, the first on the baseline given; the baseline that would be next."""
        x, y = at
        for text in lines:
            self.write((x, y), text, letters)
            y += line
        return y

    def rules(
        self,
        lines: Sequence[tuple[Place, Place]],
        colour: str,
        width: float,
        strength: float | None = None,
    ) -> None:
        """Straight lines apart from each other, with blunt ends."""
        drawn = LineCollection(
            [list(line) for line in lines],
            color=colour,
            linewidth=width,
            alpha=strength,
            capstyle="butt",
            transform=self.down,
        )
        self.figure.add_artist(drawn)

    def path(self, points: Sequence[Place], colour: str, width: float) -> None:
        """One line through points."""
        self._add(points, color=colour, linewidth=width)

    def dots(self, places: Sequence[Place], colour: str, size: float) -> None:
        """Filled dots."""
        if places:
            round_ = {"linestyle": "none", "marker": "o", "markeredgewidth": 0}
            self._add(places, color=colour, markersize=size, **round_)

    def _add(self, points: Sequence[Place], **look: Any) -> None:
        x, y = zip(*points, strict=True)
        self.figure.add_artist(Line2D(x, y, transform=self.down, **look))

    def svg(self) -> str:
        """The drawing as SVG."""
        return svg_text(self.figure)

    def png(self, words: Mapping[str, str]) -> bytes:
        """The drawing as a picture on white paper: the same bytes each time.

        `words` go with it as its text fields, `Title` and `Description`.
        """
        self.figure.patch.set(visible=True, facecolor=LIGHT.paper)
        canvas: Any = FigureCanvasAgg(self.figure)
        with matplotlib.rc_context({"text.hinting": "none"}):
            canvas.draw()
        picture = Image.frombuffer("RGBA", canvas.get_width_height(), canvas.buffer_rgba())
        fields, buffer = PngInfo(), io.BytesIO()
        for name, text in words.items():
            fields.add_itxt(name, text, lang="en")
        picture.convert("RGB").save(buffer, "PNG", pnginfo=fields, compress_level=_COMPRESSION)
        return buffer.getvalue()


def new_drawing(width: float, height: float) -> Drawing:
    """An empty surface."""
    size = (width / POINTS_PER_INCH, height / POINTS_PER_INCH)
    figure = Figure(figsize=size, dpi=POINTS_PER_INCH)
    figure.patch.set_visible(False)
    down = Affine2D().scale(1, -1).translate(0, height).scale(1 / POINTS_PER_INCH)
    return Drawing(figure=figure, down=down + figure.dpi_scale_trans)
