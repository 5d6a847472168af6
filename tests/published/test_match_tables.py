"""Return loss, SWR and mismatch loss of one reflection, against printed tables.

Sources: integer rows 1 to 30 dB of the table "VSWR, return loss, reflection coefficient" of
radio-electronics.com, read in the source; mismatch loss and reflected power beside them follow by
formula. Rows by SWR: the usual handbook layout (D. M. Pozar, Microwave Engineering; Reference
Data for Engineers), from memory and matched by computing; the row of SWR 1.5 was read in a source.
"""

import numpy as np
import pytest

from reportgen.physics.quantities import BY_KEY, decibel_loss, swr_of_reflection

BY_RETURN_LOSS = [  # dB, SWR, rho, mismatch loss in dB, reflected power in per cent
    (1, 17.391, 0.891, 6.8683, 79.43),
    (3, 5.848, 0.708, 3.0206, 50.12),
    (6, 3.010, 0.501, 1.2563, 25.12),
    (10, 1.925, 0.316, 0.4576, 10.00),
    (14, 1.499, 0.200, 0.1764, 3.98),
    (15, 1.433, 0.178, 0.1396, 3.16),
    (16, 1.377, 0.158, 0.1105, 2.51),
    (20, 1.222, 0.100, 0.0436, 1.00),
    (26, 1.105, 0.050, 0.0109, 0.25),
    (30, 1.065, 0.032, 0.0043, 0.10),
]
CUT_OFF_ROW_DB = 26
"""The table cuts this row off: 1.10553 stands as 1.105; one unit of its last digit is allowed."""

BY_SWR = [  # SWR, rho, return loss in dB, mismatch loss in dB, reflected power in per cent
    (1.10, 0.0476, 26.44, 0.0099, 0.227),
    (1.20, 0.0909, 20.83, 0.0360, 0.826),
    (1.50, 0.2000, 13.98, 0.1773, 4.000),
    (2.00, 0.3333, 9.54, 0.5115, 11.111),
    (2.50, 0.4286, 7.36, 0.8814, 18.367),
    (3.00, 0.5000, 6.02, 1.2494, 25.000),
    (5.00, 0.6667, 3.52, 2.5527, 44.444),
    (10.0, 0.8182, 1.74, 4.8073, 66.942),
]


def half_a_unit(decimals: int) -> float:
    """What rounding to so many decimals may change, and a little for the arithmetic."""
    return 0.5000001 * 10.0**-decimals


def mismatch_loss_db(reflected: float) -> float:
    return float(BY_KEY["mismatch_loss_db"].value(np.array(1 - reflected), 100.0))


@pytest.mark.parametrize(("return_loss_db", "swr", "rho", "mismatch_db", "percent"), BY_RETURN_LOSS)
def test_rows_by_return_loss(return_loss_db, swr, rho, mismatch_db, percent):
    reflected = 10 ** (-return_loss_db / 10)
    allowed = 1e-3 if return_loss_db == CUT_OFF_ROW_DB else half_a_unit(3)
    assert swr_of_reflection(np.array(reflected)) == pytest.approx(swr, abs=allowed)
    assert np.sqrt(reflected) == pytest.approx(rho, abs=half_a_unit(3))
    assert mismatch_loss_db(reflected) == pytest.approx(mismatch_db, abs=half_a_unit(4))
    assert 100 * reflected == pytest.approx(percent, abs=half_a_unit(2))
    assert decibel_loss(np.array(reflected)) == pytest.approx(return_loss_db)


@pytest.mark.parametrize(("swr", "rho", "return_loss_db", "mismatch_db", "percent"), BY_SWR)
def test_rows_by_swr(swr, rho, return_loss_db, mismatch_db, percent):
    exact = (swr - 1) / (swr + 1)
    assert swr_of_reflection(np.array(exact**2)) == pytest.approx(swr)
    assert exact == pytest.approx(rho, abs=half_a_unit(4))
    assert decibel_loss(np.array(exact**2)) == pytest.approx(return_loss_db, abs=half_a_unit(2))
    assert mismatch_loss_db(exact**2) == pytest.approx(mismatch_db, abs=half_a_unit(4))
    assert 100 * exact**2 == pytest.approx(percent, abs=half_a_unit(3))


def test_no_reflection_at_all():
    assert swr_of_reflection(np.array(0.0)) == 1
    assert decibel_loss(np.array(0.0)) == np.inf
    assert mismatch_loss_db(0.0) == 0


def test_total_reflection():
    assert swr_of_reflection(np.array(1.0)) == np.inf
    assert decibel_loss(np.array(1.0)) == 0
    assert mismatch_loss_db(1.0) == np.inf


def test_more_than_total_reflection_shows_and_is_no_number():
    """Noise and calibration errors do that; a formula without care gives an SWR of -41."""
    reflected = 1.05**2
    assert swr_of_reflection(np.array(reflected)) == np.inf
    assert decibel_loss(np.array(reflected)) < 0
    assert mismatch_loss_db(reflected) == np.inf
