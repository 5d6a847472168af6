"""Three and more known loads: the unit back, the residual, what a wrong load shows."""

from dataclasses import replace

import numpy as np
import pytest
from simulation.bench import SWEPT_HZ, bench_sheet, known_build, sweep_of
from simulation.transformer import chain_of_unit

from reportgen.model import Build, Load, Measurement, Method, Setup, SweepEntry
from reportgen.physics.allocations import amateur_bands
from reportgen.physics.measure import measure_build
from reportgen.physics.network import (
    efficiency_ratio,
    input_impedance_ohm,
    reflection_of_impedance,
    resistor_ohm,
)

BANDS = amateur_bands(2)[:-1]
RATIOS = {"small": 0.3, "main": 1.0, "big": 3.0, "bigger": 8.0}


def build_with(
    names: list[str], *, wrong: float = 1.0, opened: bool = False
) -> tuple[Build, np.ndarray]:
    known = known_build(np.random.default_rng(5))
    chain = chain_of_unit(known.units["A"], SWEPT_HZ)
    nominal_ohm = known.build.sheet.nominal_load_ohm
    measurements = []
    for name in names:
        ohm = nominal_ohm * RATIOS[name]
        load_ohm = resistor_ohm(ohm * (wrong if name == names[-1] else 1.0), 2e-12, SWEPT_HZ)
        gamma = reflection_of_impedance(input_impedance_ohm(chain, load_ohm))
        entry = SweepEntry(file=f"{name}.s1p", setup=Setup.LOAD, unit="A", load=name)
        measurements.append(
            Measurement(
                entry=entry,
                sweep=sweep_of(entry.file, SWEPT_HZ, gamma[:, None, None]),
                load=Load(resistance_ohm=ohm, stray_pf=2.0, tolerance_percent=0.1),
            )
        )
    if opened:
        gamma = reflection_of_impedance(chain.a / chain.c)
        entry = SweepEntry(file="open.s1p", setup=Setup.OPEN, unit="A")
        sweep = sweep_of(entry.file, SWEPT_HZ, gamma[:, None, None])
        measurements.append(Measurement(entry=entry, sweep=sweep))
    build = replace(known.build, measurements=tuple(measurements))
    return build, efficiency_ratio(chain, nominal_ohm)


@pytest.mark.usefixtures("few_draws")
@pytest.mark.parametrize(
    ("names", "opened"),
    [(["small", "main", "big"], False), (list(RATIOS), False), (["small", "main"], True)],
)
def test_known_loads_give_the_unit(names: list[str], opened: bool) -> None:
    build, true = build_with(names, opened=opened)
    result = measure_build(build, bench_sheet("bench"), BANDS)
    assert result.chosen.method is Method.TERMINATIONS
    curves = result.chosen.curves
    np.testing.assert_allclose(curves.efficiency_ratio[curves.native], true, rtol=1e-9)


@pytest.mark.usefixtures("few_draws")
def test_residual_tells_a_wrong_load() -> None:
    residuals = []
    for wrong in (1.0, 1.1):
        build, _ = build_with(list(RATIOS), wrong=wrong)
        result = measure_build(build, bench_sheet("bench"), BANDS)
        (found,) = (one for one in result.findings if one.code == "terminations-residual")
        residuals.append(float(found.message.split("residual of ")[1].split()[0]))
    assert residuals[0] == 0.0
    assert residuals[1] > 0.001


@pytest.mark.usefixtures("few_draws")
def test_two_loads_are_too_few() -> None:
    build, _ = build_with(["small", "main"])
    result = measure_build(build, bench_sheet("bench"), BANDS)
    assert result.chosen.method is Method.LOAD_ONLY
