"""The runs folder of an invented workshop: `python tests/write_example_runs.py [folder]`.

All of it is simulated. The same digits come out every time: each sweep has a seed of its own.
"""

from __future__ import annotations

import sys
import zlib
from collections.abc import Callable, Iterator
from pathlib import Path

import numpy as np

sys.path.insert(0, str(Path(__file__).parent))

from simulation.analyzer import Analyzer
from simulation.bench import GRADES, matrix_of
from simulation.hollin_bank import EXAMPLES
from simulation.sidecar_text import sidecar_text
from simulation.touchstone_text import touchstone_text
from simulation.transformer import (
    Unit,
    chain_of_unit,
    core_factor_per_m,
    true_efficiency_ratio,
    twin_of,
)
from simulation.workshop import BENCH_SHEET, Example, Plan
from temperature_logs import Truth, simulated_log

from reportgen.model import Load, Setup, SweepEntry, ThermalEntry
from reportgen.physics.allocations import known_bands
from reportgen.physics.network import (
    Chain,
    input_impedance_ohm,
    reflection_of_impedance,
    resistor_ohm,
    series_arm,
)

EXAMPLE_RUNS = Path(__file__).parents[1] / "example_runs"
SIMULATED = "simulated: an invented workshop, nothing here was measured"
POINTS_IN_BAND = 7


def seeded(*names: str) -> np.random.Generator:
    """The generator of one thing, the same whatever else is written."""
    return np.random.default_rng(zlib.crc32("/".join(names).encode()))


def swept_hz(plan: Plan) -> np.ndarray:
    """Frequencies of a build's sweeps, in whole tenths of a kilohertz."""
    inside = [
        np.linspace(band.from_hz, band.to_hz, POINTS_IN_BAND)
        for band in known_bands(BENCH_SHEET.region, BENCH_SHEET.own_band)
        if plan.segments and plan.from_hz <= band.from_hz and band.to_hz <= plan.to_hz
    ]
    even = np.linspace(plan.from_hz, plan.to_hz, plan.points - POINTS_IN_BAND * len(inside))
    return np.unique(np.round(np.concatenate([even, *inside]), -2))


# --- what stands on the bench --------------------------------------------------------------------


def unit_of(example: Example, name: str) -> Unit:
    """One physical unit of a build."""
    sheet, made = example.sheet, example.made
    leakage_h = made.leakage_h * made.leakage_times.get(name, 1.0)
    core = sheet.core
    assert core is not None
    assert core.initial_permeability is not None
    design = Unit(
        low_turns=sheet.winding.low_turns,
        high_turns=sheet.winding.high_turns,
        core_factor_per_m=core_factor_per_m(
            core.outer_mm, core.inner_mm, core.height_mm, core.stack
        ),
        initial_permeability=core.initial_permeability,
        dispersion_hz=made.dispersion_hz,
        material=made.material,
        leakage_low_h=0.35 * leakage_h,
        leakage_ladder_h=0.30 * leakage_h,
        leakage_high_h=0.35 * leakage_h,
        wire_ohm=made.wire_ohm,
        self_capacitance_f=made.self_capacitance_f,
        fixture_capacitance_f=0.3e-12,
        lead_m=0.012,
        capacitor_f=sheet.compensation.capacitor_pf * 1e-12,
        capacitor_loss=sheet.compensation.loss_tangent or 0.0,
    )
    return twin_of(design, seeded(example.folder, name))


def true_load_ohm(name: str, load: Load, frequency_hz: np.ndarray) -> np.ndarray:
    """A load as it is: off by up to its tolerance, 3 to 5 pF of stray from its leads."""
    rng = seeded("load", name)
    off = 1 + load.tolerance_percent / 100 * rng.uniform(-1, 1)
    return resistor_ohm(load.resistance_ohm * off, rng.uniform(3e-12, 5e-12), frequency_hz)


def wire_end_ohm(frequency_hz: np.ndarray) -> np.ndarray:
    """A wire in the air from its end: a line of 600 ohm, open at 20 m, that loses by radiation."""
    length = 2 * np.pi * frequency_hz / 299_792_458 * 20.3 * 1.03
    return np.asarray(600 / np.tanh(0.16 + 0.012 * length + 1j * length))


def series_resistor(load: Load, frequency_hz: np.ndarray) -> Chain:
    """A resistor in series to port 2."""
    return series_arm(resistor_ohm(load.resistance_ohm, load.body_pf * 1e-12, frequency_hz))


def analyzer_of(example: Example, entry: SweepEntry, frequency_hz: np.ndarray) -> Analyzer:
    """The analyzer as the sweep's calibration left it, with noise of this sweep's own."""
    grade = BENCH_SHEET.calibrations[entry.calibration].grade
    analyzer = Analyzer(
        GRADES[grade],
        frequency_hz,
        seeded("residuals", entry.calibration),
        one_path=grade == "handheld",
    )
    analyzer.rng = seeded(example.folder, entry.file)
    return analyzer


# --- the sweeps ----------------------------------------------------------------------------------


def sweep_s(example: Example, entry: SweepEntry, frequency_hz: np.ndarray) -> np.ndarray:
    """(F, n, n) scattering parameters as the analyzer shows them."""
    analyzer = analyzer_of(example, entry, frequency_hz)
    known = BENCH_SHEET.loads | example.sheet.loads
    load = known[entry.load] if entry.load else None

    def chain(name: str | None) -> Chain:
        return chain_of_unit(unit_of(example, name or "A"), frequency_hz)

    def one_port(impedance_ohm: np.ndarray) -> np.ndarray:
        seen = analyzer.sweep_one_port(reflection_of_impedance(impedance_ohm))
        return seen[:, np.newaxis, np.newaxis]

    def two_port(chain: Chain) -> np.ndarray:
        return matrix_of(analyzer.sweep_two_port(chain))

    first, second = entry.pair
    connected: dict[Setup, Callable[[], np.ndarray]] = {
        Setup.BACK_TO_BACK: lambda: two_port(chain(first) @ chain(second).reversed()),
        Setup.LOAD: lambda: one_port(
            input_impedance_ohm(chain(entry.unit), true_load_ohm(entry.load, load, frequency_hz))
        ),
        Setup.OPEN: lambda: one_port(chain(entry.unit).a / chain(entry.unit).c),
        Setup.SHORT: lambda: one_port(chain(entry.unit).b / chain(entry.unit).d),
        Setup.SERIES_RESISTOR: lambda: two_port(
            chain(entry.unit) @ series_resistor(load, frequency_hz)
        ),
        Setup.RESISTOR_CHECK: lambda: two_port(series_resistor(load, frequency_hz)),
        Setup.THRU_CHECK: lambda: two_port(series_arm(np.zeros(len(frequency_hz)))),
        Setup.ANTENNA: lambda: one_port(wire_end_ohm(frequency_hz)),
    }
    return connected[entry.setup]()


def comments_of(example: Example, entry: SweepEntry) -> list[str]:
    """First lines of a sweep file."""
    what = entry.units or ((entry.unit,) if entry.unit else ())
    units = f", {' and '.join(what)}" if what else ""
    return [SIMULATED, f"{example.sheet.name}, {entry.setup}{units}"]


def log_text(example: Example, entry: ThermalEntry) -> str:
    """A temperature log as CSV: its heat is what the unit turns into heat in truth."""
    unit, made = unit_of(example, entry.unit), example.made
    hz = np.array([entry.frequency_mhz * 1e6])
    efficiency = float(true_efficiency_ratio(unit, hz, example.sheet.nominal_load_ohm)[0])
    truth = Truth(
        resistance_k_per_w=made.resistance_k_per_w,
        time_constant_s=made.time_constant_s,
        heat_w=entry.power_w * (1 - efficiency),
        span_s=4 * made.time_constant_s,
        step_s=10,
        start_k=0.4,
        drift_k_per_h=0.8,
    )
    log = simulated_log(truth, seeded(example.folder, entry.file))
    rows = zip(log.time_s, log.core_c, log.ambient_c, strict=True)
    lines = [f"{time_s:.0f},{core_c:.1f},{ambient_c:.1f}" for time_s, core_c, ambient_c in rows]
    return "\n".join([f"# {SIMULATED}", "time_s,core_c,ambient_c", *lines, ""])


# --- the folder ----------------------------------------------------------------------------------


def example_texts() -> Iterator[tuple[str, str]]:
    """Path below the runs folder and text of every file."""
    yield "runs.toml", sidecar_text(BENCH_SHEET, SIMULATED)
    for example in EXAMPLES:
        yield f"{example.folder}/build.toml", sidecar_text(example.sheet, SIMULATED)
        frequency_hz = swept_hz(example.plan)
        for entry in example.sheet.sweep:
            yield (
                f"{example.folder}/{entry.file}",
                touchstone_text(
                    frequency_hz,
                    sweep_s(example, entry, frequency_hz),
                    form=example.plan.form,
                    unit=example.plan.unit,
                    comments=comments_of(example, entry),
                ),
            )
        for log in example.sheet.thermal:
            yield f"{example.folder}/{log.file}", log_text(example, log)


def main() -> None:
    root = Path(sys.argv[1]) if len(sys.argv) > 1 else EXAMPLE_RUNS
    for file, text in example_texts():
        path = root / file
        path.parent.mkdir(parents=True, exist_ok=True)
        path.write_text(text, encoding="utf-8", newline="\n")


if __name__ == "__main__":
    main()
