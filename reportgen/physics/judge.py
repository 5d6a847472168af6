"""Figures against the workshop's limits; the uncertainty is the guard band.

References
----------
.. [1] JCGM 106:2012, clause 8.3 (guarded acceptance).
"""

from __future__ import annotations

from collections.abc import Sequence

from reportgen.model import (
    BandResult,
    BenchSheet,
    Figure,
    Judgement,
    LimitResult,
    Limits,
    MeasuredBand,
)
from reportgen.physics.outcomes import Outcome
from reportgen.physics.quantities import BY_KEY, Better


def judge(bands: Sequence[BandResult], bench: BenchSheet) -> tuple[LimitResult, ...]:
    """Every limit that the workshop sets, judged on the worst in each band."""
    return tuple(
        _judged(band, key, limit)
        for band in bands
        for key, limit in limits_of_band(bench, band.band.name)
    )


def limits_of_band(bench: BenchSheet, band: str) -> list[tuple[str, float]]:
    """Limits of a band by quantity; what it does not set itself is taken from `all`."""
    own, common = bench.limits.get(band, Limits()), bench.limits.get("all", Limits())
    swr = common.swr if own.swr is None else own.swr
    percent = (
        common.efficiency_percent if own.efficiency_percent is None else own.efficiency_percent
    )
    found = [] if swr is None else [("swr", swr)]
    return found if percent is None else [*found, ("efficiency_ratio", percent / 100)]


def _judged(band: BandResult, key: str, limit: float) -> LimitResult:
    figure = band.figures.get(key) if isinstance(band, MeasuredBand) else None
    return LimitResult(
        band=band.band.name,
        quantity=key,
        limit=limit,
        value=None if figure is None else figure.worst,
        low95=None if figure is None else figure.worst_low95,
        high95=None if figure is None else figure.worst_high95,
        judgement=_judgement(figure, key, limit),
    )


def _judgement(figure: Figure | None, key: str, limit: float) -> Judgement:
    """Pass or fail only when the whole interval does; without an end it is unbounded there."""
    if figure is None or figure.worst is None:
        return Judgement.NOT_MEASURED
    low = float("-inf") if figure.worst_low95 is None else figure.worst_low95
    high = float("inf") if figure.worst_high95 is None else figure.worst_high95
    if BY_KEY[key].better is Better.HIGHER:
        low, high, limit = -high, -low, -limit
    if high <= limit:
        return Judgement.PASS
    return Judgement.FAIL if low > limit else Judgement.UNDECIDED


def predicted_misses(outcome: Outcome, bench: BenchSheet) -> tuple[str, ...]:
    """Bands on which a prediction misses a limit: worst SWR, and efficiency by the mean loss."""
    return tuple(
        band.band
        for band in outcome.bands
        if any(
            band.swr.value > limit
            if key == "swr"
            else 10 ** (-band.heat_loss_db.value / 10) < limit
            for key, limit in limits_of_band(bench, band.band)
        )
    )


def overall(limits: Sequence[LimitResult]) -> Judgement | None:
    """What the limits say of the build: one failure fails it, one doubt leaves it undecided."""
    found = {one.judgement for one in limits} - {Judgement.NOT_MEASURED}
    for judgement in (Judgement.FAIL, Judgement.UNDECIDED, Judgement.PASS):
        if judgement in found:
            return judgement
    return None
