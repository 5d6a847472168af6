"""Touchstone 2.x: each keyword, each mistake in it, and the numbers of the network data."""

import io

import numpy as np
import pytest
import skrf
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.testing import assert_allclose, assert_array_equal
from sweep_files import NOTE, REJECT, verdict

from reportgen.errors import InputRejected
from reportgen.intake.touchstone import parse_touchstone

ONE = """[Version] 2.0
# MHz S RI R 50
[Number of Ports] 1
[Number of Frequencies] 2
[Network Data]
1 0.1 0.2
2 0.3 0.4
[End]
"""
TWO = """[Version] 2.1
# MHz S RI R 50
[Number of Ports] 2
[Two-Port Data Order] 21_12
[Number of Frequencies] 2
[Network Data]
1 0.11 0.1 0.21 0.2 0.12 0.3 0.22 0.4
2 0.11 0.5 0.21 0.6 0.12 0.7 0.22 0.8
[End]
"""
NOISE = """[Noise Data]
0.5 .7 .64 69 19
1.5 2.7 .46 -33 20
"""
FREQUENCIES = "[Number of Frequencies] 2\n"
ORDER = "[Two-Port Data Order] 21_12\n"


def with_noise(count: int) -> str:
    header = TWO.replace(FREQUENCIES, FREQUENCIES + f"[Number of Noise Frequencies] {count}\n")
    return header.replace("[End]", NOISE + "[End]")


def swept(content: str, file: str = "a.ts", **arguments):
    return parse_touchstone(content.encode(), file=file, **arguments)[0]


CLEAN = {
    "version 2.1": ONE.replace("2.0", "2.1"),
    "any case": ONE.replace("[Number of Ports]", "[NUMBER of ports]").replace("[End]", "[END]"),
    "comments": "! made up\n" + ONE.replace("Data]", "Data] ! f re im") + "! end\n",
    "CR only": ONE.replace("\n", "\r"),
    "no line end at the end": ONE.rstrip("\n"),
    "matrix format": ONE.replace("[Network", "[Matrix Format] upper\n[Network"),
    "count before the reference": ONE.replace("[Network", "[Reference] 50\n[Network"),
    "reference before the count": ONE.replace(FREQUENCIES, "[Reference] 50\n" + FREQUENCIES),
    "reference on the next line": ONE.replace("[Network", "[Reference]\n 50.0\n[Network"),
    "reference prevails": ONE.replace("R 50", "R 75").replace("[Net", "[Reference] 50\n[Net"),
    "wrapped": ONE.replace("1 0.1 0.2\n2 0.3 0.4", "1\n0.1\n0.2 2 0.3\n0.4"),
    "one line": ONE.replace("1 0.1 0.2\n2", "1 0.1 0.2 2"),
    "information": ONE.replace(
        "[Network",
        "[Begin Information]\n[Title] x\n# GHz Z\n9 9\n[End]\n[End Information]\n[Network"),
}  # fmt: skip


@pytest.mark.parametrize("content", CLEAN.values(), ids=CLEAN)
@pytest.mark.parametrize("file", ["a.ts", "a.s1p"])
def test_accepted_without_a_word(content, file):
    assert verdict(content, file=file) == (True, ())
    sweep = swept(content, file)
    assert_array_equal(sweep.frequency_hz, [1e6, 2e6])
    assert_array_equal(sweep.s.ravel(), [0.1 + 0.2j, 0.3 + 0.4j])
    assert sweep.reference_ohm == (50.0,)


@pytest.mark.parametrize("file", ["a.ts", "a.s2p"])
def test_order_of_two_ports(file):
    first = [[0.11 + 0.1j, 0.12 + 0.3j], [0.21 + 0.2j, 0.22 + 0.4j]]
    assert verdict(TWO, file=file) == (True, ())
    assert_array_equal(swept(TWO).s[0], first)
    assert_array_equal(swept(TWO.replace("21_12", "12_21")).s[0], np.transpose(first))


def test_decimal_comma_where_set():
    content = ONE.replace("[Network", "[Reference] 50,0\n[Network").replace(" 0.", " 0,")
    assert_array_equal(swept(content, decimal=",").s, swept(ONE).s)


def test_z_is_in_ohms():
    content = ONE.replace(" S ", " Z ").replace("[Net", "[Reference] 75\n[Net")
    assert verdict(content) == (True, ())
    z = np.array([0.1 + 0.2j, 0.3 + 0.4j])
    assert_allclose(swept(content).s.ravel(), (z - 50) / (z + 50), rtol=1e-12)


def test_z_of_two_ports_with_two_references():
    content = TWO.replace(" S ", " Z ").replace("[Net", "[Reference] 75\n100\n[Net")
    z = np.array([[0.11 + 0.1j, 0.12 + 0.3j], [0.21 + 0.2j, 0.22 + 0.4j]])
    unit = 50 * np.eye(2)
    assert verdict(content, file="a.ts") == (True, ())
    assert_allclose(swept(content).s[0], (z - unit) @ np.linalg.inv(z + unit), rtol=1e-9)


def test_noise_is_counted_and_left():
    was_read, findings = verdict(with_noise(2), file="a.s2p")
    assert was_read
    assert [(f.code, f.severity, f.line) for f in findings] == [("noise-data", NOTE, 10)]
    assert "2 points" in findings[0].message
    assert_array_equal(swept(with_noise(2)).s, swept(TWO).s)


def test_reference_is_told_with_its_line():
    was_read, findings = verdict(ONE.replace("[Net", "[Reference] 75\n[Net"))
    assert was_read
    assert [(f.code, f.line) for f in findings] == [("reference", 5)]
    assert "75 ohm" in findings[0].message


def changed(content: str, old: str, new: str = "") -> str:
    assert old in content
    return content.replace(old, new)


def without(keyword: str, content: str = ONE) -> str:
    kept = [line for line in content.splitlines() if not line.startswith(f"[{keyword}]")]
    return "\n".join([*kept, ""])


def ahead(line: str, content: str = ONE) -> str:
    """With a line more in front of [Network Data]."""
    return changed(content, "[Network Data]", f"{line}\n[Network Data]")


# name: (content, code, line, words of message and remedy)
MISTAKES = {
    # --- missing
    "no version": (without("Version"), "version-missing", 2, ["[Number of Ports] 1", "[Version]"]),
    "no ports": (without("Number of Ports"), "keyword-missing", None, ["[Number of Ports]"]),
    "no count": (
        without("Number of Frequencies"), "keyword-missing", None, ["[Number of Frequencies]"]),
    "no network data": (
        without("Network Data"), "keyword-missing", None, ["[Network Data]"]),
    "no end": (without("End"), "keyword-missing", None, ["[End]", "saved completely"]),
    "no order of two ports": (
        without("Two-Port Data Order", TWO), "keyword-missing", None,
        ["[Two-Port Data Order]", "21_12 or 12_21"]),
    "no count of noise": (
        without("Number of Noise Frequencies", with_noise(2)), "keyword-missing", 9,
        ["[Number of Noise Frequencies]", "[Noise Data]"]),
    "no option line": (changed(ONE, "# MHz S RI R 50\n"), "no-option-line", None, ["# MHz S"]),
    # --- not allowed
    "order of one port": (
        ahead("[Two-Port Data Order] 21_12"), "keyword-not-allowed", 5,
        ["[Two-Port Data Order]", "[Number of Ports]"]),
    "count without noise": (
        ahead("[Number of Noise Frequencies] 2", TWO), "keyword-not-allowed", 6,
        ["without [Noise Data]"]),
    "noise of one port": (
        changed(ahead("[Number of Noise Frequencies] 2"), "[End]", NOISE + "[End]"),
        "keyword-not-allowed", 9, ["[Noise Data]", "two ports only"]),
    "mixed mode": (
        ahead("[Mixed-Mode Order] D2,3", TWO), "mixed-mode", 6, ["[Mixed-Mode Order] D2,3"]),
    "three ports": (
        changed(ONE, "Ports] 1", "Ports] 3"), "port-count", 3, ["[Number of Ports] is 3"]),
    **{
        f"{letter} parameters": (
            changed(TWO, " S ", f" {letter} "), "parameter-unsupported", 2,
            [f"{letter} parameters", "only S (and Z)"])
        for letter in "YHG"
    },
    # --- unknown, twice, out of order
    "unknown": (ahead("[Colour] red"), "keyword-unknown", 5, ["[Colour] red", "[Matrix Format]"]),
    "misspelt": (ahead("[Referense] 50"), "keyword-unknown", 5, ["did you mean [Reference]?"]),
    "bracket left open": (ahead("[Reference 50"), "keyword-unknown", 5, ["[Reference 50"]),
    "indented": (ahead(" [Reference] 50"), "keyword-indented", 5, ["[Reference]", "column 1"]),
    "twice": (ahead("[Number of Ports] 1"), "keyword-twice", 5, ["[Number of Ports]", "line 3"]),
    "version late": (
        "# MHz S RI R 50\n" + changed(ONE, "# MHz S RI R 50\n"), "keyword-order", 2,
        ["[Version] stands behind the option line (line 1)"]),
    "option line late": (
        ahead("# MHz S RI R 50", changed(ONE, "# MHz S RI R 50\n")), "keyword-order", 4,
        ["the option line stands behind [Number of Frequencies] (line 3)"]),
    "ports late": (
        ahead("[Number of Ports] 1", without("Number of Ports")), "keyword-order", 4,
        ["[Number of Ports] stands behind [Number of Frequencies]"]),
    "reference behind the data": (
        changed(ONE, "[End]", "[Reference] 50\n[End]"), "keyword-order", 8,
        ["[Reference] stands behind [Network Data] (line 5)"]),
    "noise before the data": (
        ahead(NOISE.rstrip(), without("Noise Data", with_noise(2))), "keyword-order", 10,
        ["[Network Data] stands behind [Noise Data] (line 7)"]),
    "second option line": (
        changed(ONE, "[End]", "# GHz S RI R 50\n[End]"), "second-option-line", 8, ["line 2"]),
    # --- text in the wrong place
    "text behind the end": (ONE + "\n3 0 0\n", "text-after-end", 10, ['"3 0 0"', "[End]"]),
    "a second sweep": (ONE + ONE, "text-after-end", 9, ['"[Version] 2.0"', "split the file"]),
    "option line behind the end": (ONE + "# MHz S RI R 50\n", "text-after-end", 9, ["# MHz"]),
    "text between keywords": (ahead("1 0 0"), "text-between-keywords", 5, ['"1 0 0"']),
    "text behind a keyword": (
        changed(ONE, "[End]", "[End] 7"), "argument-unexpected", 8, ['"7"', "[End]"]),
    "data on the keyword's line": (
        changed(ONE, "Data]\n1", "Data] 1"), "argument-unexpected", 5, ["[Network Data]"]),
    "nothing behind a keyword": (
        changed(ONE, "Ports] 1", "Ports]"), "argument-missing", 3, ["[Number of Ports]"]),
    "information left open": (
        ahead("[Begin Information]"), "information-open", 5, ["[End Information]"]),
    "information not begun": (
        ahead("[End Information]"), "information-not-begun", 5, ["[Begin Information]"]),
    "information twice": (
        ahead("[Begin Information]\n[End Information]\n" * 2), "keyword-twice", 7,
        ["[Begin Information]"]),
    # --- values
    "version 3": (changed(ONE, "2.0", "3.0"), "argument-value", 1, ['"3.0"', "2.0 or 2.1"]),
    "ports in words": (changed(ONE, "Ports] 1", "Ports] one"), "argument-value", 3, ['"one"']),
    "no frequencies": (
        changed(ONE, "cies] 2", "cies] 0"), "argument-value", 4, ['"0"', "whole number above 0"]),
    "count beyond reading": (
        changed(ONE, "cies] 2", "cies] 2" + "0" * 5000), "argument-value", 4, ["whole number"]),
    "zeros beyond reading": (
        changed(ONE, "cies] 2", "cies] " + "0" * 5000 + "2"), "argument-value", 4,
        ["whole number"]),
    "unknown order": (
        changed(TWO, "21_12", "11_22"), "argument-value", 4, ['"11_22"', "21_12 or 12_21"]),
    "unknown format": (
        ahead("[Matrix Format] Half"), "argument-value", 5, ['"Half"', "Full or Lower or Upper"]),
    "one reference for two": (
        ahead("[Reference] 50", TWO), "reference-count", 6,
        ["found 1 value ", "expected 2", "one real number"]),
    "a reference too many": (
        ahead("[Reference] 50\n75"), "reference-count", 5, ["found 2 values", "expected 1"]),
    "complex reference": (
        ahead("[Reference]\n50+j5"), "reference-value", 6, ['"50+j5"', "real number"]),
    "negative reference": (ahead("[Reference] -50"), "reference-value", 5, ['"-50"']),
    "name": (TWO, "name-and-ports", 3, [".s1p", "[Number of Ports] 2", "rename it to .s2p"]),
    # --- data
    "a point too few": (
        changed(ONE, "2 0.3 0.4\n"), "number-count", 5,
        ["[Network Data] holds 3 numbers", "expected 6: 3 for each of 2 points",
         "[Number of Frequencies] in line 4"]),
    "a number too few": (
        changed(ONE, " 0.4"), "number-count", 5, ["holds 5 numbers", "expected 6"]),
    "a triangle for a full matrix": (
        ahead("[Matrix Format] Lower", TWO), "number-count", 7, ["18 numbers", "expected 14"]),
    "noise miscounted": (
        with_noise(3), "number-count", 10, ["[Noise Data] holds 10 numbers", "expected 15"]),
    "no data": (changed(ONE, "1 0.1 0.2\n2 0.3 0.4\n"), "number-count", 5, ["holds 0 numbers"]),
    "no number": (changed(ONE, "0.4", "x"), "not-a-number", 7, ['"x"']),
    "no number in the noise": (changed(with_noise(2), "69", "x"), "not-a-number", 11, ['"x"']),
    "falling": (
        changed(ONE, "2 0.3", "0.5 0.3"), "frequency-falls", 7, ["point 2", "0.5 behind 1"]),
}  # fmt: skip


@pytest.mark.parametrize("case", MISTAKES.values(), ids=MISTAKES)
def test_mistake_is_told_with_line_and_remedy(case):
    content, code, line, words = case
    file = "a.s1p" if code == "name-and-ports" else "a.ts"
    was_read, findings = verdict(content, file=file)
    assert not was_read
    found = [f for f in findings if f.code == code]
    assert len(found) == 1, findings
    assert (found[0].severity, found[0].line, found[0].file) == (REJECT, line, file)
    text = f"{found[0].message} -> {found[0].remedy}"
    assert [word for word in words if word not in text] == []


@pytest.mark.parametrize(
    "name", ["no end", "twice", "unknown order", "a number too few", "version late", "indented"]
)
def test_one_mistake_is_one_finding(name):
    assert len(verdict(MISTAKES[name][0], file="a.ts")[1]) == 1


def test_every_mistake_of_the_keywords_at_once():
    content = ahead("[Colour] red\n[Reference] 0 50", without("End", TWO)).replace("21_12", "1")
    _, findings = verdict(content, file="a.ts")
    assert {f.code for f in findings} == {
        "keyword-unknown", "reference-value", "keyword-missing", "argument-value",
    }  # fmt: skip


def test_limit_of_points():
    _, findings = verdict(ONE, max_points=1)
    assert [(f.code, f.line) for f in findings] == [("too-many-points", 4)]


# --- numbers -----------------------------------------------------------------------------------

TRIANGLES = {"Full": ([0, 0, 1, 1], [0, 1, 0, 1]), "Lower": ([0, 1, 1], [0, 0, 1]),
             "Upper": ([0, 0, 1], [0, 1, 1])}  # fmt: skip
reflections = st.complex_numbers(max_magnitude=1.2, allow_nan=False, allow_infinity=False)


def written(hertz, s, order: str, matrix: str, numbers_a_line: int) -> str:
    """A 2.x file of two ports, its data wrapped after so many numbers."""
    stored = s.swapaxes(1, 2) if (order, matrix) == ("21_12", "Full") else s
    numbers: list[str] = []
    for frequency, network in zip(hertz, stored, strict=True):
        numbers.append(str(frequency))
        for value in network[TRIANGLES[matrix]].tolist():
            numbers += [repr(value.real), repr(value.imag)]
    starts = range(0, len(numbers), numbers_a_line)
    rows = [" ".join(numbers[at : at + numbers_a_line]) for at in starts]
    header = ["[Version] 2.0", "# Hz S RI R 50", "[Number of Ports] 2",
              f"[Two-Port Data Order] {order}", f"[Number of Frequencies] {len(hertz)}",
              f"[Matrix Format] {matrix}", "[Network Data]"]  # fmt: skip
    return "\n".join([*header, *rows, "[End]", ""])


@st.composite
def networks(draw):
    hertz = sorted(draw(st.lists(st.integers(1, 10**11), min_size=1, max_size=5, unique=True)))
    count = 4 * len(hertz)
    numbers = draw(st.lists(reflections, min_size=count, max_size=count))
    return hertz, np.array(numbers).reshape(-1, 2, 2)


@settings(deadline=None)
@given(
    networks(),
    st.sampled_from(["21_12", "12_21"]),
    st.sampled_from(list(TRIANGLES)),
    st.integers(1, 30),
)
def test_what_is_written_is_read(network, order, matrix, numbers_a_line):
    hertz, s = network
    if matrix != "Full":
        s[:, 0, 1] = s[:, 1, 0]  # a triangle is half of a symmetric matrix
    sweep = swept(written(hertz, s, order, matrix, numbers_a_line))
    assert_array_equal(sweep.frequency_hz, hertz)
    assert_array_equal(sweep.s, s)


# scikit-rf 2.2 leaves the numbers beside the diagonal unset for 21_12 with a triangle
@settings(max_examples=30, deadline=None)
@given(
    networks(),
    st.sampled_from([("21_12", "Full"), ("12_21", "Full"), ("12_21", "Lower"), ("12_21", "Upper")]),
)
def test_as_scikit_rf_reads_it(network, layout):
    content = written(*network, *layout, 9 if layout[1] == "Full" else 7)
    text = io.StringIO(content)
    text.name = "a.ts"
    other = skrf.Network()
    other.read_touchstone(text)
    assert_allclose(swept(content).s, other.s, rtol=0, atol=1e-12)


# --- whatever comes ----------------------------------------------------------------------------

_SNIPPETS = st.sampled_from(
    ["[", "]", "[End]", "\n[End]\n", "[Begin Information]", "\n[End Information]\n", "#", "!", "\n",
     " ", "\0", "9", "-", "1e999", "nan", "\n[Reference] 50 75\n", "[Version] 2.0\n", "Lower", "x"]
)  # fmt: skip
_WHOLE = ahead("[Begin Information]\nx\n[End Information]\n[Reference] 50\n75", with_noise(2))


@settings(deadline=None, max_examples=300)
@given(st.lists(st.tuples(st.integers(0, len(_WHOLE)), st.integers(0, 30), _SNIPPETS), max_size=4))
def test_a_damaged_file_is_read_or_rejected(damages):
    content = _WHOLE
    for at, length, snippet in damages:
        content = content[:at] + snippet + content[at + length :]
    try:
        sweep, _ = parse_touchstone(content.encode(), file="a.ts")
    except InputRejected:
        return
    assert np.isfinite(sweep.s).all()
    assert (np.diff(sweep.frequency_hz) > 0).all()


def test_a_file_cut_short_anywhere_is_rejected():
    last = _WHOLE.rindex("]")
    for length in range(last + 1):
        assert not verdict(_WHOLE[:length], file="a.ts")[0]
    assert verdict(_WHOLE[: last + 1], file="a.ts")[0]
