"""Tables of several builds: their figures band by band, and what they are."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

from reportgen.model import BandComparison, BuildResult, Comparison, MeasuredBand
from reportgen.pages.comparison import difference_db
from reportgen.pages.display import DASH, NOT_MEASURED, number
from reportgen.pages.heat_grid import SIGNS
from reportgen.pages.intervals import mean_with_interval
from reportgen.pages.particulars import build_facts
from reportgen.pages.sentences import listed
from reportgen.pages.summary import figure_of
from reportgen.pages.tables import Cell, Column, Row, Table
from reportgen.pages.versus_charts import bands_of
from reportgen.pages.wording import METHOD_NAMES, ohms
from reportgen.physics.quantities import BY_KEY
from reportgen.published import PublishedBuild


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Rival:
    """One of the builds; `comparison` with the first, which has none itself.

    `published` is the same as others see it, its key the build's place from nought.
    """

    result: BuildResult
    comparison: Comparison | None
    published: PublishedBuild


class _Figures(Table):
    """Figures of up to six builds beside their intervals: no line is broken."""

    __slots__ = ()

    @property
    def kind(self) -> str:
        """How it is set."""
        return "rivals"


class _Sheet(Table):
    """Words on up to six builds: columns of one width."""

    __slots__ = ()

    @property
    def kind(self) -> str:
        """How it is set."""
        return "sheet"


def rivals_table(rivals: Sequence[Rival], names: Sequence[str], locale: str) -> Table:
    """Efficiency and heat loss of each build in each band, and the difference from the first."""
    bands = [band.name for band in bands_of([one.result for one in rivals])]
    signs = ", ".join(f"{sign.glyph}\u00a0{sign.words}" for sign in SIGNS.values())
    return _Figures(
        caption=f"Means over each band with half of the 95\u00a0% interval. The difference is heat "
        f"loss less that of {rivals[0].published.name}: {signs}.",
        corner="Band",
        sub="Value",
        columns=tuple(Column(label=name, wide=True) for name in names),
        groups=tuple(_band_rows(band, rivals, locale) for band in bands),
    )


def _band_rows(band: str, rivals: Sequence[Rival], locale: str) -> tuple[Row, ...]:
    figures = {
        "efficiency, %": [_mean(one, band, "efficiency_ratio", locale) for one in rivals],
        "heat loss, dB": [_mean(one, band, "heat_loss_db", locale) for one in rivals],
    }
    rows = [
        Row(head=None, sub=sub, cells=tuple(Cell(text=text) for text in texts))
        for sub, texts in figures.items()
    ]
    compared = tuple(_difference(one, band, locale) for one in rivals)
    rows.append(Row(head=None, sub="difference, dB", cells=compared))
    return (replace(rows[0], head=band, head_rows=len(rows)), *rows[1:])


def _mean(rival: Rival, band: str, key: str, locale: str) -> str:
    found = next((one for one in rival.result.chosen.bands if one.band.name == band), None)
    figure = figure_of(found, key) if isinstance(found, MeasuredBand) else None
    return mean_with_interval(BY_KEY[key], figure, locale=locale)


def _difference(rival: Rival, band: str, locale: str) -> Cell:
    if rival.comparison is None:
        return Cell(text=DASH, look="soft")
    found = next((one for one in rival.comparison.bands if one.band == band), None)
    if found is None or found.heat_loss_db is None:
        return Cell(text=NOT_MEASURED if found is None else _why_not(found), look="soft")
    if found.heat_loss_u95_db is None or found.verdict not in SIGNS:
        return Cell(text=number(found.heat_loss_db, 2, locale=locale, signed=True))
    return Cell(text=f"{difference_db(found, locale)}\u00a0{SIGNS[found.verdict].glyph}")


def _why_not(found: BandComparison) -> str:
    return NOT_MEASURED if found.verdict is None else found.verdict.value


def facts_table(results: Sequence[BuildResult], names: Sequence[str], locale: str) -> Table:
    """What each build is; what one of them does not say is a dash."""
    facts = [dict((*_measured_facts(one, locale), *build_facts(one, locale))) for one in results]
    labels = dict.fromkeys(label for fact in facts for label in fact)
    return _Sheet(
        caption="What they are.",
        corner="Particular",
        columns=tuple(Column(label=name, words=True) for name in names),
        groups=tuple(
            (
                Row(
                    head=label,
                    cells=tuple(Cell(text=fact.get(label, DASH), look="words") for fact in facts),
                ),
            )
            for label in labels
        ),
    )


def _measured_facts(result: BuildResult, locale: str) -> tuple[tuple[str, str], ...]:
    chosen = result.chosen
    units = chosen.unit or listed(chosen.units)
    return (
        ("Method", METHOD_NAMES[chosen.method]),
        ("Units", units),
        ("Figures hold for", ohms(chosen.load_ohm, locale)),
    )
