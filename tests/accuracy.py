"""How far the methods are from the truth on simulated builds: `python tests/accuracy.py [builds]`.

Prints the table of DEVELOPERS.md. A case is one amateur band of one build, 160 m to 10 m.
"""

from __future__ import annotations

import sys
from pathlib import Path

import numpy as np

sys.path.insert(0, str(Path(__file__).parent))

from simulation.bench import KnownBuild, bench_sheet, known_build

from reportgen.model import MeasuredBand, Method
from reportgen.physics.allocations import amateur_bands
from reportgen.physics.bands import mean_ratio
from reportgen.physics.measure import measure_build

CONDITIONS = {
    "bench": {"grade": "bench"},
    "handheld": {"grade": "handheld"},
    "handheld, one path": {"grade": "handheld", "one_path": True},
}
LABELS = {
    Method.HALVING: "halving (common practice)",
    Method.BISECTION: "bisection",
    Method.BISECTION_LOAD: "bisection+load",
}
BANDS = tuple(band for band in amateur_bands(2) if band.to_hz < 30e6)


def errors_db(known: KnownBuild, grade: str) -> dict[Method, list[float]]:
    """Computed minus true heat loss of each band, by method [dB]."""
    result = measure_build(known.build, bench_sheet(grade), BANDS)
    found: dict[Method, list[float]] = {}
    for method in result.methods:
        for band in method.bands:
            if method.method in LABELS and isinstance(band, MeasuredBand):
                found.setdefault(method.method, []).append(
                    _loss_db(band) - true_loss_db(known, band)
                )
    return found


def _loss_db(band: MeasuredBand) -> float:
    figure = band.figures.get("heat_loss_db") or band.figures["halved_pair_db"]
    assert figure.mean is not None
    return figure.mean


def true_loss_db(known: KnownBuild, band: MeasuredBand) -> float:
    """Heat loss of the mean efficiency of both units over the band [dB]."""
    frequency_hz = np.linspace(*band.covered_hz, 25)
    mean = mean_ratio(frequency_hz, known.true_efficiency_ratio(frequency_hz))
    return float(-10 * np.log10(mean))


def population(
    builds: int, seed: int, *, grade: str, **condition: object
) -> dict[Method, np.ndarray]:
    """Errors of all cases of a seeded population, by method [dB]."""
    rng = np.random.default_rng(seed)
    found: dict[Method, list[float]] = {method: [] for method in LABELS}
    for _ in range(builds):
        known = known_build(rng, grade=grade, **condition)
        for method, errors in errors_db(known, grade).items():
            found[method] += errors
    return {method: np.array(errors) for method, errors in found.items()}


def main() -> None:
    builds = int(sys.argv[1]) if len(sys.argv) > 1 else 200
    print("| sweeps | method | 95 % within | worst | mean | cases |\n|---|---|---|---|---|---|")
    for name, condition in CONDITIONS.items():
        for method, errors in population(builds, 1, **condition).items():
            print(
                f"| {name} | {LABELS[method]} | {np.percentile(abs(errors), 95):.3f} dB "
                f"| {abs(errors).max():.3f} dB | {errors.mean():+.3f} dB | {errors.size} |"
            )


if __name__ == "__main__":
    main()
