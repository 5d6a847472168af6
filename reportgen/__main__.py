"""The commands: progress, what is said, exit status; slow imports wait for their command."""

from __future__ import annotations

import argparse
import os
import sys
from collections.abc import Callable, Iterator, Sequence
from contextlib import contextmanager
from io import TextIOWrapper
from pathlib import Path
from typing import TYPE_CHECKING

from reportgen.arguments import command_line
from reportgen.errors import (
    InputRejected,
    NotMeasurable,
    OutputError,
    ReportError,
    UsageError,
)

if TYPE_CHECKING:
    from rich.console import Console

    from reportgen.output.fingerprints import Seen
    from reportgen.output.manifest import Manifest
    from reportgen.pipeline import Outcome

DONE, REJECTED, WRONG_CALL = 0, 1, 2


def main(arguments: Sequence[str] | None = None) -> int:
    """Run one command; returns its exit status."""
    _leave_cores_to_builds()
    for stream in (sys.stdout, sys.stderr):
        if isinstance(stream, TextIOWrapper):
            stream.reconfigure(errors="backslashreplace")
    options = command_line().parse_args(arguments)
    try:
        return COMMANDS[options.command](options)
    except InputRejected as rejected:
        return _tell_rejected(rejected)
    except UsageError as error:
        return _tell(error, WRONG_CALL)
    except ReportError as error:
        return _tell(error, REJECTED)
    except BrokenPipeError:
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        return REJECTED
    except KeyboardInterrupt:
        return _tell(OutputError("interrupted; what was published before still stands"), REJECTED)


def _leave_cores_to_builds() -> None:
    """One thread for linear algebra: builds run beside each other, and bytes stay the same."""
    for name in ("OPENBLAS_NUM_THREADS", "OMP_NUM_THREADS", "MKL_NUM_THREADS"):
        os.environ.setdefault(name, "1")


def _tell(error: ReportError, status: int) -> int:
    from reportgen.pages.plain_text import clean_text

    print(f"reportgen: {clean_text(str(error))}", file=sys.stderr)
    return status


def _tell_rejected(rejected: InputRejected) -> int:
    from reportgen.pages.terminal import print_findings

    print_findings(_console(stderr=True), "nothing was done", rejected.findings)
    return REJECTED


# --- commands ----------------------------------------------------------------------------------


def _publish(options: argparse.Namespace) -> int:
    from reportgen.output.unchanged import find_unchanged, look_at

    seen = look_at(options.runs)
    if seen is not None and not options.force:
        unchanged = find_unchanged(
            seen, options.runs, options.out, baseline=options.baseline, only=options.only
        )
        if unchanged is not None:
            return _tell_unchanged(unchanged, options)
    return _publish_what_changed(options, seen)


def _tell_unchanged(manifest: Manifest, options: argparse.Namespace) -> int:
    """The same as when it was made, without anything slow."""
    from reportgen.pages.plain_findings import counts_line, finding_lines

    records = manifest.builds.values()
    lines = [*finding_lines("runs folder", manifest.findings)]
    for record in records:
        lines += finding_lines(f"{record.key}: not published", record.failure)
    lines += filter(None, [counts_line(manifest.counts())])
    print("".join(f"{line}\n" for line in lines), end="", file=sys.stderr)
    published = sum(record.published for record in records)
    _print_count(published, len(records), published, options.out)
    counted = {"error", "warning"} if options.strict else {"error"}
    return REJECTED if manifest.severities() & counted else DONE


def _publish_what_changed(options: argparse.Namespace, seen: Seen | None) -> int:
    from reportgen.pages.plain_findings import counts_line
    from reportgen.pipeline import Request, publish

    request = Request(
        runs=options.runs,
        out=options.out,
        baseline=options.baseline,
        only=tuple(options.only),
        jobs=options.jobs,
        patience_s=options.patience,
        force=options.force,
        seen=seen,
    )
    console = _console(stderr=True)
    with _progress(console) as announce:
        outcome = publish(request, announce)
    _print_outcome(console, outcome)
    if outcome.unchanged:
        console.print(counts_line(outcome.unchanged), soft_wrap=True)
    unchanged = outcome.published - len(outcome.made)
    _print_count(outcome.published, outcome.builds, unchanged, options.out)
    return _status(outcome, strict=options.strict)


def _print_count(published: int, builds: int, unchanged: int, out: Path) -> None:
    of_them = "all" if unchanged == published else f"{unchanged} of them"
    words = f", {of_them} unchanged" if unchanged else ""
    print(f"{published} of {builds} builds published{words}; open {out / 'index.html'}")


def _inspect(options: argparse.Namespace) -> int:
    from reportgen.pipeline import inspect

    with _progress(_console(stderr=True)) as announce:
        outcome = inspect(options.runs, options.jobs, announce)
    _print_outcome(_console(), outcome)
    if not outcome.made and not outcome.failed:
        print("no build was found: a build is a folder that holds a build.toml")
    elif outcome.worst() is None:
        print("nothing to report")
    return _status(outcome, strict=options.strict)


def _table(options: argparse.Namespace) -> int:
    from reportgen.pages.terminal import print_bands
    from reportgen.pipeline import measure_folder

    measured, runs = measure_folder(options.build)
    print_bands(_console(), measured.result, runs.bench)
    return DONE


def _forecast(options: argparse.Namespace) -> int:
    from reportgen.pages.forecast_terminal import print_forecast
    from reportgen.pipeline import measure_folder

    measured, runs = measure_folder(options.build)
    forecast = measured.forecast()
    if forecast is None:
        raise NotMeasurable(
            "the sweeps do not tell the winding apart, so nothing can be forecast; sweep two "
            "units back to back, or one with its high side open and shorted"
        )
    print_forecast(_console(), forecast, runs.bench.locale)
    return DONE


def _follow(options: argparse.Namespace) -> int:
    from reportgen.follow import Interrupts, Told, Watch, follow
    from reportgen.pipeline import Request, publish

    console = _console()

    interrupts = Interrupts()

    def publish_once(request: Request) -> Outcome:
        with _progress(console) as announce:
            outcome = publish(request, announce)
        interrupts.check()
        return outcome

    # no workers: they would import everything anew each time, and each would hear Ctrl-C by itself
    request = Request(runs=options.runs, out=options.out, baseline=options.baseline)
    told = Told(console, request)
    try:
        with interrupts:
            told.line(f"publishing {options.runs}, and again after each change; Ctrl-C ends it")
            watch = Watch(options.runs, tell=told.line, sleep=interrupts.sleep)
            follow(request, publish=publish_once, report=told.round, watch=watch)
    except KeyboardInterrupt:
        told.line("stopped; what was published stands")
    return DONE


def _sidecar(options: argparse.Namespace) -> int:
    from reportgen.sidecars.write import words_of, write_bench_starter, write_build_starter

    if options.bench:
        print(f"{write_bench_starter(options.folder)} written; take the # away where it applies")
        return DONE
    for line in words_of(write_build_starter(options.folder)):
        print(line)
    return DONE


def _schema(options: argparse.Namespace) -> int:
    from reportgen.sidecars.schema import schema_text

    print(schema_text(options.of))
    return DONE


def _versus(options: argparse.Namespace) -> int:
    from reportgen.versus import write_versus

    page, pdf = write_versus(options.builds, options.out)
    print(f"{page} and {pdf} written")
    return DONE


def _print_outcome(console: Console, outcome: Outcome) -> None:
    from reportgen.pages.terminal import print_failed, print_findings

    print_findings(console, "runs folder", outcome.findings)
    for one in outcome.made:
        print_findings(console, one.key, one.findings)
    print_failed(console, outcome.failed)


def _status(outcome: Outcome, *, strict: bool) -> int:
    from reportgen.model import Severity

    worst = outcome.worst()
    counted = (Severity.ERROR, Severity.WARNING) if strict else (Severity.ERROR,)
    nothing = not outcome.made and not outcome.failed
    return REJECTED if worst in counted or nothing else DONE


def _console(*, stderr: bool = False) -> Console:
    from rich.console import Console

    return Console(stderr=stderr, highlight=False, markup=False, emoji=False)


@contextmanager
def _progress(console: Console) -> Iterator[Callable[[str, int, int], None]]:
    """A progress line where there is a terminal, silence elsewhere."""
    if not console.is_terminal:
        yield lambda *_: None
        return
    from rich.progress import BarColumn, MofNCompleteColumn, Progress, TextColumn

    columns = (BarColumn(), MofNCompleteColumn(), TextColumn("{task.description}"))
    with Progress(*columns, console=console, transient=True) as progress:
        task = progress.add_task("reading", total=None)
        yield lambda key, done, total: progress.update(
            task, completed=done, total=total, description=key
        )


COMMANDS: dict[str, Callable[[argparse.Namespace], int]] = {
    "publish": _publish,
    "inspect": _inspect,
    "table": _table,
    "forecast": _forecast,
    "versus": _versus,
    "follow": _follow,
    "sidecar": _sidecar,
    "schema": _schema,
}


if __name__ == "__main__":
    sys.exit(main())
