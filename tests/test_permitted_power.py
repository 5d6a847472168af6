"""What heat permits, by band and mode."""

from dataclasses import replace

import pytest

from reportgen.model import Band, Figure, Interval, MeasuredBand
from reportgen.physics.permitted_power import duty_table, minutes_to_limit, permitted_power
from reportgen.physics.thermal import ThermalFit


def exactly(value: float) -> Interval:
    return Interval(value=value, low95=value, high95=value)


FIT = ThermalFit(
    file="warmup.csv",
    power_w=50,
    heat_w=exactly(5),
    rise_k=exactly(40),
    start_k=0,
    time_constant_s=exactly(600),
    resistance_k_per_w=exactly(8),
    span_s=3600,
)


def band(low: float | None, worst_low: float | None = None) -> MeasuredBand:
    return MeasuredBand(
        band=Band(name="40 m", from_hz=7e6, to_hz=7.2e6),
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


def permitted(one: MeasuredBand, *, limit_c=90.0, rated_w=60.0, duty=None):
    (found,) = permitted_power(
        FIT, (one,), limit_c=limit_c, ambient_max_c=40, rated_w=rated_w,
        duty_percent=duty or {"carrier": 100},
    )  # fmt: skip
    return found


def test_continuous_power_of_the_worst_efficiency_at_its_lower_end() -> None:
    assert permitted(band(0.9, 0.875)).continuous_w == pytest.approx(50 / 8 / 0.125)
    assert permitted(band(0.9)).continuous_w == pytest.approx(62.5)


def test_at_that_power_the_limit_is_never_reached_and_above_it_is() -> None:
    assert permitted(band(0.9), rated_w=62.5).minutes_to_limit is None
    assert permitted(band(0.9), rated_w=62.6).minutes_to_limit == pytest.approx(
        10 * 6.437, rel=1e-3
    )  # tau ln(62.6/0.1)
    assert permitted(band(0.9), rated_w=125).minutes_to_limit == pytest.approx(6.93147)


def test_surroundings_at_the_limit_permit_nothing() -> None:
    found = permitted(band(0.9), limit_c=40)
    assert (found.continuous_w, found.minutes_to_limit) == (0, 0)
    assert minutes_to_limit(-5, 0, 600) == 0


def test_marked_beyond_twice_the_logged_power_or_heat() -> None:
    assert not permitted(band(0.9)).extrapolated
    assert permitted(band(0.95)).extrapolated  # 125 W, logged 50 W
    assert not permitted(band(0.937)).extrapolated  # 99 W
    assert permitted(band(0.9), limit_c=121).extrapolated  # 10.1 W of heat, logged 5 W


def test_modes_share_one_mean_power() -> None:
    found = permitted(band(0.9), duty={"carrier": 100, "voice": 20, "silence": 0}).modes
    assert [one.power_w for one in found] == [pytest.approx(62.5), pytest.approx(312.5), None]


def test_the_workshop_overrides_the_table() -> None:
    assert duty_table({})["voice, processed"] == 50
    assert duty_table({"voice, processed": 40, "own": 70}) == {
        **duty_table({}), "voice, processed": 40, "own": 70,
    }  # fmt: skip


@pytest.mark.parametrize("one", [band(None), band(1.0), band(1.02), replace(band(0.9), figures={})])
def test_no_power_without_a_known_heat(one: MeasuredBand) -> None:
    found = permitted(one)
    assert found.continuous_w is None
    assert found.reason == "no heat known in this band"
    assert found.modes == ()
