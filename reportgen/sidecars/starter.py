"""The text of a starter `build.toml`: what the sweeps say, what they leave open, what may be added.

What no sweep can tell stands as a value that the reader refuses, so that nothing is published
from a guess.
"""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterator
from dataclasses import dataclass

from reportgen.intake.sidecar import LOADED_SETUPS
from reportgen.model import (
    BenchSheet,
    BuildSheet,
    Compensation,
    Core,
    Load,
    Match,
    Part,
    Rating,
    Setup,
    Sheet,
    ThermalEntry,
    Winding,
)
from reportgen.pages.display import megahertz
from reportgen.pages.plain_text import clean_text
from reportgen.sidecars.found import Found, FoundSweep
from reportgen.sidecars.key_words import KEYS
from reportgen.sidecars.optional_tables import optional_keys, optional_table
from reportgen.sidecars.suggestions import resistor_words, turns_words
from reportgen.sidecars.toml_text import comment, entry

UNKNOWN = "?"
_HEAD = (
    "A starter, written from the sweeps in this folder. Guesses stand with their reason: see that "
    "they are right. Enter what is marked ENTER; nothing is published before. A line that begins "
    "with # and no blank is out of use: take the # away to use it."
)
_REPEATED = frozenset(Setup) - {Setup.ANTENNA, Setup.SPOT, Setup.THRU_CHECK}
_CAPACITOR = (
    "ENTER where there is a capacitor: without this table there is none, and one that is not said "
    "can cost 0.2 dB"
)
_OPTIONAL: tuple[tuple[str, type[Sheet], str], ...] = (
    ("[core]", Core, "the ring: without it no flux, no surface heat and no permeability"),
    (
        "[match]",
        Match,
        "source and load: without it 50 ohm, and that times the turns ratio squared",
    ),
    ("[rating]", Rating, "what it has to stand: without it the rated power of runs.toml"),
    ("[[part]]", Part, "the parts list of one unit, a table for each part"),
)


@dataclass(frozen=True, kw_only=True, slots=True)
class Starter:
    """A starter sidecar, and the key paths that are still to be entered."""

    text: str
    to_enter: tuple[str, ...]


def build_starter(found: Found, bench: BenchSheet) -> Starter:
    """`build.toml` for the sweeps found in a folder.

    Parameters
    ----------
    found : Found
        What lies in the folder.
    bench : BenchSheet
        Its resistors and calibrations are those that a sweep may name.
    """
    plan = _Plan(found, bench)
    lines = [
        *comment(_HEAD),
        "schema = 1",
        *entry("name", _name(found.folder), "from the folder's name"),
        *optional_keys(BuildSheet, "summary", "measured_on", "notes"),
        *_winding(found, bench),
        *optional_table("[compensation]", Compensation, _CAPACITOR),
        *(line for number, one in enumerate(found.sweeps, 1) for line in plan.sweep(one, number)),
        *(line for file in found.spots for line in plan.spot(file)),
        *plan.own_loads(),
        *_set_aside(found),
        *(line for each in _OPTIONAL for line in optional_table(*each)),
        *_record(),
        "",
    ]
    return Starter(text="\n".join(lines), to_enter=("winding.low_turns", *plan.to_enter))


def _name(folder: str) -> str:
    name = clean_text(folder).replace("_", " ").strip()[:120]
    return name[:1].upper() + name[1:] if name else "Build"


def _winding(found: Found, bench: BenchSheet) -> Iterator[str]:
    yield from ("", "[winding]")
    for words in turns_words(found, bench):
        yield from comment(words)
    for key in ("low_turns", "high_turns"):
        yield from entry(key, 0, f"ENTER: {KEYS[Winding][key].words}")
    yield from optional_keys(Winding, "isolated", "wire_mm", "temperature_limit_c")


class _Plan:
    """How the sweeps are written down, and which of their keys are still to be entered."""

    def __init__(self, found: Found, bench: BenchSheet) -> None:
        self.found, self.bench = found, bench
        self.to_enter = ["winding.high_turns"]
        self.own: dict[str, list[FoundSweep]] = {}
        self.taken: Counter[tuple[str, ...]] = Counter()
        self.load_names = self._load_names()

    def _load_names(self) -> dict[str, str]:
        """The load of each file that has one, where the bench does not know any."""
        if self.bench.loads:
            return {}
        loads = self.found.of(Setup.LOAD, Setup.LOAD_CHECK)
        series = self.found.of(Setup.SERIES_RESISTOR, Setup.RESISTOR_CHECK)
        self.own = {"main": loads, "series": series} if loads and series else {}
        self.own = self.own or ({"main": loads + series} if loads + series else {})
        return {one.file: name for name, sweeps in self.own.items() for one in sweeps}

    def sweep(self, one: FoundSweep, number: int) -> Iterator[str]:
        """One `[[sweep]]`, with why it is thought to be that."""
        setup = one.guess.setup
        yield from ("", *comment(_seen(one)), "[[sweep]]", *entry("file", one.file))
        yield from comment(_why(one))
        yield from entry("setup", setup.value, "" if not one.guess.others else "GUESS, see above")
        units = _units(one)
        yield from _unit_line(one, units)
        if repeat := self._repeat(one, units):
            yield from entry("repeat", repeat, "the same connection made anew, by the files here")
        if setup in LOADED_SETUPS:
            yield from self._load(one, number)
        yield from self._calibration(number)

    def spot(self, file: str) -> Iterator[str]:
        """Readings off a screen."""
        yield from ("", *comment("a table of through losses, by its heading"), "[[sweep]]")
        yield from entry("file", file)
        yield from entry("setup", Setup.SPOT.value)

    def _repeat(self, one: FoundSweep, units: tuple[str, ...]) -> int:
        """2, 3, ... for the second and third file of one connection; 0 for the first."""
        if one.guess.setup not in _REPEATED:
            return 0
        connection = (one.guess.setup.value, *units)
        self.taken[connection] += 1
        return self.taken[connection] if self.taken[connection] > 1 else 0

    def _load(self, one: FoundSweep, number: int) -> Iterator[str]:
        known = self.bench.loads
        if len(known) == 1:
            yield from comment(f"load: the only one of runs.toml, {next(iter(known))}")
        elif known:
            self.to_enter.append(f"sweep[{number}].load")
            names = ", ".join(
                f"{name} ({load.resistance_ohm:g} ohm)" for name, load in known.items()
            )
            yield from entry("load", UNKNOWN, f"ENTER one of runs.toml: {names}")
        elif len(self.own) > 1:
            yield from entry("load", self.load_names[one.file])

    def _calibration(self, number: int) -> Iterator[str]:
        known = self.bench.calibrations
        if len(known) > 1:
            self.to_enter.append(f"sweep[{number}].calibration")
            yield from entry("calibration", UNKNOWN, f"ENTER one of runs.toml: {', '.join(known)}")

    def own_loads(self) -> Iterator[str]:
        """A table for each resistor that the bench does not know."""
        for name, sweeps in self.own.items():
            self.to_enter.append(f"loads.{name}.resistance_ohm")
            yield from ("", *comment(f"the resistor of {', '.join(one.file for one in sweeps)}"))
            yield from (
                line
                for one in sweeps
                for words in resistor_words(one, self.found)
                for line in comment(words)
            )
            yield f"[loads.{name}]"
            words = KEYS[Load]["resistance_ohm"].words
            yield from entry("resistance_ohm", 0, f"ENTER: {words}")
            yield from optional_keys(Load, "tolerance_percent", "stray_pf", "body_pf")


# --- one sweep -----------------------------------------------------------------------------------


def _seen(one: FoundSweep) -> str:
    """What the file is, whatever it was taken for."""
    sweep = one.sweep
    hz = sweep.frequency_hz
    ports = "one port" if sweep.ports == 1 else "two ports"
    path = ", S12 and S22 zero: one path was measured" if sweep.one_path else ""
    points = "1 point" if len(hz) == 1 else f"{len(hz)} points"
    return f"{ports}, {points}, {megahertz(hz[0])} to {megahertz(hz[-1])} MHz{path}"


def _why(one: FoundSweep) -> str:
    """Reason of the guess, what the name adds, and what else it might be."""
    guess = one.guess
    others = " or ".join(f'"{setup.value}"' for setup in guess.others)
    if not guess.others:
        return f"{guess.reason}{'; the name says so too' if one.by_name else ''}"
    if one.by_name:
        return f"by the name; of itself it says: {guess.reason}; else it may be {others}"
    return f"{guess.reason}; else it may be {others}"


def _units(one: FoundSweep) -> tuple[str, ...]:
    if one.guess.setup is Setup.BACK_TO_BACK:
        return one.units[:2] if len(one.units) > 1 else ("A", "B")
    return one.units[:1] or ("A",)


def _unit_line(one: FoundSweep, units: tuple[str, ...]) -> Iterator[str]:
    if one.guess.setup in (Setup.LOAD_CHECK, Setup.RESISTOR_CHECK, Setup.THRU_CHECK, Setup.ANTENNA):
        return
    named = len(one.units) >= len(units)
    if len(units) > 1:
        source = "by the name" if named else "GUESS, the name does not say"
        yield from entry("units", list(units), f"{source}; the one on port 1 first")
    else:
        yield from entry(
            "unit", units[0], "by the name" if named else "GUESS, the name does not say"
        )


# --- the rest ------------------------------------------------------------------------------------


def _set_aside(found: Found) -> Iterator[str]:
    """Temperature logs, which ask for more than a file, and what could not be read."""
    for file in found.logs:
        words = "a temperature log, by its heading; used once power and frequency are entered"
        yield from ("", *comment(words), "#[[thermal]]")
        yield from entry("file", file, in_use=False)
        for key, value in (("power_w", 0), ("frequency_mhz", 0), ("unit", "A")):
            yield from entry(key, value, KEYS[ThermalEntry][key].words, in_use=False)
    for file, reason in found.unusable.items():
        yield from ("", *comment(f"left out: {file}: {reason}"))


def _record() -> Iterator[str]:
    yield from ("", *comment("keys of your own, printed as they stand"), "#[record]")
    yield from entry("operator", "bench 1", in_use=False)
    yield from entry("temperature_c", 20, in_use=False)
