"""The figures that `example_runs` is to give: `python tests/write_goldens.py`.

Writes `tests/goldens/KEY.json`, without what differs between versions and not between figures.
Look at `git diff tests/goldens` before keeping it: each changed figure wants a reason.
"""

from __future__ import annotations

import json
import sys
from pathlib import Path
from tempfile import TemporaryDirectory
from typing import Any

EXAMPLE_RUNS = Path(__file__).parents[1] / "example_runs"
GOLDENS = Path(__file__).parent / "goldens"
LEFT_OUT = ("program_version", "units", "methods", "forecast")


def golden_of(document: dict[str, Any]) -> dict[str, Any]:
    """What is kept of a `results.json`: the result itself, every method by its heat loss."""
    kept = {key: value for key, value in document.items() if key not in LEFT_OUT}
    for name in ("units", "methods"):
        kept[name] = [
            {
                "method": one["method"],
                "unit": one["unit"],
                "heat_loss_db": [band["heat_loss_db"] and band["heat_loss_db"]["mean"]
                                 for band in one["bands"]],
            }
            for one in document[name]
        ]  # fmt: skip
    return kept


def write_goldens(out: Path) -> None:
    """Goldens of everything that was published into a folder."""
    GOLDENS.mkdir(exist_ok=True)
    for old in GOLDENS.glob("*.json"):
        old.unlink()
    for path in sorted(out.glob("*/results.json")):
        text = json.dumps(golden_of(json.loads(path.read_bytes())), indent=1, ensure_ascii=False)
        (GOLDENS / f"{path.parent.name}.json").write_text(text + "\n", encoding="utf-8")


def main() -> int:
    """Publish the example runs into a folder that is let go, and keep its figures."""
    from reportgen.__main__ import main as reportgen

    with TemporaryDirectory() as folder:
        out = Path(folder) / "published"
        status = reportgen(["publish", str(EXAMPLE_RUNS), "--out", str(out)])
        if status == 0:
            write_goldens(out)
    return status


if __name__ == "__main__":
    sys.exit(main())
