"""Readings taken off a screen: the reader, and halving as the only figure."""

from pathlib import Path

import numpy as np
import pytest

from reportgen.errors import InputRejected
from reportgen.intake.builds import open_runs, read_build
from reportgen.intake.spot_readings import parse_spot_readings
from reportgen.model import MeasuredBand, Method, NotMeasured
from reportgen.physics.measure import measure_build

BUILD = """
schema = 1
name = "Read off"
[winding]
low_turns = 2
high_turns = 14
[[sweep]]
file = "screen.csv"
setup = "spot"
units = ["A", "B"]
"""
READINGS = b"frequency_mhz,through_loss_db\n7.1,1.2\n7.15,1.4\n14.2,1.0\n"


def test_readings_become_half_of_a_through_loss(tmp_path: Path) -> None:
    (tmp_path / "x").mkdir()
    (tmp_path / "x/build.toml").write_text(BUILD)
    (tmp_path / "x/screen.csv").write_bytes(READINGS)
    runs = open_runs(tmp_path)
    build = read_build(runs, runs.folders[0])
    assert build.findings == ()
    result = measure_build(build, runs.bench, runs.bands)
    assert result.chosen.method is Method.HALVING
    bands = {band.band.name: band for band in result.chosen.bands}
    forty = bands["40 m"]
    assert isinstance(forty, MeasuredBand)
    mean = -10 * np.log10((10**-0.06 + 10**-0.07) / 2)
    assert forty.figures["halved_pair_db"].mean == pytest.approx(mean)
    assert forty.figures["halved_pair_db"].worst == pytest.approx(0.7)
    assert forty.figures["halved_pair_db"].low95 is None
    assert forty.reason == "2 readings"
    assert isinstance(bands["30 m"], NotMeasured)
    assert bands["30 m"].reason == "no reading inside"
    assert set(forty.figures) == {"halved_pair_db"}


@pytest.mark.parametrize(
    ("data", "code", "line"),
    [
        (b"f,loss\n7,1\n", "spot-header", 1),
        (b"frequency_mhz,through_loss_db\n", "no-data", None),
        (b"frequency_mhz,through_loss_db\n7.1;1\n", "spot-line", 2),
        (b"frequency_mhz,through_loss_db\n7.1,1,2\n", "spot-line", 2),
        (b"frequency_mhz,through_loss_db\n7.1,nan\n", "spot-value", 2),
        (b"frequency_mhz,through_loss_db\n7.1,1\n7.1,2\n", "spot-value", 3),
        (b"frequency_mhz,through_loss_db\n-7.1,1\n", "spot-value", 2),
        (b"frequency_mhz,through_loss_db\n1e-12,1\n", "spot-value", 2),
        (b"frequency_mhz,through_loss_db\n1e10,1\n", "spot-value", 2),
        (b"", "empty-file", None),
    ],
)
def test_what_is_no_list_of_readings_is_rejected(data: bytes, code: str, line: int | None) -> None:
    with pytest.raises(InputRejected) as caught:
        parse_spot_readings(data, file="screen.csv")
    assert [(one.code, one.line) for one in caught.value.findings] == [(code, line)]
