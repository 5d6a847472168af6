"""Starter sidecars on the disk, and what is still to be entered in them."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from pathlib import Path

from reportgen.errors import UsageError
from reportgen.intake.folders import BENCH_FILE, BUILD_FILE
from reportgen.intake.paths import read_bytes
from reportgen.intake.sidecar import parse_bench
from reportgen.intake.sidecar_text import MAX_BYTES
from reportgen.model import BenchSheet, Setup
from reportgen.output.new_file import create_file
from reportgen.pages.plain_text import clean_text
from reportgen.sidecars.bench_starter import bench_starter
from reportgen.sidecars.found import Found, FoundSweep, look_into
from reportgen.sidecars.starter import build_starter

_REMEDY = "move it away to have a starter written"


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Written:
    """A starter that was written: where, from what, and what is to be entered by key path."""

    path: Path
    found: Found
    to_enter: tuple[str, ...]
    has_bench: bool


def write_build_starter(folder: Path) -> Written:
    """`build.toml` in a folder of sweeps.

    Raises
    ------
    UsageError
        It is there already, or the folder holds no sweep.
    InputRejected
        The `runs.toml` above cannot be used.
    """
    path = folder / BUILD_FILE
    if path.exists() or path.is_symlink():
        create_file(path, "", remedy=_REMEDY)
    found = look_into(folder)
    bench = _bench_above(folder.resolve())
    starter = build_starter(found, bench or BenchSheet())
    create_file(path, starter.text, remedy=_REMEDY)
    return Written(path=path, found=found, to_enter=starter.to_enter, has_bench=bench is not None)


def write_bench_starter(root: Path) -> Path:
    """`runs.toml` in a runs folder, everything in it out of use.

    Raises
    ------
    UsageError
        It is there already, or `root` is no folder.
    """
    if not root.is_dir():
        raise UsageError(f"{root} is no folder; name the folder that holds the builds")
    path = root / BENCH_FILE
    create_file(path, bench_starter(), remedy=_REMEDY)
    return path


def words_of(written: Written) -> Iterator[str]:
    """What a terminal says of a starter: its sweeps, what to enter, what to call next."""
    found = written.found
    yield f"{clean_text(str(written.path))} written; see that these are right:"
    rows = [(one.file, _setup_words(one)) for one in found.sweeps]
    rows += [(file, Setup.SPOT.value) for file in found.spots]
    rows += [(file, "temperature log, out of use") for file in found.logs]
    rows += [(file, f"left out: {why}") for file, why in found.unusable.items()]
    names = [clean_text(file) for file, _ in rows]
    width = max(map(len, names))
    for name, (_, words) in zip(names, rows, strict=True):
        yield f"  {name:<{width}}  {clean_text(words)}"
    yield f"to be entered: {', '.join(written.to_enter)}"
    yield "and [compensation], where there is a capacitor"
    yield f"then: reportgen table {clean_text(str(written.path.parent))}"
    if not written.has_bench:
        yield (
            "no runs.toml was found above; `reportgen sidecar --bench RUNS` writes one to the "
            "runs folder, for resistors, calibrations and limits common to all builds"
        )


def _setup_words(one: FoundSweep) -> str:
    others = " or ".join(setup.value for setup in one.guess.others)
    return f"{one.guess.setup.value}{f' (may be {others})' if others else ''}"


def _bench_above(folder: Path) -> BenchSheet | None:
    """The `runs.toml` in a folder or the nearest above it."""
    for place in (folder, *folder.parents):
        if (place / BENCH_FILE).is_file():
            data = read_bytes(place, BENCH_FILE, file=BENCH_FILE, at_most=MAX_BYTES)
            return parse_bench(data, file=BENCH_FILE)
    return None
