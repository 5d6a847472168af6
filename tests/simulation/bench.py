"""A build on the workbench: simulated units swept by a simulated analyzer, as the program gets it."""

from __future__ import annotations

import hashlib
from dataclasses import dataclass

import numpy as np

from reportgen.model import (
    BenchSheet,
    Build,
    BuildSheet,
    Calibration,
    Compensation,
    Load,
    Measurement,
    Setup,
    Sweep,
    SweepEntry,
    Winding,
)
from reportgen.physics.network import (
    Scattering,
    input_impedance_ohm,
    reflection_of_impedance,
    resistor_ohm,
)
from simulation.analyzer import BENCH, HANDHELD, Analyzer
from simulation.transformer import (
    Unit,
    chain_of_unit,
    random_unit,
    true_efficiency_ratio,
    twin_of,
)

SWEPT_HZ = np.linspace(1.5e6, 30e6, 401)
GRADES = {"bench": BENCH, "handheld": HANDHELD}


@dataclass(frozen=True)
class KnownBuild:
    """A build as swept, and the two units that it is really made of."""

    build: Build
    units: tuple[Unit, Unit]

    def true_efficiency_ratio(self, frequency_hz: np.ndarray) -> np.ndarray:
        """Mean of the two units with the nominal load."""
        load_ohm = self.build.sheet.nominal_load_ohm
        parts = [true_efficiency_ratio(unit, frequency_hz, load_ohm) for unit in self.units]
        return np.mean(parts, axis=0)


def sweep_of(
    file: str, frequency_hz: np.ndarray, s: np.ndarray, *, one_path: bool = False
) -> Sweep:
    """A sweep as the reader would hand it on."""
    return Sweep(
        file=file,
        sha256=hashlib.sha256(file.encode() + s.tobytes()).hexdigest(),
        frequency_hz=frequency_hz.copy(),
        s=s,
        reference_ohm=(50.0,) * s.shape[-1],
        one_path=one_path,
    )


def matrix_of(s: Scattering) -> np.ndarray:
    """(F, 2, 2) scattering matrices."""
    rows = np.array([[s.s11, s.s12], [s.s21, s.s22]])
    return np.moveaxis(rows, -1, 0)


def known_build(
    rng: np.random.Generator,
    *,
    grade: str = "bench",
    one_path: bool = False,
    loads: bool = True,
    stray_pf: float | None = None,
) -> KnownBuild:
    """A random build of two unequal units: their pair and, if asked for, both with a load.

    The capacitor is off by its tolerance, the load by half a percent, its stray is 3 to 5 pF.
    """
    design = random_unit(rng)
    units = (twin_of(design, rng), twin_of(design, rng))
    analyzer = Analyzer(GRADES[grade], SWEPT_HZ, rng, one_path=one_path)
    chains = [chain_of_unit(unit, SWEPT_HZ) for unit in units]
    pair = analyzer.sweep_two_port(chains[0] @ chains[1].reversed())
    pair_entry = SweepEntry(
        file="pair.s2p", setup=Setup.BACK_TO_BACK, units=("A", "B"), calibration="cal"
    )
    measurements = [
        Measurement(
            entry=pair_entry,
            sweep=sweep_of("pair.s2p", SWEPT_HZ, matrix_of(pair), one_path=one_path),
        )
    ]
    nominal_ohm = 50 * design.turns_ratio**2
    resistance_ohm = nominal_ohm * rng.uniform(0.95, 1.05)
    load = Load(
        resistance_ohm=float(resistance_ohm),
        tolerance_percent=0.5,
        stray_pf="fit" if stray_pf is None else stray_pf,
    )
    true_ohm = resistor_ohm(
        resistance_ohm * (1 + 0.005 * rng.uniform(-1, 1)), rng.uniform(3e-12, 5e-12), SWEPT_HZ
    )
    for name, chain in zip("AB", chains, strict=True):
        gamma = reflection_of_impedance(input_impedance_ohm(chain, true_ohm))
        seen = analyzer.sweep_one_port(gamma)
        if loads:
            file = f"{name.lower()}-load.s1p"
            measurements.append(
                Measurement(
                    entry=SweepEntry(
                        file=file, setup=Setup.LOAD, unit=name, load="main", calibration="cal"
                    ),
                    sweep=sweep_of(file, SWEPT_HZ, seen[:, None, None]),
                    load=load,
                )
            )
    tolerance = 1 + 0.05 * rng.uniform(-1, 1)
    sheet = BuildSheet(
        name="Simulated",
        winding=Winding(low_turns=design.low_turns, high_turns=design.high_turns),
        compensation=Compensation(capacitor_pf=float(design.capacitor_f * 1e12 / tolerance)),
    )
    build = Build(
        key="simulated", folder="simulated", sheet=sheet, measurements=tuple(measurements)
    )
    return KnownBuild(build, units)


def bench_sheet(grade: str, **settings: object) -> BenchSheet:
    """`runs.toml` that tells the truth about the analyzer's grade."""
    return BenchSheet(calibrations={"cal": Calibration(grade=grade)}, **settings)
