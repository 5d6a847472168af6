"""Published results, read back: the same from memory and from disk, and nothing from damage."""

from __future__ import annotations

import json
from contextlib import suppress
from pathlib import Path
from typing import Any

import numpy as np
import pytest
import result_samples as samples
from page_reader import BASELINE, published
from sure_samples import sure
from write_example_runs import EXAMPLE_RUNS

from reportgen.errors import OutputError
from reportgen.intake.builds import open_runs, read_build
from reportgen.model import MeasuredBand, NotMeasured, Severity
from reportgen.output.documents import json_bytes, results_document, rounded
from reportgen.physics.compare import compare
from reportgen.physics.measure import measure_build
from reportgen.published import published_build, read_published

RUNS = open_runs(EXAMPLE_RUNS)


def document(result=None, comparison=None) -> dict[str, Any]:
    built = results_document(result or sure(), comparison, program_version="1.2.3")
    return json.loads(json_bytes(built))


@pytest.mark.usefixtures("few_draws")
@pytest.mark.parametrize("folder", RUNS.folders, ids=lambda folder: folder.key)
def test_from_memory_as_from_disk(folder, tmp_path: Path) -> None:
    result = measure_build(read_build(RUNS, folder), RUNS.bench, RUNS.bands)
    written = results_document(result, compare(result, result), program_version="1.2.3")
    (tmp_path / "results.json").write_bytes(json_bytes(written))
    there = read_published(tmp_path / "results.json")
    assert there is not None
    assert there == published_build(rounded(written))
    assert (there.key, there.name) == (folder.key, result.build.sheet.name)
    assert there.bands[0].band == result.chosen.bands[0].band
    assert there.findings == result.findings
    assert there.simulated


def test_what_pages_need_of_a_build() -> None:
    result = samples.full(u95=0.03)
    comparison = samples.comparison(result, BASELINE, judged=True)
    build = published(result, comparison)
    assert (build.comparison.key, build.comparison.name) == ("birch", "Birch")
    for found, given in zip(build.comparison.bands, comparison.bands, strict=True):
        assert (found.band, found.verdict, found.reason) == (given.band, given.verdict, None)
        assert found.heat_loss_db == pytest.approx(given.heat_loss_db, rel=1e-8)
    ours, theirs = build.bands[0], result.chosen.bands[0]
    assert isinstance(ours, MeasuredBand)
    assert ours.covered_hz == theirs.covered_hz
    assert ours.figures["swr"].worst == pytest.approx(theirs.figures["swr"].worst, rel=1e-8)
    assert build.worst is Severity.WARNING
    assert build.power_w == 60


def test_a_band_without_figures_says_why() -> None:
    build = published(samples.partial())
    assert build.bands[-1] == NotMeasured(band=samples.BANDS[-1], reason="the sweeps end at 22 MHz")
    partial = next(band for band in build.bands if band.band.name == "15 m")
    assert partial.partial
    assert partial.covered_hz == (21_000_000, 21_200_000)


def test_the_covariance_is_that_of_the_draws() -> None:
    result = sure()
    build = published(result)
    assert build.covariance is not None
    draws = np.array([10 ** (-one / 10) for one in result.loss_draws_db.values()])
    np.testing.assert_allclose(build.covariance.matrix, np.cov(draws), rtol=1e-7)
    assert published(samples.full()).covariance is None


@pytest.mark.parametrize(
    "data",
    [b"", b"{", b"[]", b"null", b"{}", b"\xff\xfe", b"[" * 100_000, b'{"schema": 2}'],
    ids=["empty", "cut", "list", "null", "no keys", "no text", "deep", "another schema"],
)
def test_a_damaged_file_gives_nothing(data: bytes, tmp_path: Path) -> None:
    (tmp_path / "results.json").write_bytes(data)
    assert read_published(tmp_path / "results.json") is None


def test_a_missing_file_gives_nothing(tmp_path: Path) -> None:
    assert read_published(tmp_path / "results.json") is None
    assert read_published(tmp_path) is None


@pytest.mark.parametrize("junk", [None, "x", -1, [], {}, True, {"a": 1}], ids=repr)
def test_no_damage_raises_anything_but_one_error(junk: object) -> None:
    """Every value at the top and one step down, replaced by what does not belong there."""
    whole = document(sure(), compare(sure(), sure()))
    for key in whole:
        _published_or_refused(whole | {key: junk})
    for part in ("build", "band_covariance", "baseline", "lot"):
        for key in whole[part] or {}:
            _published_or_refused(whole | {part: whole[part] | {key: junk}})
    for part in ("bands", "limits", "findings"):
        for key in whole[part][0] if whole[part] else ():
            _published_or_refused(whole | {part: [whole[part][0] | {key: junk}]})


def _published_or_refused(changed: dict[str, Any]) -> None:
    with suppress(OutputError):
        build = published_build(changed)
        assert isinstance(build.name, str)
        assert all(isinstance(one.band.from_hz, float) for one in build.bands)


def test_a_key_that_is_gone_is_damage() -> None:
    whole = document()
    del whole["bands"][0]["heat_loss_db"]["mean"]
    with pytest.raises(OutputError, match="mean"):
        published_build(whole)
