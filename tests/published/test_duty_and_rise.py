"""Duty factors, and the step response of one time constant.

Sources: FCC OET Bulletin 65, Supplement B, edition 97-01, table 2 (two quotations; processed voice
is 40 % in one and 50 % in the other) and its worked example 500 W x 0.4 x 0.125 = 25 W (quoted);
the exponential's own table, computed and matching handbook prints. The rise of bare surfaces is in
test_flux_and_volts.py.
"""

import numpy as np
import pytest

from reportgen.model import (
    BuildSheet,
    Interval,
    Stress,
    StressBand,
    ThermalFit,
    ThermalLog,
    Winding,
)
from reportgen.physics.permitted_power import DUTY_PERCENT, minutes_to_limit, permitted_of
from reportgen.physics.warm_up import fit_warm_up


@pytest.mark.parametrize(
    ("mode", "percent"),
    [
        ("voice", 20),
        ("telegraphy", 40),
        ("frequency-shift keying", 100),
        ("FM voice", 100),
        ("carrier", 100),
    ],
)
def test_duty_of_a_mode(mode, percent) -> None:
    assert DUTY_PERCENT[mode] == percent


def test_processed_voice_takes_the_greater_of_two_quotations() -> None:
    """The lesser would permit more."""
    assert DUTY_PERCENT["voice, processed"] == max(40, 50)


def test_duty_is_of_the_sending_alone() -> None:
    """200 W of mean power in telegraphy is 500 W; the example's further 0.125 (45 s of 360 s) is
    about exposure and would permit 4000 W.
    """  # fmt: skip
    one = Interval(value=1.0, low95=1.0, high95=1.0)
    fit = ThermalFit(
        file="", unit="A", frequency_hz=7e6, power_w=200, heat_w=one, rise_k=one, start_k=0,
        time_constant_s=one, resistance_k_per_w=one, span_s=1,
    )  # fmt: skip
    band = StressBand(
        band="40 m", peak_flux_t=None, capacitor_v=None, capacitor_a=None, heat_w=50.0,
        matched_heat_w=50.0, surface_rise_k=None,
    )  # fmt: skip
    stress = Stress(
        power_w=100, load_swr=1, heat_load_swr=1, low_side_v=0, low_side_a=0, high_side_v=0,
        high_side_a=0, bands=(band,), first_limit=None,
    )  # fmt: skip
    winding = Winding(low_turns=3, high_turns=24, temperature_limit_c=140)
    found = permitted_of(fit, stress, BuildSheet(name="Alder", winding=winding), DUTY_PERCENT)
    assert found is not None
    power_w = {one.mode: one.power_w for one in found.modes}
    assert power_w["telegraphy"] == pytest.approx(500)
    assert power_w["telegraphy"] * 0.4 * 0.125 == pytest.approx(25)


STEP = [(0.5, 39.347), (1, 63.212), (2, 86.466), (3, 95.021), (4, 98.168), (5, 99.326)]


@pytest.mark.parametrize(("time_constants", "percent"), STEP)
def test_step_response(time_constants, percent) -> None:
    """The limit stands where the rise is after so many time constants."""
    assert minutes_to_limit(percent, 100, 60) == pytest.approx(time_constants, rel=1e-3)


@pytest.mark.parametrize(
    ("percent", "time_constants"), [(50, 0.693147), (95, 2.995732), (99, 4.60517)]
)
def test_time_to_a_share_of_the_rise(percent, time_constants) -> None:
    assert minutes_to_limit(percent, 100, 60) == pytest.approx(time_constants, rel=1e-6)


def test_fit_of_the_step_response_itself() -> None:
    time_s = np.linspace(0, 5, 200)
    room = np.full(200, 20.0)
    table_s, table_c = zip((0, 0), *STEP, strict=True)
    fit = fit_warm_up(
        ThermalLog(
            file="", sha256="", time_s=time_s, core_c=room + 100 * -np.expm1(-time_s),
            ambient_c=room,
        )
    )  # fmt: skip
    assert fit.time_constant_s.value == pytest.approx(1, rel=1e-4)
    rise = fit.rise_k.value * -np.expm1(-np.array(table_s) / fit.time_constant_s.value)
    np.testing.assert_allclose(rise, table_c, atol=0.01)
