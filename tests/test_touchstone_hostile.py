"""Files that are no sweeps, and files made to do harm."""

import pickle
import zipfile
from io import BytesIO
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from sweep_files import verdict

from reportgen.errors import InputRejected
from reportgen.intake.touchstone import parse_touchstone
from reportgen.physics.allocations import amateur_bands


def test_zip_is_named():
    packed = BytesIO()
    with zipfile.ZipFile(packed, "w") as archive:
        archive.writestr("a.s1p", "x")
    was_read, findings = verdict(packed.getvalue())
    assert not was_read
    assert [f.code for f in findings] == ["zip-archive"]


class _Canary:
    def __init__(self, path: Path) -> None:
        self.path = path

    def __reduce__(self):
        return Path.touch, (self.path,)


@pytest.mark.parametrize("protocol", range(pickle.HIGHEST_PROTOCOL + 1))
def test_pickle_is_refused_and_never_run(tmp_path, protocol):
    canary = tmp_path / "canary"
    data = pickle.dumps(_Canary(canary), protocol=protocol)
    was_read, _ = verdict(data, file="a.s2p")
    assert not was_read
    assert not canary.exists()
    pickle.loads(data)
    assert canary.exists()  # the bait was a real one


@settings(deadline=None)
@given(st.binary(max_size=300))
def test_arbitrary_bytes_are_read_or_rejected(data):
    verdict(data, file="a.s2p")


_SNIPPETS = st.sampled_from(
    ["# MHz S RI R 50", "#", "# Z R 75 50", "!", "1", "2 ", "0.5 -0.5", "1e308 1e308", "-1e308",
     "nan", "inf", "1 .1 .2", "1 1 0 0 0 0 0 1 0", "1 2 3 4 5", "\n", "\r\n", "\x1a", ",", ";",
     "R75", "[End]", "1D5", "1e-320", "<", "\0", "END"]
)  # fmt: skip


@settings(deadline=None)  # the first file with another reference imports scikit-rf
@given(
    st.lists(_SNIPPETS, max_size=30),
    st.sampled_from(["\n", " ", ""]),
    st.sampled_from([None, "Hz", "GHz"]),
    st.sampled_from([None, ","]),
    st.booleans(),
)
def test_near_sweeps_are_read_or_rejected(snippets, joint, unit, decimal, turned):
    data = joint.join(snippets).encode()
    try:
        sweep, _ = parse_touchstone(
            data, file="x.ts", frequency_unit=unit, decimal=decimal, reverse_ports=turned,
            bands=amateur_bands(1),
        )  # fmt: skip
    except InputRejected:
        return
    assert np.isfinite(sweep.s).all()
    assert (sweep.frequency_hz > 0).all()
    assert (np.diff(sweep.frequency_hz) > 0).all()
