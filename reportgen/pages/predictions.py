"""What to wind next: the predictions in short, marked as such, and what they assume."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from reportgen.model import BenchSheet, Interval
from reportgen.pages.display import entered, number, quantity_number, with_unit
from reportgen.pages.intervals import half_width, predicted_text
from reportgen.pages.tables import (
    Column,
    Row,
    Table,
    band_column,
    figures,
    with_points_aligned,
)
from reportgen.pages.winding_predictions import promising_sentence, windings_table
from reportgen.pages.wording import ohms
from reportgen.physics.antennas import AntennaBand, AntennaForecast
from reportgen.physics.forecast import CapacitorForecast, Forecast
from reportgen.physics.outcomes import Outcome
from reportgen.physics.quantities import BY_KEY


@dataclass(frozen=True, kw_only=True, slots=True)
class Antenna:
    """The build into one antenna: the file that was swept, and a table."""

    file: str
    table: Table


@dataclass(frozen=True, kw_only=True, slots=True)
class Predictions:
    """Everything that a page says of a forecast."""

    capacitor: str
    promising: str
    bands: Table | None
    windings: Table
    loads: Table
    antennas: tuple[Antenna, ...]
    assumes: tuple[str, ...]


def predictions_of(
    forecast: Forecast | None, winding: tuple[float, float], bench: BenchSheet
) -> Predictions | None:
    """A forecast in words; `winding` is the turns of both sides as they are."""
    if forecast is None:
        return None
    locale = bench.locale
    return Predictions(
        capacitor=_capacitor_sentences(forecast.capacitor, locale),
        bands=_bands_table(forecast.capacitor, locale) if forecast.capacitor.better else None,
        windings=windings_table(forecast, winding, bench),
        promising=promising_sentence(forecast, winding, bench),
        loads=_loads_table(forecast.loads, locale),
        antennas=tuple(
            Antenna(file=one.file, table=_antenna_table(one, locale)) for one in forecast.antennas
        ),
        assumes=tuple(f"{words[:1].upper()}{words[1:]}." for words in forecast.assumes),
    )


# --- the capacitor -------------------------------------------------------------------------------


def _capacitor_sentences(found: CapacitorForecast, locale: str) -> str:
    least = found.least_reflected_pf
    reflected = f"with {_farads(least, locale)}" if least else "without a capacitor"
    return (
        f"{_worst_swr_sentence(found, locale)} Least power over the bands would be reflected "
        f"{reflected}."
    )


def _worst_swr_sentence(found: CapacitorForecast, locale: str) -> str:
    now, then = (predicted_text("swr", one.swr, locale) for one in (found.now, found.then))
    if not found.better or now == then:
        kept = f"the {_farads(found.present_pf, locale)} that is there"
        lower = f"lower worst SWR than {kept if found.present_pf else 'none'}"
        return f"No other value is sure to give a {lower}."
    change = f"With {_farads(found.best_pf, locale)} instead of {_farads(found.present_pf, locale)}"
    if not found.best_pf:
        change = f"Without the {_farads(found.present_pf, locale)}"
    swr = found.now.swr
    before = number(swr.value, 2, u95=half_width(swr.low95, swr.high95), locale=locale)
    where = f"across the {found.side} side"
    return f"{change} {where} the worst SWR would be {then} instead of {before}."


def _bands_table(found: CapacitorForecast, locale: str) -> Table:
    """Worst SWR in each band now and with the best capacitor."""
    rows = [
        Row(
            head=_farads(value_pf, locale) + words,
            cells=figures([_value("swr", band.swr, locale) for band in outcome.bands]),
        )
        for value_pf, words, outcome in (
            (found.present_pf, ", as it is", found.now),
            (found.best_pf, "", found.then),
        )
    ]
    table = Table(
        caption="Worst SWR in each band with the capacitor that is there, and predicted.",
        corner="Capacitor",
        columns=tuple(band_column(band.band) for band in found.now.bands),
        groups=(tuple(rows),),
        long_heads=True,
    )
    return with_points_aligned(table, locale)


def _loads_table(loads: Sequence[Outcome], locale: str) -> Table:
    """Worst SWR and mean heat loss into loads about the nominal one."""
    quantities = {"Worst SWR": "swr", "Mean heat loss, dB": "heat_loss_db"}
    return Table(
        caption=(
            "The build as it is into other loads, predicted: worst SWR in any band and mean heat "
            "loss over all."
        ),
        corner="Load",
        columns=tuple(Column(label=ohms(round(one.load_ohm), locale)) for one in loads),
        groups=(
            tuple(
                Row(
                    head=head,
                    cells=figures(
                        [predicted_text(key, getattr(one, key), locale) for one in loads]
                    ),
                )
                for head, key in quantities.items()
            ),
        ),
        long_heads=True,
    )


def _value(key: str, found: Interval, locale: str) -> str:
    u95 = half_width(found.low95, found.high95)
    return quantity_number(BY_KEY[key], found.value, u95=u95, locale=locale)


def _farads(value_pf: float, locale: str) -> str:
    return with_unit(entered(value_pf, locale=locale), "pF") if value_pf else "none"


# --- antennas ------------------------------------------------------------------------------------

_ANTENNA_FIGURES = ("efficiency_ratio", "swr", "delivered_ratio")


def _antenna_table(antenna: AntennaForecast, locale: str) -> Table:
    table = Table(
        caption=(
            "Predicted, not measured, for this one antenna: mean efficiency, worst SWR that the "
            "source sees, and mean of what is delivered."
        ),
        corner="Band",
        columns=(
            Column(label="Efficiency", unit="%"),
            Column(label="Worst SWR"),
            Column(label="Delivered", unit="%"),
        ),
        groups=tuple(_antenna_rows(band, locale) for band in antenna.bands),
    )
    return with_points_aligned(table, locale)


def _antenna_rows(band: AntennaBand, locale: str) -> tuple[Row, ...]:
    if band.swr is None:
        reason = band.reason or "not swept"
        return (Row(head=band.band, words=reason, words_columns=len(_ANTENNA_FIGURES)),)
    texts = [predicted_text(key, getattr(band, key), locale) for key in _ANTENNA_FIGURES]
    row = Row(head=band.band, head_rows=2 if band.reason else 1, cells=figures(texts))
    if not band.reason:
        return (row,)
    return (row, Row(head=None, words=band.reason, words_columns=len(_ANTENNA_FIGURES)))
