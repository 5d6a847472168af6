"""The index of all builds: ranked, against the baseline, and what is missing and why."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from markupsafe import Markup

from reportgen.model import BenchSheet, FailedBuild, Finding, Lot, LotBand
from reportgen.pages.display import number, with_unit
from reportgen.pages.heat_grid import Grid, heat_grid
from reportgen.pages.html import page_script, page_style
from reportgen.pages.particulars import FindingText, finding_texts
from reportgen.pages.ranking import (
    FIGURES,
    Heading,
    Line,
    lines,
    mean_efficiency,
    mean_efficiency_text,
    ranked,
    shared_bands,
    shared_words,
)
from reportgen.pages.sentences import counted, listed
from reportgen.pages.standing import (
    JUDGEMENTS,
    STANDINGS,
    limits_sentence,
    standings_sentence,
)
from reportgen.pages.templates import read_style, render
from reportgen.published import PublishedBuild

_FEW_BUILDS = 2
"""So many can be seen at once: nothing to sort or to filter."""


@dataclass(frozen=True, kw_only=True, slots=True)
class Choice:
    """One entry of a filter: what a row's attribute must hold, and how it is said."""

    value: str
    words: str


@dataclass(frozen=True, kw_only=True, slots=True)
class LotRow:
    """How far apart the units of a build lie, in the band in which they do most."""

    key: str
    name: str
    units: str
    band: str
    least: str
    greatest: str
    deviation: str
    worst: str


@dataclass(frozen=True, kw_only=True, slots=True)
class Missing:
    """A build that could not be published; `report` leads to an earlier page that still stands."""

    folder: str
    findings: tuple[FindingText, ...]
    report: str | None


@dataclass(frozen=True, kw_only=True, slots=True)
class IndexPage:
    """Everything the template of the index prints, as text.

    `simulated` is `all`, `some` or empty.
    """

    title: str
    publisher: str
    lead: str
    sentences: tuple[str, ...]
    ranking: str
    simulated: str
    headings: tuple[Heading, ...]
    lines: tuple[Line, ...]
    standings: tuple[Choice, ...]
    judgements: tuple[Choice, ...]
    grid: Grid | None
    baseline: str
    lots: tuple[LotRow, ...]
    missing: tuple[Missing, ...]
    findings: tuple[FindingText, ...]
    program_version: str

    @property
    def sortable(self) -> bool:
        """Whether there is enough to sort."""
        return len(self.lines) > _FEW_BUILDS


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
    builds = ranked(rows, shared)
    baseline = next((build.name for build in builds if build.key == baseline_key), "")
    ranking = lines(builds, shared, baseline_key, bench.locale)
    sentences = (
        standings_sentence((line.standing for line in ranking), baseline),
        limits_sentence(line.judgement for line in ranking),
    )
    page = IndexPage(
        title=bench.title,
        publisher=bench.publisher,
        lead=_lead(builds, failed, shared, bench.locale),
        sentences=tuple(sentence for sentence in sentences if sentence),
        ranking=shared_words(shared),
        simulated=_simulated(builds),
        headings=tuple(one.heading for one in FIGURES),
        lines=ranking,
        standings=_choices(STANDINGS, {line.standing for line in ranking}),
        judgements=_choices(
            dict(zip(JUDGEMENTS, JUDGEMENTS, strict=True)), {line.judgement for line in ranking}
        ),
        grid=heat_grid(builds, baseline_key, bench.locale),
        baseline=baseline,
        lots=tuple(_lot_row(build, bench.locale) for build in builds if _has_lot(build)),
        missing=tuple(_missing(one, standing) for one in failed),
        findings=finding_texts(findings),
        program_version=program_version,
    )
    style = page_style() + Markup(read_style("index.css"))  # our own style sheet
    script = page_script("index.js")
    return render("index.html", page=page, paper=False, style=style, script=script)


def _lead(
    builds: Sequence[PublishedBuild],
    failed: Sequence[FailedBuild],
    shared: Sequence[str],
    locale: str,
) -> str:
    published = f"{counted(len(builds), 'build')} published"
    rejected = f", {len(failed)} not" if failed else ""
    if not builds or mean_efficiency(builds[0], shared) is None:
        return f"{published}{rejected}."
    figure = with_unit(mean_efficiency_text(builds[0], shared, locale), "%")
    return f"{published}{rejected}; the most efficient is {builds[0].name}, {figure}."


def _simulated(builds: Sequence[PublishedBuild]) -> str:
    found = [build.simulated for build in builds]
    return "" if not any(found) else "all" if all(found) else "some"


# --- filters -------------------------------------------------------------------------------------


def _choices(words: dict[str, str], found: set[str]) -> tuple[Choice, ...]:
    """What occurs, in the order of the words; none where there is nothing to choose from."""
    kept = tuple(Choice(value=value, words=words[value]) for value in words if value in found)
    return kept if len(kept) > 1 else ()


# --- lots ----------------------------------------------------------------------------------------


def _has_lot(build: PublishedBuild) -> bool:
    return build.lot is not None and bool(build.lot.bands)


def _lot_row(build: PublishedBuild, locale: str) -> LotRow:
    assert build.lot is not None
    widest = max(build.lot.bands, key=lambda band: band.greatest_db - band.least_db)
    spread = widest.standard_deviation_db
    least, greatest, deviation = (
        number(value, 2, u95=2 * spread, locale=locale)
        for value in (widest.least_db, widest.greatest_db, spread)
    )
    return LotRow(
        key=build.key,
        name=build.name,
        units=listed(build.lot.units),
        band=widest.band,
        least=least,
        greatest=greatest,
        deviation=deviation,
        worst=_worst_unit(build.lot, widest),
    )


def _worst_unit(lot: Lot, widest: LotBand) -> str:
    """The unit with most loss there, and on how many bands it has."""
    bands = sum(band.worst_unit == widest.worst_unit for band in lot.bands)
    every = len(lot.bands)
    where = "on all bands" if bands == every else f"on {bands} of {every} bands"
    return f"{widest.worst_unit}, {where}"


# --- what is missing -----------------------------------------------------------------------------


def _missing(failed: FailedBuild, standing: Sequence[str]) -> Missing:
    return Missing(
        folder=failed.folder,
        findings=finding_texts(failed.findings),
        report=f"{failed.key}/report.html" if failed.key in standing else None,
    )
