"""How builds stand against the baseline and the workshop's limits, each in a word or a few."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterable

from reportgen.model import Comparison, Verdict

STANDINGS = {
    "better": "better",
    "mixed": "better here, worse there",
    "same": "the same",
    "worse": "worse",
    "unknown": "not compared",
}
"""How a build may stand against the baseline: in a word, and as it is said."""

JUDGEMENTS = ("pass", "pass in part", "undecided", "fail", "not judged", "no limits")
"""What may be said of a build's limits."""

_SAID = {Verdict.BETTER: "better", Verdict.SAME: "same", Verdict.WORSE: "worse"}


def standing(comparison: Comparison | None) -> str:
    """One of `STANDINGS`: better or worse on some band, and not the other on any."""
    verdicts = {band.verdict for band in comparison.bands} if comparison else set()
    better, worse = Verdict.BETTER in verdicts, Verdict.WORSE in verdicts
    if better or worse:
        return "mixed" if better and worse else "better" if better else "worse"
    return "same" if Verdict.SAME in verdicts else "unknown"


def against_words(comparison: Comparison | None) -> str:
    """On how many bands a build is better, the same and worse."""
    if comparison is None:
        return "no baseline"
    counts = Counter(band.verdict for band in comparison.bands)
    if any(counts[verdict] for verdict in _SAID):
        return ", ".join(
            f"{word} on {counts[verdict]}" for verdict, word in _SAID.items() if counts[verdict]
        )
    differences = [band.heat_loss_db for band in comparison.bands if band.heat_loss_db is not None]
    if not differences:
        return "not comparable"
    less = sum(difference < 0 for difference in differences)
    return f"less loss on {less} of {len(differences)}, not judged"


def standings_sentence(standings: Iterable[str], baseline: str) -> str:
    """How many builds stand how against the baseline; empty where none was compared."""
    counts = Counter(standings)
    if not any(counts[one] for one in STANDINGS if one != "unknown"):
        return ""
    parts = [f"{counts[one]} {words}" for one, words in STANDINGS.items() if counts[one]]
    return f"Against the baseline {baseline}: {', '.join(parts)}."


def limits_sentence(judgements: Iterable[str]) -> str:
    """How many builds keep to the workshop's limits; empty where it set none."""
    counts = Counter(judgement for judgement in judgements if judgement != "no limits")
    if not counts:
        return ""
    parts = [f"{counts[one]} {one}" for one in JUDGEMENTS if counts[one]]
    return f"Limits: {', '.join(parts)}."
