"""Fingerprints: what lies in a runs folder, and what this program is made of, as hashes.

Only the standard library is imported here, in `manifest` and in `unchanged`: a run in which
nothing changed takes little longer than reading the files.
"""

from __future__ import annotations

import os
import stat
import sys
from collections.abc import Iterable, Iterator, Mapping
from functools import cache
from hashlib import sha256
from itertools import islice

MARKER = ".reportgen-output"
"""Name of the file that marks an output folder; the same as in `model`, which is slow to import."""

DEPTH, ENTRIES, FILE_BYTES, ALL_BYTES = 12, 20_000, 64 * 2**20, 2 * 2**30
"""How much of a runs folder is looked at; `intake.scan` reads nothing beyond either."""

LIBRARIES = (
    "fonttools", "font_source_sans_pro", "jinja2", "matplotlib", "numpy", "pandas", "pydyf",
    "pyphen", "scikit_rf", "scipy", "tinycss2", "weasyprint",
)  # fmt: skip
"""Libraries whose version may change a page or a figure."""

Seen = Mapping[str, str]
"""Path below a runs folder to SHA-256 of the file, or to the kind of what is no regular file."""


def fingerprint(parts: Iterable[str]) -> str:
    """SHA-256 of a list of texts."""
    digest = sha256()
    for part in parts:
        data = os.fsencode(part)
        digest.update(b"%d:%b," % (len(data), data))
    return digest.hexdigest()


def fingerprint_of_seen(seen: Seen) -> str:
    """SHA-256 of everything seen."""
    return fingerprint(text for path in sorted(seen) for text in (path, seen[path]))


# --- a runs folder -------------------------------------------------------------------------------


def seen_files(root: str | os.PathLike[str]) -> Seen:
    """Everything below a runs folder that can be an input, each regular file with its hash.

    Hidden files and output folders are none; links and special files count by their kind.

    Raises
    ------
    OSError
        The runs folder cannot be read, or holds more than is looked at.
    """
    walk = _Walk(os.fspath(root))
    waiting = [""]
    while waiting:
        waiting += walk.enter(waiting.pop())
    return walk.seen


class _Walk:
    def __init__(self, root: str) -> None:
        self.root = root
        self.seen: dict[str, str] = {}
        self.entries = 0
        self.bytes = 0

    def enter(self, folder: str) -> Iterator[str]:
        """Note what a folder holds; the folders in it are returned."""
        try:
            entries = self.listed(folder)
        except PermissionError:
            self.seen[folder] = "unreadable"
            return
        for entry in entries:
            if entry.name.startswith("."):
                continue
            path = folder + entry.name
            if entry.is_dir(follow_symlinks=False) and path.count("/") < DEPTH:
                yield f"{path}/"
            else:
                self.seen[path] = self.hash_or_kind(entry)

    def listed(self, folder: str) -> list[os.DirEntry[str]]:
        """What a folder holds; nothing where it is an output folder."""
        with os.scandir(f"{self.root}/{folder}") as listing:
            entries = list(islice(listing, ENTRIES))
        self.entries += len(entries)
        if self.entries >= ENTRIES:
            raise OSError("more than is looked at")
        return [] if any(entry.name == MARKER for entry in entries) else entries

    def hash_or_kind(self, entry: os.DirEntry[str]) -> str:
        """SHA-256 of a regular file; of any other, what it is."""
        if entry.is_symlink():
            return "link"
        if not entry.is_file(follow_symlinks=False):
            return "folder" if entry.is_dir(follow_symlinks=False) else "special"
        try:
            data = _content(entry.path, min(FILE_BYTES, ALL_BYTES - self.bytes))
            if data is None:
                return f"{entry.stat(follow_symlinks=False).st_size} bytes"
        except OSError:
            return "unreadable"
        self.bytes += len(data)
        return sha256(data).hexdigest()


def _content(path: str, at_most: int) -> bytes | None:
    """What a regular file holds; None: more than is read."""
    descriptor = os.open(path, os.O_RDONLY | os.O_NOFOLLOW | os.O_NONBLOCK)
    try:
        status = os.fstat(descriptor)
        if not stat.S_ISREG(status.st_mode):
            raise OSError("not a regular file")
        if status.st_size > at_most:
            return None
        with open(descriptor, "rb", closefd=False) as file:
            return file.read()
    finally:
        os.close(descriptor)


def hash_of_file(path: str | os.PathLike[str]) -> str | None:
    """SHA-256 of a regular file; None where there is none, or it cannot be read."""
    try:
        data = _content(os.fspath(path), ALL_BYTES)
    except OSError:
        return None
    return None if data is None else sha256(data).hexdigest()


# --- this program --------------------------------------------------------------------------------


@cache
def program_fingerprint() -> str:
    """What decides how a page is made: this package, its templates, the libraries' versions."""
    package = os.path.dirname(os.path.dirname(os.path.abspath(__file__)))
    within = f"{package}/templates"
    templates = within if os.path.isdir(within) else f"{os.path.dirname(package)}/templates"
    files = [
        (path.removeprefix(folder), hash_of_file(path) or "")
        for folder, suffix in ((package, ".py"), (templates, ""))
        for path in _files_below(folder, suffix)
    ]
    return fingerprint([sys.version, *_versions(), *(part for file in files for part in file)])


def _files_below(folder: str, suffix: str) -> list[str]:
    return sorted(
        f"{place}/{name}"
        for place, _, names in os.walk(folder)
        for name in names
        if name.endswith(suffix)
    )


def _versions() -> list[str]:
    """Names of the libraries' metadata folders, which hold their versions."""
    found: set[str] = set()
    for folder in sys.path:
        if os.path.isdir(folder):
            found.update(name for name in os.listdir(folder) if name.endswith(".dist-info"))
    return sorted(name for name in found if name.lower().startswith(LIBRARIES))
