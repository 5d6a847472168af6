"""Drawings of set-ups: one for each, well-formed, in words too."""

import io
import re
import xml.etree.ElementTree as ET

import pikepdf
import pytest
from test_pdf import PAGE, of_kind

from reportgen.model import PORTS_OF_SETUP, Setup
from reportgen.pages.html import inline_svg
from reportgen.pages.look import FAMILY, LIGHT
from reportgen.pages.pdf import write_pdf
from reportgen.pages.setup_diagram import draw_setup

SVG = "{http://www.w3.org/2000/svg}"
SETUPS = pytest.mark.parametrize("setup", list(Setup))


def texts(setup: Setup) -> list[str]:
    return [found.text for found in ET.fromstring(draw_setup(setup).svg).iter(f"{SVG}text")]


@SETUPS
def test_every_set_up_is_drawn_as_valid_xml_of_the_same_size(setup):
    root = ET.fromstring(draw_setup(setup).svg)
    assert root.tag == f"{SVG}svg"
    assert root.get("viewBox") == "0 0 260 110"
    assert (root.get("width"), root.get("height")) == ("260", "110")
    assert {found.tag.removeprefix(SVG) for found in root.iter()} <= {
        "svg", "path", "circle", "text",
    }  # fmt: skip


@SETUPS
def test_it_stands_in_words_too(setup):
    chart = draw_setup(setup)
    assert chart.name == f"setup-{setup.value}"
    assert chart.title[0].isupper()
    assert chart.alt.endswith(".")
    assert len(chart.alt) > 40


def test_no_two_are_alike():
    charts = [draw_setup(setup) for setup in Setup]
    assert len({chart.svg for chart in charts}) == len({chart.alt for chart in charts}) == 11


def test_the_same_bytes_each_time():
    first = [draw_setup(setup) for setup in Setup]
    draw_setup.cache_clear()
    assert [draw_setup(setup) for setup in Setup] == first


@SETUPS
def test_ports_are_those_of_the_set_up(setup):
    ports = {f"port {number}" for number in range(1, PORTS_OF_SETUP[setup] + 1)}
    shown = {text for text in texts(setup) if text.startswith("port ")}
    assert shown == ports
    assert all(re.search(rf"\b{port}\b", draw_setup(setup).alt, re.IGNORECASE) for port in ports)


UNITS = {Setup.BACK_TO_BACK: 2, Setup.SPOT: 2} | dict.fromkeys(
    (Setup.LOAD, Setup.OPEN, Setup.SHORT, Setup.SERIES_RESISTOR, Setup.DIRECT), 1
)


@SETUPS
def test_each_unit_has_both_sides_named(setup):
    units = UNITS.get(setup, 0)
    assert texts(setup).count("low") == texts(setup).count("high") == units


@SETUPS
def test_nothing_lies_outside_the_picture(setup):
    root = ET.fromstring(draw_setup(setup).svg)
    for found in root.iter(f"{SVG}path"):
        for pair in re.findall(r"[ML] (\S+) (\S+)", found.get("d")):
            x, y = map(float, pair)
            assert 2 <= x <= 258
            assert 2 <= y <= 108
    for found in root.iter(f"{SVG}text"):
        half = 0.27 * 11 * len(found.text)  # letters of 11 px are about 0.54 of that wide
        assert half <= float(found.get("x")) <= 260 - half


@SETUPS
def test_colours_follow_the_page(setup):
    chart = draw_setup(setup)
    assert set(re.findall("#[0-9a-f]{6}", chart.svg)) <= {LIGHT.ink, LIGHT.soft, LIGHT.paper}
    inline = inline_svg(chart.svg, chart.name)
    assert "#" not in inline
    assert "var(--ink)" in inline
    assert FAMILY in inline


def test_they_can_be_set_on_paper():
    charts = [draw_setup(setup) for setup in Setup]
    images = "".join(f'<p><img alt="{one.alt}" src="asset:{one.name}"></p>' for one in charts)
    data = write_pdf(PAGE.format(images), {one.name: one.svg for one in charts}, "A4")
    with pikepdf.open(io.BytesIO(data)) as pdf:
        assert {str(figure.Alt) for figure in of_kind(pdf, "/Figure")} == {
            one.alt for one in charts
        }
