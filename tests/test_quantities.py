"""The table of quantities: each from its ratio, monotone the way it says, and sums that hold."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from measurements import curves_of

from reportgen.physics.quantities import (
    BY_KEY,
    QUANTITIES,
    Better,
    decibel_loss,
    swr_of_reflection,
)

HZ = np.linspace(7e6, 7.3e6, 4)
SHARES = st.floats(0.001, 0.999)


def value(key: str, ratio: float, power_w: float = 100.0) -> float:
    return float(BY_KEY[key].value(np.array(ratio), power_w))


def test_keys_are_unique_and_losses_get_better_downward():
    assert len(BY_KEY) == len(QUANTITIES)
    down = {key for key, one in BY_KEY.items() if one.better is Better.LOWER}
    assert down == {
        "heat_loss_db",
        "mismatch_loss_db",
        "total_loss_db",
        "swr",
        "halved_pair_db",
        "heat_w",
    }


def test_every_quantity_of_one_point():
    """80 % efficiency, 1 % reflected, 70 % through the pair's half, 50 W."""
    curves = curves_of(HZ, efficiency=0.8, reflection=0.01, halved=0.7)
    found = {one.key: one.value(one.ratio(curves), 50.0)[0] for one in QUANTITIES}
    assert found == pytest.approx(
        {
            "efficiency_ratio": 0.8,
            "heat_loss_db": -10 * np.log10(0.8),
            "mismatch_loss_db": -10 * np.log10(0.99),
            "total_loss_db": -10 * np.log10(0.8 * 0.99),
            "delivered_ratio": 0.8 * 0.99,
            "return_loss_db": 20.0,
            "swr": 1.1 / 0.9,
            "halved_pair_db": -10 * np.log10(0.7),
            "heat_w": 10.0,
        }
    )


@given(SHARES, SHARES)
def test_heat_and_mismatch_add_up_to_the_total(efficiency, reflection):
    total = value("total_loss_db", efficiency * (1 - reflection))
    parts = value("heat_loss_db", efficiency) + value("mismatch_loss_db", 1 - reflection)
    assert total == pytest.approx(parts, abs=1e-9)


@pytest.mark.parametrize("quantity", QUANTITIES, ids=lambda one: one.key)
def test_each_is_a_monotone_function_of_its_ratio(quantity):
    """So the mean of the ratio has one meaning for the quantity too."""
    change = np.diff(quantity.value(np.linspace(0.01, 0.99, 99), 100.0))
    assert np.all(change > 0) or np.all(change < 0)


@pytest.mark.parametrize(
    ("curves", "missing"),
    [
        (
            curves_of(HZ, reflection=0.1),
            {"efficiency_ratio", "heat_loss_db", "total_loss_db", "delivered_ratio", "heat_w"}
            | {"halved_pair_db"},
        ),
        (
            curves_of(HZ, efficiency=0.8),
            {"mismatch_loss_db", "total_loss_db", "delivered_ratio", "return_loss_db", "swr"}
            | {"halved_pair_db"},
        ),
        (curves_of(HZ, halved=0.8), set(BY_KEY) - {"halved_pair_db"}),
    ],
    ids=["match only", "loss only", "halving only"],
)
def test_what_was_not_measured_is_missing(curves, missing):
    assert {one.key for one in QUANTITIES if one.ratio(curves) is None} == missing


def test_gain_shows_as_a_negative_loss_and_is_not_clipped():
    assert value("heat_loss_db", 1.01) == pytest.approx(-0.0432, abs=5e-5)
    assert value("heat_w", 1.01) == pytest.approx(-1)


def test_loss_of_nothing_and_of_less_than_nothing():
    assert decibel_loss(np.array(0.0)) == np.inf
    assert decibel_loss(np.array(-0.1)) == np.inf


@given(st.floats(0, 0.9999))
def test_swr_is_that_of_two_resistances(reflected):
    """A resistance of SWR times 50 ohm reflects just as much."""
    swr = float(swr_of_reflection(np.array(reflected)))
    assert ((swr - 1) / (swr + 1)) ** 2 == pytest.approx(reflected, rel=1e-6, abs=1e-12)
