"""Invented stress and temperature logs, for looking at pages: no measurement stands behind them."""

from dataclasses import replace

import numpy as np
import result_samples as samples

from reportgen.model import (
    BuildResult,
    FirstLimit,
    Interval,
    Permitted,
    PermittedMode,
    Stress,
    StressBand,
    Thermal,
    ThermalBand,
    ThermalFit,
    WarmUp,
)


def within(value: float, u95: float) -> Interval:
    return Interval(value=value, low95=value - u95, high95=value + u95)


def stress(first_limit: FirstLimit | None = None) -> Stress:
    return Stress(
        power_w=60,
        load_swr=2.5,
        heat_load_swr=2.5,
        low_side_v=86.6,
        low_side_a=1.732,
        high_side_v=692.8,
        high_side_a=0.2165,
        bands=tuple(
            StressBand(
                band=band,
                peak_flux_t=flux_t,
                capacitor_v=86.6,
                capacitor_a=amperes,
                heat_w=heat_w,
                matched_heat_w=heat_w / 2,
                surface_rise_k=(10 * heat_w, 14.4 * heat_w),
            )
            for band, flux_t, amperes, heat_w in (
                ("80 m", 0.01936, 0.17, 8.91),
                ("40 m", 0.00968, 0.32, 8.93),
                ("10 m", 0.00242, 1.325, 7.8),
            )
        ),
        first_limit=first_limit,
    )


def fit() -> ThermalFit:
    return ThermalFit(
        file="warm-up.csv",
        unit="A",
        power_w=40,
        frequency_hz=7.1e6,
        heat_w=within(5.7, 0.26),
        rise_k=within(53.3, 0.6),
        start_k=0.4,
        time_constant_s=within(816, 30),
        resistance_k_per_w=within(9.36, 0.42),
        span_s=3270,
    )


def warm_up() -> WarmUp:
    time_s = np.arange(0, 3280, 10.0)
    fitted_c = 22 + 53.3 * (1 - np.exp(-time_s / 816))
    return WarmUp(
        rise_k=fit().rise_k,
        start_k=0.4,
        time_constant_s=fit().time_constant_s,
        time_s=time_s,
        core_c=fitted_c + 0.3 * np.sin(time_s),
        ambient_c=np.full_like(time_s, 22.0),
        fitted_c=fitted_c,
    )


def permitted(*, extrapolated: bool = False, heat_load_swr: float = 2.5) -> Permitted:
    def mode(name: str, duty: float, power_w: float, band: str | None, bound_by: str):
        return PermittedMode(
            mode=name, duty_percent=duty, power_w=power_w, band=band, bound_by=bound_by,
            high_side_v=692.8 * (power_w / 60) ** 0.5,
            extrapolated=extrapolated and bound_by == "heat",
        )  # fmt: skip

    return Permitted(
        limit_c=90,
        limit_of="core",
        ambient_max_c=40,
        load_swr=2.5,
        heat_load_swr=heat_load_swr,
        bands=(
            ThermalBand(band="80 m", continuous_w=35.9, matched_w=71.8, minutes_to_limit=12.8),
            ThermalBand(
                band="40 m", continuous_w=83.0, extrapolated=extrapolated, minutes_to_limit=None
            ),
            ThermalBand(band="10 m", continuous_w=None, reason="no heat known in this band"),
        ),
        modes=(
            mode("carrier", 100, 35.9, "80 m", "heat"),
            mode("voice", 20, 68.5, "160 m", "flux"),
        ),
    )


def thermal(found: Permitted | None = None, reason: str | None = None) -> Thermal:
    return Thermal(fits=(fit(),), fit=fit(), warm_up=warm_up(), permitted=found, reason=reason)


def result(found: Thermal | None, first_limit: FirstLimit | None = None) -> BuildResult:
    return replace(samples.full(), stress=stress(first_limit), thermal=found)
