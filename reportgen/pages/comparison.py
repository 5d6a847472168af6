"""A build against the baseline: a sentence, and a table with a line for each band."""

from __future__ import annotations

from collections.abc import Sequence

from reportgen.model import BandComparison, BuildResult, Comparison, MethodResult, Verdict
from reportgen.pages.band_tables import heat_loss_text
from reportgen.pages.display import interval, number, plus_minus
from reportgen.pages.sentences import counted, listed
from reportgen.pages.tables import Cell, Column, Row, Table, with_points_aligned
from reportgen.pages.wording import ohms

_CAPTION = "Mean heat loss in each band; a negative difference is less."
_JUDGED = (
    " A build is better or worse where the 95\u00a0% interval of the difference leaves out zero; "
    "what a shared calibration leaves cancels in it."
)
_LIKE_LOADS = 0.05
_JUDGEMENTS = (Verdict.BETTER, Verdict.WORSE, Verdict.SAME)


def comparison_sentence(comparison: Comparison | None) -> str:
    """How the build compares with the baseline over all bands."""
    if comparison is None:
        return ""
    name = f"the baseline, {comparison.name}"
    verdicts = [band.verdict for band in comparison.bands if band.verdict in _JUDGEMENTS]
    if verdicts:
        return f"Against {name}: {_counts(verdicts)}."
    differences = [band.heat_loss_db for band in comparison.bands if band.heat_loss_db is not None]
    if not differences:
        reasons = dict.fromkeys(band.reason for band in comparison.bands if band.reason)
        return f"It cannot be compared with {name}: {'; '.join(reasons) or 'no band in common'}."
    fewer = sum(difference < 0 for difference in differences)
    bands = counted(len(differences), "band")
    return (
        f"On {fewer} of {bands} its mean heat loss is below that of {name}. "
        "The uncertainty of the difference is not known, so no band is judged."
    )


def loads_sentence(result: BuildResult, baseline: BuildResult | None, locale: str) -> str:
    """That the two were measured into unlike loads; empty where they were not, or nearly so."""
    if baseline is None:
        return ""
    ours, theirs = result.chosen.load_ohm, baseline.chosen.load_ohm
    if abs(ours - theirs) <= _LIKE_LOADS * theirs:
        return ""
    loads = [ohms(round(load), locale) for load in (ours, theirs)]
    return f"Mind that it is for {loads[0]}, the baseline for {loads[1]}."


def _counts(verdicts: Sequence[Verdict | None]) -> str:
    counts = [(verdict, verdicts.count(verdict)) for verdict in _JUDGEMENTS]
    found = [f"{verdict.value} on {count}" for verdict, count in counts if count]
    bands = counted(len(verdicts), "band")
    if len(found) == 1:
        return f"{verdicts[0]} on {'all ' if len(verdicts) > 1 else ''}{bands}"
    return f"{listed(found)} of {bands}"


def comparison_table(
    result: BuildResult, comparison: Comparison | None, baseline: BuildResult | None, locale: str
) -> Table | None:
    """Heat loss of both builds by band, the difference and its verdict; None: no band compares."""
    if comparison is None or all(band.heat_loss_db is None for band in comparison.bands):
        return None
    judged = any(band.verdict and band.heat_loss_db is not None for band in comparison.bands)
    sides = {"This build": result.chosen} | (
        {} if baseline is None else {comparison.name: baseline.chosen}
    )
    columns = [Column(label=name, unit="dB") for name in sides]
    columns += [Column(label="Difference", unit="dB"), Column(label="Difference", unit="W")]
    columns += [Column(label="Verdict", words=True)] if judged else []
    table = Table(
        caption=_CAPTION + (_JUDGED if judged else ""),
        corner="Band",
        columns=tuple(columns),
        groups=tuple(
            (_comparison_row(band, list(sides.values()), len(columns), judged, locale),)
            for band in comparison.bands
        ),
    )
    return with_points_aligned(table, locale)


def _comparison_row(
    band: BandComparison, sides: Sequence[MethodResult], columns: int, judged: bool, locale: str
) -> Row:
    if band.heat_loss_db is None:
        words = ": ".join(
            part for part in (band.verdict.value if band.verdict else "", band.reason or "") if part
        )
        return Row(head=band.band, words=words or "not comparable", words_columns=columns)
    cells = [Cell(text=heat_loss_text(side, band.band, locale)) for side in sides]
    cells += [Cell(text=difference_db(band, locale))]
    cells += [Cell(text=number(band.heat_w, 1, locale=locale, signed=True))]
    if judged:
        look = "words soft" if band.verdict is Verdict.SAME else "words"
        cells.append(Cell(text=band.verdict.value if band.verdict else "not judged", look=look))
    return Row(head=band.band, cells=tuple(cells))


def difference_db(band: BandComparison, locale: str) -> str:
    """The difference with its interval; both ends where half of it would belie the verdict."""
    difference, u95 = band.heat_loss_db, band.heat_loss_u95_db
    if difference is None or u95 is None:
        return number(difference, 2, locale=locale, signed=True)
    if (abs(difference) <= u95) == (band.verdict is Verdict.SAME):
        return plus_minus(difference, u95, 2, locale=locale)
    figure = number(difference, 2, u95=u95, locale=locale, signed=True)
    low, high = band.heat_loss_low95_db, band.heat_loss_high95_db
    assert low is not None
    assert high is not None
    return f"{figure} ({interval(low, high, 2, locale=locale)})"
