"""Figures beside their 95 % intervals, as text."""

from __future__ import annotations

from collections.abc import Sequence
from math import isfinite, isnan

from reportgen.model import Figure, Interval
from reportgen.pages.display import (
    DASH,
    NOT_MEASURED,
    PLUS_MINUS,
    interval,
    number,
    one_sided,
    percent_of,
    plus_minus,
    quantity_number,
    with_unit,
)
from reportgen.pages.summary import BandValue
from reportgen.physics.quantities import BY_KEY, Quantity

_LOPSIDED = 0.6
"""An arm longer than this share of the interval is not said with one half-width."""


def half_width(low: float | None, high: float | None) -> float | None:
    """Half of a 95 % interval; None where an end is not known or infinite."""
    return None if low is None or high is None else (high - low) / 2


def mean_text(
    quantity: Quantity, figure: Figure | None, *, limits: Sequence[float] = (), locale: str = "en"
) -> str:
    """A band's mean, to the place that its interval allows."""
    if figure is None:
        return NOT_MEASURED
    u95 = half_width(figure.low95, figure.high95)
    return _figure_text(quantity, figure.mean, u95, limits, locale)


def worst_text(
    quantity: Quantity, figure: Figure | None, *, limits: Sequence[float] = (), locale: str = "en"
) -> str:
    """A band's worst, to the place that its own interval allows."""
    if figure is None:
        return NOT_MEASURED
    u95 = half_width(figure.worst_low95, figure.worst_high95)
    return _figure_text(quantity, figure.worst, u95, limits, locale)


def _figure_text(
    quantity: Quantity,
    value: float | None,
    u95: float | None,
    limits: Sequence[float],
    locale: str,
) -> str:
    if value is None or isnan(value):
        return NOT_MEASURED
    return quantity_number(quantity, value, u95=u95, limits=limits, locale=locale)


def mean_with_interval(
    quantity: Quantity, figure: Figure | None, *, limits: Sequence[float] = (), locale: str = "en"
) -> str:
    """A band's mean and its interval."""
    if figure is None:
        return NOT_MEASURED
    ends = (figure.low95, figure.high95)
    return with_interval(quantity, figure.mean, *ends, limits=limits, locale=locale)


def worst_with_interval(
    quantity: Quantity, figure: Figure | None, *, limits: Sequence[float] = (), locale: str = "en"
) -> str:
    """A band's worst and its own interval."""
    if figure is None:
        return NOT_MEASURED
    ends = (figure.worst_low95, figure.worst_high95)
    return with_interval(quantity, figure.worst, *ends, limits=limits, locale=locale)


def with_interval(
    quantity: Quantity,
    value: float | None,
    low: float | None,
    high: float | None,
    *,
    limits: Sequence[float] = (),
    locale: str = "en",
) -> str:
    """A figure and its interval: `0.626 ± 0.058`, the ends in brackets where it is lopsided.

    Where the interval has one end only, that end says all there is to know: `over 27.6`.
    """
    if value is None or isnan(value) or (low is None and high is None):
        return _figure_text(quantity, value, None, limits, locale)
    if low is None or high is None:
        ends = (_shown(quantity, low), _shown(quantity, high))
        return one_sided(ends[0], ends[1], quantity.decimals, locale=locale)
    if max(high - value, value - low) > _LOPSIDED * (high - low):
        figure = _figure_text(quantity, value, (high - low) / 2, limits, locale)
        return f"{figure} ({interval_text(quantity, low, high, locale)})"
    u95 = (high - low) / 2
    figure = _figure_text(quantity, value, u95, limits, locale)
    return f"{figure}{PLUS_MINUS}{width_text(quantity, u95, locale)}"


def scaled_with_interval(found: Interval, factor: float, decimals: int, locale: str) -> str:
    """A figure that no table of quantities holds, in the unit that the factor makes of it."""
    value = factor * found.value
    if found.low95 is None or found.high95 is None or not isfinite(found.high95 - found.low95):
        return number(value, decimals, locale=locale)
    low, high = factor * found.low95, factor * found.high95
    if max(high - value, value - low) > _LOPSIDED * (high - low):
        figure = number(value, decimals, u95=(high - low) / 2, locale=locale)
        return f"{figure} ({interval(low, high, decimals, locale=locale)})"
    return plus_minus(value, (high - low) / 2, decimals, locale=locale, signed=False)


def predicted_text(key: str, found: Interval | None, locale: str) -> str:
    """A predicted quantity and its interval; a dash where there is none."""
    if found is None:
        return DASH
    return with_interval(BY_KEY[key], found.value, found.low95, found.high95, locale=locale)


def width_text(quantity: Quantity, u95: float, locale: str) -> str:
    """A 95 % half-width by itself, to two significant digits."""
    shown = percent_of(u95) if quantity.percent else u95
    return number(shown, quantity.decimals, u95=shown, locale=locale)


def _shown(quantity: Quantity, value: float | None) -> float | None:
    return percent_of(value) if quantity.percent and value is not None else value


def interval_text(quantity: Quantity, low: float, high: float, locale: str) -> str:
    """Both ends of an interval without the unit."""
    if quantity.percent:
        low, high = percent_of(low), percent_of(high)
    return interval(low, high, quantity.decimals, locale=locale)


def spoken_with_interval(key: str, one: BandValue, locale: str) -> str:
    """A band's figure, its interval and its unit, as they stand in a sentence."""
    quantity = BY_KEY[key]
    text = with_interval(quantity, one.value, one.low95, one.high95, locale=locale)
    return with_unit(text, quantity.unit)


def plain_text(key: str, one: BandValue, locale: str) -> str:
    """A band's figure alone, to the place that its interval allows."""
    return _figure_text(BY_KEY[key], one.value, half_width(one.low95, one.high95), (), locale)
