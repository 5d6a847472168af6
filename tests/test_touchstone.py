"""What a sweep file may look like, and the verdict on it: one case for each kind of oddity."""

import codecs
import gzip

import pytest
from sweep_files import NOTE, ONE_PATH_ROW, OPTION, REJECT, WARN, one_port, two_port, verdict

from reportgen.model import Band

CLEAN = {
    "one port": OPTION + one_port(1, 2, 3),
    "any order, any case": "#  r 50 ri S mhz ! as exported\n" + one_port(1),
    "unit glued to the hash": "#MHz S RI R 50\n" + one_port(1),
    "tabs and leading blanks": " \t#\tMHz\tS\tRI\tR\t50 \n\t" + one_port(1),
    "identical second option line": OPTION + "# RI MHz R 50\n" + one_port(1),
    "byte-order mark": b"\xef\xbb\xbf" + (OPTION + one_port(1)).encode(),
    "Latin-1 comment": b"! 25 \xb0C\n" + (OPTION + one_port(1)).encode(),
    "CRLF": (OPTION + one_port(1, 2)).replace("\n", "\r\n"),
    "CR only": (OPTION + one_port(1, 2)).replace("\n", "\r"),
    "mixed line ends, blank lines": OPTION + "\r\n\n1 0.1 0.2 \r2 0.1 0.2\t\n\n",
    "no line end at the end": OPTION + one_port(1, 2).rstrip("\n"),
    "comment behind the values": OPTION + "1 0.1 0.2 ! first\n",
    "control characters in a comment": "! \x1b[31m\u202e\x07\n" + OPTION + one_port(1),
    "forged comment": OPTION + "! [Version] 2.0\n! # GHz Z MA R 7\n" + one_port(1),
    "single point": OPTION + one_port(7),
    "minus infinity in DB is zero": "# MHz S DB R 50\n1 -inf 0\n",
}


@pytest.mark.parametrize("content", CLEAN.values(), ids=CLEAN)
def test_accepted_without_a_word(content):
    assert verdict(content) == (True, ())


BAND = Band(name="40 m", from_hz=7.0e6, to_hz=7.2e6)
GHZ_BAND = Band(name="3 cm", from_hz=10.0e9, to_hz=10.5e9)
GZIP = gzip.compress(b"# MHz S RI R 50")

# name: (content, further arguments, code, severity, line, words of message and remedy)
ODD = {
    # --- option line
    "no option line": (
        one_port(1, 30), {}, "no-option-line", REJECT, None,
        ["no option line", "GHz, S, MA, 50 ohm", "1 to 30 GHz", "# MHz S MA R 50"]),
    "bare option line": (
        "! x\n#\n" + one_port(1), {}, "no-option-line", REJECT, 2, ["option line is empty"]),
    "no option line, unit set": (
        one_port(1, 30), {"frequency_unit": "MHz"}, "no-option-line", WARN, None,
        ["read in MHz as set", "S, MA, 50 ohm"]),
    "unit missing": (
        "# S MA R 50\n" + one_port(1, 2), {}, "unit-missing", WARN, 1,
        ["names no unit", "1 to 2 GHz", "# MHz S MA R 50"]),
    "unit missing, sweep too high": (
        "# S MA R 50\n" + one_port(11, 30), {"bands": [BAND]}, "unit-missing", REJECT, 1,
        ["names no unit", "11 to 30 GHz", "no band lies above 10 GHz"]),
    "unit missing, bands as high": (
        "# S MA R 50\n" + one_port(10.1, 11), {"bands": [GHZ_BAND]}, "unit-missing", WARN, 1,
        ["10.1 to 11 GHz"]),
    "unit missing but set": (
        "# S MA R 50\n" + one_port(11, 30), {"frequency_unit": "MHz", "bands": [BAND]},
        "unit-missing", WARN, 1, ["read in MHz as set"]),
    "unit contradicts the setting": (
        "# GHz S MA R 50\n" + one_port(1, 30), {"frequency_unit": "MHz"}, "unit-overridden", WARN,
        1, ["says GHz", "MHz", "take the setting out"]),
    "unit too large by 1000": (
        "# GHz S MA R 50\n" + one_port(3, 30), {"bands": [BAND]}, "unit-implausible", WARN, 1,
        ["3 to 30 GHz", "touches no band", "is the unit MHz instead of GHz?"]),
    "unit too small by 1000": (
        "# kHz S MA R 50\n" + one_port(3, 30), {"bands": [BAND]}, "unit-implausible", WARN, 1,
        ["is the unit MHz instead of kHz?"]),
    "unit too large by a million": (
        OPTION + one_port(3_000_000, 30_000_000), {"bands": [BAND]}, "unit-implausible", WARN, 1,
        ["is the unit Hz instead of MHz?"]),
    "unknown token": (
        "# THz S MA R 50\n" + one_port(1), {}, "option-unknown", REJECT, 1,
        ['unknown token "THz"', "Hz, kHz, MHz, GHz"]),
    "SY is no parameter": (
        "# MHz SY MA R 50\n" + one_port(1), {}, "option-unknown", REJECT, 1, ['"SY"']),
    "unit given twice": (
        "# MHz GHz S MA R 50\n" + one_port(1), {}, "option-twice", REJECT, 1,
        ['"GHz" gives the frequency unit a second time']),
    "second option line differs": (
        OPTION + "# GHz S RI R 50\n" + one_port(1), {}, "second-option-line", REJECT, 2,
        ["# GHz S RI R 50", "differs from the first (line 1)"]),
    "option line after data": (
        one_port(1) + OPTION, {}, "option-line-late", REJECT, 2, ["line 1", "before all data"]),
    "R 0": ("# MHz S RI R 0\n" + one_port(1), {}, "reference-value", REJECT, 1, ['"0"', "above 0"]),
    "R negative": ("# MHz S RI R -50\n" + one_port(1), {}, "reference-value", REJECT, 1, ['"-50"']),
    "R complex": (
        "# MHz S RI R 50+j5\n" + one_port(1), {}, "reference-value", REJECT, 1, ["real number"]),
    "R not finite": (
        "# MHz S RI R inf\n" + one_port(1), {}, "reference-value", REJECT, 1, ['"inf"']),
    "R without a number": (
        "# MHz S RI R\n" + one_port(1), {}, "reference-missing", REJECT, 1, ["behind R"]),
    "R glued": (
        "# MHz S RI R75\n" + one_port(1), {}, "reference-glued", WARN, 1, ['"R75"', "75 ohm"]),
    "more references than ports": (
        "# MHz S RI R 50 75\n" + one_port(1), {}, "reference-count", REJECT, 1,
        ["2 references (50/75 ohm) for 1 port"]),
    "R 75": ("# MHz S RI R 75\n" + one_port(1), {}, "reference", NOTE, 1, ["75 ohm", "50 ohm"]),
    "reference of each port": (
        "# MHz S RI R 50 200\n" + two_port(1), {"file": "a.s2p"}, "reference", NOTE, 1,
        ["50/200 ohm"]),
    "reference in a comment": (
        OPTION + "! Port Impedance 7\n" + one_port(1), {}, "impedance-in-comment", WARN, 2,
        ["port impedance of 7 ohm, ignored", "50 ohm", "behind R"]),
    "same reference in a comment": (
        OPTION + "! Port Impedance 50\n" + one_port(1), {}, "impedance-in-comment", NOTE, 2,
        ["50 ohm"]),
    "Z parameters": (
        "# MHz Z RI R 50\n" + one_port(1), {}, "z-parameters", WARN, 1,
        ["normalised to R (50 ohm)", "check"]),
    "Z parameters, two references": (
        "# MHz Z RI R 50 75\n" + two_port(1), {"file": "a.s2p"}, "reference-count", REJECT, 1,
        ["Z data", "50/75 ohm"]),
    **{
        f"{letter} parameters": (
            f"# MHz {letter} RI R 50\n" + one_port(1), {}, "parameter-unsupported", REJECT, 1,
            [f"{letter} parameters", "only S (and Z) are supported"])
        for letter in "YGH"
    },
    # --- encoding and kind of file
    "UTF-16": (
        codecs.BOM_UTF16_LE + (OPTION + one_port(1)).encode("utf-16-le"), {}, "wide-encoding",
        WARN, None, ["UTF-16", "ASCII"]),
    "UTF-16 without a mark": (
        (OPTION + one_port(1)).encode("utf-16-le"), {}, "binary-data", REJECT, 1, ["NUL byte"]),
    "Ctrl-Z at the end": (
        OPTION + one_port(1) + "\x1a", {}, "control-at-end", WARN, 3, ["Ctrl-Z", "removed"]),
    "NUL at the end": (
        OPTION + one_port(1) + "\0\0", {}, "control-at-end", WARN, 3, ["NUL", "removed"]),
    "empty": (b"", {}, "empty-file", REJECT, None, ["empty (0 bytes)"]),
    "option line only": (OPTION, {}, "no-data", REJECT, None, ["no data rows"]),
    "comments only": ("! a\n! b\n", {}, "no-data", REJECT, None, ["no data rows"]),
    "gzip": (GZIP, {}, "gzip-data", REJECT, None, ["gzip data", "unpack"]),
    "HTML page": (
        "<!DOCTYPE html>\n<html>", {}, "html-page", REJECT, None,
        ["HTML page", "failed download"]),
    "CSV heading": (
        "frequency,re,im\n1,0.1,0.2\n", {}, "csv-table", REJECT, 1, ["CSV table"]),
    "size limit": (
        OPTION + one_port(1), {"max_bytes": 20}, "too-large", REJECT, None, ["at most 20"]),
    "point limit": (
        OPTION + one_port(1, 2, 3), {"max_points": 2}, "too-many-points", REJECT, None,
        ["3 points", "at most 2"]),
    "line limit": (
        "!\n" * 1100, {"max_points": 2}, "too-many-lines", REJECT, None, ["1100 lines"]),
    "keyword of version 2": (
        OPTION + "[Reference] 50\n" + one_port(1), {}, "version-missing", REJECT, 2,
        ["[Reference] 50", "[Version] 2.0 or 2.1 as the first line"]),
    # --- numbers
    "decimal comma": (
        OPTION + "1,0 0,1 0,2\n", {}, "decimal-comma", REJECT, 2,
        ['decimal comma in "1,0"', 'decimal = ","']),
    "decimal comma, set": (
        OPTION + "1,0;0,1;0,2\n", {"decimal": ","}, "decimal-comma-read", WARN, 2, ["1,0;0,1;0,2"]),
    "decimal comma set, point found": (
        OPTION + "1.0 0.1 0.2\n", {"decimal": ","}, "decimal-mismatch", REJECT, 2, ['"1.0"']),
    "1,000 is never guessed": (
        OPTION + "1,000 0.1 0.2\n", {}, "decimal-comma", REJECT, 2, ['"1,000"']),
    "comma separated": (
        OPTION + "1.0,0.1,0.2\n", {}, "separator", REJECT, 2, ["commas or semicolons", "CSV"]),
    "semicolon separated": (
        OPTION + "1.0;0.1;0.2\n", {}, "separator", REJECT, 2, ["commas or semicolons", "CSV"]),
    "exponent D": (
        OPTION + "1D0 0.1 0.2\n", {}, "d-exponent", WARN, 2, ['"1D0"', "read as E"]),
    "underscore": (OPTION + "1_000 0.1 0.2\n", {}, "not-a-number", REJECT, 2, ['"1_000"']),
    "words only": ("Hello\nworld\n", {}, "no-numbers", REJECT, 1, ['"Hello"', "sweep file"]),
    "Arabic digits": (
        OPTION + "1 0.1 \u0662\n", {}, "not-a-number", REJECT, 2, ["\u0662", "U+0662"]),
    "Unicode minus": (
        OPTION + "1 0.1 \u22120.2\n", {}, "not-a-number", REJECT, 2, ["U+2212", "not a number"]),
    "bidirectional mark": (
        OPTION + "1 0.1 0.2\u202e\n", {}, "not-a-number", REJECT, 2, ["\\u202e"]),
    "too many not finite": (
        OPTION + one_port(1, 2) + "3 nan 0\n", {}, "not-finite", REJECT, 4,
        ["1 of 3 points not finite (line 4)", "at most 1 %"]),
    "few not finite": (
        OPTION + one_port(*range(1, 200)) + "200 1.#IND 0\n", {"bands": [BAND]}, "not-finite", WARN,
        201, ["1 of 200 points not finite (line 201), dropped"]),
    "not finite in a band": (
        OPTION + one_port(*range(8, 200)) + "7.1 1e400 0\n", {"bands": [BAND]}, "not-finite",
        REJECT, 194, ['inside the band "40 m"']),
    "frequency not finite": (
        OPTION + one_port(*range(8, 200)) + "nan 0.1 0\n", {"bands": [BAND]}, "not-finite",
        REJECT, 194, ["inside the band"]),
    "negative magnitude": (
        "# MHz S MA R 50\n" + one_port(1) + "2 -3 0\n", {}, "negative-magnitude", REJECT, 3,
        ["negative in 1 of 2 rows", "DB"]),
    "absurd magnitude": (
        OPTION + "1 1e200 0\n", {}, "absurd-magnitude", REJECT, 2, ["larger than 1000"]),
    # --- rows and columns
    "wrapped lines": (
        OPTION + "1 .1 0 .8 0\n.8 0 .1 0\n2 .1 0 .8 0\n.8 0 .1 0\n", {"file": "a.s2p"},
        "wrapped-lines", WARN, 2, ["spread over 2 lines", "one line only"]),
    "noise block": (
        OPTION + two_port(1, 2) + "1 .7 .64 69 .38\n2 2.7 .46 -33 .4\n", {"file": "a.s2p"},
        "noise-data", NOTE, 4, ["noise data ignored (2 lines"]),
    "five columns at the end above the sweep": (
        OPTION + two_port(1, 2) + "3 .7 .64 69 .38\n4 2.7 .46 -33 .4\n", {"file": "a.s2p"},
        "row-broken", REJECT, 4, ["5 of 9 numbers"]),
    "no number but in five columns": (
        OPTION + "1_0 2 3 4 5 6 7 8 9\n1 2 3 4 5\n", {"file": "a.s2p"}, "not-a-number", REJECT, 2,
        ['"1_0"']),
    ".s2p with one port": (
        OPTION + one_port(1), {"file": "a.s2p"}, "name-and-columns", REJECT, 2,
        [".s2p has 3 columns (one port)", "rename it to .s1p"]),
    ".s1p with two ports": (
        OPTION + two_port(1), {"file": "A.S1P"}, "name-and-columns", REJECT, 2,
        ["9 columns (two ports)", "rename it to .s2p"]),
    ".s3p": (OPTION + one_port(1), {"file": "a.s3p"}, "port-count", REJECT, None, ["3 ports"]),
    "five columns": (
        OPTION + "1 .1 0 .8 0\n2 .1 0 .8 0\n", {"file": "a.s2p"}, "five-columns", REJECT, 2,
        ["5 numbers", "S11 and S21", "expected 9"]),
    "other column count": (
        OPTION + "1 .1 0 .8\n", {}, "column-count", REJECT, 2, ["4 numbers", "3 (one port)"]),
    "last row cut": (
        OPTION + two_port(1, 2) + "3 0.1 0.2 0.8 0.3 0.8 0.3\n", {"file": "a.s2p"},
        "last-row-broken", WARN, 4, ["7 of 9 numbers; dropped"]),
    "row cut in the middle": (
        OPTION + two_port(1) + "2 0.1 0.2 0.8\n" + two_port(3), {"file": "a.s2p"}, "row-broken",
        REJECT, 3, ["4 of 9 numbers"]),
    "extra column": (
        OPTION + one_port(1) + "2 0.1 0.2 0.3\n" + one_port(3), {}, "row-broken", REJECT, 3,
        ["4 of 3 numbers"]),
    "footer": (OPTION + one_port(1) + "END\n", {}, "footer", WARN, 3, ['"END"', "left out"]),
    "text before the data": (
        OPTION + "Trace 1\n" + one_port(1), {}, "text-before-data", REJECT, 2, ['"Trace 1"']),
    "last number cut": (
        OPTION + one_port(*range(30), value="0.1000 0.2000") + "30 0.1000 0.2", {},
        "last-number-short", WARN, 32, ["shorter than those above", "cut off"]),
    "last number cut, file with oddities": (
        OPTION + one_port("1D0", *range(2, 30), value="0.1000 0.2000") + "30 0.1000 0.2", {},
        "last-number-short", WARN, 31, ["shorter than those above"]),
    # --- frequencies
    "descending": (OPTION + one_port(3, 2, 1), {}, "descending", WARN, 3, ["descend; sorted"]),
    "one out of place": (
        OPTION + one_port(99, *range(1, 40)), {}, "out-of-order", WARN, 3,
        ["1 of 40 frequencies out of place", "line 3", "sorted"]),
    "many out of place": (
        OPTION + one_port(1, 2, 3, 1.5, 2.5, 4), {}, "out-of-order", REJECT, 5,
        ["2 of 6 frequencies out of place", "expected ascending"]),
    "same point twice": (
        OPTION + one_port(1, 2, 2, 3), {}, "repeated-frequency", NOTE, 4,
        ["line 4", "same data", "left out"]),
    "seam": (
        OPTION + one_port(*range(1, 20)) + "19 0.12 0.20\n", {}, "repeated-frequency", WARN, 20,
        ["1 of 19", "differ by up to 0.02", "mean was taken"]),
    "many seams": (
        OPTION + one_port(1, 2) + "2 0.12 0.20\n", {}, "repeated-frequency", REJECT, 3,
        ["1 of 2", "at most 10 %"]),
    "wide seam": (
        OPTION + one_port(*range(1, 20)) + "19 0.5 0.20\n", {}, "repeated-frequency", REJECT, 20,
        ["differ by up to 0.4", "at most 0.1"]),
    "0 Hz": (OPTION + one_port(0, 1), {}, "zero-frequency", NOTE, 2, ["0 Hz", "left out"]),
    "0 Hz alone": (OPTION + one_port(0), {}, "no-data", REJECT, 2, ["above 0 Hz"]),
    "beyond every analyzer": (
        "# GHz S RI R 50\n" + one_port(1, 1e7), {}, "absurd-frequency", REJECT, 3,
        ["above 1000000 GHz", "line 3", "unit"]),
    "negative frequency": (
        OPTION + one_port(-1, 1), {}, "negative-frequency", REJECT, 2, ["below 0", "line 2"]),
    # --- one path
    "one path": (
        OPTION + two_port(1, 2, row=ONE_PATH_ROW), {"file": "a.s2p"}, "one-path", NOTE, None,
        ["S12/S22 are all zero", "not measured"]),
    "one path re 75 ohm": (
        "# MHz S RI R 75\n" + two_port(1, row=ONE_PATH_ROW), {"file": "a.s2p"},
        "one-path-reference", REJECT, 1, ["75 ohm", "one path", "all four"]),
    "path of port 2 only": (
        OPTION + "1 0 0 0 0 0.81 -0.3 0.1 0.2\n", {"file": "a.s2p"}, "ports-reversed", WARN, None,
        ["S21 is zero, S12 is not: ports reversed?", "reverse_ports = true"]),
    "ports of a one-port file reversed": (
        OPTION + one_port(1), {"reverse_ports": True}, "one-port-reversed", WARN, None,
        ["one port"]),
    "Z of -50 ohm": (
        "# MHz Z RI R 50\n1 -1 0\n", {}, "not-convertible", REJECT, 1, ["-50 ohm"]),
}  # fmt: skip


@pytest.mark.parametrize("case", ODD.values(), ids=ODD)
def test_oddity_is_told_with_line_and_remedy(case):
    content, settings, code, severity, line, words = case
    was_read, findings = verdict(content, **settings)
    found = [f for f in findings if f.code == code]
    assert len(found) == 1, findings
    assert (found[0].severity, found[0].line) == (severity, line)
    said = f"{found[0].message} | {found[0].remedy}"
    assert [word for word in words if word not in said] == [], said
    assert found[0].remedy
    assert found[0].file == settings.get("file", "a.s1p")
    assert was_read is (severity is not REJECT)
    assert was_read is (REJECT not in {f.severity for f in findings})


def test_all_mistakes_of_a_file_are_told_together():
    _, findings = verdict("# THz S RI R 0\n1 0.1 x\n", file="a.s2p")
    assert {f.code for f in findings} >= {"option-unknown", "reference-value", "not-a-number"}
