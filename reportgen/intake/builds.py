"""From a runs folder to its builds: sidecars and sweeps read, what is wrong noted."""

from __future__ import annotations

import hashlib
from collections.abc import Iterable, Iterator
from dataclasses import dataclass
from pathlib import Path

from reportgen.errors import InputRejected, UsageError
from reportgen.intake.folders import (
    BENCH_FILE,
    BUILD_FILE,
    BuildFolder,
    build_folders,
    stray_files,
)
from reportgen.intake.paths import read_bytes
from reportgen.intake.plausibility import check_dates, check_sweep, without_answered
from reportgen.intake.remarks import shortened
from reportgen.intake.scan import STANDARD_LIMITS, is_sweep, scan_runs
from reportgen.intake.sidecar import completed_entry, parse_bench, parse_build
from reportgen.intake.sidecar_shape import nearest
from reportgen.intake.sidecar_text import MAX_BYTES, shown_value
from reportgen.intake.spot_readings import parse_spot_readings
from reportgen.intake.thermal_log import parse_thermal_log
from reportgen.intake.touchstone import parse_touchstone
from reportgen.model import (
    OUTPUT_MARKER,
    PORTS_OF_SETUP,
    SETUPS_WITHOUT_UNIT,
    Band,
    BenchSheet,
    Build,
    BuildSheet,
    Finding,
    HeatRun,
    InputFile,
    Measurement,
    Setup,
    Severity,
    SweepEntry,
    ThermalEntry,
)
from reportgen.physics.allocations import known_bands

__all__ = ["BuildFolder", "Runs", "open_runs", "read_build"]


@dataclass(frozen=True, kw_only=True, slots=True)
class Runs:
    """A runs folder: what is common to the bench, and its build folders by path.

    `bands` are those that `runs.toml` names, or else every known one, by frequency; `inputs` is
    `runs.toml`, where there is one.
    """

    root: Path
    bench: BenchSheet
    bands: tuple[Band, ...]
    folders: tuple[BuildFolder, ...]
    findings: tuple[Finding, ...]
    inputs: tuple[InputFile, ...] = ()


# --- the runs folder -----------------------------------------------------------------------------


def open_runs(root: Path) -> Runs:
    """A runs folder, its `runs.toml` read and its build folders found.

    Raises
    ------
    UsageError
        `root` is no folder, or one that this program has written.
    InputRejected
        `runs.toml` cannot be used.
    """
    if not root.is_dir():
        raise UsageError(f"{root} is no folder; name the folder that holds the builds")
    if (root / OUTPUT_MARKER).exists():
        raise UsageError(f"{root} is an output folder; name the folder that holds the builds")
    scan = scan_runs(root)
    bench, inputs = _read_bench(root)
    folders = build_folders(scan.files, root_name=root.resolve().name)
    baseline = _unknown_baseline(bench, [folder.key for folder in folders])
    return Runs(
        root=root,
        bench=bench,
        bands=_chosen_bands(bench),
        folders=folders,
        findings=(*scan.findings, *shortened(stray_files(scan.files)), *baseline),
        inputs=inputs,
    )


def _read_bench(root: Path) -> tuple[BenchSheet, tuple[InputFile, ...]]:
    if not (root / BENCH_FILE).is_symlink() and not (root / BENCH_FILE).exists():
        return BenchSheet(), ()
    data = read_bytes(root, BENCH_FILE, file=BENCH_FILE, at_most=MAX_BYTES)
    return parse_bench(data, file=BENCH_FILE), (_input(BENCH_FILE, data),)


def _chosen_bands(bench: BenchSheet) -> tuple[Band, ...]:
    known = known_bands(bench.region, bench.own_band)
    return tuple(band for band in known if bench.bands is None or band.name in bench.bands)


def _unknown_baseline(bench: BenchSheet, keys: list[str]) -> Iterator[Finding]:
    if bench.baseline is not None and bench.baseline not in keys:
        near = nearest(bench.baseline, keys)
        message = f"no build has the key {shown_value(bench.baseline)}"
        remedy = f"did you mean {shown_value(near)}?" if near else "name the key of a build"
        yield _error("unknown-baseline", message, remedy, BENCH_FILE, "baseline")


# --- one build -----------------------------------------------------------------------------------


def read_build(runs: Runs, folder: BuildFolder) -> Build:
    """A build with every sweep of it that can be used.

    A sweep that cannot be used is an error among the build's findings, and the others go on.

    Raises
    ------
    InputRejected
        `build.toml` cannot be used, or no sweep of a unit is left.
    """
    reading = _Reading(runs, folder)
    for place, entry in enumerate(reading.sheet.sweep, start=1):
        reading.take_sweep(entry, f"sweep[{place}]")
    for place, log in enumerate(reading.sheet.thermal, start=1):
        reading.take_log(log, f"thermal[{place}]")
    reading.findings += _unnamed_sweeps(folder, reading.sheet)
    return reading.build()


class _Reading:
    """What has been read of a build so far, and what was found wrong."""

    def __init__(self, runs: Runs, folder: BuildFolder) -> None:
        self.runs, self.folder = runs, folder
        data = _content(runs, folder, BUILD_FILE, at_most=MAX_BYTES)
        self.sheet = parse_build(data, file=BUILD_FILE, bench=runs.bench)
        self.inputs = [_input(BUILD_FILE, data)]
        self.findings = list(check_dates(self.sheet, runs.bench))
        self.measurements: list[Measurement] = []
        self.heat_runs: list[HeatRun] = []

    def take_sweep(self, entry: SweepEntry, key: str) -> None:
        """Read one sweep; what keeps it from use becomes a finding."""
        try:
            data = _named_file(self.runs, self.folder, entry.file, f"{key}.file")
        except InputRejected as rejected:
            self.findings += rejected.findings
            return
        try:
            measurement = self.measurement(data, entry, key)
        except InputRejected as rejected:
            self.findings += rejected.findings
            self.inputs.append(_input(entry.file, data))
            return
        self.measurements.append(measurement)
        points = len(measurement.sweep.frequency_hz)
        self.inputs.append(_input(entry.file, data, points=points))
        if entry.setup is not Setup.SPOT:
            self.findings += check_sweep(measurement, self.runs.bands)

    def measurement(self, data: bytes, entry: SweepEntry, key: str) -> Measurement:
        """The sweep in its set-up; rejected when its ports contradict the set-up."""
        entry = completed_entry(entry, self.sheet, self.runs.bench)
        if entry.setup is Setup.SPOT:
            sweep, findings = parse_spot_readings(data, file=entry.file)
            self.findings += findings
            return Measurement(entry=entry, sweep=sweep)
        sweep, findings = parse_touchstone(
            data,
            file=entry.file,
            frequency_unit=entry.frequency_unit,
            decimal=entry.decimal,
            reverse_ports=entry.reverse_ports,
            bands=self.runs.bands,
        )
        self.findings += findings
        if sweep.ports != PORTS_OF_SETUP[entry.setup]:
            raise InputRejected((_contradiction(entry, sweep.ports, f"{key}.setup"),))
        loads = self.runs.bench.loads | self.sheet.loads
        return Measurement(entry=entry, sweep=sweep, load=loads[entry.load] if entry.load else None)

    def take_log(self, entry: ThermalEntry, key: str) -> None:
        """Read one temperature log; what keeps it from use becomes a finding."""
        try:
            data = _named_file(self.runs, self.folder, entry.file, f"{key}.file")
        except InputRejected as rejected:
            self.findings += rejected.findings
            return
        self.inputs.append(_input(entry.file, data))
        try:
            log, findings = parse_thermal_log(data, file=entry.file)
        except InputRejected as rejected:
            self.findings += rejected.findings
            return
        self.findings += findings
        self.heat_runs.append(HeatRun(entry=entry, log=log))

    def build(self) -> Build:
        """The build, when at least one sweep of a unit is left."""
        if all(each.entry.setup in SETUPS_WITHOUT_UNIT for each in self.measurements):
            raise InputRejected((*shortened(self.findings), _nothing_left(self.sheet)))
        return Build(
            key=self.folder.key,
            folder=self.folder.folder,
            sheet=self.sheet,
            measurements=tuple(self.measurements),
            heat_runs=tuple(self.heat_runs),
            inputs=tuple(self.inputs),
            findings=shortened(without_answered(self.findings, self.measurements)),
        )


def _contradiction(entry: SweepEntry, ports: int, key: str) -> Finding:
    setup = shown_value(entry.setup.value)
    message = f"the sweep has {_ports(ports)}, set-up {setup} has {PORTS_OF_SETUP[entry.setup]}"
    remedy = f"correct `setup` or `file` in {BUILD_FILE}"
    return _error("wrong-ports", message, remedy, entry.file, key)


def _ports(count: int) -> str:
    return "1 port" if count == 1 else f"{count} ports"


def _unnamed_sweeps(folder: BuildFolder, sheet: BuildSheet) -> Iterator[Finding]:
    named = {*(entry.file for entry in sheet.sweep), *(entry.file for entry in sheet.thermal)}
    for file in folder.files:
        if is_sweep(file) and file not in named:
            yield Finding(
                severity=Severity.WARNING,
                code="unnamed-sweep",
                message=f"no [[sweep]] in {BUILD_FILE} names this file; it is not used",
                remedy="add a [[sweep]] for it, or move it away",
                file=file,
            )


def _nothing_left(sheet: BuildSheet) -> Finding:
    if sheet.sweep:
        message = "no sweep of a unit is left to be used"
        return _error("no-sweep", message, "correct the sweeps named above or add one", BUILD_FILE)
    message = "no [[sweep]] is named"
    return _error("no-sweep", message, "add a [[sweep]] for each file", BUILD_FILE, "sweep")


# --- files ---------------------------------------------------------------------------------------


def _content(runs: Runs, folder: BuildFolder, file: str, *, at_most: int) -> bytes:
    path = file if folder.folder == "." else f"{folder.folder}/{file}"
    return read_bytes(runs.root, path, file=file, at_most=at_most)


def _named_file(runs: Runs, folder: BuildFolder, file: str, key: str) -> bytes:
    """Content of a file that the sidecar names.

    Raises
    ------
    InputRejected
        Not there (the finding names the nearest file that is), not readable, or not of this build.
    """
    try:
        data = _content(runs, folder, file, at_most=STANDARD_LIMITS.file_bytes)
    except InputRejected as rejected:
        if rejected.findings[0].code == "missing-file":
            raise InputRejected((_missing(file, folder.files, key),)) from rejected
        raise
    if file not in folder.files:
        message = f"{shown_value(file)} belongs to another build or was passed over"
        raise InputRejected((_error("not-here", message, "move the file here", BUILD_FILE, key),))
    return data


def _missing(file: str, there: Iterable[str], key: str) -> Finding:
    near = nearest(file, [name for name in there if name != BUILD_FILE])
    message = f"the file {shown_value(file)} is not there"
    remedy = f"did you mean {shown_value(near)}?" if near else "put it back, or remove its entry"
    return _error("missing-file", message, remedy, BUILD_FILE, key)


def _input(file: str, data: bytes, *, points: int | None = None) -> InputFile:
    return InputFile(file=file, sha256=hashlib.sha256(data).hexdigest(), points=points)


def _error(code: str, message: str, remedy: str, file: str, key: str | None = None) -> Finding:
    return Finding(
        severity=Severity.ERROR, code=code, message=message, remedy=remedy, file=file, key=key
    )
