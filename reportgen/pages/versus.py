"""A few chosen builds on one page: common axes, one table, what they are, side by side."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

from markupsafe import Markup

from reportgen.model import (
    BenchSheet,
    BuildResult,
)
from reportgen.pages.canvas import Chart
from reportgen.pages.display import with_unit
from reportgen.pages.html import inline_svg, page_style
from reportgen.pages.look import LIGHT, SERIES, Series
from reportgen.pages.particulars import FindingText, finding_texts, inputs_table
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
from reportgen.pages.summary import limits_by_quantity
from reportgen.pages.tables import Table
from reportgen.pages.templates import read_style, render
from reportgen.pages.versus_charts import bands_of, chart_names, draw_versus
from reportgen.pages.versus_tables import Rival, facts_table, rivals_table
from reportgen.published import PublishedBuild

_REFERENCE = "0"


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
        bands=rivals_table(rivals, names, bench.locale),
        independent=roots > 1,
        facts=facts_table([one.result for one in rivals], names, bench.locale),
        particulars=tuple(
            _particulars(one.result, name) for one, name in zip(rivals, names, strict=True)
        ),
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


def _particulars(result: BuildResult, name: str) -> Particulars:
    """`name` is different for each build."""
    files = inputs_table(result.build)
    return Particulars(
        name=name,
        findings=finding_texts(result.findings),
        inputs=None if files is None else replace(files, caption=f"Files read for {name}."),
    )
