"""Published PDFs: what PDF/UA-1 asks for and a program can check, small, in reading order.

ISO 14289-1:2014 (PDF/UA-1), clauses beside the checks from memory; structure types and their
attributes: ISO 32000-1:2008, 14.7 and 14.8.
"""

from __future__ import annotations

import re
import shutil
import subprocess
from itertools import pairwise
from pathlib import Path

import pikepdf
import pytest
from conftest import missing
from pikepdf import Dictionary

LARGEST_BYTES = 400_000
PAINTING = {
    "S", "s", "f", "F", "f*", "B", "B*", "b", "b*", "sh", "Do", "Tj", "TJ", "'", '"',
    "INLINE IMAGE",
}  # fmt: skip
KIDS = {
    "/L": {"/L", "/LI", "/Caption"},
    "/LI": {"/Lbl", "/LBody", "/L"},
    "/Table": {"/Caption", "/THead", "/TBody", "/TR"},
    "/THead": {"/TR"},
    "/TBody": {"/TR"},
    "/TR": {"/TH", "/TD"},
}


@pytest.fixture(scope="session")
def documents(published) -> dict[str, pikepdf.Pdf]:
    """Every PDF that was published, by its path."""
    folder = published[1]
    found = sorted(folder.rglob("*.pdf"))
    return {path.relative_to(folder).as_posix(): pikepdf.open(path) for path in found}


@pytest.fixture(scope="session")
def texts(published) -> dict[str, list[str]]:
    """The text of each page of each report, in reading order."""
    folder = published[1]
    found = sorted(folder.rglob("report.pdf"))
    return {path.relative_to(folder).as_posix(): page_texts(path) for path in found}


def page_texts(path: Path) -> list[str]:
    program = shutil.which("pdftotext")
    if program is None:
        missing("pdftotext is not installed: apt-get install poppler-utils")
    said = subprocess.run([program, str(path), "-"], capture_output=True, check=True).stdout
    return [re.sub(r"\s+", " ", text).strip() for text in said.decode().split("\f")[:-1]]


def kids(element: Dictionary) -> list[Dictionary]:
    """Elements right below one of the tag tree."""
    below = element.get("/K", [])
    every = below if isinstance(below, pikepdf.Array) else [below]
    return [kid for kid in every if isinstance(kid, Dictionary) and "/S" in kid]


def elements(document: pikepdf.Pdf) -> list[Dictionary]:
    """Every element of the tag tree, in reading order."""
    found, waiting = [], kids(document.Root.StructTreeRoot)
    while waiting:
        found.append(waiting.pop(0))
        waiting[:0] = kids(found[-1])
    return found


def test_every_build_has_its_pdf(documents, published) -> None:
    builds = {path.parent for path in published[1].rglob("report.html")}
    assert len(builds) >= 8
    assert {name for name in documents if name.endswith("/report.pdf")} == {
        f"{build.name}/report.pdf" for build in builds
    }


def test_small_enough_to_attach(documents, published) -> None:
    sizes = {name: (published[1] / name).stat().st_size for name in documents}
    assert {name: size for name, size in sizes.items() if size >= LARGEST_BYTES} == {}


def test_a_document_says_what_it_is(documents) -> None:
    for name, document in documents.items():
        root = document.Root
        assert root.Lang == "en", name  # 7.2
        assert root.MarkInfo.Marked, name  # 7.1
        assert not root.MarkInfo.get("/Suspects", False), name  # 7.1
        assert root.ViewerPreferences.DisplayDocTitle, name  # 7.1
        with document.open_metadata() as metadata:
            assert metadata["pdfuaid:part"] == "1", name  # 5
            assert metadata["dc:title"] == str(document.docinfo.Title), name  # 7.1
        assert all(page.get("/Tabs", "/S") == "/S" for page in document.pages), name  # 7.18.3


def test_everything_that_is_drawn_is_tagged_or_put_aside(documents) -> None:  # 7.1
    for name, document in documents.items():
        for number, page in enumerate(document.pages, start=1):
            assert untagged(page) == [], (name, number)


def untagged(page: pikepdf.Page) -> list[str]:
    """Painting operators that stand outside of marked content."""
    depth, found = 0, []
    for _, operator in pikepdf.parse_content_stream(page):
        word = str(operator)
        depth += (word in ("BDC", "BMC")) - (word == "EMC")
        if word in PAINTING and depth == 0:
            found.append(word)
    assert depth == 0
    return found


def test_elements_stand_where_they_may(documents) -> None:  # 7.2, 7.5, 7.6
    for name, document in documents.items():
        for element in elements(document):
            if (allowed := KIDS.get(str(element.S))) is not None:
                assert {str(kid.S) for kid in kids(element)} <= allowed, (name, element.S)


def test_headings_descend_by_one(documents) -> None:  # 7.4.2
    for name, document in documents.items():
        kinds = [str(one.S) for one in elements(document)]
        levels = [int(kind[2]) for kind in kinds if re.fullmatch("/H[1-6]", kind)]
        assert levels[:1] == [1], name
        assert all(after - before <= 1 for before, after in pairwise(levels)), name


def test_tables_are_regular_and_heads_have_a_scope(documents) -> None:  # 7.5
    for name, document in documents.items():
        every = elements(document)
        assert all(head.A.Scope in ("/Column", "/Row") for head in every if head.S == "/TH"), name
        for table in (one for one in every if one.S == "/Table"):
            assert len(set(widths(table))) == 1, name


def widths(table: Dictionary) -> list[int]:
    """Columns that each row of a table fills, those included that reach down from above."""
    found, reaching = [], {}
    for row in (row for group in kids(table) if group.S != "/Caption" for row in kids(group)):
        column = 0
        for cell in kids(row):
            while reaching.get(column, 0):
                reaching[column] -= 1
                column += 1
            for _ in range(int(cell.A.get("/ColSpan", 1))):
                reaching[column] = int(cell.A.get("/RowSpan", 1)) - 1
                column += 1
        while reaching.get(column, 0):
            reaching[column] -= 1
            column += 1
        found.append(column)
    return found


def test_pictures_have_words(documents) -> None:  # 7.3
    for name, document in documents.items():
        pictures = [one for one in elements(document) if one.S == "/Figure"]
        assert all(len(str(picture.Alt)) > 40 for picture in pictures), name
        assert pictures or not name.endswith("/report.pdf"), name


def test_letters_are_embedded_and_have_names(documents) -> None:  # 7.21.4.1, 7.21.7
    for name, document in documents.items():
        fonts = [one for one in document.objects if is_font(one)]
        assert fonts, name
        for font in fonts:
            assert "/ToUnicode" in font, name
            assert "/FontFile2" in font.DescendantFonts[0].FontDescriptor, name


def is_font(one: pikepdf.Object) -> bool:
    """A font that text is set in; those below it only carry its letters."""
    return (
        isinstance(one, Dictionary)
        and one.get("/Type") == "/Font"
        and not str(one.Subtype).startswith("/CIDFont")
    )


def sections(document: pikepdf.Pdf) -> list[str]:
    """Titles below that of the whole document in the outline."""
    with document.open_outline() as outline:
        assert len(outline.root) == 1
        return [item.title for item in outline.root[0].children]


def test_text_is_read_in_order_and_the_outline_follows_it(texts, documents) -> None:
    for name, pages in texts.items():
        whole, place = " ".join(pages), 0
        titles = sections(documents[name])
        assert len(titles) >= 8, name
        for words in ("Simulated data.", *titles):
            place = whole.find(words, place)
            assert place >= 0, (name, words)
        assert whole.index("Band by band") < whole.index("page 1 of"), name


def test_every_page_says_what_it_belongs_to(texts, documents) -> None:
    for name, pages in texts.items():
        assert len(pages) == len(documents[name].pages)
        title = str(documents[name].docinfo.Title).split(":")[0]
        for number, text in enumerate(pages, start=1):
            assert f"page {number} of {len(pages)}" in text, name
            assert number == 1 or title in text, name
            assert len(text) > 300, f"{name}: page {number} is nearly empty"
