"""The index of all builds: ranked, against the baseline, and what is missing and why."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

from reportgen.model import BenchSheet, Comparison, FailedBuild, Finding, Verdict
from reportgen.pages import sentences
from reportgen.pages.band_tables import heat_loss_text
from reportgen.pages.display import DASH, NOT_MEASURED, aligned, with_unit
from reportgen.pages.html import page_style
from reportgen.pages.intervals import plain_text, with_interval
from reportgen.pages.limits import limits_short
from reportgen.pages.look import TINTS
from reportgen.pages.particulars import FindingText, finding_texts
from reportgen.pages.summary import (
    interval_over_bands,
    mean_over_bands,
    means,
    worst_of,
    worsts,
)
from reportgen.pages.tables import Cell, Column, Row, Table, with_points_aligned
from reportgen.pages.templates import render
from reportgen.physics.quantities import BY_KEY
from reportgen.published import PublishedBuild

_FIGURES = ("efficiency", "heat_loss", "swr")


@dataclass(frozen=True, kw_only=True, slots=True)
class Line:
    """One published build in the ranking."""

    rank: str
    name: str
    report: str
    pdf: str
    summary: str
    efficiency: str
    heat_loss: str
    difference: str
    limits: str
    swr: str
    simulated: bool
    baseline: bool


@dataclass(frozen=True, kw_only=True, slots=True)
class Missing:
    """A build that could not be published; `report` leads to an earlier page that still stands."""

    key: str
    folder: str
    findings: tuple[FindingText, ...]
    report: str | None


@dataclass(frozen=True, kw_only=True, slots=True)
class IndexPage:
    """Everything the template of the index prints, as text."""

    title: str
    publisher: str
    lead: str
    ranking: str
    simulated: bool
    lines: tuple[Line, ...]
    heat: Table | None
    missing: tuple[Missing, ...]
    findings: tuple[FindingText, ...]
    program_version: str


def render_index_html(
    rows: Sequence[PublishedBuild],
    *,
    bench: BenchSheet,
    failed: Sequence[FailedBuild] = (),
    standing: Sequence[str] = (),
    findings: Sequence[Finding] = (),
    baseline_key: str | None = None,
    program_version: str,
) -> str:
    """All builds of a runs folder on one page, published ones in any order.

    `failed` could not be published; `standing` are the keys of those whose pages of an earlier run
    are still there; `findings` concern the whole runs folder.
    """
    shared = shared_bands(rows)
    ranked = sorted(rows, key=lambda build: _rank_key(build, shared))
    page = IndexPage(
        title=bench.title,
        publisher=bench.publisher,
        lead=_lead(ranked, failed, shared, bench.locale),
        ranking=_ranking_words(shared),
        simulated=any(build.simulated for build in rows),
        lines=_lines(ranked, shared, baseline_key, bench.locale),
        heat=_heat_table(ranked, bench.locale),
        missing=tuple(_missing(one, standing) for one in failed),
        findings=finding_texts(findings),
        program_version=program_version,
    )
    return render("index.html", page=page, paper=False, style=page_style())


# --- ranking -------------------------------------------------------------------------------------


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


def _efficiency(build: PublishedBuild, shared: Sequence[str]) -> float | None:
    return mean_over_bands(build, "efficiency_ratio", build.power_w, shared or None)


def _rank_key(build: PublishedBuild, shared: Sequence[str]) -> tuple[float, str]:
    efficiency = _efficiency(build, shared)
    return (-efficiency if efficiency is not None else 1.0, build.key)


def _ranking_words(shared: Sequence[str]) -> str:
    if not shared:
        return "Ranked by mean efficiency, each build over its own bands: they share none."
    return f"Ranked by mean efficiency over what all share: {sentences.listed(shared)}."


def _lead(
    ranked: Sequence[PublishedBuild],
    failed: Sequence[FailedBuild],
    shared: Sequence[str],
    locale: str,
) -> str:
    published = f"{sentences.counted(len(ranked), 'build')} published"
    rejected = f", {len(failed)} not" if failed else ""
    first = ranked[0] if ranked else None
    efficiency = None if first is None else _efficiency(first, shared)
    if first is None or efficiency is None:
        return f"{published}{rejected}."
    text = _figure(first, "efficiency_ratio", efficiency, shared or None, locale)
    figure = with_unit(text, "%")
    return f"{published}{rejected}; the most efficient is {first.name}, {figure}."


def _lines(
    ranked: Sequence[PublishedBuild], shared: Sequence[str], baseline_key: str | None, locale: str
) -> tuple[Line, ...]:
    lines = [
        _line(place, build, shared, baseline_key, locale)
        for place, build in enumerate(ranked, start=1)
    ]
    columns = [aligned([getattr(line, name) for line in lines], locale) for name in _FIGURES]
    return tuple(
        replace(line, **dict(zip(_FIGURES, texts, strict=True)))
        for line, texts in zip(lines, zip(*columns, strict=True), strict=True)
    )


def _line(
    place: int,
    build: PublishedBuild,
    shared: Sequence[str],
    baseline_key: str | None,
    locale: str,
) -> Line:
    names = shared or None
    efficiency, loss = (
        mean_over_bands(build, quantity, build.power_w, names)
        for quantity in ("efficiency_ratio", "heat_loss_db")
    )
    every = worsts(build, "swr")
    swr = worst_of([one for one in every if not shared or one.band.name in shared], "swr")
    return Line(
        rank=DASH if efficiency is None else str(place),
        name=build.name,
        report=f"{build.key}/report.html",
        pdf=f"{build.key}/report.pdf",
        summary=build.summary,
        efficiency=_figure(build, "efficiency_ratio", efficiency, names, locale),
        heat_loss=_figure(build, "heat_loss_db", loss, names, locale),
        difference=_against(build.comparison, is_baseline=build.key == baseline_key),
        limits=limits_short(build.limits),
        swr=NOT_MEASURED if swr is None else plain_text("swr", swr, locale),
        simulated=build.simulated,
        baseline=build.key == baseline_key,
    )


def _figure(
    build: PublishedBuild,
    key: str,
    value: float | None,
    names: Sequence[str] | None,
    locale: str,
) -> str:
    """A mean over bands and its interval."""
    low, high = interval_over_bands(build, build.covariance, key, build.power_w, names)
    return with_interval(BY_KEY[key], value, low, high, locale=locale)


def _against(comparison: Comparison | None, *, is_baseline: bool) -> str:
    """How a build stands against the baseline, in a few words."""
    if is_baseline:
        return "is the baseline"
    if comparison is None:
        return "no baseline"
    verdicts = [band.verdict for band in comparison.bands]
    judged = [(one, verdicts.count(one)) for one in (Verdict.BETTER, Verdict.SAME, Verdict.WORSE)]
    if any(count for _, count in judged):
        return ", ".join(f"{verdict.value} on {count}" for verdict, count in judged if count)
    differences = [band.heat_loss_db for band in comparison.bands if band.heat_loss_db is not None]
    if not differences:
        return "not comparable"
    less = sum(difference < 0 for difference in differences)
    return f"less loss on {less} of {len(differences)}, not judged"


# --- heat loss, builds by bands ------------------------------------------------------------------


def _heat_table(builds: Sequence[PublishedBuild], locale: str) -> Table | None:
    losses = {build.key: _losses(build) for build in builds}
    values = [value for found in losses.values() for value in found.values()]
    bands = sorted(
        {band.band for build in builds for band in build.bands},
        key=lambda band: (band.from_hz, band.to_hz, band.name),
    )
    if not values:
        return None
    edges = (min(values), max(values))
    table = Table(
        caption="Mean heat loss, dB. The stronger the tint, the more of the power turns into heat.",
        corner="Build",
        columns=tuple(Column(label=band.name.replace(" ", "\u00a0", 1)) for band in bands),
        groups=tuple(
            (_heat_row(build, [band.name for band in bands], losses, edges, locale),)
            for build in builds
        ),
    )
    return with_points_aligned(table, locale)


def _heat_row(
    build: PublishedBuild,
    bands: Sequence[str],
    losses: dict[str, dict[str, float]],
    edges: tuple[float, float],
    locale: str,
) -> Row:
    name, link = build.name, f"{build.key}/report.html"
    own = losses[build.key]
    if not own:
        reason = f"{NOT_MEASURED}: {build.reason or 'its report says why'}"
        return Row(head=name, link=link, words=reason, words_columns=len(bands))
    cells = tuple(_tinted(build, band, own, edges, locale) for band in bands)
    return Row(head=name, link=link, cells=cells)


def _losses(build: PublishedBuild) -> dict[str, float]:
    return {one.band.name: one.value for one in means(build, "heat_loss_db")}


def _tinted(
    build: PublishedBuild,
    band: str,
    losses: dict[str, float],
    edges: tuple[float, float],
    locale: str,
) -> Cell:
    text = heat_loss_text(build, band, locale)
    if band not in losses:
        return Cell(text=text, look="soft gap")
    low, high = edges
    share = (losses[band] - low) / (high - low) if high > low else 0.0
    level = min(int(share * len(TINTS)), len(TINTS) - 1)
    return Cell(text=text, look=f"tint-{level}")


# --- what is missing -----------------------------------------------------------------------------


def _missing(failed: FailedBuild, standing: Sequence[str]) -> Missing:
    return Missing(
        key=failed.key,
        folder=failed.folder,
        findings=finding_texts(failed.findings),
        report=f"{failed.key}/report.html" if failed.key in standing else None,
    )
