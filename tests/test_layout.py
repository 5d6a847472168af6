"""How the source tree is laid out: what may lie where, who may import whom, how long a file is."""

from __future__ import annotations

import ast
import warnings
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[1]
PACKAGE = ROOT / "reportgen"
TOP_LEVEL = {
    "README.md", "DEVELOPERS.md", "pyproject.toml", "reportgen", "templates", "tests",
    "example_runs", "LICENSE",
}  # fmt: skip
# each layer may import those behind it; `reportgen` itself holds nothing but the version
ARROWS = {
    "arguments": {"reportgen"},
    "__main__": {
        "arguments", "follow", "versus", "pipeline", "sidecars", "pages", "output", "model",
        "errors", "reportgen",
    },
    "versus": {
        "pipeline", "intake", "pages", "output", "physics", "published", "model", "errors",
        "reportgen",
    },
    "follow": {"pipeline", "intake", "pages", "published", "model", "errors"},
    "sidecars": {"intake", "pages", "output", "physics", "model", "errors"},
    "pipeline": {
        "every_build", "index_files", "one_build", "intake", "output", "physics", "model",
        "errors", "reportgen",
    },
    "every_build": {"one_build", "intake", "output", "model"},
    "index_files": {"pages", "output", "published", "model", "errors", "reportgen"},
    "one_build": {"build_files", "intake", "output", "physics", "model", "errors"},
    "build_files": {"pages", "output", "physics", "model", "reportgen"},
    "intake": {"physics", "model", "errors"},
    "pages": {"physics", "published", "model", "errors", "reportgen"},
    "output": {"physics", "published", "model", "errors"},
    "published": {"model", "errors"},
    "physics": {"model", "errors"},
    "errors": {"model"},
    "model": set(),
    "__init__": set(),
}  # fmt: skip
NO_FILES_IN_PHYSICS = {"os", "io", "pathlib", "shutil", "tempfile", "subprocess", "logging"}
LONGEST_LINES = 300
LONGER = {"model.py": "every noun in one place"}
MODULES = sorted(PACKAGE.rglob("*.py"))


def layer(module: Path) -> str:
    return module.relative_to(PACKAGE).with_suffix("").parts[0]


def imported(module: Path) -> set[str]:
    """Every module named in an import statement, wherever it stands."""
    found = set()
    for node in ast.walk(ast.parse(module.read_text("utf-8"))):
        if isinstance(node, ast.Import):
            found |= {alias.name for alias in node.names}
        elif isinstance(node, ast.ImportFrom):
            assert node.level == 0, f"{module}: relative import"
            name = str(node.module)
            of_package = {f"{name}.{alias.name}" for alias in node.names}
            found |= of_package if name == "reportgen" else {name}
    return found


def layer_of_import(name: str) -> str:
    second = name.split(".")[1] if "." in name else "reportgen"
    module = PACKAGE / f"{second}.py"
    return second if (PACKAGE / second).is_dir() or module.is_file() else "reportgen"


@pytest.mark.parametrize("module", MODULES, ids=lambda path: str(path.relative_to(PACKAGE)))
def test_imports_run_one_way(module: Path) -> None:
    ours = {layer_of_import(name) for name in imported(module) if name.split(".")[0] == "reportgen"}
    assert ours - {layer(module)} <= ARROWS[layer(module)]


@pytest.mark.parametrize("module", sorted((PACKAGE / "physics").glob("*.py")), ids=lambda p: p.name)
def test_physics_opens_no_file(module: Path) -> None:
    assert not {name.split(".")[0] for name in imported(module)} & NO_FILES_IN_PHYSICS
    calls = [node for node in ast.walk(ast.parse(module.read_text())) if isinstance(node, ast.Call)]
    names = {node.func.id for node in calls if isinstance(node.func, ast.Name)}
    assert not names & {"open", "print", "input"}


def test_every_layer_is_there() -> None:
    assert {layer(module) for module in MODULES} == set(ARROWS)


def test_only_these_at_the_top() -> None:
    there = {path.name for path in ROOT.iterdir() if not path.name.startswith(".")}
    assert there - {"published", "dist", "build"} <= TOP_LEVEL
    assert there >= TOP_LEVEL


@pytest.mark.filterwarnings("default")
@pytest.mark.parametrize("module", MODULES, ids=lambda path: str(path.relative_to(PACKAGE)))
def test_a_module_can_be_read_in_one_go(module: Path) -> None:
    lines = len(module.read_text("utf-8").splitlines())
    if lines > LONGEST_LINES and module.relative_to(PACKAGE).as_posix() not in LONGER:
        warnings.warn(f"{module.name} has {lines} lines; {LONGEST_LINES} are enough", stacklevel=1)
    assert lines <= LONGEST_LINES * 1.5 or module.relative_to(PACKAGE).as_posix() in LONGER


@pytest.mark.parametrize("word", ["utils", "helpers", "manager", "data", "info", "misc", "common"])
def test_no_module_is_named_after_nothing(word: str) -> None:
    assert not [module for module in MODULES if word == module.stem]
