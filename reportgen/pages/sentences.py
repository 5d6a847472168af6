"""Figures in words: the verdict of a report, its three key figures, what it covers."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from reportgen.model import BuildResult
from reportgen.pages.display import (
    NOT_MEASURED,
    PLUS_MINUS,
    entered,
    megahertz,
    number,
    percent_of,
    quantity_number,
    with_unit,
)
from reportgen.pages.intervals import spoken_with_interval, with_interval
from reportgen.pages.summary import (
    BandValue,
    best_of,
    covariance_of,
    interval_over_bands,
    mean_over_bands,
    means,
    measured_bands,
    worst_of,
    worsts,
)
from reportgen.physics.quantities import BY_KEY


def spoken(key: str, value: float | None, locale: str, limits: Sequence[float] = ()) -> str:
    """A quantity with its unit, as it stands in a sentence."""
    quantity = BY_KEY[key]
    text = quantity_number(quantity, value, locale=locale, limits=limits)
    return with_unit(text, quantity.unit)


def listed(words: Sequence[str]) -> str:
    """`a`, `a and b`, `a, b and c`."""
    if len(words) < 2:
        return "".join(words)
    return f"{', '.join(words[:-1])} and {words[-1]}"


def counted(count: int, noun: str) -> str:
    """`1 band`, `3 bands`."""
    return f"{count} {noun}" if count == 1 else f"{count} {noun}s"


def _whole_percent(ratio: float, locale: str) -> str:
    return number(percent_of(ratio), 0, marks=[0.0, 100.0], locale=locale)


# --- the verdict -------------------------------------------------------------------------------


def verdict(result: BuildResult, locale: str) -> str:
    """The result in one sentence, and how sure it is."""
    efficiency = means(result.chosen, "efficiency_ratio")
    low, high = worst_of(efficiency, "efficiency_ratio"), best_of(efficiency, "efficiency_ratio")
    if low is None or high is None:
        return _verdict_without_loss(result, locale)
    if len(efficiency) == 1:
        share = spoken_with_interval("efficiency_ratio", low, locale)
        return f"On {low.band.name}, {share} of the power that enters reaches the load."
    span = _band_span(efficiency)
    mean = _mean_efficiency(result)
    if mean is None or mean.low95 is None:
        texts = [_whole_percent(one.value, locale) for one in (low, high)]
        share = texts[0] if texts[0] == texts[1] else " to ".join(texts)
        return (
            f"On {span}, {share}\u00a0% of the power that enters reaches the load; "
            f"least on {low.band.name}."
        )
    share, least = (spoken_with_interval("efficiency_ratio", one, locale) for one in (mean, low))
    return (
        f"On {span}, {share} of the power that enters reaches the load on average; "
        f"least on {low.band.name}, {least}."
    )


def _mean_efficiency(result: BuildResult) -> BandValue | None:
    """Mean efficiency over the bands with its interval; its band is the first of them."""
    mean = mean_over_bands(result.chosen, "efficiency_ratio", result.power_w)
    if mean is None:
        return None
    low, high = interval_over_bands(
        result.chosen, covariance_of(result), "efficiency_ratio", result.power_w
    )
    first = means(result.chosen, "efficiency_ratio")[0]
    return BandValue(band=first.band, value=mean, low95=low, high95=high)


def _verdict_without_loss(result: BuildResult, locale: str) -> str:
    ratios = worsts(result.chosen, "swr")
    worst = worst_of(ratios, "swr")
    if worst is None:
        return "No band was measured; the findings say why."
    ratio = spoken_with_interval("swr", worst, locale)
    return (
        f"The match was measured and the loss was not: on {_band_span(ratios)}, "
        f"SWR at worst {ratio}."
    )


def _band_span(values: Sequence[BandValue]) -> str:
    if len(values) == 1:
        return values[0].band.name
    first, last = (one.band.name.replace(" ", "\u00a0") for one in (values[0], values[-1]))
    return f"{len(values)} bands from {first} to {last}"


@dataclass(frozen=True, kw_only=True, slots=True)
class KeyFigure:
    """One of the three figures at the top of a report; `accent` is a colour of the look."""

    label: str
    figure: str
    where: str
    accent: str


def key_figures(result: BuildResult, locale: str) -> tuple[KeyFigure, ...]:
    """Mean efficiency, worst match and most heat."""
    return (_efficiency_key(result, locale), _match_key(result, locale), _heat_key(result, locale))


def _efficiency_key(result: BuildResult, locale: str) -> KeyFigure:
    mean = _mean_efficiency(result)
    if mean is None:
        return KeyFigure(label="Efficiency", figure=NOT_MEASURED, where="", accent="none")
    bands = counted(len(means(result.chosen, "efficiency_ratio")), "band")
    return _key("Mean efficiency", "efficiency_ratio", mean, f"over {bands}", "ink", locale)


def _match_key(result: BuildResult, locale: str) -> KeyFigure:
    worst = worst_of(worsts(result.chosen, "swr"), "swr")
    if worst is None:
        return KeyFigure(label="Match", figure=NOT_MEASURED, where="", accent="none")
    places = "" if worst.at_hz is None else megahertz(worst.at_hz, locale=locale, places=3)
    where = f"on {worst.band.name}" + (f", at {places}\u00a0MHz" if places else "")
    where += _interpolated(result, worst)
    return _key("Worst SWR in a band", "swr", worst, where, "match", locale)


def _heat_key(result: BuildResult, locale: str) -> KeyFigure:
    most = worst_of(means(result.chosen, "heat_w"), "heat_w")
    label = f"Most heat at {rated_power(result, locale)}"
    if most is None:
        return KeyFigure(label=label, figure=NOT_MEASURED, where="", accent="none")
    where = f"on {most.band.name}{_interpolated(result, most)}"
    return _key(label, "heat_w", most, where, "heat", locale)


def _interpolated(result: BuildResult, one: BandValue) -> str:
    """Said of a figure that rests on few points, or none, in its band."""
    few = {band.band.name for band in measured_bands(result.chosen) if band.interpolated}
    return ", interpolated" if one.band.name in few else ""


def _key(label: str, key: str, one: BandValue, where: str, accent: str, locale: str) -> KeyFigure:
    """The figure large; what its interval says, small beside the place."""
    quantity = BY_KEY[key]
    figure, _, width = with_interval(
        quantity, one.value, one.low95, one.high95, locale=locale
    ).partition(PLUS_MINUS)
    figure, _, ends = figure.partition(" (")
    sure = f"{PLUS_MINUS.strip()}\u00a0{with_unit(width, quantity.unit)}, " if width else ""
    sure += f"{ends.rstrip(')')} at 95\u00a0%, " if ends else ""
    return KeyFigure(
        label=label,
        figure=with_unit(figure, quantity.unit),
        where=sure + where,
        accent=accent,
    )


def coverage_sentence(result: BuildResult) -> str:
    """Which bands were not, or not wholly, measured."""
    partial = [band.band.name for band in measured_bands(result.chosen) if band.partial]
    missing = [
        band.band.name for band in result.chosen.bands if band not in measured_bands(result.chosen)
    ]
    parts = [f"{listed(partial)} only in part"] if partial else []
    parts += [f"{listed(missing)} not at all"] if missing else []
    return f"The sweeps cover {' and '.join(parts)}." if parts else ""


def rated_power(result: BuildResult, locale: str) -> str:
    """The power that the figures of heat are for."""
    return f"{entered(result.power_w, locale=locale)}\u00a0W"
