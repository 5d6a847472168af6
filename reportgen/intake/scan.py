"""The walk through a runs folder: which files there are, and what is passed over and why."""

from __future__ import annotations

import os
import re
from collections.abc import Iterator
from dataclasses import dataclass
from heapq import nsmallest
from pathlib import Path

from reportgen.intake.paths import shown
from reportgen.intake.remarks import shortened
from reportgen.model import OUTPUT_MARKER, Finding, Severity

_SWEEP = re.compile(r".*\.(s\d{1,3}p|snp|ts)", re.IGNORECASE | re.ASCII | re.DOTALL)
_OTHERS_READ = (".toml", ".csv")


@dataclass(frozen=True, kw_only=True, slots=True)
class ScanLimits:
    """How much of a folder is looked at; bytes count for files that this program reads."""

    depth: int = 12
    folders: int = 10_000
    files: int = 10_000
    file_bytes: int = 64 * 2**20
    all_bytes: int = 2 * 2**30


@dataclass(frozen=True, kw_only=True, slots=True)
class Scan:
    """Regular files below a runs folder, as sorted relative paths, and what was passed over."""

    files: tuple[str, ...]
    findings: tuple[Finding, ...]


STANDARD_LIMITS = ScanLimits()


def scan_runs(root: Path, limits: ScanLimits = STANDARD_LIMITS) -> Scan:
    """Every regular file below a runs folder.

    Hidden files and folders, and folders that carry our marker, are passed over in silence;
    links, special files, names that are not UTF-8 and what exceeds a limit each give a finding.

    Parameters
    ----------
    root : Path
        The runs folder.
    limits : ScanLimits, optional
        How much is looked at.
    """
    walk = _Walk(limits)
    waiting = [""]
    while waiting and not walk.too_many:
        folder = waiting.pop()
        inner = [f"{folder}{name}/" for name in walk.enter(root, folder)]
        waiting += reversed(inner)
    walk.folders_left += len(waiting)
    return Scan(files=tuple(sorted(walk.files)), findings=walk.findings())


def is_sweep(file: str) -> bool:
    """Whether a file's name ends as those of sweeps do, of however many ports."""
    return _SWEEP.fullmatch(file) is not None


class _Walk:
    """What a walk has found so far."""

    def __init__(self, limits: ScanLimits) -> None:
        self.limits = limits
        self.files: list[str] = []
        self.noted: list[Finding] = []
        self.bytes = 0
        self.folders = 0
        self.folders_left = 0
        self.too_many = 0
        self.too_much = 0

    def enter(self, root: Path, folder: str) -> list[str]:
        """Note the files of one folder; the folders in it are returned, by name."""
        try:
            entries = self.entries(root / folder)
        except OSError as error:
            message = f"the folder cannot be read: {error.strerror}"
            self.note("unreadable", folder.rstrip("/"), message, "check its permissions")
            return []
        if any(entry.name == OUTPUT_MARKER for entry in entries):
            return []
        inner = []
        for entry in entries:
            if entry.name.startswith(".") or not self.usable(entry, folder + entry.name):
                continue
            if not entry.is_dir(follow_symlinks=False):
                self.take(entry, folder + entry.name)
            elif self.folders < self.limits.folders:
                self.folders += 1
                inner.append(entry.name)
            else:
                self.folders_left += 1
        return inner

    def entries(self, folder: Path) -> list[os.DirEntry[str]]:
        """What a folder holds, by name; of very many the first, the others counted."""
        most = self.limits.files + self.limits.folders
        with os.scandir(folder) as listing:
            self.too_many += max(0, sum(1 for _ in listing) - most)
        with os.scandir(folder) as listing:
            return nsmallest(most, listing, key=lambda entry: entry.name)

    def usable(self, entry: os.DirEntry[str], path: str) -> bool:
        """Whether an entry is a folder or regular file of a readable name, not too deep."""
        if entry.is_symlink():
            message = "a symbolic link; links are not followed"
            self.note("link", path, message, "copy the file or folder here", Severity.WARNING)
        elif not _decodable(entry.name):
            self.note("name-not-utf8", path, "the name is not UTF-8", "rename it")
        elif entry.is_dir(follow_symlinks=False):
            if path.count("/") < self.limits.depth:
                return True
            message = f"the folder lies more than {self.limits.depth} levels deep and is not read"
            self.note("too-deep", path, message, "move it up")
        elif entry.is_file(follow_symlinks=False):
            return True
        else:
            message = "neither a regular file nor a folder"
            self.note("not-a-file", path, message, "remove it", Severity.WARNING)
        return False

    def take(self, entry: os.DirEntry[str], path: str) -> None:
        """Note one regular file, unless a limit is reached."""
        size = self.size_to_read(entry)
        if size > self.limits.file_bytes:
            most = f"{self.limits.file_bytes / 2**20:g} MB"
            message = f"the file is larger than {most}, the most that is read"
            self.note("too-large", path, message, "sweep fewer points or split the file")
        elif len(self.files) >= self.limits.files:
            self.too_many += 1
        elif self.bytes + size > self.limits.all_bytes:
            self.too_much += 1
        else:
            self.files.append(path)
            self.bytes += size

    @staticmethod
    def size_to_read(entry: os.DirEntry[str]) -> int:
        """Size of a file that this program reads [bytes]; 0 for any other."""
        if not is_sweep(entry.name) and not entry.name.lower().endswith(_OTHERS_READ):
            return 0
        try:
            return entry.stat(follow_symlinks=False).st_size
        except OSError:  # gone since the folder was listed
            return 0

    def findings(self) -> tuple[Finding, ...]:
        """What was noted, and what the limits have kept out, counted."""
        return (*shortened(self.noted), *self.left_out())

    def left_out(self) -> Iterator[Finding]:
        remedy = "publish the folder in parts"
        if self.too_many:
            message = (
                f"more than {self.limits.files} files: {self.too_many} files "
                f"and {self.folders_left} whole folders left out"
            )
            yield _finding("too-many-files", None, message, remedy)
        elif self.folders_left:
            message = f"more than {self.limits.folders} folders: {self.folders_left} left out"
            yield _finding("too-many-folders", None, message, remedy)
        if self.too_much:
            most = f"more than {self.limits.all_bytes / 2**20:g} MB to read"
            message = f"{most}: {self.too_much} files left out"
            yield _finding("too-much-to-read", None, message, remedy)

    def note(
        self,
        code: str,
        path: str,
        message: str,
        remedy: str,
        severity: Severity = Severity.ERROR,
    ) -> None:
        """Add a finding about one file or folder."""
        self.noted.append(_finding(code, shown(path) or ".", message, remedy, severity))


def _finding(
    code: str,
    file: str | None,
    message: str,
    remedy: str,
    severity: Severity = Severity.ERROR,
) -> Finding:
    return Finding(severity=severity, code=code, message=message, remedy=remedy, file=file)


def _decodable(name: str) -> bool:
    try:
        name.encode("utf-8")
    except UnicodeEncodeError:
        return False
    return True
