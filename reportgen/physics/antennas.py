"""The build into an antenna that was swept: what reaches it, and the match that the source sees."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from reportgen.model import (
    BandResult,
    Build,
    Curves,
    Figure,
    Interval,
    MeasuredBand,
    Measurement,
    NotMeasured,
    RealArray,
    Setup,
)
from reportgen.physics.bands import in_bands
from reportgen.physics.grid import resampled
from reportgen.physics.network import (
    Chain,
    efficiency_ratio,
    impedance_of_reflection,
    reflection_ratio,
)
from reportgen.physics.solve import Solved
from reportgen.physics.uncertainty import Spread, mean_curves, mean_spread, with_intervals


@dataclass(frozen=True, kw_only=True, slots=True)
class AntennaBand:
    """One band: means of efficiency and delivered power [ratio], the worst SWR.

    `covered_hz` is the part that build and antenna were both swept in. All None where the antenna
    was not swept: `reason` says why, or which part is covered.
    """

    band: str
    covered_hz: tuple[float, float] | None = None
    efficiency_ratio: Interval | None = None
    swr: Interval | None = None
    delivered_ratio: Interval | None = None
    reason: str | None = None


@dataclass(frozen=True, kw_only=True, slots=True)
class AntennaForecast:
    """The build with one swept antenna on its high side."""

    file: str
    bands: tuple[AntennaBand, ...]


def antenna_forecasts(
    group: Sequence[Solved], build: Build, bands: Sequence[MeasuredBand]
) -> tuple[AntennaForecast, ...]:
    """One for each antenna sweep of the build.

    Parameters
    ----------
    group : sequence of Solved
        The result's method, once for each pair or unit; all know their chain.
    build : Build
        Its antenna sweeps are the reflection of what is to stand on the high side, re 50 ohm.
    bands : sequence of MeasuredBand
        The result's bands.
    """
    return tuple(
        AntennaForecast(
            file=one.sweep.file,
            bands=tuple(
                _figures(band) for band in _into(one, group, bands, build.sheet.match.source_ohm)
            ),
        )
        for one in build.measurements
        if one.entry.setup is Setup.ANTENNA
    )


def _into(
    antenna: Measurement,
    group: Sequence[Solved],
    bands: Sequence[MeasuredBand],
    source_ohm: float,
) -> tuple[BandResult, ...]:
    """Figures with intervals where build and antenna were both swept."""
    ranges = [antenna.sweep.frequency_hz, *(one.result.curves.frequency_hz for one in group)]
    low, high = max(hz[0] for hz in ranges), min(hz[-1] for hz in ranges)
    if low >= high:
        reason = "not covered: antenna and build were swept in different ranges"
        return tuple(NotMeasured(band=band.band, reason=reason) for band in bands)
    marks = [hz for band in bands for hz in (*band.covered_hz, band.band.centre_hz)]
    hz = np.unique(np.concatenate([*ranges, marks]))
    hz = hz[(hz >= low) & (hz <= high)]
    curves = [_curves(antenna, hz, _interpolated(one, hz), source_ohm) for one in group]
    spreads = [_spread(antenna, one, (low, high), source_ohm) for one in group]
    found = in_bands(mean_curves(curves), [band.band for band in bands], power_w=1.0)
    return with_intervals(found, mean_spread(spreads), power_w=1.0)


def _curves(antenna: Measurement, hz: RealArray, chain: Chain, source_ohm: float) -> Curves:
    """Of a unit; the antenna's points are the ones that count as swept."""
    load_ohm = impedance_of_reflection(resampled(antenna.sweep, hz)[0, 0])
    return Curves(
        frequency_hz=hz,
        native=np.isin(hz, antenna.sweep.frequency_hz),
        efficiency_ratio=efficiency_ratio(chain, load_ohm),
        reflection_ratio=reflection_ratio(chain, load_ohm, source_ohm),
    )


def _interpolated(one: Solved, hz: RealArray) -> Chain:
    chain, computed_hz = one.computed.chain, one.result.curves.frequency_hz
    assert chain is not None
    parts = (chain.a, chain.b, chain.c, chain.d)
    return Chain(*(np.interp(hz, computed_hz, part) for part in parts))


def _spread(
    antenna: Measurement, one: Solved, range_hz: tuple[float, float], source_ohm: float
) -> Spread:
    """The unit's draws into the antenna as swept, at those of their points that it covers."""
    hz = one.spread.seen.frequency_hz
    inside = (hz >= range_hz[0]) & (hz <= range_hz[1])
    seen, drawn = (
        _curves(antenna, hz[inside], _kept(chain, inside), source_ohm)
        for chain in (one.spread.without.chain, one.spread.computed.chain)
        if chain is not None
    )
    return Spread(seen=seen, drawn=drawn)


def _kept(chain: Chain, inside: NDArray[np.bool_]) -> Chain:
    return Chain(*(part[..., inside] for part in (chain.a, chain.b, chain.c, chain.d)))


def _figures(found: BandResult) -> AntennaBand:
    if isinstance(found, NotMeasured):
        return AntennaBand(band=found.band.name, reason=found.reason)
    figures = found.figures
    return AntennaBand(
        band=found.band.name,
        covered_hz=found.covered_hz,
        efficiency_ratio=_mean(figures["efficiency_ratio"]),
        swr=_worst(figures["swr"]),
        delivered_ratio=_mean(figures["delivered_ratio"]),
        reason=found.reason,
    )


def _mean(figure: Figure) -> Interval | None:
    if figure.mean is None:
        return None
    return Interval(value=figure.mean, low95=figure.low95, high95=figure.high95)


def _worst(figure: Figure) -> Interval | None:
    if figure.worst is None:
        return None
    return Interval(value=figure.worst, low95=figure.worst_low95, high95=figure.worst_high95)
