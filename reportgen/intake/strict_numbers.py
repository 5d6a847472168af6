"""What counts as a number in a sweep file: plain ASCII, and the ways of writing none."""

from __future__ import annotations

import math
import re

_NUMBER = re.compile(r"[+-]?(?:\d+(?:\.\d*)?|\.\d+)(?:[eEdD][+-]?\d+)?", re.ASCII)
_COMMA_NUMBER = re.compile(r"[+-]?(?:\d+(?:,\d*)?|,\d+)(?:[eEdD][+-]?\d+)?", re.ASCII)
_NO_VALUE = re.compile(
    r"(?P<sign>[+-]?)(?:(?P<infinite>inf|infinity|1\.?#inf0*)"
    r"|nan(?:\([a-z0-9]*\))?|1\.?#(?:ind|qnan|snan)0*)",
    re.ASCII | re.IGNORECASE,
)


def read_number(token: str, decimal: str = ".") -> float | None:
    """Value of a token, nan or infinite where it is written so; None when it is no number.

    Takes ASCII digits, one decimal sign, and an exponent after E or D. What other readers let
    pass (`1_000`, digits of other scripts, a Unicode minus) is no number.

    Parameters
    ----------
    token : str
        Text without blanks.
    decimal : "." or ","
        The decimal sign.
    """
    if (_NUMBER if decimal == "." else _COMMA_NUMBER).fullmatch(token):
        plain = token.replace(",", ".").replace("d", "e").replace("D", "e")
        return float(plain)
    return _unusual_number(token)


def _unusual_number(token: str) -> float | None:
    match = _NO_VALUE.fullmatch(token)
    if match is None:
        return None
    value = math.inf if match["infinite"] else math.nan
    return -value if match["sign"] == "-" else value


def has_d_exponent(token: str) -> bool:
    """Whether a number is written as FORTRAN does, `1D6`."""
    return ("d" in token or "D" in token) and _NUMBER.fullmatch(token.replace(",", ".")) is not None


def is_decimal_comma(token: str) -> bool:
    """Whether a token is a number with a comma where a point belongs."""
    return "," in token and _COMMA_NUMBER.fullmatch(token) is not None
