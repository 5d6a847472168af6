"""Examples that the Touchstone specification prints, read as it says.

Source: Touchstone File Format Specification, version 2.1, IBIS Open Forum, ratified 26 January
2024. Page numbers are its own. Numbers that follow from a printed one by a formula stand beside
that formula. The numbers are the printed ones; blanks, comments and the order of the keywords
between [Number of Ports] and [Network Data] need not be.
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

EXAMPLE_11 = """[Version] 2.1
# MHz Z MA
[Number of Ports] 1
[Number of Frequencies] 5
[Reference] 20.0
[Network Data]
100 74.25 -4
200 60 -22
300 53.025 -45
400 30 -62
500 0.75 -89
[End]
"""  # page 16

EXAMPLE_12 = "# kHz H MA R 1\n2 0.95 -26 3.57 157 0.04 76 0.66 -14\n"  # page 16

EXAMPLE_13 = """[Version] 2.1
# kHz H MA R 1
[Number of Ports] 2
[Two-Port Data Order] 21_12
[Number of Frequencies] 1
[Network Data]
2 0.95 -26 3.57 157 0.04 76 0.66 -14
[End]
"""  # page 16

EXAMPLE_14 = """# GHz S RI R 50.0
1.0000 0.3926 -0.1211 -0.0003 -0.0021 -0.0003 -0.0021 0.3926 -0.1211
2.0000 0.3517 -0.3054 -0.0096 -0.0298 -0.0096 -0.0298 0.3517 -0.3054
10.000 0.3419 0.3336 -0.0134 0.0379 -0.0134 0.0379 0.3419 0.3336
"""  # page 16, rows in full

EXAMPLE_18 = """[Version] 2.1
# GHz S MA R 50
[Number of Ports] 2
[Two-Port Data Order] 21_12
[Number of Frequencies] 2
[Number of Noise Frequencies] 2
[Reference] 50 25.0
[Network Data]
2 .95 -26 3.57 157 .04 76 .66 -14
22 .60 -144 1.30 40 .14 40 .56 -85
[Noise Data]
4 .7 .64 69 19
18 2.7 .46 -33 20
[End]
"""  # pages 24 to 26, as the two below

EXAMPLE_18_AT_50_OHM = EXAMPLE_18.replace("[Reference] 50 25.0\n", "")

EXAMPLE_18_VERSION_1 = """# GHz S MA R 50
2 .95 -26 3.57 157 .04 76 .66 -14
22 .60 -144 1.30 40 .14 40 .56 -85
4 .7 .64 69 .38
18 2.7 .46 -33 .40
"""

EXAMPLE_21 = EXAMPLE_18_AT_50_OHM.replace("21_12", "12_21")  # the data of 18 in the other order


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
    # example 11 prints these magnitudes in ohms
    assert_allclose(np.abs(z), [74.25, 60, 53.025, 30, 0.75], rtol=1e-9)
    assert_allclose(np.angle(z, deg=True), [-4, -22, -45, -62, -89], rtol=1e-9)
    assert_allclose(sweep.frequency_hz, np.arange(1, 6) * 1e8, rtol=0)


def test_example_11_z_is_in_ohms_whatever_the_reference():
    sweep, findings = read(EXAMPLE_11, "example11.ts")
    assert findings == ()
    version_1, _ = read(EXAMPLE_10, "example10.s1p")
    assert_allclose(sweep.frequency_hz, version_1.frequency_hz, rtol=0)
    assert_allclose(sweep.s, version_1.s, rtol=1e-9)


@pytest.mark.parametrize(("content", "line"), [(EXAMPLE_12, 1), (EXAMPLE_13, 2)])
def test_examples_12_and_13_h_is_refused(content, line):
    was_read, findings = verdict(content, file="example.s2p")
    assert not was_read
    assert [(f.code, f.line, f.severity) for f in findings] == [
        ("parameter-unsupported", line, Severity.ERROR)
    ]
    assert "H parameters" in findings[0].message


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


S21, S12 = [polar(3.57, 157), polar(1.30, 40)], [polar(0.04, 76), polar(0.14, 40)]


@pytest.mark.parametrize(
    ("content", "noise_line", "s21", "s12"),
    [
        (EXAMPLE_18_VERSION_1, 4, S21, S12),
        (EXAMPLE_18_AT_50_OHM, 10, S21, S12),
        (EXAMPLE_21, 10, S12, S21),  # pages 9, 10 and 15: N12 before N21
    ],
    ids=["18, version 1", "18", "21"],
)
def test_examples_18_and_21_noise_is_no_network_data(content, noise_line, s21, s12):
    sweep, findings = read(content, "example18.s2p")
    assert [(f.code, f.line) for f in findings] == [("noise-data", noise_line)]
    assert sweep.frequency_hz.tolist() == [2e9, 22e9]
    assert_allclose(sweep.s[:, 0, 0], [polar(0.95, -26), polar(0.60, -144)], rtol=1e-12)
    assert_allclose(sweep.s[:, 1, 0], s21, rtol=1e-12)
    assert_allclose(sweep.s[:, 0, 1], s12, rtol=1e-12)
    assert_allclose(sweep.s[:, 1, 1], [polar(0.66, -14), polar(0.56, -85)], rtol=1e-12)


def test_example_18_reference_of_each_port():
    sweep, findings = read(EXAMPLE_18, "example18.ts")
    assert [(f.code, f.line) for f in findings] == [("noise-data", 11), ("reference", 7)]
    assert sweep.reference_ohm == (50.0, 25.0)
    # waves of page 8, V = sqrt(R) (a + b) and I = (a - b) / sqrt(R), solved for R2 = 50 ohm
    printed = np.array([[polar(0.95, -26), polar(0.04, 76)], [polar(3.57, 157), polar(0.66, -14)]])
    ratio = np.sqrt(np.array([50.0, 25.0]) / 50)
    plus, minus = np.diag((ratio + 1 / ratio) / 2), np.diag((ratio - 1 / ratio) / 2)
    expected = (minus + plus @ printed) @ np.linalg.inv(plus + minus @ printed)
    assert_allclose(sweep.s[0], expected, rtol=1e-9)
    rounded = [[polar(0.93632, -29.573), polar(0.04784, 72.129)],
               [polar(4.26955, 153.129), polar(0.43902, -31.345)]]  # fmt: skip
    assert_allclose(sweep.s[0], rounded, rtol=2e-5, atol=1e-5)


# page 17 prints a network of four ports; this made-up head of a file is enough to refuse it
def test_four_ports_are_refused_by_name():
    content = """[Version] 2.1
# GHz S MA R 50
[Number of Ports] 4
[Number of Frequencies] 3
[Network Data]
[End]
"""
    was_read, findings = verdict(content, file="four.ts")
    assert not was_read
    assert [(f.code, f.line) for f in findings] == [("port-count", 3)]
    assert "[Number of Ports] is 4" in findings[0].message


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
