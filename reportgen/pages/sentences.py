"""Figures in words: the verdict of a report, the takeaway of a chart, its alternative text."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

from reportgen.model import Band, BuildResult, Comparison, Verdict
from reportgen.pages.display import (
    NOT_MEASURED,
    entered,
    megahertz,
    number,
    percent_of,
    quantity_number,
    with_unit,
)
from reportgen.pages.summary import (
    BandValue,
    best_of,
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
    """The result in one sentence."""
    efficiency = means(result.chosen, "efficiency_ratio")
    if not efficiency:
        return _verdict_without_loss(result, locale)
    low, high = worst_of(efficiency, "efficiency_ratio"), best_of(efficiency, "efficiency_ratio")
    assert low is not None
    assert high is not None
    if len(efficiency) == 1:
        share = spoken("efficiency_ratio", low.value, locale)
        return f"On {low.band.name}, {share} of the power that enters reaches the load."
    texts = [_whole_percent(one.value, locale) for one in (low, high)]
    share = texts[0] if texts[0] == texts[1] else " to ".join(texts)
    return (
        f"On {_band_span(efficiency)}, {share}\u00a0% of the power that enters reaches the load; "
        f"least on {low.band.name}."
    )


def _verdict_without_loss(result: BuildResult, locale: str) -> str:
    worst = worst_of(worsts(result.chosen, "swr"), "swr")
    if worst is None:
        return "No band was measured; the findings say why."
    ratio = spoken("swr", worst.value, locale)
    return (
        f"The match was measured and the loss was not: SWR {ratio} or better "
        f"on {_band_span(worsts(result.chosen, 'swr'))}."
    )


def _band_span(values: Sequence[BandValue]) -> str:
    if len(values) == 1:
        return values[0].band.name
    return f"{len(values)} bands from {values[0].band.name} to {values[-1].band.name}"


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
    mean = mean_over_bands(result.chosen, "efficiency_ratio", result.power_w)
    bands = counted(len(means(result.chosen, "efficiency_ratio")), "band")
    if mean is None:
        return KeyFigure(label="Efficiency", figure=NOT_MEASURED, where="", accent="ink")
    figure = spoken("efficiency_ratio", mean, locale)
    return KeyFigure(label="Mean efficiency", figure=figure, where=f"over {bands}", accent="ink")


def _match_key(result: BuildResult, locale: str) -> KeyFigure:
    worst = worst_of(worsts(result.chosen, "swr"), "swr")
    if worst is None:
        return KeyFigure(label="Match", figure=NOT_MEASURED, where="", accent="match")
    places = "" if worst.at_hz is None else megahertz(worst.at_hz, locale=locale, places=3)
    where = f"on {worst.band.name}" + (f", at {places}\u00a0MHz" if places else "")
    figure = spoken("swr", worst.value, locale)
    return KeyFigure(label="Worst SWR in a band", figure=figure, where=where, accent="match")


def _heat_key(result: BuildResult, locale: str) -> KeyFigure:
    most = worst_of(means(result.chosen, "heat_w"), "heat_w")
    label = f"Most heat at {rated_power(result, locale)}"
    if most is None:
        return KeyFigure(label=label, figure=NOT_MEASURED, where="", accent="heat")
    figure = spoken("heat_w", most.value, locale)
    return KeyFigure(label=label, figure=figure, where=f"on {most.band.name}", accent="heat")


def coverage_sentence(result: BuildResult) -> str:
    """Which bands were not, or not wholly, measured."""
    partial = [band.band.name for band in measured_bands(result.chosen) if band.partial]
    missing = [
        band.band.name for band in result.chosen.bands if band not in measured_bands(result.chosen)
    ]
    parts = [f"{listed(partial)} only in part"] if partial else []
    parts += [f"{listed(missing)} not at all"] if missing else []
    return f"The sweeps cover {' and '.join(parts)}." if parts else ""


def comparison_sentence(comparison: Comparison | None) -> str:
    """How the build compares with the baseline over all bands."""
    if comparison is None:
        return ""
    name = f"the baseline, {comparison.name}"
    verdicts = [band.verdict for band in comparison.bands]
    if any(one in (Verdict.BETTER, Verdict.WORSE, Verdict.SAME) for one in verdicts):
        return f"Against {name}: {_verdict_counts(verdicts)}."
    differences = [band.heat_loss_db for band in comparison.bands if band.heat_loss_db is not None]
    if not differences:
        reasons = dict.fromkeys(band.reason for band in comparison.bands if band.reason)
        return f"It cannot be compared with {name}: {'; '.join(reasons) or 'no band in common'}."
    fewer = sum(difference < 0 for difference in differences)
    bands = counted(len(differences), "band")
    return (
        f"On {fewer} of {bands} its mean heat loss is below that of {name}. "
        "The uncertainty of the difference is not known yet, so no band is judged."
    )


def _verdict_counts(verdicts: Sequence[Verdict | None]) -> str:
    counts = [(verdict, verdicts.count(verdict)) for verdict in Verdict]
    return listed([f"{verdict.value} on {count}" for verdict, count in counts if count])


# --- charts: takeaway and alternative text -------------------------------------------------------


def _each(values: Sequence[BandValue], key: str, locale: str) -> str:
    return ", ".join(f"{one.band.name} {spoken(key, one.value, locale)}" for one in values)


def efficiency_chart(
    result: BuildResult, baseline: BuildResult | None, locale: str
) -> tuple[str, str]:
    """Title and alternative text of the efficiency chart."""
    key = "efficiency_ratio"
    values = means(result.chosen, key)
    title = _extremes(values, key, "Efficiency is {best} on {where}", locale)
    alt = "Line chart of efficiency over frequency. "
    alt += f"Mean in each band: {_each(values, key, locale)}."
    return title, alt + _baseline_alt(baseline, key, locale)


def _extremes(values: Sequence[BandValue], key: str, single: str, locale: str) -> str:
    best, worst = best_of(values, key), worst_of(values, key)
    assert best is not None
    assert worst is not None
    text = single.format(best=spoken(key, best.value, locale), where=best.band.name)
    if len(values) == 1:
        return text
    return f"{text} at best and {spoken(key, worst.value, locale)} on {worst.band.name} at worst"


def _baseline_alt(baseline: BuildResult | None, key: str, locale: str) -> str:
    values = () if baseline is None else means(baseline.chosen, key)
    return f" Baseline, dashed: {_each(values, key, locale)}." if values else ""


def match_chart(result: BuildResult, baseline: BuildResult | None, locale: str) -> tuple[str, str]:
    """Title and alternative text of the match chart."""
    values = worsts(result.chosen, "swr")
    worst = worst_of(values, "swr")
    assert worst is not None
    losses = worsts(result.chosen, "return_loss_db")
    title = f"SWR is {spoken('swr', worst.value, locale)} at worst, on {worst.band.name}"
    alt = (
        "Line chart of return loss over frequency, with the SWR that corresponds on the right. "
        f"Least return loss in each band: {_each(losses, 'return_loss_db', locale)}."
    )
    rivals = () if baseline is None else worsts(baseline.chosen, "return_loss_db")
    dashed = _each(rivals, "return_loss_db", locale)
    return title, alt + (f" Baseline, dashed: {dashed}." if rivals else "")


def heat_chart(result: BuildResult, other: Mapping[str, float], locale: str) -> tuple[str, str]:
    """Title and alternative text of the heat chart; `other` is the baseline's heat [W]."""
    values = means(result.chosen, "heat_w")
    most = worst_of(values, "heat_w")
    assert most is not None
    power = rated_power(result, locale)
    heat = spoken("heat_w", most.value, locale)
    title = f"At {power} the build turns {heat} into heat on {most.band.name}"
    title += ", its warmest band" if len(values) > 1 else ""
    alt = f"Dot chart of heat by band at {power}: {_each(values, 'heat_w', locale)}."
    rivals = [
        BandValue(band=Band(name=name, from_hz=0, to_hz=0), value=value)
        for name, value in other.items()
    ]
    return title, alt + (f" Baseline, rings: {_each(rivals, 'heat_w', locale)}." if rivals else "")


def rated_power(result: BuildResult, locale: str) -> str:
    """The power that the figures of heat are for."""
    return f"{entered(result.power_w, locale=locale)}\u00a0W"
