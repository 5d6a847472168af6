"""Invented heat splits and forecasts, for looking at pages: no measurement stands behind them."""

from dataclasses import replace

import numpy as np
import result_samples as samples

from reportgen.model import (
    BuildResult,
    HeatSplit,
    HeatSplitBand,
    Interval,
    Permeability,
    WindingFigures,
)
from reportgen.physics.antennas import AntennaBand, AntennaForecast
from reportgen.physics.forecast import CapacitorForecast, Forecast, WindingForecast
from reportgen.physics.outcomes import Outcome


def within(value: float, u95: float) -> Interval:
    return Interval(value=value, low95=value - u95, high95=value + u95)


def split(*, capacitor_w: float = 0.25, core: bool = True) -> HeatSplit:
    shares = {"80 m": 0.942, "40 m": 0.911, "10 m": 0.655}
    return HeatSplit(
        bands=tuple(
            HeatSplitBand(
                band=band,
                winding_w=1.04,
                core_w=7.26,
                capacitor_w=capacitor_w,
                core_share=within(share, 0.042),
            )
            for band, share in shares.items()
        ),
        winding=WindingFigures(
            leakage_h=within(188e-9, 17e-9),
            magnetising_h=within(6.47e-6, 0.35e-6),
            magnetising_at_hz=1.5e6,
            coupling_ratio=Interval(value=0.982, low95=None, high95=None),
        ),
        permeability=permeability() if core else None,
    )


def permeability() -> Permeability:
    hz = np.array([1.5e6, 3e6, 6e6, 12e6, 30e6])
    real = np.array([535.0, 500.0, 380.0, np.nan, np.nan])
    lossy = np.array([87.0, 140.0, 230.0, 210.0, 120.0])
    return Permeability(
        frequency_hz=hz,
        real=real,
        real_low95=real - 28,
        real_high95=real + 28,
        real_to_hz=6e6,
        lossy=lossy,
        lossy_low95=lossy - 26,
        lossy_high95=lossy + 26,
    )


def with_split(found: HeatSplit) -> BuildResult:
    return replace(samples.full(), heat_split=found)


# --- what to wind next ---------------------------------------------------------------------------


def outcome(swr: float, loss_db: float = 1.2, load_ohm: float = 3200.0) -> Outcome:
    return Outcome(
        load_ohm=load_ohm, swr=within(swr, 0.052), heat_loss_db=within(loss_db, 0.051), bands=()
    )


def capacitor(
    now: float = 2.333, then: float = 2.251, present_pf: float = 68.0, best_pf: float = 150.0
) -> CapacitorForecast:
    return CapacitorForecast(
        side="low",
        capacitor_pf=np.array([0.0, 68.0, 75.0, 150.0]),
        worst_swr=np.array([3.0, now, 2.3, then]),
        reflected_ratio=np.array([0.1, 0.05, 0.04, 0.06]),
        present_pf=present_pf,
        best_pf=best_pf,
        least_reflected_pf=75.0,
        now=outcome(now),
        then=outcome(then),
    )


def winding(high: float, swr: float, *, stack: int = 1, own: bool = False) -> WindingForecast:
    return WindingForecast(
        low_turns=3.0,
        high_turns=high,
        stack=stack,
        own_load=own,
        present_capacitor=outcome(9.99),
        best_pf=91.0,
        best_capacitor=outcome(swr),
    )


def forecast(**changes) -> Forecast:
    found = Forecast(
        capacitor=capacitor(),
        turns=(replace(winding(32.0, 1.445), low_turns=4.0),),
        ratios=(
            winding(22.0, 1.61),
            winding(23.0, 1.797),
            winding(23.0, 1.5, own=True),
            winding(25.0, 1.779),
        ),
        stacks=(winding(24.0, 1.367, stack=2),),
        loads=(),
        antennas=(),
        assumes=("the loads are resistances without reactance", "none of it was measured"),
    )
    return replace(found, **changes)


def antenna(file: str = "wire.s1p") -> AntennaForecast:
    measured = AntennaBand(
        band="40 m",
        covered_hz=(7e6, 7.2e6),
        efficiency_ratio=within(0.871, 0.012),
        swr=within(1.723, 0.041),
        delivered_ratio=within(0.812, 0.014),
    )
    missing = AntennaBand(band="10 m", reason="the antenna was not swept there")
    return AntennaForecast(file=file, bands=(measured, missing))
