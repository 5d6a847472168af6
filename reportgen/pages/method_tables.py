"""Tables with a line for each band, side by side: all methods of a build, all of its units."""

from __future__ import annotations

from collections.abc import Sequence

from reportgen.model import BandResult, BuildResult, Method, MethodResult
from reportgen.pages.band_tables import heat_loss_text
from reportgen.pages.display import NOT_MEASURED, quantity_number
from reportgen.pages.summary import figure_of, measured_bands
from reportgen.pages.tables import Column, Row, Table, figures, with_points_aligned
from reportgen.pages.wording import METHOD_NAMES, ohms
from reportgen.physics.quantities import BY_KEY


def methods_table(result: BuildResult, locale: str) -> Table | None:
    """Heat loss by every method that the sweeps allow; None where none gives any."""
    shown = [
        method
        for method in result.methods
        if any(figure_of(band, method_key(method)) for band in measured_bands(method))
    ]
    if not shown:
        return None
    table = Table(
        caption="Mean heat loss in each band. Half the through loss of a pair is the figure "
        "commonly published; the mismatch between the two units is in it.",
        corner="Band",
        columns=tuple(_method_column(method, result, locale) for method in shown),
        groups=tuple(
            (_methods_row(band.band.name, shown, locale),) for band in result.chosen.bands
        ),
    )
    return with_points_aligned(table, locale)


def method_key(method: MethodResult) -> str:
    """The quantity by which a method's loss is shown."""
    return "halved_pair_db" if method.method is Method.HALVING else "heat_loss_db"


def _method_column(method: MethodResult, result: BuildResult, locale: str) -> Column:
    label = METHOD_NAMES[method.method]
    label += f", unit {method.unit}" if method.unit is not None else ""
    if method.method is Method.HALVING:
        return Column(label=f"{label}, common practice", unit="dB")
    chosen = (result.chosen.method, result.chosen.unit) == (method.method, method.unit)
    label += " (published)" if chosen else ""
    return Column(label=label, unit=f"dB into {ohms(method.load_ohm, locale)}")


def _methods_row(band: str, shown: Sequence[MethodResult], locale: str) -> Row:
    texts = [heat_loss_text(method, band, locale, method_key(method)) for method in shown]
    return Row(head=band, cells=figures(texts))


_UNIT_QUANTITIES = ("heat_loss_db", "swr")


def units_table(result: BuildResult, locale: str) -> Table | None:
    """Mean heat loss and worst SWR of each unit; None where fewer than two were told apart."""
    if len(result.units) < 2:
        return None
    columns = [
        Column(label=f"{unit.unit}: {BY_KEY[key].label}", unit=BY_KEY[key].unit or "worst")
        for unit in result.units
        for key in _UNIT_QUANTITIES
    ]
    table = Table(
        caption="Mean heat loss and worst SWR in each band.",
        corner="Band",
        columns=tuple(columns),
        groups=tuple((_units_row(band, result, locale),) for band in result.chosen.bands),
    )
    return with_points_aligned(table, locale)


def _units_row(band: BandResult, result: BuildResult, locale: str) -> Row:
    texts = []
    for unit in result.units:
        found = next((one for one in measured_bands(unit) if one.band == band.band), None)
        swr = None if found is None else found.figures.get("swr")
        worst = None if swr is None else swr.worst
        texts.append(heat_loss_text(unit, band.band.name, locale))
        text = quantity_number(BY_KEY["swr"], worst, locale=locale)
        texts.append(NOT_MEASURED if worst is None else text)
    return Row(head=band.band.name, cells=figures(texts))
