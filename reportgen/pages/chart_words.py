"""Charts in words: the takeaway that stands above each, and its alternative text."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from reportgen.model import Band, BuildResult
from reportgen.pages.intervals import spoken_with_interval
from reportgen.pages.sentences import rated_power, spoken
from reportgen.pages.summary import BandValue, best_of, means, worst_of, worsts


def _each(values: Sequence[BandValue], key: str, locale: str) -> str:
    return ", ".join(f"{one.band.name} {spoken(key, one.value, locale)}" for one in values)


def efficiency_chart(
    result: BuildResult, baseline: BuildResult | None, locale: str, *, with_ribbon: bool
) -> tuple[str, str]:
    """Title and alternative text of the efficiency chart."""
    key = "efficiency_ratio"
    values = means(result.chosen, key)
    title = _extremes(values, key, "Efficiency is {best} on {where}", locale)
    alt = "Line chart of efficiency over frequency. "
    alt += f"Mean in each band: {_each(values, key, locale)}."
    alt += " The shaded ribbon is the 95\u00a0% interval." if with_ribbon else ""
    return title, alt + _baseline_alt(baseline, key, locale)


def _extremes(values: Sequence[BandValue], key: str, single: str, locale: str) -> str:
    best, worst = best_of(values, key), worst_of(values, key)
    assert best is not None
    assert worst is not None
    text = single.format(best=spoken_with_interval(key, best, locale), where=best.band.name)
    if len(values) == 1:
        return text
    least = spoken_with_interval(key, worst, locale)
    return f"{text} at best and {least} on {worst.band.name} at worst"


def _baseline_alt(baseline: BuildResult | None, key: str, locale: str) -> str:
    values = () if baseline is None else means(baseline.chosen, key)
    return f" Baseline, dashed: {_each(values, key, locale)}." if values else ""


def match_chart(result: BuildResult, baseline: BuildResult | None, locale: str) -> tuple[str, str]:
    """Title and alternative text of the match chart."""
    values = worsts(result.chosen, "swr")
    worst = worst_of(values, "swr")
    losses = worsts(result.chosen, "return_loss_db")
    title = (
        "More comes back from the low side than went in"
        if worst is None
        else f"SWR is {spoken_with_interval('swr', worst, locale)} at worst, on {worst.band.name}"
    )
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
    heat = spoken_with_interval("heat_w", most, locale)
    title = f"At {power} the build turns {heat} into heat on {most.band.name}"
    title += ", its warmest band" if len(values) > 1 else ""
    alt = f"Dot chart of heat by band at {power}: {_each(values, 'heat_w', locale)}."
    rivals = [
        BandValue(band=Band(name=name, from_hz=0, to_hz=0), value=value)
        for name, value in other.items()
    ]
    return title, alt + (f" Baseline, rings: {_each(rivals, 'heat_w', locale)}." if rivals else "")
