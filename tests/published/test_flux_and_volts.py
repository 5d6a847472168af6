"""Flux, volts and surface rise against published values.

Sources: Faraday rows and voltages computed from first principles and matching handbook prints
(C+M); the 40.3 gauss row from a core vendor's technical data section (25 V, 0.133 cm2, 15 turns,
7 MHz; its 4.44 is sqrt(2) pi to three digits). Surface rise: the two formulas' own tables, printed
anchors 0.03 W/cm2 for 25 C and 0.07 W/cm2 for 50 C in McLyman's handbook (from memory).
"""

import pytest

from reportgen.physics.stress import peak_flux_t, side_a, side_v, surface_rise_k


@pytest.mark.parametrize(
    ("volts", "hz", "turns", "area_m2", "millitesla"),
    [
        (25, 7e6, 15, 0.133e-4, 4.0293),
        (1, 1e6, 1, 1e-4, 2.25079),
        (70.711, 3.5e6, 2, 157.738e-6, 14.418),
        (70.711, 1.8e6, 2, 157.738e-6, 28.034),
    ],
)
def test_peak_flux(volts, hz, turns, area_m2, millitesla) -> None:
    assert 1e3 * peak_flux_t(volts, hz, turns, area_m2) == pytest.approx(millitesla, rel=3e-4)


def test_peak_volts_into_the_rms_formula_is_not_what_we_do() -> None:
    """The vendor's note feeds a peak voltage into it: sqrt(2) too high."""
    assert 1e3 * peak_flux_t(25 / 2**0.5, 7e6, 15, 0.133e-4) == pytest.approx(2.849, rel=1e-3)


@pytest.mark.parametrize(
    ("power_w", "ohm", "rms_v"), [(100, 50, 70.711), (100, 2450, 494.975), (1000, 2450, 1565.25)]
)
def test_volts_at_a_match(power_w, ohm, rms_v) -> None:
    assert side_v(power_w, ohm, 1.0) == pytest.approx(rms_v, rel=1e-5)
    assert side_a(power_w, ohm, 1.0) * rms_v == pytest.approx(power_w, rel=1e-5)


def test_mismatch_raises_volts_and_amperes_by_its_root() -> None:
    """On a line of s the maxima are those of a match times sqrt(s), power into the load alike."""
    assert side_v(100, 50, 2.0) == pytest.approx(100.0)
    assert side_a(100, 50, 2.0) == pytest.approx(2.0)


@pytest.mark.parametrize(
    ("mw_per_cm2", "least", "most"),
    [(10, 6.81, 10.03), (30, 17.00, 24.85), (70, 34.43, 50.03), (200, 82.56, 119.09)],
)
def test_surface_rise_is_a_range(mw_per_cm2, least, most) -> None:
    found = surface_rise_k(mw_per_cm2 * 1e-3, 1e-4)
    assert found == pytest.approx((least, most), abs=0.006)
