"""How the figures of a build moved from one publishing to the next, in one line."""

from __future__ import annotations

from reportgen.model import Figure, MeasuredBand
from reportgen.pages.display import NOT_MEASURED, quantity_number
from reportgen.physics.quantities import BY_KEY, Quantity
from reportgen.published import PublishedBuild

ARROW = " -> "
_MAIN = ("heat_loss_db", "swr")
_MOST_BANDS = 4


def figure_moves(before: PublishedBuild, after: PublishedBuild) -> str:
    """The main figure of each band where it now reads otherwise; empty where it reads the same.

    Heat loss, or the worst SWR of a build whose loss was not measured.
    """
    quantity = next((BY_KEY[key] for key in _MAIN if _values(after, key)), BY_KEY[_MAIN[0]])
    old, new = (_texts(build, quantity) for build in (before, after))
    moves = [
        f"{band} {quantity_words(quantity)} {_move(old.get(band, NOT_MEASURED), text, quantity)}"
        for band, text in new.items()
        if old.get(band, NOT_MEASURED) != text
    ]
    more = f" and {len(moves) - _MOST_BANDS} more bands" if len(moves) > _MOST_BANDS else ""
    return ", ".join(moves[:_MOST_BANDS]) + more


def _move(before: str, after: str, quantity: Quantity) -> str:
    unit = "" if after == NOT_MEASURED else quantity.unit
    return f"{before}{ARROW}{after} {unit}".rstrip()


def quantity_words(quantity: Quantity) -> str:
    """Name of a quantity within a sentence."""
    return quantity.label if quantity.label.isupper() else quantity.label.lower()


def _values(build: PublishedBuild, key: str) -> dict[str, Figure]:
    measured = (band for band in build.bands if isinstance(band, MeasuredBand))
    return {band.band.name: band.figures[key] for band in measured if key in band.figures}


def _texts(build: PublishedBuild, quantity: Quantity) -> dict[str, str]:
    """The figure of every band as it prints; bands without one are not measured."""
    found = {band.band.name: NOT_MEASURED for band in build.bands}
    for band, figure in _values(build, quantity.key).items():
        found[band] = _text(quantity, figure)
    return found


def _text(quantity: Quantity, figure: Figure) -> str:
    value = figure.worst if quantity.key == "swr" else figure.mean
    u95 = None
    if quantity.key != "swr" and figure.low95 is not None and figure.high95 is not None:
        u95 = (figure.high95 - figure.low95) / 2
    return quantity_number(quantity, value, u95=u95)
