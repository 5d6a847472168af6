"""A build against the baseline build, band by band."""

from __future__ import annotations

import numpy as np

from reportgen.model import (
    BandComparison,
    BandResult,
    BuildResult,
    Comparison,
    MeasuredBand,
    RealArray,
    Verdict,
)
from reportgen.physics.quantities import BY_KEY
from reportgen.physics.uncertainty import interval


def compare(result: BuildResult, baseline: BuildResult) -> Comparison:
    """This build minus the baseline: heat loss [dB], and heat at this build's rated power [W].

    A band is compared only where both sweeps cover the same part of it.
    """
    theirs = {band.band.name: band for band in baseline.chosen.bands}
    return Comparison(
        key=baseline.build.key,
        name=baseline.build.sheet.name,
        bands=tuple(
            _compare_band(band.band.name, result, baseline, band, theirs.get(band.band.name))
            for band in result.chosen.bands
        ),
    )


def _compare_band(
    name: str,
    result: BuildResult,
    baseline: BuildResult,
    ours: BandResult,
    theirs: BandResult | None,
) -> BandComparison:
    if not isinstance(ours, MeasuredBand):
        return _without(name, Verdict.NOT_MEASURED, "this build was not measured there")
    if not isinstance(theirs, MeasuredBand):
        return _without(name, Verdict.NOT_MEASURED, "the baseline was not measured there")
    if ours.covered_hz != theirs.covered_hz:
        return _without(
            name, Verdict.NOT_COMPARABLE, "the two sweeps cover different parts of the band"
        )
    losses = [_losses(band, result.power_w) for band in (ours, theirs)]
    if losses[0] is None or losses[1] is None:
        who = "this build" if losses[0] is None else "the baseline"
        return _without(name, Verdict.NOT_COMPARABLE, f"the loss of {who} was not measured")
    difference_db = losses[0][0] - losses[1][0]
    (low_db, high_db), verdict = _judged(
        result.loss_draws_db.get(name), baseline.loss_draws_db.get(name)
    )
    return BandComparison(
        band=name,
        heat_loss_db=difference_db,
        heat_w=losses[0][1] - losses[1][1],
        heat_loss_u95_db=None if low_db is None or high_db is None else (high_db - low_db) / 2,
        heat_loss_low95_db=low_db,
        heat_loss_high95_db=high_db,
        verdict=verdict,
    )


def _judged(
    ours_db: RealArray | None, theirs_db: RealArray | None
) -> tuple[tuple[float | None, float | None], Verdict | None]:
    """Ends of the difference's 95 % interval [dB], and on which side of zero it lies.

    Draws of one calibration are common to both builds, so what it leaves cancels.
    """
    if ours_db is None or theirs_db is None:
        return (None, None), None
    low, high = interval(ours_db - theirs_db)
    if low is None or high is None or low <= 0 <= high:
        return (low, high), Verdict.SAME
    return (low, high), Verdict.BETTER if high < 0 else Verdict.WORSE


def _without(name: str, verdict: Verdict, reason: str) -> BandComparison:
    return BandComparison(band=name, heat_loss_db=None, heat_w=None, verdict=verdict, reason=reason)


def _losses(band: MeasuredBand, power_w: float) -> tuple[float, float] | None:
    """Heat loss [dB] and heat at a power [W], both of the band's mean."""
    if "efficiency_ratio" not in band.figures:
        return None
    ratio, loss_db = band.figures["efficiency_ratio"].mean, band.figures["heat_loss_db"].mean
    if ratio is None or loss_db is None:
        return None
    return loss_db, float(BY_KEY["heat_w"].value(np.array(ratio), power_w))
