"""The figures as CSV: bands and curves of one build, and all builds in one long table."""

from __future__ import annotations

from collections.abc import Iterable, Sequence

import pandas as pd

from reportgen.model import BandResult, BuildResult, Comparison, Curves, MeasuredBand
from reportgen.output.documents import OF_A_FIGURE, band_status
from reportgen.physics.quantities import QUANTITIES

_FORMULA_STARTS = ("=", "+", "-", "@", "\t", "\r")


def bands_csv(result: BuildResult) -> bytes:
    """One row for each band, the result's method; blanks where nothing was measured."""
    return _csv(pd.DataFrame([_wide_row(band) for band in result.chosen.bands]))


def _wide_row(band: BandResult) -> dict[str, object]:
    row = _band_columns(band)
    figures = band.figures if isinstance(band, MeasuredBand) else {}
    for quantity in QUANTITIES:
        figure = figures.get(quantity.key)
        for name in ("mean", "worst", "low95", "high95"):
            row[f"{quantity.key}_{name}"] = None if figure is None else getattr(figure, name)
    return row


def _band_columns(band: BandResult) -> dict[str, object]:
    return {
        "band": band.band.name,
        "from_hz": band.band.from_hz,
        "to_hz": band.band.to_hz,
        "status": band_status(band),
        "reason": band.reason or "",
    }


def curves_csv(curves: Curves, power_w: float) -> bytes:
    """Every quantity that was measured at every point of the result's grid; `swept` 0: between."""
    columns: dict[str, object] = {
        "frequency_hz": curves.frequency_hz,
        "swept": curves.native.astype(int),
    }
    for quantity in QUANTITIES:
        ratio = quantity.ratio(curves)
        if ratio is not None:
            columns[quantity.key] = quantity.value(ratio, power_w)
    return _csv(pd.DataFrame(columns).replace([float("inf"), float("-inf")], float("nan")))


def results_table(rows: Iterable[tuple[BuildResult, Comparison | None]]) -> pd.DataFrame:
    """Every build, method, band and quantity in long form."""
    return pd.DataFrame([line for result, other in rows for line in _long_rows(result, other)])


def results_csv(table: pd.DataFrame) -> bytes:
    """The long table as CSV."""
    return _csv(table)


def _long_rows(result: BuildResult, comparison: Comparison | None) -> Iterable[dict[str, object]]:
    differences = {} if comparison is None else {band.band: band for band in comparison.bands}
    for method in result.methods:
        chosen = method is result.chosen
        yield from _method_rows(result, method.method.value, method.unit, method.bands, chosen)
    if all(method is not result.chosen for method in result.methods):
        one = result.chosen
        yield from _method_rows(result, one.method.value, one.unit, one.bands, chosen=True)
    for name, band in differences.items():
        for key, value in (("heat_loss_db", band.heat_loss_db), ("heat_w", band.heat_w)):
            yield {
                "build": result.build.key,
                "name": result.build.sheet.name,
                "method": f"minus {comparison.key}" if comparison else "",
                "unit": "",
                "chosen": 0,
                "band": name,
                "quantity": key,
                "mean": value,
            }


def _method_rows(
    result: BuildResult, method: str, unit: str | None, bands: Sequence[BandResult], chosen: bool
) -> Iterable[dict[str, object]]:
    for band in bands:
        figures = band.figures if isinstance(band, MeasuredBand) else {}
        named = {
            "build": result.build.key,
            "name": result.build.sheet.name,
            "method": method,
            "unit": unit or "",
            "chosen": int(chosen),
            **_band_columns(band),
        }
        for key, figure in figures.items():
            values = {name: getattr(figure, name) for name in OF_A_FIGURE}
            yield {**named, "quantity": key, **values}
        if not figures:
            yield named


def _csv(table: pd.DataFrame) -> bytes:
    """UTF-8 with plain line ends; text that a spreadsheet would run is put behind a quote."""
    safe = table.apply(lambda column: column.map(_harmless))
    text: str = safe.to_csv(index=False, float_format="%.9g", lineterminator="\n")
    return text.encode("utf-8", errors="backslashreplace")


def _harmless(value: object) -> object:
    """Text in one line, a quote in front where it would start a formula; numbers as they are."""
    if not isinstance(value, str):
        return value
    guarded = f"'{value}" if value.startswith(_FORMULA_STARTS) else value
    return guarded.replace("\r", " ").replace("\n", " ")
