"""Charts of several builds in words: what stands above each, and what each shows."""

from __future__ import annotations

from collections import Counter
from collections.abc import Mapping, Sequence

from reportgen.model import BuildResult
from reportgen.pages.display import entered, with_unit
from reportgen.pages.sentences import listed, spoken
from reportgen.pages.summary import BandValue, means, worst_of, worsts
from reportgen.physics.quantities import BY_KEY, Better

_LINES = "Each build has a colour and a dash of its own and its name where its curve ends. "


def efficiency(
    results: Sequence[BuildResult], names: Sequence[str], locale: str
) -> tuple[str, str]:
    """Title and alternative text of the chart of efficiency."""
    key = "efficiency_ratio"
    found = {
        name: _values(means(result.chosen, key))
        for name, result in zip(names, results, strict=True)
    }
    title = _leader("most efficient", found, key)
    alt = f"Line chart of efficiency over frequency. {_LINES}Mean in each band: "
    return title, alt + _each(found, key, locale)


def swr(results: Sequence[BuildResult], names: Sequence[str], locale: str) -> tuple[str, str]:
    """Title and alternative text of the chart of the match."""
    found = {
        name: worsts(result.chosen, "swr") for name, result in zip(names, results, strict=True)
    }
    worst = {name: worst_of(values, "swr") for name, values in found.items()}
    told = [
        f"{name} {spoken('swr', one.value, locale)}"
        for name, one in worst.items()
        if one is not None
    ]
    each = _each({name: _values(values) for name, values in found.items()}, "swr", locale)
    alt = f"Line chart of SWR over frequency. {_LINES}Worst in each band: "
    return f"Worst SWR in a band: {listed(told)}", alt + each


def heat(
    heats: Sequence[Mapping[str, float]], names: Sequence[str], power_w: float, locale: str
) -> tuple[str, str]:
    """Title and alternative text of the chart of heat; watts by band for each build."""
    power = with_unit(entered(power_w, locale=locale), "W")
    most = [
        f"{name} {spoken('heat_w', max(heat.values()), locale)}"
        for name, heat in zip(names, heats, strict=True)
        if heat
    ]
    each = _each(dict(zip(names, heats, strict=True)), "heat_w", locale)
    alt = f"Dot chart of heat by band at {power}, a marker for each build. {each}"
    return f"Most heat in a band at {power}: {listed(most)}", alt


def _values(values: Sequence[BandValue]) -> dict[str, float]:
    return {one.band.name: one.value for one in values}


def _leader(what: str, found: Mapping[str, Mapping[str, float]], key: str) -> str:
    """Which build is best on how many of the bands where there is a choice."""
    pick = max if BY_KEY[key].better is Better.HIGHER else min
    bands = dict.fromkeys(band for values in found.values() for band in values)
    contests = [
        {name: values[band] for name, values in found.items() if band in values} for band in bands
    ]
    wins = Counter(pick(one, key=lambda name: one[name]) for one in contests if len(one) > 1)
    if not wins:
        return "No band is common to two builds"
    (name, count) = wins.most_common(1)[0]
    where = f"all {count}" if count == wins.total() else f"{count} of {wins.total()}"
    return f"{name} is the {what} on {where} bands"


def _each(found: Mapping[str, Mapping[str, float]], key: str, locale: str) -> str:
    told = []
    for name, values in found.items():
        figures = [f"{band} {spoken(key, value, locale)}" for band, value in values.items()]
        told.append(f"{name}: {', '.join(figures) or 'not measured'}")
    return f"{'; '.join(told)}."
