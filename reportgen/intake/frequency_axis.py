"""The frequency axis of a sweep: points that cannot be used, order, repeated frequencies."""

from __future__ import annotations

from bisect import bisect_right
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from reportgen.intake.remarks import Remarks, listed_lines, quoted
from reportgen.model import Band, ComplexArray, RealArray

LARGEST_SHARE_NOT_FINITE = 0.01
LARGEST_SHARE_OUT_OF_PLACE = 0.05
LARGEST_SHARE_REPEATED = 0.1
LARGEST_GAP = 0.1
"""Difference between two readings at one frequency that may be a seam [ratio]."""
HIGHEST_HZ = 1e15
"""Frequency above which nothing is swept: that of light [Hz]."""


@dataclass(frozen=True, slots=True, eq=False)
class Points:
    """Network data over frequency: (F,) [Hz], (F, n, n) complex, and the line of each point."""

    frequency_hz: RealArray
    network: ComplexArray
    lines: NDArray[np.int64]

    def __len__(self) -> int:
        return len(self.lines)

    def taken(self, which: NDArray[np.bool_] | NDArray[np.intp]) -> Points:
        """The points of a mask, or of indices in their order."""
        return Points(self.frequency_hz[which], self.network[which], self.lines[which])


def finite_points(points: Points, bands: Sequence[Band], remarks: Remarks) -> Points:
    """The points without those that hold no number; too many, or one in a band, is an error."""
    finite = np.isfinite(points.frequency_hz) & np.isfinite(points.network).all(axis=(1, 2))
    if finite.all():
        return points
    lost = points.taken(~finite)
    message = f"{len(lost)} of {len(points)} points not finite ({listed_lines(lost.lines)})"
    line = int(lost.lines[0])
    hit = [band.name for band in bands if _holds_one(band, lost.frequency_hz)]
    if len(lost) > LARGEST_SHARE_NOT_FINITE * len(points):
        message += "; at most 1 % may be"
        remarks.error("not-finite", message, "sweep again, or remove these lines", line)
    elif hit:
        message += f", of which some inside the band {quoted(hit[0])}; expected numbers there"
        remarks.error("not-finite", message, "sweep again", line)
    else:
        remarks.warn("not-finite", f"{message}, dropped", "look at the sweep there", line)
    return points.taken(finite)


def _holds_one(band: Band, frequency_hz: RealArray) -> bool:
    """Whether a point lies in the band, or may do so because its frequency is not known."""
    inside = (frequency_hz >= band.from_hz) & (frequency_hz <= band.to_hz)
    return bool((inside | ~np.isfinite(frequency_hz)).any())


def points_above_zero(points: Points, remarks: Remarks) -> Points:
    """The points without that at 0 Hz; a frequency below 0, or one of light, is an error."""
    beyond = points.lines[points.frequency_hz > HIGHEST_HZ]
    if len(beyond):
        remarks.error(
            "absurd-frequency",
            f"a frequency above {HIGHEST_HZ / 1e9:.0f} GHz in {listed_lines(beyond)}",
            "see whether the unit on the option line is right",
            int(beyond[0]),
        )
    negative, zero = points.lines[points.frequency_hz < 0], points.lines[points.frequency_hz == 0]
    if len(negative):
        remarks.error(
            "negative-frequency",
            f"a frequency below 0 in {listed_lines(negative)}; expected one above 0",
            "export the sweep again",
            int(negative[0]),
        )
    if len(zero):
        remarks.note(
            "zero-frequency",
            f"a point at 0 Hz in {listed_lines(zero)}, left out: bands and charts begin above 0",
            "nothing to do",
            int(zero[0]),
        )
    kept = points.taken(points.frequency_hz > 0)
    if not len(kept) and not len(negative):
        remarks.error("no-data", "no data rows above 0 Hz", "sweep again", int(zero[0]))
    return kept


def ascending_points(points: Points, remarks: Remarks) -> Points:
    """The points by frequency; much disorder is an error."""
    steps = np.diff(points.frequency_hz)
    if (steps >= 0).all():
        return points
    line = int(points.lines[1:][steps < 0][0])
    if (steps <= 0).all():
        remarks.warn(
            "descending", "frequencies descend; sorted", "sweep upwards for other readers", line
        )
    else:
        _remark_disorder(points, line, remarks)
    return points.taken(np.argsort(points.frequency_hz, kind="stable"))


def _remark_disorder(points: Points, line: int, remarks: Remarks) -> None:
    stray = len(points) - _longest_ascent(points.frequency_hz)
    message = f"{stray} of {len(points)} frequencies out of place, the first drop in line {line}"
    if stray > LARGEST_SHARE_OUT_OF_PLACE * len(points):
        remarks.error(
            "out-of-order",
            f"{message}; expected ascending frequencies",
            "are several sweeps in the file? Split it, or sort its lines",
            line,
        )
    else:
        remarks.warn("out-of-order", f"{message}; sorted", "see how the file was written", line)


def _longest_ascent(frequency_hz: RealArray) -> int:
    """Length of the longest subsequence that does not descend."""
    ends: list[float] = []
    for value in frequency_hz.tolist():
        at = bisect_right(ends, value)
        ends[at : at + 1] = [value]
    return len(ends)


def distinct_points(points: Points, remarks: Remarks) -> Points:
    """One point for each frequency of ascending points: the mean where a frequency repeats."""
    first = np.diff(points.frequency_hz, prepend=-np.inf) > 0
    if first.all():
        return points
    starts, group = np.flatnonzero(first), np.cumsum(first) - 1
    kept = points.taken(starts)
    gap = np.abs(points.network - kept.network[group]).max(axis=(1, 2))
    differing = np.unique(group[gap > 0])
    if not len(differing):
        again = np.sort(points.lines[~first])
        remarks.note(
            "repeated-frequency",
            f"{listed_lines(again)} repeat a frequency with the same data; left out",
            "nothing to do",
            int(again[0]),
        )
        return kept
    _remark_seams(kept, differing, float(gap.max()), remarks)
    counts = np.bincount(group)[:, np.newaxis, np.newaxis]
    means = np.add.reduceat(points.network, starts) / counts
    network = kept.network.copy()
    network[differing] = means[differing]
    return Points(kept.frequency_hz, network, kept.lines)


def _remark_seams(kept: Points, differing: NDArray[np.intp], gap: float, remarks: Remarks) -> None:
    lines = kept.lines[differing]
    message = (
        f"{len(differing)} of {len(kept)} frequencies stand there more than once with data that "
        f"differ by up to {gap:.2g} ({listed_lines(lines)})"
    )
    if len(differing) > LARGEST_SHARE_REPEATED * len(kept) or gap > LARGEST_GAP:
        remarks.error(
            "repeated-frequency",
            f"{message}; expected at most 10 % of them, and a difference of at most {LARGEST_GAP}",
            "are several sweeps in the file? Split it",
            int(lines[0]),
        )
    else:
        remarks.warn(
            "repeated-frequency",
            f"{message}; their mean was taken",
            "see how the segments of the sweep join",
            int(lines[0]),
        )
