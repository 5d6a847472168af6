"""What a build stands, in two tables: by mode and by band."""

from __future__ import annotations

from collections.abc import Iterator, Sequence

from reportgen.model import (
    BuildResult,
    Permitted,
    PermittedMode,
    Stress,
    StressBand,
    ThermalBand,
)
from reportgen.pages.display import DASH, entered, no_more_than, number
from reportgen.pages.sentences import rated_power
from reportgen.pages.tables import (
    Cell,
    Column,
    Row,
    Table,
    band_column,
    figures,
    with_points_aligned,
)

BOUND_WORDS = {
    "heat": "core heating",
    "flux": "flux in the core",
    "capacitor volts": "capacitor volts",
}
_MARK = "*"


def unbroken(band: str) -> str:
    """A band's name that stays on one line."""
    return band.replace(" ", "\u00a0")


def surface_rises(stress: Stress) -> list[tuple[float, float, str]]:
    """Ends of the rise by the two published formulas [K], and the band, where there are any."""
    return [(*band.surface_rise_k, band.band) for band in stress.bands if band.surface_rise_k]


def modes_table(permitted: Permitted, locale: str) -> Table:
    """Power of each mode, the one that may have least first."""
    marked = any(mode.extrapolated for mode in permitted.modes)
    note = f" {_MARK} more than twice what was logged." if marked else ""
    table = Table(
        caption=f"Peak envelope power that each mode may have on every band.{note}",
        corner="Mode",
        columns=(
            Column(label="Duty", unit="%"),
            Column(label="Power", unit="W"),
            Column(label="High side", unit="V peak"),
            Column(label="Bound by", words=True),
            Column(label="First on", words=True),
        ),
        groups=(tuple(_mode_row(mode, locale) for mode in permitted.modes),),
    )
    return with_points_aligned(table, locale)


def _mode_row(mode: PermittedMode, locale: str) -> Row:
    power = no_more_than(mode.power_w, locale=locale) + (_MARK if mode.extrapolated else "")
    volts = number(2**0.5 * mode.high_side_v, 0, locale=locale)
    return Row(
        head=mode.mode[:1].upper() + mode.mode[1:],
        cells=(
            *figures([entered(mode.duty_percent, locale=locale), power, volts]),
            Cell(text=BOUND_WORDS[mode.bound_by], look="words"),
            Cell(text=unbroken(mode.band) if mode.band else "every band", look="words"),
        ),
    )


def stress_table(
    result: BuildResult, stress: Stress, permitted: Permitted | None, locale: str
) -> Table:
    """Bounds at the rated power, a column for each band."""
    power = rated_power(result, locale)
    rows = [*_thermal_rows(permitted, power, locale), *_stress_rows(stress, permitted, locale)]
    marked = permitted is not None and any(band.extrapolated for band in permitted.bands)
    note = f" {_MARK} more than twice what was logged." if marked else ""
    heat = "What heat permits, and upper bounds" if permitted else "Upper bounds"
    loads = f"for any load up to SWR {entered(stress.load_swr, locale=locale)}"
    return Table(
        caption=f"{heat} at {power} {loads}.{note}",
        corner="At most",
        columns=tuple(band_column(band.band) for band in stress.bands),
        groups=(tuple(rows),),
        long_heads=True,
    )


def _thermal_rows(permitted: Permitted | None, power: str, locale: str) -> Iterator[Row]:
    if permitted is None:
        return
    bands = permitted.bands
    continuous = [(band.continuous_w, band.extrapolated) for band in bands]
    yield Row(head="Continuous power, W", cells=figures(_powers(continuous, locale)))
    if permitted.heat_load_swr > 1:
        matched = [(band.matched_w, band.extrapolated) for band in bands]
        yield Row(head="the same, nominal load", cells=figures(_powers(matched, locale)))
    yield Row(
        head=f"Minutes to the limit at {power}",
        cells=figures([_minutes(band, locale) for band in bands]),
    )


def _powers(powers: Sequence[tuple[float | None, bool]], locale: str) -> list[str]:
    return [
        DASH if power is None else no_more_than(power, locale=locale) + _MARK * extrapolated
        for power, extrapolated in powers
    ]


def _minutes(band: ThermalBand, locale: str) -> str:
    if band.continuous_w is None:
        return DASH
    if band.minutes_to_limit is None:
        return "never"
    return (
        "<\u00a01"
        if band.minutes_to_limit < 1
        else no_more_than(band.minutes_to_limit, locale=locale)
    )


def _stress_rows(stress: Stress, permitted: Permitted | None, locale: str) -> Iterator[Row]:
    bands = stress.bands
    heat = {"Heat, W": ([band.heat_w for band in bands], 1.0, 1)}
    if stress.heat_load_swr > 1:
        heat["Heat, nominal load, W"] = ([band.matched_heat_w for band in bands], 1.0, 1)
    else:
        heat = {"Heat, nominal load, W": heat["Heat, W"]}
    columns = heat | {
        "Peak flux, mT": ([band.peak_flux_t for band in bands], 1e3, 1),
        "Capacitor current, A": ([band.capacitor_a for band in bands], 1.0, 2),
    }
    for head, (values, factor, places) in columns.items():
        if any(value is not None for value in values):
            yield Row(head=head, cells=figures(_scaled(values, factor, places, locale)))
    if permitted is None and surface_rises(stress):
        yield Row(
            head="Rise of a bare core, K", cells=figures([_rise(band, locale) for band in bands])
        )


def _scaled(values: Sequence[float | None], factor: float, places: int, locale: str) -> list[str]:
    return [
        DASH if value is None else number(factor * value, places, locale=locale) for value in values
    ]


def _rise(band: StressBand, locale: str) -> str:
    if band.surface_rise_k is None:
        return DASH
    low, high = (number(end, 0, locale=locale) for end in band.surface_rise_k)
    return f"{low}{DASH}{high}"
