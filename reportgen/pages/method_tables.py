"""What all methods of a build say side by side, and all of its units."""

from __future__ import annotations

from collections.abc import Iterator, Sequence

from reportgen.model import Agreement, BuildResult, Figure, Lot, Method, MethodResult
from reportgen.pages.display import DASH, number, plus_minus
from reportgen.pages.intervals import (
    half_width,
    mean_text,
    width_text,
    worst_text,
)
from reportgen.pages.sentences import listed
from reportgen.pages.summary import figure_of, measured_bands
from reportgen.pages.tables import Row, Table, band_column, figures, with_points_aligned
from reportgen.pages.wording import METHOD_NAMES, ohms
from reportgen.physics.quantities import BY_KEY

_CAPTION = (
    "Mean heat loss in each band, dB, and half of its 95\u00a0% interval. A method is held against "
    "the best one for the same units, from the same draws."
)
_HALVING = (
    "common practice, and not the loss of a unit: the mismatch between the two units is in it"
)


def methods_table(result: BuildResult, locale: str) -> Table | None:
    """Heat loss by every method that the sweeps allow; None where none gives any."""
    shown = [method for method in result.methods if _figures_by_band(method)]
    found = {name for method in shown for name in _figures_by_band(method)}
    names = [band.band.name for band in result.chosen.bands if band.band.name in found]
    if not shown or not names:
        return None
    table = Table(
        caption=_CAPTION,
        corner="Method",
        sub="Value",
        columns=tuple(band_column(name) for name in names),
        groups=tuple(_method_rows(method, names, result, locale) for method in shown),
        long_heads=True,
    )
    return with_points_aligned(table, locale)


def _figures_by_band(method: MethodResult) -> dict[str, Figure]:
    key = method_key(method)
    pairs = ((band.band.name, figure_of(band, key)) for band in measured_bands(method))
    return {name: figure for name, figure in pairs if figure is not None}


def method_key(method: MethodResult) -> str:
    """The quantity by which a method's loss is shown."""
    return "halved_pair_db" if method.method is Method.HALVING else "heat_loss_db"


def _method_rows(
    method: MethodResult, names: Sequence[str], result: BuildResult, locale: str
) -> tuple[Row, ...]:
    found = _figures_by_band(method)
    lines = [("mean", [_mean(method, found.get(name), locale) for name in names])]
    widths = [_width(method, found.get(name), locale) for name in names]
    if any(width != DASH for width in widths):
        lines.append(("\u00b1", widths))
    head = f"{METHOD_NAMES[method.method]}, {units_of(method)}"
    rows = [
        Row(
            head=None if index else head,
            head_rows=len(lines) + 1,
            sub=sub,
            cells=figures(texts, "soft" if index else ""),
        )
        for index, (sub, texts) in enumerate(lines)
    ]
    words = "; ".join(_remarks(method, result, locale))
    rows.append(Row(head=None, words=words, words_columns=len(names) + 1))
    return tuple(rows)


def units_of(method: MethodResult) -> str:
    """Whose figures they are: one unit's, or a mean."""
    if method.unit is not None:
        return f"unit {method.unit}"
    return f"mean of {listed(method.units)}" if len(method.units) > 1 else f"unit {method.units[0]}"


def _mean(method: MethodResult, figure: Figure | None, locale: str) -> str:
    return DASH if figure is None else mean_text(BY_KEY[method_key(method)], figure, locale=locale)


def _width(method: MethodResult, figure: Figure | None, locale: str) -> str:
    u95 = None if figure is None else half_width(figure.low95, figure.high95)
    return DASH if u95 is None else width_text(BY_KEY[method_key(method)], u95, locale)


def _remarks(method: MethodResult, result: BuildResult, locale: str) -> Iterator[str]:
    if method.method is Method.HALVING:
        yield _HALVING
        return
    if method.method is result.chosen.method:
        yield _choice(result)
    yield f"into {ohms(round(method.load_ohm), locale)}"
    for one in result.agreements:
        if (one.method, one.unit) == (method.method, method.unit):
            yield agreement_words(one, locale)


def _choice(result: BuildResult) -> str:
    """Why the published method is that."""
    same = [method for method in result.methods if method.method is result.chosen.method]
    published = "published" if len(same) == 1 else "published, as a mean"
    rivals = [
        method
        for method in result.methods
        if method.method not in (Method.HALVING, result.chosen.method)
    ]
    bands = [len(_figures_by_band(method)) for method in rivals if _figures_by_band(method)]
    if not bands:
        return published
    if min(bands) < len(_figures_by_band(result.chosen)):
        return f"{published}: loss in most bands, then the surest of those that speak of most units"
    return f"{published}: the surest of those that speak of most units"


def agreement_sentence(agreements: Sequence[Agreement]) -> str:
    """Whether the methods that can be compared say the same; empty where none can."""
    judged = [one for one in agreements if one.agrees is not None]
    differing = [one for one in judged if not one.agrees]
    if not judged:
        return ""
    if not differing:
        return "The methods that can be compared agree within their uncertainty."
    names = [
        METHOD_NAMES[one.method] + (f" of unit {one.unit}" if one.unit else "") for one in differing
    ]
    verb = "does" if len(names) == 1 else "do"
    return f"{listed(names)} {verb} not agree with the best method for the same units."


def agreement_words(one: Agreement, locale: str) -> str:
    """Whether a method says the same as the best one, and where it differs most."""
    other = METHOD_NAMES[one.against].lower()
    if one.agrees is None:
        return f"not comparable with {other}: {one.reason}" if one.reason else "not comparable"
    text = f"{'agrees' if one.agrees else 'disagrees'} with {other}"
    if one.difference_db is None or one.u95_db is None:
        return text
    difference = plus_minus(one.difference_db, one.u95_db, 2, locale=locale)
    return f"{text}, differing most on {one.band}: {difference}\u00a0dB"


# --- units ---------------------------------------------------------------------------------------


def units_table(result: BuildResult, locale: str) -> Table | None:
    """Mean heat loss and worst SWR of each unit; None where fewer than two were told apart."""
    names = [band.band.name for band in measured_bands(result.chosen)]
    if len(result.units) < 2 or not names:
        return None
    lossy = any(_figures_by_band(unit) for unit in result.units)
    loss = "Mean heat loss, dB, and half of its 95\u00a0% interval; worst SWR" if lossy else ""
    table = Table(
        caption=f"{loss or 'Worst SWR'} in each band.",
        corner="Unit",
        sub="Value",
        columns=tuple(band_column(name) for name in names),
        groups=tuple(_unit_rows(unit, names, locale) for unit in result.units),
        long_heads=True,
    )
    return with_points_aligned(table, locale)


def _unit_rows(unit: MethodResult, names: Sequence[str], locale: str) -> tuple[Row, ...]:
    found = _figures_by_band(unit)
    ratios = {band.band.name: band.figures.get("swr") for band in measured_bands(unit)}
    lines = (
        []
        if not found
        else [
            ("loss", [_mean(unit, found.get(name), locale) for name in names]),
            ("\u00b1", [_width(unit, found.get(name), locale) for name in names]),
        ]
    )
    lines.append(("SWR", [_worst_swr(ratios.get(name), locale) for name in names]))
    return tuple(
        Row(
            head=None if index else units_of(unit),
            head_rows=len(lines),
            sub=sub,
            cells=figures(texts, "soft" if sub == "\u00b1" else ""),
        )
        for index, (sub, texts) in enumerate(lines)
    )


def _worst_swr(figure: Figure | None, locale: str) -> str:
    return DASH if figure is None else worst_text(BY_KEY["swr"], figure, locale=locale)


def units_sentences(result: BuildResult, locale: str) -> tuple[str, ...]:
    """How far the units lie apart, and of which of them the match alone is known."""
    found = (lot_sentence(result.lot, locale), _lacking_sentence(result))
    return tuple(sentence for sentence in found if sentence)


def _lacking_sentence(result: BuildResult) -> str:
    names = [unit.unit for unit in result.units if unit.method is Method.LOAD_ONLY and unit.unit]
    if not names:
        return ""
    return (
        f"Of {listed(names)} alone only the match was measured, with the bench resistor as it is: "
        "its stray capacitance is in the SWR."
    )


def lot_sentence(lot: Lot | None, locale: str) -> str:
    """How far the units of a build lie apart, where they do most."""
    if lot is None or not lot.bands:
        return ""
    most = max(lot.bands, key=lambda band: band.greatest_db - band.least_db)
    ends = (number(loss, 2, locale=locale) for loss in (most.least_db, most.greatest_db))
    return (
        f"The {len(lot.units)} units lie most apart on {most.band}: {' to '.join(ends)}\u00a0dB "
        f"of heat loss, most in unit {most.worst_unit}."
    )
