"""From the sweeps of a pair to one scattering matrix: repeats, missing paths, polarity."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass

import numpy as np

from reportgen.model import Finding, Measurement, RealArray, Setup, Severity, Sweep
from reportgen.physics.network import Scattering
from reportgen.physics.seen import AS_SWEPT, Seen

_POLARITY_FLOOR = 0.5
"""Polarity is read at the lowest frequency at which so much passes [ratio]."""


@dataclass(frozen=True, slots=True, eq=False)
class Pair:
    """All back-to-back sweeps of two units, either way round; `units` as the first one has them."""

    units: tuple[str, str]
    measurements: tuple[Measurement, ...]

    @property
    def sweeps(self) -> tuple[Sweep, ...]:
        """The sweeps themselves."""
        return tuple(one.sweep for one in self.measurements)

    @property
    def files(self) -> str:
        """The sweeps' file names, for messages."""
        return ", ".join(sweep.file for sweep in self.sweeps)


def find_pairs(measurements: Iterable[Measurement]) -> tuple[Pair, ...]:
    """The pairs of a build in the order of their first sweep."""
    found: dict[frozenset[str], list[Measurement]] = {}
    for one in measurements:
        if one.entry.setup is Setup.BACK_TO_BACK:
            found.setdefault(frozenset(one.entry.pair), []).append(one)
    return tuple(Pair(group[0].entry.pair, tuple(group)) for group in found.values())


def pair_scattering(
    pair: Pair, frequency_hz: RealArray, seen: Seen = AS_SWEPT, *, first: str | None = None
) -> Scattering:
    """A pair's scattering matrix at frequencies within its sweeps, unit `first` at port 1."""
    s = scattering_of_pair(pair, oriented_scatterings(pair, frequency_hz, seen))
    return s.reversed() if first is not None and first != pair.units[0] else s


def oriented_scatterings(
    pair: Pair, frequency_hz: RealArray, seen: Seen = AS_SWEPT
) -> tuple[Scattering, ...]:
    """Each sweep of a pair with the first unit of `pair.units` at port 1, right in polarity."""
    oriented = []
    for one in pair.measurements:
        s = seen.two_port(one, frequency_hz)
        s = s if one.entry.pair == pair.units else s.reversed()
        oriented.append(s.negated() if inverted(one.sweep) else s)
    return tuple(oriented)


def scattering_of_pair(pair: Pair, scatterings: Sequence[Scattering]) -> Scattering:
    """One matrix from all sweeps of a pair: repeats averaged, measured paths before guesses.

    Parameters
    ----------
    pair : Pair
        How its sweeps were taken.
    scatterings : sequence of Scattering
        One for each sweep of the pair, oriented alike; (..., F).

    Notes
    -----
    Of one-path sweeps, one way round measures S11 and S21, the other S22 and S12. Where both ways
    are there nothing is guessed.
    """
    forward, backward = [], []
    for one, s in zip(pair.measurements, scatterings, strict=True):
        straight = one.entry.pair == pair.units
        if straight or not one.sweep.one_path:
            forward.append((s.s11, s.s21))
        if not straight or not one.sweep.one_path:
            backward.append((s.s22, s.s12))
    forward = forward or [(s.s11, s.s21) for s in scatterings]
    backward = backward or [(s.s22, s.s12) for s in scatterings]
    s11, s21 = (np.mean(part, axis=0) for part in zip(*forward, strict=True))
    s22, s12 = (np.mean(part, axis=0) for part in zip(*backward, strict=True))
    return Scattering(s11, s12, s21, s22)


def inverted(sweep: Sweep) -> bool:
    """True when the windings are joined the wrong way round: S21 begins beyond +-90 degrees."""
    s21 = sweep.s[:, 1, 0]
    passing = np.flatnonzero(np.abs(s21) > _POLARITY_FLOOR)
    first = passing[0] if passing.size else int(np.argmax(np.abs(s21)))
    return bool(s21[first].real < 0)


def pair_findings(pair: Pair) -> tuple[Finding, ...]:
    """What is worth knowing about how a pair was swept."""
    found = [
        Finding(
            severity=Severity.NOTE,
            code="polarity",
            file=one.sweep.file,
            message="S21 begins beyond +-90 degrees: the two units are joined the wrong way "
            "round; its sign was changed",
            remedy="nothing to do; the loss does not depend on it",
        )
        for one in pair.measurements
        if inverted(one.sweep)
    ]
    ways = {one.entry.pair for one in pair.measurements}
    if len(ways) == 1 and all(sweep.one_path for sweep in pair.sweeps):
        found.append(
            Finding(
                severity=Severity.NOTE,
                code="one-path-pair",
                file=pair.sweeps[0].file,
                message=f"only one path of the pair {' and '.join(pair.units)} was measured; "
                "S22 is taken to equal S11, which costs up to 0.13 dB when the units differ",
                remedy="sweep the pair again the other way round and enter it with "
                f'units = ["{pair.units[1]}", "{pair.units[0]}"]',
            )
        )
    return tuple(found)
