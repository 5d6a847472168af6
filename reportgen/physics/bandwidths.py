"""Every contiguous range in which match or efficiency keep to a limit."""

from __future__ import annotations

import numpy as np

from reportgen.model import Bandwidth, Curves, Limits, RealArray
from reportgen.physics.quantities import swr_of_reflection

DEFAULT_SWR = 2.0
DEFAULT_EFFICIENCY_PERCENT = 80.0


def find_bandwidths(curves: Curves, limits: Limits) -> tuple[Bandwidth, ...]:
    """Ranges with SWR at or below its limit, and with efficiency at or above it.

    Where the workshop sets no limit, SWR 2 and 80 % stand in.
    """
    found: list[Bandwidth] = []
    if curves.reflection_ratio is not None:
        limit = limits.swr or DEFAULT_SWR
        margin = limit - swr_of_reflection(curves.reflection_ratio)
        found += _ranges(curves.frequency_hz, margin, f"swr <= {limit:g}")
    if curves.efficiency_ratio is not None:
        percent = limits.efficiency_percent
        percent = DEFAULT_EFFICIENCY_PERCENT if percent is None else percent
        margin = curves.efficiency_ratio - percent / 100
        found += _ranges(curves.frequency_hz, margin, f"efficiency >= {percent:g} %")
    return tuple(found)


def _ranges(frequency_hz: RealArray, margin: RealArray, criterion: str) -> list[Bandwidth]:
    """Contiguous ranges in which `margin` is not negative, edges interpolated linearly."""
    good = margin >= 0
    starts = np.flatnonzero(good & ~np.r_[False, good[:-1]]).tolist()
    ends = np.flatnonzero(good & ~np.r_[good[1:], False]).tolist()
    last = frequency_hz.size - 1
    return [
        Bandwidth(
            criterion=criterion,
            from_hz=_crossing_hz(frequency_hz, margin, start, max(start - 1, 0)),
            to_hz=_crossing_hz(frequency_hz, margin, end, min(end + 1, last)),
            from_sweep_edge=start == 0,
            to_sweep_edge=end == last,
        )
        for start, end in zip(starts, ends, strict=True)
    ]


def _crossing_hz(frequency_hz: RealArray, margin: RealArray, good: int, bad: int) -> float:
    """Where the margin is zero between a good point and the bad one beside it, if any [Hz]."""
    if good == bad or not np.isfinite(margin[bad]):
        return float(frequency_hz[good])
    part = margin[good] / (margin[good] - margin[bad])
    return float(frequency_hz[good] + part * (frequency_hz[bad] - frequency_hz[good]))
