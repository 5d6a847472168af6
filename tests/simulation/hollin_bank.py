"""The eight builds of Hollin Bank Winding Room."""

from __future__ import annotations

from datetime import date

from reportgen.model import BuildSheet, Load, Match, Rating, Setup, Winding
from simulation.workshop import (
    BENCH_RECORD,
    HANDHELD_RECORD,
    RING_36,
    RING_61,
    RINGS_36,
    RINGS_36_HIGH,
    RINGS_61,
    Example,
    Made,
    Plan,
    both_loaded,
    capacitor,
    heat_run,
    pair,
    parts,
    single,
)

ALDER = Example(
    folder="alder",
    sheet=BuildSheet(
        name="Alder",
        summary="One 36 mm ring, 3 turns to 24: the kit as sold since spring",
        measured_on=date(2026, 10, 11),
        notes="Tapped winding, the low side bifilar with the first three turns. Swept in segments, "
        "seven points in every band. The load stands on leads of about 15 mm.",
        winding=Winding(low_turns=3, high_turns=24, wire_mm=0.8),
        core=RING_36,
        compensation=capacitor(82),
        rating=Rating(power_w=60, load_swr=2.5, enclosure="sealed box, 115 x 65 x 55 mm"),
        sweep=(pair("pair-ab.s2p", "october"), *both_loaded("main", "october")),
        thermal=heat_run(25),
        part=parts("ring core, 36 mm", 1, "0.8 mm", 1.6, 82),
        record=HANDHELD_RECORD | {"temperature_c": 19.5},
    ),
    made=Made(
        dispersion_hz=6.5e6,
        leakage_h=0.175e-6,
        wire_ohm=0.05,
        self_capacitance_f=0.5e-12,
        resistance_k_per_w=12.5,
        time_constant_s=600,
    ),
    plan=Plan(points=201),
)
BIRCH = Example(
    folder="birch",
    sheet=BuildSheet(
        name="Birch",
        summary="Two 36 mm rings, 3 turns to 24: the kit's winding on twice the core",
        measured_on=date(2026, 11, 8),
        notes="Rings glued face to face and taped before winding. The longer turns ask for a "
        "larger capacitor than one ring does. The antenna is 20 m of wire, swept at its end.",
        winding=Winding(low_turns=3, high_turns=24, wire_mm=1.0),
        core=RINGS_36,
        compensation=capacitor(100),
        rating=Rating(power_w=100, load_swr=2.5, enclosure="sealed box, 160 x 80 x 55 mm"),
        sweep=(
            pair("pair-ab.s2p", "november"),
            *both_loaded("main", "november"),
            single("wire-20m.s1p", Setup.ANTENNA, "november", None),
        ),
        thermal=heat_run(80),
        part=parts("ring core, 36 mm", 2, "1.0 mm", 2.6, 100),
        record=BENCH_RECORD | {"temperature_c": 20.5},
    ),
    made=Made(
        dispersion_hz=6.5e6,
        leakage_h=0.21e-6,
        wire_ohm=0.05,
        self_capacitance_f=0.45e-12,
        resistance_k_per_w=8.0,
        time_constant_s=900,
    ),
    plan=Plan(points=1001, form="MA", unit="Hz"),
)
CEDAR = Example(
    folder="cedar",
    sheet=BuildSheet(
        name="Cedar",
        summary="Two 36 mm rings of higher permeability, 2 turns to 14",
        measured_on=date(2026, 9, 13),
        notes="A trial of the second grade. The analyzer measures one path only; the pair was "
        "turned round and swept again.",
        winding=Winding(low_turns=2, high_turns=14, wire_mm=0.8),
        core=RINGS_36_HIGH,
        compensation=capacitor(75, 500),
        rating=Rating(power_w=50, load_swr=2.0, enclosure="open, on a board"),
        sweep=(
            pair("pair-ab.s2p", "september"),
            pair("pair-ba.s2p", "september", ("B", "A")),
        ),
        part=parts("ring core, 35.55 mm", 2, "0.8 mm", 1.4, 75),
        record=HANDHELD_RECORD | {"temperature_c": 22.0},
    ),
    made=Made(
        material="double",
        dispersion_hz=6e6,
        leakage_h=0.16e-6,
        wire_ohm=0.05,
        self_capacitance_f=0.6e-12,
    ),
    plan=Plan(points=201, unit="kHz"),
)
HAZEL = Example(
    folder="hazel",
    sheet=BuildSheet(
        name="Hazel",
        summary="One 61 mm ring, 3 turns to 21",
        measured_on=date(2026, 11, 14),
        notes="Three units out of a lot of ten, each pair swept. The turns are spread over the "
        "whole ring.",
        winding=Winding(low_turns=3, high_turns=21, wire_mm=1.0),
        core=RING_61,
        compensation=capacitor(120),
        rating=Rating(power_w=100, load_swr=2.0, ambient_max_c=45, enclosure="vented box"),
        sweep=(
            pair("pairs/ab.s2p", "november", ("A", "B")),
            pair("pairs/ac.s2p", "november", ("A", "C")),
            pair("pairs/bc.s2p", "november", ("B", "C")),
        ),
        part=parts("ring core, 61 mm", 1, "1.0 mm", 1.9, 120),
        record=BENCH_RECORD | {"temperature_c": 20.0, "lot": "H-10"},
    ),
    made=Made(dispersion_hz=10e6, leakage_h=0.25e-6, wire_ohm=0.05, self_capacitance_f=0.6e-12),
    plan=Plan(points=601, form="DB"),
)
LINDEN = Example(
    folder="linden",
    sheet=BuildSheet(
        name="Linden",
        summary="One 36 mm ring, 3 turns to 9, for half-size verticals",
        measured_on=date(2026, 9, 19),
        notes="Swept in one go, 401 points without segments.",
        winding=Winding(low_turns=3, high_turns=9, wire_mm=1.0),
        core=RING_36,
        compensation=capacitor(56, 500),
        match=Match(source_ohm=50, load_ohm=450),
        rating=Rating(power_w=60, load_swr=2.0, enclosure="sealed box, 115 x 65 x 55 mm"),
        sweep=(pair("pair-ab.s2p", "september"), *both_loaded("small", "september")),
        part=parts("ring core, 36 mm", 1, "1.0 mm", 0.8, 56),
        record=HANDHELD_RECORD | {"temperature_c": 21.0},
    ),
    made=Made(dispersion_hz=6.5e6, leakage_h=0.16e-6, wire_ohm=0.03, self_capacitance_f=1.2e-12),
    plan=Plan(points=401, segments=False, unit="Hz"),
)
ROWAN = Example(
    folder="rowan",
    sheet=BuildSheet(
        name="Rowan",
        summary="Two 61 mm rings, 2 turns to 14, swept in every way there is",
        measured_on=date(2026, 10, 24),
        notes="Made to see how far the methods agree: a pair, loads, and unit A open, shorted and "
        "through the series resistor.",
        winding=Winding(low_turns=2, high_turns=14, wire_mm=1.0),
        core=RINGS_61,
        compensation=capacitor(68),
        rating=Rating(power_w=80, load_swr=2.0, enclosure="vented box"),
        sweep=(
            pair("pair-ab.s2p", "october"),
            *both_loaded("middle", "october"),
            single("a-open.s1p", Setup.OPEN, "october"),
            single("a-short.s1p", Setup.SHORT, "october"),
            single("a-series.s2p", Setup.SERIES_RESISTOR, "october", load="series"),
            single("checks/resistor.s2p", Setup.RESISTOR_CHECK, "october", None, "series"),
            single("checks/thru.s2p", Setup.THRU_CHECK, "october", None),
        ),
        part=parts("ring core, 61 mm", 2, "1.0 mm", 1.8, 68),
        record=HANDHELD_RECORD | {"temperature_c": 18.5},
    ),
    made=Made(dispersion_hz=5e6, leakage_h=0.15e-6, wire_ohm=0.04, self_capacitance_f=0.5e-12),
    plan=Plan(points=301, form="RI", unit="MHz"),
)
WILLOW = Example(
    folder="willow",
    sheet=BuildSheet(
        name="Willow",
        summary="Two 36 mm rings, 2 turns to 8",
        measured_on=date(2026, 11, 21),
        notes="Unit B is the first that was wound, by hand; A came off the winding jig. The "
        "pair was taken apart and joined again for the second sweep.",
        winding=Winding(low_turns=2, high_turns=8, isolated=True, wire_mm=1.2),
        core=RINGS_36,
        compensation=capacitor(47),
        rating=Rating(power_w=100, load_swr=2.0, enclosure="sealed box, 160 x 80 x 55 mm"),
        sweep=(
            pair("pair-ab.s2p", "november"),
            pair("pair-ab-again.s2p", "november", repeat=2),
            *both_loaded("light", "november"),
        ),
        part=parts("ring core, 36 mm", 2, "1.2 mm", 1.1, 47),
        record=BENCH_RECORD | {"temperature_c": 20.0},
    ),
    made=Made(
        dispersion_hz=6.5e6,
        leakage_h=0.13e-6,
        wire_ohm=0.03,
        self_capacitance_f=0.8e-12,
        leakage_times={"B": 2.0},
    ),
    plan=Plan(points=401, form="MA", unit="GHz"),
)
ELDER = Example(
    folder="portable/elder",
    sheet=BuildSheet(
        name="Elder",
        summary="One 36 mm ring, 2 turns to 8, for the rucksack",
        measured_on=date(2026, 10, 18),
        notes="One unit so far. Swept from 3 MHz: nobody carries a wire for 160 m up a hill.",
        winding=Winding(low_turns=2, high_turns=8, wire_mm=0.5),
        core=RING_36,
        compensation=capacitor(47, 500),
        rating=Rating(power_w=20, load_swr=3.0, enclosure="sealed box, 80 x 50 x 35 mm"),
        sweep=(single("a-load.s1p", Setup.LOAD, "october", "A", "clip-on"),),
        part=parts("ring core, 36 mm", 1, "0.5 mm", 0.6, 47),
        record=HANDHELD_RECORD | {"temperature_c": 17.0},
        loads={"clip-on": Load(resistance_ohm=811, tolerance_percent=1)},
    ),
    made=Made(dispersion_hz=6.5e6, leakage_h=0.19e-6, wire_ohm=0.05, self_capacitance_f=0.7e-12),
    plan=Plan(points=101, from_hz=3e6, form="DB", unit="kHz"),
)

EXAMPLES = (ALDER, BIRCH, CEDAR, HAZEL, LINDEN, ROWAN, WILLOW, ELDER)
