"""Builds in order: what they are ranked by, and how each stands against baseline and limits."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace

from reportgen.model import Judgement
from reportgen.pages.display import DASH, NOT_MEASURED, aligned, entered, with_unit
from reportgen.pages.intervals import with_interval
from reportgen.pages.limits import limits_short
from reportgen.pages.sentences import listed
from reportgen.pages.standing import against_words, standing
from reportgen.pages.summary import (
    BandValue,
    interval_over_bands,
    mean_over_bands,
    means,
    worst_of,
    worsts,
)
from reportgen.pages.wording import ohms
from reportgen.physics.quantities import BY_KEY, Better
from reportgen.published import PublishedBuild

_MOST_LISTED = 4


@dataclass(frozen=True, kw_only=True, slots=True)
class Shown:
    """A figure, and a few soft words under it: where, or of what."""

    text: str
    note: str = ""


@dataclass(frozen=True, kw_only=True, slots=True)
class Heading:
    """A column that builds can be ranked by; `best` is the way in which its best come first."""

    label: str
    unit: str
    best: str


@dataclass(frozen=True, kw_only=True, slots=True)
class Line:
    """One published build in the ranking.

    `places` are its places by name and by each of the headings, 0 where it has none; `standing`
    and `judgement` are what the page can be filtered by.
    """

    place: str
    key: str
    name: str
    summary: str
    figures: tuple[Shown, ...]
    against: str
    standing: str
    limits: Shown
    judgement: str
    places: tuple[int, ...]
    baseline: bool
    simulated: bool


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Figures:
    """What builds are ranked by: a heading, a value and its text, over the shared bands."""

    heading: Heading
    value: Callable[[PublishedBuild, Sequence[str]], float | None]
    shown: Callable[[PublishedBuild, Sequence[str], str], Shown]
    better: Better


# --- what is ranked ------------------------------------------------------------------------------


def shared_bands(builds: Sequence[PublishedBuild]) -> tuple[str, ...]:
    """Bands in which every build that has an efficiency at all has one: the common ground."""
    known = [
        names
        for build in builds
        if (names := [one.band.name for one in means(build, "efficiency_ratio")])
    ]
    return (
        tuple(name for name in known[0] if all(name in names for names in known)) if known else ()
    )


def shared_words(shared: Sequence[str]) -> str:
    """What the figures of the ranking are over."""
    if not shared:
        return "Figures of each build are over its own bands: the builds share none."
    if len(shared) <= _MOST_LISTED:
        return f"Figures are over what all with a loss share: {listed(shared)}."
    first, last = (name.replace(" ", "\u00a0") for name in (shared[0], shared[-1]))
    bands = f"{len(shared)} bands that all with a loss share"
    return f"Figures are over the {bands}, from {first} to {last}."


def mean_efficiency(build: PublishedBuild, shared: Sequence[str]) -> float | None:
    """Mean over the shared bands; over its own where none is shared [ratio]."""
    return mean_over_bands(build, "efficiency_ratio", build.power_w, shared or None)


def mean_efficiency_text(build: PublishedBuild, shared: Sequence[str], locale: str) -> str:
    """The same with its interval, without the unit."""
    key, names = "efficiency_ratio", shared or None
    low, high = interval_over_bands(build, build.covariance, key, build.power_w, names)
    return with_interval(BY_KEY[key], mean_efficiency(build, shared), low, high, locale=locale)


def _mean_shown(build: PublishedBuild, shared: Sequence[str], locale: str) -> Shown:
    return Shown(text=mean_efficiency_text(build, shared, locale))


def _worst_mean(build: PublishedBuild, shared: Sequence[str], key: str) -> BandValue | None:
    return worst_of(_of_bands(means(build, key), shared), key)


def _worst_swr(build: PublishedBuild, shared: Sequence[str]) -> BandValue | None:
    return worst_of(_of_bands(worsts(build, "swr"), shared), "swr")


def _of_bands(values: Sequence[BandValue], shared: Sequence[str]) -> list[BandValue]:
    return [one for one in values if not shared or one.band.name in shared]


def _value(found: BandValue | None) -> float | None:
    return None if found is None else found.value


def _band_shown(key: str, found: BandValue | None, locale: str, note: str = "") -> Shown:
    if found is None:
        return Shown(text=NOT_MEASURED)
    text = with_interval(BY_KEY[key], found.value, found.low95, found.high95, locale=locale)
    return Shown(text=text, note=note or found.band.name)


def _heat_shown(build: PublishedBuild, shared: Sequence[str], locale: str) -> Shown:
    note = f"of {with_unit(entered(build.power_w, locale=locale), 'W')}"
    return _band_shown("heat_w", _worst_mean(build, shared, "heat_w"), locale, note)


FIGURES = (
    Figures(
        heading=Heading(label="Efficiency", unit="mean, %", best="descending"),
        value=mean_efficiency,
        shown=_mean_shown,
        better=Better.HIGHER,
    ),
    Figures(
        heading=Heading(label="Worst band", unit="efficiency, %", best="descending"),
        value=lambda build, shared: _value(_worst_mean(build, shared, "efficiency_ratio")),
        shown=lambda build, shared, locale: _band_shown(
            "efficiency_ratio", _worst_mean(build, shared, "efficiency_ratio"), locale
        ),
        better=Better.HIGHER,
    ),
    Figures(
        heading=Heading(label="Most heat", unit="W", best="ascending"),
        value=lambda build, shared: _value(_worst_mean(build, shared, "heat_w")),
        shown=_heat_shown,
        better=Better.LOWER,
    ),
    Figures(
        heading=Heading(label="SWR", unit="worst", best="ascending"),
        value=lambda build, shared: _value(_worst_swr(build, shared)),
        shown=lambda build, shared, locale: _band_shown("swr", _worst_swr(build, shared), locale),
        better=Better.LOWER,
    ),
)
"""The first is the ranking of the page as it stands."""


# --- places --------------------------------------------------------------------------------------


def ranked(builds: Sequence[PublishedBuild], shared: Sequence[str]) -> list[PublishedBuild]:
    """The builds in the order of the page; those without an efficiency last, by key."""
    found = _places(builds, FIGURES[0], shared)
    return sorted(builds, key=lambda build: (not found[build.key], found[build.key], build.key))


def _places(
    builds: Sequence[PublishedBuild], figures: Figures, shared: Sequence[str]
) -> dict[str, int]:
    """Places from 1, the best first, by key; 0 where there is no figure."""
    sign = -1 if figures.better is Better.HIGHER else 1
    values = {build.key: figures.value(build, shared) for build in builds}
    known = sorted((sign * value, key) for key, value in values.items() if value is not None)
    places = {key: place for place, (_, key) in enumerate(known, start=1)}
    return {key: places.get(key, 0) for key in values}


def _places_by_name(builds: Sequence[PublishedBuild]) -> dict[str, int]:
    found = sorted(builds, key=lambda build: (build.name.casefold(), build.key))
    return {build.key: place for place, build in enumerate(found, start=1)}


def lines(
    builds: Sequence[PublishedBuild],
    shared: Sequence[str],
    baseline_key: str | None,
    locale: str,
) -> tuple[Line, ...]:
    """The ranking, in the order of the builds."""
    orders = [_places_by_name(builds), *(_places(builds, one, shared) for one in FIGURES)]
    found = [
        _line(build, [order[build.key] for order in orders], shared, baseline_key, locale)
        for build in builds
    ]
    columns = [
        aligned([line.figures[column].text for line in found], locale)
        for column in range(len(FIGURES))
    ]
    return tuple(
        replace(line, figures=_with_texts(line.figures, texts))
        for line, texts in zip(found, zip(*columns, strict=True), strict=True)
    )


def _with_texts(figures: Sequence[Shown], texts: Sequence[str]) -> tuple[Shown, ...]:
    return tuple(replace(one, text=text) for one, text in zip(figures, texts, strict=True))


def _line(
    build: PublishedBuild,
    places: Sequence[int],
    shared: Sequence[str],
    baseline_key: str | None,
    locale: str,
) -> Line:
    is_baseline = build.key == baseline_key
    return Line(
        place=str(places[1]) if places[1] else DASH,
        key=build.key,
        name=build.name,
        summary=f"{ohms(round(build.load_ohm), locale)}. {build.summary}",
        figures=tuple(one.shown(build, shared, locale) for one in FIGURES),
        against="is the baseline" if is_baseline else against_words(build.comparison),
        standing="baseline" if is_baseline else standing(build.comparison),
        limits=_limits_shown(build),
        judgement=limits_short(build.limits),
        places=tuple(places),
        baseline=is_baseline,
        simulated=build.simulated,
    )


def _limits_shown(build: PublishedBuild) -> Shown:
    """The verdict, and on how many bands it rests where it is not a pass."""
    word = limits_short(build.limits)
    found = {one.band for one in build.limits if one.judgement.value == word}
    every = len({one.band for one in build.limits})
    decisive = word in (Judgement.FAIL, Judgement.UNDECIDED)
    where = next(iter(found), "") if len(found) == 1 else f"{len(found)} of {every} bands"
    return Shown(text=word, note=where if decisive else "")
