"""Acceptance limits: what the worst in each band says of them, and of the build."""

from __future__ import annotations

from collections.abc import Sequence

from reportgen.model import Judgement, LimitResult
from reportgen.pages.display import DASH, NOT_MEASURED, entered, percent_of
from reportgen.pages.intervals import with_interval
from reportgen.pages.sentences import listed
from reportgen.pages.tables import Cell, Column, Row, Table, with_points_aligned
from reportgen.physics.judge import overall
from reportgen.physics.quantities import BY_KEY, Better, Quantity

_CAPTION = (
    "The worst in each band against the workshop's limits. A band passes or fails only where the "
    "whole 95\u00a0% interval does; between them it is undecided."
)
_OPENING = {
    Judgement.PASS: "Keeps to all limits",
    Judgement.FAIL: "Fails its limits",
    Judgement.UNDECIDED: "Limits undecided",
}


def limits_words(limits: Sequence[LimitResult]) -> tuple[str, str]:
    """What the limits say of the build, and what decides it; empty where none was judged."""
    judgement = overall(limits)
    if judgement is None:
        return "", ""
    lacking = _causes(limits, Judgement.NOT_MEASURED)
    if judgement is Judgement.PASS:
        if lacking:
            return "Keeps to the limits that could be judged.", f"Not measured: {lacking}."
        return f"{_OPENING[judgement]}.", ""
    tail = " is too close to the limit to tell" if judgement is Judgement.UNDECIDED else ""
    return f"{_OPENING[judgement]}.", f"{_causes(limits, judgement)}{tail}."


def _causes(limits: Sequence[LimitResult], judgement: Judgement) -> str:
    """Quantities and bands that were judged so."""
    found = [one for one in limits if one.judgement is judgement]
    return "; ".join(
        _cause(key, limits, [one.band for one in found if one.quantity == key])
        for key in dict.fromkeys(one.quantity for one in found)
    )


def _cause(key: str, limits: Sequence[LimitResult], bands: Sequence[str]) -> str:
    every = sum(one.quantity == key for one in limits)
    where = f"all {every} bands" if 1 < every == len(bands) else listed(bands)
    return f"{BY_KEY[key].label} on {where}"


def limits_short(limits: Sequence[LimitResult]) -> str:
    """The build's verdict in a word or two, for a cell."""
    judgement = overall(limits)
    if judgement is None:
        return "not judged" if limits else "no limits"
    lacking = any(one.judgement is Judgement.NOT_MEASURED for one in limits)
    return "pass in part" if judgement is Judgement.PASS and lacking else judgement.value


def limits_table(limits: Sequence[LimitResult], locale: str) -> Table | None:
    """Worst, limit and verdict for each band and quantity; None where no limit is set."""
    keys = list(dict.fromkeys(one.quantity for one in limits))
    if not keys:
        return None
    found = {(one.band, one.quantity): one for one in limits}
    columns = [column for key in keys for column in _columns(BY_KEY[key])]
    table = Table(
        caption=_CAPTION,
        corner="Band",
        columns=tuple(columns),
        groups=tuple(
            (_row(band, [found.get((band, key)) for key in keys], locale),)
            for band in dict.fromkeys(one.band for one in limits)
        ),
    )
    return with_points_aligned(table, locale)


def _columns(quantity: Quantity) -> tuple[Column, ...]:
    higher = quantity.better is Better.HIGHER
    return (
        Column(label=f"{'Least' if higher else 'Worst'} {_label(quantity)}", unit=quantity.unit),
        Column(label="at least" if higher else "at most", unit=quantity.unit),
        Column(label="Verdict", words=True),
    )


def _label(quantity: Quantity) -> str:
    return quantity.label if quantity.label.isupper() else quantity.label.lower()


def _row(band: str, limits: Sequence[LimitResult | None], locale: str) -> Row:
    return Row(
        head=band,
        cells=tuple(cell for one in limits for cell in _cells(one, locale)),
    )


def _cells(one: LimitResult | None, locale: str) -> tuple[Cell, ...]:
    if one is None:
        return (Cell(text=DASH), Cell(text=DASH), Cell(text="no limit", look="words soft"))
    quantity = BY_KEY[one.quantity]
    worst = with_interval(
        quantity, one.value, one.low95, one.high95, limits=[one.limit], locale=locale
    )
    look = "words" if one.judgement in (Judgement.FAIL, Judgement.UNDECIDED) else "words soft"
    if one.judgement is Judgement.FAIL:
        look += " fail"
    return (
        Cell(text=worst if one.value is not None else NOT_MEASURED),
        Cell(text=limit_text(quantity, one.limit, locale)),
        Cell(text=one.judgement.value, look=look),
    )


def limit_text(quantity: Quantity, limit: float, locale: str) -> str:
    """A limit as it was entered."""
    return entered(percent_of(limit) if quantity.percent else limit, locale=locale)
