"""Loss in decibels against power transmitted in per cent.

Source: the decibel table of every handbook of radio frequency, from memory and matched by
computing. The halving of 1 mW was read in US Army course SS0031, figure 3-9 (10 log 2, 3.01 dB).
"""

import numpy as np
import pytest

from reportgen.physics.quantities import BY_KEY, decibel_loss

PERCENT_OF_DB = {
    0.1: 97.72, 0.2: 95.50, 0.25: 94.41, 0.3: 93.33, 0.4: 91.20, 0.5: 89.13,
    0.8: 83.18, 1.0: 79.43, 1.25: 74.99, 1.5: 70.79, 2.0: 63.10, 3.0: 50.12,
    3.0103: 50.00, 4.0: 39.81, 5.0: 31.62, 6.0: 25.12, 10.0: 10.00, 20.0: 1.00,
}  # fmt: skip


@pytest.mark.parametrize(("loss_db", "percent"), PERCENT_OF_DB.items())
def test_loss_of_the_percentage_transmitted(loss_db, percent):
    """To what half a unit of the table's last digit is worth."""
    allowed_db = 10 / np.log(10) * 0.005 / percent
    assert decibel_loss(np.array(percent / 100)) == pytest.approx(loss_db, abs=1.02 * allowed_db)


def test_half_the_power_is_not_three_decibels_even():
    assert decibel_loss(np.array(0.5)) == pytest.approx(3.0103, abs=5e-5)


@pytest.mark.parametrize(("loss_db", "percent"), PERCENT_OF_DB.items())
def test_heat_is_what_is_not_transmitted(loss_db, percent):
    heat_w = BY_KEY["heat_w"].value(np.array(10 ** (-loss_db / 10)), 100.0)
    assert heat_w == pytest.approx(100 - percent, abs=0.00501)
