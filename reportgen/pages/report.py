"""The report of one build, for a screen and for paper: the same page, set twice."""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache

from markupsafe import Markup

from reportgen.model import BenchSheet, BuildResult, Comparison, Method
from reportgen.pages import sentences
from reportgen.pages.band_tables import band_table, missing_quantities
from reportgen.pages.charts import Chart, draw_charts
from reportgen.pages.comparison import comparison_sentence, comparison_table, loads_sentence
from reportgen.pages.heat_parts import heat_parts_sentences, heat_parts_table
from reportgen.pages.html import inline_svg, page_style
from reportgen.pages.limits import limits_table, limits_words
from reportgen.pages.method_tables import (
    agreement_sentence,
    methods_table,
    units_sentences,
    units_table,
)
from reportgen.pages.particulars import (
    FindingText,
    bandwidth_table,
    build_facts,
    chosen_units_words,
    doubts_words,
    finding_texts,
    inputs_table,
    parts_table,
    setups_of,
    setups_table,
)
from reportgen.pages.pdf import write_pdf
from reportgen.pages.plain_text import text_lines
from reportgen.pages.power import PowerPage, power_of
from reportgen.pages.predictions import Predictions, predictions_of
from reportgen.pages.setup_diagram import draw_setup, setup_picture
from reportgen.pages.summary import is_simulated, limits_by_quantity
from reportgen.pages.tables import Table
from reportgen.pages.templates import render
from reportgen.pages.uncertainty import (
    advice_sentences,
    assumption_sentences,
    budget_sentence,
    budget_table,
)
from reportgen.pages.wording import METHOD_NAMES, METHOD_WORDS, fitted_sentence, ohms
from reportgen.physics.forecast import CapacitorForecast, Forecast

_IS_BASELINE = "This build is the baseline that the others are compared with."


@dataclass(frozen=True, kw_only=True, slots=True)
class Picture:
    """A chart as the template places it; on paper it is fetched by its name."""

    name: str
    title: str
    alt: str
    wide: Markup
    narrow: Markup


@dataclass(frozen=True, kw_only=True, slots=True)
class ReportPage:
    """Everything the template of a report prints, as text."""

    name: str
    publisher: str
    bench_title: str
    summary: str
    simulated: bool
    verdict: str
    brief: tuple[tuple[str, str], ...]
    coverage: str
    key_figures: tuple[sentences.KeyFigure, ...]
    bands: Table | None
    missing: str
    pictures: dict[str, Picture]
    comparison: Table | None
    comparison_words: str
    limits: Table | None
    heat_parts: Table | None
    heat_parts_words: tuple[str, ...]
    power: PowerPage | None
    predictions: Predictions | None
    method_name: str
    method_words: str
    circuits: tuple[Picture, ...]
    setups: Table | None
    fitted: tuple[str, ...]
    methods: Table | None
    methods_words: str
    reasons: tuple[str, ...]
    budget_words: str
    budget: Table | None
    advice: tuple[str, ...]
    assumptions: tuple[str, ...]
    bandwidths: Table | None
    units: Table | None
    units_words: tuple[str, ...]
    findings: tuple[FindingText, ...]
    facts: tuple[tuple[str, str], ...]
    notes: tuple[str, ...]
    parts: Table | None
    inputs: Table | None
    program_version: str


def render_report_html(
    result: BuildResult,
    *,
    comparison: Comparison | None,
    baseline: BuildResult | None,
    bench: BenchSheet,
    program_version: str,
    forecast: Forecast | None = None,
) -> str:
    """The report as one page that needs neither a network nor a script."""
    charts = _charts(result, baseline, bench, forecast)
    pictures = {name: _inline(chart) for name, chart in charts.items()}
    page = _page(result, comparison, baseline, bench, pictures, program_version, forecast)
    return render("report.html", page=page, paper=False, style=page_style())


def _inline(chart: Chart) -> Picture:
    return Picture(
        name=chart.name,
        title=chart.title,
        alt=chart.alt,
        wide=inline_svg(chart.svg, f"{chart.name}-wide"),
        narrow=inline_svg(chart.narrow_svg, f"{chart.name}-narrow"),
    )


def _fetched(chart: Chart) -> Picture:
    """A chart that paper fetches by its name."""
    nothing = Markup()
    return Picture(name=chart.name, title=chart.title, alt=chart.alt, wide=nothing, narrow=nothing)


def render_report_pdf(
    result: BuildResult,
    *,
    comparison: Comparison | None,
    baseline: BuildResult | None,
    bench: BenchSheet,
    program_version: str,
    forecast: Forecast | None = None,
) -> bytes:
    """The report as a tagged PDF on the bench's paper.

    Raises
    ------
    OutputError
        The page could not be set without a complaint.
    """
    charts = _charts(result, baseline, bench, forecast)
    pictures = {name: _fetched(chart) for name, chart in charts.items()}
    page = _page(result, comparison, baseline, bench, pictures, program_version, forecast)
    text = render("report.html", page=page, paper=True, style=Markup())
    return write_pdf(text, {name: chart.svg for name, chart in charts.items()}, bench.paper)


def _page(
    result: BuildResult,
    comparison: Comparison | None,
    baseline: BuildResult | None,
    bench: BenchSheet,
    pictures: dict[str, Picture],
    program_version: str,
    forecast: Forecast | None,
) -> ReportPage:
    sheet, locale = result.build.sheet, bench.locale
    power = power_of(result, locale)
    against = (
        f"{comparison_sentence(comparison)} {loads_sentence(result, baseline, locale)}".strip()
    )
    return ReportPage(
        name=sheet.name,
        publisher=bench.publisher,
        bench_title=bench.title,
        summary=sheet.summary,
        simulated=is_simulated(result),
        verdict=sentences.verdict(result, locale),
        brief=_brief(result, against, power, bench),
        coverage=sentences.coverage_sentence(result),
        key_figures=sentences.key_figures(result, locale),
        bands=band_table(result, bench),
        missing=missing_quantities(result),
        pictures=pictures,
        comparison=comparison_table(result, comparison, baseline, locale),
        comparison_words=against,
        limits=limits_table(result.limits, locale),
        heat_parts=heat_parts_table(result, locale),
        heat_parts_words=heat_parts_sentences(result, locale),
        power=power,
        predictions=predictions_of(
            forecast, (sheet.winding.low_turns, sheet.winding.high_turns), bench
        ),
        method_name=METHOD_NAMES[result.chosen.method],
        method_words=_method_words(result, locale),
        circuits=tuple(pictures[setup_picture(one)] for one in setups_of(result.build)),
        setups=setups_table(result.build, bench),
        fitted=tuple(fitted_sentence(one, locale) for one in result.fitted),
        methods=methods_table(result, locale),
        methods_words=agreement_sentence(result.agreements),
        reasons=_reasons(result),
        budget_words=budget_sentence(result.budget, locale),
        budget=budget_table(result, locale),
        advice=advice_sentences(result.advice, locale),
        assumptions=assumption_sentences(result, bench),
        bandwidths=bandwidth_table(result.bandwidths, locale),
        units=units_table(result, locale),
        units_words=units_sentences(result, locale),
        findings=finding_texts(result.findings),
        facts=build_facts(result, locale),
        notes=text_lines(sheet.notes),
        parts=parts_table(sheet, locale),
        inputs=inputs_table(result.build),
        program_version=program_version,
    )


def _brief(
    result: BuildResult, against: str, power: PowerPage | None, bench: BenchSheet
) -> tuple[tuple[str, str], ...]:
    """What the rest of the page says at length, in a line each."""
    lines = {
        "Limits": " ".join(limits_words(result.limits)).strip(),
        "Baseline": _IS_BASELINE if bench.baseline == result.build.key else against,
        "Power": "" if power is None else power.verdict,
        "Doubts": doubts_words(result.findings),
    }
    return tuple((label, words) for label, words in lines.items() if words)


def _method_words(result: BuildResult, locale: str) -> str:
    words = METHOD_WORDS[result.chosen.method]
    load = ohms(result.chosen.load_ohm, locale)
    return f"{words} {chosen_units_words(result)}, for a load of {load}."


def _reasons(result: BuildResult) -> tuple[str, ...]:
    """Why a method that was tried gives no loss; what holds for several units stands once."""
    found = (
        f"{METHOD_NAMES[method.method]}: {method.reason}."
        for method in result.methods
        if method.reason is not None and method.method is not Method.HALVING
    )
    return tuple(dict.fromkeys(found))


# --- charts, drawn once for both pages -----------------------------------------------------------

_Limits = tuple[tuple[str, float], ...]


def _charts(
    result: BuildResult,
    baseline: BuildResult | None,
    bench: BenchSheet,
    forecast: Forecast | None,
) -> dict[str, Chart]:
    swr, efficiency = (_limits(result, bench, key) for key in ("swr", "efficiency_ratio"))
    capacitor = None if forecast is None else forecast.capacitor
    charts = _drawn(result, baseline, swr, efficiency, capacitor, bench.locale)
    return charts | {setup_picture(one): draw_setup(one) for one in setups_of(result.build)}


def _limits(result: BuildResult, bench: BenchSheet, key: str) -> _Limits:
    found = {
        band.band.name: limits_by_quantity(bench, band.band.name, result.power_w)
        for band in result.chosen.bands
    }
    return tuple((name, limits[key]) for name, limits in found.items() if key in limits)


@lru_cache(maxsize=1)
def _drawn(
    result: BuildResult,
    baseline: BuildResult | None,
    swr_limits: _Limits,
    efficiency_limits: _Limits,
    capacitor: CapacitorForecast | None,
    locale: str,
) -> dict[str, Chart]:
    return draw_charts(
        result,
        baseline,
        [band.band for band in result.chosen.bands],
        swr_limits=dict(swr_limits),
        efficiency_limits=dict(efficiency_limits),
        capacitor=capacitor,
        locale=locale,
    )
