"""A build on the workbench: simulated units, swept by a simulated analyzer."""

from __future__ import annotations

import hashlib
from collections.abc import Sequence
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
    Chain,
    Scattering,
    efficiency_ratio,
    input_impedance_ohm,
    reflection_of_impedance,
    resistor_ohm,
    series_arm,
    shunt_arm,
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
    """A build as swept, and the units that it is really made of.

    `series_ohm` (F,) is what unit A really had on its high side in the series set-up, at SWEPT_HZ.
    """

    build: Build
    units: dict[str, Unit]
    series_ohm: np.ndarray

    def true_efficiency_ratio(self, frequency_hz: np.ndarray, units: Sequence[str]) -> np.ndarray:
        """Mean of some units with the nominal load."""
        load_ohm = self.build.sheet.nominal_load_ohm
        parts = [true_efficiency_ratio(self.units[unit], frequency_hz, load_ohm) for unit in units]
        return np.mean(parts, axis=0)

    def true_series_efficiency_ratio(self, frequency_hz: np.ndarray) -> np.ndarray:
        """Unit A with what it really had on its high side in the series set-up."""
        load_ohm = np.interp(frequency_hz, SWEPT_HZ, self.series_ohm)
        return efficiency_ratio(chain_of_unit(self.units["A"], frequency_hz), load_ohm)


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


PAIRS = (("A", "B"), ("A", "C"), ("B", "C"))


def known_build(
    rng: np.random.Generator,
    *,
    grade: str = "bench",
    one_path: bool = False,
    loads: bool = True,
    stray_pf: float | None = None,
    everything: bool = False,
    checks: bool = False,
) -> KnownBuild:
    """A random build of unequal units: their pair and, if asked for, both with a load.

    `everything` adds three pairs, open and short, the series resistor and straight-through sweeps,
    `checks` a thru and the bare series resistor.
    The capacitor is off by its tolerance, the load by half a percent, its stray is 3 to 5 pF.
    """
    design = random_unit(rng)
    units = {name: twin_of(design, rng) for name in ("ABC" if everything else "AB")}
    bench = _Bench(
        Analyzer(GRADES[grade], SWEPT_HZ, rng, one_path=one_path),
        {name: chain_of_unit(unit, SWEPT_HZ) for name, unit in units.items()},
        [],
    )
    nominal_ohm = 50 * design.turns_ratio**2
    resistance_ohm = float(nominal_ohm * rng.uniform(0.95, 1.05))
    load = Load(
        resistance_ohm=resistance_ohm,
        tolerance_percent=0.5,
        stray_pf="fit" if stray_pf is None else stray_pf,
    )
    true_ohm = resistance_ohm * (1 + 0.005 * rng.uniform(-1, 1))
    stray_f = rng.uniform(3e-12, 5e-12)
    body_f = rng.uniform(0, 0.2e-12)
    for pair in PAIRS if everything else PAIRS[:1]:
        bench.sweep_pair(pair)
    if loads:
        for name in "AB":
            bench.sweep_load(name, resistor_ohm(true_ohm, stray_f, SWEPT_HZ), load)
    if everything:
        bench.sweep_terminations("A")
        bench.sweep_series("A", resistor_ohm(true_ohm, body_f, SWEPT_HZ), stray_f, load)
        bench.sweep_direct("A")
    if checks:
        bench.sweep_checks(resistor_ohm(true_ohm, body_f, SWEPT_HZ), load)
    tolerance = 1 + 0.05 * rng.uniform(-1, 1)
    sheet = BuildSheet(
        name="Simulated",
        winding=Winding(low_turns=design.low_turns, high_turns=design.high_turns),
        compensation=Compensation(capacitor_pf=float(design.capacitor_f * 1e12 / tolerance)),
    )
    build = Build(
        key="simulated", folder="simulated", sheet=sheet, measurements=tuple(bench.measurements)
    )
    behind_ohm = resistor_ohm(true_ohm, body_f, SWEPT_HZ) + 50
    series_ohm = 1 / (1 / behind_ohm + 2j * np.pi * SWEPT_HZ * stray_f)
    return KnownBuild(build, units, series_ohm)


@dataclass(frozen=True)
class _Bench:
    """The analyzer, the units on the table, and what was swept so far."""

    analyzer: Analyzer
    chains: dict[str, Chain]
    measurements: list[Measurement]

    def sweep_pair(self, pair: tuple[str, str]) -> None:
        first, second = (self.chains[name] for name in pair)
        entry = SweepEntry(
            file=f"pair-{pair[0]}{pair[1]}.s2p".lower(),
            setup=Setup.BACK_TO_BACK,
            units=pair,
            calibration="cal",
        )
        self._two_port(entry, first @ second.reversed())

    def sweep_load(self, name: str, load_ohm: np.ndarray, load: Load) -> None:
        gamma = reflection_of_impedance(input_impedance_ohm(self.chains[name], load_ohm))
        self._one_port(name, Setup.LOAD, gamma, load)

    def sweep_terminations(self, name: str) -> None:
        chain = self.chains[name]
        self._one_port(name, Setup.OPEN, reflection_of_impedance(chain.a / chain.c))
        self._one_port(name, Setup.SHORT, reflection_of_impedance(chain.b / chain.d))

    def sweep_series(self, name: str, series_ohm: np.ndarray, stray_f: float, load: Load) -> None:
        stray = shunt_arm(2j * np.pi * SWEPT_HZ * stray_f)
        entry = SweepEntry(
            file=f"{name}-series.s2p".lower(),
            setup=Setup.SERIES_RESISTOR,
            unit=name,
            load="main",
            calibration="cal",
        )
        self._two_port(entry, self.chains[name] @ stray @ series_arm(series_ohm), load)

    def sweep_direct(self, name: str) -> None:
        entry = SweepEntry(
            file=f"{name}-direct.s2p".lower(), setup=Setup.DIRECT, unit=name, calibration="cal"
        )
        self._two_port(entry, self.chains[name])

    def sweep_checks(self, resistor: np.ndarray, load: Load) -> None:
        thru = SweepEntry(file="thru.s2p", setup=Setup.THRU_CHECK, calibration="cal")
        bare = SweepEntry(
            file="resistor.s2p", setup=Setup.RESISTOR_CHECK, load="main", calibration="cal"
        )
        self._two_port(thru, series_arm(0 * resistor))
        self._two_port(bare, series_arm(resistor), load)

    def _two_port(self, entry: SweepEntry, chain: Chain, load: Load | None = None) -> None:
        s = matrix_of(self.analyzer.sweep_two_port(chain))
        sweep = sweep_of(entry.file, SWEPT_HZ, s, one_path=self.analyzer.one_path)
        self.measurements.append(Measurement(entry=entry, sweep=sweep, load=load))

    def _one_port(
        self, name: str, setup: Setup, gamma: np.ndarray, load: Load | None = None
    ) -> None:
        file = f"{name}-{setup}.s1p".lower()
        seen = self.analyzer.sweep_one_port(gamma)[:, None, None]
        entry = SweepEntry(
            file=file,
            setup=setup,
            unit=name,
            load="main" if load is not None else None,
            calibration="cal",
        )
        measurement = Measurement(entry=entry, sweep=sweep_of(file, SWEPT_HZ, seen), load=load)
        self.measurements.append(measurement)


def bench_sheet(grade: str, **settings: object) -> BenchSheet:
    """`runs.toml` that tells the truth about the analyzer's grade."""
    return BenchSheet(calibrations={"cal": Calibration(grade=grade)}, **settings)
