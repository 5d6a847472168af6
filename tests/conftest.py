"""Settings common to all tests, and what many of them share."""

import os
import shutil
import subprocess
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import pytest
from hypothesis import settings
from opened_pages import Opened, is_whole, open_page, pasted

for name in ("OPENBLAS_NUM_THREADS", "OMP_NUM_THREADS", "MKL_NUM_THREADS"):
    os.environ.setdefault(name, "1")  # workers share the cores; before numpy is imported

settings.register_profile("suite", max_examples=50, deadline=None, derandomize=True)
settings.load_profile("suite")


@pytest.hookimpl(optionalhook=True)
def pytest_xdist_make_scheduler(config: pytest.Config, log: Any) -> Any:
    """With -n: a file to a worker, and all files about what is published to one."""
    from xdist.scheduler import LoadFileScheduling

    class Scheduling(LoadFileScheduling):
        def _split_scope(self, nodeid: str) -> str:
            file = super()._split_scope(nodeid)
            return "published" if "test_published_" in file else file

    return Scheduling(config, log)


@pytest.fixture(scope="module")
def few_draws() -> Iterator[None]:
    """Intervals from few draws: saves most of the time where no interval is checked."""
    with pytest.MonkeyPatch.context() as patch:
        patch.setattr("reportgen.physics.measure.DRAWS", 40)
        yield


@pytest.fixture(scope="session")
def published(tmp_path_factory) -> tuple[subprocess.CompletedProcess, Path]:
    """The example runs as published by a process of its own, and the folder they are in.

    Takes a minute: files that ask for it are named `test_published_...`, so that one worker has
    them all.
    """
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
