"""The table of reported quantities: everything that prints a band figure loops over it.

A band's mean is taken of a power ratio over frequency; the quantity follows from that mean. So a
quantity is a ratio of the curves and a monotone function of it.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from enum import StrEnum

import numpy as np

from reportgen.model import Curves, RealArray


class Better(StrEnum):
    """Which way a quantity improves."""

    HIGHER = "higher"
    LOWER = "lower"


@dataclass(frozen=True, kw_only=True, slots=True)
class Quantity:
    """One reported quantity.

    `ratio` takes it from the curves, (..., F) or None where it was not measured; `value` turns
    that ratio and the rated power [W] into the quantity. `percent` prints it times 100.
    """

    key: str
    label: str
    unit: str
    decimals: int
    better: Better
    meaning: str
    ratio: Callable[[Curves], RealArray | None]
    value: Callable[[RealArray, float], RealArray]
    percent: bool = False


def decibel_loss(ratio: RealArray) -> RealArray:
    """Loss of a power ratio, positive [dB]; inf where nothing passes, or less than that."""
    with np.errstate(divide="ignore"):
        return np.asarray(-10 * np.log10(np.maximum(ratio, 0)))


def swr_of_reflection(reflection_ratio: RealArray) -> RealArray:
    """Standing-wave ratio of abs(gamma)^2 [ratio]; inf at and above total reflection."""
    rho = np.sqrt(reflection_ratio)
    with np.errstate(divide="ignore"):
        return np.where(rho < 1, (1 + rho) / np.where(rho < 1, 1 - rho, 1.0), np.inf)


def _efficiency(curves: Curves) -> RealArray | None:
    return curves.efficiency_ratio


def _reflection(curves: Curves) -> RealArray | None:
    return curves.reflection_ratio


def _match(curves: Curves) -> RealArray | None:
    return None if curves.reflection_ratio is None else 1 - curves.reflection_ratio


def _delivered(curves: Curves) -> RealArray | None:
    if curves.efficiency_ratio is None or curves.reflection_ratio is None:
        return None
    return curves.efficiency_ratio * (1 - curves.reflection_ratio)


def _halved_pair(curves: Curves) -> RealArray | None:
    return curves.halved_pair_ratio


QUANTITIES = (
    Quantity(
        key="efficiency_ratio",
        label="Efficiency",
        unit="%",
        decimals=1,
        better=Better.HIGHER,
        percent=True,
        meaning="power into the load over power entering the low side; mismatch is not in it",
        ratio=_efficiency,
        value=lambda ratio, _: ratio,
    ),
    Quantity(
        key="heat_loss_db",
        label="Heat loss",
        unit="dB",
        decimals=2,
        better=Better.LOWER,
        meaning="what the build turns into heat of the power that enters it",
        ratio=_efficiency,
        value=lambda ratio, _: decibel_loss(ratio),
    ),
    Quantity(
        key="mismatch_loss_db",
        label="Mismatch loss",
        unit="dB",
        decimals=2,
        better=Better.LOWER,
        meaning="what a source without a tuner cannot get into the low side",
        ratio=_match,
        value=lambda ratio, _: decibel_loss(ratio),
    ),
    Quantity(
        key="total_loss_db",
        label="Total loss",
        unit="dB",
        decimals=2,
        better=Better.LOWER,
        meaning="heat and mismatch: power available from the source against power into the load",
        ratio=_delivered,
        value=lambda ratio, _: decibel_loss(ratio),
    ),
    Quantity(
        key="delivered_ratio",
        label="Delivered",
        unit="%",
        decimals=1,
        better=Better.HIGHER,
        percent=True,
        meaning="share of the power available from the source that reaches the load",
        ratio=_delivered,
        value=lambda ratio, _: ratio,
    ),
    Quantity(
        key="return_loss_db",
        label="Return loss",
        unit="dB",
        decimals=1,
        better=Better.HIGHER,
        meaning="at the low side with the load on the high side",
        ratio=_reflection,
        value=lambda ratio, _: decibel_loss(ratio),
    ),
    Quantity(
        key="swr",
        label="SWR",
        unit="",
        decimals=2,
        better=Better.LOWER,
        meaning="standing-wave ratio at the low side with the load on the high side",
        ratio=_reflection,
        value=lambda ratio, _: swr_of_reflection(ratio),
    ),
    Quantity(
        key="halved_pair_db",
        label="Halved pair",
        unit="dB",
        decimals=2,
        better=Better.LOWER,
        meaning="half of the through loss of two units back to back: the figure in common use",
        ratio=_halved_pair,
        value=lambda ratio, _: decibel_loss(ratio),
    ),
    Quantity(
        key="heat_w",
        label="Heat",
        unit="W",
        decimals=1,
        better=Better.LOWER,
        meaning="heat in the build while the rated power enters it",
        ratio=_efficiency,
        value=lambda ratio, power_w: power_w * (1 - ratio),
    ),
)

BY_KEY = {quantity.key: quantity for quantity in QUANTITIES}
