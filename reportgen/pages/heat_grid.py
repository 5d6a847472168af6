"""Heat loss of all builds by band: a picture made of its own figures.

The tint says how much of the power turns into heat, a sign how a build compares with the baseline.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from itertools import count, pairwise
from math import ceil, floor

from reportgen.model import BandComparison, Verdict
from reportgen.pages.display import NOT_MEASURED, aligned, entered
from reportgen.pages.intervals import mean_text
from reportgen.pages.look import TINTS
from reportgen.pages.summary import figure_of, means, measured_bands
from reportgen.pages.tables import Column, band_column
from reportgen.physics.quantities import BY_KEY
from reportgen.published import PublishedBuild

_QUANTITY = BY_KEY["heat_loss_db"]


@dataclass(frozen=True, kw_only=True, slots=True)
class Sign:
    """How a figure compares with the baseline's: a glyph, and what it says."""

    glyph: str
    words: str


SIGNS = {
    Verdict.BETTER: Sign(glyph="\u25bc", words="less loss"),
    Verdict.SAME: Sign(glyph="=", words="the same within uncertainty"),
    Verdict.WORSE: Sign(glyph="\u25b2", words="more loss"),
}


@dataclass(frozen=True, kw_only=True, slots=True)
class GridCell:
    """A figure; `tint` names its class, `sign` None: not compared."""

    text: str
    tint: str
    sign: Sign | None = None


@dataclass(frozen=True, kw_only=True, slots=True)
class GridRow:
    """A build; `words` instead of cells where it has no loss."""

    key: str
    name: str
    baseline: bool
    cells: tuple[GridCell, ...] = ()
    words: str = ""


@dataclass(frozen=True, kw_only=True, slots=True)
class TintRange:
    """One entry of the legend."""

    tint: str
    text: str


@dataclass(frozen=True, kw_only=True, slots=True)
class Grid:
    """The whole picture; `signs` are those that occur in it."""

    columns: tuple[Column, ...]
    rows: tuple[GridRow, ...]
    legend: tuple[TintRange, ...]
    signs: tuple[Sign, ...]


def heat_grid(
    builds: Sequence[PublishedBuild], baseline_key: str | None, locale: str
) -> Grid | None:
    """Mean heat loss, builds by bands, in the order of the builds; None where none has a loss."""
    values = [one.value for build in builds for one in means(build, "heat_loss_db")]
    if not values:
        return None
    edges = tint_edges(min(values), max(values))
    bands = sorted(
        {band.band for build in builds for band in build.bands},
        key=lambda band: (band.from_hz, band.to_hz, band.name),
    )
    names = [band.name for band in bands]
    rows = _aligned(
        [_row(build, names, edges, build.key == baseline_key, locale) for build in builds], locale
    )
    found = {cell.sign for row in rows for cell in row.cells}
    return Grid(
        columns=tuple(band_column(name) for name in names),
        rows=rows,
        legend=_legend(edges, locale),
        signs=tuple(sign for sign in SIGNS.values() if sign in found),
    )


# --- tints ---------------------------------------------------------------------------------------


def tint_edges(low: float, high: float) -> tuple[float, ...]:
    """Edges of the ranges that bear one tint each [dB]: multiples of 1, 2, 2.5 or 5 in a decade.

    As fine as the tints allow; the first lies at or below `low`, the last above `high`.
    """
    steps = (digit * 10.0**power for power in count(-3) for digit in (1, 2, 2.5, 5))
    for step in steps:
        first, last = floor(low / step), floor(high / step) + 1
        if last - first <= len(TINTS):
            return tuple(round(edge * step, 6) for edge in range(first, last + 1))
    raise AssertionError("some step is wide enough")


def _level(value: float, edges: Sequence[float]) -> int:
    return max(0, sum(value >= edge for edge in edges) - 1)


def _tint(level: int, edges: Sequence[float]) -> str:
    """Few ranges are spread over all the tints, so that they stay easy to tell apart."""
    most = len(edges) - 2
    return f"tint-{ceil(level * (len(TINTS) - 1) / most) if most else 0}"


def _legend(edges: Sequence[float], locale: str) -> tuple[TintRange, ...]:
    texts = [entered(edge, locale=locale) for edge in edges]
    return tuple(
        TintRange(tint=_tint(level, edges), text=f"{low} to {high}")
        for level, (low, high) in enumerate(pairwise(texts))
    )


# --- rows ----------------------------------------------------------------------------------------


def _row(
    build: PublishedBuild,
    names: Sequence[str],
    edges: Sequence[float],
    baseline: bool,
    locale: str,
) -> GridRow:
    if not means(build, "heat_loss_db"):
        words = f"{NOT_MEASURED}: {build.reason or 'its report says why'}"
        return GridRow(key=build.key, name=build.name, baseline=baseline, words=words)
    compared = {} if build.comparison is None else {one.band: one for one in build.comparison.bands}
    measured = {band.band.name: band for band in measured_bands(build)}
    cells = []
    for name in names:
        figure = figure_of(measured[name], "heat_loss_db") if name in measured else None
        if figure is None or figure.mean is None:
            cells.append(GridCell(text=NOT_MEASURED, tint="gap"))
            continue
        text = mean_text(_QUANTITY, figure, limits=edges, locale=locale)
        tint = _tint(_level(figure.mean, edges), edges)
        cells.append(GridCell(text=text, tint=tint, sign=_sign(compared.get(name))))
    return GridRow(key=build.key, name=build.name, baseline=baseline, cells=tuple(cells))


def _aligned(rows: Sequence[GridRow], locale: str) -> tuple[GridRow, ...]:
    """The same rows, decimal points of each column meeting."""
    texts = zip(*([cell.text for cell in row.cells] for row in rows if row.cells), strict=True)
    padded = zip(*(aligned(column, locale) for column in texts), strict=True)
    return tuple(_with_texts(row, next(padded)) if row.cells else row for row in rows)


def _with_texts(row: GridRow, texts: Sequence[str]) -> GridRow:
    cells = zip(row.cells, texts, strict=True)
    return replace(row, cells=tuple(replace(cell, text=text) for cell, text in cells))


def _sign(compared: BandComparison | None) -> Sign | None:
    return None if compared is None or compared.verdict is None else SIGNS.get(compared.verdict)
