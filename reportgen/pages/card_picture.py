"""The card as a picture: wide and square, for a listing. All places are fixed, text is measured."""

from __future__ import annotations

from dataclasses import dataclass

from reportgen.pages.card_chart import FOOT_LINES, HEAD_LINES, BandPlace, draw_bands, rows_shown
from reportgen.pages.drawing import Drawing, Letters, drawable_text, new_drawing
from reportgen.pages.kit_words import SHORT_CAUTION, SIMULATED, KitWords, below_headline, card_facts
from reportgen.pages.line_breaks import broken, first_lines
from reportgen.pages.look import LIGHT

_LINE = 1.28
_LEAST_CHART = 480.0
_CAPITALS = 0.66
"""Height of capitals over the size of letters."""


@dataclass(frozen=True, kw_only=True, slots=True)
class Plan:
    """Where things stand in a picture, and how large its letters are [px]."""

    width: int
    height: int
    margin: int
    column: int
    names: tuple[tuple[int, int], ...]
    ratio: int
    figure: int
    text: int
    facts: tuple[tuple[int, int], ...]
    small: int
    chart_left: int
    chart_letters: int
    tallest_row: int
    words_beside: bool

    @property
    def inner(self) -> int:
        """Width between the margins."""
        return self.width - 2 * self.margin


WIDE = Plan(
    width=1200,
    height=630,
    margin=56,
    column=440,
    names=((60, 1), (46, 2), (34, 3)),
    ratio=25,
    figure=68,
    text=19,
    facts=((17, 2), (16, 2), (15, 2), (14, 1)),
    small=16,
    chart_left=556,
    chart_letters=19,
    tallest_row=44,
    words_beside=False,
)
SQUARE = Plan(
    width=1200,
    height=1200,
    margin=72,
    column=1056,
    names=((84, 1), (60, 2), (44, 3)),
    ratio=34,
    figure=112,
    text=26,
    facts=((22, 2), (20, 2), (18, 1)),
    small=21,
    chart_left=72,
    chart_letters=24,
    tallest_row=48,
    words_beside=True,
)


def draw_wide(words: KitWords, locale: str) -> Drawing:
    """The picture of 1200 by 630: words on the left, the bands on the right."""
    plan, drawing = WIDE, new_drawing(WIDE.width, WIDE.height)
    foot = _draw_foot(drawing, words, plan)
    name, y = _draw_name(drawing, words, plan)
    below = _draw_headline(drawing, words, plan, y + 2.4 * plan.text)
    _draw_facts(drawing, words, plan, below + 0.6 * plan.text, foot)
    top = plan.margin - 8 if name <= plan.column else y - plan.ratio
    _draw_chart(drawing, words, plan, (top, foot - 0.5 * plan.chart_letters), locale)
    return drawing


def draw_square(words: KitWords, locale: str) -> Drawing:
    """The picture of 1200 by 1200: everything below each other."""
    plan, drawing = SQUARE, new_drawing(SQUARE.width, SQUARE.height)
    foot = _draw_foot(drawing, words, plan)
    _, y = _draw_name(drawing, words, plan)
    below = _draw_headline(drawing, words, plan, y + 2.4 * plan.text)
    chart = below + 1.4 * plan.text
    facts = _draw_facts(drawing, words, plan, chart + _LEAST_CHART, foot)
    _draw_chart(drawing, words, plan, (chart, facts - plan.text), locale)
    return drawing


# --- name and headline -------------------------------------------------------------------------


def _draw_name(drawing: Drawing, words: KitWords, plan: Plan) -> tuple[float, float]:
    """Name and ratio; the room that the name was given, and the baseline of the last line."""
    letters, lines, room = _name_lines(drawable_text(words.name), plan)
    top = plan.margin + _CAPITALS * letters.size
    line = 1.1 * letters.size
    y = drawing.write_lines((plan.margin, top), lines, letters, line) - line
    y += 0.28 * letters.size + 0.95 * plan.ratio
    soft = Letters(size=plan.ratio, colour=LIGHT.soft)
    ratio = broken(f"{words.ratio}, {words.turns}", plan.column, soft.width)
    drawing.write_lines((plan.margin, y), first_lines(ratio, 1, plan.column, soft.width), soft, 0)
    return room, y


def _name_lines(name: str, plan: Plan) -> tuple[Letters, list[str], float]:
    """The name in the largest letters in which it fits and no word of it is broken.

    A name that does not fit the column goes over the whole width, and is cut there.
    """
    tries = [(size, most, plan.column) for size, most in plan.names]
    for size, most, room in (*tries, (plan.names[-1][0], 3, plan.inner)):
        letters = Letters(size=size, face="Semibold")
        lines = broken(name, room, letters.width)
        if len(lines) <= most and " ".join(lines) == name:
            break
    return letters, first_lines(lines, most, room, letters.width), room


def _draw_headline(drawing: Drawing, words: KitWords, plan: Plan, y: float) -> float:
    """The efficiency, large, and how sure it is; the baseline of the last line."""
    soft = Letters(size=plan.text, colour=LIGHT.soft)
    label = words.headline.label
    drawing.write((plan.margin, y), label, soft)
    if words.simulated:
        mark = Letters(size=plan.text, face="Semibold", colour=LIGHT.heat)
        after = plan.margin + soft.width(label) + plan.text
        drawing.write((after, y), SIMULATED[0].rstrip("."), mark)
    size = plan.figure if words.drawn == "efficiency_ratio" else 0.62 * plan.figure
    y += 0.35 * plan.text + 0.86 * size
    figure = Letters(size=size, face="Semibold")
    drawing.write((plan.margin, y), words.headline.figure.capitalize(), figure)
    step = _LINE * plan.text
    x = float(plan.margin)
    if plan.words_beside:
        x += figure.width(words.headline.figure) + plan.text
    room = plan.margin + plan.column - x
    below = [drawable_text(line) for line in below_headline(words)]
    lines = [part for line in below for part in broken(line, room, soft.width)]
    kept = first_lines(lines, 3, room, soft.width)
    first = y - (len(kept) - 1) * step if plan.words_beside else y + 0.2 * plan.text + step
    return max(y, drawing.write_lines((x, first), kept, soft, step) - step)


# --- facts and foot ----------------------------------------------------------------------------


_Line = tuple[str, str, str]


def _draw_facts(drawing: Drawing, words: KitWords, plan: Plan, top: float, bottom: float) -> float:
    """The facts, the last line above `bottom`, in the largest letters that fit; where they begin.

    What a power holds for is never cut.
    """
    for size, most in plan.facts:
        label_width = Letters(size=size).width("Worst SWR") + 1.2 * size
        lines = _fact_lines(words, Letters(size=size), plan.column - label_width, most)
        start = bottom - (len(lines) * _LINE + 0.8) * size
        if start >= top:
            break
    y = start
    for label, text, accent in lines:
        y += _LINE * size
        if label:
            drawing.write((plan.margin, y), label, Letters(size=size, colour=LIGHT.soft))
        letters = Letters(size=size, colour=getattr(LIGHT, accent))
        drawing.write((plan.margin + label_width, y), text, letters)
    return start


def _fact_lines(words: KitWords, letters: Letters, room: float, most: int) -> list[_Line]:
    """The facts in lines: label (on the first of each), words, accent."""
    found: list[_Line] = []
    for label, text, accent in card_facts(words):
        lines = broken(drawable_text(text), room, letters.width)
        if label != "Power":
            lines = first_lines(lines, most, room, letters.width)
        found += [("" if index else label, one, accent) for index, one in enumerate(lines)]
    return found


def _draw_foot(drawing: Drawing, words: KitWords, plan: Plan) -> float:
    """Who publishes it, and what to mind, below a line; the height of that line."""
    size = plan.small
    step, room = _LINE * size, 0.3 * plan.inner
    bold = Letters(size=size, face="Semibold", colour=LIGHT.soft)
    soft = Letters(size=size, colour=LIGHT.soft)
    names = broken(drawable_text(words.publisher), room, bold.width)
    names = first_lines(names, 2, room, bold.width)
    left = plan.margin + room + plan.text
    caution = broken(SHORT_CAUTION, plan.width - plan.margin - left, soft.width)
    y = plan.height - 0.8 * plan.margin - (max(len(names), len(caution)) - 1) * step
    top = y - 1.8 * size
    drawing.rules([((plan.margin, top), (plan.width - plan.margin, top))], LIGHT.ink, 1.0)
    drawing.write_lines((plan.margin, y), names, bold, step)
    drawing.write_lines((left, y), caution, soft, step)
    return top


def _draw_chart(
    drawing: Drawing, words: KitWords, plan: Plan, between: tuple[float, float], locale: str
) -> None:
    top, bottom = between
    lines = HEAD_LINES + FOOT_LINES
    row = min(plan.tallest_row, (bottom - top - lines * plan.chart_letters) / rows_shown(words))
    place = BandPlace(
        left=plan.chart_left,
        top=top,
        width=plan.width - plan.margin - plan.chart_left,
        letters=min(plan.chart_letters, row / 1.25),
        row=row,
    )
    draw_bands(drawing, words, place, locale)
