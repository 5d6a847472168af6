"""Fitting the winding's equivalent circuit to a half, and to draws of it."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from reportgen.model import ComplexArray, RealArray
from reportgen.physics.bisection import Halved
from reportgen.physics.network import reflection_of_impedance
from reportgen.physics.winding import (
    SPREAD,
    START,
    Frame,
    arms_of,
    low_capacitor_s,
    open_and_short_ohm,
)

MISFIT_LIMIT = 0.02
"""Largest root mean square of the reflections' misfit with which the circuit is believed."""

_FIT_POINTS = 48
_FIT_TO_HZ = 60e6
_SIGMA = 2e-3  # what a reflection may be off, all of its points together [ratio]
_EFFECTIVE_POINTS = 30  # residuals turn slowly with frequency: that many say something new
_REFIT_STEPS = 4
_BOUND_SPREADS = 5.0


def with_guesses(frame: Frame, halved: Halved, frequency_hz: RealArray) -> Frame:
    """The frame with first guesses of the inductances, from one (F,) pair."""
    omega = 2 * np.pi * frequency_hz
    series = 1 / (1 / halved.z_short_ohm - low_capacitor_s(frame, frequency_hz))
    leakage_h = float(np.median(series.imag / omega))
    magnetising_h = float(np.abs(halved.z_open_ohm[0]) / omega[0])
    return replace(
        frame,
        leakage_h=float(np.clip(leakage_h, 1e-9, 1e-5)),
        magnetising_h=float(np.clip(magnetising_h, 1e-8, 1e-2)),
    )


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Circuit:
    """A circuit as fitted.

    `parameters` is (..., 12), `misfit_ratio` the root mean square that is left over both
    reflections. `gain`, (12, 4 P + 12), moves the parameters against the change of the misfits at
    the P points `points_hz`; it belongs to the fit without draws.
    """

    frame: Frame
    parameters: RealArray
    misfit_ratio: float
    points_hz: RealArray
    gain: RealArray

    @property
    def believed(self) -> bool:
        """False when the half behaves otherwise than any such circuit."""
        return self.misfit_ratio <= MISFIT_LIMIT


def fit_circuit(halved: Halved, frame: Frame, frequency_hz: RealArray) -> Circuit:
    """The circuit whose open and short reflections come nearest to those of a half.

    Parameters
    ----------
    halved : Halved
        (F,) without draws.
    frame : Frame
        What the sidecar says; its guesses are made anew.
    frequency_hz : (F,) array
        [Hz].

    Notes
    -----
    Least squares of both reflections re 50 ohm over at most 60 points, together with what is
    expected of each parameter beforehand.
    """
    from scipy.optimize import least_squares  # slow to import, and only here

    frame = with_guesses(frame, halved, frequency_hz)
    points = fit_points(frequency_hz)
    seen = _reflections(halved.z_open_ohm[points], halved.z_short_ohm[points])
    few_hz = frequency_hz[points]

    def misfit(parameters: RealArray) -> RealArray:
        off = _reflections(*open_and_short_ohm(arms_of(parameters, frame, few_hz))) - seen
        return np.concatenate([_weighted(off), (parameters - START) / SPREAD], axis=-1)

    bounds = (START - _BOUND_SPREADS * SPREAD, START + _BOUND_SPREADS * SPREAD)
    found = least_squares(
        misfit,
        START,
        jac=lambda parameters: _slope(misfit, parameters, bounds),
        bounds=bounds,
        x_scale=SPREAD,
        max_nfev=200,
    )
    left = found.fun[: -START.size] / _weight(few_hz.size)
    return Circuit(
        frame=frame,
        parameters=found.x,
        misfit_ratio=float(np.sqrt(2 * np.mean(left**2))),
        points_hz=few_hz,
        gain=np.linalg.pinv(found.jac),
    )


def _slope(
    misfit: Callable[[RealArray], RealArray], at: RealArray, bounds: tuple[RealArray, RealArray]
) -> RealArray:
    """(M, 12) slope of the misfit by forward differences, all parameters moved in one call."""
    step = np.sqrt(np.finfo(float).eps) * np.where(at >= 0, 1.0, -1.0) * np.maximum(1.0, abs(at))
    outside = (at + step < bounds[0]) | (at + step > bounds[1])
    step = np.where(outside, -step, step)
    moved = misfit(np.vstack([at, at + np.diag(step)]))
    return np.asarray(((moved[1:] - moved[0]) / ((at + step) - at)[:, None]).T)


def _reflections(z_open_ohm: ComplexArray, z_short_ohm: ComplexArray) -> ComplexArray:
    """Open and short reflection behind each other, (..., 2 P) [ratio]."""
    return reflection_of_impedance(np.concatenate([z_open_ohm, z_short_ohm], axis=-1))


def _weight(points: int) -> float:
    return float(np.sqrt(_EFFECTIVE_POINTS / points) / _SIGMA)


def _weighted(off: ComplexArray) -> RealArray:
    scaled = _weight(off.shape[-1] // 2) * off
    return np.concatenate([scaled.real, scaled.imag], axis=-1)


def refitted(circuit: Circuit, drawn: Halved, expected: RealArray) -> Circuit:
    """The circuit as it is fitted to draws of its half, under other expectations.

    Parameters
    ----------
    circuit : Circuit
        As fitted without draws.
    drawn : Halved
        (K, P) draws of the half at `circuit.points_hz`.
    expected : (K, 12) array
        By how many of its spreads the expectation of each parameter is moved.

    Notes
    -----
    Gauss-Newton steps with the slope of the fit without draws, halved for a draw where they do not
    lessen its misfit.
    """
    goal = _reflections(drawn.z_open_ohm, drawn.z_short_ohm)

    def misfit(parameters: RealArray) -> RealArray:
        arms = arms_of(parameters, circuit.frame, circuit.points_hz)
        off = _reflections(*open_and_short_ohm(arms)) - goal
        return np.concatenate([_weighted(off), (parameters - START) / SPREAD - expected], axis=-1)

    parameters = np.broadcast_to(circuit.parameters, expected.shape).copy()
    left = misfit(parameters)
    stride = np.ones((len(expected), 1))
    for _ in range(_REFIT_STEPS):
        trial = _bounded(parameters - stride * (left @ circuit.gain.T))
        then = misfit(trial)
        better = np.sum(then**2, axis=-1, keepdims=True) < np.sum(left**2, axis=-1, keepdims=True)
        parameters = np.where(better, trial, parameters)
        left = np.where(better, then, left)
        stride = np.where(better, stride, stride / 2)
    return replace(circuit, parameters=parameters)


def _bounded(parameters: RealArray) -> RealArray:
    bound = _BOUND_SPREADS * SPREAD
    return np.clip(parameters, START - bound, START + bound)


def fit_points(frequency_hz: RealArray) -> NDArray[np.intp]:
    """Indices of the points that the fit uses."""
    within = np.flatnonzero(frequency_hz <= max(_FIT_TO_HZ, frequency_hz[0]))
    chosen = np.linspace(0, within.size - 1, min(within.size, _FIT_POINTS))
    return np.asarray(within[np.round(chosen).astype(int)])
