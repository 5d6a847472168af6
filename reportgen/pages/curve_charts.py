"""Charts over frequency: efficiency, and match. Curves are thinned for drawing only."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from matplotlib.axes import Axes

from reportgen.model import Band, BuildResult, Curves, RealArray
from reportgen.pages import chart_words
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
from reportgen.pages.display import decimal_sign
from reportgen.pages.frequency_axes import (
    DASHES,
    add_baseline,
    add_curve,
    add_limits,
    add_ribbon,
    add_second_scale,
    frequency_figure,
    set_value_axis,
    spaced,
    title_scales,
)
from reportgen.pages.look import LIGHT
from reportgen.pages.summary import means, measured_bands
from reportgen.physics.quantities import BY_KEY

_PER_CENT_GAPS = (1.0, 2.0, 5.0, 10.0, 20.0, 50.0)
_LOSS_TICKS_DB = (0.1, 0.2, 0.3, 0.5, 0.7, 1.0, 1.5, 2.0, 3.0, 5.0, 10.0)
_SWR_TICKS = (1.02, 1.05, 1.1, 1.2, 1.5, 2.0, 3.0, 5.0, 10.0)
_BEST_RETURN_LOSS_DB = 40.0
_EFFICIENCY_SCALES = ("efficiency, %", "heat loss, dB")
_MATCH_SCALES = ("return loss, dB", "SWR")


@dataclass(frozen=True, kw_only=True, slots=True)
class _Span:
    """The frequencies shown, and the bands among them."""

    from_hz: float
    to_hz: float
    bands: tuple[Band, ...]


def draw_efficiency(
    result: BuildResult,
    baseline: BuildResult | None,
    bands: Sequence[Band],
    *,
    limits: Mapping[str, float] | None = None,
    locale: str = "en",
) -> Chart | None:
    """Efficiency over frequency, per cent on the left and the same as loss [dB] on the right."""
    curve = _percent_curve(result)
    if curve is None or not means(result.chosen, "efficiency_ratio"):
        return None
    span = _span(result, bands)
    other = None if baseline is None else _percent_curve(baseline)
    ribbon = _percent_ribbon(result.chosen.curves)
    sides = () if ribbon is None else ((ribbon[0], ribbon[1]), (ribbon[0], ribbon[2]))
    low, high = _percent_range([one for one in (curve, other, *sides) if one is not None], span)

    def scales(axes: Axes, size: Size) -> None:
        ticks = regular_ticks(low, high, size)
        set_value_axis(axes, (low, high), ticks, [f"{tick:.0f}" for tick in ticks])
        losses = [loss for loss in _LOSS_TICKS_DB if low <= 100 * 10 ** (-loss / 10) <= high]
        places = [100 * 10 ** (-loss / 10) for loss in losses]
        kept = spaced(places, (low, high), size)
        labels = [_tick(losses[index], locale) for index in kept]
        add_second_scale(axes, [places[index] for index in kept], labels)

    lines = {name: 100 * value for name, value in (limits or {}).items()}
    drawings = [
        _draw_curves(
            size, span, (curve, other), LIGHT.heat, scales, _EFFICIENCY_SCALES, lines, ribbon
        )
        for size in (WIDE, NARROW)
    ]
    title, alt = chart_words.efficiency_chart(
        result, baseline, locale, with_ribbon=ribbon is not None
    )
    return Chart(name="efficiency", title=title, alt=alt, svg=drawings[0], narrow_svg=drawings[1])


def draw_match(
    result: BuildResult,
    baseline: BuildResult | None,
    bands: Sequence[Band],
    *,
    limits: Mapping[str, float] | None = None,
    locale: str = "en",
) -> Chart | None:
    """Return loss [dB] over frequency, with the SWR that corresponds on the right."""
    curve = _return_loss_curve(result)
    if curve is None or not means(result.chosen, "return_loss_db"):
        return None
    span = _span(result, bands)
    other = None if baseline is None else _return_loss_curve(baseline)
    top = _return_loss_top([one for one in (curve, other) if one is not None], span)

    def scales(axes: Axes, size: Size) -> None:
        ticks = regular_ticks(0.0, top, size)
        set_value_axis(axes, (0.0, top), ticks, [f"{tick:.0f}" for tick in ticks])
        ratios = [swr for swr in _SWR_TICKS if _return_loss_of(swr) <= top]
        places = [_return_loss_of(swr) for swr in ratios]
        kept = spaced(places, (0.0, top), size)
        labels = [_tick(ratios[index], locale) for index in kept]
        add_second_scale(axes, [places[index] for index in kept], labels)

    lines = {name: _return_loss_of(swr) for name, swr in (limits or {}).items()}
    drawings = [
        _draw_curves(size, span, (curve, other), LIGHT.match, scales, _MATCH_SCALES, lines)
        for size in (WIDE, NARROW)
    ]
    title, alt = chart_words.match_chart(result, baseline, locale)
    return Chart(name="match", title=title, alt=alt, svg=drawings[0], narrow_svg=drawings[1])


_Curve = tuple[RealArray, RealArray]
_Ribbon = tuple[RealArray, RealArray, RealArray]


def _draw_curves(
    size: Size,
    span: _Span,
    curves: tuple[_Curve, _Curve | None],
    colour: str,
    scales: Callable[[Axes, Size], None],
    titles: tuple[str, str],
    limits: Mapping[str, float],
    ribbon: _Ribbon | None = None,
) -> str:
    figure, axes = frequency_figure(size, span.from_hz, span.to_hz, span.bands)
    scales(axes, size)
    title_scales(figure, size, *titles)
    segments = [
        (band.from_hz / 1e6, band.to_hz / 1e6, limits[band.name])
        for band in span.bands
        if band.name in limits
    ]
    own, other = curves
    if ribbon is not None:
        add_ribbon(axes, *_thinned_ribbon(ribbon, span), colour)
    add_limits(axes, segments)
    if other is not None:
        add_baseline(axes, *thinned(*_within(other, span)))
    add_curve(axes, *thinned(*_within(own, span)), colour)
    samples = [Sample(text="this build", colour=colour, dash="-", width=1.7)]
    if ribbon is not None:
        samples.append(interval_sample(colour))
    if other is not None:
        samples.append(Sample(text="baseline", colour=LIGHT.baseline, dash=DASHES))
    if segments:
        samples.append(Sample(text="limit", colour=LIGHT.ink, dash="-", width=2.2))
    add_key(figure, size, samples, from_left=0.14 * size.width if size.head_lines == 1 else 0.0)
    return svg_text(figure)


def _percent_curve(result: BuildResult) -> _Curve | None:
    ratio = _single(result.chosen.curves, result.chosen.curves.efficiency_ratio)
    return None if ratio is None else (result.chosen.curves.frequency_hz / 1e6, 100 * ratio)


def _return_loss_curve(result: BuildResult) -> _Curve | None:
    ratio = _single(result.chosen.curves, result.chosen.curves.reflection_ratio)
    if ratio is None:
        return None
    loss_db = BY_KEY["return_loss_db"].value(np.maximum(ratio, 1e-30), 1.0)
    return result.chosen.curves.frequency_hz / 1e6, np.asarray(loss_db)


def _percent_ribbon(curves: Curves) -> _Ribbon | None:
    low, high = curves.efficiency_low95, curves.efficiency_high95
    if low is None or high is None:
        return None
    return curves.frequency_hz / 1e6, 100 * low, 100 * high


def _thinned_ribbon(ribbon: _Ribbon, span: _Span, points: int = 60) -> _Ribbon:
    """A ribbon of few points: its ends are known at few frequencies, and straight between."""
    mhz, low, high = ribbon
    inside = np.flatnonzero((mhz >= span.from_hz / 1e6) & (mhz <= span.to_hz / 1e6))
    kept = inside[np.unique(np.linspace(0, len(inside) - 1, points).astype(int))]
    return mhz[kept], low[kept], high[kept]


def _single(curves: Curves, ratio: RealArray | None) -> RealArray | None:
    """The first of several draws: the one without any error drawn."""
    return None if ratio is None else ratio.reshape(-1, len(curves.frequency_hz))[0]


def thinned(
    frequency_mhz: RealArray, value: RealArray, bins: int = 130
) -> tuple[RealArray, RealArray]:
    """A curve of at most about 400 points: first, least and greatest of each bin are kept."""
    if len(frequency_mhz) <= 3 * bins:
        return frequency_mhz, value
    edges = np.geomspace(frequency_mhz[0], frequency_mhz[-1], bins + 1)
    starts = np.unique(np.searchsorted(frequency_mhz, edges[:-1]))
    filled = np.where(np.isnan(value), np.inf, value)
    kept = {0, len(value) - 1}
    for start, stop in zip(starts, [*starts[1:], len(value)], strict=True):
        kept |= {start, start + int(np.argmin(filled[start:stop]))}
        kept.add(start + int(np.argmax(np.where(np.isnan(value), -np.inf, value)[start:stop])))
    chosen = sorted(kept)
    return frequency_mhz[chosen], value[chosen]


def _within(curve: _Curve, span: _Span) -> _Curve:
    frequency_mhz, value = curve
    inside = (frequency_mhz >= span.from_hz / 1e6) & (frequency_mhz <= span.to_hz / 1e6)
    return frequency_mhz[inside], value[inside]


def _span(result: BuildResult, bands: Sequence[Band]) -> _Span:
    covered = {band.band.name for band in measured_bands(result.chosen)}
    shown = tuple(band for band in bands if band.name in covered)
    frequency_hz = result.chosen.curves.frequency_hz
    if not shown:
        return _Span(from_hz=float(frequency_hz[0]), to_hz=float(frequency_hz[-1]), bands=())
    low, high = min(band.from_hz for band in shown), max(band.to_hz for band in shown)
    return _Span(from_hz=0.86 * low, to_hz=1.12 * high, bands=shown)


# --- scales ------------------------------------------------------------------------------------


def _in_bands(curves: Sequence[_Curve], span: _Span) -> RealArray:
    """The values inside the bands: what the scale must show."""
    parts = [
        value[(mhz >= band.from_hz / 1e6) & (mhz <= band.to_hz / 1e6)]
        for mhz, value in curves
        for band in span.bands
    ]
    values = np.concatenate(parts) if parts else np.concatenate([value for _, value in curves])
    return np.asarray(values[np.isfinite(values)])


def _percent_range(curves: Sequence[_Curve], span: _Span) -> tuple[float, float]:
    values = _in_bands(curves, span)
    if not values.size:
        return 0.0, 100.0
    low = min(90.0, 5 * np.floor((float(values.min()) - 1) / 5))
    return float(low), float(max(100.0, 5 * np.ceil(float(values.max()) / 5)))


def _return_loss_top(curves: Sequence[_Curve], span: _Span) -> float:
    values = _in_bands(curves, span)
    most = float(values.max()) if values.size else 20.0
    return float(np.clip(5 * np.ceil((most + 1) / 5), 15.0, _BEST_RETURN_LOSS_DB))


def _return_loss_of(swr: float) -> float:
    return float(-20 * np.log10((swr - 1) / (swr + 1)))


def regular_ticks(
    low: float, high: float, size: Size, gaps: Sequence[float] = _PER_CENT_GAPS
) -> list[float]:
    """Ticks with the least of the gaps that leaves room for their labels."""
    gap = next((gap for gap in gaps if (high - low) / gap <= size.value_ticks), high - low)
    first = gap * np.ceil(low / gap)
    return [float(tick) for tick in np.arange(first, high + gap / 2, gap)]


def _tick(value: float, locale: str) -> str:
    return f"{value:g}".replace(".", decimal_sign(locale))
