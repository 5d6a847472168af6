"""The example runs, published once for every test that looks at what comes out."""

from __future__ import annotations

import os
import subprocess
import sys
from pathlib import Path

HERE = {"jobs": 1, "PYTHONHASHSEED": "1", "TZ": "UTC", "LC_ALL": "C"}


def in_a_process(
    runs: Path, out: Path, jobs: int, **environment: str
) -> subprocess.CompletedProcess:
    """A run of its own, with every Python warning an error."""
    command = ["-W", "error", "-m", "reportgen", "publish", str(runs), "--out", str(out)]
    return subprocess.run(
        [sys.executable, *command, "--jobs", str(jobs)],
        env=os.environ | environment,
        capture_output=True,
        text=True,
        check=False,
    )
