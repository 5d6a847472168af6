"""The chart of a temperature log: core and surroundings over time, and the curve fitted to them."""

from __future__ import annotations

from dataclasses import replace
from typing import Any

import numpy as np
from matplotlib.axes import Axes

from reportgen.model import BuildResult, Thermal
from reportgen.pages.canvas import (
    NARROW,
    WIDE,
    Chart,
    Sample,
    Size,
    add_key,
    label_style,
    new_figure,
    svg_text,
)
from reportgen.pages.curve_charts import regular_ticks
from reportgen.pages.display import entered, number, with_unit
from reportgen.pages.frequency_axes import DASHES, set_value_axis, title_scales
from reportgen.pages.look import LIGHT

_SIZES = (replace(WIDE, height=128), replace(NARROW, height=180))
_CELSIUS_GAPS = (5.0, 10.0, 20.0, 50.0, 100.0)
_MINUTE_GAPS = (1.0, 2.0, 5.0, 10.0, 20.0, 30.0, 60.0, 120.0, 240.0)
_MOST_DOTS = 120
_LIMIT_DASH: Any = (0, (1, 1.6))


def draw_warm_up(result: BuildResult, *, locale: str = "en") -> Chart | None:
    """Temperatures of the log that the permitted power rests on [C] over time [min]."""
    thermal = result.thermal
    if thermal is None:
        return None
    drawings = [_draw(size, thermal) for size in _SIZES]
    title, alt = _words(thermal, locale)
    return Chart(name="warm-up", title=title, alt=alt, svg=drawings[0], narrow_svg=drawings[1])


def _draw(size: Size, thermal: Thermal) -> str:
    warm_up = thermal.warm_up
    minutes = warm_up.time_s / 60
    limit_c = None if thermal.permitted is None else thermal.permitted.limit_c
    low = float(min(warm_up.ambient_c.min(), warm_up.core_c.min()))
    high = max(float(warm_up.core_c.max()), float(warm_up.fitted_c.max()), limit_c or 0.0)
    figure, axes = new_figure(
        size, size.height, size.line * (size.head_lines + 0.4), 2.0 * size.letters
    )
    axes.set_xlim(0.0, float(minutes[-1]))
    _set_minutes(axes, size, float(minutes[-1]))
    edges = (5 * np.floor((low - 2) / 5), high + 3)
    ticks = regular_ticks(*edges, size, _CELSIUS_GAPS)
    set_value_axis(axes, edges, ticks, [f"{tick:.0f}" for tick in ticks])
    title_scales(figure, size, "\u00b0C", "")
    _add_rows(axes, thermal, minutes)
    samples = [
        Sample(text="core", colour=LIGHT.heat, marker="o", fill="none"),
        Sample(text="fitted", colour=LIGHT.heat, dash="-", width=1.7),
        Sample(text="surroundings", colour=LIGHT.baseline, dash=DASHES, width=1.1),
    ]
    if limit_c is not None:
        axes.axhline(limit_c, color=LIGHT.ink, linewidth=1.2, linestyle=_LIMIT_DASH, zorder=2.5)
        samples.append(Sample(text="limit", colour=LIGHT.ink, dash=_LIMIT_DASH, width=1.2))
    add_key(figure, size, samples, from_left=size.left if size.head_lines == 1 else 0.0)
    return svg_text(figure)


def _set_minutes(axes: Axes, size: Size, end: float) -> None:
    gap = next((one for one in _MINUTE_GAPS if end / one <= size.frequency_ticks), end)
    ticks = [float(tick) for tick in np.arange(0, end + 1e-9, gap)]
    labels = [f"{tick:g}" for tick in ticks]
    labels[-1] += " min"
    axes.set_xticks(ticks, labels, minor=False, **label_style(size))


def _add_rows(axes: Axes, thermal: Thermal, minutes: np.ndarray) -> None:
    warm_up = thermal.warm_up
    few = np.unique(np.linspace(0, len(minutes) - 1, _MOST_DOTS).astype(int))
    axes.plot(
        minutes[few], warm_up.core_c[few], "o", markersize=2.6, markerfacecolor="none",
        markeredgewidth=0.6, color=LIGHT.heat, zorder=2, clip_on=False,
    )  # fmt: skip
    axes.plot(minutes[few], warm_up.fitted_c[few], color=LIGHT.heat, linewidth=1.7, zorder=3)
    axes.plot(
        minutes[few], warm_up.ambient_c[few], color=LIGHT.baseline, linewidth=1.1,
        linestyle=DASHES, zorder=2,
    )  # fmt: skip


# --- in words ------------------------------------------------------------------------------------


def _words(thermal: Thermal, locale: str) -> tuple[str, str]:
    """Title and alternative text."""
    fit = thermal.fit
    rise = with_unit(number(fit.rise_k.value, 0, locale=locale), "K")
    power = with_unit(entered(fit.power_w, locale=locale), "W")
    mhz = with_unit(entered(fit.frequency_hz / 1e6, locale=locale), "MHz")
    title = f"At {power} on {mhz} the core ends {rise} above its surroundings"
    warm_up = thermal.warm_up
    spoken = [
        f"{number(warm_up.core_c[at], 0, locale=locale)} after "
        f"{number(warm_up.time_s[at] / 60, 0, locale=locale)}\u00a0min"
        for at in np.linspace(0, len(warm_up.time_s) - 1, 4).astype(int)
    ]
    alt = (
        "Line chart of the temperature log over time. Core surface in degrees Celsius: "
        f"{', '.join(spoken)}. The fitted curve of one time constant runs through the rows; the "
        "surroundings are dashed."
    )
    if thermal.permitted is not None:
        limit = with_unit(entered(thermal.permitted.limit_c, locale=locale), "\u00b0C")
        alt += f" A dotted line marks the limit of {limit}."
    return title, alt
