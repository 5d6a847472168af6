"""A runs folder made to do harm, published once: nothing runs, fetches, leaks or stops the rest."""

from __future__ import annotations

import csv
import getpass
import io
import json
import re
import socket
import threading
import unicodedata
from collections.abc import Iterator
from dataclasses import dataclass
from html.parser import HTMLParser
from http.server import BaseHTTPRequestHandler, ThreadingHTTPServer
from pathlib import Path

import pikepdf
import pytest
from hostile_runs import FOLDERS, MARK, write_hostile_runs
from rich.console import Console

from reportgen.__main__ import _print_outcome
from reportgen.model import FailedBuild
from reportgen.one_build import Job, Task, make_build, start
from reportgen.output.baseline import BASELINE_FILE
from reportgen.pipeline import Outcome, Request, publish
from reportgen.versus import write_versus

pytestmark = pytest.mark.usefixtures("few_draws")

SECRET = "SECRET-OF-THE-MACHINE-4711"
UNSEEN = {"Cc", "Cf", "Cs", "Co", "Cn", "Zl", "Zp"}


@dataclass(frozen=True)
class Hostile:
    """What became of the hostile folder; `hits` are the paths that were fetched meanwhile."""

    out: Path
    root: Path
    outcome: Outcome
    canary: Path
    hits: list[str]

    def files(self, pattern: str) -> dict[str, bytes]:
        """Bytes of the published files of a name, by path."""
        paths = sorted(self.out.rglob(pattern))
        assert paths, pattern
        return {path.relative_to(self.out).as_posix(): path.read_bytes() for path in paths}


@pytest.fixture(scope="module")
def hits() -> Iterator[tuple[int, list[str]]]:
    """A server on loopback that takes note of every path it is asked for."""
    asked: list[str] = []

    class Counting(BaseHTTPRequestHandler):
        def do_GET(self) -> None:
            asked.append(self.path)
            self.send_response(200)
            self.end_headers()

        def log_message(self, *words: object) -> None:
            pass

    with ThreadingHTTPServer(("127.0.0.1", 0), Counting) as server:
        threading.Thread(target=server.serve_forever, daemon=True).start()
        yield server.server_address[1], asked
        server.shutdown()


@pytest.fixture(scope="module")
def hostile(tmp_path_factory, hits, few_draws) -> Hostile:
    port, asked = hits
    base = tmp_path_factory.mktemp("hostile")
    local_file = base / "local.txt"
    local_file.write_text(SECRET)
    root = write_hostile_runs(base / "runs", port, local_file, base / "canary")
    out = base / "out"
    outcome = publish(Request(runs=root, out=out), lambda *_: None)
    write_versus([root / folder for folder in FOLDERS], out / "versus.html")
    return Hostile(out, root, outcome, base / "canary", asked)


# --- nothing stops the rest ----------------------------------------------------------------------


def test_what_can_be_published_is_and_the_rest_is_told(hostile):
    assert len(hostile.outcome.made) == 2
    assert {failed.folder for failed in hostile.outcome.failed} == {"broken <zq7 zq8=1>", "other"}
    found = [finding for one in hostile.outcome.failed for finding in one.findings]
    assert not [finding for finding in found if finding.code in ("fault", "not-drawn")]
    codes = {finding.code for finding in [*found, *hostile.outcome.findings]}
    assert {"pickle-data", "link", "not-a-file", "name-not-utf8", "unknown-key"} <= codes


def test_no_pickle_was_run(hostile):
    assert not hostile.canary.exists()


def test_keys_are_plain_whatever_the_folders_are_called(hostile):
    folders = {path.name for path in hostile.out.iterdir() if path.is_dir()}
    assert folders == {"zq7-zq8-1-onclick-zq", "zq7-7-7"}


# --- pages ---------------------------------------------------------------------------------------


class Elements(HTMLParser):
    """Every element of a page with its attributes, whatever its nesting."""

    def __init__(self, source: str) -> None:
        super().__init__(convert_charrefs=True)
        self.found: list[tuple[str, list[tuple[str, str | None]]]] = []
        self.text: list[str] = []
        self.comments: list[str] = []
        self.feed(source)
        self.close()

    def handle_starttag(self, tag, attrs):
        self.found.append((tag, attrs))

    def handle_data(self, data):
        self.text.append(data)

    def handle_comment(self, data):
        self.comments.append(data)


OF_NO_PAGE = {MARK, "img", "iframe", "object", "embed", "link", "base", "form", "image", "template"}
MAY_CARRY_TEXT = ("aria-label", "alt", "title", "content", "data-")


def test_no_element_and_no_attribute_of_a_payload_is_on_any_page(hostile):
    pages = hostile.files("*.html")
    assert len(pages) == 6
    for name, page in pages.items():
        elements = Elements(page.decode()).found
        tags = {tag for tag, _ in elements}
        assert not tags & OF_NO_PAGE, name
        assert [tag for tag, _ in elements].count("script") <= (name == "index.html")
        for tag, attributes in elements:
            names = [attribute for attribute, _ in attributes]
            assert len(names) == len(set(names)), (name, tag)
            for attribute, value in attributes:
                assert not attribute.startswith(("on", "zq")), (name, tag, attribute)
                if attribute in ("href", "src", "xlink:href", "style", "class", "id"):
                    assert not re.search(r"127|javascript|file:|7\*7|\s=|<", value or ""), value
                elif MARK in (value or ""):
                    assert attribute.startswith(MAY_CARRY_TEXT), attribute


def test_payloads_are_shown_as_they_were_written(hostile):
    for name, page in hostile.files("*.html").items():
        text = "".join(Elements(page.decode()).text)
        assert "<zq7 zq8=1>" in text or '<zq7 zq8="1">' in text, name
        assert "{{7*7}}" in text or "{{ 7*7 }}" in text, name


def test_no_data_is_in_a_style_sheet_or_a_script(hostile):
    for page in hostile.files("*.html").values():
        for inner in re.findall(
            r"<(?:style|script)[^>]*>(.*?)</(?:style|script)>", page.decode(), re.S
        ):
            assert MARK not in inner
            assert "127.0.0.1" not in inner


def test_nothing_unseen_is_on_any_page_or_in_any_listing(hostile):
    published = {
        **hostile.files("*.html"), **hostile.files("*.md"), **hostile.files("*.txt"),
        **hostile.files("*.csv"),
    }  # fmt: skip
    for name, data in published.items():
        text = data.decode()
        if name.endswith(".html"):
            parsed = Elements(text)
            values = [value or "" for _, attrs in parsed.found for _, value in attrs]
            text = "".join([*parsed.text, *values])
        kinds = {unicodedata.category(letter) for letter in text if letter not in "\n\r\t"}
        assert not kinds & UNSEEN, name


def test_markdown_holds_no_markup_of_others(hostile):
    for data in hostile.files("listing.md").values():
        text = data.decode()
        assert f"<{MARK}" not in text
        assert "](" not in text.replace("\\](", "")
        assert "javascript:" not in text


def test_spreadsheet_cells_hold_no_formula(hostile):
    for name, data in hostile.files("*.csv").items():
        for row in csv.reader(io.StringIO(data.decode(), newline="")):
            for cell in row:
                assert not cell.startswith(("=", "@", "\t")), (name, cell)
                if cell.startswith(("+", "-")):
                    float(cell)


def test_figures_as_data_can_be_read_back(hostile):
    for name, data in hostile.files("*.json").items():
        assert all(byte >= 0x20 or byte in b"\n" for byte in data)
        for document in data.splitlines() if name == BASELINE_FILE else [data]:
            json.loads(document, parse_constant=pytest.fail)


# --- paper ---------------------------------------------------------------------------------------


def test_nothing_was_fetched(hostile):
    assert hostile.hits == []


def test_paper_embeds_runs_and_links_nothing(hostile):
    for name, data in hostile.files("*.pdf").items():
        with pikepdf.open(io.BytesIO(data)) as pdf:
            assert not pdf.attachments, name
            for one in pdf.objects:
                if isinstance(one, pikepdf.Dictionary | pikepdf.Stream):
                    kinds = {str(one.get("/S", "")), str(one.get("/Type", ""))}
                    assert not kinds & {"/URI", "/JavaScript", "/Launch", "/GoToR", "/Filespec"}
                    assert "/JS" not in one


# --- secrets -------------------------------------------------------------------------------------


def secrets(hostile: Hostile) -> set[bytes]:
    """What nobody outside should learn; names too short to tell from words are left out."""
    machine = {socket.gethostname(), getpass.getuser(), str(Path.home()), str(Path.cwd())}
    long = {word for word in machine if len(word) > 5}
    return {word.encode() for word in {SECRET, str(hostile.root), str(hostile.out), *long}}


def test_no_secret_of_the_machine_is_published(hostile):
    files = [path for path in hostile.out.rglob("*") if path.is_file()]
    assert len(files) > 20
    for path in files:
        for content in _uncovered(path):
            for secret in secrets(hostile):
                assert secret not in content, (path.name, secret)


def _uncovered(path: Path) -> Iterator[bytes]:
    """The bytes of a file, and what is packed within them."""
    yield path.read_bytes()
    if path.suffix == ".pdf":
        with pikepdf.open(path) as pdf:
            yield str(dict(pdf.docinfo)).encode()
            for one in pdf.objects:
                if isinstance(one, pikepdf.Stream):
                    yield one.read_bytes()


def test_fault_tells_no_path(tmp_path: Path, monkeypatch) -> None:
    def failing(*_: object) -> None:
        raise FileNotFoundError(2, "No such file or directory", "/home/somebody/secret")

    monkeypatch.setattr("reportgen.one_build.read_build", failing)
    start(Task(runs=None))  # type: ignore[arg-type]
    failed = make_build(Job(folder=FOLDER))  # type: ignore[arg-type]
    assert isinstance(failed, FailedBuild)
    assert "somebody" not in failed.findings[0].message
    assert "No such file or directory" in failed.findings[0].message


class FOLDER:
    key = folder = "alder"


# --- terminal ------------------------------------------------------------------------------------


def test_terminal_gets_no_control_character(hostile):
    told = io.StringIO()
    console = Console(file=told, highlight=False, markup=False, emoji=False, width=80)
    _print_outcome(console, hostile.outcome)
    assert MARK in told.getvalue()
    kinds = {unicodedata.category(letter) for letter in told.getvalue().replace("\n", "")}
    assert not kinds & UNSEEN
