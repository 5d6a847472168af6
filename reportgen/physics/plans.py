"""Every method that the sweeps of a build allow."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Sequence
from functools import cache, partial

from reportgen.errors import NotMeasurable
from reportgen.model import Build, BuildSheet, Finding, Severity
from reportgen.physics.halves import Half, find_halves
from reportgen.physics.known_loads import known_load_plans
from reportgen.physics.loads import LoadSweeps, find_load_sweeps
from reportgen.physics.methods import (
    ClosedHalf,
    Plan,
    close_half,
    closed_by_circuit,
    closed_by_loads,
    halving,
)
from reportgen.physics.pairs import find_pairs
from reportgen.physics.readings import halving_of_readings
from reportgen.physics.single_units import direct_plans, load_only, series_resistor


def find_plans(build: Build) -> tuple[tuple[Plan, ...], tuple[Finding, ...]]:
    """The plans, and why one of them was left out."""
    plans: list[Plan] = []
    findings: list[Finding] = []
    for file, plan in _possible(build):
        try:
            plans.append(plan())
        except NotMeasurable as error:
            findings.append(not_measurable(file, error))
    return tuple(plans), tuple(findings)


def _possible(build: Build) -> Iterator[tuple[str, Callable[[], Plan]]]:
    """What to try, and on which file."""
    sheet = build.sheet
    pairs = find_pairs(build.measurements)
    loads = find_load_sweeps(build.measurements)
    for pair in pairs:
        yield pair.sweeps[0].file, partial(halving, pair, sheet)
    for half in find_halves(pairs, build.measurements):
        yield from _of_half(half, loads, sheet)
    for sweeps in loads:
        method = series_resistor if sweeps.series else load_only
        yield sweeps.measurements[0].sweep.file, partial(method, sweeps, sheet)
    for plan in (
        *direct_plans(build.measurements, sheet),
        *halving_of_readings(build.measurements, sheet),
        *known_load_plans(build.measurements, loads, sheet),
    ):
        yield plan.sweeps[0].file, partial(_as_it_is, plan)


def _of_half(
    half: Half, loads: Sequence[LoadSweeps], sheet: BuildSheet
) -> Iterator[tuple[str, Callable[[], Plan]]]:
    """A half closed by its circuit, and by load sweeps where there are any."""
    file = half.sweeps[0].file
    close = cache(partial(close_half, half, sheet))
    used = [sweeps for sweeps in loads if sweeps.unit in half.units]
    if not used or half.alone is not half.loaded:
        yield file, partial(_by_circuit, close, sheet)
    if used:
        yield file, partial(_by_loads, close, used, sheet)


def _by_circuit(close: Callable[[], ClosedHalf], sheet: BuildSheet) -> Plan:
    return closed_by_circuit(close(), sheet)


def _by_loads(
    close: Callable[[], ClosedHalf], loads: Sequence[LoadSweeps], sheet: BuildSheet
) -> Plan:
    return closed_by_loads(close(), loads, sheet)


def _as_it_is(plan: Plan) -> Plan:
    return plan


def not_measurable(file: str, error: NotMeasurable) -> Finding:
    """A finding that a method was left out."""
    return Finding(
        severity=Severity.WARNING,
        code="not-measurable",
        file=file,
        message=f"left out: {error}",
        remedy="sweep all set-ups of a build over the same range",
    )
