"""What to wind next, as a terminal prints it."""

from __future__ import annotations

from collections.abc import Iterator, Sequence

from rich.console import Console
from rich.table import Table
from rich.text import Text

from reportgen.model import Interval
from reportgen.pages.display import DASH, entered, interval, quantity_number, with_unit
from reportgen.pages.plain_text import clean_text
from reportgen.pages.wording import ohms
from reportgen.physics.antennas import AntennaBand, AntennaForecast
from reportgen.physics.forecast import CapacitorForecast, Forecast, WindingForecast
from reportgen.physics.outcomes import Outcome
from reportgen.physics.quantities import BY_KEY

_NEIGHBOURS = 3


def print_forecast(console: Console, forecast: Forecast, locale: str) -> None:
    """Every prediction as a table, and under them what they assume."""
    _print_capacitor(console, forecast.capacitor, locale)
    for heading, windings in (
        ("Other turns, same ratio", forecast.turns),
        ("Other ratio, same turns of the low side", forecast.ratios),
        ("Other stack", forecast.stacks),
    ):
        if windings:
            _print(console, heading, _WINDING, [_winding_row(one, locale) for one in windings])
    loads = [(ohms(one.load_ohm, locale), *_figures(one, locale)) for one in forecast.loads]
    _print(console, "Other loads", ("Load", *_FIGURES), loads)
    for antenna in forecast.antennas:
        _print_antenna(console, antenna, locale)
    console.print(Text("Predicted, not measured. Assumed:", style="bold"))
    for words in forecast.assumes:
        console.print(Text(f"  {clean_text(words)}", style="dim"), soft_wrap=True)


def _print(
    console: Console, heading: str, columns: Sequence[str], rows: Sequence[Sequence[str]]
) -> None:
    table = Table(box=None, pad_edge=False, padding=(0, 2, 0, 0))
    for place, column in enumerate(columns):
        table.add_column(column, justify="right" if place else "left")
    for row in rows:
        table.add_row(*(Text(clean_text(cell)) for cell in row))
    console.print(Text(clean_text(heading), style="bold"))
    console.print(table)


# --- tables --------------------------------------------------------------------------------------

_FIGURES = ("Worst SWR", "95 %", "Heat loss dB", "95 %")
_WINDING = (
    *("Turns", "Rings", "Load", "SWR", "Heat dB"),
    *("Best capacitor", "SWR with it", "Heat dB with it"),
)


def _print_capacitor(console: Console, found: CapacitorForecast, locale: str) -> None:
    rows = [
        (f"now, {_farads(found.present_pf, locale)}", *_figures(found.now, locale)),
        (_farads(found.best_pf, locale), *_figures(found.then, locale)),
    ]
    heading = f"Capacitor across the {found.side} side: least worst SWR"
    _print(console, heading, ("Capacitor", *_FIGURES), rows)
    said = f"least reflected power over the bands: {_farads(found.least_reflected_pf, locale)}"
    if not found.better:
        said = f"the one that is there is as good; {said}"
    console.print(Text(said, style="dim"), soft_wrap=True)
    _print(console, "Capacitors near it", ("Capacitor", "Worst SWR"), [*_near(found, locale)])
    columns = ("Band", "SWR now", "SWR then", "Heat dB now", "Heat dB then")
    bands = [
        (
            now.band,
            _number("swr", now.swr, locale),
            _number("swr", then.swr, locale),
            _number("heat_loss_db", now.heat_loss_db, locale),
            _number("heat_loss_db", then.heat_loss_db, locale),
        )
        for now, then in zip(found.now.bands, found.then.bands, strict=True)
    ]
    _print(console, f"Bands with {_farads(found.best_pf, locale)}", columns, bands)


def _near(found: CapacitorForecast, locale: str) -> Iterator[tuple[str, str]]:
    best = found.capacitor_pf.tolist().index(found.best_pf)
    near = slice(max(best - _NEIGHBOURS, 0), best + _NEIGHBOURS + 1)
    for value, swr in zip(found.capacitor_pf[near], found.worst_swr[near], strict=True):
        yield _farads(value, locale), quantity_number(BY_KEY["swr"], swr, locale=locale)


def _winding_row(one: WindingForecast, locale: str) -> tuple[str, ...]:
    present, best = one.present_capacitor, one.best_capacitor
    turns = [entered(value, locale=locale) for value in (one.low_turns, one.high_turns)]
    return (
        " : ".join(turns),
        DASH if one.stack is None else str(one.stack),
        ohms(present.load_ohm, locale),
        _number("swr", present.swr, locale),
        _number("heat_loss_db", present.heat_loss_db, locale),
        _farads(one.best_pf, locale),
        _number("swr", best.swr, locale),
        _number("heat_loss_db", best.heat_loss_db, locale),
    )


def _print_antenna(console: Console, antenna: AntennaForecast, locale: str) -> None:
    columns = ("Band", "Efficiency %", "Worst SWR", "Delivered %", "")
    rows = [_antenna_row(band, locale) for band in antenna.bands]
    _print(console, f"Into the antenna of {antenna.file}", columns, rows)


def _antenna_row(band: AntennaBand, locale: str) -> tuple[str, ...]:
    return (
        band.band,
        _number("efficiency_ratio", band.efficiency_ratio, locale),
        _number("swr", band.swr, locale),
        _number("delivered_ratio", band.delivered_ratio, locale),
        band.reason or "",
    )


# --- numbers -------------------------------------------------------------------------------------


def _figures(outcome: Outcome, locale: str) -> tuple[str, ...]:
    swr, loss = outcome.swr, outcome.heat_loss_db
    return (
        _number("swr", swr, locale),
        _range("swr", swr, locale),
        _number("heat_loss_db", loss, locale),
        _range("heat_loss_db", loss, locale),
    )


def _number(key: str, found: Interval | None, locale: str) -> str:
    if found is None:
        return DASH
    u95 = None
    if found.low95 is not None and found.high95 is not None:
        u95 = (found.high95 - found.low95) / 2
    return quantity_number(BY_KEY[key], found.value, u95=u95, locale=locale)


def _range(key: str, found: Interval, locale: str) -> str:
    if found.low95 is None or found.high95 is None:
        return DASH
    return interval(found.low95, found.high95, BY_KEY[key].decimals, locale=locale)


def _farads(value_pf: float, locale: str) -> str:
    return with_unit(entered(value_pf, locale=locale), "pF") if value_pf else "none"
