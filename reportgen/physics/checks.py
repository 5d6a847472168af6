"""Check sweeps of known artefacts: what they say of a calibration, and figures conditioned on it.

A thru or a bare resistor on the same calibration shows part of what the calibration leaves. Draws
of the figures and of what the analyzer would show of the artefact are jointly near Gaussian, so
the figures are updated by linear regression on the artefact's draws.

References
----------
.. [1] G. Evensen, Ocean Dynamics 53, 343-367 (2003): the ensemble form of the linear-Gaussian
   update with perturbed observations (cited from memory).
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

import numpy as np

from reportgen.model import ComplexArray, Curves, Measurement, RealArray, Setup
from reportgen.physics.drawn import Drawn
from reportgen.physics.grid import resampled
from reportgen.physics.network import Chain, Scattering, scattering_of_chain, series_arm
from reportgen.physics.residuals import seen_through
from reportgen.physics.uncertainty import RATIOS, Spread

CHECKS = (Setup.THRU_CHECK, Setup.RESISTOR_CHECK)

_POINTS = 8
_SMALLEST_SHARE = 1e-5  # of the artefact's variance; what is below is noise


def find_checks(measurements: Sequence[Measurement]) -> tuple[Measurement, ...]:
    """Check sweeps of those calibrations that the other sweeps were taken with."""
    used = {one.entry.calibration for one in measurements if one.entry.setup not in CHECKS}
    return tuple(
        one for one in measurements if one.entry.setup in CHECKS and one.entry.calibration in used
    )


def conditioned(spread: Spread, checks: Sequence[Measurement], drawn: Drawn) -> Spread:
    """A method's draws given what the check sweeps of its calibration showed.

    Parameters
    ----------
    spread : Spread
        Of the method, by `drawn`.
    checks : sequence of Measurement
        Thru and bare resistor, of calibrations that the method's sweeps used.
    drawn : Drawn
        The draws of this build.

    Notes
    -----
    q + C_qy C_yy^-1 (y - y_k) for each draw k, with y what was seen of the artefact and y_k what
    the residuals of draw k would show of it, noise and drift of that sweep included. The
    covariances of one half of the draws move the other, or the intervals would come out too small.
    """
    if not checks:
        return spread
    seen, shown = (
        np.concatenate(parts, axis=-1)
        for parts in zip(*(_seen_and_shown(one, drawn) for one in checks), strict=True)
    )
    halves = (slice(0, drawn.draws // 2), slice(drawn.draws // 2, drawn.draws))
    after, shift = {}, {}
    for name in RATIOS:
        ratio = getattr(spread.drawn, name)
        if ratio is not None:
            after[name] = np.concatenate(
                [
                    ratio[here] + (seen - shown[here]) @ _gain(shown[there], ratio[there])
                    for here, there in (halves, halves[::-1])
                ]
            )
            shift[name] = (after[name] - ratio).mean(axis=0)
    moved = {name: getattr(spread.seen, name) + part for name, part in shift.items()}
    return replace(
        spread,
        drawn=replace(spread.drawn, **after),
        seen=replace(spread.seen, **moved),
        shift=shift,
    )


def _gain(shown: RealArray, ratio: RealArray) -> RealArray:
    """Regression of a figure's draws on the artefact's draws, (D, F)."""
    centred = shown - shown.mean(axis=0)
    inverse = np.linalg.pinv(centred.T @ centred, rcond=_SMALLEST_SHARE, hermitian=True)
    return np.asarray(inverse @ centred.T @ (ratio - ratio.mean(axis=0)))


def _seen_and_shown(one: Measurement, drawn: Drawn) -> tuple[RealArray, RealArray]:
    """What a check sweep showed, (D,), and what each draw would show, (K, D)."""
    swept_hz = one.sweep.frequency_hz
    hz = np.linspace(swept_hz[0], swept_hz[-1], _POINTS)
    at = resampled(one.sweep, hz)
    forward, backward = drawn.ports(one, hz)
    shown = seen_through(_artefact(one, hz, drawn), forward, backward)
    pairs = [(at[0, 0], shown.s11, 0), (at[1, 0], shown.s21, 1)]
    if not one.sweep.one_path:
        pairs += [(at[1, 1], shown.s22, 2), (at[0, 1], shown.s12, 3)]
    seen = _real(np.concatenate([value for value, _, _ in pairs]))
    draws = [drawn.as_swept_again(one, value, hz, which) for _, value, which in pairs]
    return seen, _real(np.concatenate(draws, axis=-1))


def _artefact(one: Measurement, frequency_hz: RealArray, drawn: Drawn) -> Scattering:
    """The true artefact: a thru of no length, or the resistor with its body capacitance."""
    if one.entry.setup is Setup.THRU_CHECK or one.load is None:
        ones = np.ones((1, frequency_hz.size), dtype=complex)
        return scattering_of_chain(Chain(ones, 0 * ones, 0 * ones, ones))
    name = one.entry.load or "load"
    omega = 2 * np.pi * frequency_hz
    conductance_s = 1 / drawn.resistance_ohm(name, one.load)
    body_s = 1j * omega * drawn.body_f(name, one.load)
    return scattering_of_chain(series_arm(1 / (conductance_s + body_s)))


def _real(value: ComplexArray) -> RealArray:
    return np.concatenate([value.real, value.imag], axis=-1)


def corrected(curves: Curves, spread: Spread) -> Curves:
    """Curves moved as the check sweeps moved the draws' mean."""
    parts = {
        name: getattr(curves, name)
        + np.interp(curves.frequency_hz, spread.seen.frequency_hz, shift)
        for name, shift in spread.shift.items()
        if getattr(curves, name) is not None
    }
    return replace(curves, **parts)
