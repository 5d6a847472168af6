"""The example runs from folders to pages: figures as kept, the same bytes from everywhere."""

from __future__ import annotations

import json
import math
import re
import shutil
from pathlib import Path

import pytest
from published_examples import HERE, in_a_process
from small_runs import BENCH, contents, write_build, write_runs
from write_goldens import EXAMPLE_RUNS, GOLDENS, golden_of

from reportgen.model import OUTPUT_MARKER
from reportgen.output.baseline import BASELINE_FILE

KEYS = sorted(path.stem for path in GOLDENS.glob("*.json"))
OF_A_BUILD = {
    "report.html", "report.pdf", "results.json", "bands.csv", "curves.csv",
    "card.pdf", "card.png", "card-square.png", "listing.md", "listing.html", "listing.txt",
}  # fmt: skip
TOLERANCE, TOLERANCE_OF_DRAWN = 1e-4, 1e-3
TOLERANCE_OF_ADVICE = 0.1  # a guess at sweeps that were not taken; rounding is amplified in it
ELSEWHERE = {"jobs": 2, "PYTHONHASHSEED": "2", "TZ": "Pacific/Auckland", "LC_ALL": "C.UTF-8"}
FINDING = re.compile(r"  (error|warning|note) +\S.*|[a-z0-9-]+")


def test_all_published_and_nothing_said_but_findings(published) -> None:
    done, out = published
    assert (done.returncode, done.stdout) == (
        0, f"{len(KEYS)} of {len(KEYS)} builds published; open {out / 'index.html'}\n"
    )  # fmt: skip
    assert [line for line in done.stderr.splitlines() if not FINDING.fullmatch(line)] == []


def test_files_that_are_published(published) -> None:
    files = {f"{key}/{name}" for key in KEYS for name in OF_A_BUILD}
    assert set(contents(published[1])) == files | {
        OUTPUT_MARKER, BASELINE_FILE, "index.html", "results.csv", "manifest.json"
    }  # fmt: skip


@pytest.mark.parametrize("key", KEYS)
def test_figures_are_those_kept(published, key: str) -> None:
    found = golden_of(json.loads((published[1] / key / "results.json").read_bytes()))
    kept = json.loads((GOLDENS / f"{key}.json").read_bytes())
    assert list(differences(found, kept)) == []


def differences(found: object, kept: object, path: str = ""):
    """Places where two documents differ by more than another machine may make them."""
    if isinstance(found, dict) and isinstance(kept, dict) and found.keys() == kept.keys():
        for key in kept:
            yield from differences(found[key], kept[key], f"{path}.{key}")
    elif isinstance(found, list) and isinstance(kept, list) and len(found) == len(kept):
        for place, (one, other) in enumerate(zip(found, kept, strict=True)):
            yield from differences(one, other, f"{path}[{place}]")
    elif isinstance(found, int | float) and isinstance(kept, int | float):
        relative = TOLERANCE_OF_DRAWN if "95" in path else TOLERANCE
        relative = TOLERANCE_OF_ADVICE if "advice" in path else relative
        if not math.isclose(found, kept, rel_tol=relative, abs_tol=TOLERANCE):
            yield f"{path}: {found} is not {kept}"
    elif found != kept:
        yield f"{path}: {found!r} is not {kept!r}"


def test_the_comparison_of_figures_sees_a_difference() -> None:
    kept = {"a": [1.0, {"b": "x", "low95": 1.0}], "c": None}
    assert list(differences(kept, kept)) == []
    assert list(differences({"a": [1.001, {"b": "x", "low95": 1.0009}], "c": None}, kept)) == [
        ".a[0]: 1.001 is not 1.0"
    ]
    assert len(list(differences({"a": [1.0, {"b": "y", "low95": 1.0}], "c": 0.0}, kept))) == 2
    assert len(list(differences({"a": []}, kept))) == 1


def test_builds_give_the_same_bytes_from_elsewhere(published, tmp_path: Path) -> None:
    """Another folder, process, number of workers, hash seed, time zone and language."""
    runs, out = tmp_path / "copied here", tmp_path / "elsewhere"
    for build in ("alder", "cedar", "portable/elder"):
        shutil.copytree(EXAMPLE_RUNS / build, runs / build)
    shutil.copy(EXAMPLE_RUNS / "runs.toml", runs)
    assert in_a_process(runs, out, **ELSEWHERE).returncode == 0
    first, second = contents(published[1]), contents(out)
    pages = [name for name in second if "/" in name]
    assert len(pages) == 3 * len(OF_A_BUILD)
    assert [name for name in pages if first[name] != second[name]] == []
    rows = second["results.csv"].splitlines()
    assert len(rows) > 100
    assert set(rows) <= set(first["results.csv"].splitlines())


def test_everything_is_the_same_bytes_from_elsewhere(tmp_path: Path) -> None:
    """And where an earlier run had made one build already, and another of other sweeps."""
    bench = 'baseline = "alder"\n' + BENCH
    found = []
    for name, settings in (("here", HERE), ("elsewhere", ELSEWHERE)):
        runs, out = tmp_path / name / "runs", tmp_path / name / "out"
        write_runs(runs, "alder", "birch", bench=bench)
        if name == "elsewhere":
            write_build(runs / "birch", "Birch as it was before")
            assert in_a_process(runs, out, **settings).returncode == 0
            write_build(runs / "birch", "Birch")
        done = in_a_process(runs, out, **settings)
        assert done.returncode == 0
        found.append(contents(out))
    assert "1 of them unchanged" in done.stdout
    assert found[0] == found[1]


@pytest.mark.parametrize("name", ["index.html", *(f"{key}/report.html" for key in KEYS)])
def test_pages_tell_nothing_of_the_machine(published, name: str) -> None:
    text = (published[1] / name).read_text("utf-8")
    assert str(EXAMPLE_RUNS.parent) not in text
    assert not re.search(r"\b(nan|NaN|None|Infinity)\b", re.sub(r"data:[^\"]*", "", text))
