"""How sure the figures are: what makes them uncertain, what would help, what was assumed."""

from __future__ import annotations

from collections.abc import Sequence

from reportgen.model import Advice, BenchSheet, BudgetLine, BuildResult, Calibration, Repeatability
from reportgen.pages.band_tables import intervals_known
from reportgen.pages.display import DASH, number
from reportgen.pages.intervals import half_width
from reportgen.pages.sentences import listed
from reportgen.pages.summary import figure_of, measured_bands
from reportgen.pages.tables import (
    Cell,
    Row,
    Table,
    band_column,
    figures,
    with_points_aligned,
)
from reportgen.physics.checks import find_checks
from reportgen.physics.residuals import Limits
from reportgen.physics.uncertainty import DRAWS

_CAPTION = (
    "Half of the 95\u00a0% interval of mean heat loss, dB: what each contribution alone makes of "
    "it, the largest in each band in bold, and all together."
)
_SQUARES = " They add by their squares."
_CHECKED = " The last row is smaller than its parts where check sweeps rule out some of the draws."
_PLACES = 3


def budget_sentence(budget: Sequence[BudgetLine], locale: str) -> str:
    """Which contribution is the largest over all bands, and which in any one of them."""
    if not budget:
        return ""
    first = budget[0]
    line, band = max(
        ((line, band) for line in budget for band in line.u95_db),
        key=lambda pair: pair[0].u95_db[pair[1]],
    )
    opening = f"{first.contribution.capitalize()} makes the figures most uncertain over all bands"
    most = f"\u00b1\u00a0{number(line.u95_db[band], _PLACES, locale=locale)}\u00a0dB"
    if line is first:
        return f"{opening}, at most {most} on {band}."
    return f"{opening}; the largest single part is {line.contribution} on {band}, {most}."


def advice_sentences(advice: Sequence[Advice], locale: str) -> tuple[str, ...]:
    """What a further sweep would do to the interval of the band that it helps most."""
    return tuple(_advice_sentence(one, locale) for one in advice)


def _advice_sentence(one: Advice, locale: str) -> str:
    now, then = (number(width, _PLACES, locale=locale) for width in (one.u95_db, one.u95_then_db))
    return (
        f"{one.sweep[:1].upper()}{one.sweep[1:]} would take {one.band} from "
        f"\u00b1\u00a0{now} to \u00b1\u00a0{then}\u00a0dB."
    )


def budget_table(result: BuildResult, locale: str) -> Table | None:
    """Contributions by band, the largest first; None where there is none."""
    if not result.budget:
        return None
    names = [
        band.band.name
        for band in measured_bands(result.chosen)
        if any(band.band.name in line.u95_db for line in result.budget)
    ]
    checked = bool(find_checks(result.build.measurements))
    largest = {name: max(line.u95_db.get(name, 0.0) for line in result.budget) for name in names}
    rows = [_budget_row(line, largest, locale) for line in result.budget]
    table = Table(
        caption=_CAPTION + (_CHECKED if checked else _SQUARES),
        corner="Contribution",
        columns=tuple(band_column(name) for name in names),
        groups=(tuple(rows), (Row(head="all together", cells=_together(result, names, locale)),)),
        long_heads=True,
    )
    return with_points_aligned(table, locale)


def _budget_row(line: BudgetLine, largest: dict[str, float], locale: str) -> Row:
    widths = [(line.u95_db.get(name), most) for name, most in largest.items()]
    cells = tuple(
        Cell(text=number(width, _PLACES, locale=locale), look="most" if width == most else "")
        for width, most in widths
    )
    return Row(head=line.contribution, cells=cells)


def _together(result: BuildResult, names: Sequence[str], locale: str) -> tuple[Cell, ...]:
    found = {
        band.band.name: figure_of(band, "heat_loss_db") for band in measured_bands(result.chosen)
    }
    texts = []
    for name in names:
        figure = found.get(name)
        width = None if figure is None else half_width(figure.low95, figure.high95)
        texts.append(DASH if width is None else number(width, _PLACES, locale=locale))
    return figures(texts)


# --- what was assumed ----------------------------------------------------------------------------

_STATED = tuple(name for name in Limits.__dataclass_fields__ if hasattr(Calibration, name))


def assumption_sentences(result: BuildResult, bench: BenchSheet) -> tuple[str, ...]:
    """How the intervals came about, and what is not in them; empty where there are none."""
    if not intervals_known(result.chosen):
        return ()
    sentences = [
        f"The 95\u00a0% intervals come from {DRAWS} draws of all that is not known exactly (JCGM "
        "101): what the calibration left uncorrected, noise and drift, the load resistor, and "
        "what the method itself takes for granted.",
        _residuals_sentence(result, bench),
    ]
    if find_checks(result.build.measurements):
        sentences.append(
            "Check sweeps of known parts condition the draws: those that agree with what was swept "
            "count more."
        )
    sentences += [_repeat_sentence(one, bench.locale) for one in result.repeatability]
    sentences.append(
        "No allowance is made for one unit standing for others of its kind, nor for what changes "
        "with power and heat."
    )
    return tuple(sentences)


def _repeat_sentence(one: Repeatability, locale: str) -> str:
    rms = number(one.rms_ratio, 4, locale=locale)
    return f"{one.file} was taken as {one.of} was: their S-parameters differ by {rms} (rms)."


def _residuals_sentence(result: BuildResult, bench: BenchSheet) -> str:
    used = {one.entry.calibration for one in result.build.measurements}
    if len(bench.calibrations) == 1:
        used = set(bench.calibrations)
    known = [
        (name, bench.calibrations[name])
        for name in sorted(filter(None, used))
        if name in bench.calibrations
    ]
    grades = [f"{one.grade} grade for {name}" for name, one in known] or ["handheld grade"]
    stated = [
        f"{name} ({listed([key.removesuffix('_db').replace('_', ' ') for key in keys])})"
        for name, one in known
        if (keys := [key for key in _STATED if getattr(one, key) is not None])
    ]
    text = f"What the calibration left is assumed by its grade, and not measured: {listed(grades)}"
    return f"{text}; stated by the workshop: {listed(stated)}." if stated else f"{text}."
