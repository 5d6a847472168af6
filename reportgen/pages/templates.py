"""The templates: where they lie, and what may pass through them.

Everything a template prints passes `printable`: foreign text is made safe to look at, numbers
that were not rounded by `display` and missing values are refused.
"""

from __future__ import annotations

import tomllib
from functools import cache
from pathlib import Path

from jinja2 import Environment, FileSystemLoader, StrictUndefined, Undefined
from markupsafe import Markup

import reportgen
from reportgen.errors import OutputError
from reportgen.pages.plain_text import clean_text


def template_folder(package: Path) -> Path:
    """The folder of templates: inside the package, or beside it in our own source tree.

    Raises
    ------
    OutputError
        There is neither.
    """
    inside, beside = package / "templates", package.parent / "templates"
    if inside.is_dir():
        return inside
    if _is_source_tree(package.parent) and beside.is_dir():
        return beside
    raise OutputError("the templates of reportgen are missing; install it again")


def _is_source_tree(folder: Path) -> bool:
    try:
        project = tomllib.loads((folder / "pyproject.toml").read_text("utf-8"))["project"]
        return bool(project["name"] == "reportgen")
    except (OSError, UnicodeDecodeError, tomllib.TOMLDecodeError, KeyError, TypeError):
        return False


def printable(value: object) -> object:
    """What a template may print: text, whole numbers, and markup that this program made."""
    if isinstance(value, Markup | Undefined):
        return value  # what is undefined complains of it itself
    if isinstance(value, str):
        return clean_text(value)
    if isinstance(value, int) and not isinstance(value, bool):
        return str(value)
    raise TypeError(f"a template prints {type(value).__name__}; display turns figures into text")


@cache
def _environment() -> Environment:
    return Environment(
        loader=FileSystemLoader(template_folder(Path(reportgen.__file__).parent)),
        autoescape=True,
        undefined=StrictUndefined,
        finalize=printable,
        trim_blocks=True,
        lstrip_blocks=True,
    )


def render(name: str, **context: object) -> str:
    """A template filled in."""
    return _environment().get_template(name).render(context)


@cache
def read_style(name: str) -> str:
    """A style sheet from the folder of templates."""
    folder = template_folder(Path(reportgen.__file__).parent)
    return (folder / name).read_text("utf-8")
