"""The report on paper: tagged, selectable, small, reproducible, and closed to the outside."""

import io
import logging
import re
import shutil
import subprocess
import sys
from dataclasses import replace
from pathlib import Path

import pikepdf
import pytest
import result_samples as samples
from conftest import missing

from reportgen.errors import OutputError
from reportgen.pages import pdf as pdf_pages
from reportgen.pages.pdf import write_pdf
from reportgen.pages.report import render_report_pdf

BASELINE = samples.full(1.2, "Birch", "birch")
PAGE = '<!doctype html><html lang="en"><head><title>t</title></head><body>{}</body></html>'
SQUARE = (
    '<svg xmlns="http://www.w3.org/2000/svg" width="9" height="9">'
    '<rect width="9" height="9"/>{}</svg>'
)


def report(result, **bench) -> bytes:
    return render_report_pdf(
        result,
        comparison=samples.comparison(result, BASELINE),
        baseline=BASELINE,
        bench=replace(samples.BENCH, **bench),
        program_version="1.2.3",
    )


@pytest.fixture(scope="module")
def full() -> bytes:
    return report(samples.full())


@pytest.fixture(scope="module")
def document(full):
    with pikepdf.open(io.BytesIO(full)) as opened:
        yield opened


def structure(document) -> list[pikepdf.Object]:
    """Every element of the tag tree."""
    found, waiting = [], [document.Root.StructTreeRoot]
    while waiting:
        element = waiting.pop()
        children = element.get("/K", [])
        for child in children if isinstance(children, pikepdf.Array) else [children]:
            if isinstance(child, pikepdf.Dictionary) and "/S" in child:
                found.append(child)
                waiting.append(child)
    return found


def of_kind(document, kind: str) -> list[pikepdf.Object]:
    return [element for element in structure(document) if kind == element.S]


def page_text(data: bytes) -> str:
    try:
        done = subprocess.run(
            ["pdftotext", "-layout", "-", "-"], input=data, capture_output=True, check=True
        )
    except FileNotFoundError:
        missing("pdftotext is not installed: apt-get install poppler-utils")
    return re.sub(r"\s+", " ", done.stdout.decode())


def test_language_title_and_tags(document):
    assert document.Root.Lang == "en"
    assert document.docinfo["/Title"] == "Alder: loss, match and heat"
    assert document.Root.MarkInfo.Marked
    assert document.Root.ViewerPreferences.DisplayDocTitle
    with document.open_metadata() as metadata:
        assert metadata["pdfuaid:part"] == "1"


def test_every_chart_has_words_for_it(document):
    figures = of_kind(document, "/Figure")
    words = [str(figure.Alt) for figure in figures]
    charts = [text for text in words if "chart" in text]
    assert len(charts) == 3
    assert all("40 m" in text and "Baseline" in text for text in charts)
    assert all("Port 1 of the analyzer" in text for text in words if text not in charts)


def test_tables_have_heads(document):
    assert len(of_kind(document, "/Table")) >= 8
    assert len(of_kind(document, "/TD")) > 200
    heads = of_kind(document, "/TH")
    groups = {"/THead": "/Column", "/TBody": "/Row"}
    assert all(head.A.Scope == groups[str(head.P.P.S)] for head in heads)
    assert {str(head.A.Scope) for head in heads} == {"/Column", "/Row"}


GROUP = (
    '<tbody><tr><th scope="row" rowspan="2">{0}</th><td>mean {0}</td></tr>'
    "<tr><td>worst {0}</td></tr></tbody>"
)
TABLE = (
    '<div style="height:{}pt"></div><table class="figures-table"><caption>c</caption>'
    '<thead><tr><th scope="col">Band</th><th scope="col">x</th></tr></thead>{}</table>'
)


@pytest.mark.parametrize("above", range(660, 740, 6))
def test_rows_of_one_group_stay_on_one_page_and_no_group_alone(above):
    body = TABLE.format(above, "".join(GROUP.format(name) for name in "abcd"))
    with pikepdf.open(io.BytesIO(write_pdf(PAGE.format(body), {}, "A4"))) as opened:
        assert 1 <= len(opened.pages) <= 2
        assert all(len(group.K) == 2 for group in of_kind(opened, "/TBody"))
        tables = of_kind(opened, "/Table")
        assert [len([part for part in table.K if part.S == "/TBody"]) for table in tables] in (
            [4], [2, 2],
        )  # fmt: skip


def test_sections_are_in_the_outline(document):
    with document.open_outline() as outline:
        titles = [item.title for item in outline.root[0].children]
    assert titles[0] == "Band by band"
    assert titles[-1] == "Provenance"


def test_text_can_be_selected_charts_included(full):
    text = page_text(full)
    assert "On 10 bands from 160 m to 10 m, 82 to 90 % of the power that enters" in text
    assert "heat loss, dB" in text
    assert "Simulated data." in text
    assert "page 1 of 4" in text
    assert "page 4 of 4" in text


def test_running_head_from_the_second_page_on(full):
    second = page_text(full).split("page 1 of 4")[1]
    assert second.strip().startswith("Alder Bench results, autumn")


def test_two_to_four_pages_and_less_than_400_kb(full, document):
    assert 2 <= len(document.pages) <= 4
    assert len(full) < 400_000


@pytest.mark.parametrize(
    "result",
    [samples.load_only(), samples.partial(), samples.hostile(), samples.full(u95=0.03)],
    ids=["load only", "partial", "hostile", "intervals"],
)
def test_other_results_fit_too(result):
    data = report(result)
    with pikepdf.open(io.BytesIO(data)) as opened:
        assert 2 <= len(opened.pages) <= 4
    assert len(data) < 400_000
    assert not re.search(r"\b(nan|NaN|None)\b", page_text(data))


@pytest.mark.parametrize(("paper", "width", "height"), [("A4", 595, 842), ("Letter", 612, 792)])
def test_paper(paper, width, height):
    # ISO 216: A4 is 210 mm by 297 mm. ANSI/ASME Y14.1: size A is 8.5 in by 11 in.
    with pikepdf.open(io.BytesIO(report(samples.load_only(), paper=paper))) as opened:
        box = [round(float(edge)) for edge in opened.pages[0].mediabox]
    assert box == [0, 0, width, height]


def test_the_same_result_gives_the_same_bytes(full):
    assert report(samples.full()) == full


def test_another_process_gives_the_same_bytes_and_leaves_nothing_behind(tmp_path):
    code = (
        "import hashlib, test_pdf as t; "
        "print(hashlib.sha256(t.report(t.samples.load_only())).hexdigest())"
    )
    runs = [
        subprocess.run(
            [sys.executable, "-c", code],
            cwd=Path(__file__).parent,
            env={"PYTHONHASHSEED": seed, "PATH": "/usr/bin:/bin", "TZ": zone, "TMPDIR": tmp_path},
            capture_output=True,
            check=True,
            text=True,
        )
        for seed, zone in (("1", "UTC"), ("2", "Asia/Tokyo"))
    ]
    assert runs[0].stdout == runs[1].stdout != ""
    assert [run.stderr for run in runs] == ["", ""]
    assert not list(tmp_path.glob("weasyprint*"))


def test_nothing_is_logged(caplog):
    with caplog.at_level(logging.WARNING):
        report(samples.full(u95=0.03))
    assert caplog.records == []


def test_letters_are_embedded_and_of_one_family(document):
    names = set()
    for page in document.pages:
        for font in page.Resources.Font.values():
            names.add(str(font.BaseFont).split("+")[-1])
    assert names == {"Source-Sans-Pro", "Source-Sans-Pro-Semi-Bold"}


@pytest.mark.parametrize(
    "body",
    [
        '<img alt="x" src="https://example.org/a.png">',
        '<img alt="x" src="file:///etc/hostname">',
        '<img alt="x" src="data:image/png;base64,AAAA">',
        '<img alt="x" src="asset:unknown">',
        '<p style="background: url(http://127.0.0.1:9/x)">x</p>',
        '<link rel="stylesheet" href="http://127.0.0.1:9/x.css">',
        '<link rel="attachment" href="file:///etc/hostname"><p>x</p>',
    ],
)
def test_nothing_but_our_own_pictures_is_fetched(body):
    with pytest.raises(OutputError, match="which is not part of it"):
        write_pdf(PAGE.format(body), {}, "A4")


def test_a_picture_within_a_picture_is_not_fetched_either():
    inner = '<image href="file:///etc/hostname" width="5" height="5"/>'
    page = PAGE.format('<img alt="x" src="asset:outer">')
    with pytest.raises(OutputError, match="which is not part of it"):
        write_pdf(page, {"outer": SQUARE.format(inner)}, "A4")


def test_a_complaint_of_the_renderer_is_an_error():
    page = PAGE.format('<p style="colour: red">x</p>')
    with pytest.raises(OutputError, match="could not be set"):
        write_pdf(page, {}, "A4")


def test_letters_that_the_font_lacks_are_shown_by_their_code_points(tmp_path):
    (tmp_path / "x.pdf").write_bytes(write_pdf(PAGE.format("<p>\u00c5lder \u6f22</p>"), {}, "A4"))
    with pikepdf.open(tmp_path / "x.pdf") as pdf:
        assert len(pdf.pages) == 1
    if (pdftotext := shutil.which("pdftotext")) is not None:
        text = subprocess.run([pdftotext, tmp_path / "x.pdf", "-"], capture_output=True, check=True)
        found = text.stdout.decode()
        assert "\u00c5lder" in found
        assert "[U+6F22]" in found or "\u6f22" in found  # some machines have a font for it


def test_missing_system_libraries_are_named(monkeypatch):
    pdf_pages._weasyprint.cache_clear()
    monkeypatch.setitem(sys.modules, "weasyprint", None)
    real = __import__

    def failing(name, *arguments, **named):
        if name == "weasyprint":
            raise OSError("cannot load library")
        return real(name, *arguments, **named)

    monkeypatch.setattr("builtins.__import__", failing)
    with pytest.raises(OutputError, match="apt-get install --no-install-recommends libpango"):
        pdf_pages._weasyprint()
    pdf_pages._weasyprint.cache_clear()
