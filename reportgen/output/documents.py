"""`results.json`: everything computed of one build as plain data."""

from __future__ import annotations

import json
import math
from collections.abc import Mapping
from dataclasses import asdict
from typing import Any

import numpy as np

from reportgen.model import (
    BandComparison,
    BandResult,
    Bandwidth,
    Build,
    BuildResult,
    Comparison,
    Figure,
    Finding,
    Fitted,
    HeatSplit,
    MeasuredBand,
    MethodResult,
    RealArray,
    Thermal,
)
from reportgen.physics.forecast import Forecast
from reportgen.physics.judge import overall
from reportgen.physics.over_bands import efficiency_covariance
from reportgen.physics.quantities import QUANTITIES
from reportgen.published import OF_A_FIGURE, SCHEMA, says_simulated

SIGNIFICANT_DIGITS = 9

Document = dict[str, Any]


def results_document(
    result: BuildResult,
    comparison: Comparison | None,
    *,
    program_version: str,
    forecast: Forecast | None = None,
) -> Document:
    """Everything computed of one build; every number finite or None."""
    build = result.build
    return {
        "schema": SCHEMA,
        "program_version": program_version,
        "build": _build(build),
        "load_ohm": result.chosen.load_ohm,
        "power_w": result.power_w,
        **_method(result.chosen),
        "band_covariance": _covariance(result.loss_draws_db),
        "units": [_method(one) for one in result.units],
        "methods": [_method(one) for one in result.methods],
        "bandwidth": [_bandwidth(one) for one in result.bandwidths],
        "fitted": [_fitted(one) for one in result.fitted],
        "agreements": [asdict(one) for one in result.agreements],
        "budget": [asdict(one) for one in result.budget],
        "advice": [asdict(one) for one in result.advice],
        "limits": [asdict(one) for one in result.limits],
        "limits_overall": overall(result.limits),
        "lot": None if result.lot is None else asdict(result.lot),
        "repeatability": [asdict(one) for one in result.repeatability],
        "heat_split": None if result.heat_split is None else _heat_split(result.heat_split),
        "stress": None if result.stress is None else asdict(result.stress),
        "thermal": None if result.thermal is None else _thermal(result.thermal),
        "forecast": None if forecast is None else _plain(asdict(forecast)),
        "baseline": None if comparison is None else _comparison(comparison),
        "findings": [finding_document(one) for one in result.findings],
        "inputs": [
            {"file": one.file, "sha256": one.sha256, "points": one.points} for one in build.inputs
        ],
    }


def _build(build: Build) -> Document:
    return {
        "key": build.key,
        "name": build.sheet.name,
        "folder": build.folder,
        "summary": build.sheet.summary,
        "simulated": says_simulated(build.sheet),
    }


def _covariance(loss_draws_db: Mapping[str, RealArray]) -> Document | None:
    found = efficiency_covariance(loss_draws_db)
    if found is None:
        return None
    return {"quantity": "efficiency_ratio", "bands": found[0], "matrix": found[1].tolist()}


def _heat_split(split: HeatSplit) -> Document:
    core = split.permeability
    return {
        "bands": [asdict(band) for band in split.bands],
        "winding": asdict(split.winding),
        "permeability": None
        if core is None
        else {name: _listed(getattr(core, name)) for name in core.__dataclass_fields__},
    }


def _thermal(thermal: Thermal) -> Document:
    """Everything but the rows of the log, which are in its file."""
    document = asdict(thermal)
    del document["warm_up"]
    return document


def _plain(value: Any) -> Any:
    """Arrays as lists, numbers that are not finite as None, whatever holds them."""
    if isinstance(value, dict):
        return {name: _plain(item) for name, item in value.items()}
    if isinstance(value, np.ndarray):
        return _plain(value.tolist())
    if isinstance(value, list | tuple):
        return [_plain(item) for item in value]
    return None if isinstance(value, float) and not math.isfinite(value) else value


def _listed(value: RealArray | float) -> Any:
    return value.tolist() if isinstance(value, np.ndarray) else value


def _method(method: MethodResult) -> Document:
    return {
        "method": method.method.value,
        "unit": method.unit,
        "of_units": list(method.units),
        "reason": method.reason,
        "bands": [_band(band) for band in method.bands],
    }


def _band(result: BandResult) -> Document:
    band = result.band
    document: Document = {
        "band": band.name,
        "from_hz": band.from_hz,
        "to_hz": band.to_hz,
        "status": band_status(result),
        "reason": result.reason,
        "covered": None,
        "points": 0,
        "interpolated": False,
    }
    if not isinstance(result, MeasuredBand):
        return document | _figures({})
    document["covered"] = list(result.covered_hz)
    document["points"] = result.points
    document["interpolated"] = result.interpolated
    return document | _figures(result.figures)


def band_status(result: BandResult) -> str:
    """`measured`, `partial` or `not-measured`."""
    if not isinstance(result, MeasuredBand):
        return "not-measured"
    return "partial" if result.partial else "measured"


def _figures(figures: dict[str, Figure]) -> Document:
    return {quantity.key: _figure(figures.get(quantity.key)) for quantity in QUANTITIES}


def _figure(figure: Figure | None) -> Document | None:
    return None if figure is None else {name: getattr(figure, name) for name in OF_A_FIGURE}


def _bandwidth(one: Bandwidth) -> Document:
    return {
        "criterion": one.criterion,
        "from_hz": one.from_hz,
        "to_hz": one.to_hz,
        "ratio": one.to_hz / one.from_hz,
        "from_sweep_edge": one.from_sweep_edge,
        "to_sweep_edge": one.to_sweep_edge,
    }


def _fitted(one: Fitted) -> Document:
    return {
        "quantity": one.quantity,
        "of": one.of,
        "value": one.value,
        "u95": one.u95,
        "reason": one.reason,
    }


def _comparison(comparison: Comparison) -> Document:
    return {
        "key": comparison.key,
        "name": comparison.name,
        "bands": [_band_comparison(band) for band in comparison.bands],
    }


def _band_comparison(band: BandComparison) -> Document:
    return {
        "band": band.band,
        "heat_loss_db": {
            "difference": band.heat_loss_db,
            "u95": band.heat_loss_u95_db,
            "low95": band.heat_loss_low95_db,
            "high95": band.heat_loss_high95_db,
        },
        "heat_w": {"difference": band.heat_w},
        "verdict": None if band.verdict is None else band.verdict.value,
        "reason": band.reason,
    }


def finding_document(finding: Finding) -> Document:
    """A finding as plain data."""
    return {
        "severity": finding.severity.value,
        "code": finding.code,
        "file": finding.file,
        "line": finding.line,
        "key": finding.key,
        "message": finding.message,
        "remedy": finding.remedy,
    }


def json_bytes(document: Document) -> bytes:
    """The document as JSON text, numbers to nine significant digits, nothing but finite ones.

    Raises
    ------
    ValueError
        A number is not finite: a fault of this program.
    """
    text = json.dumps(rounded(document), indent=1, ensure_ascii=False, allow_nan=False)
    return (text + "\n").encode("utf-8", errors="backslashreplace")


def rounded(value: Any) -> Any:
    """The same data as they are written: numbers to nine significant digits."""
    if isinstance(value, float):
        return _rounded_number(value)
    if isinstance(value, dict):
        return {key: rounded(item) for key, item in value.items()}
    if isinstance(value, list | tuple):
        return [rounded(item) for item in value]
    return value


def _rounded_number(value: float) -> float | int:
    if not math.isfinite(value):
        raise ValueError("a number that is not finite")
    rounded = float(f"{value:.{SIGNIFICANT_DIGITS}g}")
    return int(rounded) if rounded.is_integer() and abs(rounded) < 2**53 else rounded
