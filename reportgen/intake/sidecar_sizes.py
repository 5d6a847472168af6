"""What no sidecar needs: tables longer than a page can show, numbers too small to mean anything."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any

from reportgen.intake.sidecar_shape import own_keys
from reportgen.intake.sidecar_text import Path, Problem, Tree
from reportgen.model import Sheet

MOST_OWN_KEYS = 200
LEAST_NUMBER = 1e-9


def size_problems(kind: type[Sheet], tree: Tree) -> Iterator[Problem]:
    """More keys of one's own than a page can show, and numbers too small to mean anything."""
    for key in own_keys(kind):
        if (count := _length(tree.get(key))) > MOST_OWN_KEYS:
            message = f"found {count} keys, expected at most {MOST_OWN_KEYS}"
            yield Problem((key,), "too-many-keys", message, "leave those that matter")
    for path, number in _numbers({key: tree[key] for key in tree if key != "record"}):
        if 0 < abs(number) < LEAST_NUMBER:
            message = f"found {number:g}, expected 0 or at least {LEAST_NUMBER:g}"
            yield Problem(path, "too-small", message, "correct the value")


def _numbers(tree: Tree) -> Iterator[tuple[Path, float]]:
    """Every number with a decimal point, and where it stands."""
    nodes: list[tuple[Path, Any]] = [((), tree)]
    while nodes:
        path, node = nodes.pop()
        if isinstance(node, float):
            yield path, node
        elif isinstance(node, dict):
            nodes += [((*path, key), item) for key, item in node.items()]
        elif isinstance(node, list):
            nodes += [((*path, place), item) for place, item in enumerate(node)]


def _length(value: object) -> int:
    return len(value) if isinstance(value, dict) else 0
