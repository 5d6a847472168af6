"""Where the heat goes: sentences and a table; winding, core and capacitor apart."""

from __future__ import annotations

from collections.abc import Iterator, Sequence

from reportgen.model import BuildResult, HeatSplitBand, Interval, WindingFigures
from reportgen.pages.display import DASH, megahertz, quantity_number, with_unit
from reportgen.pages.intervals import half_width, scaled_with_interval, width_text, with_interval
from reportgen.pages.summary import means
from reportgen.pages.tables import Row, Table, band_column, figures, with_points_aligned
from reportgen.pages.wording import METHOD_NAMES
from reportgen.physics.quantities import BY_KEY

_CAPTION = (
    "Mean heat in each band by part, at the design power, as the circuit of the method divides it; "
    "after \u00b1 half of the 95\u00a0% interval of the core's share."
)
_SHARE = BY_KEY["efficiency_ratio"]
"""A share of the heat is written as an efficiency is: in per cent."""


def heat_parts_sentences(result: BuildResult, locale: str) -> tuple[str, ...]:
    """The core's share and the winding's figures, or why there are none."""
    split = result.heat_split
    if split is None:
        return (_reason(result),)
    share = (_share_sentence(split.bands, locale),) if split.bands else ()
    return (*share, _winding_sentence(split.winding, locale))


def _reason(result: BuildResult) -> str:
    if not means(result.chosen, "heat_w"):
        return "Heat was not measured, so it cannot be divided."
    name = METHOD_NAMES[result.chosen.method]
    return f"The method of the result ({name}) does not tell the winding from the core."


def _share_sentence(bands: Sequence[HeatSplitBand], locale: str) -> str:
    most = max(bands, key=lambda band: band.core_share.value)
    least = min(bands, key=lambda band: band.core_share.value)
    text = f"The core makes {_per_cent(most, locale)} of the heat on {_name(most)}"
    if most is least:
        return f"{text}."
    return f"{text}, where its share is largest, and {_per_cent(least, locale)} on {_name(least)}."


def _name(band: HeatSplitBand) -> str:
    return band.band.replace(" ", "\u00a0")


def _per_cent(band: HeatSplitBand, locale: str) -> str:
    return with_unit(_share(band.core_share, locale), "%")


def _share(found: Interval, locale: str) -> str:
    return with_interval(_SHARE, found.value, found.low95, found.high95, locale=locale)


def _winding_sentence(winding: WindingFigures, locale: str) -> str:
    leakage = scaled_with_interval(winding.leakage_h, 1e9, 0, locale)
    magnetising = scaled_with_interval(winding.magnetising_h, 1e6, 2, locale)
    coupling = scaled_with_interval(winding.coupling_ratio, 1, 3, locale)
    lowest = megahertz(winding.magnetising_at_hz, locale=locale, places=3)
    return (
        f"Seen from the low side the winding has {with_unit(leakage, 'nH')} of leakage "
        f"inductance, leads included, and {with_unit(magnetising, 'µH')} of magnetising "
        f"inductance at {with_unit(lowest, 'MHz')}; its coupling there is {coupling}."
    )


def heat_parts_table(result: BuildResult, locale: str) -> Table | None:
    """Watts of each part and the core's share, a column for each band."""
    split = result.heat_split
    if split is None or not split.bands:
        return None
    bands = split.bands
    watts = {
        "Winding, W": [band.winding_w for band in bands],
        "Core, W": [band.core_w for band in bands],
        "Capacitor, W": [band.capacitor_w for band in bands],
    }
    rows = [_watt_row(name, values, locale) for name, values in watts.items() if any(values)]
    table = Table(
        caption=_CAPTION,
        corner="Part",
        columns=tuple(band_column(band.band) for band in bands),
        groups=(tuple(rows), tuple(_share_rows(bands, locale))),
        long_heads=True,
    )
    return with_points_aligned(table, locale)


def _watt_row(name: str, watts: Sequence[float], locale: str) -> Row:
    texts = [quantity_number(BY_KEY["heat_w"], one, locale=locale) for one in watts]
    return Row(head=name, cells=figures(texts))


def _share_rows(bands: Sequence[HeatSplitBand], locale: str) -> Iterator[Row]:
    shares = [band.core_share for band in bands]
    widths = [half_width(one.low95, one.high95) for one in shares]
    pairs = list(zip(shares, widths, strict=True))
    texts = [quantity_number(_SHARE, one.value, u95=u95, locale=locale) for one, u95 in pairs]
    yield Row(head="Core's share, %", cells=figures(texts))
    if any(widths):
        ends = [DASH if u95 is None else width_text(_SHARE, u95, locale) for u95 in widths]
        yield Row(head="\u00b1", cells=figures(ends, "soft"))
