"""Units of known truth: a distributed winding on a lossy core, not the section of the methods.

From the low side: fixture lead, capacitor, leakage and wire of the low winding, a ladder in which
the rest of the leakage and the core alternate, an ideal transformer, leakage of the high winding,
self-capacitance and the fixture's capacitance. The permeability disperses.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from reportgen.physics.network import (
    Chain,
    efficiency_ratio,
    ideal_transformer,
    line,
    series_arm,
    shunt_arm,
)

MU_0 = 4e-7 * np.pi
LIGHT_M_S = 299792458.0
SECTIONS = 12


@dataclass(frozen=True, kw_only=True)
class Unit:
    """One physical unit; lengths in metres, inductances referred to the low side."""

    low_turns: float
    high_turns: float
    core_factor_per_m: float  # C1 of the (stacked) ring
    initial_permeability: float
    dispersion_hz: float  # where the lossy part peaks, more or less
    material: str  # which law of dispersion
    leakage_low_h: float
    leakage_ladder_h: float
    leakage_high_h: float  # still referred to the low side
    wire_ohm: float  # at 1 MHz, whole winding, referred to the low side
    self_capacitance_f: float  # across the high side
    fixture_capacitance_f: float  # across the high side, present at the open and at the join
    lead_m: float
    capacitor_f: float
    capacitor_loss: float

    @property
    def turns_ratio(self) -> float:
        return self.high_turns / self.low_turns


def core_factor_per_m(outer_mm: float, inner_mm: float, height_mm: float, stack: int = 1) -> float:
    """C1 of a ring of rectangular section (IEC 60205) [1/m]."""
    return 2 * np.pi / (stack * height_mm * 1e-3 * np.log(outer_mm / inner_mm))


def permeability(unit: Unit, frequency_hz: np.ndarray) -> np.ndarray:
    """Complex relative permeability by the material's law."""
    law = MATERIALS[unit.material]
    return 1 + (unit.initial_permeability - 1) * law(frequency_hz / unit.dispersion_hz)


def _one_broad_relaxation(f: np.ndarray) -> np.ndarray:
    """Cole-Davidson."""
    return 1 / (1 + 1j * f) ** 0.9


def _two_relaxations(f: np.ndarray) -> np.ndarray:
    """A Cole-Cole and a Havriliak-Negami term."""
    return 0.55 / (1 + (1j * f / 1.8) ** 0.85) + 0.45 / (1 + (2j * f) ** 0.95) ** 1.2


def _wall_and_spin(f: np.ndarray) -> np.ndarray:
    """A damped domain-wall resonance below the spins' relaxation."""
    return 0.45 / (1 - (f / 0.65) ** 2 + 2.2j * f / 0.65) + 0.55 / (1 + 1j * f)


MATERIALS = {
    "broad": _one_broad_relaxation,
    "double": _two_relaxations,
    "wall": _wall_and_spin,
}


def chain_of_unit(unit: Unit, frequency_hz: np.ndarray) -> Chain:
    """The unit from its low to its high side, fixture included."""
    omega = 2 * np.pi * frequency_hz
    skin_ohm = unit.wire_ohm * np.sqrt(frequency_hz / 1e6)
    magnetising_h = (
        MU_0 * unit.low_turns**2 / unit.core_factor_per_m * permeability(unit, frequency_hz)
    )
    rung = shunt_arm(1 / (1j * omega * magnetising_h) / SECTIONS)
    rail = series_arm((1j * omega * unit.leakage_ladder_h + 0.6 * skin_ohm) / SECTIONS)
    n = unit.turns_ratio
    chain = line(150.0, omega * unit.lead_m / LIGHT_M_S)
    chain = chain @ shunt_arm(omega * unit.capacitor_f * (1j + unit.capacitor_loss))
    chain = chain @ series_arm(1j * omega * unit.leakage_low_h + 0.2 * skin_ohm)
    for _ in range(SECTIONS):
        chain = chain @ rail @ rung
    chain = chain @ ideal_transformer(n)
    chain = chain @ series_arm((1j * omega * unit.leakage_high_h + 0.2 * skin_ohm) * n * n)
    return chain @ shunt_arm(1j * omega * (unit.self_capacitance_f + unit.fixture_capacitance_f))


def true_efficiency_ratio(unit: Unit, frequency_hz: np.ndarray, load_ohm: float) -> np.ndarray:
    """What a perfect wattmeter would show with the nominal load."""
    return efficiency_ratio(chain_of_unit(unit, frequency_hz), load_ohm)


def twin_of(unit: Unit, rng: np.random.Generator, spread: float = 0.02) -> Unit:
    """Another unit of the same build, wound by the same hands: everything a little different."""

    def near(value: float, times: float = 1.0) -> float:
        return value * (1 + times * spread * rng.uniform(-1, 1))

    return replace(
        unit,
        initial_permeability=near(unit.initial_permeability, 3),
        dispersion_hz=near(unit.dispersion_hz, 3),
        leakage_low_h=near(unit.leakage_low_h, 2),
        leakage_ladder_h=near(unit.leakage_ladder_h, 2),
        leakage_high_h=near(unit.leakage_high_h, 2),
        wire_ohm=near(unit.wire_ohm),
        self_capacitance_f=near(unit.self_capacitance_f, 3),
        capacitor_f=near(unit.capacitor_f),
    )


RINGS_MM = (
    (36.0, 23.0, 15.0),
    (35.55, 23.0, 12.7),
    (61.0, 35.55, 12.7),
    (63.0, 38.0, 25.0),
    (58.3, 40.8, 17.6),
)


def random_unit(rng: np.random.Generator) -> Unit:
    """A build of random make: 1:9 to 1:64 on one or two rings, compensated about right."""
    low_turns, high_turns = [(3, 9), (2, 8), (3, 15), (2, 12), (2, 14), (3, 21), (2, 16), (3, 24)][
        rng.integers(8)
    ]
    ring = RINGS_MM[rng.integers(len(RINGS_MM))]
    stack = int(rng.integers(1, 3))
    core_factor = core_factor_per_m(*ring, stack)
    permeability_i = float(np.exp(rng.uniform(np.log(250), np.log(900))))
    leakage_h = rng.uniform(0.06, 0.20) * 1e-6
    low, ladder = rng.uniform(0.2, 0.5), rng.uniform(0.2, 0.4)
    return Unit(
        material=list(MATERIALS)[rng.integers(len(MATERIALS))],
        low_turns=low_turns,
        high_turns=high_turns,
        core_factor_per_m=core_factor,
        initial_permeability=permeability_i,
        dispersion_hz=rng.uniform(4e9, 8e9) / permeability_i,
        leakage_low_h=leakage_h * low,
        leakage_ladder_h=leakage_h * ladder,
        leakage_high_h=leakage_h * (1 - low - ladder),
        wire_ohm=rng.uniform(0.02, 0.06),
        self_capacitance_f=rng.uniform(0.3, 1.6) * 1e-12,
        fixture_capacitance_f=rng.uniform(0.1, 0.5) * 1e-12,
        lead_m=rng.uniform(0.005, 0.03),
        capacitor_f=float(np.round(leakage_h / 50**2 * rng.uniform(0.7, 1.3) * 1e12)) * 1e-12,
        capacitor_loss=rng.uniform(0.0005, 0.002),
    )
