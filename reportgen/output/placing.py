"""Putting finished files in place: whole or not at all, and nothing touched that is not ours."""

from __future__ import annotations

import fcntl
import hashlib
import os
import shutil
from collections.abc import Callable, Collection, Iterable, Iterator, Mapping
from contextlib import contextmanager, suppress
from pathlib import Path

from reportgen.errors import OutputError
from reportgen.model import OUTPUT_MARKER
from reportgen.output.manifest import OutputFile

NEW = ".reportgen-new-"
OLD = ".reportgen-old-"


@contextmanager
def open_output(out: Path) -> Iterator[None]:
    """The output folder, ours and locked while it is written.

    What an interrupted run left half moved is mended first.

    Raises
    ------
    OutputError
        It cannot be written, holds something else, or another run is writing it.
    """
    with _translated(out):
        _claim(out)
        with (out / OUTPUT_MARKER).open("r+", encoding="utf-8") as marker:
            _lock(marker.fileno(), out)
            _mend(out)
            try:
                yield
            except BaseException:
                with suppress(OSError):
                    _mend(out)
                raise


@contextmanager
def _translated(out: Path) -> Iterator[None]:
    try:
        yield
    except OSError as error:
        raise OutputError(f"{out}: {error.strerror or error}; nothing more was written") from error


def _claim(out: Path) -> None:
    if out.exists() and not out.is_dir():
        raise OutputError(f"{out} is a file, expected a folder for the pages; choose another --out")
    if out.is_dir() and not (out / OUTPUT_MARKER).is_file() and any(out.iterdir()):
        raise OutputError(
            f"{out} holds files that this program did not make; choose an empty folder for --out"
        )
    out.mkdir(parents=True, exist_ok=True)
    if not (out / OUTPUT_MARKER).exists():
        (out / OUTPUT_MARKER).write_text(
            "Written by reportgen; made anew by `reportgen publish`.\n"
        )


def _lock(descriptor: int, out: Path) -> None:
    try:
        fcntl.flock(descriptor, fcntl.LOCK_EX | fcntl.LOCK_NB)
    except BlockingIOError as error:
        raise OutputError(f"another run is writing {out}; wait until it has finished") from error


def _mend(out: Path) -> None:
    """Finish or undo the moves of an interrupted run."""
    for old in sorted(out.glob(f"{OLD}*")):
        standing = out / old.name.removeprefix(OLD)
        if standing.exists():
            _remove(old)
        else:
            old.rename(standing)
    for new in sorted(out.glob(f"{NEW}*")):
        _remove(new)


def _remove(path: Path) -> None:
    if path.is_dir() and not path.is_symlink():
        shutil.rmtree(path)
    else:
        path.unlink()


def place_build(
    out: Path, key: str, files: Mapping[str, bytes], earlier: Collection[str] = ()
) -> None:
    """One build's pages in one move; the earlier ones stand until then.

    Parameters
    ----------
    out : Path
        The output folder, opened.
    key : str
        The build's key, the name of its folder.
    files : mapping of str to bytes
        File names and contents.
    earlier : collection of str, optional
        File names that an earlier run wrote there; whatever else lies there stays.

    Raises
    ------
    OutputError
        The folder cannot be written, or its name is taken by something that is no folder.
    """
    new, old, standing = out / f"{NEW}{key}", out / f"{OLD}{key}", out / key
    if standing.is_symlink() or standing.is_file():
        raise OutputError(f"{standing} is in the way; move it, or choose another --out")
    with _translated(out):
        new.mkdir()
        for name, data in files.items():
            _write(new / name, [data])
        if standing.exists():
            _copy_others(standing, new, {*files, *earlier})
            standing.rename(old)
        new.rename(standing)
        if old.exists():
            shutil.rmtree(old)


def _copy_others(standing: Path, new: Path, ours: Collection[str]) -> None:
    """What somebody else has put beside the pages goes along."""
    for path in standing.iterdir():
        if path.name in ours:
            continue
        if path.is_dir() and not path.is_symlink():
            shutil.copytree(path, new / path.name, symlinks=True)
        else:
            shutil.copy2(path, new / path.name, follow_symlinks=False)


def place_file(out: Path, name: str, data: bytes) -> OutputFile:
    """One file of the output folder itself, replaced in one move."""
    return place_parts(out, name, [data])


def place_parts(out: Path, name: str, parts: Iterable[bytes]) -> OutputFile:
    """The same for a file that is never held whole."""
    new = out / f"{NEW}{name}"
    digest = hashlib.sha256()
    _write(new, _hashed(parts, digest.update))
    size = new.stat().st_size
    new.replace(out / name)
    return OutputFile(file=name, sha256=digest.hexdigest(), bytes=size)


def _hashed(parts: Iterable[bytes], update: Callable[[bytes], None]) -> Iterator[bytes]:
    for part in parts:
        update(part)
        yield part


def _write(path: Path, parts: Iterable[bytes]) -> None:
    with path.open("wb") as file:
        file.writelines(parts)
        file.flush()
        os.fsync(file.fileno())


def remove_files(out: Path, names: Iterable[str]) -> None:
    """Files that an earlier run wrote, by path below `out`, and their folders where then empty."""
    paths = [path for path in (out / name for name in names) if not path.parent.is_symlink()]
    for path in paths:
        if path.is_file() and not path.is_symlink():
            path.unlink()
    for folder in sorted({path.parent for path in paths} - {out}):
        if folder.is_dir() and not any(folder.iterdir()):
            folder.rmdir()
