"""What other builds need of the baseline, kept beside the pages so that it is measured once.

Plain JSON with every digit: read back, it gives the same pages as the build itself.
"""

from __future__ import annotations

import json
from dataclasses import asdict, fields
from hashlib import sha256
from pathlib import Path
from typing import Any

import numpy as np

from reportgen.model import (
    Band,
    BandResult,
    Build,
    BuildResult,
    BuildSheet,
    Curves,
    Figure,
    MeasuredBand,
    Method,
    MethodResult,
    NotMeasured,
    Winding,
)

BASELINE_FILE = ".baseline.json"

Document = dict[str, Any]


def baseline_bytes(result: BuildResult, fingerprint: str) -> bytes:
    """The baseline as it is kept: a line that says of what it was made, and what it holds."""
    body = json.dumps(_document(result), separators=(",", ":"))
    head = {"fingerprint": fingerprint, "sha256": sha256(body.encode()).hexdigest()}
    return f"{json.dumps(head)}\n{body}\n".encode()


def kept_baseline(path: Path, fingerprint: str) -> str | None:
    """SHA-256 of the baseline that is kept; None where none is, of other inputs, or damaged."""
    try:
        head, body = path.read_bytes().split(b"\n")[:2]
        said = json.loads(head)
        right = said == {"fingerprint": fingerprint, "sha256": sha256(body).hexdigest()}
    except (OSError, ValueError, RecursionError):
        return None
    return str(said["sha256"]) if right else None


def read_baseline(path: Path) -> BuildResult:
    """The baseline, as far as other builds need it; `kept_baseline` has found it sound."""
    document = json.loads(path.read_bytes().split(b"\n")[1])
    turns = document["turns"]
    sheet = BuildSheet(
        name=document["name"], winding=Winding(low_turns=turns[0], high_turns=turns[1])
    )
    build = Build(key=document["key"], folder=document["folder"], sheet=sheet, measurements=())
    chosen = _read_method(document["chosen"])
    return BuildResult(
        build=build,
        power_w=document["power_w"],
        chosen=chosen,
        units=(),
        methods=(),
        bandwidths=(),
        fitted=(),
        findings=(),
        loss_draws_db={name: np.array(draws) for name, draws in document["loss_draws_db"].items()},
    )


def _document(result: BuildResult) -> Document:
    sheet = result.build.sheet
    return {
        "key": result.build.key,
        "folder": result.build.folder,
        "name": sheet.name,
        "turns": [sheet.winding.low_turns, sheet.winding.high_turns],
        "power_w": result.power_w,
        "chosen": _method(result.chosen),
        "loss_draws_db": {name: draws.tolist() for name, draws in result.loss_draws_db.items()},
    }


def _method(method: MethodResult) -> Document:
    return {
        "method": method.method.value,
        "unit": method.unit,
        "units": list(method.units),
        "load_ohm": method.load_ohm,
        "reason": method.reason,
        "curves": {
            one.name: None if array is None else array.tolist()
            for one in fields(Curves)
            for array in [getattr(method.curves, one.name)]
        },
        "bands": [asdict(band) for band in method.bands],
    }


def _read_method(document: Document) -> MethodResult:
    curves: dict[str, Any] = {
        name: None if values is None else np.array(values)
        for name, values in document["curves"].items()
    }
    return MethodResult(
        method=Method(document["method"]),
        unit=document["unit"],
        units=tuple(document["units"]),
        load_ohm=document["load_ohm"],
        reason=document["reason"],
        curves=Curves(**curves),
        bands=tuple(_read_band(band) for band in document["bands"]),
    )


def _read_band(document: Document) -> BandResult:
    band = Band(**document.pop("band"))
    if "figures" not in document:
        return NotMeasured(band=band, **document)
    figures = {key: Figure(**figure) for key, figure in document.pop("figures").items()}
    low_hz, high_hz = document.pop("covered_hz")
    return MeasuredBand(band=band, covered_hz=(low_hz, high_hz), figures=figures, **document)
