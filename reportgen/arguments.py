"""What can be typed on the command line."""

from __future__ import annotations

import argparse
import os
from pathlib import Path
from typing import Any

from reportgen import __version__


class _Help(argparse.HelpFormatter):
    """As wide as the terminal; its base would import `shutil` for that, which is slow."""

    def __init__(self, prog: str) -> None:
        super().__init__(prog, width=_columns() - 2)


class _Parser(argparse.ArgumentParser):
    def __init__(self, **settings: Any) -> None:
        super().__init__(**settings, formatter_class=_Help)


def _columns() -> int:
    try:
        return int(os.environ.get("COLUMNS", "")) or os.get_terminal_size().columns
    except (ValueError, OSError):
        return 80


def command_line() -> argparse.ArgumentParser:
    """The parser of the command line; `command` of what it returns names the command."""
    parser = _Parser(
        prog="reportgen",
        description="Loss, match and heat of impedance transformers, from folders of "
        "network-analyzer sweeps to pages and PDFs.",
    )
    parser.add_argument("--version", action="version", version=f"reportgen {__version__}")
    commands = parser.add_subparsers(
        title="commands", required=True, metavar="COMMAND", parser_class=_Parser
    )
    _add_publish(commands)
    _add_inspect(commands)
    _add_table(commands)
    _add_forecast(commands)
    _add_versus(commands)
    _add_follow(commands)
    _add_sidecar(commands)
    _add_schema(commands)
    return parser


def _add_publish(commands: argparse._SubParsersAction[_Parser]) -> None:
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
    publish.set_defaults(command="publish")


def _add_inspect(commands: argparse._SubParsersAction[_Parser]) -> None:
    text = "say what is wrong or worth knowing about a runs folder; write nothing"
    inspect = commands.add_parser("inspect", help=text, description=text)
    inspect.add_argument("runs", metavar="RUNS", type=Path, help="folder of build folders")
    _add_jobs(inspect)
    inspect.add_argument("--strict", action="store_true", help="warnings count as errors")
    inspect.set_defaults(command="inspect")


def _add_table(commands: argparse._SubParsersAction[_Parser]) -> None:
    text = "show the figures of one build, band by band"
    table = commands.add_parser("table", help=text, description=text)
    table.add_argument("build", metavar="BUILD", type=Path, help="a build folder")
    table.set_defaults(command="table")


def _add_jobs(command: argparse.ArgumentParser) -> None:
    command.add_argument(
        "--jobs",
        type=_jobs,
        default=os.cpu_count() or 1,
        help="builds worked on at the same time (default: one for each core)",
    )


def _add_forecast(commands: argparse._SubParsersAction[_Parser]) -> None:
    text = "say what to wind next: other capacitors, turns, stacks and loads for one build"
    forecast = commands.add_parser("forecast", help=text, description=text)
    forecast.add_argument("build", metavar="BUILD", type=Path, help="a build folder")
    forecast.set_defaults(command="forecast")


def _add_versus(commands: argparse._SubParsersAction[_Parser]) -> None:
    text = "put two to six builds on common axes, the others compared with the first"
    versus = commands.add_parser("versus", help=text, description=text)
    versus.add_argument("builds", metavar="BUILD", type=Path, nargs="+", help="a build folder")
    versus.add_argument(
        "--out",
        type=Path,
        default=Path("versus.html"),
        help="the page, its PDF goes beside it (default: ./versus.html)",
    )
    versus.set_defaults(command="versus")


def _add_follow(commands: argparse._SubParsersAction[_Parser]) -> None:
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
    follow.set_defaults(command="follow")


def _add_sidecar(commands: argparse._SubParsersAction[_Parser]) -> None:
    text = "write a starter build.toml from the sweeps in a folder; nothing is ever overwritten"
    sidecar = commands.add_parser("sidecar", help=text, description=text)
    sidecar.add_argument("folder", metavar="FOLDER", type=Path, help="a folder with sweeps")
    bench = "write a starter runs.toml instead; FOLDER is the one that holds the builds"
    sidecar.add_argument("--bench", action="store_true", help=bench)
    sidecar.set_defaults(command="sidecar")


def _add_schema(commands: argparse._SubParsersAction[_Parser]) -> None:
    text = "print the JSON Schema of build.toml or runs.toml, for editors that check TOML"
    schema = commands.add_parser("schema", help=text, description=text)
    schema.add_argument("of", choices=("build", "runs"), help="which of the two files")
    schema.set_defaults(command="schema")


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
