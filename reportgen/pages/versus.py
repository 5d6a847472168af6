"""A few chosen builds on one page: common axes, one table, what they are, side by side."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

from markupsafe import Markup

from reportgen.model import (
    BandComparison,
    BenchSheet,
    BuildResult,
    Comparison,
    MeasuredBand,
)
from reportgen.pages.canvas import Chart
from reportgen.pages.display import DASH, NOT_MEASURED, number, plus_minus, with_unit
from reportgen.pages.heat_grid import SIGNS
from reportgen.pages.html import inline_svg, page_style
from reportgen.pages.intervals import mean_with_interval
from reportgen.pages.look import LIGHT, SERIES, Series
from reportgen.pages.particulars import FindingText, build_facts, finding_texts, inputs_table
from reportgen.pages.pdf import write_pdf
from reportgen.pages.ranking import (
    FIGURES,
    Heading,
    Line,
    lines,
    mean_efficiency,
    mean_efficiency_text,
    shared_bands,
    shared_words,
)
from reportgen.pages.report import Picture
from reportgen.pages.sentences import counted, listed
from reportgen.pages.summary import figure_of, limits_by_quantity
from reportgen.pages.tables import Cell, Column, Row, Table
from reportgen.pages.templates import read_style, render
from reportgen.pages.versus_charts import bands_of, chart_names, draw_versus
from reportgen.pages.wording import METHOD_NAMES, ohms
from reportgen.physics.quantities import BY_KEY
from reportgen.published import PublishedBuild

_REFERENCE = "0"


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Rival:
    """One of the builds; `comparison` with the first, which has none itself.

    `published` is the same as others see it, its key the build's place from nought.
    """

    result: BuildResult
    comparison: Comparison | None
    published: PublishedBuild


@dataclass(frozen=True, kw_only=True, slots=True)
class Particulars:
    """What one of the builds rests on: findings and files."""

    name: str
    findings: tuple[FindingText, ...]
    inputs: Table | None


@dataclass(frozen=True, kw_only=True, slots=True)
class VersusPage:
    """Everything the template prints, as text; `samples` are pieces of the builds' lines."""

    title: str
    bench_title: str
    publisher: str
    lead: str
    simulated: str
    reference: str
    samples: tuple[Markup, ...]
    headings: tuple[Heading, ...]
    lines: tuple[Line, ...]
    shared: str
    pictures: dict[str, Picture]
    bands: Table
    independent: bool
    facts: Table
    particulars: tuple[Particulars, ...]
    program_version: str


def render_versus(
    rivals: Sequence[Rival], *, bench: BenchSheet, roots: int, program_version: str
) -> tuple[str, bytes]:
    """The page, and the same as PDF.

    Parameters
    ----------
    rivals : sequence of Rival
        Two to six; the first is what the others are compared with.
    bench : BenchSheet
        Settings of the first one's bench.
    roots : int
        From how many runs folders they come: builds of different ones share no calibration.
    program_version : str
        For the foot of the page.

    Raises
    ------
    OutputError
        The page could not be set without a complaint.
    """
    results = [one.result for one in rivals]
    names = chart_names(results)
    charts = draw_versus(
        results,
        names,
        bands_of(results),
        swr_limits=_limits(results, bench, "swr"),
        efficiency_limits=_limits(results, bench, "efficiency_ratio"),
        locale=bench.locale,
    )
    page = _page(rivals, names, charts, bench, roots, program_version)
    style = page_style() + Markup(read_style("index.css") + read_style("versus.css"))  # our own
    html = render("versus.html", page=page, paper=False, style=style)
    on_paper = replace(page, samples=tuple(sample_svg(series) for series in SERIES))
    text = render("versus.html", page=on_paper, paper=True, style=Markup())
    return html, write_pdf(text, {name: one.svg for name, one in charts.items()}, bench.paper)


def _page(
    rivals: Sequence[Rival],
    names: Sequence[str],
    charts: dict[str, Chart],
    bench: BenchSheet,
    roots: int,
    program_version: str,
) -> VersusPage:
    published = [one.published for one in rivals]
    shared = shared_bands(published)
    simulated = [one.simulated for one in published]
    return VersusPage(
        title=f"{listed([one.name for one in published[1:]])} against {published[0].name}",
        bench_title=bench.title,
        publisher=bench.publisher,
        lead=_lead(published, shared, bench.locale),
        simulated="all" if all(simulated) else "some" if any(simulated) else "",
        reference=published[0].name,
        samples=tuple(
            inline_svg(str(sample_svg(series)), f"sample-{place}")
            for place, series in enumerate(SERIES)
        ),
        headings=tuple(one.heading for one in FIGURES),
        lines=lines(published, shared, _REFERENCE, bench.locale),
        shared=shared_words(shared),
        pictures={name: _picture(name, one) for name, one in charts.items()},
        bands=_band_table(rivals, names, bench.locale),
        independent=roots > 1,
        facts=_facts_table([one.result for one in rivals], names, bench.locale),
        particulars=tuple(_particulars(one.result) for one in rivals),
        program_version=program_version,
    )


def _lead(published: Sequence[PublishedBuild], shared: Sequence[str], locale: str) -> str:
    known = [
        (efficiency, build)
        for build in published
        if (efficiency := mean_efficiency(build, shared)) is not None
    ]
    if not known:
        return "The loss of none of them was measured; the match stands side by side."
    best = max(known, key=lambda pair: pair[0])[1]
    figure = with_unit(mean_efficiency_text(best, shared, locale), "%")
    where = f" over the {counted(len(shared), 'band')} that all share" if shared else ""
    return f"The most efficient is {best.name}: {figure} on average{where}."


def _limits(results: Sequence[BuildResult], bench: BenchSheet, key: str) -> dict[str, float]:
    found = {
        band.name: limits_by_quantity(bench, band.name, results[0].power_w)
        for band in bands_of(results)
    }
    return {name: limits[key] for name, limits in found.items() if key in limits}


def _picture(name: str, chart: Chart) -> Picture:
    return Picture(
        name=name,
        title=chart.title,
        alt=chart.alt,
        wide=inline_svg(chart.svg, f"{name}-wide"),
        narrow=inline_svg(chart.narrow_svg, f"{name}-narrow"),
    )


def sample_svg(series: Series) -> Markup:
    """A piece of a build's line, for a table."""
    dashes = " ".join(str(round(1.6 * part, 2)) for part in series.dash)
    dashed = f' stroke-dasharray="{dashes}"' if dashes else ""
    colour = getattr(LIGHT, series.colour)
    return Markup(
        '<svg class="sample" width="28" height="6" viewBox="0 0 28 6" aria-hidden="true">'
        f'<path d="M0 3H28" fill="none" stroke="{colour}" stroke-width="1.6"{dashed}/></svg>'
    )  # numbers and colours of our own


# --- tables --------------------------------------------------------------------------------------


class _Figures(Table):
    """Figures of up to six builds beside their intervals: no line is broken."""

    __slots__ = ()

    @property
    def kind(self) -> str:
        """How it is set."""
        return "rivals"


class _Sheet(Table):
    """Words on up to six builds: columns of one width."""

    __slots__ = ()

    @property
    def kind(self) -> str:
        """How it is set."""
        return "sheet"


def _band_table(rivals: Sequence[Rival], names: Sequence[str], locale: str) -> Table:
    """Efficiency and heat loss of each build in each band, and the difference from the first."""
    bands = [band.name for band in bands_of([one.result for one in rivals])]
    signs = ", ".join(f"{sign.glyph}\u00a0{sign.words}" for sign in SIGNS.values())
    return _Figures(
        caption=f"Means over each band with half of the 95\u00a0% interval. The difference is heat "
        f"loss less that of {rivals[0].published.name}: {signs}.",
        corner="Band",
        sub="Value",
        columns=tuple(Column(label=name, wide=True) for name in names),
        groups=tuple(_band_rows(band, rivals, locale) for band in bands),
    )


def _band_rows(band: str, rivals: Sequence[Rival], locale: str) -> tuple[Row, ...]:
    figures = {
        "efficiency, %": [_mean(one, band, "efficiency_ratio", locale) for one in rivals],
        "heat loss, dB": [_mean(one, band, "heat_loss_db", locale) for one in rivals],
    }
    rows = [
        Row(head=None, sub=sub, cells=tuple(Cell(text=text) for text in texts))
        for sub, texts in figures.items()
    ]
    compared = tuple(_difference(one, band, locale) for one in rivals)
    rows.append(Row(head=None, sub="difference, dB", cells=compared))
    return (replace(rows[0], head=band, head_rows=len(rows)), *rows[1:])


def _mean(rival: Rival, band: str, key: str, locale: str) -> str:
    found = next((one for one in rival.result.chosen.bands if one.band.name == band), None)
    figure = figure_of(found, key) if isinstance(found, MeasuredBand) else None
    return mean_with_interval(BY_KEY[key], figure, locale=locale)


def _difference(rival: Rival, band: str, locale: str) -> Cell:
    if rival.comparison is None:
        return Cell(text=DASH, look="soft")
    found = next((one for one in rival.comparison.bands if one.band == band), None)
    if found is None or found.heat_loss_db is None:
        return Cell(text=NOT_MEASURED if found is None else _why_not(found), look="soft")
    if found.heat_loss_u95_db is None or found.verdict not in SIGNS:
        return Cell(text=number(found.heat_loss_db, 2, locale=locale, signed=True))
    figure = plus_minus(found.heat_loss_db, found.heat_loss_u95_db, 2, locale=locale)
    return Cell(text=f"{figure}\u00a0{SIGNS[found.verdict].glyph}")


def _why_not(found: BandComparison) -> str:
    return NOT_MEASURED if found.verdict is None else found.verdict.value


def _facts_table(results: Sequence[BuildResult], names: Sequence[str], locale: str) -> Table:
    """What each build is; what one of them does not say is a dash."""
    facts = [dict((*_measured_facts(one, locale), *build_facts(one, locale))) for one in results]
    labels = dict.fromkeys(label for fact in facts for label in fact)
    return _Sheet(
        caption="What they are.",
        corner="",
        columns=tuple(Column(label=name, words=True) for name in names),
        groups=tuple(
            (
                Row(
                    head=label,
                    cells=tuple(Cell(text=fact.get(label, DASH), look="words") for fact in facts),
                ),
            )
            for label in labels
        ),
    )


def _measured_facts(result: BuildResult, locale: str) -> tuple[tuple[str, str], ...]:
    chosen = result.chosen
    units = chosen.unit or listed(chosen.units)
    return (
        ("Method", METHOD_NAMES[chosen.method]),
        ("Units", units),
        ("Figures hold for", ohms(chosen.load_ohm, locale)),
    )


def _particulars(result: BuildResult) -> Particulars:
    return Particulars(
        name=result.build.sheet.name,
        findings=finding_texts(result.findings),
        inputs=inputs_table(result.build),
    )
