"""Which folder is a build: the files below a runs folder, shared out among the sidecars."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from dataclasses import dataclass

from reportgen.intake.paths import build_keys, shown
from reportgen.intake.scan import is_sweep as is_sweep  # others ask for it here
from reportgen.intake.sidecar_shape import nearest
from reportgen.model import Finding, Severity

BENCH_FILE = "runs.toml"
BUILD_FILE = "build.toml"


@dataclass(frozen=True, kw_only=True, slots=True)
class BuildFolder:
    """A folder with a `build.toml`.

    `folder` is its path below the runs folder (`.`: the runs folder itself); `files` are the paths
    below it of all that belongs to it, which is not what lies in a build folder further down.
    """

    key: str
    folder: str
    files: tuple[str, ...]


def build_folders(files: Iterable[str], *, root_name: str) -> tuple[BuildFolder, ...]:
    """The builds among the files of a runs folder, by path.

    Parameters
    ----------
    files : iterable of str
        Paths below the runs folder.
    root_name : str
        Name of the runs folder, the key of a build that lies in it directly.
    """
    owned: dict[str, list[str]] = {}
    for folder, file in _owners(files):
        if folder is not None:
            inside = file if folder == "." else file.removeprefix(f"{folder}/")
            owned.setdefault(folder, []).append(inside)
    keys = build_keys(owned, root_name=root_name)
    return tuple(
        BuildFolder(key=keys[folder], folder=folder, files=tuple(sorted(owned[folder])))
        for folder in sorted(owned)
    )


def stray_files(files: Iterable[str]) -> Iterator[Finding]:
    """Findings about sweeps that belong to no build, and about a bench file out of place."""
    files = list(files)
    ownerless: dict[str, list[str]] = {}
    for folder, file in _owners(files):
        if folder is None:
            ownerless.setdefault(parent(file), []).append(name(file))
    for folder, names in sorted(ownerless.items()):
        if any(map(is_sweep, names)):
            yield _no_sidecar(folder, names)
    for file in files:
        if name(file) == BENCH_FILE and file != BENCH_FILE:
            yield Finding(
                severity=Severity.WARNING,
                code="not-read",
                message=f"a {BENCH_FILE} below the top of the runs folder is not read",
                remedy="move it up, or remove it",
                file=file,
            )


def _owners(files: Iterable[str]) -> list[tuple[str | None, str]]:
    """Each file with the nearest folder above it that holds a `build.toml`; None: there is none."""
    files = list(files)
    builds = {parent(file) for file in files if name(file) == BUILD_FILE}
    return [(next((up for up in _parents(file) if up in builds), None), file) for file in files]


def name(file: str) -> str:
    """Last part of a path."""
    return file.rpartition("/")[2]


def parent(file: str) -> str:
    """Folder that a file lies in; `.` for the top."""
    return file.rpartition("/")[0] or "."


def _parents(file: str) -> Iterator[str]:
    """Folders above a file, the nearest first, the top last."""
    while file != ".":
        file = parent(file)
        yield file


def _no_sidecar(folder: str, names: list[str]) -> Finding:
    """The error about a folder with sweeps and no sidecar, in it or above."""
    count = sum(map(is_sweep, names))
    sweeps = "1 sweep file" if count == 1 else f"{count} sweep files"
    others = [each for each in names if not is_sweep(each) and each != BENCH_FILE]
    meant = nearest(BUILD_FILE, others)
    start = f"write {shown(folder)}/build.toml; `reportgen sidecar` writes a starter"
    return Finding(
        severity=Severity.ERROR,
        code="no-sidecar",
        message=f"the folder has {sweeps} and no {BUILD_FILE}",
        remedy=f"rename {shown(meant)} to {BUILD_FILE}" if meant else start,
        file=folder,
    )
