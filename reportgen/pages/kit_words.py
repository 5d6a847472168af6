"""What a card and a listing say of a build: the same words, whatever they are set in.

A power is named only where a temperature log permits one.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, replace

from reportgen.model import (
    SETUPS_WITHOUT_UNIT,
    BandResult,
    BenchSheet,
    BuildResult,
    BuildSheet,
    MeasuredBand,
    Method,
    NotMeasured,
)
from reportgen.pages.band_tables import band_note
from reportgen.pages.display import (
    NOT_MEASURED,
    aligned,
    entered,
    percent_of,
    with_unit,
)
from reportgen.pages.intervals import mean_with_interval, spoken_with_interval, worst_text
from reportgen.pages.power import power_verdict
from reportgen.pages.power_tables import unbroken
from reportgen.pages.sentences import KeyFigure, counted, coverage_sentence, key_figures
from reportgen.pages.summary import (
    figure_of,
    is_simulated,
    limits_by_quantity,
    means,
    worst_of,
    worsts,
)
from reportgen.pages.wording import ohms
from reportgen.physics.quantities import BY_KEY

SIMULATED = ("Simulated data.", "These sweeps were computed, not measured on a bench.")
CAUTIONS = (
    "Local codes and licensed practice come first.",
    "Under power the core and the winding get hot enough to burn; the inside is hotter than the "
    "surface.",
    "The high side carries radio-frequency voltages that burn and arc: keep it out of reach.",
    "Keep to the exposure limits of your country, and transmit only as your licence allows.",
    "Figures from small-signal sweeps are estimates, and one unit is no rating of a lot.",
)
SHORT_CAUTION = (
    f"{CAUTIONS[0]} Hot core and high RF voltage under power. Figures from small-signal sweeps."
)
INTERVALS = "After \u00b1 stands half of the 95\u00a0% interval of the mean over the band."
_IN_THE_REPORT = "Named in the report, with its conditions."
_LONGEST_POWER = 220
_METHODS = {
    Method.HALVING: "back to back, the loss halved",
    Method.BISECTION: "back to back, halved by Bartlett's theorem",
    Method.BISECTION_LOAD: "back to back and on a known resistor",
    Method.THREE_PAIRS: "back to back in three pairs",
    Method.THREE_PAIRS_LOAD: "back to back in three pairs and on a known resistor",
    Method.TERMINATIONS: "high side open, shorted and on a known resistor",
    Method.SERIES_RESISTOR: "through a known resistor in series",
    Method.DIRECT: "both sides on the analyzer",
    Method.LOAD_ONLY: "on a known resistor",
}


@dataclass(frozen=True, kw_only=True, slots=True)
class BandLine:
    """One band: its figures as text; the drawn one with its interval [per cent, or SWR].

    `value` None: nothing to draw. `reason`: why the band has no figures.
    """

    name: str
    value: float | None = None
    low95: float | None = None
    high95: float | None = None
    efficiency: str = NOT_MEASURED
    heat_loss: str = NOT_MEASURED
    swr: str = NOT_MEASURED
    note: str = ""
    reason: str = ""


@dataclass(frozen=True, kw_only=True, slots=True)
class KitWords:
    """Everything that a card and a listing say, as text; foreign text as it was entered.

    `drawn` names the quantity that the bands are drawn by: efficiency, or SWR where loss was not
    measured and `no_loss` says why.
    """

    name: str
    summary: str
    publisher: str
    simulated: bool
    ratio: str
    turns: str
    drawn: str
    headline: KeyFigure
    least: str
    bands: tuple[BandLine, ...]
    coverage: str
    no_loss: str
    worst_swr: str
    capacitor: str
    core: str
    power: str
    parts: tuple[str, ...]
    method: str
    measured_on: str
    provenance: str

    @property
    def intervals(self) -> bool:
        """True where at least one drawn figure has its interval."""
        return any(band.low95 is not None and band.high95 is not None for band in self.bands)


def kit_words(result: BuildResult, bench: BenchSheet, program_version: str) -> KitWords:
    """What the result says of the build, for somebody who thinks of building it."""
    sheet, locale = result.build.sheet, bench.locale
    lossy = bool(means(result.chosen, "efficiency_ratio"))
    drawn = "efficiency_ratio" if lossy else "swr"
    return KitWords(
        name=sheet.name,
        summary=sheet.summary,
        publisher=bench.publisher,
        simulated=is_simulated(result),
        ratio=f"{ohms(sheet.match.source_ohm, locale)} to {ohms(sheet.nominal_load_ohm, locale)}",
        turns=_turns_words(sheet, locale),
        drawn=drawn,
        headline=key_figures(result, locale)[0],
        least=_least_words(result, locale),
        bands=_aligned(
            [_band_line(band, result, drawn, bench) for band in result.chosen.bands], locale
        ),
        coverage=coverage_sentence(result),
        no_loss="" if lossy else _sentence(result.chosen.reason or "loss was not measured"),
        worst_swr=_worst_swr(result, locale),
        capacitor=_capacitor_words(sheet, locale),
        core=_core_words(sheet, locale),
        power=power_verdict(result, locale),
        parts=tuple(_parts(sheet, locale)),
        method=_method_words(result),
        measured_on=sheet.measured_on.isoformat() if sheet.measured_on else "",
        provenance=_provenance(result, program_version),
    )


def below_headline(words: KitWords) -> tuple[str, ...]:
    """How sure the headline is and what is least; or why there is no efficiency."""
    if words.no_loss:
        return (words.no_loss,)
    least = (f"least {words.least}",) if words.least else ()
    return (words.headline.where, *least)


def card_facts(words: KitWords) -> tuple[tuple[str, str, str], ...]:
    """Label, words and accent of each fact on a card; no power without its whole condition."""
    on = f", {words.measured_on}" if words.measured_on else ""
    return (
        ("Worst SWR", words.worst_swr, "match"),
        ("Power", words.power if len(words.power) <= _LONGEST_POWER else _IN_THE_REPORT, "ink"),
        ("Capacitor", words.capacitor, "ink"),
        ("Core", words.core, "ink"),
        ("Measured", f"{words.method}{on}", "ink"),
    )


def _sentence(words: str) -> str:
    return f"{words[:1].upper()}{words[1:]}."


# --- bands -----------------------------------------------------------------------------------


def _band_line(band: BandResult, result: BuildResult, drawn: str, bench: BenchSheet) -> BandLine:
    if isinstance(band, NotMeasured):
        return BandLine(name=band.band.name, reason=band.reason)
    limits = limits_by_quantity(bench, band.band.name, result.power_w)
    texts = {
        key: write(
            BY_KEY[key],
            band.figures.get(key),
            limits=[limits[key]] if key in limits else [],
            locale=bench.locale,
        )
        for key, write in (
            ("efficiency_ratio", mean_with_interval),
            ("heat_loss_db", mean_with_interval),
            ("swr", worst_text),
        )
    }
    value, low, high = _drawn_value(band, drawn)
    return BandLine(
        name=band.band.name,
        value=value,
        low95=low,
        high95=high,
        efficiency=texts["efficiency_ratio"],
        heat_loss=texts["heat_loss_db"],
        swr=texts["swr"],
        note=band_note(band, bench.locale),
    )


_Drawn = tuple[float | None, float | None, float | None]


def _drawn_value(band: MeasuredBand, drawn: str) -> _Drawn:
    """Mean efficiency in per cent, or worst SWR, with its interval."""
    figure = figure_of(band, drawn)
    if figure is None:
        return None, None, None
    if drawn == "swr":
        return figure.worst, figure.worst_low95, figure.worst_high95
    value, low, high = (
        None if one is None else percent_of(one)
        for one in (figure.mean, figure.low95, figure.high95)
    )
    return value, low, high


def _aligned(lines: list[BandLine], locale: str) -> tuple[BandLine, ...]:
    """The same lines, decimal points of a column below each other."""
    columns = [
        aligned([getattr(line, name) for line in lines], locale)
        for name in ("efficiency", "heat_loss", "swr")
    ]
    return tuple(
        replace(line, efficiency=efficiency, heat_loss=heat_loss, swr=swr)
        for line, efficiency, heat_loss, swr in zip(lines, *columns, strict=True)
    )


def _least_words(result: BuildResult, locale: str) -> str:
    """The band with the least efficiency; empty where there is one band, or none."""
    found = means(result.chosen, "efficiency_ratio")
    least = worst_of(found, "efficiency_ratio")
    if least is None or len(found) == 1:
        return ""
    figure = spoken_with_interval("efficiency_ratio", least, locale)
    return f"{figure} on {unbroken(least.band.name)}"


def _worst_swr(result: BuildResult, locale: str) -> str:
    worst = worst_of(worsts(result.chosen, "swr"), "swr")
    if worst is None:
        return NOT_MEASURED
    return f"{spoken_with_interval('swr', worst, locale)} on {unbroken(worst.band.name)}"


# --- the build -------------------------------------------------------------------------------


def _turns_words(sheet: BuildSheet, locale: str) -> str:
    winding = sheet.winding
    low, high = (entered(turns, locale=locale) for turns in (winding.low_turns, winding.high_turns))
    return f"{low} turns to {high}"


def _capacitor_words(sheet: BuildSheet, locale: str) -> str:
    capacitor = sheet.compensation
    if capacitor.capacitor_pf == 0:
        return "none"
    size = with_unit(entered(capacitor.capacitor_pf, locale=locale), "pF")
    return f"{size} across the {capacitor.side} side"


def _core_words(sheet: BuildSheet, locale: str) -> str:
    core = sheet.core
    if core is None:
        return "not stated"
    size = "\u00a0\u00d7\u00a0".join(
        entered(one, locale=locale) for one in (core.outer_mm, core.inner_mm, core.height_mm)
    )
    rings = f"{counted(core.stack, 'ring')}, {size}\u00a0mm"
    parts = [rings, core.material]
    if core.initial_permeability is not None:
        parts.append(f"initial permeability {entered(core.initial_permeability, locale=locale)}")
    return ", ".join(part for part in parts if part)


def _parts(sheet: BuildSheet, locale: str) -> Iterator[str]:
    """Lines of the parts list: pieces are counted before the name, lengths told after it."""
    for part in sheet.part:
        amount = "" if part.quantity is None else entered(part.quantity, locale=locale)
        if part.quantity is not None and float(part.quantity).is_integer():
            yield f"{amount} \u00d7 {part.name}" + (f" ({part.note})" if part.note else "")
        else:
            told = " ".join(text for text in (amount, part.note) if text)
            yield f"{part.name}, {told}" if told else part.name


def _method_words(result: BuildResult) -> str:
    units = counted(len(result.chosen.units), "unit")
    return f"{units} on a network analyzer, {_METHODS[result.chosen.method]}"


def _provenance(result: BuildResult, program_version: str) -> str:
    of_units = [
        one for one in result.build.measurements if one.entry.setup not in SETUPS_WITHOUT_UNIT
    ]
    sweeps = counted(len(of_units), "sweep")
    return f"Computed from {sweeps} by reportgen {program_version}."
