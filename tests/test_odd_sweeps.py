"""Files that are sweeps and no transformers: a clear finding, no warning, no figure made up."""

from dataclasses import replace

import numpy as np
import pytest
from simulation.bench import SWEPT_HZ, bench_sheet, known_build, sweep_of

from reportgen.model import Build, Method
from reportgen.physics.allocations import amateur_bands
from reportgen.physics.measure import measure_build

POINTS = SWEPT_HZ.size


def same_everywhere(*rows: tuple[float, float]) -> np.ndarray:
    return np.tile(np.array(rows, dtype=complex), (POINTS, 1, 1))


ODD = {
    "a thru": same_everywhere((0, 1), (1, 0)),
    "nothing at all": same_everywhere((0, 0), (0, 0)),
    "open ports": same_everywhere((1, 0), (0, 1)),
    "shorted ports": same_everywhere((-1, 0), (0, -1)),
    "a resistor across": same_everywhere((0.5, 0.5), (0.5, 0.5)),
    "an amplifier": same_everywhere((0.1, 2), (2, 0.1)),
    "noise": np.random.default_rng(1).normal(size=(POINTS, 2, 2)) + 0j,
}


def build_with(s: np.ndarray, *, one_path: bool) -> Build:
    build = known_build(np.random.default_rng(3)).build
    if one_path:
        s = s.copy()
        s[:, :, 1] = 0
    pair = replace(
        build.measurements[0], sweep=sweep_of("pair.s2p", SWEPT_HZ, s, one_path=one_path)
    )
    return replace(build, measurements=(pair, *build.measurements[1:]))


@pytest.mark.usefixtures("few_draws")
@pytest.mark.parametrize("one_path", [False, True])
@pytest.mark.parametrize("what", ODD)
def test_no_loss_is_made_of_what_is_no_pair(what: str, one_path: bool) -> None:
    build = build_with(ODD[what], one_path=one_path)
    result = measure_build(build, bench_sheet("bench"), amateur_bands(2))
    assert result.chosen.method is Method.LOAD_ONLY
    (found,) = (one for one in result.findings if one.code == "not-measurable")
    assert found.file == "pair.s2p"
    assert "no pair of transformers" in found.message or "no passive pair" in found.message


@pytest.mark.usefixtures("few_draws")
def test_a_pad_is_told_from_a_winding() -> None:
    build = build_with(same_everywhere((0, 0.3), (0.3, 0)), one_path=False)
    result = measure_build(build, bench_sheet("bench"), amateur_bands(2))
    assert "no-circuit-fits" in {one.code for one in result.findings}
