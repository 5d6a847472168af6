"""The numbers of a sweep file come out as they were put in, re 50 ohm."""

import hashlib
import io

import numpy as np
import pytest
import skrf
from hypothesis import assume, given, settings
from hypothesis import strategies as st
from numpy.testing import assert_allclose, assert_array_equal
from sweep_files import ONE_PATH_ROW, OPTION, one_port, two_port

from reportgen.intake.reference import scattering_at_50_ohm
from reportgen.intake.touchstone import parse_touchstone
from reportgen.model import Sweep

HERTZ = {"Hz": 1, "kHz": 10**3, "MHz": 10**6, "GHz": 10**9}


def swept(content: str, file: str = "a.ts", **arguments) -> Sweep:
    return parse_touchstone(content.encode(), file=file, **arguments)[0]


def pair(number: complex, number_format: str) -> str:
    if number_format == "RI":
        return f"{number.real!r} {number.imag!r}"
    magnitude, angle = abs(number), float(np.angle(number, deg=True))
    if number_format == "DB":
        return f"{20 * np.log10(magnitude) if magnitude else -np.inf} {angle!r}"
    return f"{magnitude!r} {angle!r}"


def written(frequency_hz, s, unit: str, number_format: str, reference: str = "50") -> str:
    """A Touchstone file; two ports as N11 N21 N12 N22."""
    rows = [
        " ".join([repr(f / HERTZ[unit]), *(pair(complex(n), number_format) for n in m.T.ravel())])
        for f, m in zip(frequency_hz, s, strict=True)
    ]
    return "\n".join([f"# {unit} S {number_format} R {reference}", *rows, ""])


@pytest.mark.parametrize("number_format", ["RI", "MA", "DB"])
def test_a_footer_changes_no_number(number_format):
    drawn = np.random.default_rng(1).uniform(-0.5, 0.5, (50, 2, 2, 2))
    content = written(range(1, 51), drawn[..., 0] + 1j * drawn[..., 1], "Hz", number_format)
    assert_array_equal(swept(content + "END\n").s, swept(content).s)


reflections = st.complex_numbers(max_magnitude=1.2, allow_nan=False, allow_infinity=False)


@st.composite
def networks(draw):
    ports = draw(st.sampled_from([1, 2]))
    hertz = draw(st.lists(st.integers(1, 10**11), min_size=1, max_size=6, unique=True))
    count = len(hertz) * ports * ports
    numbers = draw(st.lists(reflections, min_size=count, max_size=count))
    return sorted(hertz), np.array(numbers).reshape(-1, ports, ports)


@settings(deadline=None)
@given(networks(), st.sampled_from(list(HERTZ)), st.sampled_from(["RI", "MA", "DB"]))
def test_what_is_written_is_read(network, unit, number_format):
    hertz, s = network
    sweep = swept(written(hertz, s, unit, number_format))
    assert_array_equal(sweep.frequency_hz, hertz)
    assert_allclose(sweep.s, s, rtol=0, atol=1e-12)


@settings(max_examples=30, deadline=None)
@given(networks(), st.sampled_from(list(HERTZ)), st.sampled_from(["RI", "MA", "DB"]))
def test_clean_files_as_scikit_rf_reads_them(network, unit, number_format):
    content = written(*network, unit, number_format)
    text = io.StringIO(content)
    text.name = f"a.s{network[1].shape[-1]}p"
    other = skrf.Network()
    other.read_touchstone(text)
    sweep = swept(content)
    assert_allclose(sweep.frequency_hz, other.f, rtol=1e-12)
    assert_allclose(sweep.s, other.s, rtol=0, atol=1e-12)


def bilinear(s, reference_ohm):
    """Change of reference to 50 ohm without an impedance matrix.

    At each port V = sqrt(R) (a + b) and I = (a - b) / sqrt(R) (waves of page 8 of the Touchstone
    specification 2.1), so with r = sqrt(R / 50), p = (r + 1/r) / 2, m = (r - 1/r) / 2:
    a' = p a + m b, b' = m a + p b, S' = (m + p S) (p + m S)^-1.
    """
    ratio = np.sqrt(np.asarray(reference_ohm) / 50)
    plus, minus = np.diag((ratio + 1 / ratio) / 2), np.diag((ratio - 1 / ratio) / 2)
    return (minus + plus @ s) @ np.linalg.inv(plus + minus @ s)


@settings(deadline=None)
@given(networks(), st.floats(1, 1e4), st.floats(1, 1e4))
def test_other_references_are_converted_to_50_ohm(network, first_ohm, second_ohm):
    hertz, s = network
    assume((np.abs(s).max(axis=(0, 1)) > 1e-6).all())  # no column looks unmeasured
    s = 0.35 * s  # norm below 0.84: passive, so both ways of computing are well conditioned
    reference_ohm = (first_ohm, second_ohm)[: s.shape[-1]]
    sweep = swept(written(hertz, s, "Hz", "RI", " ".join(map(repr, reference_ohm))))
    assert sweep.reference_ohm == reference_ohm
    assert_allclose(sweep.s, bilinear(s, reference_ohm), rtol=0, atol=1e-9)


def test_75_ohm_read_at_50_ohm():
    # (75 - 50) / (75 + 50)
    assert_allclose(swept("# MHz S RI R 75\n1 0 0\n").s.item(), 0.2, atol=1e-12)


@pytest.mark.parametrize("ends", [1.0, -1.0])
def test_open_and_short_are_the_same_at_any_reference(ends):
    s = scattering_at_50_ohm(np.full((1, 1, 1), ends, dtype=complex), (75.0,))
    assert_allclose(s.item(), ends, atol=1e-9)


def test_a_through_is_one_at_any_reference():
    through = np.array([[[0, 1], [1, 0]]], dtype=complex)
    assert_allclose(scattering_at_50_ohm(through, (75.0, 75.0)), through, atol=1e-8)


def test_z_is_normalised_to_r():
    # 2 times 75 ohm: (150 - 50) / (150 + 50)
    assert_allclose(swept("# MHz Z RI R 75\n1 2 0\n").s.item(), 0.5, atol=1e-12)


def test_ports_are_exchanged_with_their_references():
    straight = swept("# MHz S RI R 50 200\n" + two_port(1))
    turned = swept("# MHz S RI R 50 200\n" + two_port(1), reverse_ports=True)
    assert turned.reference_ohm == (200.0, 50.0)
    assert_allclose(turned.s[0], straight.s[0, ::-1, ::-1], atol=1e-12)
    assert abs(straight.s[0, 0, 0] - straight.s[0, 1, 1]) > 0.05


def test_columns_of_two_ports():
    s = swept(OPTION + two_port(1)).s[0]
    assert_array_equal(s, [[0.1 + 0.2j, 0.8 - 0.31j], [0.81 - 0.3j, 0.15 + 0.25j]])


def test_one_path_is_found_before_and_after_the_ports_are_exchanged():
    assert swept(OPTION + two_port(1, row=ONE_PATH_ROW)).one_path
    backwards = OPTION + "1 0 0 0 0 0.81 -0.3 0.1 0.2\n"
    assert not swept(backwards).one_path
    turned = swept(backwards, reverse_ports=True)
    assert turned.one_path
    assert_array_equal(turned.s[0, :, 0], [0.1 + 0.2j, 0.81 - 0.3j])


@pytest.mark.parametrize(("size", "found"), [("9e-10", True), ("1.1e-9", False)])
def test_what_counts_as_not_measured(size, found):
    assert swept(OPTION + f"1 .1 0 .8 0 {size} 0 0 {size}\n").one_path is found


def test_all_zero_in_decibels_is_one_path():
    assert swept("# MHz S DB R 50\n1 -20 5 -1 9 -inf 0 -200 0\n").one_path


def test_descending_points_keep_their_data():
    sweep = swept(OPTION + "3 0.3 0\n2 0.2 0\n1 0.1 0\n")
    assert_array_equal(sweep.frequency_hz, [1e6, 2e6, 3e6])
    assert_array_equal(sweep.s.ravel(), [0.1, 0.2, 0.3])


def test_a_seam_is_averaged_and_a_repetition_kept():
    content = OPTION + one_port(*range(1, 20)) + "19 0.12 0.20\n1 0.10 0.20\n"
    sweep = swept(content)
    assert_array_equal(sweep.frequency_hz, np.arange(1, 20) * 1e6)
    assert_allclose(sweep.s[-1].item(), 0.11 + 0.20j, atol=1e-15)
    assert_array_equal(sweep.s[:-1].ravel(), np.full(18, 0.10 + 0.20j))


def test_only_the_point_without_a_number_is_dropped():
    sweep = swept(OPTION + one_port(0, *range(1, 100)) + "100 nan 0\n" + one_port(*range(101, 200)))
    assert_array_equal(sweep.frequency_hz / 1e6, [*range(1, 100), *range(101, 200)])


def test_decimal_comma_when_set():
    sweep = swept("# MHz S RI R 75,0\n1,5;0,0;0,0\n", decimal=",")
    assert sweep.frequency_hz.item() == 1.5e6
    assert sweep.reference_ohm == (75.0,)


def test_setting_of_the_unit_prevails():
    assert swept("# GHz S RI R 50\n7 0 0\n", frequency_unit="MHz").frequency_hz.item() == 7e6


def test_wrapped_lines_are_joined():
    wrapped = swept(OPTION + two_port(1, 2).replace(" 0.8 ", "\n 0.8 "))
    assert_array_equal(wrapped.s, swept(OPTION + two_port(1, 2)).s)


def test_hash_is_of_the_bytes_given():
    content = OPTION + one_port(1)
    sweep = swept(content, file="x/a.s1p")
    assert sweep.sha256 == hashlib.sha256(content.encode()).hexdigest()
    assert sweep.file == "x/a.s1p"
    assert not sweep.s.flags.writeable
