"""The table of figures: every reported quantity in every band, mean and worst."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping, Sequence

from reportgen.model import (
    BandResult,
    BenchSheet,
    BuildResult,
    Figure,
    MeasuredBand,
    MethodResult,
    NotMeasured,
)
from reportgen.pages.display import NOT_MEASURED, megahertz_range
from reportgen.pages.intervals import (
    half_width,
    mean_text,
    mean_with_interval,
    worst_text,
    worst_with_interval,
)
from reportgen.pages.sentences import counted, listed
from reportgen.pages.summary import HasBands, figure_of, limits_by_quantity, means, measured_bands
from reportgen.pages.tables import Cell, Column, Row, Table, figures, with_points_aligned
from reportgen.physics.quantities import BY_KEY, QUANTITIES, Quantity

_CAPTION = "Mean and worst over each band."
_EFFICIENCY = (
    " Efficiency is power into the load over power entering the low side; heat loss is the same "
    "in decibels."
)
_INTERVALS = " After \u00b1 stands the half-width of the 95\u00a0% interval."
_HALVED = (
    " Halved pair is half of the through loss of two units back to back: common practice, and not "
    "the loss of a unit."
)
_WITH_INTERVAL = ("efficiency_ratio", "heat_loss_db", "return_loss_db")


def band_table(result: BuildResult, bench: BenchSheet) -> Table | None:
    """Every reported quantity in every band: mean and worst, with intervals where it is known."""
    shown = measured_quantities(result.chosen)
    if not shown:
        return None
    sure = intervals_known(result.chosen)
    table = Table(
        caption=_caption(result.chosen),
        corner="Band",
        sub="Value",
        columns=tuple(
            Column(label=one.label, unit=one.unit, wide=sure and one.key in _WITH_INTERVAL)
            for one in shown
        ),
        groups=tuple(
            _band_rows(band, shown, result.power_w, bench) for band in result.chosen.bands
        ),
    )
    return with_points_aligned(table, bench.locale)


def _caption(method: MethodResult) -> str:
    lossy = bool(means(method, "efficiency_ratio"))
    sure = intervals_known(method)
    halved = any(quantity.key == "halved_pair_db" for quantity in measured_quantities(method))
    words = (_EFFICIENCY, lossy), (_INTERVALS, sure), (_HALVED, halved)
    return _CAPTION + "".join(text for text, wanted in words if wanted)


def intervals_known(method: MethodResult) -> bool:
    """True where at least one figure has its interval."""
    found = [figure for band in measured_bands(method) for figure in band.figures.values()]
    return any(half_width(figure.low95, figure.high95) is not None for figure in found)


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
    lines = list(_cells(band, shown, limits, bench.locale))
    note = band_note(band, bench.locale)
    rows = len(lines) + bool(note)
    found = [
        Row(head=None if index else band.band.name, head_rows=rows, sub=sub, cells=cells)
        for index, (sub, cells) in enumerate(lines)
    ]
    if note:
        found.append(Row(head=None, words=note, words_columns=len(shown) + 1))
    return tuple(found)


def _cells(
    band: MeasuredBand, shown: Sequence[Quantity], limits: Mapping[str, float], locale: str
) -> Iterator[tuple[str, tuple[Cell, ...]]]:
    for sub, look in (("mean", ""), ("worst", "soft")):
        texts = []
        for quantity in shown:
            write = _writer(sub, quantity)
            own = [limits[quantity.key]] if quantity.key in limits else []
            texts.append(write(quantity, band.figures.get(quantity.key), limits=own, locale=locale))
        yield sub, figures(texts, look)


def _writer(sub: str, quantity: Quantity) -> Callable[..., str]:
    if quantity.key in _WITH_INTERVAL:
        return mean_with_interval if sub == "mean" else worst_with_interval
    return mean_text if sub == "mean" else worst_text


def band_note(band: MeasuredBand, locale: str) -> str:
    """What must be known of a band's figures: part of the band only, few points."""
    notes = []
    if band.partial:
        covered = megahertz_range(*band.covered_hz, locale=locale)
        reason = band.reason or "the sweeps end there"
        notes.append(f"only {covered}\u00a0MHz of the band: {reason}")
    elif band.reason:
        notes.append(band.reason)
    if band.interpolated and "interpolated" not in (band.reason or ""):
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


def heat_loss_text(method: HasBands, band: str, locale: str) -> str:
    """Mean heat loss in one band of a method's result, or that it was not measured."""
    found = next((one for one in measured_bands(method) if one.band.name == band), None)
    figure = None if found is None else figure_of(found, "heat_loss_db")
    return mean_text(BY_KEY["heat_loss_db"], figure, locale=locale)
