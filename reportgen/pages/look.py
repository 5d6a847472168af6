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


LIGHT = Scheme(
    paper="#ffffff",
    ink="#1c1e20",
    soft="#565a5f",
    hairline="#cfccc5",
    shade="#f2f0eb",
    heat="#a8400f",
    match="#1e5f8c",
    baseline="#6a6e74",
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
