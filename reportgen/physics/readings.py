"""Single readings of a pair's through loss, taken off a screen: halving and nothing else."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import replace

import numpy as np

from reportgen.model import BuildSheet, Measurement, RealArray, Setup
from reportgen.physics.methods import Computed, Plan, halving
from reportgen.physics.pairs import Pair
from reportgen.physics.seen import Seen


def halving_of_readings(measurements: Sequence[Measurement], sheet: BuildSheet) -> list[Plan]:
    """Half of the through loss of each pair that was read off a screen."""
    return [
        replace(
            halving(Pair(one.entry.pair, (one,)), sheet),
            compute=_reading(one),
            readings=True,
        )
        for one in measurements
        if one.entry.setup is Setup.SPOT
    ]


def _reading(one: Measurement) -> Callable[[RealArray, Seen], Computed]:
    """What was read; nothing is known of its uncertainty."""

    def compute(frequency_hz: RealArray, seen: Seen) -> Computed:
        del seen
        through = np.interp(frequency_hz, one.sweep.frequency_hz, np.abs(one.sweep.s[:, 1, 0]))
        return Computed(halved_pair_ratio=through)

    return compute
