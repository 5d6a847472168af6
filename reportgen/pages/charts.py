"""Charts of one build: efficiency and match over frequency, heat by band.

Each is drawn twice from the same numbers: wide for pages and paper, narrow for a phone. Curves
are thinned for drawing only. No foreign text is set in a chart, save names of bands.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from matplotlib.axes import Axes

from reportgen.model import Band, BuildResult, Curves, RealArray
from reportgen.pages import canvas, sentences
from reportgen.pages.canvas import NARROW, WIDE, Size
from reportgen.pages.display import decimal_sign, number
from reportgen.pages.look import LIGHT
from reportgen.pages.summary import means, measured_bands
from reportgen.physics.quantities import BY_KEY

_PER_CENT_GAPS = (1.0, 2.0, 5.0, 10.0, 20.0, 50.0)
_LOSS_TICKS_DB = (0.05, 0.1, 0.2, 0.3, 0.5, 0.7, 1.0, 1.5, 2.0, 3.0, 5.0, 10.0)
_SWR_TICKS = (1.02, 1.05, 1.1, 1.2, 1.5, 2.0, 3.0, 5.0, 10.0)
_BEST_RETURN_LOSS_DB = 40.0
_FIGURE_GAP = 0.055


@dataclass(frozen=True, kw_only=True, slots=True)
class Chart:
    """A drawing with its takeaway as title and the same in words as its alternative text."""

    name: str
    title: str
    alt: str
    svg: str
    narrow_svg: str


def draw_charts(
    result: BuildResult,
    baseline: BuildResult | None,
    bands: Sequence[Band],
    *,
    swr_limits: Mapping[str, float],
    efficiency_limits: Mapping[str, float],
    locale: str = "en",
) -> dict[str, Chart]:
    """All charts that the result allows, by name: `efficiency`, `match`, `heat`.

    Parameters
    ----------
    swr_limits, efficiency_limits : mapping of str to float
        The workshop's limit for each band that has one [ratio].
    """
    drawn = (
        draw_efficiency(result, baseline, bands, limits=efficiency_limits, locale=locale),
        draw_match(result, baseline, bands, limits=swr_limits, locale=locale),
        draw_heat(result, baseline, locale=locale),
    )
    return {chart.name: chart for chart in drawn if chart is not None}


# --- curves over frequency ---------------------------------------------------------------------


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
    low, high = _percent_range([one for one in (curve, other) if one is not None], span)

    def scales(axes: Axes, size: Size) -> None:
        ticks = _regular_ticks(low, high, size)
        canvas.set_value_axis(axes, (low, high), ticks, [f"{tick:.0f}" for tick in ticks])
        losses = [loss for loss in _LOSS_TICKS_DB if low <= 100 * 10 ** (-loss / 10) <= high]
        places = [100 * 10 ** (-loss / 10) for loss in losses]
        kept = canvas.spaced(places, (low, high), size)
        labels = [_tick(losses[index], locale) for index in kept]
        canvas.add_second_scale(axes, [places[index] for index in kept], labels)

    lines = {name: 100 * value for name, value in (limits or {}).items()}
    drawings = [
        _draw_curves(
            size, span, (curve, other), LIGHT.heat, scales, ("efficiency, %", "heat loss, dB"), lines
        )
        for size in (WIDE, NARROW)
    ]
    title, alt = sentences.efficiency_chart(result, baseline, locale)
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
        ticks = _regular_ticks(0.0, top, size)
        canvas.set_value_axis(axes, (0.0, top), ticks, [f"{tick:.0f}" for tick in ticks])
        ratios = [swr for swr in _SWR_TICKS if _return_loss_of(swr) <= top]
        places = [_return_loss_of(swr) for swr in ratios]
        kept = canvas.spaced(places, (0.0, top), size)
        labels = [_tick(ratios[index], locale) for index in kept]
        canvas.add_second_scale(axes, [places[index] for index in kept], labels)

    lines = {name: _return_loss_of(swr) for name, swr in (limits or {}).items()}
    drawings = [
        _draw_curves(
            size, span, (curve, other), LIGHT.match, scales, ("return loss, dB", "SWR"), lines
        )
        for size in (WIDE, NARROW)
    ]
    title, alt = sentences.match_chart(result, baseline, locale)
    return Chart(name="match", title=title, alt=alt, svg=drawings[0], narrow_svg=drawings[1])


_Curve = tuple[RealArray, RealArray]


def _draw_curves(
    size: Size,
    span: _Span,
    curves: tuple[_Curve, _Curve | None],
    colour: str,
    scales: Callable[[Axes, Size], None],
    titles: tuple[str, str],
    limits: Mapping[str, float],
) -> str:
    figure, axes = canvas.frequency_figure(size, span.from_hz, span.to_hz, span.bands)
    scales(axes, size)
    canvas.title_scales(figure, size, *titles)
    segments = [
        (band.from_hz / 1e6, band.to_hz / 1e6, limits[band.name])
        for band in span.bands
        if band.name in limits
    ]
    canvas.add_limits(axes, segments)
    own, other = curves
    if other is not None:
        canvas.add_baseline(axes, *thinned(*_within(other, span)))
    canvas.add_curve(axes, *thinned(*_within(own, span)), colour)
    canvas.add_key(figure, size, colour, baseline=other is not None, limit=bool(segments))
    return canvas.svg_text(figure)


def _percent_curve(result: BuildResult) -> _Curve | None:
    ratio = _single(result.chosen.curves, result.chosen.curves.efficiency_ratio)
    return None if ratio is None else (result.chosen.curves.frequency_hz / 1e6, 100 * ratio)


def _return_loss_curve(result: BuildResult) -> _Curve | None:
    ratio = _single(result.chosen.curves, result.chosen.curves.reflection_ratio)
    if ratio is None:
        return None
    loss_db = BY_KEY["return_loss_db"].value(np.maximum(ratio, 1e-30), 1.0)
    return result.chosen.curves.frequency_hz / 1e6, loss_db


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
    return values[np.isfinite(values)]


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


def _regular_ticks(low: float, high: float, size: Size) -> list[float]:
    gap = next(
        (gap for gap in _PER_CENT_GAPS if (high - low) / gap <= size.value_ticks), high - low
    )
    first = gap * np.ceil(low / gap)
    return [float(tick) for tick in np.arange(first, high + gap / 2, gap)]


def _tick(value: float, locale: str) -> str:
    return f"{value:g}".replace(".", decimal_sign(locale))


# --- heat by band --------------------------------------------------------------------------------


def draw_heat(
    result: BuildResult, baseline: BuildResult | None, *, locale: str = "en"
) -> Chart | None:
    """Heat in the build at its rated power, band by band [W]; the baseline as open rings."""
    heat = means(result.chosen, "heat_w")
    if not heat:
        return None
    other = {} if baseline is None else _heat_at(baseline, result.power_w)
    drawings = [_draw_heat(size, heat, other, locale) for size in (WIDE, NARROW)]
    title, alt = sentences.heat_chart(result, other, locale)
    return Chart(name="heat", title=title, alt=alt, svg=drawings[0], narrow_svg=drawings[1])


def _heat_at(result: BuildResult, power_w: float) -> dict[str, float]:
    """Heat that the build would show at another power [W], by band."""
    value = BY_KEY["heat_w"].value
    return {
        one.band.name: float(value(np.array([one.value]), power_w)[0])
        for one in means(result.chosen, "efficiency_ratio")
    }


def _draw_heat(
    size: Size, heat: Sequence[sentences.BandValue], other: Mapping[str, float], locale: str
) -> str:
    figure, axes = canvas.band_figure(size, [one.band.name for one in heat])
    values = [one.value for one in heat]
    rivals = [other.get(one.band.name) for one in heat]
    present = [*values, *(rival for rival in rivals if rival is not None)]
    canvas.set_watt_axis(axes, min(0.0, *present), max(present))
    canvas.add_stems(axes, values, rivals, LIGHT.heat)
    labels = [number(value, BY_KEY["heat_w"].decimals, locale=locale) for value in values]
    canvas.add_figures(axes, values, rivals, labels, _FIGURE_GAP)
    canvas.add_key(figure, size, LIGHT.heat, baseline=bool(other), limit=False, dots=True)
    return canvas.svg_text(figure)
