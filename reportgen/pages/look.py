"""Fonts, colours and sizes: one place for style sheets and charts alike.

Two accents carry meaning: rust for what becomes heat, blue for the match. All pairs of text and
ground have a contrast of at least 4.5 to 1, lines of at least 3 to 1, in both schemes.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache
from pathlib import Path

import font_source_sans_pro

FAMILY = "Source Sans Pro"
FACES = {"Regular": 400, "Semibold": 600}


@dataclass(frozen=True, kw_only=True, slots=True)
class Scheme:
    """The colours of pages and charts on one kind of ground."""

    paper: str
    ink: str
    soft: str
    hairline: str
    shade: str
    heat: str
    match: str
    baseline: str
    series_1: str
    series_2: str
    series_3: str
    series_4: str
    series_5: str
    series_6: str


LIGHT = Scheme(
    paper="#ffffff",
    ink="#1c1e20",
    soft="#565a5f",
    hairline="#cfccc5",
    shade="#f2f0eb",
    heat="#a8400f",
    match="#1e5f8c",
    baseline="#6a6e74",
    series_1="#1e5f8c",
    series_2="#a8400f",
    series_3="#029d64",
    series_4="#9070e1",
    series_5="#3a2e09",
    series_6="#64034d",
)
DARK = Scheme(
    paper="#16181a",
    ink="#e9e7e2",
    soft="#abafb4",
    hairline="#43474c",
    shade="#212427",
    heat="#f2995f",
    match="#74b9ea",
    baseline="#9ca1a7",
    series_1="#74b9ea",
    series_2="#f2995f",
    series_3="#abd6aa",
    series_4="#857ee7",
    series_5="#877508",
    series_6="#b7669a",
)


@dataclass(frozen=True, kw_only=True, slots=True)
class Series:
    """How one of several builds on common axes is drawn, each of the three by itself enough.

    `colour` names a colour of the schemes; `dash` is on, off, on ... in line widths, empty: solid.
    """

    colour: str
    dash: tuple[float, ...]
    marker: str


SERIES = (
    Series(colour="series_1", dash=(), marker="o"),
    Series(colour="series_2", dash=(5.5, 1.8), marker="s"),
    Series(colour="series_3", dash=(1, 1.2), marker="^"),
    Series(colour="series_4", dash=(5, 1.4, 1, 1.4), marker="D"),
    Series(colour="series_5", dash=(2.2, 1.2), marker="v"),
    Series(colour="series_6", dash=(5, 1.4, 1, 1.4, 1, 1.4), marker="X"),
)

# Strength of the heat colour behind a figure, least to most, per cent. Text stays above 4.5 to 1.
TINTS = (0, 10, 20, 31, 42)


def scheme_names() -> tuple[str, ...]:
    """Names of the colours, as in `Scheme`; a style sheet calls them `--name`."""
    return tuple(Scheme.__dataclass_fields__)


def style_variables(scheme: Scheme) -> str:
    """The colours and the tints as custom properties of a style sheet."""
    colours = {name: getattr(scheme, name) for name in scheme_names()}
    tints = {f"tint-{level}": tint(scheme, level) for level in range(len(TINTS))}
    return "".join(f"--{name}:{colour};" for name, colour in (colours | tints).items())


def tint(scheme: Scheme, level: int) -> str:
    """The ground of a figure: so much of the heat colour on paper."""
    share = TINTS[level] / 100
    pairs = zip(_channels(scheme.heat), _channels(scheme.paper), strict=True)
    return "#" + "".join(
        f"{round(share * heat + (1 - share) * paper):02x}" for heat, paper in pairs
    )


def _channels(colour: str) -> tuple[int, ...]:
    return tuple(bytes.fromhex(colour.removeprefix("#")))


def tint_rules() -> str:
    """One class for each strength of tint: `tint-0` to `tint-4`."""
    return "".join(
        f".tint-{level}{{background:var(--tint-{level})}}" for level in range(len(TINTS))
    )


def font_path(face: str) -> Path:
    """The font file of one face."""
    return Path(font_source_sans_pro.font_directory) / f"SourceSansPro-{face}.ttf"


@cache
def font_bytes(face: str) -> bytes:
    """The font of one face, read once."""
    return font_path(face).read_bytes()
