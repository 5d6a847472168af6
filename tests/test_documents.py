"""The figures as data: keys that others rely on, finite numbers, no formula in a spreadsheet."""

from __future__ import annotations

import csv
import io
import json
from dataclasses import replace

import heat_and_forecast_samples as heat
import numpy as np
import pandas as pd
import pytest
import result_samples as samples

from reportgen.model import BuildResult, Comparison
from reportgen.output.csv_tables import (
    LONG_HEAD,
    bands_csv,
    csv_bytes,
    curves_csv,
    long_csv_lines,
)
from reportgen.output.documents import json_bytes, results_document
from reportgen.physics.forecast import Forecast
from reportgen.physics.quantities import QUANTITIES

TOP = {
    "schema", "program_version", "build", "load_ohm", "method", "unit", "bands", "units",
    "methods", "bandwidth", "fitted", "budget", "advice", "limits", "lot", "heat_split", "stress",
    "thermal", "forecast", "baseline", "findings", "inputs",
}  # fmt: skip
BAND = {"band", "from_hz", "to_hz", "status", "reason", "covered", "points", "interpolated"}
FIGURE = {"mean", "worst", "centre", "worst_at_hz", "low95", "high95"}
ALL = {
    "full": samples.full(),
    "intervals": samples.full(u95=0.03),
    "partial": samples.partial(),
    "load only": samples.load_only(),
    "hostile": samples.hostile(),
}
BASELINE = samples.full(1.2, "Birch", "birch")


def published(result: BuildResult, forecast: Forecast | None = None) -> dict:
    comparison = samples.comparison(result, BASELINE, judged=True)
    document = results_document(result, comparison, program_version="1.2.3", forecast=forecast)
    return json.loads(json_bytes(document))


def numbers(value: object) -> list[float]:
    if isinstance(value, dict):
        return [number for item in value.values() for number in numbers(item)]
    if isinstance(value, list):
        return [number for item in value for number in numbers(item)]
    return [value] if isinstance(value, int | float) else []


# --- results.json --------------------------------------------------------------------------------


@pytest.mark.parametrize("result", ALL.values(), ids=ALL)
def test_every_key_that_others_rely_on(result: BuildResult) -> None:
    document = published(result)
    assert document.keys() >= TOP
    assert document["schema"] == 1
    assert document["build"].keys() >= {"key", "name"}
    for method in (document, *document["methods"], *document["units"]):
        assert method.keys() >= {"method", "unit", "bands"}
        for band in method["bands"]:
            assert band.keys() == BAND | {quantity.key for quantity in QUANTITIES}
            assert band["status"] in ("measured", "partial", "not-measured")
            figures = [band[quantity.key] for quantity in QUANTITIES]
            assert all(figure is None or figure.keys() >= FIGURE for figure in figures)
    for one in document["bandwidth"]:
        assert one.keys() >= {"criterion", "from_hz", "to_hz", "ratio"}
    for one in document["fitted"]:
        assert one.keys() >= {"quantity", "of", "value", "u95"}
    for one in document["findings"]:
        assert one.keys() == {"severity", "code", "file", "line", "key", "message", "remedy"}
    for one in document["inputs"]:
        assert one.keys() == {"file", "sha256", "points"}
    for one in document["baseline"]["bands"]:
        assert one.keys() >= {"band", "heat_loss_db", "heat_w", "verdict"}
        assert one["heat_loss_db"].keys() == {"difference", "u95", "low95", "high95"}


@pytest.mark.parametrize("result", ALL.values(), ids=ALL)
def test_every_number_is_finite(result: BuildResult) -> None:
    found = numbers(published(result))
    assert len(found) > 50
    assert np.isfinite(found).all()


def test_what_is_not_measured_has_no_figures_and_a_reason() -> None:
    bands = {band["band"]: band for band in published(samples.partial())["bands"]}
    assert bands["10 m"]["status"] == "not-measured"
    assert bands["10 m"]["reason"]
    assert {bands["10 m"][quantity.key] for quantity in QUANTITIES} == {None}
    assert bands["15 m"]["status"] == "partial"
    assert bands["15 m"]["covered"] == [21_000_000, 21_200_000]
    assert bands["20 m"]["status"] == "measured"


def test_loss_that_was_not_measured_is_null_and_the_match_is_there() -> None:
    band = published(samples.load_only())["bands"][0]
    assert band["heat_loss_db"] is None
    assert band["return_loss_db"]["mean"] > 0


@pytest.mark.parametrize("value", [float("nan"), float("inf"), -float("inf"), np.float64("nan")])
def test_a_number_that_is_not_finite_is_a_fault(value: float) -> None:
    with pytest.raises(ValueError, match="not finite"):
        json_bytes({"a": [value]})


def test_numbers_keep_nine_digits_and_whole_ones_stay_whole() -> None:
    text = json_bytes({"a": 0.1234567891, "b": 7_000_000.0, "c": 1e300}).decode()
    assert json.loads(text) == {"a": 0.123456789, "b": 7_000_000, "c": 1e300}
    assert '"b": 7000000\n' in text.replace(",\n", "\n")


def test_text_that_is_no_unicode_can_be_written() -> None:
    assert json_bytes({"a": "\udcff"}).decode("utf-8") == '{\n "a": "\\udcff"\n}\n'


def test_a_forecast_is_published_whole_and_finite() -> None:
    swr = np.array([np.inf, 2.333, 2.3, 2.251])
    tried = replace(heat.capacitor(), worst_swr=swr)
    told = published(samples.full(), heat.forecast(capacitor=tried, antennas=(heat.antenna(),)))[
        "forecast"
    ]
    assert told["capacitor"]["capacitor_pf"] == [0, 68, 75, 150]
    assert told["capacitor"]["worst_swr"] == [None, 2.333, 2.3, 2.251]
    assert told["capacitor"]["then"]["swr"] == {"value": 2.251, "low95": 2.199, "high95": 2.303}
    assert [one["high_turns"] for one in told["ratios"]] == [22, 23, 23, 25]
    assert told["antennas"][0]["bands"][0]["covered_hz"] == [7e6, 7.2e6]
    assert told["antennas"][0]["bands"][1]["swr"] is None


def test_without_a_forecast_it_is_null() -> None:
    assert published(samples.full())["forecast"] is None


# --- CSV -----------------------------------------------------------------------------------------


def table(data: bytes) -> pd.DataFrame:
    return pd.read_csv(io.BytesIO(data))


def long_csv(result: BuildResult, comparison: Comparison | None = None) -> bytes:
    document = json.loads(json_bytes(results_document(result, comparison, program_version="1")))
    return csv_bytes(LONG_HEAD + long_csv_lines(document))


def test_one_row_for_each_band() -> None:
    found = table(bands_csv(samples.partial()))
    assert list(found["band"]) == [band.band.name for band in samples.partial().chosen.bands]
    missing = found[found["status"] == "not-measured"]
    assert missing["efficiency_ratio_mean"].isna().all()
    assert missing["reason"].str.len().min() > 0
    assert found["heat_loss_db_mean"].notna().sum() == len(found) - len(missing)


def test_curves_hold_every_quantity_that_was_measured() -> None:
    result = samples.full()
    found = table(curves_csv(result.chosen.curves, 60.0))
    assert {quantity.key for quantity in QUANTITIES} < set(found)
    np.testing.assert_allclose(found["efficiency_ratio"], result.chosen.curves.efficiency_ratio)
    assert set(found["swept"]) == {0, 1}
    assert "heat_loss_db" not in table(curves_csv(samples.load_only().chosen.curves, 60.0))


def test_a_total_reflection_leaves_a_blank() -> None:
    curves = samples.full().chosen.curves
    reflection = np.array(curves.reflection_ratio)
    reflection[3] = 1.0
    found = table(curves_csv(replace(curves, reflection_ratio=reflection), 60.0))
    assert np.isnan(found["swr"][3])
    assert found["swr"].isna().sum() == 1


def test_long_table_holds_every_method_and_the_comparison() -> None:
    result = samples.full()
    found = table(long_csv(result, samples.comparison(result, BASELINE)))
    assert set(found["method"]) == {"bisection+load", "bisection", "halving", "minus birch"}
    chosen = found[(found["chosen"] == 1) & (found["quantity"] == "heat_loss_db")]
    assert list(chosen["band"]) == [band.band.name for band in result.chosen.bands]
    assert set(found["quantity"].dropna()) == {quantity.key for quantity in QUANTITIES}


@pytest.mark.parametrize("start", ["=", "+", "-", "@", "\t", "\r"])
def test_text_is_no_formula(start: str) -> None:
    """OWASP, CSV injection: characters that make a spreadsheet run a cell."""
    result = samples.full(name=f"{start}cmd()|x")
    data = long_csv(result).decode()
    names = {row["name"] for row in csv.DictReader(io.StringIO(data, newline=""))}
    assert names == {f"'{start}cmd()|x".replace("\r", " ")}


def test_negative_numbers_stay_numbers() -> None:
    one = samples.full()
    other = samples.full(1.5, "Birch", "birch")
    found = table(long_csv(one, samples.comparison(one, other)))
    difference = found[found["method"] == "minus birch"]["mean"]
    assert difference.dtype == float
    assert difference.min() < 0


def test_lines_end_plainly_and_the_text_is_utf_8() -> None:
    data = bands_csv(samples.full(name="Größe"))
    assert b"\r" not in data
    data.decode("utf-8")
