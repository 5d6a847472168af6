"""Charts: valid SVG, the same bytes, and nothing foreign that could break them."""

import xml.etree.ElementTree as ET
from dataclasses import replace

import numpy as np
import pytest
import result_samples as samples

from reportgen.model import Band, Curves, MeasuredBand
from reportgen.pages.charts import draw_charts, draw_efficiency, draw_heat, draw_match
from reportgen.pages.curve_charts import thinned
from reportgen.pages.look import LIGHT

SVG = "{http://www.w3.org/2000/svg}"


@pytest.fixture(scope="module")
def charts():
    baseline = samples.full(1.2, "Birch", "birch")
    return draw_charts(
        samples.full(), baseline, samples.BANDS, swr_limits={"40 m": 2.0}, efficiency_limits={}
    )


def texts(svg: str) -> list[str]:
    return [found.text for found in ET.fromstring(svg).iter(f"{SVG}text")]


def test_all_three_are_drawn_as_valid_xml_in_two_widths(charts):
    assert list(charts) == ["efficiency", "match", "heat"]
    for chart in charts.values():
        for svg in (chart.svg, chart.narrow_svg):
            assert ET.fromstring(svg).tag == f"{SVG}svg"
            assert "<style" not in svg
            assert "<metadata" not in svg
            assert "href" not in svg or "#" in svg


def test_the_same_result_gives_the_same_bytes(charts):
    baseline = samples.full(1.2, "Birch", "birch")
    again = draw_charts(
        samples.full(), baseline, samples.BANDS, swr_limits={"40 m": 2.0}, efficiency_limits={}
    )
    assert again == charts


def test_bands_scales_and_key_are_named(charts):
    shown = texts(charts["efficiency"].svg)
    assert {"160 m", "10 m", "efficiency, %", "heat loss, dB", "this build", "baseline"} <= set(
        shown
    )
    assert {"return loss, dB", "SWR", "limit"} <= set(texts(charts["match"].svg))


def test_without_baseline_no_dashed_line_and_no_key():
    chart = draw_match(samples.full(), None, samples.BANDS)
    assert "stroke-dasharray" not in chart.svg
    assert "this build" not in texts(chart.svg)
    assert LIGHT.baseline not in chart.svg
    assert "aseline" not in chart.alt


def test_heat_is_written_beside_each_band(charts):
    result = samples.full()
    heat = [band.figures["heat_w"].mean for band in result.chosen.bands]
    assert {f"{value:.1f}" for value in heat} <= set(texts(charts["heat"].svg))


def test_alternative_text_holds_every_band(charts):
    for chart in charts.values():
        for band in samples.BANDS:
            assert f"{band.name} " in chart.alt


@pytest.mark.parametrize("name", ["$x_2$", "a\x00b\x07", "\u202egpj", "<b>&\"'", "\ud800", "$$$"])
def test_hostile_band_names_break_no_chart(name):
    bands = tuple(
        replace(band, name=name) if band.name == "40 m" else band for band in samples.BANDS
    )
    result = with_bands(samples.full(), bands)
    for chart in draw_charts(result, None, bands, swr_limits={}, efficiency_limits={}).values():
        for svg in (chart.svg, chart.narrow_svg):
            ET.fromstring(svg)
            assert "math" not in svg


def test_a_dollar_sign_is_a_dollar_sign():
    bands = tuple(
        replace(band, name="$x_2$") if band.name == "40 m" else band for band in samples.BANDS
    )
    chart = draw_efficiency(with_bands(samples.full(), bands), None, bands)
    assert "$x_2$" in texts(chart.svg)


def with_bands(result, bands: tuple[Band, ...]):
    measured = tuple(
        replace(one, band=band) if isinstance(one, MeasuredBand) else one
        for one, band in zip(result.chosen.bands, bands, strict=True)
    )
    return replace(result, chosen=replace(result.chosen, bands=measured))


def test_without_loss_there_is_a_match_chart_only():
    result = samples.load_only()
    assert draw_efficiency(result, None, samples.BANDS) is None
    assert draw_heat(result, None) is None
    assert draw_match(result, None, samples.BANDS) is not None


def test_a_partial_sweep_is_drawn_where_it_was_measured():
    chart = draw_efficiency(samples.partial(), None, samples.BANDS)
    assert "15 m" in texts(chart.svg)
    assert "10 m" not in texts(chart.svg)


def test_points_that_are_not_numbers_leave_a_gap():
    result = samples.full()
    ratio = result.chosen.curves.efficiency_ratio.copy()
    ratio[400:420] = np.nan
    curves = replace(result.chosen.curves, efficiency_ratio=ratio)
    chart = draw_efficiency(
        replace(result, chosen=replace(result.chosen, curves=curves)), None, samples.BANDS
    )
    ET.fromstring(chart.svg)
    assert "nan" not in chart.svg.lower()


def test_draws_in_front_are_not_drawn():
    result = samples.full()
    plain = result.chosen.curves
    stacked = Curves(
        frequency_hz=plain.frequency_hz,
        native=plain.native,
        efficiency_ratio=np.stack([plain.efficiency_ratio, plain.efficiency_ratio * 0.5]),
        reflection_ratio=plain.reflection_ratio,
    )
    many = replace(result, chosen=replace(result.chosen, curves=stacked))
    one = draw_efficiency(result, None, samples.BANDS)
    assert draw_efficiency(many, None, samples.BANDS) == one


def test_thinning_keeps_peaks():
    frequency_mhz = np.linspace(1, 30, 20_001)
    value = np.zeros(20_001)
    value[7_777] = 5.0
    value[12_345] = -3.0
    thin_mhz, thin = thinned(frequency_mhz, value)
    assert len(thin) < 450
    assert thin.max() == 5.0
    assert thin.min() == -3.0
    assert np.all(np.diff(thin_mhz) > 0)


def test_decimal_comma_on_the_scales():
    chart = draw_match(samples.full(), None, samples.BANDS, locale="de")
    assert "1,5" in texts(chart.svg)
    assert "1.5" not in texts(chart.svg)
