"""How a unit was connected, drawn: one small circuit for each set-up.

Symbols as is common practice after IEC 60617: boxes for ports and resistors, arcs and core lines
for the transformer, rings for an open end.
"""

from __future__ import annotations

from collections.abc import Callable
from functools import cache

from reportgen.model import Setup
from reportgen.pages.canvas import Chart
from reportgen.pages.look import FAMILY, LIGHT
from reportgen.pages.wording import SETUP_NAMES

WIDTH, HEIGHT = 260, 110
_SIGNAL, _RETURN = 34, 82
_MIDDLE = (_SIGNAL + _RETURN) / 2
_LETTERS = 11
_LABEL_Y = 18
_FOOT_Y = 104
_LEFT, _RIGHT = 22, WIDTH - 22
_ARC = {"low": (3, 5.0), "high": (4, 6.0)}
"""Arcs of a coil, and their radius."""

Place = tuple[float, float]


def setup_picture(setup: Setup) -> str:
    """Name of the picture of a set-up."""
    return f"setup-{setup.value}"


@cache
def draw_setup(setup: Setup) -> Chart:
    """The circuit of a set-up with a title and the same in words; wide and narrow are one."""
    shapes, alt = _CIRCUITS[setup]
    svg = (
        f'<svg xmlns="http://www.w3.org/2000/svg" width="{WIDTH}" '
        f'height="{HEIGHT}" viewBox="0 0 {WIDTH} {HEIGHT}" stroke-linejoin="round" '
        f'stroke-linecap="round">\n{shapes()}\n</svg>'
    )
    title = SETUP_NAMES[setup]
    title = title[0].upper() + title[1:]
    return Chart(name=setup_picture(setup), title=title, alt=alt, svg=svg, narrow_svg=svg)


# --- pen ---------------------------------------------------------------------------------------


def _path(steps: str, *, fill: str = "none") -> str:
    return f'<path d="{steps}" fill="{fill}" stroke="{LIGHT.ink}" stroke-width="1.2"/>'


def _wire(*places: Place) -> str:
    return _path("M " + " L ".join(f"{x:g} {y:g}" for x, y in places))


def _box(centre: Place, width: float, height: float) -> str:
    x, y = centre
    return _path(
        f"M {x - width / 2:g} {y - height / 2:g} h {width:g} v {height:g} h {-width:g} z",
        fill=LIGHT.paper,
    )


def _ring(x: float, y: float, radius: float, fill: str) -> str:
    return (
        f'<circle cx="{x:g}" cy="{y:g}" r="{radius:g}" fill="{fill}" stroke="{LIGHT.ink}" '
        'stroke-width="1.2"/>'
    )


def _text(x: float, y: float, text: str, *, colour: str = LIGHT.soft) -> str:
    return (
        f'<text x="{x:g}" y="{y:g}" text-anchor="middle" fill="{colour}" '
        f"style=\"font-size: {_LETTERS}px; font-family: '{FAMILY}'\">{text}</text>"
    )


# --- symbols -----------------------------------------------------------------------------------


def _rails(left: float, right: float) -> str:
    """Signal and return, from one place to another."""
    return _wire((left, _SIGNAL), (right, _SIGNAL)) + _wire((left, _RETURN), (right, _RETURN))


def _port(x: float, sign: str, name: str = "") -> str:
    """A port of the analyzer with its number, or another instrument with its sign and name."""
    box = _box((x, _MIDDLE), 28, _RETURN - _SIGNAL + 16)
    inside = _text(x, _MIDDLE + 4, sign, colour=LIGHT.ink)
    return box + inside + _text(x, _LABEL_Y, name or f"port {sign}")


def _coil(x: float, side: str, towards: int) -> str:
    """A winding from rail to rail, its arcs towards the core (1: to the right)."""
    count, radius = _ARC[side]
    lead = (_RETURN - _SIGNAL - 2 * radius * count) / 2
    arc = f"a {radius:g} {radius:g} 0 0 {1 if towards > 0 else 0} 0 {2 * radius:g} "
    return _path(f"M {x:g} {_SIGNAL} v {lead:g} {arc * count}v {lead:g}")


def _transformer(x: float, *, low_left: bool = True, unit: str = "") -> str:
    """A unit about `x`: two windings, core lines between, its sides named."""
    sides = ("low", "high") if low_left else ("high", "low")
    core = [_wire((x + step, _SIGNAL + 5), (x + step, _RETURN - 5)) for step in (-2, 2)]
    coils = _coil(x - 13, sides[0], 1) + _coil(x + 13, sides[1], -1)
    names = _text(x - 19, _FOOT_Y, sides[0]) + _text(x + 19, _FOOT_Y, sides[1])
    return coils + "".join(core) + names + (_text(x, _LABEL_Y, unit) if unit else "")


def _resistor_across(x: float, name: str) -> str:
    """A resistor between the rails."""
    box = _box((x, _MIDDLE), 11, 28)
    return _wire((x, _SIGNAL), (x, _RETURN)) + box + _text(x, _LABEL_Y, name)


def _resistor_along(x: float, name: str) -> str:
    """A resistor in the signal rail."""
    return _box((x, _SIGNAL), 30, 11) + _text(x, _LABEL_Y, name)


def _open_end(x: float) -> str:
    return _ring(x, _SIGNAL, 2.6, LIGHT.paper) + _ring(x, _RETURN, 2.6, LIGHT.paper)


def _antenna(x: float) -> str:
    """A mast with its arms, and earth."""
    mast = _wire((x, _SIGNAL), (x, 8)) + _path(f"M {x - 11} 8 L {x} 22 L {x + 11} 8")
    earth = _wire((x, _RETURN), (x, _RETURN + 8))
    bars = [
        _wire((x - half, _RETURN + 8 + drop), (x + half, _RETURN + 8 + drop))
        for half, drop in ((10, 0), (6.5, 4), (3, 8))
    ]
    return mast + earth + "".join(bars)


# --- circuits ----------------------------------------------------------------------------------


def _pair() -> str:
    """Two units, their high sides joined."""
    joined = _transformer(88, unit="unit") + _transformer(172, low_left=False, unit="other unit")
    return _rails(_LEFT, 75) + _rails(101, 159) + _rails(185, _RIGHT) + joined


def _back_to_back() -> str:
    return _pair() + _port(_LEFT, "1") + _port(_RIGHT, "2")


def _spot() -> str:
    return _pair() + _port(_LEFT, "~", "source") + _port(_RIGHT, "dB", "reading")


def _one_port(end: str) -> Callable[[], str]:
    """A unit on port 1 with something on its high side."""
    ends = {
        "load": lambda: _resistor_across(206, "known R"),
        "open": lambda: _open_end(206) + _text(206, _LABEL_Y, "open"),
        "short": lambda: _wire((206, _SIGNAL), (206, _RETURN)) + _text(206, _LABEL_Y, "short"),
    }
    return lambda: (
        _rails(_LEFT, 107) + _rails(133, 206) + _transformer(120) + _port(_LEFT, "1") + ends[end]()
    )


def _two_port(between: str) -> str:
    return _rails(_LEFT, _RIGHT) + between + _port(_LEFT, "1") + _port(_RIGHT, "2")


def _series_resistor() -> str:
    wires = _rails(_LEFT, 81) + _rails(107, _RIGHT)
    parts = _transformer(94) + _resistor_along(164, "known R")
    return wires + parts + _port(_LEFT, "1") + _port(_RIGHT, "2")


def _direct() -> str:
    wires = _rails(_LEFT, 117) + _rails(143, _RIGHT)
    return wires + _transformer(130) + _port(_LEFT, "1") + _port(_RIGHT, "2")


def _load_check() -> str:
    return _rails(_LEFT, 150) + _resistor_across(150, "known R") + _port(_LEFT, "1")


def _antenna_alone() -> str:
    return _rails(_LEFT, 150) + _antenna(150) + _port(_LEFT, "1")


_ON_PORT_1 = "Port 1 of the analyzer is on the low side of the unit"
_CIRCUITS: dict[Setup, tuple[Callable[[], str], str]] = {
    Setup.BACK_TO_BACK: (
        _back_to_back,
        "Port 1 of the analyzer is on the low side of one unit, the high sides of both units are "
        "joined, and the low side of the other unit is on port 2.",
    ),
    Setup.SPOT: (
        _spot,
        "A source feeds the low side of one unit, the high sides of both units are joined, and "
        "the through loss is read at the low side of the other.",
    ),
    Setup.LOAD: (
        _one_port("load"),
        f"{_ON_PORT_1}; a known resistor is across its high side.",
    ),
    Setup.OPEN: (_one_port("open"), f"{_ON_PORT_1}; its high side is open."),
    Setup.SHORT: (_one_port("short"), f"{_ON_PORT_1}; its high side is shorted."),
    Setup.SERIES_RESISTOR: (
        _series_resistor,
        f"{_ON_PORT_1}; its high side leads through a known resistor in series to port 2.",
    ),
    Setup.DIRECT: (_direct, f"{_ON_PORT_1}; its high side is on port 2."),
    Setup.LOAD_CHECK: (
        _load_check,
        "The bare load resistor is on port 1 of the analyzer, without a unit.",
    ),
    Setup.RESISTOR_CHECK: (
        lambda: _two_port(_resistor_along(WIDTH / 2, "known R")),
        "The bare series resistor is between port 1 and port 2 of the analyzer, without a unit.",
    ),
    Setup.THRU_CHECK: (
        lambda: _two_port(_text(WIDTH / 2, _LABEL_Y, "fixture")),
        "The fixture joins port 1 and port 2 of the analyzer, without a unit.",
    ),
    Setup.ANTENNA: (
        _antenna_alone,
        "An antenna is on port 1 of the analyzer, without a unit.",
    ),
}
