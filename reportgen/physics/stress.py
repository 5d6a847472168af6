"""What a build is put under at a power: volts, amperes, flux, and the limit that is met first.

All at the worst phase of the load's mismatch, losses left out: on the safe side. Small-signal
sweeps say nothing of saturation or breakdown; only limits that somebody gave are judged.

References
----------
.. [1] Faraday's law for a sine: B = sqrt(2) V / (2 pi f N Ae), V in rms.
.. [2] Two published formulas for the rise of a surface in free air, both of heat over surface:
   (mW/cm^2)^0.833 in core makers' catalogues, and 450 (W/cm^2)^0.826 in W. T. McLyman, Transformer
   and Inductor Design Handbook (both from memory). They differ by about 45 %.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence

import numpy as np

from reportgen.model import (
    BuildSheet,
    FirstLimit,
    MeasuredBand,
    Stress,
    StressBand,
)
from reportgen.physics.core import effective_parameters, surface_m2

_TESLA_PER_MT = 1e-3


def stress_of(
    sheet: BuildSheet,
    bands: Sequence[MeasuredBand],
    power_w: float,
    most_heat_ratio: Mapping[str, float] | None = None,
) -> Stress | None:
    """Stress in every band, and the power at which the first given limit is met.

    Parameters
    ----------
    sheet : BuildSheet
        Turns, core, capacitor, match and rating.
    bands : sequence of MeasuredBand
        Those with figures.
    power_w : float
        Power at the low side, its peak envelope [W].
    most_heat_ratio : mapping of str to float, optional
        Heat over power in each band into the worst load of the rating's SWR; without it heat is
        that into the nominal load.

    Notes
    -----
    With a load of standing-wave ratio s the voltage across a side is at most sqrt(P R s) and the
    current sqrt(P s / R), R being the side's nominal resistance: both grow with the root of s. Flux
    goes with the low side's voltage [1]_ and is largest at the lowest frequency, the capacitor's
    current at the highest.
    """
    if not bands:
        return None
    most = most_heat_ratio or {}
    known = all(band.band.name in most for band in bands if "heat_w" in band.figures)
    found = tuple(
        _in_band(sheet, band, power_w, most.get(band.band.name) if known else None)
        for band in bands
    )
    return Stress(
        power_w=power_w,
        load_swr=sheet.rating.load_swr,
        heat_load_swr=sheet.rating.load_swr if known and most else 1.0,
        low_side_v=side_v(power_w, sheet.match.source_ohm, sheet.rating.load_swr),
        low_side_a=side_a(power_w, sheet.match.source_ohm, sheet.rating.load_swr),
        high_side_v=side_v(power_w, sheet.nominal_load_ohm, sheet.rating.load_swr),
        high_side_a=side_a(power_w, sheet.nominal_load_ohm, sheet.rating.load_swr),
        bands=found,
        first_limit=_first_limit(sheet, found, power_w),
    )


def side_v(power_w: float, resistance_ohm: float, swr: float) -> float:
    """Largest voltage across a side, rms [V]; the peak is sqrt(2) times that."""
    return float(np.sqrt(power_w * resistance_ohm * swr))


def side_a(power_w: float, resistance_ohm: float, swr: float) -> float:
    """Largest current of a side, rms [A]."""
    return float(np.sqrt(power_w * swr / resistance_ohm))


def peak_flux_t(volts_rms: float, frequency_hz: float, turns: float, area_m2: float) -> float:
    """Peak flux density by Faraday's law [1]_ [T]."""
    return float(np.sqrt(2) * volts_rms / (2 * np.pi * frequency_hz * turns * area_m2))


def surface_rise_k(heat_w: float, surface_m2_: float) -> tuple[float, float]:
    """Rise of a bare surface in still free air by the two published formulas [2]_ [K], lower first.

    Outside a sealed box, with the heat spread evenly; a range, never one number.
    """
    per_cm2_w = heat_w / (surface_m2_ * 1e4)
    rises = ((1000 * per_cm2_w) ** 0.833, 450 * per_cm2_w**0.826)
    return min(rises), max(rises)


def _in_band(
    sheet: BuildSheet, band: MeasuredBand, power_w: float, most_heat_ratio: float | None
) -> StressBand:
    low_hz, high_hz = band.covered_hz
    swr, core, capacitor = sheet.rating.load_swr, sheet.core, sheet.compensation
    low_v = side_v(power_w, sheet.match.source_ohm, swr)
    across_ohm = sheet.match.source_ohm if capacitor.side == "low" else sheet.nominal_load_ohm
    capacitor_v = side_v(power_w, across_ohm, swr)
    farad = capacitor.capacitor_pf * 1e-12
    matched_w = _matched_heat_w(band)
    heat_w = matched_w if most_heat_ratio is None else power_w * most_heat_ratio
    flux_t = rise = None
    if core is not None:
        area_m2 = effective_parameters(core).area_m2
        flux_t = peak_flux_t(low_v, low_hz, sheet.winding.low_turns, area_m2)
        rise = None if heat_w is None else surface_rise_k(max(heat_w, 0.0), surface_m2(core))
    return StressBand(
        band=band.band.name,
        peak_flux_t=flux_t,
        capacitor_v=capacitor_v if farad else None,
        capacitor_a=capacitor_v * 2 * np.pi * high_hz * farad if farad else None,
        heat_w=heat_w,
        matched_heat_w=matched_w,
        surface_rise_k=rise,
    )


def _matched_heat_w(band: MeasuredBand) -> float | None:
    """Upper end of the heat at the worst frequency, into the nominal load [W]."""
    heat = band.figures.get("heat_w")
    if heat is None:
        return None
    ends = (heat.worst_high95, heat.high95, heat.worst, heat.mean)
    return next((end for end in ends if end is not None), None)


def _first_limit(
    sheet: BuildSheet, bands: Sequence[StressBand], power_w: float
) -> FirstLimit | None:
    """The given limit that the lowest power meets; flux and volts go with its root."""
    limits = []
    flux_limit_mt = None if sheet.core is None else sheet.core.flux_limit_mt
    for band in bands:
        if flux_limit_mt is not None and band.peak_flux_t is not None:
            share = band.peak_flux_t / (flux_limit_mt * _TESLA_PER_MT)
            limits.append(
                FirstLimit(
                    what="flux", band=band.band, power_w=power_w / share**2, limit=flux_limit_mt
                )
            )
    rated_v = sheet.compensation.rated_v
    if rated_v is not None and bands[0].capacitor_v is not None:
        share = np.sqrt(2) * bands[0].capacitor_v / rated_v
        limits.append(
            FirstLimit(
                what="capacitor volts",
                band=None,
                power_w=float(power_w / share**2),
                limit=rated_v,
            )
        )
    return min(limits, key=lambda one: one.power_w, default=None)
