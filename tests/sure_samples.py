"""An invented result with everything that tells how sure it is."""

from dataclasses import replace

import numpy as np
import result_samples as samples

from reportgen.model import (
    Advice,
    Agreement,
    BudgetLine,
    BuildResult,
    Calibration,
    Fitted,
    Judgement,
    LimitResult,
    Lot,
    LotBand,
    MeasuredBand,
    Method,
    Repeatability,
    Setup,
)

NAMES = tuple(band.name for band in samples.BANDS)
BENCH = replace(
    samples.BENCH,
    calibrations={"evening": Calibration(load_match_db=40.0)},
)


def sure() -> BuildResult:
    """Unequal, one-sided and even intervals, and all that is said of them."""
    full = samples.full(u95=0.03)
    found = full.chosen.curves
    curves = replace(
        found,
        efficiency_low95=found.efficiency_ratio - 0.02,
        efficiency_high95=found.efficiency_ratio + 0.01,
    )
    bands = tuple(_with_ends(band) for band in full.chosen.bands)
    chosen = replace(full.chosen, curves=curves, bands=bands)
    check = samples.sweep("thru.s2p", Setup.THRU_CHECK, 2, unit="A", calibration="evening")
    measurements = (*full.build.measurements, check)
    return replace(
        full,
        build=replace(full.build, measurements=measurements),
        chosen=chosen,
        methods=(chosen, *full.methods[1:]),
        loss_draws_db=_draws(bands),
        fitted=(Fitted(quantity="stray_pf", of="loads.main", value=3.127, u95=0.342),),
        agreements=(_agreement(),),
        budget=_budget(),
        advice=_advice(),
        limits=_limits(),
        lot=_lot(),
        repeatability=(Repeatability(file="pair-again.s2p", of="pair-ab.s2p", rms_ratio=0.00051),),
    )


def _with_ends(band: MeasuredBand) -> MeasuredBand:
    """Worst values with intervals; 30 m has a lopsided return loss, 20 m a one-sided one."""
    figures = {
        key: replace(one, worst_low95=one.worst * 0.97, worst_high95=one.worst * 1.03)
        for key, one in band.figures.items()
    }
    ends = {"30 m": (25.04, 37.91), "20 m": (24.67, None)}.get(band.band.name)
    if ends is not None:
        figures["return_loss_db"] = replace(
            figures["return_loss_db"], mean=27.0, low95=ends[0], high95=ends[1]
        )
    return replace(band, figures=figures)


def _draws(bands) -> dict[str, np.ndarray]:
    spread = np.linspace(-0.02, 0.02, 1001)
    return {band.band.name: band.figures["heat_loss_db"].mean + spread for band in bands}


def _agreement() -> Agreement:
    return Agreement(
        method=Method.BISECTION,
        unit=None,
        against=Method.BISECTION_LOAD,
        agrees=False,
        band="10 m",
        difference_db=0.2117,
        u95_db=0.0421,
    )


def _budget() -> tuple[BudgetLine, ...]:
    rising = np.linspace(0.01, 0.065, len(NAMES))
    return (
        BudgetLine(contribution="tracking", u95_db=dict.fromkeys(NAMES, 0.0414)),
        BudgetLine(
            contribution="load match", u95_db=dict(zip(NAMES, rising.tolist(), strict=True))
        ),
        BudgetLine(contribution="noise", u95_db=dict.fromkeys(NAMES, 0.0002)),
    )


def _advice() -> tuple[Advice, ...]:
    words = "a load sweep of unit A and of unit B"
    return (Advice(sweep=words, band="40 m", u95_db=0.0912, u95_then_db=0.0308),)


def _lot() -> Lot:
    near = {"least_db": 0.601, "greatest_db": 0.612, "worst_unit": "B"}
    far = {"least_db": 0.584, "greatest_db": 0.672, "worst_unit": "C"}
    return Lot(
        units=("A", "B", "C"),
        bands=(
            LotBand(band="160 m", standard_deviation_db=0.04, **far),
            LotBand(band="40 m", standard_deviation_db=0.01, **near),
        ),
    )


def _limits() -> tuple[LimitResult, ...]:
    swr = {"quantity": "swr", "limit": 2.0}
    share = {"quantity": "efficiency_ratio", "limit": 0.85}
    return (
        LimitResult(
            band="40 m", **swr, value=1.5, low95=1.45, high95=1.55, judgement=Judgement.PASS
        ),
        LimitResult(
            band="40 m",
            **share,
            value=0.856,
            low95=0.847,
            high95=0.865,
            judgement=Judgement.UNDECIDED,
        ),
        LimitResult(band="10 m", **swr, value=2.2, low95=2.1, high95=2.3, judgement=Judgement.FAIL),
        LimitResult(
            band="10 m",
            **share,
            value=None,
            low95=None,
            high95=None,
            judgement=Judgement.NOT_MEASURED,
        ),
    )
