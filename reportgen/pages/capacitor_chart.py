"""The chart of other capacitors: the worst SWR that each is predicted to give."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from matplotlib.axes import Axes
from matplotlib.ticker import NullLocator

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
from reportgen.pages.frequency_axes import set_value_axis, title_scales
from reportgen.pages.look import LIGHT
from reportgen.physics.forecast import CapacitorForecast

_SIZES = (replace(WIDE, height=118, value_ticks=5), replace(NARROW, height=170, value_ticks=5))
_GAPS = (0.05, 0.1, 0.2, 0.5, 1.0, 2.0, 5.0)
_TICKS_PF = (1, 2, 3, 5, 10, 20, 30, 50, 100, 200, 300, 500)
_LEAST_TOP = 2.0
_SHOWN = 2.2
"""The scale ends at so many times the least worst SWR: beyond it nobody looks."""


def draw_capacitors(found: CapacitorForecast, *, locale: str = "en") -> Chart | None:
    """Worst SWR over the bands by capacitor [pF], the present and the best one marked.

    None where no capacitor gives any match.
    """
    if not np.isfinite(found.worst_swr[found.capacitor_pf > 0]).any():
        return None
    drawings = [_draw(size, found, locale) for size in _SIZES]
    title, alt = _words(found, locale)
    return Chart(name="capacitors", title=title, alt=alt, svg=drawings[0], narrow_svg=drawings[1])


def _draw(size: Size, found: CapacitorForecast, locale: str) -> str:
    real = (found.capacitor_pf > 0) & np.isfinite(found.worst_swr)
    farads, swr = found.capacitor_pf[real], found.worst_swr[real]
    top = max(_LEAST_TOP, _SHOWN * float(np.nanmin(swr)))
    figure, axes = new_figure(
        size, size.height, size.line * (size.head_lines + 0.4), 2.0 * size.letters
    )
    axes.set_xscale("log")
    axes.set_xlim(farads[0], farads[-1])
    axes.xaxis.set_minor_locator(NullLocator())
    ticks_pf = [tick for tick in _TICKS_PF if farads[0] <= tick <= farads[-1]]
    labels = [f"{tick:g}" for tick in ticks_pf[:-1]] + [f"{ticks_pf[-1]:g} pF"]
    axes.set_xticks(ticks_pf, labels, minor=False, **label_style(size))
    ticks = regular_ticks(1.0, top, size, _GAPS)
    set_value_axis(axes, (1.0, top), ticks, [entered(tick, locale=locale) for tick in ticks])
    title_scales(figure, size, "worst SWR", "")
    shown = swr <= top
    axes.plot(farads, swr, color=LIGHT.match, linewidth=1.1, zorder=2)
    axes.plot(farads[shown], swr[shown], "o", color=LIGHT.match, markersize=2.6, zorder=2.5)
    samples = [
        Sample(
            text="E24 values", colour=LIGHT.match, dash="-", marker="o", width=1.1, fill=LIGHT.match
        )
    ]
    samples += _mark(axes, found, top)
    add_key(figure, size, samples, from_left=0.2 * size.width if size.head_lines == 1 else 0.0)
    return svg_text(figure)


def _mark(axes: Axes, found: CapacitorForecast, top: float) -> list[Sample]:
    """The capacitor that is there as a ring, the best as a full dot; their entries in the key."""
    samples = []
    present = found.now.swr.value
    if found.present_pf and present <= top:
        axes.plot(
            [found.present_pf], [present], "o", markersize=7, markerfacecolor=LIGHT.paper,
            color=LIGHT.baseline, zorder=4, clip_on=False,
        )  # fmt: skip
        samples.append(Sample(text="as it is", colour=LIGHT.baseline, marker="o", fill=LIGHT.paper))
    if found.better and found.best_pf:
        axes.plot(
            [found.best_pf], [found.then.swr.value], "o", markersize=7, color=LIGHT.match,
            zorder=4, clip_on=False,
        )  # fmt: skip
        samples.append(Sample(text="best", colour=LIGHT.match, marker="o", fill=LIGHT.match))
    return samples


# --- in words ------------------------------------------------------------------------------------


def _words(found: CapacitorForecast, locale: str) -> tuple[str, str]:
    """Title and alternative text."""
    best = _farads(found.best_pf, locale)
    swr = number(found.then.swr.value, 2, locale=locale)
    if found.better:
        title = f"Predicted: the worst SWR is least, {swr}, with {best}"
    else:
        title = "Predicted: no other value is sure to lower the worst SWR"
    few = np.unique(np.linspace(0, len(found.capacitor_pf) - 1, 6).astype(int))
    spoken = ", ".join(
        f"{number(found.worst_swr[at], 2, locale=locale)} with "
        f"{_farads(float(found.capacitor_pf[at]), locale)}"
        for at in few
    )
    alt = f"Line chart of the predicted worst SWR over the capacitor's value: {spoken}. "
    return title, f"{alt}Least with {best}: {swr}."


def _farads(value_pf: float, locale: str) -> str:
    return with_unit(entered(value_pf, locale=locale), "pF") if value_pf else "none"
