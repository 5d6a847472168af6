"""The best efficiency of two coupled coils with resistance: an exact lossy transformer.

Source: T. Ohira, IEICE Electronics Express 11(13), 20140448, June 2014 (citation read, formula
from memory): eta_max = 1 - 2/(1 + sqrt(1 + a^2)), a^2 = (w M)^2/(R1 R2) = k^2 Q1 Q2. K = 1 + 2/a^2
and the best load R2 sqrt(1 + a^2) - j w L2 are our own derivation.
"""

import numpy as np
import pytest
from two_ports import network_of

from reportgen.physics.network import Chain, efficiency_ratio, maximum_efficiency_ratio
from reportgen.physics.quantities import decibel_loss

ETA_MAX = [  # a, eta_max, loss [dB]
    (1, 0.171573, 7.6555),
    (2, 0.381966, 4.1798),
    (5, 0.672078, 1.7258),
    (10, 0.819002, 0.8671),
    (20, 0.904875, 0.4341),
    (50, 0.960792, 0.1737),
    (100, 0.980199, 0.0869),
]
COUPLING = 0.8
REACTANCE_OHM = (60.0, 2900.0)


def coils(a: float) -> tuple[Chain, complex]:
    """Two coils of equal Q with k^2 Q1 Q2 = a^2, and the load that suits them best [ohm]."""
    q = a / COUPLING
    z11, z22 = (x / q + 1j * x for x in REACTANCE_OHM)
    z12 = 1j * COUPLING * np.sqrt(np.prod(REACTANCE_OHM))
    parts = (z11 / z12, (z11 * z22 - z12**2) / z12, 1 / z12, z22 / z12)
    return Chain(*(np.array([part]) for part in parts)), z22.real * np.sqrt(
        1 + a * a
    ) - 1j * z22.imag


@pytest.mark.parametrize(("a", "eta_max", "loss_db"), ETA_MAX)
def test_best_efficiency(a, eta_max, loss_db):
    chain, _ = coils(a)
    best = maximum_efficiency_ratio(chain)[0]
    assert best == pytest.approx(eta_max, abs=5e-7)
    assert decibel_loss(np.array(best)) == pytest.approx(loss_db, abs=5e-5)
    assert best == pytest.approx(1 - 2 / (1 + np.sqrt(1 + a * a)), rel=1e-12)


@pytest.mark.parametrize(("a", "eta_max", "loss_db"), ETA_MAX)
def test_best_load_reaches_the_best_efficiency_and_others_do_not(a, eta_max, loss_db):
    chain, load_ohm = coils(a)
    assert efficiency_ratio(chain, load_ohm)[0] == pytest.approx(eta_max, abs=5e-7)
    for off in (0.8, 1.25, np.exp(0.2j), np.exp(-0.2j)):
        assert efficiency_ratio(chain, load_ohm * off)[0] < eta_max - 1e-6


@pytest.mark.parametrize(("a", "eta_max", "loss_db"), ETA_MAX)
def test_scikit_rf_agrees(a, eta_max, loss_db):
    network = network_of(coils(a)[0])
    assert network.stability[0] == pytest.approx(1 + 2 / a**2, rel=1e-9)
    assert network.max_gain[0] == pytest.approx(eta_max, abs=1e-6)
