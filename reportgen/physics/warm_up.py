"""How fast and how far a build warms up: final rise and time constant from a temperature log.

One heat, one body: the heat is constant and spread evenly, and the core goes to its surroundings
as 1 - exp(-t/tau). The thermometer sees a surface, never the hottest spot.

References
----------
.. [1] R. Hampel et al., Robust Statistics, 1986: variance of an M-estimate (from memory).
.. [2] A. Sokal, Monte Carlo Methods in Statistical Mechanics, 1997: autocorrelation time summed up
   to a few times itself (from memory).
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from scipy.optimize import least_squares
from scipy.signal import lfilter
from scipy.special import stdtrit

from reportgen.errors import NotMeasurable
from reportgen.model import Interval, RealArray, ThermalLog, WarmUp

FEWEST_ROWS = 20
_MOST_ROWS = 1000  # longer logs are averaged in blocks
_GRID_POINTS = 2000  # on which the surroundings are followed
_SOFTNESS = 2.0  # standard deviations beyond which a row loses weight
_TRIED = 25
_LEAST_RISE_K = 2.0
_WINDOW = 3  # autocorrelation times that are summed up


def fit_warm_up(log: ThermalLog) -> WarmUp:
    """Final rise and time constant, each with its 95 % interval.

    Notes
    -----
    tau dT/dt = T_final - (T - T_ambient). With a(t) the surroundings as the core follows them, a
    first-order lag of tau, the curve is a(t) + rise (1 - exp(-t/tau)) + start exp(-t/tau): a core
    that begins warm loses that start, so a drift of the room does not bend the curve. A difference
    between the two thermometers is taken as a rise.

    Least squares with soft_l1 loss; variance of an M-estimate [1]_, widened by the autocorrelation
    time of the residuals [2]_. Intervals are symmetric in the logarithms of rise and tau.

    Raises
    ------
    NotMeasurable
        Too few rows, no rise, or not bent enough to tell where the curve goes.
    """
    if len(log.time_s) < FEWEST_ROWS:
        raise NotMeasurable(f"the log has {len(log.time_s)} rows, {FEWEST_ROWS} are needed")
    if log.span_s <= 0:
        raise NotMeasurable("all rows of the log have the same time")
    time_s, core_c, ambient_c = _averaged(log)
    curve = _Curve(time_s, ambient_c)
    first, scale = _first_guess(curve, core_c)
    found = least_squares(
        lambda at: core_c - curve(at), first, loss="soft_l1", f_scale=_SOFTNESS * scale,
        x_scale=(max(abs(first[0]), 1.0), 1.0, 0.1),
    ).x  # fmt: skip
    residual = core_c - curve(found)
    if found[0] < _LEAST_RISE_K:
        raise NotMeasurable(f"the core gets only {found[0]:.1f} K warmer than its surroundings")
    half = _half_widths(curve, found, residual, _SOFTNESS * scale)
    return WarmUp(
        rise_k=_log_interval(found[0], half[0] / found[0]),
        start_k=float(found[1]),
        time_constant_s=_log_interval(np.exp(found[2]), half[2]),
        time_s=time_s,
        core_c=core_c,
        ambient_c=ambient_c,
        fitted_c=core_c - residual,
    )


def _averaged(log: ThermalLog) -> tuple[RealArray, RealArray, RealArray]:
    """Time from the first row, core and surroundings; long logs as means of blocks of rows."""
    blocks = np.array_split(np.arange(len(log.time_s)), min(len(log.time_s), _MOST_ROWS))
    time_s, core_c, ambient_c = (
        np.array([column[block].mean() for block in blocks])
        for column in (log.time_s - log.time_s[0], log.core_c, log.ambient_c)
    )
    return time_s, core_c, ambient_c


@dataclass(frozen=True, slots=True, eq=False)
class _Curve:
    """Core temperature from (rise, start, ln tau), at rows in a room of given temperature."""

    time_s: RealArray
    ambient_c: RealArray

    def __call__(self, at: RealArray) -> RealArray:
        rise, start, tau_s = at[0], at[1], np.exp(at[2])
        left = np.exp(-self.time_s / tau_s)
        return np.asarray(self._followed(tau_s) + rise * (1 - left) + start * left)

    def _followed(self, tau_s: float) -> RealArray:
        """The room as the core follows it [C]: a lag of first order, from the first row on."""
        grid_s = np.linspace(0, self.time_s[-1], _GRID_POINTS)
        ambient = np.interp(grid_s, self.time_s, self.ambient_c)
        middle = np.append(ambient[0], (ambient[1:] + ambient[:-1]) / 2)
        keep = np.exp(-grid_s[1] / tau_s)
        followed, _ = lfilter([1 - keep], [1, -keep], middle, zi=[keep * ambient[0]])
        return np.asarray(np.interp(self.time_s, grid_s, followed))

    def slopes(self, at: RealArray) -> RealArray:
        """Change of each row with each of the three, (N, 3)."""
        steps = np.diag([1e-3, 1e-3, 1e-4])
        return np.stack([(self(at + h) - self(at - h)) / (2 * h.sum()) for h in steps], axis=-1)

    def room_variance(self, weights: RealArray, tau_s: float) -> RealArray:
        """What the scatter of the room's thermometer adds to sums over rows of these weights.

        Residuals do not show it: behind the lag it is slow, and the curve bends with it.
        """
        keep = np.exp(-self.time_s[-1] / (len(self.time_s) - 1) / tau_s)
        lagged = lfilter([1 - keep], [1, -keep], weights[:, ::-1], axis=-1)
        return np.asarray(np.sum(lagged**2, axis=-1) * np.mean(np.diff(self.ambient_c) ** 2) / 2)


def _first_guess(curve: _Curve, core_c: RealArray) -> tuple[RealArray, float]:
    """Best of many time constants, and the scatter about it [K]; rise and start are linear."""
    best = np.empty(0)
    least = np.inf
    span_s = curve.time_s[-1]
    for log_tau in np.log(np.geomspace(span_s / 100, 10 * span_s, _TRIED)):
        base = curve(np.array([0, 0, log_tau]))
        columns = [curve(np.array([*unit, log_tau])) - base for unit in ((1, 0), (0, 1))]
        linear, *_ = np.linalg.lstsq(np.column_stack(columns), core_c - base, rcond=None)
        off = float(np.mean(np.abs(core_c - base - linear @ np.array(columns))))
        if off < least:
            least, best = off, np.array([*linear, log_tau])
    return best, max(1.25 * least, 1e-3)  # mean deviation to standard deviation of a Gaussian


def _half_widths(curve: _Curve, at: RealArray, residual: RealArray, soft: float) -> RealArray:
    """Half of the 95 % interval of rise, start and ln tau."""
    bent = 1 + (residual / soft) ** 2
    influence = residual / np.sqrt(bent)
    variance = np.mean(influence**2) / np.mean(bent**-1.5) ** 2  # [1]
    rows, freedom = rows_worth_one(influence, len(at))
    weights = np.asarray(np.linalg.pinv(curve.slopes(at)), dtype=float)
    spread = np.sum(weights**2, axis=-1) * variance * rows
    spread = spread + curve.room_variance(weights, np.exp(at[2]))
    return np.asarray(stdtrit(freedom, 0.975) * np.sqrt(spread))


def rows_worth_one(residual: RealArray, fitted: int) -> tuple[float, float]:
    """Rows that are worth one independent row, at least 1, and degrees of freedom of that number.

    The autocorrelation time, summed up to three times itself [2]_. A fit takes the slow part out of
    its residuals: each of W lags loses about 2 `fitted` / N of the sum, which is put back.
    """
    count = len(residual)
    power = np.abs(np.fft.rfft(residual, 2 * count)) ** 2
    correlation = np.fft.irfft(power)[:count]
    if correlation[0] <= 0:
        return 1.0, float(count - fitted)
    summed = 2 * np.cumsum(correlation / correlation[0]) - 1
    enough = np.flatnonzero(np.arange(count) >= _WINDOW * np.maximum(summed, 1))
    lags = int(enough[0]) if enough.size else count - 1
    kept = max(1 - 2 * fitted * lags / count, 0.25)
    return float(max(summed[lags], 1.0) / kept), max(count / (2 * lags + 1) - 1, 2.0)


def _log_interval(value: float, half: float) -> Interval:
    known = half < np.log(10)
    return Interval(
        value=float(value),
        low95=float(value * np.exp(-half)) if known else None,
        high95=float(value * np.exp(half)) if known else None,
    )
