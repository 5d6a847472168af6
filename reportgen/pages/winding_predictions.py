"""Other windings, stacks and capacitors: a table, and those of them that keep to the limits."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass

from reportgen.model import BenchSheet
from reportgen.pages.display import entered, with_unit
from reportgen.pages.intervals import predicted_text
from reportgen.pages.sentences import counted, listed
from reportgen.pages.tables import Cell, Column, Row, Table, figures, with_points_aligned
from reportgen.pages.wording import ohms
from reportgen.physics.forecast import Forecast, WindingForecast
from reportgen.physics.judge import predicted_misses
from reportgen.physics.outcomes import Outcome

_NEAR_TURNS = 1.5
"""Ratios shown differ by fewer turns of the high side than this."""

_MOST_NAMED = 3


@dataclass(frozen=True, kw_only=True, slots=True)
class _Candidate:
    """One thing that could be wound, and what it would do."""

    turns: str
    change: str
    capacitor_pf: float
    then: Outcome


def windings_table(forecast: Forecast, winding: tuple[float, float], bench: BenchSheet) -> Table:
    """The build as it is, and what could be wound instead; `winding` is its turns as they are."""
    locale = bench.locale
    groups = _candidates(forecast, winding, locale)
    columns = [
        Column(label="Change", words=True),
        Column(label="Capacitor", unit="pF"),
        Column(label="Worst SWR"),
        Column(label="Mean heat loss", unit="dB"),
    ]
    columns += [Column(label="Limits", words=True)] if bench.limits else []
    table = Table(
        caption=_caption(forecast.capacitor.now.load_ohm, locale),
        corner="Turns",
        columns=tuple(columns),
        groups=tuple(tuple(_row(one, bench) for one in group) for group in groups if group),
    )
    return with_points_aligned(table, locale)


def _caption(load_ohm: float, locale: str) -> str:
    return (
        f"Predicted, not measured, into {ohms(load_ohm, locale)}: worst SWR in any band and mean "
        "heat loss over all, with the capacitor that gives the least worst SWR. After \u00b1 "
        "stands the half-width of the 95\u00a0% interval."
    )


def promising_sentence(forecast: Forecast, winding: tuple[float, float], bench: BenchSheet) -> str:
    """Which candidates keep to all limits, where the build as it is does not; empty elsewhere."""
    if not bench.limits:
        return ""
    now, *others = [one for group in _candidates(forecast, winding, bench.locale) for one in group]
    if not predicted_misses(now.then, bench):
        return ""
    keep = sorted(
        (one for one in others if not predicted_misses(one.then, bench)),
        key=lambda one: one.then.heat_loss_db.value,
    )
    if not keep:
        return "No change below is predicted to keep to all limits."
    names = listed([_named(one, bench.locale) for one in keep[:_MOST_NAMED]])
    return f"To keep to all limits, wind {names.replace(' and ', ' or ')}."


def _named(one: _Candidate, locale: str) -> str:
    farads = with_unit(entered(one.capacitor_pf, locale=locale), "pF")
    with_it = f"with {farads}" if one.capacitor_pf else "without a capacitor"
    return f"{one.turns} ({one.change}) {with_it}"


# --- candidates ------------------------------------------------------------------------------


def _candidates(
    forecast: Forecast, winding: tuple[float, float], locale: str
) -> Sequence[Sequence[_Candidate]]:
    found, turns = forecast.capacitor, _turns(*winding, locale)
    present = [
        _Candidate(turns=turns, change="as it is", capacitor_pf=found.present_pf, then=found.now)
    ]
    if found.better:
        present.append(
            _Candidate(
                turns=turns, change="other capacitor", capacitor_pf=found.best_pf, then=found.then
            )
        )
    return [present, *(list(group) for group in _neighbours(forecast, winding, locale))]


def _neighbours(
    forecast: Forecast, winding: tuple[float, float], locale: str
) -> Iterator[Iterator[_Candidate]]:
    yield (_candidate(one, "same ratio", locale) for one in forecast.turns)
    yield (
        _candidate(one, "other ratio", locale)
        for one in forecast.ratios
        if not one.own_load and abs(one.high_turns - winding[1]) < _NEAR_TURNS
    )
    yield (
        _candidate(one, f"stack of {counted(one.stack or 1, 'ring')}", locale)
        for one in forecast.stacks
    )


def _candidate(one: WindingForecast, change: str, locale: str) -> _Candidate:
    return _Candidate(
        turns=_turns(one.low_turns, one.high_turns, locale),
        change=change,
        capacitor_pf=one.best_pf,
        then=one.best_capacitor,
    )


def _turns(low: float, high: float, locale: str) -> str:
    return "\u00a0:\u00a0".join(entered(one, locale=locale) for one in (low, high))


# --- rows ------------------------------------------------------------------------------------


def _row(one: _Candidate, bench: BenchSheet) -> Row:
    locale, then = bench.locale, one.then
    farads = entered(one.capacitor_pf, locale=locale) if one.capacitor_pf else "none"
    texts = [
        predicted_text("swr", then.swr, locale),
        predicted_text("heat_loss_db", then.heat_loss_db, locale),
    ]
    limits = [_limits_cell(then, bench)] if bench.limits else []
    cells = (Cell(text=one.change, look="words"), *figures([farads, *texts]), *limits)
    return Row(head=one.turns, cells=cells)


def _limits_cell(then: Outcome, bench: BenchSheet) -> Cell:
    missed = predicted_misses(then, bench)
    words = f"missed on {counted(len(missed), 'band')}" if missed else "kept"
    return Cell(text=words, look="words soft" if missed else "words")
