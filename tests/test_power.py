"""What a report says of the power that a build stands."""

from dataclasses import replace

import power_samples as samples
import pytest

from reportgen.model import FirstLimit
from reportgen.pages.display import DASH
from reportgen.pages.power import counted_minutes, power_of, power_verdict
from reportgen.pages.warm_up_chart import draw_warm_up

FLUX = FirstLimit(what="flux", band="160 m", power_w=68.5, limit=20)


def spaced(text: str) -> str:
    return text.replace("\u00a0", " ")


def table_of(table) -> dict[str, list[str]]:
    return {
        row.head: [spaced(cell.text).strip() for cell in row.cells]
        for group in table.groups
        for row in group
    }


def test_the_answer_names_power_mode_band_bound_and_conditions() -> None:
    found = samples.result(samples.thermal(samples.permitted()))
    assert spaced(power_verdict(found, "en")) == (
        "Handles 35 W of carrier on every band, limited by core heating on 80 m, with up to 40 °C "
        "around it (sealed box) and any load within SWR 2.5 of 3200 Ω."
    )
    beyond = samples.result(samples.thermal(samples.permitted(extrapolated=True)))
    assert spaced(power_verdict(beyond, "en")).endswith(
        "3200 Ω. It is an extrapolation, more than twice what was logged."
    )


def test_a_design_power_that_is_not_reached_is_told() -> None:
    found = samples.result(samples.thermal(samples.permitted()))
    told = "Its design power of 60 W is more than that."
    assert spaced(power_of(found, "en").verdict).endswith(told)
    assert told not in spaced(power_of(replace(found, power_w=30), "en").verdict)


def test_heat_that_is_known_for_the_nominal_load_alone_is_said_so() -> None:
    found = samples.result(samples.thermal(samples.permitted(heat_load_swr=1.0)))
    assert "its nominal load; the heat into others is not known." in power_verdict(found, "en")


def test_no_power_without_a_log_or_a_limit() -> None:
    assert power_verdict(samples.result(None), "en") == (
        "No power is named: there is no temperature log."
    )
    unlimited = samples.thermal(None, "no temperature limit is given")
    assert power_verdict(samples.result(unlimited), "en") == (
        "No power is named: no temperature limit is given."
    )


def test_powers_are_rounded_down_and_marked_beyond_the_log() -> None:
    page = power_of(samples.result(samples.thermal(samples.permitted(extrapolated=True))), "en")
    assert table_of(page.modes) == {
        "Carrier": ["100", "35*", "758", "core heating", "80 m"],
        "Voice": ["20", "68", "1047", "flux in the core", "160 m"],
    }
    assert "more than twice what was logged" in page.modes.caption
    rows = table_of(page.bands)
    assert rows["Continuous power, W"] == ["35", "83*", DASH]
    assert rows["the same, nominal load"] == ["71", DASH, DASH]
    assert rows["Minutes to the limit at 60 W".replace(" W", "\u00a0W")] == ["12", "never", DASH]


def test_stress_in_every_band() -> None:
    rows = table_of(power_of(samples.result(None, FLUX), "en").bands)
    assert rows["Heat, W"] == ["8.9", "8.9", "7.8"]
    assert rows["Heat, nominal load, W"] == ["4.5", "4.5", "3.9"]
    assert rows["Peak flux, mT"] == ["19.4", "9.7", "2.4"]
    assert rows["Capacitor current, A"] == ["0.17", "0.32", "1.32"]
    assert rows["Rise of a bare core, K"] == [f"89{DASH}128", f"89{DASH}129", f"78{DASH}112"]


def test_sentences_name_volts_capacitor_and_the_first_limit() -> None:
    words = [spaced(one) for one in power_of(samples.result(None, FLUX), "en").words]
    assert words == [
        "At 60 W on 40 m, where heat is most, two published formulas put a bare core in free air "
        "89 to 129 K above the air.",
        "At 60 W and a load SWR of 2.5 the low side carries up to 87 V and 1.73 A, the high side "
        "693 V and 0.22 A (980 V peak), in rms values.",
        "The capacitor has up to 122 V peak across it and 1.32 A on 10 m; what it bears of both "
        "at radio frequency decides.",
        "Of the limits given for volts and flux the first is met at 68 W peak: flux in the core, "
        "20 mT on 160 m.",
    ]


def test_the_log_and_the_time_to_the_limit() -> None:
    words = power_of(samples.result(samples.thermal(samples.permitted())), "en").words
    assert [spaced(one) for one in words[:2]] == [
        "The limit is 90 °C for the core's surface; 60 W without a pause, from cold, reaches it "
        "in 12 minutes on 80 m.",
        "Unit A was logged at 40 W and 7.1 MHz: 5.70 ± 0.26 W of heat raise its core by "
        "53 K in the end, 9.36 ± 0.42 K/W, with a time constant of 13.60 ± 0.50 min.",
    ]


@pytest.mark.parametrize(
    ("minutes", "text"),
    [
        (0.4, "less than a minute"),
        (1.96, "1.9 minutes"),
        (12.9, "12 minutes"),
        (189, "180 minutes"),
    ],
)
def test_times_are_rounded_down(minutes: float, text: str) -> None:
    assert spaced(counted_minutes(minutes, "en")) == text


def test_chart_of_the_log_says_it_in_words() -> None:
    chart = draw_warm_up(samples.result(samples.thermal(samples.permitted())))
    assert spaced(chart.title) == "At 40 W on 7.1 MHz the core ends 53 K above its surroundings"
    assert "Core surface in degrees Celsius: 22 after 0" in spaced(chart.alt)
    assert "limit of 90 °C" in spaced(chart.alt)
    assert ">limit<" in chart.svg
    assert ">limit<" not in draw_warm_up(samples.result(samples.thermal(None, "x"))).svg
    assert draw_warm_up(samples.result(None)) is None
