"""Pages to paper: tagged PDF from a page's text, with charts and letters served from memory."""

from __future__ import annotations

import atexit
import gc
import logging
from collections.abc import Iterator, Mapping
from contextlib import contextmanager
from functools import cache
from typing import TYPE_CHECKING, Any

from reportgen.errors import OutputError
from reportgen.pages.canvas import drawable
from reportgen.pages.html import font_face
from reportgen.pages.look import FACES, LIGHT, font_bytes, style_variables
from reportgen.pages.templates import read_style

if TYPE_CHECKING:
    from weasyprint import CSS
    from weasyprint.text.fonts import FontConfiguration

ASSET = "asset:"
_NO_LETTER = ".notdef glyph"
_FIRST_BEYOND_ASCII = 128
_LIBRARIES = "libpango-1.0-0 libpangoft2-1.0-0 libharfbuzz-subset0"


def write_pdf(page: str, pictures: Mapping[str, str], paper: str) -> bytes:
    """A page as PDF: tagged, the same bytes for the same page.

    Parameters
    ----------
    page : str
        The page; its pictures are named `asset:NAME`.
    pictures : mapping of str to str
        SVG by name.
    paper : str
        `A4` or `Letter`.

    Raises
    ------
    OutputError
        The page asks for anything else than these pictures, or could not be set without a
        complaint.
    """
    pdf, complaints = _set_page(page, pictures, paper)
    if any(_NO_LETTER in complaint for complaint in complaints):
        pdf, complaints = _set_page(_with_letters_there_are(page), pictures, paper)
    if complaints:
        raise OutputError(f"the page could not be set: {complaints[0]}")
    return pdf


def _with_letters_there_are(page: str) -> str:
    """The page with letters that the font lacks shown by their code points, `[U+6F22]`."""
    return "".join(
        letter
        if ord(letter) < _FIRST_BEYOND_ASCII or ord(letter) in drawable()
        else f"[U+{ord(letter):04X}]"
        for letter in page
    )


def _set_page(page: str, pictures: Mapping[str, str], paper: str) -> tuple[bytes, list[str]]:
    """The PDF, and what the renderer complains of."""
    weasyprint = _weasyprint()
    assets = {name: (svg.encode(), "image/svg+xml") for name, svg in pictures.items()}
    fetcher = _fetcher_class()(assets)
    styles = [_paper_style(), weasyprint.CSS(string=f"@page{{size:{paper} portrait}}")]
    with _complaints() as complaints:
        document = weasyprint.HTML(string=page, base_url=None, url_fetcher=fetcher)
        pdf = document.write_pdf(
            stylesheets=styles,
            font_config=_font_configuration(),
            pdf_variant="pdf/ua-1",
            finisher=_mend_tags,
        )
    if fetcher.refused:
        raise OutputError(f"the page asks for {fetcher.refused[0]!r}, which is not part of it")
    return bytes(pdf), complaints


def _mend_tags(_: Any, pdf: Any) -> None:
    """Heads of tables by their scope, and lists in lists where the renderer groups items.

    Its own links from cells to heads go astray below a head that spans rows.
    """
    for element in pdf.objects:
        kind = element.get("S") if isinstance(element, dict) else None
        if kind == "/TH":
            group = _parent(pdf, _parent(pdf, element))
            element["A"]["Scope"] = "/Column" if group["S"] == "/THead" else "/Row"
            element.pop("ID", None)
        elif kind == "/TD":
            element["A"].pop("Headers", None)
        elif kind == "/Div" and _parent(pdf, element)["S"] == "/L":
            element["S"] = "/L"


def _parent(pdf: Any, element: Any) -> Any:
    number, _, _ = element["P"].split()  # a reference: "12 0 R"
    return pdf.objects[int(number)]


@cache
def _weasyprint() -> Any:
    try:
        import weasyprint
    except OSError as error:
        raise OutputError(
            f"PDF pages need system libraries that are missing; on Debian and Ubuntu: "
            f"apt-get install --no-install-recommends {_LIBRARIES}"
        ) from error
    return weasyprint


@cache
def _font_configuration() -> FontConfiguration:
    """One for the whole process: a new one for each document would pile up in memory."""
    from weasyprint.text.fonts import FontConfiguration

    atexit.register(_release_fonts)
    return FontConfiguration()


def _release_fonts() -> None:
    """Let go of the fonts while they can still be cleaned up."""
    _paper_style.cache_clear()
    _font_configuration.cache_clear()
    gc.collect()


@cache
def _paper_style() -> CSS:
    """The style sheet of paper, its fonts loaded once."""
    faces = "".join(font_face(face, f"{ASSET}{face}") for face in FACES)
    fonts = {face: (font_bytes(face), "font/ttf") for face in FACES}
    root = f":root{{{style_variables(LIGHT)}}}"
    rules = faces + root + read_style("shared.css") + read_style("paper.css")
    with _complaints() as complaints:
        style = _weasyprint().CSS(
            string=rules, font_config=_font_configuration(), url_fetcher=_fetcher_class()(fonts)
        )
    if complaints:
        raise OutputError(f"the style sheet of paper is faulty: {complaints[0]}")
    return style


@cache
def _fetcher_class() -> Any:
    """The class of fetchers that serve assets from memory; made late, as its base is slow to load.

    Refusals inside pictures are swallowed by the renderer, so each is kept in `refused`.
    """
    _weasyprint()
    from weasyprint.urls import URLFetcher, URLFetcherResponse

    class AssetFetcher(URLFetcher):  # type: ignore[misc]
        def __init__(self, assets: Mapping[str, tuple[bytes, str]]) -> None:
            super().__init__(allowed_protocols=frozenset())
            self.assets = assets
            self.refused: list[str] = []

        def fetch(self, url: str, headers: object = None) -> Any:  # noqa: ARG002  (its base has it)
            name = url.removeprefix(ASSET)
            if not url.startswith(ASSET) or name not in self.assets:
                self.refused.append(url)
                raise ValueError(f"refused: {url}")
            body, kind = self.assets[name]
            return URLFetcherResponse(url, body, {"Content-Type": kind})

    return AssetFetcher


class _Collector(logging.Handler):
    def __init__(self) -> None:
        super().__init__(logging.WARNING)
        self.messages: list[str] = []

    def emit(self, record: logging.LogRecord) -> None:
        self.messages.append(record.getMessage())


@contextmanager
def _complaints() -> Iterator[list[str]]:
    """What the renderer complains of meanwhile; it would only go to a log."""
    collector, logger = _Collector(), logging.getLogger("weasyprint")
    logger.addHandler(collector)
    try:
        yield collector.messages
    finally:
        logger.removeHandler(collector)
