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
from dataclasses import dataclass

import numpy as np

from reportgen.model import MeasuredBand
from reportgen.physics.thermal import ThermalFit

DUTY_PERCENT: Mapping[str, float] = {
    "voice": 20,
    "voice, processed": 50,
    "telegraphy": 40,
    "frequency-shift keying": 100,
    "FM voice": 100,
    "carrier": 100,
}
"""Mean power over peak envelope power while sending, by mode [percent] [1]_."""

EXTRAPOLATED_BEYOND = 2.0
"""Times the logged power, or the logged heat, beyond which a power is marked."""


@dataclass(frozen=True, kw_only=True, slots=True)
class ModePower:
    """Peak envelope power that a mode may have for heat alone [W]; None: no bound by heat."""

    mode: str
    duty_percent: float
    power_w: float | None


@dataclass(frozen=True, kw_only=True, slots=True)
class ThermalBand:
    """What heat permits in one band.

    `continuous_w` : power that ends at the limit in the hottest surroundings [W]; None: `reason`.
    `extrapolated` : that is beyond what the log covers.
    `minutes_to_limit` : from cold at the rated power, sent without a pause; None: never.
    `modes` : peak envelope power by mode.
    """

    band: str
    continuous_w: float | None
    extrapolated: bool = False
    minutes_to_limit: float | None = None
    modes: tuple[ModePower, ...] = ()
    reason: str | None = None


def duty_table(own: Mapping[str, float]) -> dict[str, float]:
    """Duty of each mode [percent]: the table, the workshop's own figures before it."""
    return {**DUTY_PERCENT, **own}


def permitted_power(
    fit: ThermalFit,
    bands: Sequence[MeasuredBand],
    *,
    limit_c: float,
    ambient_max_c: float,
    rated_w: float,
    duty_percent: Mapping[str, float],
) -> tuple[ThermalBand, ...]:
    """What heat permits in each band.

    Parameters
    ----------
    fit : ThermalFit
        From a log of this build, in its enclosure.
    bands : sequence of MeasuredBand
        The heat taken is that of the band's least efficiency, the lower end of its interval.
    limit_c, ambient_max_c : float
        Lowest limit of core, wire and box, and the hottest surroundings named [C].
    rated_w : float
        Power asked about, entering the low side [W].
    duty_percent : mapping
        By mode, see `duty_table`.

    Notes
    -----
    (limit - ambient) = R h P, h the share of the power that becomes heat. R is taken as fitted:
    with too little heat read off the sweeps it comes out too large, so its error and that of h
    work against each other. Volts and flux may bind a mode's peak before heat does.
    """
    room_k = limit_c - ambient_max_c
    return tuple(_in_band(fit, band, room_k, rated_w, duty_percent) for band in bands)


def _in_band(
    fit: ThermalFit,
    band: MeasuredBand,
    room_k: float,
    rated_w: float,
    duty_percent: Mapping[str, float],
) -> ThermalBand:
    name = band.band.name
    heat_ratio = _heat_ratio(band)
    if heat_ratio is None or heat_ratio <= 0:
        return ThermalBand(band=name, continuous_w=None, reason="no heat known in this band")
    k_per_w = fit.resistance_k_per_w.value * heat_ratio
    continuous_w = max(room_k, 0.0) / k_per_w
    modes = duty_percent.items()
    return ThermalBand(
        band=name,
        continuous_w=continuous_w,
        extrapolated=_is_extrapolated(fit, continuous_w, heat_ratio),
        minutes_to_limit=minutes_to_limit(room_k, k_per_w * rated_w, fit.time_constant_s.value),
        modes=tuple(
            ModePower(mode=mode, duty_percent=duty, power_w=_peak_w(continuous_w, duty))
            for mode, duty in modes
        ),
    )


def _heat_ratio(band: MeasuredBand) -> float | None:
    """Upper end of the heat over the power, where the band is worst [ratio]."""
    efficiency = band.figures.get("efficiency_ratio")
    if efficiency is None:
        return None
    low = efficiency.low95 if efficiency.worst_low95 is None else efficiency.worst_low95
    return None if low is None else 1 - low


def _is_extrapolated(fit: ThermalFit, power_w: float, heat_ratio: float) -> bool:
    heat_w = power_w * heat_ratio
    return (
        power_w > EXTRAPOLATED_BEYOND * fit.power_w
        or heat_w > EXTRAPOLATED_BEYOND * fit.heat_w.value
    )


def _peak_w(continuous_w: float, duty_percent: float) -> float | None:
    return 100 * continuous_w / duty_percent if duty_percent else None


def minutes_to_limit(room_k: float, final_rise_k: float, time_constant_s: float) -> float | None:
    """Time from cold until a rise of `room_k`, as the build goes to `final_rise_k` [min].

    None: never. 0: the surroundings are at the limit already.
    """
    if room_k <= 0:
        return 0.0
    if final_rise_k <= room_k:
        return None
    return float(-time_constant_s * np.log1p(-room_k / final_rise_k) / 60)
