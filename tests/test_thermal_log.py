"""The reader of temperature logs: what it takes, and the sentence for what it does not."""

import numpy as np
import pytest

from reportgen.errors import InputRejected
from reportgen.intake.thermal_log import MAX_ROWS, parse_thermal_log

HEADING = b"time_s,core_c,ambient_c\n"


def codes(data: bytes) -> list[tuple[str, int | None]]:
    with pytest.raises(InputRejected) as caught:
        parse_thermal_log(data, file="warmup.csv")
    return [(finding.code, finding.line) for finding in caught.value.findings]


def test_columns_by_name() -> None:
    data = b"\xef\xbb\xbfnote, Ambient_C ,time_s,core_c\r\non,21.5,0,22\r\n\r\n,21.6,1e1,-.5\r\n"
    log, findings = parse_thermal_log(data, file="warmup.csv")
    assert findings == () or [one.code for one in findings] == ["log-swapped"]
    np.testing.assert_array_equal(log.time_s, [0, 10])
    np.testing.assert_array_equal(log.core_c, [22, -0.5])
    np.testing.assert_array_equal(log.ambient_c, [21.5, 21.6])
    assert len(log.sha256) == 64
    assert log.span_s == 10
    with pytest.raises(ValueError, match="read-only"):
        log.core_c[0] = 1


@pytest.mark.parametrize(
    ("data", "code", "line"),
    [
        (b"", "empty-file", None),
        (HEADING, "no-data", None),
        (b"0,20,20\n1,21,20\n", "log-header", 1),
        (b"time_s;core_c;ambient_c\n0;20;20\n", "log-header", 1),
        (b"time_s,core_c\n0,20\n", "log-header", 1),
        (b"time_s,core_c,core_c,ambient_c\n0,20,20,20\n", "log-header", 1),
        (b"time_min,core_c,ambient_c\n0,20,20\n", "log-header", 1),
        (HEADING + b"0,20,20\n1,2_0,20\n", "log-line", 3),
        (HEADING + b"0,20,20\n1,nan,20\n", "log-line", 3),
        (HEADING + b"0,20,20\n1,1e400,20\n", "log-line", 3),
        (HEADING + b"0,20,5,20,5\n", "log-line", 2),
        (HEADING + "0,20,2\u0660\n".encode(), "log-line", 2),
        (HEADING + b"0,20,20\n5,20,20\n4,20,20\n", "log-clock", 4),
        (HEADING + b"0,20,20\n1,900,20\n", "log-temperature", 3),
        (HEADING + b"0,295,293\n1,296,293\n", "log-unit", None),
        (HEADING + b"0,72,71\n1,80,71\n", "log-unit", None),
        (b"\x1f\x8b\x08", "gzip-data", None),
    ],
)
def test_rejected(data: bytes, code: str, line: int | None) -> None:
    assert codes(data) == [(code, line)]


def test_decimal_comma_is_named_by_its_lines() -> None:
    with pytest.raises(InputRejected) as caught:
        parse_thermal_log(HEADING + b"0,20,5,20,5\n1,21,0,20,5\n", file="warmup.csv")
    (finding,) = caught.value.findings
    assert finding.message == (
        'found "0,20,5,20,5", expected 3 columns, numbers with decimal points in ours: '
        "lines 2 and 3"
    )
    assert finding.file == "warmup.csv"


def test_exchanged_columns_are_a_warning() -> None:
    _, findings = parse_thermal_log(HEADING + b"0,20,25\n1,21,40\n", file="warmup.csv")
    assert [finding.code for finding in findings] == ["log-swapped"]


def test_repeated_times_are_taken() -> None:
    log, findings = parse_thermal_log(HEADING + b"0,20,20\n0,20,20\n1,21,20\n", file="warmup.csv")
    assert findings == ()
    assert len(log.time_s) == 3


def test_longest_log() -> None:
    rows = b"".join(b"%d,21,20\n" % at for at in range(MAX_ROWS))
    log, _ = parse_thermal_log(HEADING + rows, file="warmup.csv")
    assert len(log.time_s) == MAX_ROWS
    assert codes(HEADING + rows + b"100000,21,20\n") == [("log-too-long", None)]


def test_comments_above_the_heading_are_passed_over_and_lines_still_count() -> None:
    text = "# bench 2\n# core taped\ntime_s,core_c,ambient_c\n0,20,20\n10,oops,20\n"
    with pytest.raises(InputRejected) as rejected:
        parse_thermal_log(text.encode(), file="warmup.csv")
    (finding,) = rejected.value.findings
    assert (finding.code, finding.line) == ("log-line", 5)
