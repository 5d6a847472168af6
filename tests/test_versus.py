"""A few builds on one page: what is compared with what, what the page says, where it may go."""

from __future__ import annotations

import re
import shutil
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest
import result_samples as samples
from hypothesis import given
from hypothesis import strategies as st
from opened_pages import open_page
from page_reader import Page, published
from small_runs import BENCH, contents, write_build, write_runs
from sure_samples import sure
from write_example_runs import EXAMPLE_RUNS

from reportgen import versus
from reportgen.__main__ import main
from reportgen.errors import InputRejected, NotMeasurable, UsageError
from reportgen.model import BuildResult, MeasuredBand
from reportgen.pages.look import SERIES
from reportgen.pages.versus import render_versus
from reportgen.pages.versus_charts import bands_of, chart_names, draw_versus
from reportgen.pages.versus_curves import _parted
from reportgen.pages.versus_heat import heat_at
from reportgen.pages.versus_tables import Rival
from reportgen.physics.compare import compare
from reportgen.versus import write_versus

pytestmark = pytest.mark.usefixtures("few_draws")


def rivals(*results: BuildResult) -> list[Rival]:
    return [
        Rival(
            result=result,
            comparison=(other := compare(result, results[0]) if place else None),
            published=replace(published(result, other), key=str(place)),
        )
        for place, result in enumerate(results)
    ]


def page_of(*results: BuildResult, **settings) -> tuple[Page, bytes]:
    asked = {"bench": samples.BENCH, "roots": 1, "program_version": "1.2.3"} | settings
    html, pdf = render_versus(rivals(*results), **asked)
    return Page(html), pdf


def drawn(level: float, name: str, spread_db: float = 0.02, seed: int = 1) -> BuildResult:
    """A made-up build with draws of its own."""
    result = samples.full(level, name, name.lower(), u95=0.03)
    random = np.random.default_rng(seed)
    draws = {
        band.band.name: band.figures["heat_loss_db"].mean + random.normal(0, spread_db, 400)
        for band in result.chosen.bands
        if isinstance(band, MeasuredBand)
    }
    return replace(result, loss_draws_db=draws)


@pytest.fixture(scope="module")
def page() -> Page:
    return page_of(
        drawn(1.0, "Ash"), drawn(0.6, "Beech", seed=2), drawn(1.01, "Cherry", 0.2, seed=3)
    )[0]


# --- what the page says --------------------------------------------------------------------------


def test_the_first_build_is_what_the_others_meet(page):
    assert "Beech and Cherry against Ash" in page.text
    assert "Ash 3200 Ω. One ring of 36 mm" in page.text
    assert re.search(r"Ash 3200 Ω. One ring .{60,160} is the reference", page.text)
    assert "better on 10" in page.text
    assert "The most efficient is Beech:" in page.text
    assert "over the 10 bands that all share" in page.text


def test_each_band_has_efficiency_loss_and_a_judged_difference(page):
    bands = page.text.partition("Band by band")[2].partition("Side by side")[0]
    row = bands.partition(" 40 m ")[2].partition(" 30 m ")[0]
    assert re.search(r"efficiency, %( \d\d\.\d+ ± \d\.\d+){3} heat loss, dB", row)
    assert re.search(r"difference, dB . .0\.\d+ ± 0\.\d+ ▼ \+0\.\d+ ± 0\.\d+ =", row)
    assert "heat loss less that of Ash: ▼ less loss, = the same within uncertainty" in page.text


def test_charts_name_every_build_and_tell_it_in_words(page):
    charts = [found for found in page.all("div") if found.get("role") == "img"]
    assert len(charts) == 6
    for found in charts:
        assert all(name in found["aria-label"] for name in ("Ash", "Beech", "Cherry"))
    assert "Beech is the most efficient on all 10 bands" in page.text
    assert "Most heat in a band at 60 W: Ash" in page.text


def test_particulars_stand_side_by_side():
    one, other = drawn(1.0, "Ash"), drawn(0.9, "Beech")
    sheet = replace(other.build.sheet, record={"operator": "bench 9"})
    other = replace(other, build=replace(other.build, sheet=sheet))
    text = page_of(one, other)[0].text.partition("Side by side")[2]
    assert "Winding 3 turns to 24, one tapped winding, wire 0.8 mm 3 turns to 24" in text
    assert "operator bench 2 bench 9" in text
    assert "temperature c 21.5 \u2013 " in text


def test_the_page_stands_alone(page):
    assert page.open == []
    assert page.all("script") == []
    assert not {tag for tag, _ in page.elements} & {"iframe", "object", "link", "img"}
    assert "High radio-frequency voltage." in page.text
    assert "pair-ab.s2p" in page.text.partition("Provenance")[2]
    assert "Simulated data." in page.text


def test_a_build_without_loss_has_its_match_and_a_reason():
    text = page_of(drawn(1.0, "Ash"), samples.load_only())[0].text
    assert "Hazel" in text
    assert "Partly simulated data." in text
    assert "Worst SWR in a band: Ash" in text
    assert "not comparable" in text
    text = page_of(samples.load_only(), samples.load_only())[0].text
    assert "The loss of none of them was measured" in text
    assert "Most heat in a band" not in text


def test_hostile_names_are_shown_and_do_nothing():
    text = page_of(samples.hostile(), sure())[0].text
    assert "<script>alert(1)</script>[U+202E]" in text


def test_the_pdf_is_tagged_and_the_same_each_time():
    first, second = (page_of(drawn(1.0, "Ash"), drawn(0.6, "Beech"))[1] for _ in range(2))
    assert first.startswith(b"%PDF-")
    assert first == second


@pytest.mark.parametrize("width", [320, 1280])
def test_everything_has_room_and_a_name(context, tmp_path: Path, width: int):
    html, _ = render_versus(
        rivals(drawn(1.0, "Ash"), drawn(0.6, "Beech"), samples.hostile(), samples.load_only()),
        bench=samples.BENCH,
        roots=2,
        program_version="1.2.3",
    )
    (tmp_path / "x.html").write_text(html, encoding="utf-8")
    opened = open_page(context, tmp_path / "x.html")
    opened.show(width=width)
    assert opened.measure("problems") == []
    labels = "[...document.querySelectorAll('[role=region]')].map((one) => one.ariaLabel)"
    found = opened.page.evaluate(labels)
    assert len(set(found)) == len(found) >= 6
    assert opened.complaints == []
    opened.page.close()


# --- how it is drawn -----------------------------------------------------------------------------


def test_builds_of_one_name_are_told_apart():
    one = drawn(1.0, "Ash")
    wide = drawn(1.0, "測定")
    assert chart_names([one, one, one]) == ["Ash", "Ash (2)", "Ash (3)"]
    assert chart_names([wide]) == ["build 1"]


def test_every_series_is_drawn_with_its_colour_and_dash():
    results = [drawn(0.5 + 0.1 * place, f"B{place}") for place in range(6)]
    names = chart_names(results)
    charts = draw_versus(
        results, names, bands_of(results), swr_limits={}, efficiency_limits={}, locale="en"
    )
    assert set(charts) == {"efficiency", "swr", "heat"}
    from reportgen.pages.look import LIGHT

    for chart in charts.values():
        for svg in (chart.svg, chart.narrow_svg):
            assert all(getattr(LIGHT, series.colour) in svg for series in SERIES)
            assert all(f">{name}</text>" in svg for name in names)
    assert len(set(re.findall(r"stroke-dasharray: ([\d., ]+)", charts["swr"].svg))) == 5


def test_heat_is_at_one_power_for_all():
    result = drawn(1.0, "Ash")
    efficiency = result.chosen.bands[0].figures["efficiency_ratio"]
    watts = heat_at(result, 200.0)["160 m"]
    assert watts.value == pytest.approx(200 * (1 - efficiency.mean))
    assert watts.high95 == pytest.approx(200 * (1 - efficiency.low95))
    assert watts.low95 == pytest.approx(200 * (1 - efficiency.high95))


@given(st.lists(st.floats(0, 200), min_size=1, max_size=6))
def test_names_beside_curves_never_cover_each_other(heights):
    placed = _parted(heights, 12.0, 0.0, 200.0)
    assert np.all(np.diff(np.sort(placed)) >= 12 - 1e-6)
    assert min(placed) >= -1e-6
    assert max(placed) <= 200 + 1e-6
    assert [placed[i] for i in np.argsort(heights, kind="stable")] == sorted(placed)


# --- which builds --------------------------------------------------------------------------------


@pytest.fixture
def runs(tmp_path: Path) -> Path:
    return write_runs(tmp_path / "runs", "alder", "birch")


def test_the_command_writes_a_page_and_a_pdf(runs: Path, tmp_path: Path, capsys):
    out = tmp_path / "two.html"
    builds = [str(runs / key) for key in ("alder", "birch")]
    assert main(["versus", *builds, "--out", str(out)]) == 0
    assert capsys.readouterr().out == f"{out} and {tmp_path / 'two.pdf'} written\n"
    assert "Birch against Alder" in out.read_text("utf-8")
    before = out.read_bytes()
    assert main(["versus", *builds, "--out", str(out)]) == 0
    assert out.read_bytes() == before
    assert sorted(path.name for path in tmp_path.iterdir()) == ["runs", "two.html", "two.pdf"]


def test_two_to_six_builds_each_once(runs: Path, tmp_path: Path):
    out = tmp_path / "x.html"
    with pytest.raises(UsageError, match="found 1 builds, expected 2 to 6"):
        write_versus([runs / "alder"], out)
    with pytest.raises(UsageError, match="found 7 builds"):
        write_versus([runs / "alder"] * 7, out)
    with pytest.raises(UsageError, match="named twice"):
        write_versus([runs / "alder", runs / "birch" / ".." / "alder"], out)
    with pytest.raises(UsageError, match=r"holds no build\.toml"):
        write_versus([runs / "alder", runs], out)
    assert not out.exists()


def test_a_build_that_cannot_be_read_is_named(runs: Path, tmp_path: Path):
    (runs / "birch" / "build.toml").write_text("nam = 3")
    with pytest.raises(InputRejected) as rejected:
        write_versus([runs / "alder", runs / "birch"], tmp_path / "x.html")
    assert {one.file for one in rejected.value.findings} == {"birch/build.toml"}
    write_build(runs / "birch", "Birch")
    text = (runs / "birch" / "build.toml").read_text().replace('"load"', '"open"')
    (runs / "birch" / "build.toml").write_text(text)
    with pytest.raises(NotMeasurable, match=r"^birch: "):
        write_versus([runs / "alder", runs / "birch"], tmp_path / "x.html")


def test_builds_of_another_bench_meet_under_the_settings_of_the_first(runs: Path, tmp_path: Path):
    bench = BENCH.replace('"Made up"', '"Elsewhere"').replace('["40 m"]', '["60 m"]')
    other = write_runs(tmp_path / "other", "cedar", bench=bench.replace("main", "spare"))
    out = tmp_path / "x.html"
    write_versus([runs / "alder", other / "cedar"], out)
    text = Page(out.read_text("utf-8")).text
    assert "Elsewhere" not in text
    assert "60 m" not in text
    assert "builds of different runs folders are taken to share none" in text


def test_a_calibration_of_another_bench_only_bears_the_name(tmp_path: Path, monkeypatch):
    """The same two folders, side by side and on two benches: apart, nothing cancels."""
    here, there = tmp_path / "here", tmp_path / "there"
    for root, keys in ((here, ("alder", "copy")), (there, ("copy",))):
        root.mkdir()
        shutil.copy(EXAMPLE_RUNS / "runs.toml", root)
        for key in keys:
            shutil.copytree(EXAMPLE_RUNS / "alder", root / key)
    seen = []
    monkeypatch.setattr(
        versus, "render_versus", lambda rivals, **_: seen.append(rivals) or ("", b"")
    )
    for other in (here, there):
        write_versus([here / "alder", other / "copy"], tmp_path / "x.html")
        (tmp_path / "x.html").unlink()
        (tmp_path / "x.pdf").unlink()
    together, apart = (
        np.mean([band.heat_loss_u95_db for band in found[1].comparison.bands]) for found in seen
    )
    assert apart > 1.3 * together
    assert all(band.heat_loss_db == 0 for band in seen[1][1].comparison.bands)


# --- where it may go -----------------------------------------------------------------------------


@pytest.mark.parametrize("name", ["x.html", "x.pdf"])
def test_a_file_of_somebody_else_is_left_alone(runs: Path, tmp_path: Path, name: str):
    (tmp_path / name).write_text("<!doctype html><title>mine</title>")
    before = contents(tmp_path)
    with pytest.raises(UsageError, match=f"{name} was not made by this command"):
        write_versus([runs / "alder", runs / "birch"], tmp_path / "x.html")
    assert contents(tmp_path) == before


def test_a_link_is_not_followed(runs: Path, tmp_path: Path):
    write_versus([runs / "alder", runs / "birch"], tmp_path / "ours.html")
    (tmp_path / "x.html").symlink_to(tmp_path / "ours.html")
    with pytest.raises(UsageError, match="was not made by this command"):
        write_versus([runs / "alder", runs / "birch"], tmp_path / "x.html")


@pytest.mark.parametrize(
    ("name", "words"),
    [
        ("x.txt", "found no .html at its end"),
        ("gone/x.html", "there is no folder"),
        (".", "no .html"),
    ],
)
def test_a_place_that_is_none_is_refused(runs: Path, tmp_path: Path, name: str, words: str):
    with pytest.raises(UsageError, match=words):
        write_versus([runs / "alder", runs / "birch"], tmp_path / name)
