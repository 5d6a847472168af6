"""Builds that the sidecar allows and no bench has: figures stay finite, charts are drawn."""

from __future__ import annotations

import re
from pathlib import Path

import pytest
from small_runs import BENCH, BUILD, write_runs
from write_goldens import EXAMPLE_RUNS

from reportgen.intake.builds import open_runs, read_build
from reportgen.output.documents import json_bytes, results_document
from reportgen.pages.charts import draw_charts
from reportgen.physics.measure import measure

pytestmark = pytest.mark.usefixtures("few_draws")

PAIR = BUILD.replace('setup = "load"', 'setup = "back-to-back"').replace(".s1p", ".s2p")
DIRECT = '[[sweep]]\nfile = "b.s2p"\nsetup = "direct"\n'


def published(runs_folder: Path, key: str) -> dict[str, bytes | str]:
    """Figures and charts of one build, as they would be published."""
    runs = open_runs(runs_folder)
    (folder,) = [folder for folder in runs.folders if folder.key == key]
    measured = measure(read_build(runs, folder), runs.bench, runs.bands)
    forecast = measured.forecast()
    document = results_document(measured.result, None, program_version="1", forecast=forecast)
    charts = draw_charts(
        measured.result,
        None,
        runs.bands,
        swr_limits={},
        efficiency_limits={},
        capacitor=None if forecast is None else forecast.capacitor,
    )
    return {"results.json": json_bytes(document), **{n: one.svg for n, one in charts.items()}}


def sweep(value: str) -> str:
    return "# MHz S RI R 50\n" + "".join(f"{mhz / 10} {value}\n" for mhz in range(65, 76))


@pytest.mark.parametrize(
    ("value", "drawn"),
    [("-1 0", True), ("1.02 0", True), ("999 0", True), ("0 0", False), ("1e-300 0", False)],
)
def test_reflection_of_any_size(tmp_path: Path, value: str, drawn: bool) -> None:
    runs = write_runs(tmp_path, "alder")
    (runs / "alder" / "a-load.s1p").write_text(sweep(value))
    assert ("match" in published(runs, "alder")) is drawn


@pytest.mark.parametrize(
    "value",
    ["1 0 1 0 1 0 1 0", "-1 0 0 0 0 0 -1 0", "999 0 999 0 999 0 999 0", "0 0 1 0 1 0 0 0"],
    ids=["more out than in", "nothing through", "absurd", "a thru"],
)
def test_pair_of_any_kind(tmp_path: Path, value: str) -> None:
    runs = write_runs(tmp_path, "alder")
    for name in ("a-load.s2p", "b.s2p"):
        (runs / "alder" / name).write_text(sweep(value))
    (runs / "alder" / "build.toml").write_text(PAIR.format(name="Alder") + DIRECT)
    published(runs, "alder")


@pytest.mark.parametrize(
    ("old", "new"),
    [
        ("[winding]", "[match]\nsource_ohm = 1e-9\n[winding]"),
        ("capacitor_pf = 82", "capacitor_pf = 9999999"),
    ],
    ids=["source of nothing", "ten microfarads"],
)
def test_values_at_the_ends_of_their_ranges(tmp_path: Path, old: str, new: str) -> None:
    (tmp_path / "alder").mkdir()
    for file in (EXAMPLE_RUNS / "alder").iterdir():
        text = file.read_text("utf-8")
        if file.name == "build.toml":
            assert old in text
            text = text.replace(old, new, 1)
        elif file.suffix in (".s1p", ".s2p"):
            text = "".join(line for at, line in enumerate(text.splitlines(True)) if at % 6 < 4)
        (tmp_path / "alder" / file.name).write_text(text, "utf-8")
    bench = re.sub(r"(?m)^bands = .*$", 'bands = ["40 m"]', BENCH)
    (tmp_path / "runs.toml").write_text(f"{bench}[calibrations.october]\n", "utf-8")
    published(tmp_path, "alder")
