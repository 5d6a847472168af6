"""The text of a starter `runs.toml`: everything in it is optional, so everything is out of use."""

from __future__ import annotations

from collections.abc import Iterator

from reportgen.model import BenchSheet, Calibration, Limits, Load, OwnBand, Sheet
from reportgen.sidecars.optional_tables import optional_keys, optional_table
from reportgen.sidecars.toml_text import comment, entry

_HEAD = (
    "A starter: what is common to the bench. Nothing in it has to be said. A line that begins with "
    "# and no blank is out of use: take the # away to use it."
)
_PLAIN_KEYS = (
    "title", "publisher", "baseline", "region", "bands", "power_w", "paper", "locale",
)  # fmt: skip
_TABLES: tuple[tuple[str, type[Sheet], str], ...] = (
    ("[loads.main]", Load, "each resistor that is used, by a name of your own"),
    (
        "[calibrations.evening]",
        Calibration,
        "each calibration, by a name of your own; sweeps of one calibration share what it leaves",
    ),
    ("[limits.all]", Limits, 'acceptance limits for all bands; [limits."40 m"] for one'),
    ("[[own_band]]", OwnBand, "bands of other services, a table for each"),
)


def bench_starter() -> str:
    """`runs.toml` with every key that there is."""
    return "\n".join(["\n".join(_lines()), ""])


def _lines() -> Iterator[str]:
    yield from (*comment(_HEAD), "schema = 1", *optional_keys(BenchSheet, *_PLAIN_KEYS))
    for heading, kind, words in _TABLES:
        yield from optional_table(heading, kind, words)
    words = "mean power over peak power by mode [%], in place of the built-in table"
    yield from ("", *comment(words), "#[duty]")
    yield from entry("voice, processed", 50, in_use=False)
