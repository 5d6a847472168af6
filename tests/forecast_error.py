"""How far forecasts are from units wound so, simulated: `python tests/forecast_error.py [builds]`.

Prints the table of DEVELOPERS.md. A case is one change of one build, swept at bench grade:
predicted minus simulated worst SWR over the amateur bands, 160 m to 10 m, as a part of the
simulated one, and mean heat loss over them. The simulated units have laws of their own: copper
goes with the length of the wire, not with the square of the turns; "longer turns" lets copper and
leakage go with the length of a turn about the stack, which the forecast leaves alone.
"""

from __future__ import annotations

import sys
from collections.abc import Iterator, Sequence
from concurrent.futures import ProcessPoolExecutor
from dataclasses import dataclass, replace
from pathlib import Path

import numpy as np

sys.path.insert(0, str(Path(__file__).parent))

from simulation.bench import KnownBuild, bench_sheet, known_build
from simulation.transformer import Unit, chain_of_unit

from reportgen.model import Build, Core, MeasuredBand, Measurement
from reportgen.physics.allocations import amateur_bands
from reportgen.physics.bands import mean_ratio
from reportgen.physics.choose import chosen_of
from reportgen.physics.drawn import Drawn
from reportgen.physics.forecast import Forecast, WindingForecast, forecast_of
from reportgen.physics.network import efficiency_ratio, reflection_ratio
from reportgen.physics.outcomes import Outcome
from reportgen.physics.quantities import decibel_loss, swr_of_reflection
from reportgen.physics.solve import Solved, solve_all

BANDS = tuple(band for band in amateur_bands(2) if band.to_hz < 30e6)
CORE = Core(outer_mm=36.0, inner_mm=23.0, height_mm=15.0)
LONGER_TURN = (6.5 + 2 * 15) / (6.5 + 15)  # half the circumference of two rings over that of one
CAPACITOR, TURNS, RATIO, STACK, LONGER = (
    *("capacitor", "low turns one up or down", "high turns one or two up or down"),
    *("one ring more", "one ring more, longer turns"),
)


@dataclass(frozen=True)
class Case:
    """One change of one build: predicted minus simulated."""

    change: str
    swr: float
    swr_true: float
    heat_loss_db: float

    @property
    def swr_share(self) -> float:
        return self.swr / self.swr_true


def solved_group(build: Build, draws: int = 40) -> tuple[list[Solved], tuple[MeasuredBand, ...]]:
    """The result's method and its bands, at bench grade."""
    drawn = Drawn(bench_sheet("bench").calibrations, build.key, draws)
    solved, _ = solve_all(build, BANDS, 100.0, drawn)
    group, chosen, _ = chosen_of(solved, BANDS, 100.0)
    return group, tuple(band for band in chosen.bands if isinstance(band, MeasuredBand))


def forecast_of_build(build: Build, extra: Sequence[Measurement] = (), draws: int = 40) -> Forecast:
    """The forecast of a build with one ring, and with further sweeps."""
    group, bands = solved_group(build, draws)
    sheet = replace(build.sheet, core=CORE)
    measurements = (*build.measurements, *extra)
    forecast = forecast_of(group, replace(build, sheet=sheet, measurements=measurements), bands)
    assert forecast is not None
    return forecast


# --- the units as they would be wound ------------------------------------------------------------


def rewound(unit: Unit, low_turns: float, high_turns: float) -> Unit:
    """The unit with other turns: leakage with their square, copper with the wire's length."""
    turns = low_turns / unit.low_turns
    ratio = high_turns / low_turns / unit.turns_ratio
    return replace(
        unit,
        low_turns=low_turns,
        high_turns=high_turns,
        leakage_low_h=unit.leakage_low_h * turns**2,
        leakage_ladder_h=unit.leakage_ladder_h * turns**2,
        leakage_high_h=unit.leakage_high_h * turns**2,
        wire_ohm=unit.wire_ohm * turns * (1 + 1 / ratio) / 2,
    )


def stacked(unit: Unit, turn_length: float = 1.0) -> Unit:
    """The unit on twice the rings, its turns so much longer."""
    return replace(
        unit,
        core_factor_per_m=unit.core_factor_per_m / 2,
        leakage_low_h=unit.leakage_low_h * turn_length,
        leakage_ladder_h=unit.leakage_ladder_h * turn_length,
        leakage_high_h=unit.leakage_high_h * turn_length,
        wire_ohm=unit.wire_ohm * turn_length,
    )


def simulated(units: Sequence[Unit], load_ohm: float) -> tuple[float, float]:
    """Worst SWR and mean heat loss [dB] over the bands, mean over the units."""
    bands_hz = [np.linspace(band.from_hz, band.to_hz, 15) for band in BANDS]
    worst, means = 0.0, []
    for hz in bands_hz:
        chains = [chain_of_unit(unit, hz) for unit in units]
        reflection = np.mean([reflection_ratio(one, load_ohm, 50.0) for one in chains], axis=0)
        efficiency = np.mean([efficiency_ratio(one, load_ohm) for one in chains], axis=0)
        worst = max(worst, float(reflection.max()))
        means.append(mean_ratio(hz, efficiency))
    return float(swr_of_reflection(np.array(worst))), float(decibel_loss(np.mean(means)))


# --- predicted against simulated -----------------------------------------------------------------


def cases_of(known: KnownBuild) -> Iterator[Case]:
    """Every change that the forecast tries."""
    forecast = forecast_of_build(known.build)
    units = [known.units[name] for name in "AB"]
    capacitor = forecast.capacitor
    yield _case(CAPACITOR, capacitor.then, _with(units, capacitor.best_pf))
    for change, windings in ((TURNS, forecast.turns), (RATIO, forecast.ratios)):
        for one in windings:
            wound = [rewound(unit, one.low_turns, one.high_turns) for unit in units]
            yield from _both(change, one, wound)
    for one in forecast.stacks:
        yield from _both(STACK, one, [stacked(unit) for unit in units])
        yield from _both(LONGER, one, [stacked(unit, LONGER_TURN) for unit in units])


def _both(change: str, one: WindingForecast, wound: Sequence[Unit]) -> Iterator[Case]:
    yield _case(change, one.present_capacitor, wound)
    yield _case(change, one.best_capacitor, _with(wound, one.best_pf))


def _with(units: Sequence[Unit], capacitor_pf: float) -> list[Unit]:
    return [replace(unit, capacitor_f=capacitor_pf * 1e-12) for unit in units]


def _case(change: str, predicted: Outcome, units: Sequence[Unit]) -> Case:
    swr, loss_db = simulated(units, predicted.load_ohm)
    return Case(
        change=change,
        swr=predicted.swr.value - swr,
        swr_true=swr,
        heat_loss_db=predicted.heat_loss_db.value - loss_db,
    )


def of_seed(seed: int) -> list[Case]:
    """Cases of one seeded build."""
    return list(cases_of(known_build(np.random.default_rng(seed))))


def main() -> None:
    builds = int(sys.argv[1]) if len(sys.argv) > 1 else 100
    with ProcessPoolExecutor() as pool:
        cases = [case for found in pool.map(of_seed, range(builds)) for case in found]
    print("| change | SWR: 95 % within | worst | heat loss: 95 % within | worst | mean | cases |")
    print("|---|---|---|---|---|---|---|")
    for change in dict.fromkeys(case.change for case in cases):
        print(f"| {change} | {_figures([case for case in cases if case.change == change])} |")


def _figures(cases: Sequence[Case]) -> str:
    swr = np.abs([case.swr_share for case in cases])
    loss = np.array([case.heat_loss_db for case in cases])
    return (
        f"{100 * np.percentile(swr, 95):.1f} % | {100 * swr.max():.1f} % "
        f"| {np.percentile(np.abs(loss), 95):.3f} dB | {np.abs(loss).max():.3f} dB "
        f"| {loss.mean():+.3f} dB | {len(cases)}"
    )


if __name__ == "__main__":
    main()
