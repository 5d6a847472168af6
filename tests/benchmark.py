"""How long publishing takes and how much memory: `python tests/benchmark.py [--builds 100]`.

Makes up builds like those of `example_runs`, each with units and noise of its own and four times
the points, publishes them, and prints a table: what was measured, the floor it is held against,
the ratio. Times are of the wall clock and, in brackets, of all processors together; both sides of
a ratio are taken in the same run, so a busy machine shows in both.

Floors
------
full run
    The same number of the same pages (reports for screen and paper with their charts, cards as PDF
    and pictures) drawn from results that were computed before, in as many processes; nothing is
    read, computed, compared or written.
nothing changed
    A bare Python that walks the runs folder and hashes each file.
one changed
    That build published alone, from a runs folder of its own.
"""

from __future__ import annotations

import argparse
import os
import pickle
import re
import resource
import subprocess
import sys
import threading
import time
from collections.abc import Callable, Iterator
from concurrent.futures import ProcessPoolExecutor
from dataclasses import dataclass, replace
from multiprocessing import get_context
from pathlib import Path
from tempfile import TemporaryDirectory
from unittest import mock

os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")
sys.path.insert(0, str(Path(__file__).parent))

POINTS_TIMES = 4
ROUNDS = 5
BARE = """
import hashlib, os, sys
for folder, _, names in os.walk(sys.argv[1]):
    for name in names:
        path = os.path.join(folder, name)
        os.stat(path)
        with open(path, "rb") as file:
            hashlib.sha256(file.read()).hexdigest()
"""


@dataclass(frozen=True)
class Took:
    """Time by the wall clock and of all processors [s]."""

    wall_s: float
    cpu_s: float

    def __str__(self) -> str:
        return f"{self.wall_s:.3f} s ({self.cpu_s:.3f} s)"


def timed(step: Callable[[], object]) -> Took:
    """Time of a step that is done by processes which have ended with it."""
    cpu_s, start = processors_s(), time.perf_counter()
    step()
    return Took(time.perf_counter() - start, processors_s() - cpu_s)


def processors_s() -> float:
    """Time of the processes that this one has started and that have ended [s]."""
    used = resource.getrusage(resource.RUSAGE_CHILDREN)
    return used.ru_utime + used.ru_stime


def least(times: list[Took]) -> Took:
    """The least of each: what is above it, others have caused."""
    return Took(min(one.wall_s for one in times), min(one.cpu_s for one in times))


# --- builds --------------------------------------------------------------------------------------


def write_builds(root: Path, builds: int) -> None:
    """Builds like the examples in turn; the first bears the key of the baseline."""
    import write_example_runs
    from simulation.hollin_bank import EXAMPLES

    kinds = [one for one in EXAMPLES if one.folder != "portable/elder"]
    varied = []
    for count in range(builds):
        kind = kinds[count % len(kinds)]
        name = kind.sheet.name if count == 0 else f"{kind.sheet.name} {count}"
        varied.append(
            replace(
                kind,
                folder=kind.folder if count == 0 else f"{kind.folder}-{count}",
                sheet=replace(kind.sheet, name=name),
                plan=replace(kind.plan, points=POINTS_TIMES * kind.plan.points),
            )
        )
    with mock.patch.object(write_example_runs, "EXAMPLES", varied):
        for file, text in write_example_runs.example_texts():
            (root / file).parent.mkdir(parents=True, exist_ok=True)
            (root / file).write_text(text, encoding="utf-8", newline="\n")


def size_mb(folder: Path) -> float:
    """Size of all files below a folder [MB]."""
    return sum(path.stat().st_size for path in folder.rglob("*") if path.is_file()) / 1e6


# --- the program ---------------------------------------------------------------------------------


def run(*arguments: object) -> str:
    """The program, as it is called; its code is kept compiled, as where it is installed."""
    command = [sys.executable, "-m", "reportgen", *map(str, arguments)]
    done = subprocess.run(command, capture_output=True, text=True, check=True)
    return done.stdout.strip()


def publish(runs: Path, out: Path, jobs: int) -> Callable[[], str]:
    return lambda: run("publish", runs, "--out", out, "--jobs", jobs)


class Memory:
    """Resident memory of the processes below this one while a step lasts, and builds done."""

    def __init__(self, out: Path) -> None:
        self.out, self.going = out, True
        self.samples: list[tuple[int, int, float]] = []
        self.thread = threading.Thread(target=self._watch)

    def __enter__(self) -> Memory:
        self.thread.start()
        return self

    def __exit__(self, *_: object) -> None:
        self.going = False
        self.thread.join()

    def _watch(self) -> None:
        while self.going:
            done = sum(1 for _ in self.out.glob("*/report.pdf"))
            for process in below(os.getpid()):
                self.samples.append((done, process, resident_mb(process)))
            time.sleep(0.25)

    def most_mb(self, low: int, high: int) -> float:
        """The most of any process while that many builds were done [MB]."""
        return max((mb for done, _, mb in self.samples if low <= done <= high), default=0.0)


def below(process: int) -> Iterator[int]:
    """Processes that a process has started, and that those have."""
    for tasks in Path(f"/proc/{process}/task").glob("*/children"):
        try:
            children = [int(one) for one in tasks.read_text().split()]
        except OSError:
            continue
        for child in children:
            yield child
            yield from below(child)


def resident_mb(process: int) -> float:
    """Resident memory of a process [MB]; 0 where it has ended."""
    try:
        found = re.search(r"VmRSS:\s+(\d+)", Path(f"/proc/{process}/status").read_text())
    except OSError:
        return 0.0
    return int(found[1]) / 1000 if found else 0.0


# --- the floor of a full run ---------------------------------------------------------------------

_ready: list[tuple] = []


def computed(runs_folder: Path, most: int) -> bytes:
    """What pages are drawn from, of the first builds of a runs folder."""
    from reportgen.intake.builds import open_runs, read_build
    from reportgen.physics.compare import compare
    from reportgen.physics.measure import measure

    runs = open_runs(runs_folder)
    first = sorted(runs.folders, key=lambda one: (one.key != runs.bench.baseline, one.key))[:most]
    measured = [measure(read_build(runs, one), runs.bench, runs.bands) for one in first]
    baseline = measured[0].result
    return pickle.dumps(
        [
            (one.result, compare(one.result, baseline), baseline, runs.bench, one.forecast())
            for one in measured
        ]
    )


def get_ready(pickled: bytes) -> None:
    """Nothing but what is drawn: no results as JSON or CSV."""
    from reportgen.output import csv_tables, documents

    _ready[:] = pickle.loads(pickled)
    csv_tables.bands_csv = csv_tables.curves_csv = lambda *_: b""
    documents.results_document = lambda *_, **__: {}


def draw_pages(count: int) -> None:
    """Every page and picture of one build."""
    from reportgen.build_files import build_files

    build_files(*_ready[count % len(_ready)])


def draw_all(pickled: bytes, builds: int, jobs: int) -> None:
    with ProcessPoolExecutor(jobs, get_context("spawn"), get_ready, (pickled,)) as pool:
        list(pool.map(draw_pages, range(builds)))


# --- the table -----------------------------------------------------------------------------------


def line(what: str, took: Took, floor: Took, target: str = "") -> str:
    wall, cpu = took.wall_s / floor.wall_s, took.cpu_s / floor.cpu_s
    return f"| {what} | {took} | {floor} | {wall:.2f} ({cpu:.2f}) | {target} |"


def rows(folder: Path, builds: int, jobs: int) -> Iterator[str]:
    runs, out = folder / "runs", folder / "out"
    write_builds(runs, builds)
    run("--help")
    with Memory(out) as memory:
        full = timed(publish(runs, out, jobs))
    pickled = computed(runs, min(builds, 7))
    floor = timed(lambda: draw_all(pickled, builds, jobs))
    sizes = f"{size_mb(runs):.1f} MB of sweeps, {size_mb(out):.1f} MB of pages"
    yield f"{builds} builds, {sizes}, {jobs} workers; {full.wall_s / builds:.2f} s a build\n"
    yield "| | took | floor | ratio | target |"
    yield "|---|---|---|---|---|"
    yield line("full run", full, floor)
    yield from fast_rows(folder, jobs, full)
    yield ""
    half = min(50, builds // 2)
    yield f"most memory of a process, up to {half} builds: {memory.most_mb(0, half):.0f} MB"
    yield f"most memory of a process, to the end: {memory.most_mb(half, builds):.0f} MB"


def fast_rows(folder: Path, jobs: int, full: Took) -> Iterator[str]:
    runs, out = folder / "runs", folder / "out"
    bare = [sys.executable, "-c", BARE, str(runs)]
    assert "all unchanged" in publish(runs, out, jobs)()
    still = least([timed(publish(runs, out, jobs)) for _ in range(ROUNDS)])
    hashed = least([timed(lambda: subprocess.run(bare, check=True)) for _ in range(ROUNDS)])
    yield line("nothing changed", still, hashed, "1.5")
    yield line("nothing changed, of a full run", still, full, "0.01")

    one = sorted(path.parent for path in runs.glob("birch*/build.toml"))[0]
    alone = folder / "alone"
    (alone / one.name).mkdir(parents=True)
    bench = (runs / "runs.toml").read_text()
    (alone / "runs.toml").write_text(bench.replace('baseline = "alder"\n', ""))
    changed_took, alone_took = [], []
    for count in range(3):
        sidecar = one / "build.toml"
        sidecar.write_text(sidecar.read_text().replace('name = "Birch', f'name = "Birch {count}'))
        for path in one.iterdir():
            (alone / one.name / path.name).write_bytes(path.read_bytes())
        alone_took.append(timed(publish(alone, folder / f"alone-out-{count}", jobs)))
        changed_took.append(timed(publish(runs, out, jobs)))
    yield line("one changed", least(changed_took), least(alone_took), "1.5")

    helped = least([timed(lambda: run("--help")) for _ in range(ROUNDS)])
    empty = [sys.executable, "-c", "pass"]
    bare_took = least([timed(lambda: subprocess.run(empty, check=True)) for _ in range(ROUNDS)])
    yield line("`--help`, of `python -c pass`", helped, bare_took, "5")


def main() -> None:
    parser = argparse.ArgumentParser(description=__doc__.splitlines()[0])
    parser.add_argument("--builds", type=int, default=100)
    parser.add_argument("--jobs", type=int, default=os.cpu_count() or 1)
    options = parser.parse_args()
    with TemporaryDirectory() as folder:
        os.environ.pop("PYTHONDONTWRITEBYTECODE", None)
        os.environ["PYTHONPYCACHEPREFIX"] = f"{folder}/compiled"
        for row in rows(Path(folder), options.builds, options.jobs):
            print(row, flush=True)


if __name__ == "__main__":
    main()
