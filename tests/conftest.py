"""Settings common to all tests, and what many of them share."""

import os
import shutil
import subprocess
from collections.abc import Iterator
from pathlib import Path

import pytest
from hypothesis import settings
from opened_pages import Opened, is_whole, open_page, pasted

for name in ("OPENBLAS_NUM_THREADS", "OMP_NUM_THREADS", "MKL_NUM_THREADS"):
    os.environ.setdefault(name, "1")  # workers share the cores; before numpy is imported

settings.register_profile("suite", max_examples=50, deadline=None, derandomize=True)
settings.load_profile("suite")


def pytest_collection_modifyitems(items: list[pytest.Item]) -> None:
    """One worker for all tests of what the example runs publish, one for each other file."""
    for item in items:
        shared = "published" in getattr(item, "fixturenames", ())
        item.add_marker(pytest.mark.xdist_group("published" if shared else item.path.stem))


@pytest.fixture(scope="module")
def few_draws() -> Iterator[None]:
    """Intervals from few draws: saves most of the time where no interval is checked."""
    with pytest.MonkeyPatch.context() as patch:
        patch.setattr("reportgen.physics.measure.DRAWS", 40)
        yield


@pytest.fixture(scope="session")
def published(tmp_path_factory) -> tuple[subprocess.CompletedProcess, Path]:
    """The example runs as published by a process of its own, and the folder they are in."""
    from published_examples import HERE, in_a_process
    from write_goldens import EXAMPLE_RUNS

    out = tmp_path_factory.mktemp("first") / "published"
    return in_a_process(EXAMPLE_RUNS, out, **HERE), out


@pytest.fixture(scope="session")
def chromium():
    """A browser without a window."""
    program = shutil.which("chromium") or shutil.which("chromium-browser")
    if program is None:
        missing("Chromium is not installed: apt-get install chromium")
    try:
        from playwright.sync_api import sync_playwright
    except ModuleNotFoundError:
        missing("Playwright is not installed: pip install -e '.[browser]'")
    with sync_playwright() as playwright:
        browser = playwright.chromium.launch(executable_path=program, args=["--no-sandbox"])
        yield browser
        browser.close()


@pytest.fixture(scope="session")
def context(chromium):
    """A window of a reader without any settings of their own."""
    with chromium.new_context() as opened:
        yield opened


@pytest.fixture(scope="session")
def pages(published, context) -> dict[str, Opened]:
    """Every page that was published, opened, by its path."""
    folder = published[1]
    found = [path for path in sorted(folder.rglob("*.html")) if is_whole(path)]
    return {path.relative_to(folder).as_posix(): open_page(context, path) for path in found}


@pytest.fixture(scope="session")
def listings(published, tmp_path_factory) -> dict[str, Path]:
    """Pages with each listing that was published pasted into it, by the build."""
    folder = tmp_path_factory.mktemp("pasted")
    found = sorted(published[1].rglob("listing.html"))
    return {path.parent.name: pasted(path, folder) for path in found}


def missing(what: str) -> None:
    """Skip what cannot be checked here; where everything has to be checked, fail."""
    (pytest.fail if os.environ.get("CI") else pytest.skip)(what)
