"""What is fuzzed, and what has to hold whatever the bytes: every reader of a foreign file.

A target takes bytes. The first chooses settings, the rest is the file. It raises `AssertionError`,
or whatever the reader should not have raised, when a promise is broken.
"""

from __future__ import annotations

import math
import unicodedata
from collections.abc import Callable
from dataclasses import asdict
from pathlib import Path

import numpy as np

from reportgen.errors import InputRejected
from reportgen.intake.paths import file_name_problem
from reportgen.intake.remarks import MOST_ERRORS
from reportgen.intake.sidecar import parse_bench, parse_build
from reportgen.intake.spot_readings import parse_spot_readings
from reportgen.intake.thermal_log import parse_thermal_log
from reportgen.intake.touchstone import LARGEST_MAGNITUDE, parse_touchstone
from reportgen.model import Finding, Severity
from reportgen.physics.allocations import amateur_bands

MOST_POINTS = 2000
MOST_WARNINGS = 40  # each kind is told once
LONGEST_MESSAGE = 500  # a foreign text is cut at 80 characters, and few are quoted at once
UNITS = (None, "Hz", "kHz", "MHz", "GHz")
DECIMALS = (None, ".", ",")
EXAMPLES = Path(__file__).parents[2] / "example_runs"
BENCH = parse_bench((EXAMPLES / "runs.toml").read_bytes(), file="runs.toml")
_UNSEEN = {"Cc", "Cf", "Cs", "Co", "Cn", "Zl", "Zp"}


def touchstone(data: bytes) -> None:
    """The reader of sweeps, under each of its settings."""
    choice, content = (data[0] if data else 0), data[1:]
    file = ("a.s1p", "a.s2p", "a.ts")[choice % 3]
    settings = {
        "frequency_unit": UNITS[choice // 3 % 5],
        "decimal": DECIMALS[choice // 15 % 3],
        "reverse_ports": choice // 45 % 2 == 1,
        "bands": amateur_bands(1) if choice // 90 % 2 else (),
        "max_points": MOST_POINTS,
    }
    try:
        sweep, findings = parse_touchstone(content, file=file, **settings)  # type: ignore[arg-type]
    except InputRejected as rejected:
        _check_rejection(rejected)
        return
    _check_findings(findings)
    assert Severity.ERROR not in {finding.severity for finding in findings}
    assert 1 <= len(sweep.frequency_hz) <= MOST_POINTS
    assert np.isfinite(sweep.frequency_hz).all()
    assert (sweep.frequency_hz > 0).all()
    assert (np.diff(sweep.frequency_hz) > 0).all()
    assert np.isfinite(sweep.s).all()
    assert (np.abs(sweep.s) <= LARGEST_MAGNITUDE * (1 + 1e-9)).all()
    assert all(0 < ohm < 1e7 for ohm in sweep.reference_ohm)


def build(data: bytes) -> None:
    """The sidecar of a build."""
    try:
        sheet = parse_build(data[1:], file="build.toml", bench=BENCH)
    except InputRejected as rejected:
        _check_rejection(rejected)
        return
    _check_values(asdict(sheet))
    assert 0 < sheet.nominal_load_ohm < math.inf
    for entry in (*sheet.sweep, *sheet.thermal):
        assert file_name_problem(entry.file) is None
    for sweep in sheet.sweep:
        assert sweep.load is None or sweep.load in BENCH.loads | sheet.loads
        assert sweep.pair[0] != sweep.pair[1]


def bench(data: bytes) -> None:
    """The sidecar of the bench."""
    try:
        sheet = parse_bench(data[1:], file="runs.toml")
    except InputRejected as rejected:
        _check_rejection(rejected)
        return
    _check_values(asdict(sheet))
    assert all(band.from_mhz < band.to_mhz for band in sheet.own_band)


def spot(data: bytes) -> None:
    """Readings off a screen."""
    try:
        sweep, findings = parse_spot_readings(data[1:], file="a.csv")
    except InputRejected as rejected:
        _check_rejection(rejected)
        return
    _check_findings(findings)
    assert np.isfinite(sweep.frequency_hz).all()
    assert (sweep.frequency_hz > 0).all()
    assert (np.diff(sweep.frequency_hz) > 0).all()
    assert np.isfinite(sweep.s).all()


def log(data: bytes) -> None:
    """Temperature logs."""
    try:
        logged, findings = parse_thermal_log(data[1:], file="a.csv")
    except InputRejected as rejected:
        _check_rejection(rejected)
        return
    _check_findings(findings)
    columns = (logged.time_s, logged.core_c, logged.ambient_c)
    assert {len(column) for column in columns} == {len(logged.time_s)}
    assert len(logged.time_s) > 0
    assert all(np.isfinite(column).all() for column in columns)
    assert (np.diff(logged.time_s) >= 0).all()


TARGETS: dict[str, Callable[[bytes], None]] = {
    "touchstone": touchstone,
    "build": build,
    "bench": bench,
    "spot": spot,
    "log": log,
}


# --- what always holds ---------------------------------------------------------------------------


def _check_rejection(rejected: InputRejected) -> None:
    assert Severity.ERROR in {finding.severity for finding in rejected.findings}
    _check_findings(rejected.findings)


def _check_findings(findings: tuple[Finding, ...]) -> None:
    errors = [finding for finding in findings if finding.severity is Severity.ERROR]
    assert len(errors) <= MOST_ERRORS + 1
    assert len(findings) - len(errors) <= MOST_WARNINGS
    for finding in findings:
        assert finding.code
        assert finding.message
        assert finding.remedy
        told = f"{finding.message}{finding.remedy}{finding.key or ''}"
        assert len(finding.message) <= LONGEST_MESSAGE
        assert not _UNSEEN & {unicodedata.category(character) for character in told}
        assert finding.line is None or finding.line > 0


def _check_values(value: object) -> None:
    """Every number finite, every text of bounded length, however deep."""
    if isinstance(value, dict):
        for key, item in value.items():
            _check_values(key)
            _check_values(item)
    elif isinstance(value, list | tuple):
        for item in value:
            _check_values(item)
    elif isinstance(value, str):
        assert len(value) <= 2000
    elif isinstance(value, float):
        assert math.isfinite(value)
