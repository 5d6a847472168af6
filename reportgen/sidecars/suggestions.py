"""What sweeps suggest of turns and resistors, in words, to be held against one's notes."""

from __future__ import annotations

from collections.abc import Iterator

from reportgen.model import BenchSheet, Setup, Sweep
from reportgen.physics.guess_ratio import (
    ratio_of_load,
    ratio_of_series,
    resistance_of_check,
    resistance_of_series,
)
from reportgen.sidecars.found import Found, FoundSweep

_LEAST_OHM, _MOST_OHM = 10, 100e3


def turns_words(found: Found, bench: BenchSheet) -> Iterator[str]:
    """Turns ratio as a load sweep suggests it for each resistor of the bench, or a series sweep."""
    for one in found.of(Setup.LOAD)[:1]:
        bare = _bare(one, found)
        if bench.loads:
            each = ", ".join(
                f"{_ratio(ratio_of_load(one.sweep, load.resistance_ohm, bare))} with {name} "
                f"({load.resistance_ohm:g} ohm)"
                for name, load in bench.loads.items()
            )
        else:
            square = ratio_of_load(one.sweep, 1.0, bare) ** -2
            each = f"1 to the root of resistance_ohm / {square:.0f}"
        yield f"{one.file} suggests turns of about {each}{_caveat(bare)}"
    for one in found.of(Setup.SERIES_RESISTOR)[:1]:
        bare = _bare(one, found)
        ratio = _ratio(ratio_of_series(one.sweep, bare))
        yield f"{one.file} suggests turns of about {ratio}{_caveat(bare)}"


def resistor_words(one: FoundSweep, found: Found) -> Iterator[str]:
    """What a sweep suggests of the resistor in it; a load sweep cannot tell it from the turns."""
    setup = one.guess.setup
    if setup is Setup.RESISTOR_CHECK:
        yield f"{one.file} suggests about {_ohms(resistance_of_check(one.sweep))}"
    if setup is Setup.SERIES_RESISTOR:
        resistance_ohm = resistance_of_series(one.sweep, _bare(one, found))
        yield f"{one.file} suggests about {_ohms(resistance_ohm)}, give or take 10 %"
    if setup is Setup.LOAD_CHECK:
        yield f"{one.file}: {one.guess.reason}, give or take a quarter"


def _bare(one: FoundSweep, found: Found) -> Sweep | None:
    """The unit open, or a pair with it or without, that covers the range of a loaded sweep."""
    unit = one.units[:1] or ("A",)
    same = [each for each in found.of(Setup.OPEN) if (each.units[:1] or ("A",)) == unit]
    low, high = one.sweep.frequency_hz[[0, -1]]
    for each in (*same, *found.of(Setup.BACK_TO_BACK)):
        hz = each.sweep.frequency_hz
        if hz[0] <= low and hz[-1] >= high:
            return each.sweep
    return None


def _ratio(ratio: float) -> str:
    return f"1 to {ratio:.1f}"


def _caveat(bare: Sweep | None) -> str:
    if bare is not None:
        return "; give or take 10 %"
    return "; or up to 20 % less, since the core's loss is in it"


def _ohms(resistance_ohm: float) -> str:
    if _LEAST_OHM < resistance_ohm < _MOST_OHM:
        return f"{float(f'{resistance_ohm:.3g}'):.0f} ohm"
    return "nothing that can be told"
