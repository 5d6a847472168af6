"""The chart of a card: one row for each band, a dot on a scale, its figures beside it."""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from math import isfinite

from reportgen.pages.canvas import RIBBON_STRENGTH
from reportgen.pages.display import DASH, NOT_MEASURED, decimal_sign
from reportgen.pages.drawing import Drawing, Letters, drawable_text
from reportgen.pages.kit_words import BandLine, KitWords
from reportgen.pages.line_breaks import shortened
from reportgen.pages.look import LIGHT

MOST_ROWS = 16
HEAD_LINES = 1.7
FOOT_LINES = 1.7
_LONGEST_NAME = 14
_SMALL = 0.86
_GAP = 1.5
_MIDDLE = 0.33
"""Half the height of a figure over the size of its letters."""
_WORST_SWR_SHOWN = 5.0
_PERCENT_GAPS = (1.0, 2.0, 5.0, 10.0, 20.0)
_SWR_GAPS = (0.1, 0.2, 0.5, 1.0)
_MOST_GAPS = 5


@dataclass(frozen=True, kw_only=True, slots=True)
class BandPlace:
    """Where the chart stands: its left top corner, its width, its letters and its rows."""

    left: float
    top: float
    width: float
    letters: float
    row: float

    @property
    def first(self) -> float:
        """Top of the first row."""
        return self.top + HEAD_LINES * self.letters

    def middle(self, index: int) -> float:
        """Middle of a row."""
        return self.first + (index + 0.5) * self.row

    def baseline(self, index: int) -> float:
        """Where the text of a row stands."""
        return self.middle(index) + _MIDDLE * self.letters


@dataclass(frozen=True, kw_only=True, slots=True)
class _Column:
    """A column of figures that end at `right`."""

    key: str
    label: str
    colour: str
    right: float


@dataclass(frozen=True, kw_only=True, slots=True)
class _Scale:
    """Values to places between `left` and `right`, and where it is marked [per cent, or SWR]."""

    low: float
    high: float
    ticks: tuple[float, ...]
    left: float
    right: float

    def place(self, value: float) -> float:
        """Where a value stands; what lies outside stands at the end."""
        share = (value - self.low) / (self.high - self.low)
        return self.left + (self.right - self.left) * min(max(share, 0.0), 1.0)


def rows_shown(words: KitWords) -> int:
    """Rows that the chart takes; where bands are left out, one of them says so."""
    return max(1, min(len(words.bands), MOST_ROWS))


def chart_height(words: KitWords, letters: float, row: float) -> float:
    """Height of the chart with its heads and its scale."""
    return rows_shown(words) * row + (HEAD_LINES + FOOT_LINES) * letters


def draw_bands(drawing: Drawing, words: KitWords, at: BandPlace, locale: str) -> None:
    """A row for each band: name, dot and 95 % interval, efficiency, worst SWR."""
    if not words.bands:
        drawing.write((at.left, at.baseline(0)), "No band has a figure.", _soft(at.letters))
        return
    all_fit = len(words.bands) <= MOST_ROWS
    bands = words.bands if all_fit else words.bands[: MOST_ROWS - 1]
    columns, free = _columns(words, bands, at)
    _draw_names(drawing, bands, at)
    _draw_columns(drawing, bands, columns, at)
    scale = _scale(words, bands, at, free)
    if scale is not None:
        _draw_scale(drawing, scale, at, words, locale)
        _draw_marks(drawing, scale, bands, at, words)
    if not all_fit:
        text = f"and {len(words.bands) - len(bands)} more bands, in the report"
        drawing.write((at.left, at.baseline(len(bands))), text, _soft(at.letters))


def _soft(size: float) -> Letters:
    return Letters(size=size, colour=LIGHT.soft)


# --- text ----------------------------------------------------------------------------------------


def _columns(
    words: KitWords, bands: Sequence[BandLine], at: BandPlace
) -> tuple[list[_Column], float]:
    """Columns of figures, the last first, and the right end of what they leave free."""
    named = [("swr", "worst SWR", LIGHT.match)]
    if words.drawn == "efficiency_ratio":
        named.append(("efficiency", "efficiency, %", LIGHT.ink))
    letters, found, right = Letters(size=at.letters), [], at.left + at.width
    for key, label, colour in named:
        found.append(_Column(key=key, label=label, colour=colour, right=right))
        texts = [label, *(_figure(band, key) for band in bands if not band.reason)]
        right -= max(letters.width(text) for text in texts) + _GAP * at.letters
    return found, right


def _figure(band: BandLine, key: str) -> str:
    text: str = getattr(band, key)
    return DASH if text.strip() == NOT_MEASURED else text


def _name(band: BandLine) -> str:
    return shortened(drawable_text(band.name), _LONGEST_NAME)


def _draw_names(drawing: Drawing, bands: Sequence[BandLine], at: BandPlace) -> None:
    bold = Letters(size=at.letters, face="Semibold")
    drawing.write((at.left, at.top + at.letters), "Band", _soft(at.letters))
    for index, band in enumerate(bands):
        drawing.write((at.left, at.baseline(index)), _name(band), bold)


def _draw_columns(
    drawing: Drawing, bands: Sequence[BandLine], columns: Sequence[_Column], at: BandPlace
) -> None:
    soft = _soft(at.letters)
    for column in columns:
        drawing.write((column.right, at.top + at.letters), column.label, soft, "right")
        letters = Letters(size=at.letters, colour=column.colour)
        for index, band in enumerate(bands):
            if not band.reason:
                place = (column.right, at.baseline(index))
                drawing.write(place, _figure(band, column.key), letters, "right")
    for index, band in enumerate(bands):
        if band.reason:
            drawing.write((at.left + at.width, at.baseline(index)), NOT_MEASURED, soft, "right")


# --- the scale -----------------------------------------------------------------------------------


def _scale(
    words: KitWords, bands: Sequence[BandLine], at: BandPlace, right: float
) -> _Scale | None:
    """The scale between names and figures; None where there is nothing to draw."""
    ends = [end for band in bands for end in _ends(band)]
    if not ends:
        return None
    low, high, gaps = _swr_range(ends) if words.drawn == "swr" else _percent_range(ends)
    bold = Letters(size=at.letters, face="Semibold")
    left = at.left + max(bold.width(name) for name in ("Band", *map(_name, bands)))
    ticks = _ticks(low, high, gaps)
    return _Scale(low=low, high=high, ticks=ticks, left=left + _GAP * at.letters, right=right)


def _ends(band: BandLine) -> Iterator[float]:
    for end in (band.value, band.low95, band.high95):
        if end is not None and isfinite(end):
            yield end


_Range = tuple[float, float, Sequence[float]]


def _swr_range(ends: Sequence[float]) -> _Range:
    high = min(max(math.ceil(2 * max(ends)) / 2, 2.0), _WORST_SWR_SHOWN)
    return 1.0, high, _SWR_GAPS


def _percent_range(ends: Sequence[float]) -> _Range:
    low = min(90.0, 5.0 * math.floor((min(ends) - 1) / 5))
    return low, max(100.0, 5.0 * math.ceil(max(ends) / 5)), _PERCENT_GAPS


def _ticks(low: float, high: float, gaps: Sequence[float]) -> tuple[float, ...]:
    gap = next((gap for gap in gaps if (high - low) / gap <= _MOST_GAPS), high - low)
    first, last = math.ceil(low / gap - 1e-9), math.floor(high / gap + 1e-9)
    return tuple(round(index * gap, 6) for index in range(first, last + 1))


def _draw_scale(
    drawing: Drawing, scale: _Scale, at: BandPlace, words: KitWords, locale: str
) -> None:
    """A hairline at each mark, its value below; what dot and bar are, above."""
    bottom, small = at.first + rows_shown(words) * at.row, _soft(_SMALL * at.letters)
    marks = [(scale.place(tick), f"{tick:g}") for tick in scale.ticks]
    lines = [((x, at.first), (x, bottom)) for x, _ in marks]
    drawing.rules(lines, LIGHT.hairline, 0.05 * at.letters)
    for x, text in marks:
        shown = text.replace(".", decimal_sign(locale))
        drawing.write((x, bottom + 1.3 * at.letters), shown, small, "center")
    key = "worst" if words.drawn == "swr" else "mean"
    key += ", 95\u00a0% interval" if words.intervals else ""
    if small.width(key) <= scale.right - scale.left:
        drawing.write((scale.left, at.top + at.letters), key, small)


def _draw_marks(
    drawing: Drawing, scale: _Scale, bands: Sequence[BandLine], at: BandPlace, words: KitWords
) -> None:
    """The 95 % intervals as broad light lines, the dots upon them."""
    colour = LIGHT.match if words.drawn == "swr" else LIGHT.heat
    rows = [(at.middle(index), band) for index, band in enumerate(bands)]
    intervals = [
        ((scale.place(band.low95), y), (scale.place(band.high95), y))
        for y, band in rows
        if band.low95 is not None and band.high95 is not None
    ]
    drawing.rules(intervals, colour, 0.8 * at.letters, strength=RIBBON_STRENGTH)
    dots = [(scale.place(band.value), y) for y, band in rows if band.value is not None]
    drawing.dots(dots, colour, 0.56 * at.letters)
