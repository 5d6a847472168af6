"""What the pages of other builds need of a published build, read from its `results.json`.

The index, the long table and whatever else speaks of many builds are made from this alone: no
sweep, no curve, no draw. A build that has not changed need not be computed for them.
"""

from __future__ import annotations

import json
from collections.abc import Callable, Iterable, Mapping
from dataclasses import dataclass
from pathlib import Path
from typing import Any, TypeVar

from reportgen.errors import OutputError
from reportgen.model import (
    Band,
    BandComparison,
    BandResult,
    BuildSheet,
    Comparison,
    Figure,
    Finding,
    Judgement,
    LimitResult,
    Lot,
    LotBand,
    MeasuredBand,
    Method,
    NotMeasured,
    Severity,
    Verdict,
)

RESULTS_FILE = "results.json"
SCHEMA = 1
"""Counts up only when a key of it changes or goes."""

OF_A_FIGURE = tuple(Figure.__dataclass_fields__)
"""Names of the numbers of a `Figure`, as they are published."""

Document = Mapping[str, Any]
Read = TypeVar("Read")


@dataclass(frozen=True, kw_only=True, slots=True)
class BandCovariance:
    """How the mean efficiencies of the bands vary together, (B, B) [ratio squared]."""

    bands: tuple[str, ...]
    matrix: tuple[tuple[float, ...], ...]


@dataclass(frozen=True, kw_only=True, slots=True)
class PublishedBuild:
    """A build as its `results.json` tells it; `reason` says why it has no loss."""

    key: str
    folder: str
    name: str
    summary: str
    simulated: bool
    power_w: float
    load_ohm: float
    method: Method
    unit: str | None
    units: tuple[str, ...]
    reason: str | None
    bands: tuple[BandResult, ...]
    covariance: BandCovariance | None
    comparison: Comparison | None
    limits: tuple[LimitResult, ...]
    lot: Lot | None
    findings: tuple[Finding, ...]

    @property
    def worst(self) -> Severity | None:
        """Severity of its worst finding."""
        found = {finding.severity for finding in self.findings}
        return next((one for one in Severity if one in found), None)


def read_document(path: Path) -> Document:
    """A `results.json`.

    Raises
    ------
    OutputError
        It is not there, or is no JSON object.
    """
    try:
        document = json.loads(path.read_bytes())
    except (OSError, ValueError, RecursionError) as error:
        raise OutputError(f"{path} cannot be read: {error}; publish the build again") from error
    if not isinstance(document, dict):
        raise OutputError(f"{path} holds no results; publish the build again")
    return document


def read_published(path: Path) -> PublishedBuild | None:
    """A published build from its `results.json`; None where that is missing or damaged."""
    try:
        return published_build(read_document(path))
    except OutputError:
        return None


def published_build(document: Document) -> PublishedBuild:
    """A published build from its results as they were written.

    Raises
    ------
    OutputError
        Something in it is missing, or not of its kind.
    """
    try:
        return _published_build(document)
    except (KeyError, TypeError, ValueError, AttributeError) as error:
        raise OutputError(f"the results of a build are damaged: {error!r}") from error


def _published_build(document: Document) -> PublishedBuild:
    if document["schema"] != SCHEMA:
        raise ValueError("results of another kind")
    build = document["build"]
    return PublishedBuild(
        key=_text(build["key"]),
        folder=_text(build["folder"]),
        name=_text(build["name"]),
        summary=_text(build["summary"]),
        simulated=bool(build["simulated"]),
        power_w=_number(document["power_w"]),
        load_ohm=_number(document["load_ohm"]),
        method=Method(document["method"]),
        unit=_maybe(_text, document["unit"]),
        units=_all(_text, document["of_units"]),
        reason=_maybe(_text, document["reason"]),
        bands=_all(_band, document["bands"]),
        covariance=_maybe(_covariance, document["band_covariance"]),
        comparison=_maybe(_comparison, document["baseline"]),
        limits=_all(_limit, document["limits"]),
        lot=_maybe(_lot, document["lot"]),
        findings=_all(_finding, document["findings"]),
    )


def says_simulated(sheet: BuildSheet) -> bool:
    """True when the record says that the sweeps were simulated."""
    return str(sheet.record.get("data", "")).strip().lower() == "simulated"


# --- kinds of value ------------------------------------------------------------------------------


def _text(value: Any) -> str:
    if not isinstance(value, str):
        raise TypeError(f"{value!r:.40} is no text")
    return value


def _number(value: Any) -> float:
    if isinstance(value, bool) or not isinstance(value, int | float):
        raise TypeError(f"{value!r:.40} is no number")
    if not abs(value) < float("inf"):
        raise ValueError("a number that is not finite")
    return float(value)


def _maybe(read: Callable[[Any], Read], value: Any) -> Read | None:
    return None if value is None else read(value)


def _all(read: Callable[[Any], Read], values: Iterable[Any]) -> tuple[Read, ...]:
    return tuple(read(value) for value in values)


# --- parts ---------------------------------------------------------------------------------------


def _band(document: Document) -> BandResult:
    band = Band(
        name=_text(document["band"]),
        from_hz=_number(document["from_hz"]),
        to_hz=_number(document["to_hz"]),
    )
    reason = _maybe(_text, document["reason"])
    if document["covered"] is None:
        return NotMeasured(band=band, reason=reason or "")
    low, high = document["covered"]
    return MeasuredBand(
        band=band,
        covered_hz=(_number(low), _number(high)),
        points=int(_number(document["points"])),
        interpolated=bool(document["interpolated"]),
        figures={key: _figure(one) for key, one in document.items() if isinstance(one, Mapping)},
        reason=reason,
    )


def _figure(document: Document) -> Figure:
    return Figure(**{name: _maybe(_number, document[name]) for name in OF_A_FIGURE})


def _covariance(document: Document) -> BandCovariance:
    bands = _all(_text, document["bands"])
    matrix = _all(lambda row: _all(_number, row), document["matrix"])
    if {len(row) for row in (bands, *matrix)} != {len(matrix)}:
        raise ValueError("a covariance that is not square")
    return BandCovariance(bands=bands, matrix=matrix)


def _comparison(document: Document) -> Comparison:
    return Comparison(
        key=_text(document["key"]),
        name=_text(document["name"]),
        bands=_all(_band_comparison, document["bands"]),
    )


def _band_comparison(document: Document) -> BandComparison:
    return BandComparison(
        band=_text(document["band"]),
        heat_loss_db=_maybe(_number, document["heat_loss_db"]["difference"]),
        heat_w=_maybe(_number, document["heat_w"]["difference"]),
        heat_loss_u95_db=_maybe(_number, document["heat_loss_db"]["u95"]),
        heat_loss_low95_db=_maybe(_number, document["heat_loss_db"]["low95"]),
        heat_loss_high95_db=_maybe(_number, document["heat_loss_db"]["high95"]),
        verdict=_maybe(Verdict, document["verdict"]),
        reason=_maybe(_text, document["reason"]),
    )


def _limit(document: Document) -> LimitResult:
    return LimitResult(
        band=_text(document["band"]),
        quantity=_text(document["quantity"]),
        limit=_number(document["limit"]),
        value=_maybe(_number, document["value"]),
        low95=_maybe(_number, document["low95"]),
        high95=_maybe(_number, document["high95"]),
        judgement=Judgement(document["judgement"]),
    )


def _lot(document: Document) -> Lot:
    return Lot(units=_all(_text, document["units"]), bands=_all(_lot_band, document["bands"]))


def _lot_band(document: Document) -> LotBand:
    return LotBand(
        band=_text(document["band"]),
        least_db=_number(document["least_db"]),
        greatest_db=_number(document["greatest_db"]),
        standard_deviation_db=_number(document["standard_deviation_db"]),
        worst_unit=_text(document["worst_unit"]),
    )


def _finding(document: Document) -> Finding:
    return Finding(
        severity=Severity(document["severity"]),
        code=_text(document["code"]),
        message=_text(document["message"]),
        remedy=_text(document["remedy"]),
        file=_maybe(_text, document["file"]),
        line=_maybe(int, document["line"]),
        key=_maybe(_text, document["key"]),
    )
