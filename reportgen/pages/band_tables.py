"""Tables with a line for each band: the figures of a result, and its baseline beside it."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from math import isnan

from reportgen.model import (
    BandComparison,
    BandResult,
    BenchSheet,
    BuildResult,
    Comparison,
    Figure,
    MeasuredBand,
    MethodResult,
    NotMeasured,
)
from reportgen.pages.display import (
    NOT_MEASURED,
    interval,
    megahertz_range,
    number,
    percent_of,
    plus_minus,
    quantity_number,
)
from reportgen.pages.sentences import counted, listed
from reportgen.pages.summary import figure_of, limits_by_quantity, means, measured_bands
from reportgen.pages.tables import Cell, Column, Row, Table, figures, with_points_aligned
from reportgen.physics.quantities import BY_KEY, QUANTITIES, Quantity

_CAPTION = "Mean and worst over each band."
_EFFICIENCY = (
    " Efficiency is power into the load over power entering the low side; heat loss is the same "
    "in decibels."
)
_LOOKS = {"mean": "", "worst": "soft", "95 %": "soft range"}
_INTERVALS = " 95 % is the interval that holds the mean with that confidence."


def figure_text(
    quantity: Quantity, figure: Figure | None, *, limits: Sequence[float] = (), locale: str = "en"
) -> str:
    """A band's mean, to the place that its interval allows."""
    value = None if figure is None else figure.mean
    return _value_text(quantity, figure, value, limits, locale)


def _value_text(
    quantity: Quantity,
    figure: Figure | None,
    value: float | None,
    limits: Sequence[float],
    locale: str,
) -> str:
    if figure is None or value is None or isnan(value):
        return NOT_MEASURED
    return quantity_number(quantity, value, u95=half_width(figure), limits=limits, locale=locale)


def half_width(figure: Figure) -> float | None:
    """Half of the 95 % interval; None where it is not known."""
    if figure.low95 is None or figure.high95 is None:
        return None
    return (figure.high95 - figure.low95) / 2


# --- the figures of a result ---------------------------------------------------------------------


def band_table(result: BuildResult, bench: BenchSheet) -> Table | None:
    """Every reported quantity in every band: mean, worst and, where it is known, the interval."""
    shown = measured_quantities(result.chosen)
    if not shown:
        return None
    table = Table(
        caption=_caption(result.chosen),
        corner="Band",
        sub="Value",
        columns=tuple(Column(label=one.label, unit=one.unit) for one in shown),
        groups=tuple(
            _band_rows(band, shown, result.power_w, bench) for band in result.chosen.bands
        ),
    )
    return with_points_aligned(table, bench.locale)


def _caption(method: MethodResult) -> str:
    found = [figure for band in measured_bands(method) for figure in band.figures.values()]
    known = any(half_width(figure) is not None for figure in found)
    lossy = bool(means(method, "efficiency_ratio"))
    return _CAPTION + (_EFFICIENCY if lossy else "") + (_INTERVALS if known else "")


def measured_quantities(method: MethodResult) -> tuple[Quantity, ...]:
    """The quantities that at least one band has a figure for."""
    bands = measured_bands(method)
    return tuple(
        quantity
        for quantity in QUANTITIES
        if any(_present(band.figures.get(quantity.key)) for band in bands)
    )


def _present(figure: Figure | None) -> bool:
    return figure is not None and (figure.mean is not None or figure.worst is not None)


def _band_rows(
    band: BandResult, shown: Sequence[Quantity], power_w: float, bench: BenchSheet
) -> tuple[Row, ...]:
    if isinstance(band, NotMeasured):
        words = f"{NOT_MEASURED}: {band.reason}"
        return (Row(head=band.band.name, words=words, words_columns=len(shown) + 1),)
    limits = limits_by_quantity(bench, band.band.name, power_w)
    lines = _lines(band, shown, limits, bench.locale)
    note = band_note(band, bench.locale)
    rows = len(lines) + bool(note)
    found = [
        Row(head=None if index else band.band.name, head_rows=rows, sub=sub, cells=cells)
        for index, (sub, cells) in enumerate(lines)
    ]
    if note:
        found.append(Row(head=None, words=note, words_columns=len(shown) + 1))
    return tuple(found)


def _lines(
    band: MeasuredBand, shown: Sequence[Quantity], limits: Mapping[str, float], locale: str
) -> list[tuple[str, tuple[Cell, ...]]]:
    writers: dict[str, Callable[..., str]] = {"mean": figure_text, "worst": _worst_text}
    if any(half_width(figure) is not None for figure in band.figures.values()):
        writers["95 %"] = _interval_text
    return [
        (
            sub,
            figures(
                [
                    write(
                        quantity,
                        band.figures.get(quantity.key),
                        limits=[limits[quantity.key]] if quantity.key in limits else [],
                        locale=locale,
                    )
                    for quantity in shown
                ],
                _LOOKS[sub],
            ),
        )
        for sub, write in writers.items()
    ]


def _worst_text(
    quantity: Quantity, figure: Figure | None, *, limits: Sequence[float], locale: str
) -> str:
    value = None if figure is None else figure.worst
    return _value_text(quantity, figure, value, limits, locale)


def _interval_text(quantity: Quantity, figure: Figure | None, *, locale: str, **_: object) -> str:
    if figure is None or figure.low95 is None or figure.high95 is None:
        return "not known"
    low, high = figure.low95, figure.high95
    if quantity.percent:
        low, high = percent_of(low), percent_of(high)
    return interval(low, high, quantity.decimals, locale=locale)


def band_note(band: MeasuredBand, locale: str) -> str:
    """What must be known of a band's figures: part of the band only, few points."""
    notes = []
    if band.partial:
        covered = megahertz_range(*band.covered_hz, locale=locale)
        reason = band.reason or "the sweeps end there"
        notes.append(f"only {covered}\u00a0MHz of the band: {reason}")
    elif band.reason:
        notes.append(band.reason)
    if band.interpolated:
        notes.append(f"{counted(band.points, 'point')} in the band, figures interpolated")
    return "; ".join(notes)


def missing_quantities(result: BuildResult) -> str:
    """Which quantities no band has, and why; empty where there are none."""
    shown = measured_quantities(result.chosen)
    missing = [one.label.lower() for one in QUANTITIES if one not in shown]
    missing = [name.replace("swr", "SWR") for name in missing]
    if not missing:
        return ""
    reason = f": {result.chosen.reason}" if result.chosen.reason else ""
    return f"Not measured: {listed(missing)}{reason}."


# --- against the baseline ------------------------------------------------------------------------


def comparison_table(
    result: BuildResult, comparison: Comparison | None, baseline: BuildResult | None, locale: str
) -> Table | None:
    """Heat loss of both builds by band, the difference and its verdict; None: no band compares."""
    if comparison is None or all(band.heat_loss_db is None for band in comparison.bands):
        return None
    judged = any(band.verdict and band.heat_loss_db is not None for band in comparison.bands)
    sides = {"This build": result.chosen} | (
        {} if baseline is None else {comparison.name: baseline.chosen}
    )
    columns = [Column(label=name, unit="dB") for name in sides]
    columns += [Column(label="Difference", unit="dB"), Column(label="Difference", unit="W")]
    columns += [Column(label="Verdict", words=True)] if judged else []
    table = Table(
        caption="Mean heat loss in each band; a negative difference is less.",
        corner="Band",
        columns=tuple(columns),
        groups=tuple(
            (_comparison_row(band, list(sides.values()), len(columns), judged, locale),)
            for band in comparison.bands
        ),
    )
    return with_points_aligned(table, locale)


def _comparison_row(
    band: BandComparison, sides: Sequence[MethodResult], columns: int, judged: bool, locale: str
) -> Row:
    if band.heat_loss_db is None:
        words = ": ".join(
            part for part in (band.verdict.value if band.verdict else "", band.reason or "") if part
        )
        return Row(head=band.band, words=words or "not comparable", words_columns=columns)
    cells = [Cell(text=heat_loss_text(side, band.band, locale)) for side in sides]
    cells += [Cell(text=_difference_db(band.heat_loss_db, band.heat_loss_u95_db, locale))]
    cells += [Cell(text=number(band.heat_w, 1, locale=locale, signed=True))]
    if judged:
        cells.append(Cell(text=band.verdict.value if band.verdict else "not judged", look="words"))
    return Row(head=band.band, cells=tuple(cells))


def _difference_db(difference: float, u95: float | None, locale: str) -> str:
    if u95 is None:
        return number(difference, 2, locale=locale, signed=True)
    return plus_minus(difference, u95, 2, locale=locale)


def heat_loss_text(method: MethodResult, band: str, locale: str, key: str = "heat_loss_db") -> str:
    """A quantity's mean in one band of a method's result, or that it was not measured."""
    found = next((one for one in measured_bands(method) if one.band.name == band), None)
    figure = None if found is None else figure_of(found, key)
    return figure_text(BY_KEY[key], figure, locale=locale)
