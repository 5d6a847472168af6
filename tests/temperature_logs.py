"""Temperature logs of simulated builds: a body in a room that drifts, two noisy thermometers.

`python tests/temperature_logs.py` prints how often the stated intervals hold the truth in 200 logs.
"""

from dataclasses import dataclass

import numpy as np

from reportgen.model import Interval, ThermalLog
from reportgen.physics.thermal import thermal_resistance_k_per_w
from reportgen.physics.warm_up import fit_warm_up

HEAT_U95 = 0.1  # of the heat itself


@dataclass(frozen=True, kw_only=True)
class Truth:
    """A build that warms up, and how it was logged."""

    resistance_k_per_w: float = 8.0
    time_constant_s: float = 600.0
    heat_w: float = 5.0
    span_s: float = 2400.0
    step_s: float = 5.0
    start_k: float = 0.0
    drift_k_per_h: float = 0.0
    draught_k: float = 0.0  # slow scatter of the core's thermometer, 30 s long
    noise_k: float = 0.3
    resolution_k: float = 0.1


def random_truth(rng: np.random.Generator, draught_k: float = 0.0) -> Truth:
    tau_s = rng.uniform(200, 1500)
    return Truth(
        resistance_k_per_w=rng.uniform(3, 12),
        time_constant_s=tau_s,
        heat_w=rng.uniform(2, 8),
        span_s=tau_s * rng.uniform(2.5, 6),
        step_s=rng.uniform(1, 10),
        start_k=rng.uniform(0, 2),
        drift_k_per_h=rng.uniform(-3, 3),
        draught_k=draught_k,
    )


def simulated_log(truth: Truth, rng: np.random.Generator) -> ThermalLog:
    """tau dT/dt = R P - (T - room), stepped finely; then read with noise and rounded."""
    time_s = np.arange(0, truth.span_s, truth.step_s)
    parts = 20
    fine_s = np.arange(0, (len(time_s) - 1) * parts + 1) * truth.step_s / parts
    room = 22 + truth.drift_k_per_h * fine_s / 3600 + 0.3 * np.sin(2 * np.pi * fine_s / 1200)
    core = np.empty_like(fine_s)
    core[0] = room[0] + truth.start_k
    share = truth.step_s / parts / truth.time_constant_s
    final = room + truth.resistance_k_per_w * truth.heat_w
    for at in range(1, len(fine_s)):
        core[at] = core[at - 1] + share * (final[at - 1] - core[at - 1])

    def read(true: np.ndarray) -> np.ndarray:
        seen = true + rng.normal(0, truth.noise_k, len(true))
        return np.round(seen / truth.resolution_k) * truth.resolution_k

    slow = np.zeros(len(time_s))
    keep = np.exp(-truth.step_s / 30)
    for at in range(1, len(slow)):
        slow[at] = keep * slow[at - 1] + rng.normal(0, truth.draught_k * np.sqrt(1 - keep**2))
    return ThermalLog(
        file="warmup.csv",
        sha256="",
        time_s=time_s,
        core_c=read(core[::parts] + slow),
        ambient_c=read(room[::parts]),
    )


def told_heat_w(truth: Truth, rng: np.random.Generator) -> Interval:
    """The heat as sweeps give it: off by a Gaussian of which HEAT_U95 is the 95 % limit."""
    value = truth.heat_w * (1 + rng.normal(0, HEAT_U95 / 1.96))
    u95 = HEAT_U95 * truth.heat_w
    return Interval(value=value, low95=value - u95, high95=value + u95)


@dataclass(frozen=True)
class Score:
    """Error over half width of the 95 % interval, in logarithms, (logs, 3): R, rise, tau."""

    over_u95: np.ndarray

    @property
    def held(self) -> np.ndarray:
        return np.mean(np.abs(self.over_u95) <= 1, axis=0)

    @property
    def rms(self) -> np.ndarray:
        """0.51 for a Gaussian whose width is stated rightly."""
        return np.sqrt(np.mean(self.over_u95**2, axis=0))


def score(logs: int, seed: int, draught_k: float = 0.0) -> Score:
    rows = []
    for one in np.random.default_rng(seed).spawn(logs):
        truth = random_truth(one, draught_k)
        fit = fit_warm_up(simulated_log(truth, one))
        resistance = thermal_resistance_k_per_w(fit.rise_k, told_heat_w(truth, one))
        rise_k = truth.resistance_k_per_w * truth.heat_w
        rows.append(
            [
                _over(resistance, truth.resistance_k_per_w),
                _over(fit.rise_k, rise_k),
                _over(fit.time_constant_s, truth.time_constant_s),
            ]
        )
    return Score(np.array(rows))


def _over(stated: Interval, true: float) -> float:
    end = stated.high95 if true > stated.value else stated.low95
    assert end is not None
    return float(np.log(true / stated.value) / abs(np.log(end / stated.value)))


if __name__ == "__main__":
    for draught_k in (0.0, 0.3):
        found = score(200, 1, draught_k)
        print(f"slow scatter {draught_k} C: holds R, rise, tau in {100 * found.held} %")
        print(f"  error over u95, rms: {found.rms}")
