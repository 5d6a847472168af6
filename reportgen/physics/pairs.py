"""From the sweeps of a pair to one scattering matrix: repeats, missing paths, polarity."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass

import numpy as np

from reportgen.model import Finding, Measurement, RealArray, Setup, Severity, Sweep
from reportgen.physics.grid import resampled
from reportgen.physics.network import Scattering

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


def scattering_of_sweep(sweep: Sweep, frequency_hz: RealArray) -> Scattering:
    """A two-port sweep at frequencies within it; what was not measured is taken from symmetry.

    A one-path sweep gives S22 = S11, a guess, and S12 = S21, which reciprocity makes sure.
    """
    s = resampled(sweep, frequency_hz)
    if sweep.one_path:
        return Scattering(s[0, 0], s[1, 0], s[1, 0], s[0, 0])
    return Scattering(s[0, 0], s[0, 1], s[1, 0], s[1, 1])


def oriented_scatterings(pair: Pair, frequency_hz: RealArray) -> tuple[Scattering, ...]:
    """Each sweep of a pair with the first unit of `pair.units` at port 1, right in polarity."""
    seen = ((one, scattering_of_sweep(one.sweep, frequency_hz)) for one in pair.measurements)
    turned = (s if one.entry.pair == pair.units else s.reversed() for one, s in seen)
    return tuple(s.negated() if inverted(s) else s for s in turned)


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
    if not forward or not backward:
        forward = backward = forward or backward
    s11, s21 = (np.mean(part, axis=0) for part in zip(*forward, strict=True))
    s22, s12 = (np.mean(part, axis=0) for part in zip(*backward, strict=True))
    return Scattering(s11, s12, s21, s22)


def inverted(s: Scattering) -> bool:
    """True when the windings are joined the wrong way round: S21 begins beyond +-90 degrees."""
    passing = np.flatnonzero(np.abs(s.s21) > _POLARITY_FLOOR)
    first = passing[0] if passing.size else int(np.argmax(np.abs(s.s21)))
    return bool(s.s21[first].real < 0)


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
        if inverted(scattering_of_sweep(one.sweep, one.sweep.frequency_hz))
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
