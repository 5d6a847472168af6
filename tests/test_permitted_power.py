"""What heat permits, by band and mode."""

from dataclasses import replace

import pytest

from reportgen.model import (
    BuildSheet,
    Core,
    FirstLimit,
    Interval,
    Permitted,
    Rating,
    Stress,
    StressBand,
    ThermalBand,
    ThermalFit,
    Winding,
)
from reportgen.physics.permitted_power import (
    duty_table,
    lowest_limit,
    minutes_to_limit,
    permitted_of,
)


def exactly(value: float) -> Interval:
    return Interval(value=value, low95=value, high95=value)


FIT = ThermalFit(
    file="warmup.csv",
    unit="A",
    frequency_hz=7.1e6,
    power_w=50,
    heat_w=exactly(5),
    rise_k=exactly(40),
    start_k=0,
    time_constant_s=exactly(600),
    resistance_k_per_w=exactly(8),
    span_s=3600,
)


def band(heat_w: float | None, name: str = "40 m", matched_w: float | None = None) -> StressBand:
    """Heat at 100 W."""
    return StressBand(
        band=name,
        peak_flux_t=None,
        capacitor_v=None,
        capacitor_a=None,
        heat_w=heat_w,
        matched_heat_w=matched_w,
        surface_rise_k=None,
    )


def sheet(core_c: float | None = 90.0, wire_c: float | None = None, box_c: float | None = None):
    return BuildSheet(
        name="Alder",
        winding=Winding(low_turns=3, high_turns=24, temperature_limit_c=wire_c),
        core=Core(outer_mm=36, inner_mm=23, height_mm=15, temperature_limit_c=core_c),
        rating=Rating(ambient_max_c=40, enclosure_limit_c=box_c),
    )


def permitted(
    *bands: StressBand, limit_c=90.0, rated_w=100.0, duty=None, first_limit=None
) -> Permitted | None:
    heat = [
        one if one.heat_w is None else replace(one, heat_w=one.heat_w * rated_w / 100)
        for one in bands
    ]
    stress = Stress(
        power_w=rated_w, load_swr=2, heat_load_swr=2, low_side_v=1, low_side_a=1, high_side_v=500,
        high_side_a=1, bands=tuple(heat), first_limit=first_limit,
    )  # fmt: skip
    return permitted_of(FIT, stress, sheet(limit_c), duty or {"carrier": 100})


def in_band(one: StressBand, **settings) -> ThermalBand:
    (found,) = permitted(one, **settings).bands
    return found


def test_continuous_power_ends_at_the_limit() -> None:
    assert in_band(band(10)).continuous_w == pytest.approx(50 / 8 / 0.10)
    found = in_band(band(12.5, matched_w=6.25))
    assert (found.continuous_w, found.matched_w) == (pytest.approx(50), pytest.approx(100))


def test_at_that_power_the_limit_is_never_reached_and_above_it_is() -> None:
    assert in_band(band(10), rated_w=62.5).minutes_to_limit is None
    assert in_band(band(10), rated_w=62.6).minutes_to_limit == pytest.approx(
        10 * 6.437, rel=1e-3
    )  # tau ln(62.6/0.1)
    assert in_band(band(10), rated_w=125).minutes_to_limit == pytest.approx(6.93147)


def test_surroundings_at_the_limit_permit_nothing() -> None:
    found = in_band(band(10), limit_c=40)
    assert (found.continuous_w, found.minutes_to_limit) == (0, 0)
    assert minutes_to_limit(-5, 0, 600) == 0


def test_marked_beyond_twice_the_logged_power_or_heat() -> None:
    assert not in_band(band(10)).extrapolated
    assert in_band(band(5)).extrapolated  # 125 W, logged 50 W
    assert not in_band(band(6.3)).extrapolated  # 99 W
    assert in_band(band(10), limit_c=121).extrapolated  # 10.1 W of heat, logged 5 W


def test_modes_share_one_mean_power_and_the_least_comes_first() -> None:
    duty = {"voice": 20, "carrier": 100, "silence": 0}
    found = permitted(band(10), band(5, name="20 m"), duty=duty)
    assert [(one.mode, one.band) for one in found.modes] == [("carrier", "40 m"), ("voice", "40 m")]
    assert [one.power_w for one in found.modes] == [pytest.approx(62.5), pytest.approx(312.5)]
    assert found.limiting.mode == "carrier"
    assert found.limiting.bound_by == "heat"


def test_no_mode_may_have_more_than_volts_and_flux_let_it() -> None:
    flux = FirstLimit(what="flux", band="160 m", power_w=200)
    carrier, voice = permitted(band(10), duty={"voice": 20, "carrier": 100}, first_limit=flux).modes
    assert (carrier.power_w, carrier.bound_by) == (pytest.approx(62.5), "heat")
    assert (voice.power_w, voice.band, voice.bound_by) == (200, "160 m", "flux")
    assert voice.high_side_v == pytest.approx(500 * 2**0.5)


def test_the_lowest_of_core_wire_and_enclosure_counts() -> None:
    assert lowest_limit(sheet(90, 105, 70)) == ("enclosure", 70)
    assert lowest_limit(sheet(90, 85)) == ("wire", 85)
    assert lowest_limit(sheet(None)) is None
    assert permitted(band(10), limit_c=None) is None


def test_the_workshop_overrides_the_table() -> None:
    assert duty_table({})["voice, processed"] == 50
    assert duty_table({"voice, processed": 40, "own": 70}) == {
        **duty_table({}), "voice, processed": 40, "own": 70,
    }  # fmt: skip


@pytest.mark.parametrize("one", [band(None), band(0.0), band(-2.0)])
def test_no_power_without_a_known_heat(one: StressBand) -> None:
    assert permitted(one) is None
    unknown, known = permitted(one, band(10, name="20 m")).bands
    assert unknown.continuous_w is None
    assert unknown.reason == "no heat known in this band"
    assert known.continuous_w is not None
