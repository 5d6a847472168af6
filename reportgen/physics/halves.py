"""What shows the half of a pair: a unit's input with its high side open, and shorted.

Three kinds of sweeps do: two units back to back (their mean), three pairs of three units (each of
them), and a unit swept with its high side open and shorted.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from itertools import combinations

import numpy as np

from reportgen.model import Finding, Measurement, Method, RealArray, Setup, Sweep
from reportgen.physics.bisection import (
    Halved,
    halve_pair,
    halve_three_pairs,
    halved_of_impedances,
)
from reportgen.physics.network import chain_of_scattering, impedance_of_reflection
from reportgen.physics.pairs import Pair, pair_findings, pair_scattering
from reportgen.physics.seen import Seen, View


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Half:
    """A half that the sweeps show.

    `alone` and `loaded` name the method with the half closed by its circuit and by load sweeps;
    `unit` is None for the mean of `units`. `view` gives the half at frequencies, and the
    root of the pair's through power where there is one [ratio].
    """

    alone: Method
    loaded: Method
    unit: str | None
    units: tuple[str, ...]
    sweeps: tuple[Sweep, ...]
    view: View
    findings: tuple[Finding, ...] = ()


def find_halves(pairs: Sequence[Pair], measurements: Sequence[Measurement]) -> tuple[Half, ...]:
    """Every half that the sweeps of a build show."""
    return (
        *(_of_pair(pair) for pair in pairs),
        *_of_three_pairs(pairs),
        *_of_terminations(measurements),
    )


def _of_pair(pair: Pair) -> Half:
    def view(frequency_hz: RealArray, seen: Seen) -> tuple[Halved, RealArray | None]:
        s = pair_scattering(pair, frequency_hz, seen)
        return halve_pair(s), np.abs(s.s21)

    return Half(
        alone=Method.BISECTION,
        loaded=Method.BISECTION_LOAD,
        unit=None,
        units=pair.units,
        sweeps=pair.sweeps,
        view=view,
        findings=pair_findings(pair),
    )


def _of_three_pairs(pairs: Sequence[Pair]) -> list[Half]:
    by_units = {frozenset(pair.units): pair for pair in pairs}
    units = list(dict.fromkeys(unit for pair in pairs for unit in pair.units))
    found: dict[str, Half] = {}
    for three in combinations(units, 3):
        if all(frozenset(two) in by_units for two in combinations(three, 2)):
            for unit in three:
                found.setdefault(unit, _of_unit_in_three(unit, three, by_units))
    return list(found.values())


def _of_unit_in_three(
    unit: str, three: tuple[str, ...], by_units: dict[frozenset[str], Pair]
) -> Half:
    second, third = (other for other in three if other != unit)
    ways = ((unit, second), (unit, third), (second, third))
    pairs = [by_units[frozenset(way)] for way in ways]

    def view(frequency_hz: RealArray, seen: Seen) -> tuple[Halved, RealArray | None]:
        scatterings = [
            pair_scattering(pair, frequency_hz, seen, first=way[0])
            for pair, way in zip(pairs, ways, strict=True)
        ]
        ab, ac, bc = (chain_of_scattering(s) for s in scatterings)
        return halve_three_pairs(ab, ac, bc), None

    return Half(
        alone=Method.THREE_PAIRS,
        loaded=Method.THREE_PAIRS_LOAD,
        unit=unit,
        units=(unit,),
        sweeps=tuple(sweep for pair in pairs for sweep in pair.sweeps),
        view=view,
    )


def _of_terminations(measurements: Sequence[Measurement]) -> list[Half]:
    found = []
    for unit in dict.fromkeys(one.entry.unit or "A" for one in measurements):
        opens, shorts = (
            [one for one in measurements if _is(one, setup, unit)]
            for setup in (Setup.OPEN, Setup.SHORT)
        )
        if opens and shorts:
            found.append(_of_open_and_short(unit, opens, shorts))
    return found


def _is(one: Measurement, setup: Setup, unit: str) -> bool:
    return one.entry.setup is setup and (one.entry.unit or "A") == unit


def _of_open_and_short(
    unit: str, opens: Sequence[Measurement], shorts: Sequence[Measurement]
) -> Half:
    def view(frequency_hz: RealArray, seen: Seen) -> tuple[Halved, RealArray | None]:
        z_open_ohm, z_short_ohm = (
            impedance_of_reflection(
                np.mean([seen.one_port(one, frequency_hz) for one in group], axis=0)
            )
            for group in (opens, shorts)
        )
        return halved_of_impedances(z_open_ohm, z_short_ohm), None

    return Half(
        alone=Method.TERMINATIONS,
        loaded=Method.TERMINATIONS,
        unit=unit,
        units=(unit,),
        sweeps=tuple(one.sweep for one in (*opens, *shorts)),
        view=view,
    )
