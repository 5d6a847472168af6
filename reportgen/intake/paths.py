"""Names of files and folders: how they are shown, which are safe to open, which key they give."""

from __future__ import annotations

import errno
import hashlib
import os
import re
import stat
import unicodedata
from collections import Counter
from collections.abc import Iterable
from pathlib import Path

from reportgen.errors import InputRejected
from reportgen.model import Finding, Severity

KEY_LENGTH = 60
_HASH_LENGTH = 8
_UNSEEN = {"Cc", "Cf", "Cs", "Co", "Cn"}
_DEVICES = {"con", "prn", "aux", "nul"} | {f"{p}{n}" for p in ("com", "lpt") for n in range(10)}
# `index` beside `index.html`: servers that drop the suffix cannot tell them apart
_BESIDE = {"index", "results", "manifest"}


def shown(name: str) -> str:
    r"""A file name as it may be printed: undecodable bytes and unseen characters as `\x..`."""
    text = os.fsencode(name).decode("utf-8", "backslashreplace")
    return "".join(_escaped(c) if unicodedata.category(c) in _UNSEEN else c for c in text)


def _escaped(character: str) -> str:
    return character.encode("unicode_escape").decode("ascii")


def file_name_problem(name: str) -> str | None:
    """What makes a file name in a sidecar unsafe, as a sentence; None when it is safe.

    Safe is a relative path with forward slashes that stays inside the build folder, whatever the
    system it is read on.
    """
    parts = name.split("/")
    problems = {
        "it holds a character that cannot be seen": any(
            unicodedata.category(c) in _UNSEEN for c in name
        ),
        "it is an address, not a file": "://" in name,
        "it holds a backslash": "\\" in name,
        "it begins with a drive letter": re.match(r"[A-Za-z]:", name) is not None,
        "it begins at the root of the file system": name.startswith("/"),
        "it begins with `~`": name.startswith("~"),
        "`..` leads out of the folder": ".." in parts,
        "it holds an empty or `.` part": "" in parts or "." in parts,
        "names that begin with a point are hidden and not read": any(
            part.startswith(".") for part in parts
        ),
    }
    return next((sentence for sentence, found in problems.items() if found), None)


# --- keys ------------------------------------------------------------------------------------


def build_keys(folders: Iterable[str], *, root_name: str) -> dict[str, str]:
    """Keys of build folders: the name of each one's folder in the output.

    Parameters
    ----------
    folders : iterable of str
        Paths below the runs folder with forward slashes; `.` is the runs folder itself.
    root_name : str
        Name of the runs folder, which gives the key of `.`.

    Returns
    -------
    dict
        Folder to key: at most 60 characters of `[a-z0-9-]`, all different. Where two would be the
        same each ends in 8 hexadecimal digits of the SHA-256 of its path.
    """
    plain = {folder: _slug(root_name if folder == "." else folder) for folder in folders}
    keys = dict(plain)
    while clashing := {key for key, count in Counter(keys.values()).items() if count > 1}:
        alike = [folder for folder in keys if keys[folder] in clashing]
        keys |= {folder: _hashed(plain[folder], folder) for folder in alike}
    return keys


def _slug(path: str) -> str:
    plain = unicodedata.normalize("NFKD", path).casefold().encode("ascii", "ignore").decode()
    slug = re.sub(r"[^a-z0-9]+", "-", plain).strip("-")
    if not slug:
        return "build"
    if slug in _DEVICES | _BESIDE:
        slug = f"{slug}-build"
    return slug[:KEY_LENGTH].rstrip("-")


def _hashed(slug: str, folder: str) -> str:
    digest = hashlib.sha256(os.fsencode(folder)).hexdigest()[:_HASH_LENGTH]
    return f"{slug[: KEY_LENGTH - _HASH_LENGTH - 1].rstrip('-')}-{digest}"


# --- opening ---------------------------------------------------------------------------------


def read_bytes(root: Path, relative: str, *, file: str, at_most: int) -> bytes:
    """All bytes of a regular file below `root`, reached without following a link.

    Parameters
    ----------
    root : Path
        The runs folder.
    relative : str
        Path below it, with forward slashes.
    file : str
        The name that a finding gives the file.
    at_most : int
        Size above which the file is refused [bytes].

    Raises
    ------
    InputRejected
        Missing, a link, a folder or device, too large, or not readable.
    """
    try:
        with os.fdopen(_open_below(root, relative), "rb") as stream:
            if not stat.S_ISREG(os.fstat(stream.fileno()).st_mode):
                raise _rejected(file, "not-a-file", "not a regular file", "name a sweep file")
            content = stream.read(at_most + 1)
    except OSError as error:
        raise _rejected(file, *_reason(error)) from error
    if len(content) > at_most:
        message = f"the file is larger than {at_most // 2**20} MB, the most that is read"
        raise _rejected(file, "too-large", message, "sweep fewer points or split the file")
    return content


def _open_below(root: Path, relative: str) -> int:
    """Descriptor of a file; each folder on the way is opened by itself, so none can be a link."""
    *parents, name = relative.split("/")
    folder = os.open(root, os.O_RDONLY | os.O_DIRECTORY)
    try:
        for parent in parents:
            inner = os.open(parent, os.O_RDONLY | os.O_DIRECTORY | os.O_NOFOLLOW, dir_fd=folder)
            os.close(folder)
            folder = inner
        # a pipe without a writer would block the plain call
        return os.open(name, os.O_RDONLY | os.O_NOFOLLOW | os.O_NONBLOCK, dir_fd=folder)
    finally:
        os.close(folder)


def _reason(error: OSError) -> tuple[str, str, str]:
    """Code, message and remedy of a file that could not be opened."""
    if error.errno in (errno.ENOENT, errno.ENOTDIR):
        return "missing-file", "the file is not there", "put it back or correct its name"
    if error.errno == errno.ELOOP:
        return "link", "the file is a symbolic link; links are not followed", "copy the file here"
    if error.errno in (errno.EISDIR, errno.ENXIO):
        return "not-a-file", "not a regular file", "name a sweep file"
    return "unreadable", f"the file cannot be read: {error.strerror}", "check its permissions"


def _rejected(file: str, code: str, message: str, remedy: str) -> InputRejected:
    return InputRejected(
        (Finding(severity=Severity.ERROR, code=code, message=message, remedy=remedy, file=file),)
    )
