"""The chart of heat: watts in the build at its rated power, band by band."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

import numpy as np

from reportgen.model import BuildResult
from reportgen.pages import chart_words
from reportgen.pages.band_axes import (
    add_figures,
    add_intervals,
    add_stems,
    band_figure,
    set_watt_axis,
)
from reportgen.pages.canvas import (
    NARROW,
    WIDE,
    Chart,
    Sample,
    Size,
    add_key,
    interval_sample,
    svg_text,
)
from reportgen.pages.intervals import plain_text
from reportgen.pages.look import LIGHT
from reportgen.pages.summary import BandValue, means
from reportgen.physics.quantities import BY_KEY


def draw_heat(
    result: BuildResult, baseline: BuildResult | None, *, locale: str = "en"
) -> Chart | None:
    """Heat in the build at its rated power, band by band [W]; the baseline as open rings."""
    heat = means(result.chosen, "heat_w")
    if not heat:
        return None
    other = {} if baseline is None else _heat_at(baseline, result.power_w)
    drawings = [_draw_heat(size, heat, other, locale) for size in (WIDE, NARROW)]
    title, alt = chart_words.heat_chart(result, other, locale)
    return Chart(name="heat", title=title, alt=alt, svg=drawings[0], narrow_svg=drawings[1])


def _heat_at(result: BuildResult, power_w: float) -> dict[str, float]:
    """Heat that the build would show at another power [W], by band."""
    value = BY_KEY["heat_w"].value
    return {
        one.band.name: float(value(np.array([one.value]), power_w)[0])
        for one in means(result.chosen, "efficiency_ratio")
    }


def _samples(*, with_intervals: bool, with_baseline: bool) -> list[Sample]:
    samples = [Sample(text="this build", colour=LIGHT.heat, marker="o", fill=LIGHT.heat)]
    if with_intervals:
        samples.append(interval_sample(LIGHT.heat))
    if with_baseline:
        samples.append(Sample(text="baseline", colour=LIGHT.baseline, marker="o"))
    return samples


def _draw_heat(
    size: Size, heat: Sequence[BandValue], other: Mapping[str, float], locale: str
) -> str:
    ends = [(one.low95, one.high95) for one in heat]
    tops = [high for _, high in ends if high is not None]
    samples = _samples(with_intervals=bool(tops), with_baseline=bool(other))
    head_lines = 1 if len(samples) > 1 else 0
    figure, axes = band_figure(size, [one.band.name for one in heat], head_lines)
    values = [one.value for one in heat]
    rivals = [other.get(one.band.name) for one in heat]
    present = [*values, *(rival for rival in rivals if rival is not None)]
    set_watt_axis(axes, min(0.0, *present), max(*present, *tops))
    add_stems(axes, values, rivals, LIGHT.heat)
    add_intervals(axes, ends, LIGHT.heat)
    add_figures(axes, [plain_text("heat_w", one, locale) for one in heat])
    add_key(figure, size, samples, from_left=size.left - 6)
    return svg_text(figure)
