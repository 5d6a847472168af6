"""Runs folders that are made up on the spot, as small as can be published."""

from __future__ import annotations

from pathlib import Path

BENCH = """schema = 1
title = "Made up"
bands = ["40 m"]
[loads.main]
resistance_ohm = 3200
"""
BUILD = """schema = 1
name = "{name}"
[winding]
low_turns = 3
high_turns = 24
[[sweep]]
file = "a-load.s1p"
setup = "load"
"""
FREQUENCIES_MHZ = tuple(6.9 + 0.05 * step for step in range(11))
SWEEP = "# MHz S RI R 50\n" + "".join(
    f"{mhz:.2f} {0.1 + 0.01 * step:.3f} -0.050\n" for step, mhz in enumerate(FREQUENCIES_MHZ)
)


def write_runs(root: Path, *keys: str, bench: str = BENCH) -> Path:
    """A runs folder with a load-only build for each key."""
    root.mkdir(parents=True, exist_ok=True)
    (root / "runs.toml").write_text(bench)
    for key in keys:
        write_build(root / key, key.title())
    return root


def write_build(folder: Path, name: str) -> Path:
    """A build folder with one load sweep."""
    folder.mkdir(parents=True, exist_ok=True)
    (folder / "build.toml").write_text(BUILD.format(name=name))
    (folder / "a-load.s1p").write_text(SWEEP)
    return folder


def contents(root: Path) -> dict[str, bytes]:
    """Every file below a folder with its bytes, by relative path."""
    files = (path for path in sorted(root.rglob("*")) if path.is_file())
    return {path.relative_to(root).as_posix(): path.read_bytes() for path in files}
