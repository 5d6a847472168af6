"""Stress of a build in its bands, and the limit that is met first."""

from dataclasses import replace

import pytest

from reportgen.model import (
    Band,
    BuildSheet,
    Compensation,
    Core,
    Figure,
    MeasuredBand,
    Rating,
    Winding,
)
from reportgen.physics.stress import stress_of

SHEET = BuildSheet(
    name="Any",
    winding=Winding(low_turns=2, high_turns=14),
    core=Core(outer_mm=61, inner_mm=35.55, height_mm=12.7, flux_limit_mt=30),
    compensation=Compensation(capacitor_pf=100, rated_v=500),
    rating=Rating(load_swr=2.0),
)
HEAT = Figure(
    mean=10,
    worst=12,
    centre=10,
    worst_at_hz=3.6e6,
    low95=9,
    high95=11,
    worst_low95=10.5,
    worst_high95=13.5,
)


def band(name: str, low_hz: float, high_hz: float) -> MeasuredBand:
    return MeasuredBand(
        band=Band(name=name, from_hz=low_hz, to_hz=high_hz),
        covered_hz=(low_hz, high_hz),
        points=9,
        interpolated=False,
        figures={"heat_w": HEAT},
    )


BANDS = (band("160 m", 1.8e6, 2e6), band("10 m", 28e6, 29.7e6))


def test_each_band_by_its_worst_edge() -> None:
    found = stress_of(SHEET, BANDS, 100)
    assert found.low_side_v == pytest.approx(100)
    assert found.high_side_v == pytest.approx(700)
    low, high = found.bands
    assert 1e3 * low.peak_flux_t == pytest.approx(28.034 * 2**0.5, rel=1e-3)
    assert high.peak_flux_t == pytest.approx(low.peak_flux_t * 1.8 / 28)
    assert high.capacitor_a == pytest.approx(100 * 2 * 3.14159265 * 29.7e6 * 100e-12)
    assert (low.heat_w, low.matched_heat_w) == (13.5, 13.5)
    assert found.heat_load_swr == 1
    assert low.surface_rise_k[0] < low.surface_rise_k[1]


def test_first_limit_and_the_power_that_meets_it() -> None:
    found = stress_of(SHEET, BANDS, 100).first_limit
    assert (found.what, found.band) == ("flux", "160 m")
    there = stress_of(SHEET, BANDS, found.power_w)
    assert 1e3 * there.bands[0].peak_flux_t == pytest.approx(30)
    thin = replace(SHEET, compensation=Compensation(capacitor_pf=100, rated_v=100))
    found = stress_of(thin, BANDS, 100).first_limit
    assert (found.what, found.band) == ("capacitor volts", None)
    assert found.power_w == pytest.approx(50)  # peak of 100 V rms is 141 V


def test_nothing_is_judged_without_a_limit() -> None:
    bare = BuildSheet(name="Bare", winding=SHEET.winding)
    found = stress_of(bare, BANDS, 100)
    assert found.first_limit is None
    assert found.bands[0].peak_flux_t is None
    assert found.bands[0].capacitor_a is None
    assert stress_of(bare, (), 100) is None


def test_capacitor_across_the_high_side_sees_its_volts() -> None:
    high = replace(SHEET, compensation=Compensation(capacitor_pf=5, side="high"))
    assert stress_of(high, BANDS, 100).bands[0].capacitor_v == pytest.approx(700)


def test_heat_into_the_worst_load_counts_where_it_is_known_everywhere() -> None:
    found = stress_of(SHEET, BANDS, 100, {"160 m": 0.2, "10 m": 0.3})
    assert [one.heat_w for one in found.bands] == pytest.approx([20, 30])
    assert [one.matched_heat_w for one in found.bands] == [13.5, 13.5]
    assert found.heat_load_swr == 2
    assert stress_of(SHEET, BANDS, 100, {"160 m": 0.2}).heat_load_swr == 1
