"""Edges of the amateur bands in the three ITU regions, in kilohertz.

Sources: ITU Radio Regulations, Article 5, as carried by 47 CFR 97.301 (columns for each region;
texts of the 1990s, 2009 and 2021) and the table of IARU Region 1, both read; 60 m: WRC-15, two
secondary texts; 6 m: WRC-19, releases of IARU and RSGB of 21 November 2019, read. 12 m and 10 m
were read for the United States only.
"""

import pytest

from reportgen.physics.allocations import amateur_bands

EDGES_KHZ = {
    "160 m": ((1810, 1850), (1800, 2000), (1800, 2000)),
    "80 m": ((3500, 3800), (3500, 4000), (3500, 3900)),
    "60 m": ((5351.5, 5366.5),) * 3,
    "40 m": ((7000, 7200), (7000, 7300), (7000, 7200)),
    "30 m": ((10100, 10150),) * 3,
    "20 m": ((14000, 14350),) * 3,
    "17 m": ((18068, 18168),) * 3,
    "15 m": ((21000, 21450),) * 3,
    "12 m": ((24890, 24990),) * 3,
    "10 m": ((28000, 29700),) * 3,
    "6 m": ((50000, 52000), (50000, 54000), (50000, 54000)),
}


@pytest.mark.parametrize("region", [1, 2, 3])
def test_bands_of_a_region(region):
    found = {band.name: (band.from_hz / 1e3, band.to_hz / 1e3) for band in amateur_bands(region)}
    assert found == {name: edges[region - 1] for name, edges in EDGES_KHZ.items()}
    assert list(found) == list(EDGES_KHZ)


def test_sixty_metres_is_fifteen_kilohertz_wide():
    """So narrow that a coarse sweep may have no point in it."""
    (band,) = (band for band in amateur_bands(1) if band.name == "60 m")
    assert band.to_hz - band.from_hz == 15e3
