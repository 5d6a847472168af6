"""Invented builds as a card and a listing meet them: long, foreign, with few bands and many."""

from dataclasses import replace

import power_samples
import result_samples as samples

from reportgen.model import BenchSheet, BuildResult, Permitted
from reportgen.pages.kit_words import KitWords, kit_words

LONG_NAME = (
    "Wintergreen broadband transformer for half-wave wires, series two, tapped winding on two "
    "rings, with a small mica capacitor"
)[:120]
LONG_WORD = "W" * 120
FOREIGN_NAME = (
    "<b>x</b> \u202e$x_1$ \x07`*_[a](b)| \u05e9\u05dc\u05d5\u05dd \u6f22 \U0001f600 &amp;"
)


def named(name: str, result: BuildResult | None = None, **sheet) -> BuildResult:
    """A build of that name with intervals."""
    result = result or samples.full(u95=0.03)
    sheet_ = replace(result.build.sheet, name=name, **sheet)
    return replace(result, build=replace(result.build, sheet=sheet_))


def with_bands(count: int, name: str = "Alder") -> BuildResult:
    """A build with so many bands."""
    result = named(name)
    found = [result.chosen.bands[index % len(samples.BANDS)] for index in range(count)]
    bands = tuple(
        replace(one, band=replace(one.band, name=f"{one.band.name} {index}"))
        if index >= len(samples.BANDS)
        else one
        for index, one in enumerate(found)
    )
    return replace(result, chosen=replace(result.chosen, bands=bands))


def with_power(permitted: Permitted | None, result: BuildResult | None = None) -> BuildResult:
    """The same with a temperature log."""
    reason = None if permitted else "no temperature limit is given"
    found = power_samples.thermal(permitted, reason)
    return replace(result or named("Alder"), thermal=found, stress=power_samples.stress())


def hostile_bench(**bench) -> BenchSheet:
    """The bench of somebody who writes mark-up everywhere."""
    return replace(samples.BENCH, publisher=samples.HOSTILE, **bench)


def words_of(result: BuildResult, bench: BenchSheet = samples.BENCH) -> KitWords:
    """What a card and a listing say of it."""
    return kit_words(result, bench, "1.2.3")


RESULTS = {
    "plain": samples.full(),
    "intervals": named("Alder"),
    "long name": with_bands(14, LONG_NAME),
    "long word": named(LONG_WORD),
    "foreign": named(FOREIGN_NAME, samples.hostile()),
    "one band": with_bands(1),
    "14 bands": with_bands(14),
    "40 bands": with_bands(40, LONG_NAME),
    "no loss": samples.load_only(),
    "partial": samples.partial(),
    "power": with_power(power_samples.permitted(extrapolated=True), with_bands(14, LONG_NAME)),
}
