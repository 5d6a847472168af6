"""Heat of several builds, band by band: a marker for each on its interval."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace

import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure
from matplotlib.lines import Line2D

from reportgen.model import Band, BuildResult
from reportgen.pages import versus_words
from reportgen.pages.band_axes import band_figure, set_watt_axis
from reportgen.pages.canvas import (
    NARROW,
    POINTS_PER_INCH,
    RIBBON_STRENGTH,
    WIDE,
    Chart,
    Size,
    svg_text,
    text_style,
    text_width,
)
from reportgen.pages.look import LIGHT, SERIES, Series
from reportgen.pages.summary import means
from reportgen.pages.versus_curves import short_name
from reportgen.physics.quantities import BY_KEY

_LANE = 5.0


@dataclass(frozen=True, kw_only=True, slots=True)
class Watts:
    """Heat of one build in one band [W]."""

    value: float
    low95: float | None
    high95: float | None


def heat_at(result: BuildResult, power_w: float) -> dict[str, Watts]:
    """Heat that a build would show at a power [W], by band."""
    value = BY_KEY["heat_w"].value

    def watts(ratio: float | None) -> float | None:
        return None if ratio is None else float(value(np.array([ratio]), power_w)[0])

    return {
        one.band.name: Watts(
            value=watts(one.value) or 0.0, low95=watts(one.high95), high95=watts(one.low95)
        )
        for one in means(result.chosen, "efficiency_ratio")
    }


def draw_heats(
    results: Sequence[BuildResult], names: Sequence[str], bands: Sequence[Band], locale: str
) -> Chart | None:
    """Heat by band at the power of the first build; None where no build has a loss."""
    power_w = results[0].power_w
    heats = [heat_at(result, power_w) for result in results]
    shown = [band.name for band in bands if any(band.name in heat for heat in heats)]
    if not shown:
        return None
    title, alt = versus_words.heat(
        [{name: one.value for name, one in heat.items()} for heat in heats], names, power_w, locale
    )
    drawings = [_dots(size, heats, names, shown) for size in (WIDE, NARROW)]
    return Chart(name="heat", title=title, alt=alt, svg=drawings[0], narrow_svg=drawings[1])


def _dots(
    size: Size,
    heats: Sequence[Mapping[str, Watts]],
    names: Sequence[str],
    bands: Sequence[str],
) -> str:
    rows = _key_rows(size, [short_name(name, size) for name in names])
    size = replace(size, row=_LANE * len(heats) + 7, right=12)
    figure, axes = band_figure(size, bands, len(rows))
    found = [one for heat in heats for one in heat.values()]
    ends = [end for one in found for end in (one.value, one.low95, one.high95) if end is not None]
    set_watt_axis(axes, min(0.0, *ends), max(ends))
    axes.hlines(
        [row + 0.5 for row in range(len(bands) - 1)],
        *axes.get_xlim(),
        color=LIGHT.hairline,
        linewidth=0.5,
        zorder=0.5,
    )
    for lane, (heat, series) in enumerate(zip(heats, SERIES, strict=False)):
        offset = (lane - (len(heats) - 1) / 2) * _LANE / size.row
        known = [(row + offset, heat[band]) for row, band in enumerate(bands) if band in heat]
        _add_lane(axes, known, series)
    _add_marker_key(figure, size, rows)
    return svg_text(figure)


def _add_lane(axes: Axes, known: Sequence[tuple[float, Watts]], series: Series) -> None:
    """One build's dots, each on its interval."""
    colour = getattr(LIGHT, series.colour)
    for row, one in known:
        if one.low95 is not None and one.high95 is not None:
            axes.hlines(
                row,
                one.low95,
                one.high95,
                color=colour,
                alpha=2 * RIBBON_STRENGTH,
                linewidth=3,
                zorder=1.5,
            )
    axes.plot(
        [one.value for _, one in known],
        [row for row, _ in known],
        series.marker,
        color=colour,
        markersize=4.2,
        markeredgewidth=0,
        zorder=4,
        clip_on=False,
    )


_KeyRows = list[list[tuple[float, str, Series]]]


def _key_rows(size: Size, labels: Sequence[str]) -> _KeyRows:
    """Names with their markers, in as many lines as they need: from the left [pt]."""
    rows: _KeyRows = [[]]
    x = 0.0
    for label, series in zip(labels, SERIES, strict=False):
        width = 12 + text_width(label, size) + 14
        if x + width > size.width and rows[-1]:
            rows.append([])
            x = 0.0
        rows[-1].append((x, label, series))
        x += width
    return rows


def _add_marker_key(figure: Figure, size: Size, rows: _KeyRows) -> None:
    height = figure.get_figheight() * POINTS_PER_INCH
    for line, row in enumerate(rows):
        y = 1 - (line + 0.5) * size.line / height
        for x, label, series in row:
            mark = Line2D(
                [(x + 5) / size.width],
                [y],
                linestyle="none",
                marker=series.marker,
                markersize=4.8,
                markeredgewidth=0,
                color=getattr(LIGHT, series.colour),
                transform=figure.transFigure,
            )
            figure.add_artist(mark)
            at = (x + 12) / size.width
            figure.text(at, y, label, va="center_baseline", **text_style(size))
