"""What a build stands: the power that it may have, volts, amperes and heat, in sentences."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

from reportgen.model import BuildResult, FirstLimit, Permitted, Stress, ThermalFit
from reportgen.pages.display import entered, no_more_than, number, with_unit
from reportgen.pages.intervals import scaled_with_interval
from reportgen.pages.power_tables import (
    BOUND_WORDS,
    modes_table,
    stress_table,
    surface_rises,
    unbroken,
)
from reportgen.pages.sentences import rated_power
from reportgen.pages.tables import Table
from reportgen.pages.wording import ohms

_DEGREES = "\u00b0C"
_LIMIT_WORDS = {
    "core": "the core's surface",
    "wire": "the core's surface, held to the limit of the wire,",
    "enclosure": "the core's surface, held to the limit of the enclosure,",
}
_STRESS_WORDS = (
    "Volts, amperes and flux are the most that a load of that SWR can bring about at any length "
    "of line, losses left out. Only limits that build.toml gives are judged; sweeps at a fraction "
    "of a milliwatt know nothing of saturation or breakdown."
)
_HEAT_WORDS = (
    "Heat counts at the upper end of its 95\u00a0% interval, at the worst frequency of a band and "
    "into the worst load of that SWR where the sweeps tell it, in the hottest surroundings named "
    "and for the lowest temperature limit given. The log knows the core's surface; "
    "inside it is hotter. Loss changes when a core is hot: powers above the logged one are "
    "estimates, marked beyond twice. Duty is that of sending without a pause (OET Bulletin 65, "
    "Supplement B, or the bench's own)."
)
_BARE_WORDS = (
    "The rise without a log is that of two published formulas for a bare surface in still free "
    "air; a box adds to it. It is no rating."
)


@dataclass(frozen=True, kw_only=True, slots=True)
class PowerPage:
    """What the report prints of it: the answer first, then sentences, tables and what is assumed.

    `verdict` says the least power of all modes and bands, or why there is none.
    """

    verdict: str
    words: tuple[str, ...]
    modes: Table | None
    bands: Table | None
    assumes: tuple[str, ...]


def power_of(result: BuildResult, locale: str) -> PowerPage | None:
    """Everything on what the build stands; None: no band has a figure."""
    stress = result.stress
    if stress is None:
        return None
    thermal = result.thermal
    permitted = None if thermal is None else thermal.permitted
    heat = (_HEAT_WORDS,) if permitted else (_BARE_WORDS,) if surface_rises(stress) else ()
    return PowerPage(
        verdict=f"{power_verdict(result, locale)} {design_sentence(result, locale)}".strip(),
        words=tuple(_words(result, stress, locale)),
        modes=None if permitted is None else modes_table(permitted, locale),
        bands=stress_table(result, stress, permitted, locale),
        assumes=(*heat, _STRESS_WORDS),
    )


# --- the answer ------------------------------------------------------------------------------


def power_verdict(result: BuildResult, locale: str) -> str:
    """The power that the build stands with its conditions, or why none is named."""
    thermal = result.thermal
    if thermal is None:
        return "No power is named: there is no temperature log."
    if thermal.permitted is None:
        return f"No power is named: {thermal.reason}."
    permitted, least = thermal.permitted, thermal.permitted.limiting
    watts = with_unit(no_more_than(least.power_w, locale=locale), "W")
    mode = f"{least.mode}" if least.duty_percent >= 100 else f"peak in {least.mode}"
    where = f" on {unbroken(least.band)}" if least.band else ""
    beyond = " It is an extrapolation, more than twice what was logged." * least.extrapolated
    box = result.build.sheet.rating.enclosure
    around = f"{_celsius(permitted.ambient_max_c, locale)} around it" + (f" ({box})" if box else "")
    return (
        f"Handles {watts} of {mode} on every band, limited by {BOUND_WORDS[least.bound_by]}"
        f"{where}, with up to {around} and {_load_words(result, permitted, locale)}."
        f"{beyond}"
    )


def design_sentence(result: BuildResult, locale: str) -> str:
    """That the build was meant for more than it handles; empty elsewhere."""
    permitted = None if result.thermal is None else result.thermal.permitted
    if permitted is None or permitted.limiting.power_w >= result.power_w:
        return ""
    return f"Its design power of {rated_power(result, locale)} is more than that."


def _load_words(result: BuildResult, permitted: Permitted, locale: str) -> str:
    """The loads that the power holds for; a method may know heat into the nominal load alone."""
    if permitted.heat_load_swr < permitted.load_swr:
        return "its nominal load; the heat into others is not known"
    load = ohms(result.build.sheet.nominal_load_ohm, locale)
    return f"any load within SWR {entered(permitted.load_swr, locale=locale)} of {load}"


def _celsius(degrees: float, locale: str) -> str:
    return with_unit(entered(degrees, locale=locale), _DEGREES)


# --- sentences -------------------------------------------------------------------------------


def _words(result: BuildResult, stress: Stress, locale: str) -> Iterator[str]:
    if result.thermal is not None:
        if result.thermal.permitted is not None:
            yield _limit_sentence(result, result.thermal.permitted, locale)
        for fit in result.thermal.fits:
            yield _fit_sentence(fit, locale)
    elif surface_rises(stress):
        yield _rise_sentence(stress, locale)
    yield _volts_sentence(result, stress, locale)
    if stress.bands[0].capacitor_v is not None:
        yield _capacitor_sentence(result, stress, locale)
    if stress.first_limit is not None:
        first = stress.first_limit
        watts = with_unit(no_more_than(first.power_w, locale=locale), "W")
        where = f" on {unbroken(first.band)}" if first.band else ""
        yield (
            f"Of the limits given for volts and flux the first is met at {watts} peak: "
            f"{BOUND_WORDS[first.what]}{_given_limit(first, locale)}{where}."
        )


def _given_limit(first: FirstLimit, locale: str) -> str:
    if first.limit is None:
        return ""
    unit = "mT" if first.what == "flux" else "V"
    return f", {with_unit(entered(first.limit, locale=locale), unit)}"


def _limit_sentence(result: BuildResult, permitted: Permitted, locale: str) -> str:
    limit = _celsius(permitted.limit_c, locale)
    text = f"The limit is {limit} for {_LIMIT_WORDS[permitted.limit_of].rstrip(',')}"
    power = rated_power(result, locale)
    soonest = min(
        (band for band in permitted.bands if band.minutes_to_limit is not None),
        key=lambda band: band.minutes_to_limit or 0.0,
        default=None,
    )
    if soonest is None:
        return f"{text}; {power} without a pause does not reach it in any band."
    minutes = counted_minutes(soonest.minutes_to_limit or 0.0, locale)
    return f"{text}; {power} without a pause, from cold, reaches it in {minutes} on " + (
        f"{unbroken(soonest.band)}."
    )


def counted_minutes(minutes: float, locale: str) -> str:
    """A time on the safe side: rounded down to two digits."""
    if minutes < 1:
        return "less than a minute"
    return f"{no_more_than(minutes, locale=locale)}\u00a0minutes"


def _fit_sentence(fit: ThermalFit, locale: str) -> str:
    resistance = with_unit(scaled_with_interval(fit.resistance_k_per_w, 1, 1, locale), "K/W")
    minutes = with_unit(scaled_with_interval(fit.time_constant_s, 1 / 60, 1, locale), "min")
    power = with_unit(entered(fit.power_w, locale=locale), "W")
    mhz = with_unit(entered(fit.frequency_hz / 1e6, locale=locale), "MHz")
    rise = with_unit(number(fit.rise_k.value, 0, locale=locale), "K")
    heat = with_unit(scaled_with_interval(fit.heat_w, 1, 1, locale), "W")
    return (
        f"Unit {fit.unit} was logged at {power} and {mhz}: {heat} of heat raise its core by "
        f"{rise} in the end, {resistance}, with a time constant of {minutes}."
    )


def _rise_sentence(stress: Stress, locale: str) -> str:
    low, high, band = max(surface_rises(stress))
    watts = with_unit(entered(stress.power_w, locale=locale), "W")
    return (
        f"At {watts} on {unbroken(band)}, where heat is most, two published formulas put a bare "
        f"core in free air {number(low, 0, locale=locale)} to "
        f"{with_unit(number(high, 0, locale=locale), 'K')} above the air."
    )


def _volts_sentence(result: BuildResult, stress: Stress, locale: str) -> str:
    power = rated_power(result, locale)
    swr = entered(stress.load_swr, locale=locale)
    low, high = (
        f"{with_unit(number(volts, 0, locale=locale), 'V')} and "
        f"{with_unit(number(amperes, 2, locale=locale), 'A')}"
        for volts, amperes in (
            (stress.low_side_v, stress.low_side_a),
            (stress.high_side_v, stress.high_side_a),
        )
    )
    peak = with_unit(number(2**0.5 * stress.high_side_v, 0, locale=locale), "V")
    return (
        f"At {power} and a load SWR of {swr} the low side carries up to {low}, the high side "
        f"{high} ({peak} peak), in rms values."
    )


def _capacitor_sentence(result: BuildResult, stress: Stress, locale: str) -> str:
    peak = with_unit(number(2**0.5 * (stress.bands[0].capacitor_v or 0.0), 0, locale=locale), "V")
    amperes, band = max(((one.capacitor_a or 0.0), one.band) for one in stress.bands)
    current = with_unit(number(amperes, 2, locale=locale), "A")
    text = f"The capacitor has up to {peak} peak across it and {current} on {unbroken(band)}"
    rated_v = result.build.sheet.compensation.rated_v
    if rated_v is None:
        return f"{text}; what it bears of both at radio frequency decides."
    volts = with_unit(entered(rated_v, locale=locale), "V")
    return f"{text}. Its {volts} is a DC rating: current and derating at radio frequency decide."
