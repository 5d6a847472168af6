"""What makes a page stand alone: its style sheet, its letters, its drawings, all within it."""

from __future__ import annotations

import base64
import hashlib
import io
import re
from dataclasses import dataclass
from functools import cache

from fontTools import subset
from fontTools.ttLib import TTFont
from markupsafe import Markup

from reportgen.pages.look import (
    DARK,
    FACES,
    FAMILY,
    LIGHT,
    font_path,
    scheme_names,
    style_variables,
    tint_rules,
)
from reportgen.pages.templates import read_style

# Western and central European letters, figures, and the signs that pages use.
_REPERTOIRE = (
    *range(0x20, 0x7F),
    *range(0xA0, 0x180),
    *range(0x2007, 0x200B),
    *range(0x2010, 0x2027),
    *(0x3A9, 0x3BC, 0x20AC, 0x2126, 0x2212, 0x221E, 0x2264, 0x2265, 0x25B2, 0x25BC),
)


@cache
def page_style() -> Markup:
    """The style sheet of pages for a screen, letters included; it holds nothing foreign."""
    faces = "".join(font_face(face, f"data:font/ttf;base64,{_font_base64(face)}") for face in FACES)
    light, dark = style_variables(LIGHT), style_variables(DARK)
    schemes = (
        f":root{{color-scheme:light dark;{light}}}"
        f"@media screen and (prefers-color-scheme:dark){{:root{{{dark}}}}}"
    )
    rules = read_style("shared.css") + read_style("screen.css") + tint_rules()
    return Markup(faces + schemes + rules)  # our own style sheets and fonts only


@dataclass(frozen=True, kw_only=True, slots=True)
class Script:
    """A script of our own, and what a page's policy names it by."""

    text: Markup
    source: str


@cache
def page_script(name: str) -> Script:
    """A script from the folder of templates, for use within a page."""
    text = read_style(name)
    digest = base64.b64encode(hashlib.sha256(text.encode("utf-8")).digest()).decode("ascii")
    return Script(text=Markup(text), source=f"sha256-{digest}")  # nothing foreign in it


def font_face(face: str, url: str) -> str:
    """The rule that names one face of the family."""
    return (
        f'@font-face{{font-family:"{FAMILY}";font-weight:{FACES[face]};'
        f'src:url("{url}") format("truetype")}}\n'
    )


def _font_base64(face: str) -> str:
    return base64.b64encode(_small_font(face)).decode("ascii")


def _small_font(face: str) -> bytes:
    """One face cut down to the repertoire; the same bytes each time."""
    options = subset.Options()
    options.hinting = False
    options.name_IDs = []
    options.drop_tables += ["GSUB", "GPOS", "GDEF"]  # most of the time and a third of the size
    with TTFont(font_path(face), lazy=True, recalcTimestamp=False) as font:
        cutter = subset.Subsetter(options)
        cutter.populate(unicodes=_REPERTOIRE)
        cutter.subset(font)
        buffer = io.BytesIO()
        font.save(buffer)
    return buffer.getvalue()


_ID = re.compile(r'(\bid="|url\(#|href="#)')
_SIZE = re.compile(r'(<svg[^>]*?) width="[^"]*" height="[^"]*"')


def inline_svg(svg: str, prefix: str) -> Markup:
    """A chart for use within a page: no identifier of another one, colours of the page's scheme."""
    own = _ID.sub(lambda found: f"{found[1]}{prefix}-", _SIZE.sub(r"\1", svg, count=1))
    for name in scheme_names():
        own = own.replace(getattr(LIGHT, name), f"var(--{name})")
    return Markup(own)  # drawn by this program; the text in it is paths
