"""A page of our own in somebody's folder: replaced in one move, and nothing else ever is."""

from __future__ import annotations

import os
from pathlib import Path

from reportgen.errors import OutputError, UsageError

_GENERATOR = b'<meta name="generator" content="reportgen '
_HEAD_BYTES = 4096


def refuse_foreign(page: Path) -> None:
    """See to it that a page and the PDF beside it may be written.

    Raises
    ------
    UsageError
        Something is there that this program did not make, or it is no place for a page.
    """
    if page.suffix != ".html":
        raise UsageError(f"--out {page}: found no .html at its end; name the page to write")
    if not page.parent.is_dir():
        raise UsageError(f"--out {page}: there is no folder {page.parent}; make it first")
    ours = _is_ours(page)
    for path in (page, pdf_beside(page)):
        if os.path.lexists(path) and not (ours and path.is_file() and not path.is_symlink()):
            raise UsageError(f"{path} was not made by this command; choose another --out")


def pdf_beside(page: Path) -> Path:
    """Where the same page lies as PDF."""
    return page.with_suffix(".pdf")


def _is_ours(page: Path) -> bool:
    try:
        with page.open("rb") as file:
            return _GENERATOR in file.read(_HEAD_BYTES)
    except OSError:
        return False


def place_page(page: Path, html: bytes, pdf: bytes) -> None:
    """The page and its PDF, each in one move.

    Raises
    ------
    OutputError
        They cannot be written.
    """
    for path, data in ((pdf_beside(page), pdf), (page, html)):
        new = path.with_name(f".new-{path.name}")
        try:
            new.write_bytes(data)
            new.replace(path)
        except OSError as error:
            new.unlink(missing_ok=True)
            raise OutputError(f"{path} cannot be written: {error.strerror or error}") from error
