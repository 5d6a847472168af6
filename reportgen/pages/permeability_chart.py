"""The chart of the core: both parts of its relative permeability over frequency."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from typing import Any

import numpy as np
from matplotlib.axes import Axes

from reportgen.model import Band, BuildResult, Interval, Permeability, RealArray
from reportgen.pages.canvas import NARROW, WIDE, Chart, Sample, Size, add_key, svg_text
from reportgen.pages.curve_charts import regular_ticks
from reportgen.pages.display import megahertz, with_unit
from reportgen.pages.frequency_axes import (
    add_ribbon,
    frequency_figure,
    set_value_axis,
    title_scales,
)
from reportgen.pages.intervals import scaled_with_interval
from reportgen.pages.look import LIGHT

_SIZES = (replace(WIDE, height=114), replace(NARROW, height=180))
_REAL_DASH = (0, (3, 1.5))
_GAPS = (1.0, 2.0, 5.0, 10.0, 20.0, 50.0, 100.0, 200.0, 500.0, 1000.0, 2000.0)
_SPOKEN = 3
"""Frequencies that the text alternative tells of each part."""


def draw_permeability(
    result: BuildResult, bands: Sequence[Band], *, locale: str = "en"
) -> Chart | None:
    """Relative permeability of the core: the real part as far as it means something, the lossy."""
    core = None if result.heat_split is None else result.heat_split.permeability
    if core is None or len(core.frequency_hz) < 2:
        return None
    drawings = [_draw(size, core, bands) for size in _SIZES]
    title, alt = _words(core, locale)
    return Chart(name="permeability", title=title, alt=alt, svg=drawings[0], narrow_svg=drawings[1])


def _draw(size: Size, core: Permeability, bands: Sequence[Band]) -> str:
    low_hz, high_hz = float(core.frequency_hz[0]), float(core.frequency_hz[-1])
    inside = [band for band in bands if low_hz <= band.from_hz and band.to_hz <= high_hz]
    figure, axes = frequency_figure(size, low_hz, high_hz, inside)
    real = core.frequency_hz <= core.real_to_hz
    top = 1.05 * max(float(np.nanmax(core.lossy_high95)), _most(core.real_high95[real]))
    ticks = regular_ticks(0.0, top, size, _GAPS)
    set_value_axis(axes, (0.0, top), ticks, [f"{tick:.0f}" for tick in ticks])
    title_scales(figure, size, "relative permeability", "")
    _add_part(axes, core, "lossy", np.ones_like(real), LIGHT.heat, "-")
    _add_part(axes, core, "real", real, LIGHT.match, _REAL_DASH)
    samples = [
        Sample(text="real part", colour=LIGHT.match, dash=_REAL_DASH, width=1.7),
        Sample(text="lossy part", colour=LIGHT.heat, dash="-", width=1.7),
    ]
    add_key(figure, size, samples, from_left=0.24 * size.width if size.head_lines == 1 else 0.0)
    return svg_text(figure)


def _most(values: RealArray) -> float:
    return float(np.nanmax(values, initial=0.0))


def _add_part(
    axes: Axes, core: Permeability, part: str, shown: np.ndarray, colour: str, dash: Any
) -> None:
    mhz = core.frequency_hz[shown] / 1e6
    value, low, high = (
        getattr(core, name)[shown] for name in (part, f"{part}_low95", f"{part}_high95")
    )
    add_ribbon(axes, mhz, low, high, colour)
    axes.plot(mhz, value, color=colour, linewidth=1.7, linestyle=dash, zorder=3)


# --- in words ------------------------------------------------------------------------------------


def _words(core: Permeability, locale: str) -> tuple[str, str]:
    """Title and alternative text."""
    most = int(np.nanargmax(core.lossy))
    lossy = f"lossy part at most {_at(core, 'lossy', most, locale)}"
    real = np.flatnonzero(core.frequency_hz <= core.real_to_hz)
    title = f"Relative permeability of the core: {lossy}"
    if len(real):
        first = _at(core, "real", real[0], locale)
        title = f"Relative permeability of the core: real part {first}, {lossy}"
    alt = "Line chart of the core's relative permeability over frequency. "
    if len(real):
        alt += f"Real part, dashed: {_some(core, 'real', real, locale)}. "
    everywhere = np.arange(len(core.frequency_hz))
    alt += f"Lossy part: {_some(core, 'lossy', everywhere, locale)}. "
    return title, f"{alt}The ribbons are 95\u00a0% intervals."


def _some(core: Permeability, part: str, among: np.ndarray, locale: str) -> str:
    places = among[np.unique(np.linspace(0, len(among) - 1, _SPOKEN).astype(int))]
    return ", ".join(_at(core, part, place, locale) for place in places)


def _at(core: Permeability, part: str, place: int, locale: str) -> str:
    value, low, high = (
        float(getattr(core, name)[place]) for name in (part, f"{part}_low95", f"{part}_high95")
    )
    text = scaled_with_interval(Interval(value=value, low95=low, high95=high), 1, 0, locale)
    mhz = megahertz(float(core.frequency_hz[place]), locale=locale, places=1)
    return f"{text} at {with_unit(mhz, 'MHz')}"
