"""The shape of a table on a page: what a template needs to know, all of it text."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

from reportgen.pages.display import aligned

_FEW_COLUMNS = 6
_SHORT_NAME = 6


@dataclass(frozen=True, kw_only=True, slots=True)
class Cell:
    """One figure or a few words; `look` names a class of the style sheet."""

    text: str
    look: str = ""


@dataclass(frozen=True, kw_only=True, slots=True)
class Row:
    """One line. `head` None: the head above goes on over it; `words` fill the rest of the line."""

    head: str | None
    cells: tuple[Cell, ...] = ()
    sub: str | None = None
    head_rows: int = 1
    link: str | None = None
    words: str | None = None
    words_columns: int = 1


@dataclass(frozen=True, kw_only=True, slots=True)
class Column:
    """A column's head, and the unit that stands under it; words stand left, figures right.

    `wide`: its figures stand beside their intervals.
    """

    label: str
    unit: str = ""
    words: bool = False
    wide: bool = False

    @property
    def look(self) -> str:
        """A class of the style sheet."""
        return "words" if self.words else "figure wide" if self.wide else "figure"


@dataclass(frozen=True, kw_only=True, slots=True)
class Table:
    """A table; the rows of one group stay together on a page.

    `long_heads`: its rows begin with a few words, not with a band's name.
    """

    caption: str
    corner: str
    columns: tuple[Column, ...]
    groups: tuple[tuple[Row, ...], ...]
    sub: str | None = None
    long_heads: bool = False

    @property
    def kind(self) -> str:
        """How it is set: words, figures after words, many columns of figures or a few."""
        if all(column.words for column in self.columns):
            return "words"
        if self.long_heads:
            return "heads"
        return "figures" if len(self.columns) > _FEW_COLUMNS else "few"


def band_column(name: str) -> Column:
    """A column of one band: a short name stays on one line."""
    return Column(label=name if len(name) > _SHORT_NAME else name.replace(" ", "\u00a0"))


def figures(texts: Sequence[str], look: str = "") -> tuple[Cell, ...]:
    """Cells of one row that look alike."""
    return tuple(Cell(text=text, look=look) for text in texts)


def with_points_aligned(table: Table, locale: str) -> Table:
    """The same table, its columns of figures padded so that decimal points meet."""
    rows = [row for group in table.groups for row in group if row.cells]
    columns = list(zip(*(row.cells for row in rows), strict=True))
    texts = [
        [cell.text for cell in cells]
        if column.words
        else aligned([cell.text for cell in cells], locale)
        for column, cells in zip(table.columns, columns, strict=False)
    ]
    padded = iter(zip(*texts, strict=True))
    groups = tuple(
        tuple(_with_texts(row, next(padded)) if row.cells else row for row in group)
        for group in table.groups
    )
    return replace(table, groups=groups)


def _with_texts(row: Row, texts: tuple[str, ...]) -> Row:
    cells = tuple(replace(cell, text=text) for cell, text in zip(row.cells, texts, strict=True))
    return replace(row, cells=cells)
