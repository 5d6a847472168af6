"""What heat permits: power by band and mode, and the time to the limit.

Assumed: the core's surface as logged, no hotter spot inside; loss as measured cold; the enclosure
of the log; rise in proportion to heat. None of it holds far beyond what was logged, so powers there
are marked.

References
----------
.. [1] FCC OET Bulletin 65, Supplement B, edition 97-01, table 2 (from two quotations; processed
   voice: they disagree, 40 or 50 %, the greater is taken). Its averaging times of 6 and 30 minutes
   are about exposure: what counts for heat is the build's own time constant.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence

import numpy as np

from reportgen.model import (
    BuildSheet,
    Permitted,
    PermittedMode,
    Stress,
    StressBand,
    ThermalBand,
    ThermalFit,
)

DUTY_PERCENT: Mapping[str, float] = {
    "carrier": 100,
    "FM voice": 100,
    "frequency-shift keying": 100,
    "voice, processed": 50,
    "telegraphy": 40,
    "voice": 20,
}
"""Mean power over peak envelope power while sending, by mode [percent] [1]_."""

EXTRAPOLATED_BEYOND = 2.0
"""Times the logged power, or the logged heat, beyond which a power is marked."""


def duty_table(own: Mapping[str, float]) -> dict[str, float]:
    """Duty of each mode [percent]: the table, the workshop's own figures before it."""
    return {**DUTY_PERCENT, **own}


def permitted_of(
    fit: ThermalFit, stress: Stress, sheet: BuildSheet, duty_percent: Mapping[str, float]
) -> Permitted | None:
    """What the build stands by band and mode; None: no temperature limit, or no heat, is known.

    Parameters
    ----------
    fit : ThermalFit
        From a log of this build, in its enclosure.
    stress : Stress
        Its heat counts, at most, and its first limit of volts or flux: no mode may have more.
    sheet : BuildSheet
        Names the temperature limits and the hottest surroundings.
    duty_percent : mapping
        By mode, see `duty_table`.

    Notes
    -----
    (limit - ambient) = R h P, h the share of the power that becomes heat. R is taken as fitted:
    with too little heat read off the sweeps it comes out too large, so its error and that of h
    work against each other.
    """
    lowest = lowest_limit(sheet)
    if lowest is None:
        return None
    limit_of, limit_c = lowest
    room_k = limit_c - sheet.rating.ambient_max_c
    found = tuple(_in_band(fit, band, room_k, stress.power_w) for band in stress.bands)
    modes = _modes(found, stress, duty_percent)
    if not modes:
        return None
    return Permitted(
        limit_c=limit_c,
        limit_of=limit_of,
        ambient_max_c=sheet.rating.ambient_max_c,
        load_swr=stress.load_swr,
        heat_load_swr=stress.heat_load_swr,
        bands=found,
        modes=modes,
    )


def lowest_limit(sheet: BuildSheet) -> tuple[str, float] | None:
    """The lowest of core, wire and enclosure limits: what it is of, and the limit [C].

    The log knows the core's surface only. Held against the limit of the wire, or of the cooler
    box, it is on the safe side.
    """
    limits = {
        "core": None if sheet.core is None else sheet.core.temperature_limit_c,
        "wire": sheet.winding.temperature_limit_c,
        "enclosure": sheet.rating.enclosure_limit_c,
    }
    given = [(limit_of, limit_c) for limit_of, limit_c in limits.items() if limit_c is not None]
    return min(given, key=lambda one: one[1], default=None)


def _in_band(fit: ThermalFit, band: StressBand, room_k: float, rated_w: float) -> ThermalBand:
    if band.heat_w is None or band.heat_w <= 0:
        reason = "no heat known in this band"
        return ThermalBand(band=band.band, continuous_w=None, reason=reason)
    rise_k = fit.resistance_k_per_w.value * band.heat_w
    continuous_w = max(room_k, 0.0) / rise_k * rated_w
    matched_w = band.matched_heat_w
    return ThermalBand(
        band=band.band,
        continuous_w=continuous_w,
        matched_w=continuous_w * band.heat_w / matched_w if matched_w and matched_w > 0 else None,
        extrapolated=_is_extrapolated(fit, continuous_w, band.heat_w / rated_w),
        minutes_to_limit=minutes_to_limit(room_k, rise_k, fit.time_constant_s.value),
    )


def _is_extrapolated(fit: ThermalFit, power_w: float, heat_ratio: float) -> bool:
    heat_w = power_w * heat_ratio
    return (
        power_w > EXTRAPOLATED_BEYOND * fit.power_w
        or heat_w > EXTRAPOLATED_BEYOND * fit.heat_w.value
    )


def _modes(
    bands: Sequence[ThermalBand], stress: Stress, duty_percent: Mapping[str, float]
) -> tuple[PermittedMode, ...]:
    """What each mode may have in every band, least first; modes without duty know no heat."""
    known = [(band.continuous_w, band) for band in bands if band.continuous_w is not None]
    if not known:
        return ()
    continuous_w, hottest = min(known, key=lambda one: one[0])
    modes = [
        _mode(mode, duty, 100 * continuous_w / duty, hottest, stress)
        for mode, duty in duty_percent.items()
        if duty > 0
    ]
    return tuple(sorted(modes, key=lambda one: (one.power_w, -one.duty_percent)))


def _mode(
    mode: str, duty_percent: float, by_heat_w: float, hottest: ThermalBand, stress: Stress
) -> PermittedMode:
    limit = stress.first_limit
    if limit is not None and limit.power_w < by_heat_w:
        power_w, band, bound_by, extrapolated = limit.power_w, limit.band, limit.what, False
    else:
        power_w, band, bound_by = by_heat_w, hottest.band, "heat"
        extrapolated = hottest.extrapolated
    return PermittedMode(
        mode=mode,
        duty_percent=duty_percent,
        power_w=power_w,
        high_side_v=stress.high_side_v * float(np.sqrt(power_w / stress.power_w)),
        band=band,
        bound_by=bound_by,
        extrapolated=extrapolated,
    )


def minutes_to_limit(room_k: float, final_rise_k: float, time_constant_s: float) -> float | None:
    """Time from cold until a rise of `room_k`, as the build goes to `final_rise_k` [min].

    None: never. 0: the surroundings are at the limit already.
    """
    if room_k <= 0:
        return 0.0
    if final_rise_k <= room_k:
        return None
    return float(-time_constant_s * np.log1p(-room_k / final_rise_k) / 60)
