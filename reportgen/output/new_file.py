"""A file that must not be there yet."""

from __future__ import annotations

from pathlib import Path

from reportgen.errors import OutputError, UsageError


def create_file(path: Path, text: str, *, remedy: str) -> None:
    """Write a new file, never over one that is there.

    Raises
    ------
    UsageError
        Something of that name is there; `remedy` says what to do.
    OutputError
        It cannot be written.
    """
    try:
        with path.open("x", encoding="utf-8", newline="\n") as file:
            file.write(text)
    except FileExistsError as error:
        raise UsageError(f"{path} is there already and was left as it is; {remedy}") from error
    except OSError as error:
        raise OutputError(f"{path} cannot be written: {error.strerror or error}") from error
