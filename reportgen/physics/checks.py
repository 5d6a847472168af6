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
from typing import Any

import numpy as np

from reportgen.model import (
    ComplexArray,
    Curves,
    Finding,
    Measurement,
    RealArray,
    Setup,
    Severity,
)
from reportgen.physics.drawn import Drawn
from reportgen.physics.grid import resampled
from reportgen.physics.network import (
    Chain,
    Scattering,
    reflection_of_impedance,
    scattering_of_chain,
    series_arm,
)
from reportgen.physics.residuals import seen_through
from reportgen.physics.uncertainty import RATIOS, Spread

CHECKS = (Setup.THRU_CHECK, Setup.RESISTOR_CHECK)

_POINTS = 8
_ALLOWED_EXCESS = 1.5
_LEAST_RATIO = 1e-6  # 60 dB of return loss
_SMALLEST_SHARE = 1e-5  # of the artefact's variance; what is below is noise


def find_checks(measurements: Sequence[Measurement]) -> tuple[Measurement, ...]:
    """Check sweeps of those calibrations that the other sweeps were taken with."""
    used = {one.entry.calibration for one in measurements if one.entry.setup not in CHECKS}
    return tuple(
        one for one in measurements if one.entry.setup in CHECKS and one.entry.calibration in used
    )


def check_findings(measurements: Sequence[Measurement], drawn: Drawn) -> tuple[Finding, ...]:
    """Check sweeps that show more than their calibration's limits allow."""
    return tuple(
        _contradiction(one, excess)
        for one in measurements
        if one.entry.setup is Setup.THRU_CHECK or _is_known_resistor(one)
        if (excess := _excess(one, drawn)) > _ALLOWED_EXCESS
    )


def _is_known_resistor(one: Measurement) -> bool:
    return one.entry.setup in (Setup.RESISTOR_CHECK, Setup.LOAD_CHECK) and one.load is not None


def _excess(one: Measurement, drawn: Drawn) -> float:
    """How far what was seen lies from what is expected, over the furthest of all draws [ratio]."""
    seen, shown = _seen_and_shown(one, drawn)
    expected = shown.mean(axis=0)
    return float(np.max(np.abs(seen - expected) / np.max(np.abs(shown - expected), axis=0)))


def _contradiction(one: Measurement, excess: float) -> Finding:
    calibration = one.entry.calibration or "of this build"
    return Finding(
        severity=Severity.WARNING,
        code="check-contradicts-grade",
        file=one.sweep.file,
        message=f"the {one.entry.setup.value} is {excess:.1f} times as far from its true value as "
        f"the limits of the calibration {calibration} allow",
        remedy="calibrate again, check the resistor's value, or state larger limits for this "
        "calibration in runs.toml",
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
            after[name] = _possible(name, after[name])
    moved = {name: getattr(spread.seen, name) + part for name, part in shift.items()}
    moved = {name: _possible(name, ratio) for name, ratio in moved.items()}
    return replace(
        spread,
        drawn=replace(spread.drawn, **after),
        seen=replace(spread.seen, **moved),
        shift=shift,
    )


def _possible(name: str, ratio: RealArray) -> RealArray:
    """Reflected power is not negative, which a linear update does not know."""
    return np.maximum(ratio, _LEAST_RATIO) if name == "reflection_ratio" else ratio


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
    pairs = _shown_by_one_port(one, hz, drawn) if one.sweep.ports == 1 else _shown(one, hz, drawn)
    seen = _real(np.concatenate([at[i, j] for i, j in pairs]))
    draws = [drawn.as_swept_again(one, shown, hz, 2 * i + j) for (i, j), shown in pairs.items()]
    return seen, _real(np.concatenate(draws, axis=-1))


_Shown = dict[tuple[int, int], ComplexArray]


def _shown(one: Measurement, frequency_hz: RealArray, drawn: Drawn) -> _Shown:
    """Each measured parameter of a two-port artefact as the draws show it."""
    forward, backward = drawn.ports(one, frequency_hz)
    shown = seen_through(_artefact(one, frequency_hz, drawn), forward, backward)
    measured: _Shown = {(0, 0): shown.s11, (1, 0): shown.s21}
    if not one.sweep.one_path:
        measured |= {(1, 1): shown.s22, (0, 1): shown.s12}
    return measured


def _shown_by_one_port(one: Measurement, frequency_hz: RealArray, drawn: Drawn) -> _Shown:
    """The reflection of a bare load as the draws show it; its stray is not known."""
    forward, _ = drawn.ports(one, frequency_hz)
    assert one.load is not None
    ohm = drawn.resistance_ohm(one.entry.load or "load", one.load)
    true = reflection_of_impedance(ohm + 0 * frequency_hz)
    tracked = forward.reflection_tracking * true / (1 - forward.source_match * true)
    return {(0, 0): np.asarray(forward.directivity + tracked)}


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
    parts: dict[str, Any] = {
        name: _possible(
            name,
            getattr(curves, name) + np.interp(curves.frequency_hz, spread.seen.frequency_hz, shift),
        )
        for name, shift in spread.shift.items()
        if getattr(curves, name) is not None
    }
    return replace(curves, **parts)
