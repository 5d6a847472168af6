"""Whether the methods of a build say the same: each against the best one for its units.

Both are taken from the same draws, so what they share cancels; a series resistor is compared at
the load that it really had.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence

import numpy as np

from reportgen.model import (
    Agreement,
    Finding,
    MeasuredBand,
    Method,
    MethodResult,
    RealArray,
    Severity,
)
from reportgen.physics.bands import mean_ratio
from reportgen.physics.choose import rank
from reportgen.physics.drawn import Drawn
from reportgen.physics.loads import load_had_ohm
from reportgen.physics.methods import used_stray_f
from reportgen.physics.network import efficiency_ratio
from reportgen.physics.quantities import decibel_loss
from reportgen.physics.solve import Solved, bands_with_loss
from reportgen.physics.uncertainty import half_width, in_range

DOUBT = 2.0
"""A difference above so many times its own u95 is a disagreement: four standard deviations."""

SMALLEST_DB = 0.03
"""A smaller difference is of no consequence and counts as agreement [dB]."""

_LOADED = (
    Method.BISECTION_LOAD,
    Method.THREE_PAIRS_LOAD,
    Method.TERMINATIONS,
    Method.SERIES_RESISTOR,
)
_RISE = 3.0


def find_agreements(
    solved: Sequence[Solved], drawn: Drawn
) -> tuple[tuple[Agreement, ...], tuple[Finding, ...]]:
    """Every method against the best one that speaks of the same units; doubts are findings."""
    best: dict[frozenset[str], Solved] = {}
    agreements: list[Agreement] = []
    findings: list[Finding] = []
    for one in sorted(solved, key=_rank):
        if not bands_with_loss(one.result.bands):
            continue
        first = best.setdefault(frozenset(one.result.units), one)
        if first is not one:
            found, doubts = _compared(one, first, drawn)
            agreements.append(found)
            findings += doubts
    return tuple(agreements), tuple(findings)


def _rank(one: Solved) -> tuple[bool, tuple[int, float, int]]:
    """Methods that know the unit itself come first: they can tell it with any load."""
    return one.spread.computed.chain is None, rank(one.result)


def _compared(one: Solved, best: Solved, drawn: Drawn) -> tuple[Agreement, list[Finding]]:
    ours, theirs = one.spread.drawn.efficiency_ratio, _at_the_same_load(one, best, drawn)
    hz = one.spread.seen.frequency_hz
    if ours is None or theirs is None or not np.array_equal(hz, best.spread.seen.frequency_hz):
        reason = "the two sweeps differ in range, or the load that one had is not known"
        return _agreement(one.result, best.result, {}, reason), []
    differences = {
        band.band.name: _loss_db(one, ours, band) - _loss_db(one, theirs, band)
        for band in bands_with_loss(one.result.bands)
    }
    if not all(np.isfinite(draws).all() for draws in differences.values()):
        reason = "a loss is without bounds in some draws"
        return _agreement(one.result, best.result, {}, reason), []
    found = _agreement(one.result, best.result, differences, None)
    return found, [disagreement(found, differences)] if found.agrees is False else []


def _loss_db(one: Solved, ratio: RealArray, band: MeasuredBand) -> RealArray:
    inside = in_range(one.spread, band)
    hz = one.spread.seen.frequency_hz[inside]
    return decibel_loss(mean_ratio(hz, ratio[..., inside]))


def _at_the_same_load(one: Solved, best: Solved, drawn: Drawn) -> RealArray | None:
    """Draws of the best method's efficiency with the load that the other's figures hold for."""
    had, chain = one.plan.had, best.spread.computed.chain
    if had is None:
        return best.spread.drawn.efficiency_ratio
    fit = best.spread.computed.strays.get(had.stray_key)
    if chain is None or fit is None:
        return None
    stray_f = used_stray_f(had, fit, drawn)
    load_ohm = load_had_ohm(had, stray_f, best.spread.seen.frequency_hz, drawn)
    return efficiency_ratio(chain, load_ohm)


def _agreement(
    one: MethodResult,
    best: MethodResult,
    differences: Mapping[str, RealArray],
    reason: str | None,
) -> Agreement:
    """The band in which the difference is largest against its own uncertainty decides."""
    if not differences:
        return Agreement(
            method=one.method, unit=one.unit, against=best.method, agrees=None, reason=reason
        )
    band = max(differences, key=lambda name: _doubt(differences[name]))
    return Agreement(
        method=one.method,
        unit=one.unit,
        against=best.method,
        agrees=_doubt(differences[band]) <= DOUBT,
        band=band,
        difference_db=float(np.median(differences[band])),
        u95_db=half_width(differences[band]),
    )


def _doubt(draws: RealArray) -> float:
    """A difference over its own u95; one of no consequence counts for nothing."""
    difference = float(abs(np.median(draws)))
    return 0.0 if difference <= SMALLEST_DB else difference / half_width(draws)


def disagreement(one: Agreement, differences: Mapping[str, RealArray]) -> Finding:
    """A finding about methods that disagree, with its likely cause.

    Parameters
    ----------
    one : Agreement
        Where `agrees` is False.
    differences : mapping of str to (K,) array
        Draws of the difference in each band, by frequency [dB].
    """
    by_band = np.array([np.median(draws) for draws in differences.values()])
    rises = abs(by_band[-1]) > _RISE * max(abs(by_band[0]), 0.01)
    if not {one.method, one.against} & set(_LOADED):
        cause = "the units of the pairs may have been mixed up, or the fixture moved"
        remedy = "check the units of each sweep"
    elif rises:
        cause = "it grows with frequency, as a stray capacitance at a load or a fixture does"
        remedy = 'let the stray be fitted (stray_pf = "fit"), with the same leads for all sweeps'
    else:
        cause = "it is much the same in all bands, as a wrong load value or port order makes it"
        remedy = "measure the load again, and check which port and unit each sweep belongs to"
    return Finding(
        severity=Severity.WARNING,
        code="methods-disagree",
        message=f"{one.method.value} differs from {one.against.value} by "
        f"{one.difference_db:+.2f} dB on {one.band}, where {one.u95_db:.2f} dB would be "
        f"explained; {cause}",
        remedy=remedy,
    )
