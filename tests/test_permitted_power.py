"""What heat permits, by band and mode."""

from dataclasses import replace

import pytest

from reportgen.model import (
    Band,
    BuildSheet,
    Core,
    Figure,
    FirstLimit,
    Interval,
    MeasuredBand,
    Permitted,
    Rating,
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


def band(low: float | None, worst_low: float | None = None, name: str = "40 m") -> MeasuredBand:
    return MeasuredBand(
        band=Band(name=name, from_hz=7e6, to_hz=7.2e6),
        covered_hz=(7e6, 7.2e6),
        points=9,
        interpolated=False,
        figures={
            "efficiency_ratio": Figure(
                mean=0.9, worst=0.89, centre=0.9, worst_at_hz=7e6, low95=low,
                worst_low95=worst_low,
            )
        },
    )  # fmt: skip


def sheet(core_c: float | None = 90.0, wire_c: float | None = None, box_c: float | None = None):
    return BuildSheet(
        name="Alder",
        winding=Winding(low_turns=3, high_turns=24, temperature_limit_c=wire_c),
        core=Core(outer_mm=36, inner_mm=23, height_mm=15, temperature_limit_c=core_c),
        rating=Rating(ambient_max_c=40, enclosure_limit_c=box_c),
    )


def permitted(
    *bands: MeasuredBand, limit_c=90.0, rated_w=60.0, duty=None, first_limit=None
) -> Permitted | None:
    return permitted_of(
        FIT, bands, sheet(limit_c), first_limit, rated_w=rated_w,
        duty_percent=duty or {"carrier": 100},
    )  # fmt: skip


def in_band(one: MeasuredBand, **settings) -> ThermalBand:
    (found,) = permitted(one, **settings).bands
    return found


def test_continuous_power_of_the_worst_efficiency_at_its_lower_end() -> None:
    assert in_band(band(0.9, 0.875)).continuous_w == pytest.approx(50 / 8 / 0.125)
    assert in_band(band(0.9)).continuous_w == pytest.approx(62.5)


def test_at_that_power_the_limit_is_never_reached_and_above_it_is() -> None:
    assert in_band(band(0.9), rated_w=62.5).minutes_to_limit is None
    assert in_band(band(0.9), rated_w=62.6).minutes_to_limit == pytest.approx(
        10 * 6.437, rel=1e-3
    )  # tau ln(62.6/0.1)
    assert in_band(band(0.9), rated_w=125).minutes_to_limit == pytest.approx(6.93147)


def test_surroundings_at_the_limit_permit_nothing() -> None:
    found = in_band(band(0.9), limit_c=40)
    assert (found.continuous_w, found.minutes_to_limit) == (0, 0)
    assert minutes_to_limit(-5, 0, 600) == 0


def test_marked_beyond_twice_the_logged_power_or_heat() -> None:
    assert not in_band(band(0.9)).extrapolated
    assert in_band(band(0.95)).extrapolated  # 125 W, logged 50 W
    assert not in_band(band(0.937)).extrapolated  # 99 W
    assert in_band(band(0.9), limit_c=121).extrapolated  # 10.1 W of heat, logged 5 W


def test_modes_share_one_mean_power_and_the_least_comes_first() -> None:
    duty = {"voice": 20, "carrier": 100, "silence": 0}
    found = permitted(band(0.9), band(0.95, name="20 m"), duty=duty)
    assert [(one.mode, one.band) for one in found.modes] == [("carrier", "40 m"), ("voice", "40 m")]
    assert [one.power_w for one in found.modes] == [pytest.approx(62.5), pytest.approx(312.5)]
    assert found.limiting.mode == "carrier"
    assert found.limiting.bound_by == "heat"


def test_no_mode_may_have_more_than_volts_and_flux_let_it() -> None:
    flux = FirstLimit(what="flux", band="160 m", power_w=200)
    carrier, voice = permitted(
        band(0.9), duty={"voice": 20, "carrier": 100}, first_limit=flux
    ).modes
    assert (carrier.power_w, carrier.bound_by) == (pytest.approx(62.5), "heat")
    assert (voice.power_w, voice.band, voice.bound_by) == (200, "160 m", "flux")


def test_the_lowest_of_core_wire_and_enclosure_counts() -> None:
    assert lowest_limit(sheet(90, 105, 70)) == ("enclosure", 70)
    assert lowest_limit(sheet(90, 85)) == ("wire", 85)
    assert lowest_limit(sheet(None)) is None
    assert permitted(band(0.9), limit_c=None) is None


def test_the_workshop_overrides_the_table() -> None:
    assert duty_table({})["voice, processed"] == 50
    assert duty_table({"voice, processed": 40, "own": 70}) == {
        **duty_table({}), "voice, processed": 40, "own": 70,
    }  # fmt: skip


@pytest.mark.parametrize("one", [band(None), band(1.0), band(1.02), replace(band(0.9), figures={})])
def test_no_power_without_a_known_heat(one: MeasuredBand) -> None:
    assert permitted(one) is None
    unknown, known = permitted(one, band(0.9, name="20 m")).bands
    assert unknown.continuous_w is None
    assert unknown.reason == "no heat known in this band"
    assert known.continuous_w is not None
