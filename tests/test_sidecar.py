"""The two sidecars: the written-out examples are taken, every mistake is told with the others."""

from __future__ import annotations

from datetime import date
from pathlib import Path

import pytest
from hypothesis import example, given, settings
from hypothesis import strategies as st

from reportgen.errors import InputRejected
from reportgen.intake.sidecar import completed_entry, parse_bench, parse_build
from reportgen.intake.sidecar_text import MAX_BYTES
from reportgen.model import BenchSheet, BuildSheet, Finding, Setup, SweepEntry

ACCEPTED = Path(__file__).parent / "accepted_sidecars"
RUNS_TOML = (ACCEPTED / "runs.toml").read_text("utf-8")
BUILD_TOML = (ACCEPTED / "build.toml").read_text("utf-8")

HEAD = """\
name = "Alder"
winding = { low_turns = 3, high_turns = 24 }
"""

LOAD_SWEEP = """\
[[sweep]]
file = "a-load.s1p"
setup = "load"
"""


def bench(text: str) -> BenchSheet:
    return parse_bench(text.encode(), file="runs.toml")


def build(text: str, of: BenchSheet | None = None) -> BuildSheet:
    return parse_build(text.encode(), file="build.toml", bench=of or BenchSheet())


def rejection(text: str, of: BenchSheet | None = None) -> list[Finding]:
    with pytest.raises(InputRejected) as caught:
        build(text, of)
    return list(caught.value.findings)


def told(text: str, of: BenchSheet | None = None) -> list[tuple[str | None, str]]:
    """Key path and remedy of each problem."""
    return [(finding.key, finding.remedy) for finding in rejection(text, of)]


# --- what is accepted ----------------------------------------------------------------------------


def test_example_of_runs_toml_is_taken_whole() -> None:
    sheet = bench(RUNS_TOML)
    assert sheet.bands == ("80 m", "40 m")
    assert sheet.limits["40 m"].efficiency_percent == 85
    assert sheet.limits["all"].swr == 2.0
    assert sheet.own_band[0].to_mhz == 4.438
    assert sheet.duty == {"voice, processed": 50}
    assert sheet.calibrations["evening"].performed_on == date(2026, 10, 4)
    assert sheet.loads["main"].stray_pf == "fit"


def test_example_of_build_toml_is_taken_whole() -> None:
    sheet = build(BUILD_TOML, bench(RUNS_TOML))
    assert sheet.winding.turns_ratio == 8
    assert sheet.nominal_load_ohm == 3200
    assert sheet.core is not None
    assert sheet.core.flux_limit_mt == 20
    assert [entry.setup for entry in sheet.sweep] == [Setup.BACK_TO_BACK, Setup.LOAD]
    assert sheet.sweep[0].pair == ("A", "B")
    assert sheet.thermal[0].frequency_mhz == 7.1
    assert sheet.part[0].quantity == 1
    assert sheet.record == {"operator": "bench 2"}


def test_empty_runs_toml_gives_the_defaults() -> None:
    assert bench("") == BenchSheet()


def test_byte_order_mark_and_carriage_returns_are_taken() -> None:
    data = b"\xef\xbb\xbf" + HEAD.replace("\n", "\r\n").encode()
    assert parse_build(data, file="build.toml", bench=BenchSheet()).name == "Alder"


def test_load_of_the_build_stands_beside_those_of_the_bench() -> None:
    own = "[loads.own]\nresistance_ohm = 2450\n"
    sheet = build(HEAD + LOAD_SWEEP + 'load = "own"\n' + own, bench(RUNS_TOML))
    assert sheet.loads["own"].resistance_ohm == 2450


# --- what an entry may leave out -----------------------------------------------------------------


def test_only_load_and_only_calibration_and_first_unit_are_filled_in() -> None:
    common = bench(RUNS_TOML)
    sheet = build(HEAD + LOAD_SWEEP, common)
    entry = completed_entry(sheet.sweep[0], sheet, common)
    assert (entry.load, entry.calibration, entry.unit) == ("main", "evening", "A")


def test_pair_is_of_a_and_b_and_has_no_load() -> None:
    common = bench(RUNS_TOML)
    pair = SweepEntry(file="p.s2p", setup=Setup.BACK_TO_BACK)
    entry = completed_entry(pair, build(HEAD), common)
    assert (entry.units, entry.unit, entry.load) == (("A", "B"), None, None)


@pytest.mark.parametrize("setup", ["load", "series-resistor", "load-check", "resistor-check"])
def test_setups_with_a_resistor_need_a_load(setup: str) -> None:
    text = HEAD + LOAD_SWEEP.replace('"load"', f'"{setup}"')
    assert [finding.key for finding in rejection(text)] == ["sweep[1].load"]


@pytest.mark.parametrize("setup", ["open", "short", "direct", "thru-check", "antenna", "spot"])
def test_other_setups_need_none(setup: str) -> None:
    assert build(HEAD + LOAD_SWEEP.replace('"load"', f'"{setup}"')).sweep[0].load is None


def test_spot_readings_need_no_calibration() -> None:
    two = bench("[calibrations.morning]\n[calibrations.evening]\n")
    assert build(HEAD + LOAD_SWEEP.replace('"load"', '"spot"'), two)
    keys = [key for key, _ in told(HEAD + LOAD_SWEEP.replace('"load"', '"open"'), two)]
    assert keys == ["sweep[1].calibration"]


# --- mistakes ------------------------------------------------------------------------------------


def test_mistakes_of_shape_and_of_sense_are_told_together_in_the_order_of_the_file() -> None:
    text = """\
name = "Alder"
sumary = "x"
[winding]
low_turns = "3"
high_turns = 24
[core]
outer_mm = 23
inner_mm = 36
height_mm = 15
[[sweep]]
file = "../a.s1p"
setup = "open"
[[sweep]]
file = "a.s1p"
setup = "lode"
"""
    found = [(finding.line, finding.key, finding.code) for finding in rejection(text)]
    assert found == [
        (2, "sumary", "unknown-key"),
        (4, "winding.low_turns", "wrong-value"),
        (8, "core.inner_mm", "wrong-order"),
        (11, "sweep[1].file", "unsafe-file-name"),
        (15, "sweep[2].setup", "wrong-value"),
    ]


@pytest.mark.parametrize(
    ("line", "key", "remedy"),
    [
        ("measured = 2026-10-04", "measured", "did you mean `measured_on`?"),
        (
            "measured_on = 2026-10-04T20:00:00",
            "measured_on",
            "write year-month-day, without quotes and without a time",
        ),
        (
            'measured_on = "2026-10-04"',
            "measured_on",
            "write year-month-day, without quotes and without a time",
        ),
        ("core = 3", "core", "write the heading [core] and the keys on lines below it"),
        (
            "sweep = { file = 'a' }",
            "sweep",
            "write the heading [[sweep]], in double brackets, once for each entry",
        ),
        ("record = { a = inf }", "record.a", "correct the value"),
        ("match = { load_ohm = -1 }", "match.load_ohm", "correct the value"),
        ("low_turns = 3", "low_turns", "move it into the table [winding]"),
        ("schema = true", "schema", "correct the value"),
    ],
)
def test_remedy_fits_the_mistake(line: str, key: str, remedy: str) -> None:
    assert told(f"{HEAD}{line}\n") == [(key, remedy)]


def test_reference_to_an_undefined_calibration_says_where_to_define_it() -> None:
    text = HEAD + LOAD_SWEEP.replace('"load"', '"open"') + 'calibration = "evening"\n'
    remedy = "define it in runs.toml, under [calibrations.evening]"
    assert told(text) == [("sweep[1].calibration", remedy)]


def test_wrong_kind_of_a_choice_that_may_be_left_out_is_told() -> None:
    text = HEAD + LOAD_SWEEP.replace('"load"', '"open"') + "frequency_unit = 3\n"
    assert told(text) == [("sweep[1].frequency_unit", "choose one of these")]


def test_line_is_not_told_when_it_is_unsure() -> None:
    text = HEAD + 'notes = """\n[core]\n"""\nsumary = "x"\n'
    assert [finding.line for finding in rejection(text)] == [None]


def test_region_decides_which_band_names_are_taken() -> None:
    own = '[[own_band]]\nname = "11 m"\nfrom_mhz = 26.965\nto_mhz = 27.405\n'
    assert bench(f'bands = ["11 m"]\nregion = 3\n{own}').own_band[0].name == "11 m"
    with pytest.raises(InputRejected) as caught:
        bench(own.replace("11 m", "all"))
    assert [finding.code for finding in caught.value.findings] == ["name-taken"]


@pytest.mark.parametrize(
    ("data", "code"),
    [
        (b"x" * (MAX_BYTES + 1), "too-large"),
        (b"a = " + b"[" * 5000 + b"]" * 5000, "toml-nesting"),
        (b"a." * 2000 + b"b = 1", "toml-nesting"),
        (b"a = " + b"9" * 5000, "toml-syntax"),
        ("name = 'x'".encode("utf-16"), "not-utf8"),
        (b"\x00", "toml-syntax"),
        (b"\x80\x04\x95", "not-utf8"),
    ],
)
def test_hostile_files_are_rejected_with_a_reason(data: bytes, code: str) -> None:
    with pytest.raises(InputRejected) as caught:
        parse_build(data, file="build.toml", bench=BenchSheet())
    assert [finding.code for finding in caught.value.findings] == [code]


# --- whatever the bytes --------------------------------------------------------------------------

unhurried = settings(deadline=None)  # the first parse of a process prepares the validation
_LINES = st.sampled_from([*BUILD_TOML.splitlines(), *RUNS_TOML.splitlines()])


def only_a_rejection(data: bytes) -> None:
    for parse in (
        lambda: parse_build(data, file="build.toml", bench=BenchSheet()),
        lambda: parse_bench(data, file="runs.toml"),
    ):
        findings: tuple[Finding, ...] | None = None
        try:
            parse()
        except InputRejected as rejected:
            findings = rejected.findings
        assert findings is None or all(each.message and each.remedy for each in findings)
        assert findings != ()


@unhurried
@given(st.binary(max_size=400))
@example(b"[[sweep]]\n[[sweep]]\nfile=1\n")
@example(b"sweep=[1,[2],{file='a'}]\nloads=3\ncore=[]\nbands=1\nlimits=[]\nregion='x'")
@example(b"region=[1]\nown_band=[[]]\nbands=[[]]")
def test_arbitrary_bytes_raise_only_a_rejection(data: bytes) -> None:
    only_a_rejection(data)


@unhurried
@given(st.lists(_LINES, max_size=25))
def test_shuffled_lines_of_the_examples_raise_only_a_rejection(lines: list[str]) -> None:
    only_a_rejection("\n".join(lines).encode())


_KEYS = ["name", "winding", "sweep", "core", "loads", "bands", "own_band", "match", "region"]
_VALUES = ["1", "1.5", "'x'", "[]", "[1]", "{}", "[{}]", "true", "1979-05-27", "{a={}}"]


@unhurried
@given(st.dictionaries(st.sampled_from(_KEYS), st.sampled_from(_VALUES)))
def test_known_keys_with_values_of_any_kind_raise_only_a_rejection(tree: dict[str, str]) -> None:
    only_a_rejection("\n".join(f"{key} = {value}" for key, value in tree.items()).encode())
