"""Numbers as they stand on pages and in the terminal: the only place that rounds.

Rounding is meaning. A figure never crosses a limit by being rounded, 0 and 100 % appear only
when they are exactly that, and where an uncertainty is known the digits follow it.

References
----------
.. [1] JCGM 100:2008, 7.2.6: u95 to two significant digits at most, the figure to the same place.
"""

from __future__ import annotations

import math
import re
from collections.abc import Sequence
from decimal import ROUND_CEILING, ROUND_FLOOR, ROUND_HALF_EVEN, Context, Decimal
from itertools import count

from reportgen.physics.quantities import Quantity

DASH = "\u2013"
MINUS = "\u2212"
INFINITE = "∞"
NOT_MEASURED = "not measured"
PLUS_MINUS = "\u00a0\u00b1\u00a0"

_EXACT = Context(prec=800)
_FIGURE_SPACE = "\u2007"
_POINT_SPACE = "\u00a0"
_POINT_LANGUAGES = frozenset({"en", "he", "hi", "ja", "ko", "ms", "th", "zh"})  # common practice


# --- numbers ---------------------------------------------------------------------------------


def number(
    value: float | None,
    decimals: int,
    *,
    u95: float | None = None,
    limits: Sequence[float] = (),
    marks: Sequence[float] = (0.0,),
    locale: str = "en",
    signed: bool = False,
) -> str:
    """A number as text, rounded so that it says nothing the number does not.

    Parameters
    ----------
    value : float or None
        None and nan print as a dash, inf as the sign for it.
    decimals : int
        Places after the point where no uncertainty is known.
    u95 : float, optional
        Half-width of the 95 % interval: its two significant digits set the places [1]_.
    limits : sequence of float
        Values whose side the text must not change.
    marks : sequence of float
        Values that appear only when exact; what would round to one prints as `< 0.01`, `> 99.9`.
    locale : str
        Language tag; sets the decimal sign.
    signed : bool
        Prints a plus sign too: for differences.
    """
    if value is None or math.isnan(value):
        return DASH
    if math.isinf(value):
        return INFINITE if value > 0 else MINUS + INFINITE
    exact, fixed = _decimal(value), [_decimal(limit) for limit in limits]
    kept = [_decimal(mark) for mark in marks]
    if not _known(u95):
        return _plain_number(exact, decimals, fixed, kept, locale, signed)
    return _written(_on_its_side(exact, _places(u95), fixed + kept), locale, signed)


def quantity_number(
    quantity: Quantity,
    value: float | None,
    *,
    u95: float | None = None,
    limits: Sequence[float] = (),
    locale: str = "en",
    signed: bool = False,
) -> str:
    """A reported quantity as text without its unit; ratios as per cent where the table says so.

    `u95` and `limits` are in the unit of `value`, before the per cent.
    """
    if not quantity.percent:
        marks = [1.0] if quantity.key == "swr" and not signed else [0.0]
        return number(
            value,
            quantity.decimals,
            u95=u95,
            limits=limits,
            marks=marks,
            locale=locale,
            signed=signed,
        )
    return number(
        None if value is None else percent_of(value),
        quantity.decimals,
        u95=None if u95 is None else percent_of(u95),
        limits=[float(_decimal(limit).scaleb(2)) for limit in limits],
        marks=[0.0, 100.0],
        locale=locale,
        signed=signed,
    )


def percent_of(ratio: float) -> float:
    """A ratio in per cent, free of the dust that multiplying by 100 leaves."""
    if not math.isfinite(ratio):
        return ratio
    return float(_decimal(ratio).scaleb(2, _EXACT))


def with_unit(text: str, unit: str) -> str:
    """A number and its unit, held together; a dash stays alone."""
    return f"{text}\u00a0{unit}" if unit and text != DASH else text


def plus_minus(
    value: float, u95: float, decimals: int, *, locale: str = "en", signed: bool = True
) -> str:
    """A difference with its 95 % half-width, both to the same place: `+0.651 \u00b1 0.045`."""
    figure = number(value, decimals, u95=u95, locale=locale, signed=signed)
    width = number(u95, decimals, u95=u95, locale=locale)
    return f"{figure}{PLUS_MINUS}{width}"


def entered(value: float, *, locale: str = "en") -> str:
    """A number that a person typed, to three places at most, without zeros that say nothing."""
    typed = _decimal(value).quantize(_step(3), ROUND_HALF_EVEN, _EXACT)
    return number(value, max(0, _fraction_places(typed)), locale=locale)


def interval(low: float, high: float, decimals: int, *, locale: str = "en") -> str:
    """A 95 % interval, rounded outwards so that it never shrinks: `0.60 to 0.70`."""
    places = _places((high - low) / 2) if _known((high - low) / 2) else decimals
    joint = DASH if low >= 0 else " to "
    return joint.join(
        _written(_decimal(end).quantize(_step(places), way, _EXACT), locale, False)
        if math.isfinite(end)
        else number(end, decimals)
        for end, way in ((low, ROUND_FLOOR), (high, ROUND_CEILING))
    )


def one_sided(low: float | None, high: float | None, decimals: int, *, locale: str = "en") -> str:
    """The one finite end of an interval, rounded away from the figure: `over 27.6`."""
    word, end, way = (
        ("over", low, ROUND_FLOOR) if low is not None else ("below", high, ROUND_CEILING)
    )
    if end is None or not math.isfinite(end):
        return DASH
    rounded = _decimal(end).quantize(_step(decimals), way, _EXACT)
    return f"{word}\u00a0{_written(rounded, locale, False)}"


def no_more_than(value: float, *, digits: int = 2, locale: str = "en") -> str:
    """What may be had at most, rounded down to so many significant digits: 17.9 as 17."""
    exact = _decimal(max(value, 0.0))
    step = _step(digits - 1 - exact.adjusted()) if exact else Decimal(1)
    return _written(exact.quantize(step, ROUND_FLOOR, _EXACT).normalize(_EXACT), locale, False)


def _plain_number(
    exact: Decimal,
    decimals: int,
    limits: list[Decimal],
    marks: list[Decimal],
    locale: str,
    signed: bool,
) -> str:
    step = _step(decimals)
    nearest = exact.quantize(step, ROUND_HALF_EVEN, _EXACT)
    if nearest in marks and exact != nearest:
        sign, edge = ("<", nearest + step) if exact > nearest else (">", nearest - step)
        return f"{sign}\u00a0{_written(edge, locale, signed)}"
    return _written(_on_its_side(exact, decimals, limits), locale, signed)


def _on_its_side(exact: Decimal, places: int, limits: list[Decimal]) -> Decimal:
    """The nearest decimal on the value's own side of every limit; more places where none is."""
    for more in count(places):
        for way in (ROUND_HALF_EVEN, ROUND_FLOOR, ROUND_CEILING):
            rounded = exact.quantize(_step(more), way, _EXACT)
            if all(_side(rounded, limit) == _side(exact, limit) for limit in limits):
                return rounded
    raise AssertionError("every float is a decimal of finite length")


def _side(value: Decimal, limit: Decimal) -> int:
    return (value > limit) - (value < limit)


def _decimal(value: float) -> Decimal:
    """The shortest decimal that reads back as this float: what a person typed."""
    return Decimal(repr(float(value)))


def _known(u95: float | None) -> bool:
    return u95 is not None and math.isfinite(u95) and u95 > 0


def _step(places: int) -> Decimal:
    return Decimal(1).scaleb(-places)


def _places(u95: float | None) -> int:
    """Places after the point that show two significant digits."""
    assert u95 is not None
    two_digits = Context(prec=2, rounding=ROUND_HALF_EVEN).plus(_decimal(u95))
    return 1 - two_digits.adjusted()


def _written(value: Decimal, locale: str, signed: bool) -> str:
    text = format(abs(value), "f").replace(".", decimal_sign(locale))
    if value < 0:
        return MINUS + text
    return "+" + text if signed and value > 0 else text


def decimal_sign(locale: str) -> str:
    """The decimal sign of a language tag: a point in English, a comma in most of Europe."""
    language = re.split("[-_]", locale.lower())[0]
    return "." if language in _POINT_LANGUAGES else ","


def aligned(texts: Sequence[str], locale: str = "en") -> tuple[str, ...]:
    """Texts of one column, padded so that right-aligned tabular figures meet at the point.

    Figures with an uncertainty meet at the sign between both.
    """
    sign = decimal_sign(locale)
    parts = [text.partition(PLUS_MINUS) for text in texts]
    figures = _padded([figure for figure, between, _ in parts if between], sign)
    widths = iter(_padded([width for _, between, width in parts if between], sign))
    joined = iter(f"{figure}{PLUS_MINUS}{next(widths)}" for figure in figures)
    whole = [
        next(joined) if between else text
        for text, (_, between, _) in zip(texts, parts, strict=True)
    ]
    return tuple(whole) if figures else _padded(whole, sign)


def _padded(texts: Sequence[str], sign: str) -> tuple[str, ...]:
    longest = max((_fraction_length(text, sign) for text in texts), default=0)
    return tuple(
        text + _padding(_fraction_length(text, sign), longest) if _ends_in_digit(text) else text
        for text in texts
    )


def _ends_in_digit(text: str) -> bool:
    return text[-1:].isdecimal()


def _fraction_length(text: str, sign: str) -> int:
    return len(text.rpartition(sign)[2]) if sign in text and _ends_in_digit(text) else 0


def _padding(length: int, longest: int) -> str:
    point = _POINT_SPACE if longest and not length else ""
    return point + _FIGURE_SPACE * (longest - length)


# --- frequencies -----------------------------------------------------------------------------


def megahertz(hz: float, *, locale: str = "en", places: int = 4) -> str:
    """A frequency in megahertz without its unit, as the trade writes it: 7.0, 14.35, 5.3515."""
    return _megahertz(_decimal(hz).scaleb(-6), places, locale)


def megahertz_range(from_hz: float, to_hz: float, *, locale: str = "en") -> str:
    """Two edges in megahertz with equally many places: 10.10 to 10.15."""
    edges = [_decimal(hz).scaleb(-6).quantize(_step(4), ROUND_HALF_EVEN) for hz in (from_hz, to_hz)]
    places = max(_places_needed(edge) for edge in edges)
    return DASH.join(_written(edge.quantize(_step(places)), locale, False) for edge in edges)


def bandwidth_range(from_hz: float, to_hz: float, *, locale: str = "en") -> str:
    """The edges of a range that was found, rounded inwards: nothing shown lies outside it."""
    low, high = (_decimal(hz).scaleb(-6) for hz in (from_hz, to_hz))
    texts = [
        _written(edge.quantize(_step(max(0, 2 - edge.adjusted())), way), locale, False)
        for edge, way in ((low, ROUND_CEILING), (high, ROUND_FLOOR))
    ]
    return DASH.join(texts)


def _megahertz(megahertz: Decimal, places: int, locale: str) -> str:
    edge = megahertz.quantize(_step(places), ROUND_HALF_EVEN)
    return _written(edge.quantize(_step(_places_needed(edge))), locale, False)


def _places_needed(value: Decimal) -> int:
    return max(1, _fraction_places(value))


def _fraction_places(value: Decimal) -> int:
    exponent = value.normalize().as_tuple().exponent
    return -exponent if isinstance(exponent, int) else 0
