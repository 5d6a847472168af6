"""Examples that the Touchstone specification prints, read as it says.

Source: Touchstone File Format Specification, version 2.1, IBIS Open Forum, ratified 26 January
2024. Page numbers are its own. Numbers that follow from a printed one by a formula stand beside
that formula; noise resistances are printed in version-1 form on pages 24 to 26.
"""

import numpy as np
import pytest
from numpy.testing import assert_allclose
from sweep_files import verdict

from reportgen.intake.touchstone import parse_touchstone
from reportgen.model import Severity

EXAMPLE_9 = "# MHz S MA R 50\n2.000 0.894 -12.136\n"  # page 15

EXAMPLE_10 = """# MHz Z MA R 75
100 0.99 -4
200 0.80 -22
300 0.707 -45
400 0.40 -62
500 0.01 -89
"""  # page 15

EXAMPLE_12 = "# kHz H MA R 1\n2 0.95 -26 3.57 157 0.04 76 0.66 -14\n"  # page 16

EXAMPLE_14 = """# GHz S RI R 50.0
1.0000 0.3926 -0.1211 -0.0003 -0.0021 -0.0003 -0.0021 0.3926 -0.1211
2.0000 0.3517 -0.3054 -0.0096 -0.0298 -0.0096 -0.0298 0.3517 -0.3054
10.000 0.3419 0.3336 -0.0134 0.0379 -0.0134 0.0379 0.3419 0.3336
"""  # page 16, rows in full

EXAMPLE_18 = """# GHz S MA R 50
2 .95 -26 3.57 157 .04 76 .66 -14
22 .60 -144 1.30 40 .14 40 .56 -85
4 .7 .64 69 .38
18 2.7 .46 -33 .40
"""  # pages 24 to 26, version-1 form


def read(content, file):
    return parse_touchstone(content.encode(), file=file)


def polar(magnitude, degrees):
    return magnitude * np.exp(1j * np.deg2rad(degrees))


def test_example_9_one_port_magnitude_and_angle():
    sweep, findings = read(EXAMPLE_9, "example9.s1p")
    assert findings == ()
    assert sweep.frequency_hz.tolist() == [2e6]
    s11 = sweep.s.item()
    assert_allclose(s11, polar(0.894, -12.136), rtol=1e-12)
    assert_allclose(s11, 0.874020 - 0.187948j, rtol=0, atol=1e-6)
    assert_allclose(50 * (1 + s11) / (1 - s11), 196.08 - 367.12j, rtol=0, atol=0.01)


def test_example_10_z_is_normalised_to_75_ohm():
    sweep, findings = read(EXAMPLE_10, "example10.s1p")
    assert [f.code for f in findings] == ["z-parameters"]
    z = 50 * (1 + sweep.s.ravel()) / (1 - sweep.s.ravel())
    # the same file in version 2, example 11 on page 16, prints these magnitudes in ohms
    assert_allclose(np.abs(z), [74.25, 60, 53.025, 30, 0.75], rtol=1e-9)
    assert_allclose(np.angle(z, deg=True), [-4, -22, -45, -62, -89], rtol=1e-9)
    assert_allclose(sweep.frequency_hz, np.arange(1, 6) * 1e8, rtol=0)


def test_example_12_h_is_refused():
    was_read, findings = verdict(EXAMPLE_12, file="example12.s2p")
    assert not was_read
    assert [(f.code, f.line, f.severity) for f in findings] == [
        ("parameter-unsupported", 1, Severity.ERROR)
    ]


def test_example_14_two_ports_real_and_imaginary():
    sweep, findings = read(EXAMPLE_14, "example14.s2p")
    assert findings == ()
    assert sweep.frequency_hz.tolist() == [1e9, 2e9, 10e9]
    s11 = [0.3926 - 0.1211j, 0.3517 - 0.3054j, 0.3419 + 0.3336j]
    s21 = [-0.0003 - 0.0021j, -0.0096 - 0.0298j, -0.0134 + 0.0379j]
    assert_allclose(sweep.s[:, 0, 0], s11, rtol=1e-15)
    assert_allclose(sweep.s[:, 1, 1], s11, rtol=1e-15)
    assert_allclose(sweep.s[:, 1, 0], s21, rtol=1e-15)
    assert_allclose(sweep.s[:, 0, 1], s21, rtol=1e-15)


def test_example_18_noise_is_no_network_data_and_21_stands_before_12():
    sweep, findings = read(EXAMPLE_18, "example18.s2p")
    assert [(f.code, f.line) for f in findings] == [("noise-data", 4)]
    assert sweep.frequency_hz.tolist() == [2e9, 22e9]
    assert_allclose(sweep.s[:, 0, 0], [polar(0.95, -26), polar(0.60, -144)], rtol=1e-12)
    assert_allclose(sweep.s[:, 1, 0], [polar(3.57, 157), polar(1.30, 40)], rtol=1e-12)
    assert_allclose(sweep.s[:, 0, 1], [polar(0.04, 76), polar(0.14, 40)], rtol=1e-12)
    assert_allclose(sweep.s[:, 1, 1], [polar(0.66, -14), polar(0.56, -85)], rtol=1e-12)


# the option lines are printed on page 9; the rows behind them are made up
@pytest.mark.parametrize(
    ("option", "row", "file", "reference_ohm"),
    [
        ("# S R 100 GHz RI", "1 0.2 0.1", "a.s1p", (100.0,)),
        ("# S GHz RI R 0.1 75.0", "1 .2 .1 .3 0 .3 0 .2 .1", "a.s2p", (0.1, 75.0)),
    ],
)
def test_option_line_in_another_order(option, row, file, reference_ohm):
    sweep, findings = read(f"{option}\n{row}\n", file)
    assert [f.code for f in findings] == ["reference"]
    assert sweep.frequency_hz.tolist() == [1e9]
    assert sweep.reference_ohm == reference_ohm


# pages 6 to 8: what is left out is GHz, S, MA, R 50
@pytest.mark.parametrize(
    "option", ["# MHz", "# MHz S", "# MHz MA", "# R 50 MHz", "# mhz s ma r 50"]
)
def test_items_left_out_have_their_defaults(option):
    sweep, findings = read(f"{option}\n2.000 0.894 -12.136\n", "a.s1p")
    assert findings == ()
    assert_allclose(sweep.s, read(EXAMPLE_9, "a.s1p")[0].s, rtol=0)


def test_unit_left_out_is_gigahertz():
    sweep, findings = read("# S MA R 50\n2.000 0.894 -12.136\n", "a.s1p")
    assert [f.code for f in findings] == ["unit-missing"]
    assert sweep.frequency_hz.tolist() == [2e9]
