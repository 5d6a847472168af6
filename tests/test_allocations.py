"""Bands as data; their edges are checked in published/test_amateur_allocations.py."""

import itertools

import pytest

from reportgen.model import Band, OwnBand
from reportgen.physics.allocations import amateur_bands, known_bands


@pytest.mark.parametrize("region", [1, 2, 3])
def test_bands_ascend_and_do_not_overlap(region):
    bands = amateur_bands(region)
    assert all(band.from_hz < band.to_hz for band in bands)
    assert all(one.to_hz < other.from_hz for one, other in itertools.pairwise(bands))


def test_own_bands_stand_among_the_others_by_frequency():
    own = (
        OwnBand(name="Coast station", from_mhz=4.063, to_mhz=4.438),
        OwnBand(name="Beacon", from_mhz=0.5, to_mhz=0.51),
    )
    names = [band.name for band in known_bands(1, own)]
    assert names[:4] == ["Beacon", "160 m", "80 m", "Coast station"]
    assert len(names) == len(amateur_bands(1)) + 2


def test_own_band_in_hertz_has_no_rounding_dust():
    """4.063 times a million is 4062999.9999999995 in binary arithmetic."""
    (band,) = set(known_bands(1, (OwnBand(name="x", from_mhz=4.063, to_mhz=4.438),))) - set(
        amateur_bands(1)
    )
    assert (band.from_hz, band.to_hz) == (4063000.0, 4438000.0)


def test_centre_is_the_middle():
    assert Band(name="x", from_hz=7.0e6, to_hz=7.3e6).centre_hz == 7.15e6
