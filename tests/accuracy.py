"""How far figures are from the truth, simulated: `python tests/accuracy.py [builds [sweeps ...]]`.

Prints the table of DEVELOPERS.md. A case is the mean heat loss of one amateur band, 160 m to 10 m,
of one unit or mean of units. Coverage is the share of cases whose 95 % interval holds the truth.
"""

from __future__ import annotations

import os
import sys
from collections.abc import Iterator
from concurrent.futures import ProcessPoolExecutor
from dataclasses import dataclass
from functools import partial
from pathlib import Path

os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")
sys.path.insert(0, str(Path(__file__).parent))

import numpy as np
from simulation.bench import KnownBuild, bench_sheet, known_build

from reportgen.model import MeasuredBand, Method, MethodResult
from reportgen.physics.allocations import amateur_bands
from reportgen.physics.bands import mean_ratio
from reportgen.physics.drawn import Drawn
from reportgen.physics.solve import solve_all
from reportgen.physics.uncertainty import DRAWS

CONDITIONS = {
    "bench": {"grade": "bench"},
    "bench, with checks": {"grade": "bench", "checks": True},
    "handheld": {"grade": "handheld"},
    "handheld, with checks": {"grade": "handheld", "checks": True},
    "handheld, one path": {"grade": "handheld", "one_path": True},
    "handheld, one path, with checks": {"grade": "handheld", "one_path": True, "checks": True},
}
LABELS = {
    Method.HALVING: "halving (common practice)",
    Method.BISECTION: "bisection",
    Method.BISECTION_LOAD: "bisection+load",
    Method.THREE_PAIRS: "three pairs",
    Method.THREE_PAIRS_LOAD: "three pairs+load",
    Method.TERMINATIONS: "terminations",
    Method.SERIES_RESISTOR: "series resistor",
    Method.DIRECT: "direct",
}
BANDS = tuple(band for band in amateur_bands(2) if band.to_hz < 30e6)


@dataclass(frozen=True)
class Case:
    """One band: computed minus true heat loss, and the stated interval about what was computed."""

    method: Method
    error_db: float
    low_db: float
    high_db: float

    @property
    def held(self) -> bool:
        return self.low_db <= -self.error_db <= self.high_db

    @property
    def u95_db(self) -> float:
        return (self.high_db - self.low_db) / 2


@np.errstate(divide="ignore", invalid="ignore")
def cases_of(known: KnownBuild, grade: str) -> Iterator[Case]:
    """Every band of every method of a build."""
    drawn = Drawn(bench_sheet(grade).calibrations, known.build.key, DRAWS)
    solved, _ = solve_all(known.build, BANDS, 100.0, drawn)
    for method in (one.result for one in solved):
        for band in method.bands:
            if method.method in LABELS and isinstance(band, MeasuredBand):
                yield _case(known, method, band)


def _case(known: KnownBuild, method: MethodResult, band: MeasuredBand) -> Case:
    """A loss without a value, where less than nothing comes out, is taken as infinite."""
    figure = band.figures.get("heat_loss_db") or band.figures["halved_pair_db"]
    if figure.mean is None:
        return Case(method=method.method, error_db=np.inf, low_db=-np.inf, high_db=np.inf)
    return Case(
        method=method.method,
        error_db=figure.mean - true_loss_db(known, method, band),
        low_db=(-np.inf if figure.low95 is None else figure.low95) - figure.mean,
        high_db=(np.inf if figure.high95 is None else figure.high95) - figure.mean,
    )


def true_loss_db(known: KnownBuild, method: MethodResult, band: MeasuredBand) -> float:
    """Heat loss of the units that the method speaks of, over the band [dB]."""
    frequency_hz = np.linspace(*band.covered_hz, 25)
    if method.method is Method.SERIES_RESISTOR:
        ratio = known.true_series_efficiency_ratio(frequency_hz)
    else:
        ratio = known.true_efficiency_ratio(frequency_hz, method.units)
    return float(-10 * np.log10(mean_ratio(frequency_hz, ratio)))


def _one(seed: int, grade: str, condition: dict[str, object]) -> list[Case]:
    known = known_build(np.random.default_rng(seed), grade=grade, **condition)
    return list(cases_of(known, grade))


def population(builds: int, *, grade: str, **condition: object) -> dict[Method, list[Case]]:
    """All cases of a seeded population, by method."""
    found: dict[Method, list[Case]] = {}
    with ProcessPoolExecutor() as pool:
        work = partial(_one, grade=grade, condition=condition)
        for cases in pool.map(work, range(builds)):
            for case in cases:
                found.setdefault(case.method, []).append(case)
    return found


def errors_db(cases: list[Case]) -> np.ndarray:
    """Errors of cases [dB]."""
    return np.array([case.error_db for case in cases])


def main() -> None:
    builds = int(sys.argv[1]) if len(sys.argv) > 1 else 200
    print("| sweeps | method | 95 % within | worst | mean | median u95 | held | cases |")
    print("|---|---|---|---|---|---|---|---|")
    for name, condition in CONDITIONS.items():
        if sys.argv[2:] and name not in sys.argv[2:]:
            continue
        found = population(builds, everything=True, **condition)
        for method in LABELS:
            if method in found:
                print(f"| {name} | {LABELS[method]} | {_figures(found[method])} |", flush=True)


def _figures(cases: list[Case]) -> str:
    errors = errors_db(cases)
    u95 = np.median([case.u95_db for case in cases])
    held = 100 * np.mean([case.held for case in cases])
    within = np.percentile(abs(errors), 95, method="inverted_cdf")
    mean = errors[np.isfinite(errors)].mean()
    return (
        f"{within:.3f} dB | {abs(errors).max():.3f} dB | {mean:+.3f} dB "
        f"| {u95:.3f} dB | {held:.1f} % | {len(cases)}"
    )


if __name__ == "__main__":
    main()
