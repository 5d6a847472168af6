"""The program as it is installed: from a wheel, and from its own source tree."""

from __future__ import annotations

import os
import subprocess
import sys
import zipfile
from pathlib import Path

import pytest
from small_runs import contents, write_runs

ROOT = Path(__file__).parents[1]
OF_THE_TREE = {"reportgen", "templates", "pyproject.toml", "README.md", "LICENSE"}
WHERE = (
    "import pathlib, reportgen; from reportgen.pages.templates import template_folder; "
    "package = pathlib.Path(reportgen.__file__).parent; print(package, template_folder(package))"
)


@pytest.fixture(scope="module")
def wheel(tmp_path_factory) -> Path:
    """A wheel of the source tree as it stands, built from a copy."""
    tree, out = tmp_path_factory.mktemp("tree"), tmp_path_factory.mktemp("wheel")
    for name in OF_THE_TREE:
        (tree / name).symlink_to(ROOT / name)
    command = ["-m", "build", "--wheel", "--no-isolation", "--outdir", str(out), str(tree)]
    subprocess.run([sys.executable, *command], check=True, capture_output=True)
    (made,) = out.glob("*.whl")
    return made


@pytest.fixture(scope="module")
def unpacked(wheel: Path, tmp_path_factory) -> Path:
    folder = tmp_path_factory.mktemp("installed")
    with zipfile.ZipFile(wheel) as archive:
        archive.extractall(folder)
    return folder


def python(*arguments: str, path: Path, cwd: Path) -> subprocess.CompletedProcess:
    return subprocess.run(
        [sys.executable, *arguments],
        cwd=cwd,
        env=os.environ | {"PYTHONPATH": str(path)},
        capture_output=True,
        text=True,
        check=False,
    )


def test_the_wheel_holds_package_templates_and_licence_and_nothing_else(wheel: Path) -> None:
    with zipfile.ZipFile(wheel) as archive:
        names = archive.namelist()
    templates = {f"reportgen/templates/{path.name}" for path in (ROOT / "templates").iterdir()}
    assert templates <= set(names)
    assert {name.split("/")[0].rpartition(".")[2] for name in names} == {"reportgen", "dist-info"}
    assert [name for name in names if name.endswith("licenses/LICENSE")]
    assert not [name for name in names if "__pycache__" in name or "tests" in name]


def test_templates_are_found_in_what_was_installed(unpacked: Path, tmp_path: Path) -> None:
    done = python("-c", WHERE, path=unpacked, cwd=tmp_path)
    assert done.stdout.split() == [str(unpacked / "reportgen"),
                                   str(unpacked / "reportgen" / "templates")]  # fmt: skip


def test_what_was_installed_publishes_and_gives_the_same_bytes(
    unpacked: Path, tmp_path: Path
) -> None:
    runs = write_runs(tmp_path / "runs", "alder")
    found = []
    for name, path in (("wheel", unpacked), ("tree", ROOT)):
        call = ("-m", "reportgen", "publish", str(runs), "--out", str(tmp_path / name))
        done = python(*call, path=path, cwd=tmp_path)
        assert (done.returncode, done.stderr) == (0, "")
        found.append(contents(tmp_path / name))
    assert "alder/report.pdf" in found[0]
    assert found[0] == found[1]


def test_templates_are_found_beside_the_package_in_the_source_tree(tmp_path: Path) -> None:
    done = python("-c", WHERE, path=ROOT, cwd=tmp_path)
    assert done.stdout.split() == [str(ROOT / "reportgen"), str(ROOT / "templates")]
