"""The command line: arguments, progress, exit status; slow imports wait for their command."""

from __future__ import annotations

import argparse
import os
import sys
from collections.abc import Callable, Iterator, Sequence
from contextlib import contextmanager
from io import TextIOWrapper
from pathlib import Path
from typing import TYPE_CHECKING

from reportgen import __version__
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
    options = _parser().parse_args(arguments)
    command: Callable[[argparse.Namespace], int] = options.command
    try:
        return command(options)
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


def _parser() -> argparse.ArgumentParser:
    parser = argparse.ArgumentParser(
        prog="reportgen",
        description="Loss, match and heat of impedance transformers, from folders of "
        "network-analyzer sweeps to pages and PDFs.",
    )
    parser.add_argument("--version", action="version", version=f"reportgen {__version__}")
    commands = parser.add_subparsers(title="commands", required=True, metavar="COMMAND")
    _add_publish(commands)
    _add_inspect(commands)
    _add_table(commands)
    _add_forecast(commands)
    _add_versus(commands)
    _add_follow(commands)
    _add_sidecar(commands)
    _add_schema(commands)
    return parser


def _add_publish(commands: argparse._SubParsersAction[argparse.ArgumentParser]) -> None:
    text = "publish every build of a runs folder"
    publish = commands.add_parser("publish", help=text, description=text)
    publish.add_argument("runs", metavar="RUNS", type=Path, help="folder of build folders")
    publish.add_argument(
        "--out",
        type=Path,
        default=Path("published"),
        help="where the pages go (default: ./published)",
    )
    publish.add_argument("--baseline", metavar="KEY", help="build to compare with")
    publish.add_argument(
        "--only",
        metavar="KEY",
        action="append",
        default=[],
        help="make the pages of this build only; may be repeated",
    )
    publish.add_argument(
        "--force", action="store_true", help="make every build again, changed or not"
    )
    _add_jobs(publish)
    publish.add_argument(
        "--patience",
        metavar="SECONDS",
        type=_seconds,
        default=120.0,
        help="most time that one build may take (default: %(default)g)",
    )
    publish.add_argument("--strict", action="store_true", help="warnings count as errors")
    publish.set_defaults(command=_publish)


def _add_inspect(commands: argparse._SubParsersAction[argparse.ArgumentParser]) -> None:
    text = "say what is wrong or worth knowing about a runs folder; write nothing"
    inspect = commands.add_parser("inspect", help=text, description=text)
    inspect.add_argument("runs", metavar="RUNS", type=Path, help="folder of build folders")
    _add_jobs(inspect)
    inspect.add_argument("--strict", action="store_true", help="warnings count as errors")
    inspect.set_defaults(command=_inspect)


def _add_table(commands: argparse._SubParsersAction[argparse.ArgumentParser]) -> None:
    text = "show the figures of one build, band by band"
    table = commands.add_parser("table", help=text, description=text)
    table.add_argument("build", metavar="BUILD", type=Path, help="a build folder")
    table.set_defaults(command=_table)


def _add_jobs(command: argparse.ArgumentParser) -> None:
    command.add_argument(
        "--jobs",
        type=_jobs,
        default=os.cpu_count() or 1,
        help="builds worked on at the same time (default: one for each core)",
    )


def _add_forecast(commands: argparse._SubParsersAction[argparse.ArgumentParser]) -> None:
    text = "say what to wind next: other capacitors, turns, stacks and loads for one build"
    forecast = commands.add_parser("forecast", help=text, description=text)
    forecast.add_argument("build", metavar="BUILD", type=Path, help="a build folder")
    forecast.set_defaults(command=_forecast)


def _add_versus(commands: argparse._SubParsersAction[argparse.ArgumentParser]) -> None:
    text = "put two to six builds on common axes, the others compared with the first"
    versus = commands.add_parser("versus", help=text, description=text)
    versus.add_argument("builds", metavar="BUILD", type=Path, nargs="+", help="a build folder")
    versus.add_argument(
        "--out",
        type=Path,
        default=Path("versus.html"),
        help="the page, its PDF goes beside it (default: ./versus.html)",
    )
    versus.set_defaults(command=_versus)


def _add_follow(commands: argparse._SubParsersAction[argparse.ArgumentParser]) -> None:
    text = "publish, and publish again when a file changes, until Ctrl-C"
    follow = commands.add_parser("follow", help=text, description=text)
    follow.add_argument("runs", metavar="RUNS", type=Path, help="folder of build folders")
    follow.add_argument(
        "--out",
        type=Path,
        default=Path("published"),
        help="where the pages go (default: ./published)",
    )
    follow.add_argument("--baseline", metavar="KEY", help="build to compare with")
    follow.set_defaults(command=_follow)


def _add_sidecar(commands: argparse._SubParsersAction[argparse.ArgumentParser]) -> None:
    text = "write a starter build.toml from the sweeps in a folder; nothing is ever overwritten"
    sidecar = commands.add_parser("sidecar", help=text, description=text)
    sidecar.add_argument("folder", metavar="FOLDER", type=Path, help="a folder with sweeps")
    bench = "write a starter runs.toml instead; FOLDER is the one that holds the builds"
    sidecar.add_argument("--bench", action="store_true", help=bench)
    sidecar.set_defaults(command=_sidecar)


def _add_schema(commands: argparse._SubParsersAction[argparse.ArgumentParser]) -> None:
    text = "print the JSON Schema of build.toml or runs.toml, for editors that check TOML"
    schema = commands.add_parser("schema", help=text, description=text)
    schema.add_argument("of", choices=("build", "runs"), help="which of the two files")
    schema.set_defaults(command=_schema)


def _jobs(text: str) -> int:
    try:
        jobs = int(text)
    except ValueError:
        jobs = 0
    if jobs < 1:
        raise argparse.ArgumentTypeError(f"found {text[:80]!r}, expected a whole number above 0")
    return jobs


def _seconds(text: str) -> float:
    try:
        seconds = float(text)
    except ValueError:
        seconds = 0.0
    if not 0 < seconds < float("inf"):
        raise argparse.ArgumentTypeError(f"found {text[:80]!r}, expected seconds above 0")
    return seconds


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
    from reportgen.follow import Told, Watch, follow
    from reportgen.pipeline import Request, publish

    console = _console()

    def publish_once(request: Request) -> Outcome:
        with _progress(console) as announce:
            return publish(request, announce)

    # no workers: they would import everything anew each time, and each would hear Ctrl-C by itself
    request = Request(runs=options.runs, out=options.out, baseline=options.baseline)
    told = Told(console, request)
    try:
        told.line(f"publishing {options.runs}, and again after each change; Ctrl-C ends it")
        watch = Watch(options.runs, tell=told.line)
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


if __name__ == "__main__":
    sys.exit(main())
