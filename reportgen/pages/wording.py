"""Names and plain words for what the model says in keys: methods, set-ups, criteria, fits."""

from __future__ import annotations

import re

from reportgen.model import Fitted, Method, Setup
from reportgen.pages.display import entered, number, percent_of, plus_minus, with_unit
from reportgen.physics.quantities import BY_KEY

METHOD_NAMES = {
    Method.HALVING: "Halved pair",
    Method.BISECTION: "Bisection",
    Method.BISECTION_LOAD: "Bisection with load",
    Method.THREE_PAIRS: "Three pairs",
    Method.THREE_PAIRS_LOAD: "Three pairs with load",
    Method.TERMINATIONS: "Terminations",
    Method.SERIES_RESISTOR: "Series resistor",
    Method.DIRECT: "Direct",
    Method.LOAD_ONLY: "Load only",
}

METHOD_WORDS = {
    Method.HALVING: (
        "Two units were swept back to back and the through loss was divided by two. This is common "
        "practice and not the loss of a unit: the mismatch between the two is in it."
    ),
    Method.BISECTION: (
        "Two units were swept back to back. A pair of equal units is symmetric about its join, so "
        "its halves can be computed (Bartlett's bisection theorem); the one number that a pair "
        "cannot give follows from the turns ratio and an equivalent circuit of two elements."
    ),
    Method.BISECTION_LOAD: (
        "Two units were swept back to back, and single units with a known resistor on the high "
        "side. A pair of equal units is symmetric about its join, so its halves can be computed "
        "(Bartlett's bisection theorem); the sweeps with the resistor give the one number that a "
        "pair cannot."
    ),
    Method.THREE_PAIRS: (
        "Three units were swept back to back, two at a time. The three sweeps together separate "
        "the units, which need not be equal; the one number that pairs cannot give follows from "
        "the turns ratio and an equivalent circuit of two elements."
    ),
    Method.THREE_PAIRS_LOAD: (
        "Three units were swept back to back, two at a time, and with a known resistor on the "
        "high side. The pairs separate the units, which need not be equal; the sweeps with the "
        "resistor give the one number that pairs cannot."
    ),
    Method.TERMINATIONS: (
        "The low side of a unit was swept with the high side open, shorted and closed by a known "
        "resistor. The three fix the unit as a network, and its loss into any load follows."
    ),
    Method.SERIES_RESISTOR: (
        "The high side was joined to the second port of the analyzer through a known resistor; "
        "loss follows from what arrives there and what the low side reflects. The figures hold "
        "for the load that it really had, the stray capacitance across the resistor included."
    ),
    Method.DIRECT: (
        "Both sides were connected to the analyzer as they are. At a high impedance ratio small "
        "errors of the analyzer weigh heavily, as the interval shows."
    ),
    Method.LOAD_ONLY: (
        "The low side was swept with a known resistor on the high side. That gives the match; "
        "it does not tell heat in the unit from power in the load."
    ),
}

SETUP_NAMES = {
    Setup.BACK_TO_BACK: "back to back",
    Setup.LOAD: "resistor on the high side",
    Setup.OPEN: "high side open",
    Setup.SHORT: "high side shorted",
    Setup.SERIES_RESISTOR: "through a series resistor",
    Setup.DIRECT: "both sides on the analyzer",
    Setup.LOAD_CHECK: "check: the bare resistor",
    Setup.RESISTOR_CHECK: "check: the bare series resistor",
    Setup.THRU_CHECK: "check: the fixture without a unit",
    Setup.ANTENNA: "antenna",
    Setup.SPOT: "readings back to back",
}

CAPITAL_OHM = "\u03a9"
_RELATIONS = {"<=": "at most", ">=": "at least", "<": "below", ">": "above"}
_CRITERION = re.compile(r"(\w+) (<=|>=|<|>) ([0-9.e+-]+)( %)?")
_FITTED = {"stray_pf": ("Stray capacitance", "pF")}


def criterion_words(criterion: str, locale: str) -> str:
    """A criterion as a person says it: `SWR at most 2`, `Efficiency at least 85 %`."""
    found = _CRITERION.fullmatch(criterion)
    quantity = (BY_KEY.get(found[1]) or BY_KEY.get(f"{found[1]}_ratio")) if found else None
    if found is None or quantity is None:
        return criterion
    value = float(found[3])
    value = percent_of(value) if quantity.percent and not found[4] else value
    text = entered(value, locale=locale)
    return f"{quantity.label} {_RELATIONS[found[2]]} {with_unit(text, quantity.unit)}"


def fitted_sentence(fitted: Fitted, locale: str) -> str:
    """What the data named, or why they could not."""
    name, unit = _FITTED.get(fitted.quantity, (fitted.quantity, ""))
    place, _, where = fitted.of.replace("loads.", "load ", 1).partition(", ")
    subject = f"{name} at {place}" + (f" {where}" if where else "")
    if fitted.value is None:
        reason = f": {fitted.reason}" if fitted.reason else ""
        return f"{subject}: not determined{reason}."
    if fitted.u95 is not None:
        figure = plus_minus(fitted.value, fitted.u95, 1, locale=locale, signed=False)
    else:
        figure = number(fitted.value, 1, locale=locale)
    return f"{subject}: {with_unit(figure, unit)}, named by the sweeps themselves."


def ohms(value: float, locale: str) -> str:
    """A resistance as it was entered."""
    return with_unit(entered(value, locale=locale), CAPITAL_OHM)
