"""The amateur bands of the three ITU regions, as data.

National limits differ from these; a workshop names its own bands in `runs.toml`.

References
----------
.. [1] ITU Radio Regulations, Article 5, table of frequency allocations.
.. [2] WRC-15 (60 m, 5351.5 to 5366.5 kHz) and WRC-19 (6 m, Region 1: 50 to 52 MHz).
"""

from __future__ import annotations

from reportgen.model import Band, OwnBand

_EVERYWHERE_KHZ = {
    "60 m": (5351.5, 5366.5),
    "30 m": (10100.0, 10150.0),
    "20 m": (14000.0, 14350.0),
    "17 m": (18068.0, 18168.0),
    "15 m": (21000.0, 21450.0),
    "12 m": (24890.0, 24990.0),
    "10 m": (28000.0, 29700.0),
}

_BY_REGION_KHZ = {
    1: {
        "160 m": (1810.0, 1850.0),
        "80 m": (3500.0, 3800.0),
        "40 m": (7000.0, 7200.0),
        "6 m": (50000.0, 52000.0),
    },
    2: {
        "160 m": (1800.0, 2000.0),
        "80 m": (3500.0, 4000.0),
        "40 m": (7000.0, 7300.0),
        "6 m": (50000.0, 54000.0),
    },
    3: {
        "160 m": (1800.0, 2000.0),
        "80 m": (3500.0, 3900.0),
        "40 m": (7000.0, 7200.0),
        "6 m": (50000.0, 54000.0),
    },
}


def amateur_bands(region: int) -> tuple[Band, ...]:
    """Amateur bands from 160 m to 6 m in one ITU region, by frequency.

    Parameters
    ----------
    region : 1, 2 or 3
        ITU region.

    Notes
    -----
    Region 1 gives 1810 to 1850 kHz on 160 m; footnote 5.96 lets countries go on to 2000 kHz.
    """
    edges_khz = _EVERYWHERE_KHZ | _BY_REGION_KHZ[region]
    bands = [
        Band(name=name, from_hz=low * 1e3, to_hz=high * 1e3)
        for name, (low, high) in edges_khz.items()
    ]
    return tuple(sorted(bands, key=lambda band: band.from_hz))


def known_bands(region: int, own: tuple[OwnBand, ...] = ()) -> tuple[Band, ...]:
    """Amateur bands of the region and the workshop's own, by frequency."""
    added = [
        Band(
            name=band.name,
            from_hz=round(band.from_mhz * 1e6, 3),
            to_hz=round(band.to_mhz * 1e6, 3),
        )
        for band in own
    ]
    return tuple(
        sorted([*amateur_bands(region), *added], key=lambda band: (band.from_hz, band.to_hz))
    )
