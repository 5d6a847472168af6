"""Where the heat goes: winding, core and capacitor, and what the circuit says of the winding."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np

from reportgen.model import (
    BandResult,
    BuildSheet,
    HeatSplit,
    HeatSplitBand,
    Interval,
    MeasuredBand,
    Permeability,
    RealArray,
    WindingFigures,
)
from reportgen.physics.bands import mean_ratio
from reportgen.physics.core import permeability_of
from reportgen.physics.network import Impedance
from reportgen.physics.solve import Solved
from reportgen.physics.uncertainty import in_range, interval
from reportgen.physics.winding import Arms, open_and_short_ohm

REAL_PART_TO_HZ = 6e6
"""Above this strays of a few picofarads outweigh the real part of the permeability [Hz]."""


@dataclass(frozen=True, slots=True, eq=False)
class Dissipated:
    """Heat in each part over the power that enters the low side, (..., F) each [ratio]."""

    winding: RealArray
    core: RealArray
    capacitor: RealArray

    @property
    def total(self) -> RealArray:
        """Heat in all parts [ratio]."""
        return self.winding + self.core + self.capacitor


def dissipated(arms: Arms, load_ohm: Impedance) -> Dissipated:
    """Heat in each part of the circuit with a load on it.

    Parameters
    ----------
    arms : Arms
        Referred to the low side.
    load_ohm : float or (..., F) array
        The load, referred to the low side too [ohm].

    Notes
    -----
    From the load back with one volt across it: an arm of impedance z turns |I|^2 Re z into heat, an
    admittance y |V|^2 Re y.
    """
    load_s = 1 / np.asarray(load_ohm, dtype=complex)
    series_ohm = arms.wire_ohm + 1j * arms.series_ohm.imag
    behind = arms.share * series_ohm
    front = series_ohm - behind
    current = load_s + arms.high_s
    winding = np.abs(current) ** 2 * behind.real
    volts = 1 + behind * current
    core = np.abs(volts) ** 2 * arms.shunt_s.real
    current = current + arms.shunt_s * volts
    winding = winding + np.abs(current) ** 2 * front.real
    volts = volts + front * current
    capacitor = np.abs(volts) ** 2 * arms.capacitor_s.real
    entering = load_s.real + winding + core + capacitor
    return Dissipated(winding / entering, core / entering, capacitor / entering)


def heat_split_of(
    group: Sequence[Solved], bands: Sequence[BandResult], sheet: BuildSheet, power_w: float
) -> HeatSplit | None:
    """Where the heat of the result goes; None where its method does not tell the winding apart.

    Parameters
    ----------
    group : sequence of Solved
        The result's method, once for each pair or unit; those swept over another range than the
        first are left out.
    bands : sequence of BandResult
        The result's bands: their heat is what is divided.
    sheet : BuildSheet
        Turns, load, core.
    power_w : float
        Power that enters the low side [W].
    """
    first = group[0]
    hz = first.spread.seen.frequency_hz
    group = [one for one in group if np.array_equal(one.spread.seen.frequency_hz, hz)]
    seen = [one.spread.without.arms for one in group]
    drawn = [one.spread.computed.arms for one in group]
    if any(arms is None for arms in (*seen, *drawn)):
        return None
    load_ohm = sheet.nominal_load_ohm / sheet.winding.turns_ratio**2
    parts = _mean_parts([dissipated(arms, load_ohm) for arms in seen if arms is not None])
    draws = _mean_parts([dissipated(arms, load_ohm) for arms in drawn if arms is not None])
    winding = _winding_figures([a for a in seen if a], [a for a in drawn if a], hz)
    if not np.isfinite([*parts.total, winding.leakage_h.value, winding.coupling_ratio.value]).all():
        return None
    measured = [band for band in bands if isinstance(band, MeasuredBand)]
    return HeatSplit(
        bands=tuple(_in_band(first, band, parts, draws, power_w) for band in measured),
        winding=winding,
        permeability=_permeability([a for a in seen if a], [a for a in drawn if a], hz, sheet),
    )


def _mean_parts(parts: Sequence[Dissipated]) -> Dissipated:
    return Dissipated(
        np.mean([one.winding for one in parts], axis=0),
        np.mean([one.core for one in parts], axis=0),
        np.mean([one.capacitor for one in parts], axis=0),
    )


def _in_band(
    solved: Solved, band: MeasuredBand, parts: Dissipated, draws: Dissipated, power_w: float
) -> HeatSplitBand:
    inside = in_range(solved.spread, band)
    hz = solved.spread.seen.frequency_hz[inside]

    def mean(ratio: RealArray) -> RealArray:
        return mean_ratio(hz, ratio[..., inside])

    share = mean(draws.core) / mean(draws.total)
    low, high = interval(share)
    total = float(mean(parts.total))
    heat = band.figures.get("heat_w")
    measured_w = None if heat is None else heat.mean
    watts = (power_w * total if measured_w is None else measured_w) / total
    return HeatSplitBand(
        band=band.band.name,
        winding_w=watts * float(mean(parts.winding)),
        core_w=watts * float(mean(parts.core)),
        capacitor_w=watts * float(mean(parts.capacitor)),
        core_share=Interval(
            value=float(mean(parts.core) / mean(parts.total)), low95=low, high95=high
        ),
    )


def _interval_of(value: float, draws: RealArray) -> Interval:
    low, high = interval(draws)
    return Interval(value=value, low95=low, high95=high)


def _winding_figures(
    seen: Sequence[Arms], drawn: Sequence[Arms], frequency_hz: RealArray
) -> WindingFigures:
    leakage, magnetising, coupling = (
        np.mean(values, axis=0)
        for values in zip(*(_inductances(arms, frequency_hz) for arms in seen), strict=True)
    )
    draws = [
        np.mean(values, axis=0)
        for values in zip(*(_inductances(arms, frequency_hz) for arms in drawn), strict=True)
    ]
    return WindingFigures(
        leakage_h=_interval_of(float(leakage), draws[0]),
        magnetising_h=_interval_of(float(magnetising), draws[1]),
        magnetising_at_hz=float(frequency_hz[0]),
        coupling_ratio=_interval_of(float(coupling), draws[2]),
    )


def _inductances(arms: Arms, frequency_hz: RealArray) -> tuple[RealArray, RealArray, RealArray]:
    """Leakage [H] (median over frequency), magnetising [H] and coupling (lowest frequency).

    The lead's inductance counts as leakage: what is in front of the capacitor and what is behind
    it cannot be told apart as well as their sum is known.
    """
    omega = 2 * np.pi * frequency_hz
    leakage = np.median((arms.lead_ohm + arms.series_ohm).imag / omega, axis=-1)
    magnetising = (1 / arms.shunt_s[..., 0]).imag / omega[0]
    z_open, z_short = open_and_short_ohm(_bare(arms))
    ratio = z_short[..., 0].imag / z_open[..., 0].imag
    return leakage, magnetising, np.sqrt(np.clip(1 - ratio, 0, 1))


def _bare(arms: Arms) -> Arms:
    """The winding without lead, capacitor and strays."""
    nothing = np.zeros_like(arms.series_ohm)
    return replace(arms, lead_ohm=nothing, capacitor_s=nothing, high_s=nothing)


def _permeability(
    seen: Sequence[Arms], drawn: Sequence[Arms], frequency_hz: RealArray, sheet: BuildSheet
) -> Permeability | None:
    """Of the core, when its size is given."""
    core, turns = sheet.core, sheet.winding.low_turns
    if core is None:
        return None

    def of(parts: Sequence[Arms]) -> np.ndarray:
        found = [permeability_of(arms.shunt_s, frequency_hz, core, turns) for arms in parts]
        return np.asarray(np.mean(found, axis=0))

    value, draws = of(seen), of(drawn)
    ends = np.quantile(draws.real, [0.025, 0.975], axis=0)
    losses = np.quantile(-draws.imag, [0.025, 0.975], axis=0)
    return Permeability(
        frequency_hz=frequency_hz,
        real=value.real,
        real_low95=ends[0],
        real_high95=ends[1],
        real_to_hz=REAL_PART_TO_HZ,
        lossy=-value.imag,
        lossy_low95=losses[0],
        lossy_high95=losses[1],
    )
