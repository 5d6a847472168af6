"""Hollin Bank Winding Room, an invented workshop: its bench, its stock, how it notes sweeps."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field, replace
from datetime import date

from reportgen.model import (
    BenchSheet,
    BuildSheet,
    Calibration,
    Compensation,
    Core,
    Limits,
    Load,
    OwnBand,
    Part,
    Setup,
    SweepEntry,
    ThermalEntry,
)


@dataclass(frozen=True, kw_only=True)
class Made:
    """Properties of a build's units that no sidecar tells; leakage referred to the low side.

    `leakage_times` makes a unit unlike the others: its leakage is so many times theirs [ratio].
    `resistance_k_per_w` and `time_constant_s` say how it warms up in its box.
    """

    material: str = "broad"
    dispersion_hz: float
    leakage_h: float
    wire_ohm: float
    self_capacitance_f: float
    leakage_times: Mapping[str, float] = field(default_factory=dict)
    resistance_k_per_w: float = 8.0
    time_constant_s: float = 900.0


@dataclass(frozen=True, kw_only=True)
class Plan:
    """How a build is swept: points from edge to edge, and how its files are written.

    In segments: seven points in every band, the others spread evenly over the range.
    """

    points: int
    from_hz: float = 1.5e6
    to_hz: float = 30e6
    segments: bool = True
    form: str = "RI"
    unit: str = "MHz"


@dataclass(frozen=True, kw_only=True)
class Example:
    """One build: `sheet` is its sidecar, `made` adds what only the simulation knows."""

    folder: str
    sheet: BuildSheet
    made: Made
    plan: Plan


BENCH_SHEET = BenchSheet(
    title="Autumn 2026 on the bench (simulated)",
    publisher="Hollin Bank Winding Room",
    baseline="alder",
    region=1,
    power_w=60,
    limits={
        "all": Limits(swr=2.5, efficiency_percent=80),
        "40 m": Limits(swr=2.0, efficiency_percent=88),
        "20 m": Limits(swr=2.0, efficiency_percent=88),
    },
    own_band=(OwnBand(name="Marine", from_mhz=6.2, to_mhz=6.525),),
    duty={"voice, processed": 50},
    calibrations={
        "september": Calibration(grade="handheld", performed_on=date(2026, 9, 12)),
        "october": Calibration(grade="handheld", performed_on=date(2026, 10, 10)),
        "november": Calibration(grade="bench", performed_on=date(2026, 11, 7)),
    },
    loads={
        "main": Load(resistance_ohm=3185, tolerance_percent=0.5),
        "middle": Load(resistance_ohm=2427, tolerance_percent=0.5),
        "light": Load(resistance_ohm=806, tolerance_percent=1),
        "small": Load(resistance_ohm=448.5, tolerance_percent=0.5),
        "series": Load(resistance_ohm=2402, tolerance_percent=0.5, body_pf=0.12),
    },
)

# --- stock of the workshop -----------------------------------------------------------------------

RING_36 = Core(
    outer_mm=36.0,
    inner_mm=23.0,
    height_mm=15.0,
    initial_permeability=600,
    material="nickel-zinc ferrite",
    temperature_limit_c=90,
    flux_limit_mt=40,
)
RINGS_36 = replace(RING_36, stack=2)
RINGS_36_HIGH = Core(
    outer_mm=35.55,
    inner_mm=23.0,
    height_mm=12.7,
    stack=2,
    initial_permeability=800,
    material="nickel-zinc ferrite, second grade",
    temperature_limit_c=85,
    flux_limit_mt=40,
)
RING_61 = Core(
    outer_mm=61.0,
    inner_mm=35.55,
    height_mm=12.7,
    initial_permeability=400,
    material="nickel-zinc ferrite, low permeability",
    temperature_limit_c=100,
    flux_limit_mt=40,
)
RINGS_61 = replace(RING_61, stack=2)
BENCH_RECORD = {"data": "simulated", "operator": "bench 1", "cables": "0.6 m, phase stable"}
HANDHELD_RECORD = {"data": "simulated", "operator": "bench 2", "cables": "0.3 m, thin"}


def capacitor(picofarad: float, rated_v: float = 1000) -> Compensation:
    """A mica capacitor across the low side."""
    return Compensation(
        capacitor_pf=picofarad, tolerance_percent=5, rated_v=rated_v, loss_tangent=0.001
    )


def parts(ring: str, rings: int, wire: str, length_m: float, picofarad: int) -> tuple[Part, ...]:
    """Parts list of one unit."""
    return (
        Part(name=ring, quantity=rings, note="the grade that was measured: grades differ in loss"),
        Part(name=f"enamelled copper wire, {wire}", quantity=length_m, note="metres"),
        Part(name=f"mica capacitor, {picofarad} pF", quantity=1, note="across the low side"),
        Part(name="coaxial socket, 50 ohm", quantity=1),
        Part(name="binding post", quantity=2),
    )


def pair(
    file: str, calibration: str, units: tuple[str, str] = ("A", "B"), repeat: int = 1
) -> SweepEntry:
    """Two units back to back."""
    return SweepEntry(
        file=file,
        setup=Setup.BACK_TO_BACK,
        units=units,
        calibration=calibration,
        repeat=repeat,
    )


def single(
    file: str, setup: Setup, calibration: str, unit: str | None = "A", load: str | None = None
) -> SweepEntry:
    """One unit, or none, in any other set-up."""
    return SweepEntry(file=file, setup=setup, unit=unit, load=load, calibration=calibration)


def heat_run(power_w: float) -> tuple[ThermalEntry, ...]:
    """Unit A under power at 7.1 MHz until it hardly gets warmer."""
    return (ThermalEntry(file="warm-up.csv", unit="A", power_w=power_w, frequency_mhz=7.1),)


def both_loaded(load: str, calibration: str, folder: str = "") -> tuple[SweepEntry, ...]:
    """Load sweeps of units A and B."""
    return tuple(
        single(f"{folder}{unit.lower()}-load.s1p", Setup.LOAD, calibration, unit, load)
        for unit in "AB"
    )
