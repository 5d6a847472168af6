"""What every key of both sidecars means, in words and with an example.

The JSON Schema and the starter sidecars are written from this table; kinds, ranges and defaults
stand in the model.
"""

from __future__ import annotations

from datetime import date
from typing import Any, NamedTuple

from reportgen.model import (
    BenchSheet,
    BuildSheet,
    Calibration,
    Compensation,
    Core,
    Limits,
    Load,
    Match,
    OwnBand,
    Part,
    Rating,
    Setup,
    Sheet,
    SweepEntry,
    ThermalEntry,
    Winding,
)


class Key(NamedTuple):
    """Meaning of a key, its unit in brackets, and a value that could stand there."""

    words: str
    example: Any = None


SHEET_TITLES: dict[type[Sheet], str] = {
    BenchSheet: "What is common to the bench (runs.toml)",
    BuildSheet: "One build (build.toml)",
    OwnBand: "A band of any service",
    Limits: "Acceptance limits",
    Calibration: "One calibration of the analyzer",
    Load: "A resistor",
    Winding: "Winding",
    Core: "Ring core",
    Compensation: "Compensation capacitor",
    Match: "What is to be matched",
    Rating: "What the build is asked to stand",
    SweepEntry: "One sweep",
    ThermalEntry: "One temperature log",
    Part: "One part",
}

SETUP_WORDS = {
    Setup.BACK_TO_BACK: "two units, their high sides joined, a low side on each port",
    Setup.LOAD: "low side swept, a known resistor on the high side",
    Setup.OPEN: "low side swept, high side open",
    Setup.SHORT: "low side swept, high side shorted",
    Setup.SERIES_RESISTOR: "low side on port 1, high side through a known resistor to port 2",
    Setup.DIRECT: "low side on port 1, high side on port 2",
    Setup.LOAD_CHECK: "the bare load resistor",
    Setup.RESISTOR_CHECK: "the bare series resistor between the ports",
    Setup.THRU_CHECK: "the fixture without a unit",
    Setup.ANTENNA: "an antenna by itself, to be driven through the build in the forecast",
    Setup.SPOT: "a table of through losses of a pair, read off a screen",
}

_RESIDUAL = "left over [dB]; by grade if left out"
_EITHER_WAY = "either way [dB]; by grade if left out"

KEYS: dict[type[Sheet], dict[str, Key]] = {
    BenchSheet: {
        "schema": Key("version of this file's layout"),
        "title": Key("head of the pages", "Autumn on the bench"),
        "publisher": Key("who publishes", "Example Workshop"),
        "baseline": Key("key of the build that the others are compared with", "alder"),
        "region": Key("ITU region of the amateur bands", 1),
        "bands": Key("bands that are reported; all that a sweep touches if left out", ["40 m"]),
        "power_w": Key("rated power where a build names none [W]", 100),
        "paper": Key("paper of the PDFs", "A4"),
        "locale": Key("language tag; sets the decimal sign on pages", "en"),
        "limits": Key('acceptance limits by band, or for "all"'),
        "own_band": Key("bands of other services"),
        "duty": Key("mean power over peak power by mode [%]", {"voice, processed": 50}),
        "calibrations": Key("calibrations of the analyzer, by a name of your own"),
        "loads": Key("resistors of the bench, by a name of your own"),
    },
    OwnBand: {
        "name": Key("name on the pages", "Coast station"),
        "from_mhz": Key("lower edge [MHz]", 4.063),
        "to_mhz": Key("upper edge [MHz]", 4.438),
    },
    Limits: {
        "swr": Key("largest SWR at the low side, judged on the worst in the band", 2.0),
        "efficiency_percent": Key("least efficiency, judged on the worst in the band [%]", 80),
    },
    Calibration: {
        "grade": Key("what the calibration is taken to leave", "handheld"),
        "performed_on": Key("day of the calibration", date(2026, 10, 4)),
        "directivity_db": Key(f"directivity {_RESIDUAL}", 42),
        "source_match_db": Key(f"source match {_RESIDUAL}", 36),
        "load_match_db": Key(f"load match {_RESIDUAL}", 33),
        "tracking_db": Key(f"tracking error {_EITHER_WAY}", 0.05),
        "isolation_db": Key(f"isolation {_RESIDUAL}", 70),
        "noise_db": Key("noise below full scale [dB]; by grade if left out", 74),
        "drift_db": Key("drift below full scale [dB]; by grade if left out", 60),
        "connection_db": Key(f"gain of a connection {_EITHER_WAY}", 0.02),
    },
    Load: {
        "resistance_ohm": Key("measured, not as printed on the part [ohm]", 2450),
        "tolerance_percent": Key("half-width of its tolerance [%]", 0.5),
        "stray_pf": Key(
            'capacitance to ground beyond that at the open [pF]; "fit": by the sweeps',
            "fit",
        ),
        "body_pf": Key("capacitance across its body, in series set-ups [pF]", 0.1),
    },
    BuildSheet: {
        "schema": Key("version of this file's layout"),
        "name": Key("name of the build on the pages", "Alder"),
        "summary": Key("the build in one line", "One ring, 3 turns to 24"),
        "measured_on": Key("day of the sweeps", date(2026, 10, 4)),
        "notes": Key("free text", "leads of the load 15 mm"),
        "winding": Key("turns of both sides"),
        "core": Key("a ring core, or a stack of them: for heat, flux and permeability"),
        "compensation": Key("capacitor across one side; leave the table out where there is none"),
        "match": Key("source and load; without it 50 ohm, and that times the turns ratio squared"),
        "rating": Key("power and surroundings that the build has to stand"),
        "sweep": Key("sweep files and how each was taken"),
        "thermal": Key("temperature logs under power"),
        "part": Key("parts list of one unit"),
        "record": Key("keys of your own, printed as they stand", {"operator": "bench 1"}),
        "loads": Key("resistors of this build alone, by a name of your own"),
    },
    Winding: {
        "low_turns": Key("turns of the low side, the 50-ohm side", 3),
        "high_turns": Key("turns of the high side, those below a tap included", 24),
        "isolated": Key("true: separate windings; false: a tapped winding", False),
        "wire_mm": Key("diameter of the wire [mm]", 0.8),
        "temperature_limit_c": Key("highest temperature of the wire [C]", 120),
    },
    Core: {
        "outer_mm": Key("outer diameter [mm]", 36.0),
        "inner_mm": Key("inner diameter [mm]", 23.0),
        "height_mm": Key("height of one ring [mm]", 15.0),
        "stack": Key("how many rings", 1),
        "initial_permeability": Key("initial permeability as the maker states it", 620),
        "material": Key("free text", "nickel-zinc ferrite"),
        "temperature_limit_c": Key("highest temperature of the core [C]", 90),
        "flux_limit_mt": Key("largest peak flux density that you allow [mT]", 20),
    },
    Compensation: {
        "capacitor_pf": Key("capacitance [pF]; 0: none", 82),
        "side": Key("the side that it lies across", "low"),
        "tolerance_percent": Key("half-width of its tolerance [%]", 5),
        "rated_v": Key("rated voltage, DC [V]", 500),
        "loss_tangent": Key("loss tangent [ratio]", 0.001),
    },
    Match: {
        "source_ohm": Key("resistance of the source [ohm]", 50),
        "load_ohm": Key("load to be matched [ohm]", 3200),
    },
    Rating: {
        "power_w": Key("rated power, peak envelope [W]", 60),
        "load_swr": Key("mismatch at the load that the ratings allow for", 2.0),
        "ambient_max_c": Key("hottest surroundings [C]", 40),
        "enclosure": Key("free text", "sealed box"),
        "enclosure_limit_c": Key("highest temperature of the box [C]", 70),
    },
    SweepEntry: {
        "file": Key("name of the file, relative to this folder, with forward slashes", "ab.s2p"),
        "setup": Key("how the unit was connected", "back-to-back"),
        "unit": Key('the unit that was swept; "A" if left out', "A"),
        "units": Key('both units of a pair, the one on port 1 first; "A" and "B" if left out'),
        "load": Key("which resistor of [loads]; may be left out where there is just one", "main"),
        "calibration": Key("which calibration; may be left out where there is just one", "evening"),
        "repeat": Key("2, 3, ...: the same connection made anew", 2),
        "frequency_unit": Key("unit of the file's frequencies, where the file says it wrongly"),
        "decimal": Key("decimal sign of the file's numbers"),
        "reverse_ports": Key("true: ports 1 and 2 of the file are exchanged"),
    },
    ThermalEntry: {
        "file": Key("CSV with the columns time_s, core_c, ambient_c", "warmup.csv"),
        "power_w": Key("power that entered the build [W]", 50),
        "frequency_mhz": Key("frequency of that power [MHz]", 7.1),
        "unit": Key("the unit that was heated", "A"),
    },
    Part: {
        "name": Key("what it is", "ring core, 36 mm"),
        "quantity": Key("how many, or how much", 1),
        "note": Key("free text", "any nickel-zinc grade of this permeability"),
    },
}
