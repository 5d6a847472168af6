"""What a report says beside its figures: set-ups, ranges, findings, the build, its files."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from reportgen.model import (
    SETUPS_WITHOUT_UNIT,
    Bandwidth,
    BenchSheet,
    Build,
    BuildResult,
    BuildSheet,
    Finding,
    Load,
    Measurement,
    Setup,
    Severity,
    SweepEntry,
)
from reportgen.pages.display import bandwidth_range, entered, with_unit
from reportgen.pages.sentences import counted, listed, rated_power
from reportgen.pages.tables import Cell, Column, Row, Table
from reportgen.pages.wording import SETUP_NAMES, criterion_words, ohms

_LONGEST_DOUBT = 100
_HASH_LETTERS = 12
_TIMES = "\u00d7"


def _words_table(
    caption: str, corner: str, labels: Sequence[str], rows: Sequence[tuple[str, ...]]
) -> Table | None:
    if not rows:
        return None
    return Table(
        caption=caption,
        corner=corner,
        columns=tuple(Column(label=label, words=True) for label in labels),
        groups=tuple(
            (Row(head=head, cells=tuple(Cell(text=text, look="words") for text in texts)),)
            for head, *texts in rows
        ),
    )


# --- how it was measured -------------------------------------------------------------------------


def setups_table(build: Build, bench: BenchSheet) -> Table | None:
    """Every sweep, how it was taken and under which calibration."""
    rows = [_setup_row(measurement, bench) for measurement in build.measurements]
    labels = ("Set-up", "Unit", "Load", "Calibration")
    return _words_table("Sweeps, and how they were taken.", "File", labels, rows)


def setups_of(build: Build) -> tuple[Setup, ...]:
    """The set-ups used, each once, in the order of the sweeps."""
    return tuple(dict.fromkeys(one.entry.setup for one in build.measurements))


def _setup_row(measurement: Measurement, bench: BenchSheet) -> tuple[str, ...]:
    entry = measurement.entry
    setup = SETUP_NAMES[entry.setup] + (f", time {entry.repeat}" if entry.repeat > 1 else "")
    return (
        entry.file,
        setup,
        units_words(entry),
        _load_words(measurement.load, bench.locale),
        _calibration_words(entry, bench),
    )


def units_words(entry: SweepEntry) -> str:
    """The units in a sweep: one, or the pair."""
    if entry.units is not None or entry.setup.value == "back-to-back":
        return " to ".join(entry.pair)
    if entry.setup in SETUPS_WITHOUT_UNIT:
        return entry.unit or "none"
    return entry.unit or "A"


def _load_words(load: Load | None, locale: str) -> str:
    if load is None:
        return "none"
    tolerance = with_unit(entered(load.tolerance_percent, locale=locale), "%")
    return f"{ohms(load.resistance_ohm, locale)} \u00b1\u00a0{tolerance}"


def _calibration_words(entry: SweepEntry, bench: BenchSheet) -> str:
    only = next(iter(bench.calibrations)) if len(bench.calibrations) == 1 else None
    name = entry.calibration or only
    if name is None or name not in bench.calibrations:
        return name or "not stated; handheld grade assumed"
    calibration = bench.calibrations[name]
    day = "" if calibration.performed_on is None else f", {calibration.performed_on.isoformat()}"
    return f"{name}: {calibration.grade} grade{day}"


# --- ranges --------------------------------------------------------------------------------------


def bandwidth_table(bandwidths: Sequence[Bandwidth], locale: str) -> Table | None:
    """Contiguous ranges in which a criterion holds, and where only the sweep ended them."""
    rows = [
        (
            criterion_words(one.criterion, locale),
            f"{bandwidth_range(one.from_hz, one.to_hz, locale=locale)}\u00a0MHz",
            _edge_words(one),
        )
        for one in bandwidths
    ]
    caption = "Contiguous ranges in which a criterion holds."
    return _words_table(caption, "Criterion", ("Range", "Ends"), rows)


def _edge_words(bandwidth: Bandwidth) -> str:
    if bandwidth.from_sweep_edge and bandwidth.to_sweep_edge:
        return "both ends are those of the sweep: the range may be wider"
    if bandwidth.from_sweep_edge:
        return "begins where the sweep begins: it may reach lower"
    if bandwidth.to_sweep_edge:
        return "ends where the sweep ends: it may reach higher"
    return "both ends were measured"


# --- findings ------------------------------------------------------------------------------------


@dataclass(frozen=True, kw_only=True, slots=True)
class FindingText:
    """A finding in words; `where` is its file, line and key, or empty."""

    severity: str
    label: str
    where: str
    message: str
    remedy: str


def finding_texts(findings: Sequence[Finding]) -> tuple[FindingText, ...]:
    """Findings in words, errors first."""
    order = ["error", "warning", "note"]
    ranked = sorted(findings, key=lambda finding: order.index(finding.severity.value))
    return tuple(_finding_text(finding) for finding in ranked)


def _finding_text(finding: Finding) -> FindingText:
    line = None if finding.line is None else f"line {finding.line}"
    where = ", ".join(part for part in (finding.file, line, finding.key) if part)
    return FindingText(
        severity=finding.severity.value,
        label=finding.severity.value.capitalize(),
        where=where,
        message=finding.message,
        remedy=finding.remedy,
    )


def doubts_words(findings: Sequence[Finding]) -> str:
    """The first of the errors and warnings, and how many more there are; empty: none."""
    grave = [one for one in findings if one.severity is not Severity.NOTE]
    if not grave:
        return ""
    first = min(grave, key=lambda one: list(Severity).index(one.severity))
    message = f"{first.file}: {first.message}" if first.file else first.message
    others = len(grave) - 1
    more = f" {others} more under Findings." if others else ""
    return f"{message[:_LONGEST_DOUBT]}{'...' * (len(message) > _LONGEST_DOUBT)}.{more}"


# --- the build -----------------------------------------------------------------------------------


def build_facts(result: BuildResult, locale: str) -> tuple[tuple[str, str], ...]:
    """What the build is, as pairs of a name and words."""
    sheet = result.build.sheet
    facts = [
        ("Winding", _winding_words(sheet, locale)),
        ("Core", _core_words(sheet, locale)),
        ("Capacitor", _capacitor_words(sheet, locale)),
        ("Meant for", _match_words(sheet, locale)),
        ("Design power", _rating_words(result, locale)),
        ("Measured on", sheet.measured_on.isoformat() if sheet.measured_on else "not stated"),
    ]
    facts += [
        (name.replace("_", " "), _record_words(value, locale))
        for name, value in sheet.record.items()
    ]
    return tuple(facts)


def _winding_words(sheet: BuildSheet, locale: str) -> str:
    winding = sheet.winding
    low, high = (entered(turns, locale=locale) for turns in (winding.low_turns, winding.high_turns))
    kind = "separate windings" if winding.isolated else "one tapped winding"
    wire = f", wire {_millimetres(winding.wire_mm, locale)}" if winding.wire_mm else ""
    return f"{low} turns to {high}, {kind}{wire}"


def _core_words(sheet: BuildSheet, locale: str) -> str:
    core = sheet.core
    if core is None:
        return "not stated"
    sizes = f"\u00a0{_TIMES}\u00a0".join(
        entered(size, locale=locale) for size in (core.outer_mm, core.inner_mm, core.height_mm)
    )
    parts = [f"{counted(core.stack, 'ring')}, {sizes}\u00a0mm", core.material]
    if core.initial_permeability is not None:
        parts.append(f"initial permeability {entered(core.initial_permeability, locale=locale)}")
    return ", ".join(part for part in parts if part)


def _millimetres(size: float, locale: str) -> str:
    return with_unit(entered(size, locale=locale), "mm")


def _capacitor_words(sheet: BuildSheet, locale: str) -> str:
    capacitor = sheet.compensation
    if capacitor.capacitor_pf == 0:
        return "none"
    size = with_unit(entered(capacitor.capacitor_pf, locale=locale), "pF")
    tolerance = with_unit(entered(capacitor.tolerance_percent, locale=locale), "%")
    volts = "" if capacitor.rated_v is None else f", {entered(capacitor.rated_v)}\u00a0V DC"
    return f"{size} \u00b1\u00a0{tolerance} across the {capacitor.side} side{volts}"


def _match_words(sheet: BuildSheet, locale: str) -> str:
    source = ohms(sheet.match.source_ohm, locale)
    return f"{source} to {ohms(sheet.nominal_load_ohm, locale)}"


def _rating_words(result: BuildResult, locale: str) -> str:
    rating = result.build.sheet.rating
    parts = [
        rated_power(result, locale),
        f"load SWR up to {entered(rating.load_swr, locale=locale)}",
        f"air up to {entered(rating.ambient_max_c, locale=locale)}\u00a0\u00b0C",
        rating.enclosure,
    ]
    return ", ".join(part for part in parts if part)


def _record_words(value: str | int | float, locale: str) -> str:
    return value if isinstance(value, str) else entered(float(value), locale=locale)


def parts_table(sheet: BuildSheet, locale: str) -> Table | None:
    """The parts list."""
    rows = [
        (
            part.name,
            "as needed" if part.quantity is None else entered(part.quantity, locale=locale),
            part.note,
        )
        for part in sheet.part
    ]
    return _words_table("Parts list.", "Part", ("Quantity", "Note"), rows)


def inputs_table(build: Build) -> Table | None:
    """The files read, so that anybody can tell whether they hold the same ones."""
    rows = [
        (
            one.file,
            "no sweep" if one.points is None else str(one.points),
            one.sha256[:_HASH_LETTERS],
        )
        for one in build.inputs
    ]
    return _words_table("Files read.", "File", ("Points", "SHA-256 begins"), rows)


def chosen_units_words(result: BuildResult) -> str:
    """Whose figures the report shows."""
    chosen = result.chosen
    if chosen.unit is not None:
        return f"The figures are those of unit {chosen.unit}"
    if len(chosen.units) == 1:
        return f"The figures are those of unit {chosen.units[0]}"
    return f"The figures are the mean over units {listed(chosen.units)}"
