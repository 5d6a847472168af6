"""Whether the methods of a build say the same, on common draws."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

import numpy as np

from reportgen.model import Agreement, Finding, Method, MethodResult, RealArray, Severity
from reportgen.physics.uncertainty import half_width

DOUBT = 1.5
"""A difference above so many times its own u95 is a disagreement: three standard deviations."""

_LOADED = (
    Method.BISECTION_LOAD,
    Method.THREE_PAIRS_LOAD,
    Method.TERMINATIONS,
    Method.SERIES_RESISTOR,
)
_RISE = 3.0


def agreement(
    other: MethodResult,
    chosen: MethodResult,
    other_db: Mapping[str, RealArray],
    chosen_db: Mapping[str, RealArray],
) -> Agreement:
    """Another method against the result, band by band.

    Parameters
    ----------
    other, chosen : MethodResult
        What is compared with what.
    other_db, chosen_db : mapping of str to (K,) array
        Draws of the mean heat loss of each band [dB], of the same draws of the inputs.
    """
    shared = [name for name in chosen_db if name in other_db]
    if set(other.units) != set(chosen.units):
        return _not_comparable(other, "it speaks of other units")
    if not shared:
        return _not_comparable(other, "it gives no loss in the same bands")
    differences = {name: other_db[name] - chosen_db[name] for name in shared}
    band = max(shared, key=lambda name: _doubt(differences[name]))
    draws = differences[band]
    return Agreement(
        method=other.method,
        unit=other.unit,
        agrees=_doubt(draws) <= DOUBT,
        band=band,
        difference_db=float(np.median(draws)),
        u95_db=half_width(draws),
    )


def _not_comparable(other: MethodResult, reason: str) -> Agreement:
    return Agreement(method=other.method, unit=other.unit, agrees=None, reason=reason)


def _doubt(draws: RealArray) -> float:
    """A difference over its own u95; one that rounding makes counts for nothing."""
    return float(abs(np.median(draws)) / max(half_width(draws), 1e-4))


def disagreement_finding(
    one: Agreement, chosen: MethodResult, bands_in_order: Sequence[str], differences: RealArray
) -> Finding:
    """A finding about methods that disagree, with its likely cause.

    Parameters
    ----------
    one : Agreement
        Where `agrees` is False.
    chosen : MethodResult
        The result.
    bands_in_order : sequence of str
        The bands of `differences`, by frequency.
    differences : (B,) array
        Other method minus result in each band [dB].
    """
    rises = abs(differences[-1]) > _RISE * max(abs(float(np.median(differences))), 0.01)
    loaded = one.method in _LOADED or chosen.method in _LOADED
    if loaded and rises and one.band == bands_in_order[-1]:
        cause = "it grows with frequency, as a stray capacitance at the load or the fixture does"
        remedy = (
            'let the stray be fitted (stray_pf = "fit"), and keep the same leads for all sweeps'
        )
    elif loaded:
        cause = "it is much the same in all bands, as a wrong load value or port order makes it"
        remedy = "measure the load again, and check which port and unit each sweep belongs to"
    else:
        cause = "the units of the pairs may have been mixed up, or the fixture moved"
        remedy = "check the units of each sweep"
    return Finding(
        severity=Severity.WARNING,
        code="methods-disagree",
        message=f"{one.method.value} differs from {chosen.method.value} by "
        f"{one.difference_db:+.2f} dB on {one.band}, where {one.u95_db:.2f} dB would be "
        f"explained; {cause}",
        remedy=remedy,
    )
