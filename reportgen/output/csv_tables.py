"""The figures as CSV: bands and curves of one build, and all builds in one long table."""

from __future__ import annotations

import csv
import io
import re
import unicodedata
from collections.abc import Iterator

import pandas as pd

from reportgen.errors import OutputError
from reportgen.model import BandResult, BuildResult, Curves, MeasuredBand
from reportgen.output.documents import band_status
from reportgen.physics.quantities import QUANTITIES
from reportgen.published import OF_A_FIGURE, Document

_OF_A_METHOD = ("method", "unit", "of_units", "reason", "bands")
_OF_A_BAND = ("band", "from_hz", "to_hz", "status", "reason")
LONG_COLUMNS = ("build", "name", "method", "unit", "chosen", *_OF_A_BAND, "quantity", *OF_A_FIGURE)
LONG_HEAD = ",".join(LONG_COLUMNS) + "\n"

# of a cell, or of a part of one where a spreadsheet takes the semicolon for the separator
_FORMULA_START = re.compile(r"(^|;)(?=\s*[=+\-@\uff1d\uff0b\uff0d\uff20]|[\t\r\n])")
_UNSEEN = frozenset({"Cc", "Cf", "Cs", "Co", "Cn", "Zl", "Zp"})


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


# --- all builds in one long table ----------------------------------------------------------------


def long_csv_lines(document: Document) -> str:
    """Every method, band and quantity of one build, from its results; without a head.

    Raises
    ------
    OutputError
        They are damaged.
    """
    text = io.StringIO()
    writer = csv.DictWriter(text, LONG_COLUMNS, restval="", lineterminator="\n")
    try:
        for row in _long_rows(document):
            writer.writerow({name: _csv_text(value) for name, value in row.items()})
    except (KeyError, TypeError, ValueError, AttributeError) as error:
        raise OutputError(f"the results of a build are damaged: {error!r}") from error
    return text.getvalue()


def _long_rows(document: Document) -> Iterator[dict[str, object]]:
    chosen = {name: document[name] for name in _OF_A_METHOD}
    named = {"build": document["build"]["key"], "name": document["build"]["name"]}
    for method in document["methods"]:
        yield from _method_rows(named, method, chosen=method == chosen)
    if chosen not in document["methods"]:
        yield from _method_rows(named, document, chosen=True)
    if document["baseline"] is not None:
        yield from _difference_rows(named, document["baseline"])


def _method_rows(
    named: dict[str, object], method: Document, *, chosen: bool
) -> Iterator[dict[str, object]]:
    of_method = {**named, "method": method["method"], "unit": method["unit"], "chosen": int(chosen)}
    for band in method["bands"]:
        of_band = of_method | {name: band[name] for name in _OF_A_BAND}
        figures = {one.key: band[one.key] for one in QUANTITIES if band[one.key] is not None}
        for key, figure in figures.items():
            yield of_band | {"quantity": key} | figure
        if not figures:
            yield of_band


def _difference_rows(named: dict[str, object], comparison: Document) -> Iterator[dict[str, object]]:
    of_method = {**named, "method": f"minus {comparison['key']}", "chosen": 0}
    for band in comparison["bands"]:
        for key in ("heat_loss_db", "heat_w"):
            mean = band[key]["difference"]
            yield of_method | {"band": band["band"], "quantity": key, "mean": mean}


def _csv_text(value: object) -> object:
    if value is None:
        return ""
    return f"{value:.9g}" if isinstance(value, int | float) else _harmless(value)


# --- what all have in common ---------------------------------------------------------------------


def _csv(table: pd.DataFrame) -> bytes:
    """UTF-8 with plain line ends; text that a spreadsheet would run is put behind a quote."""
    safe = table.apply(lambda column: column.map(_harmless))
    return csv_bytes(safe.to_csv(index=False, float_format="%.9g", lineterminator="\n"))


def csv_bytes(text: str) -> bytes:
    """The text as it is written; what is no Unicode is spelt out."""
    return text.encode("utf-8", errors="backslashreplace")


def _harmless(value: object) -> object:
    """Text in one line, a quote in front where it would start a formula; numbers as they are."""
    if not isinstance(value, str):
        return value
    guarded = _FORMULA_START.sub(r"\1'", value)
    return "".join(" " if _unseen(letter) else letter for letter in guarded)


def _unseen(letter: str) -> bool:
    return letter != "\t" and unicodedata.category(letter) in _UNSEEN
