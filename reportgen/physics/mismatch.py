"""The most heat that a load may bring about whose standing-wave ratio stays below a limit.

A build loses more into some loads than into its nominal one: into a higher resistance more volts
stand across the core, into a lower one more current flows in the winding.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence

import numpy as np

from reportgen.model import BandResult, BuildSheet, MeasuredBand, RealArray
from reportgen.physics.network import Chain
from reportgen.physics.solve import Solved
from reportgen.physics.uncertainty import in_range, interval


def most_heat_ratio(chain: Chain, load_ohm: float, swr: float) -> RealArray:
    """Heat over power entering the low side, for the worst load of a standing-wave ratio [ratio].

    Parameters
    ----------
    chain : Chain
        From the low to the high side.
    load_ohm : float
        Resistance that the standing-wave ratio is about [ohm].
    swr : float
        1 or more.

    Notes
    -----
    With a wave b into a load of reflection r, V2 = sqrt(R) (1 + r) b and I2 = (1 - r) b / sqrt(R).
    The load takes |b|^2 (1 - |r|^2), and the low side, Re V1 I1*, is of the form c + d |r| cos of
    the phase: the worst phase follows without a search. More heat at a lower ratio does not occur:
    c + d |r| over 1 - |r|^2 grows with |r|.
    """
    rho = (swr - 1) / (swr + 1)
    volts = load_ohm * (chain.a * np.conj(chain.c)).real
    amperes = (chain.b * np.conj(chain.d)).real / load_ohm
    through, back = chain.a * np.conj(chain.d), chain.b * np.conj(chain.c)
    even = (volts + amperes) * (1 + rho**2) + (through + back).real * (1 - rho**2)
    odd = 2 * rho * np.hypot(volts - amperes, (through - back).imag)
    return np.asarray(1 - (1 - rho**2) / (even + odd))


def most_heat_ratios(
    group: Sequence[Solved], sheet: BuildSheet, bands: Sequence[BandResult]
) -> Mapping[str, float]:
    """Heat over power at most, in each band, for any load of the rating's SWR [ratio].

    Parameters
    ----------
    group : sequence of Solved
        The result's method, once for each pair or unit.
    sheet : BuildSheet
        Names the nominal load, and the SWR that its load may have.
    bands : sequence of BandResult
        The result's bands.

    Returns
    -------
    mapping of str to float
        Upper end of the 95 % interval at the worst frequency, and no less than that into the
        nominal load; empty where the method does not know the unit as a network.
    """
    measured = [band for band in bands if isinstance(band, MeasuredBand)]
    found = {band.band.name: _in_band(group, sheet, band) for band in measured}
    return {name: heat for name, heat in found.items() if heat is not None}


def _in_band(group: Sequence[Solved], sheet: BuildSheet, band: MeasuredBand) -> float | None:
    units = []
    for one in group:
        chain, inside = one.spread.computed.chain, in_range(one.spread, band)
        if chain is None or np.count_nonzero(inside) < 2:
            return None
        there = Chain(*(part[..., inside] for part in (chain.a, chain.b, chain.c, chain.d)))
        heat = most_heat_ratio(there, sheet.nominal_load_ohm, sheet.rating.load_swr)
        units.append(heat.max(axis=-1))
    _, high = interval(np.mean(units, axis=0))
    nominal = band.figures.get("efficiency_ratio")
    if high is None or nominal is None or nominal.worst_low95 is None:
        return None
    return max(high, 1 - nominal.worst_low95)
