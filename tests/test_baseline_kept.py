"""The baseline as it is kept: read back, it gives the same comparison and the same page."""

from __future__ import annotations

from pathlib import Path

import pytest
from write_goldens import EXAMPLE_RUNS

from reportgen.intake.builds import open_runs, read_build
from reportgen.model import BuildResult
from reportgen.output.baseline import baseline_bytes, kept_baseline, read_baseline
from reportgen.pages.report import render_report_html
from reportgen.physics.compare import compare
from reportgen.physics.measure import measure


@pytest.fixture(scope="module")
def results(few_draws) -> dict[str, BuildResult]:
    runs = open_runs(EXAMPLE_RUNS)
    return {
        folder.key: measure(read_build(runs, folder), runs.bench, runs.bands).result
        for folder in runs.folders
        if folder.key in ("alder", "portable-elder")
    }


@pytest.mark.parametrize("key", ["alder", "portable-elder"])
def test_read_back_it_gives_the_same_page(results, tmp_path: Path, key: str) -> None:
    bench = open_runs(EXAMPLE_RUNS).bench
    (tmp_path / "kept").write_bytes(baseline_bytes(results[key], "of these inputs"))
    pages = []
    for baseline in (results[key], read_baseline(tmp_path / "kept")):
        comparison = compare(results["alder"], baseline)
        page = render_report_html(
            results["alder"],
            comparison=comparison,
            baseline=baseline,
            bench=bench,
            program_version="0",
        )
        pages.append((comparison, page))
    assert pages[0] == pages[1]
    assert "Baseline" in pages[0][1]


def test_of_other_inputs_or_damaged_it_is_not_used(results, tmp_path: Path) -> None:
    kept = tmp_path / "kept"
    assert kept_baseline(kept, "a") is None
    kept.write_bytes(baseline_bytes(results["alder"], "a"))
    assert kept_baseline(kept, "a") is not None
    assert kept_baseline(kept, "b") is None
    whole = kept.read_bytes()
    for damaged in (
        whole[:-100],
        whole.replace(b"alder", b"older"),
        b"",
        b"{}\n{}\n",
        b"\xff\n1\n",
    ):
        kept.write_bytes(damaged)
        assert kept_baseline(kept, "a") is None
