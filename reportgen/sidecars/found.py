"""What lies in a folder that is to become a build: sweeps, readings, temperature logs."""

from __future__ import annotations

from dataclasses import dataclass, replace
from pathlib import Path

from reportgen.errors import InputRejected, UsageError
from reportgen.intake import spot_readings, thermal_log
from reportgen.intake.folders import BUILD_FILE, build_folders, is_sweep, parent
from reportgen.intake.paths import file_name_problem, read_bytes, shown
from reportgen.intake.scan import STANDARD_LIMITS, scan_runs
from reportgen.intake.touchstone import parse_touchstone
from reportgen.model import OUTPUT_MARKER, Setup, Sweep
from reportgen.physics.guess_setup import Guess, guess_setup
from reportgen.sidecars.file_words import words_of_file

_MOST_NAMED = 20


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class FoundSweep:
    """A sweep that can be read, and how it was taken by all that can be seen."""

    file: str
    sweep: Sweep
    guess: Guess
    by_name: bool
    units: tuple[str, ...]


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Found:
    """Files of a build folder by what they are; `unusable`: why a sweep is left out."""

    folder: str
    sweeps: tuple[FoundSweep, ...]
    spots: tuple[str, ...]
    logs: tuple[str, ...]
    unusable: dict[str, str]

    def of(self, *setups: Setup) -> list[FoundSweep]:
        """Sweeps of some set-ups."""
        return [one for one in self.sweeps if one.guess.setup in setups]


def look_into(folder: Path) -> Found:
    """The sweeps of a folder that is to become one build.

    Raises
    ------
    UsageError
        It is no folder, holds no sweep, or is a folder of folders.
    """
    if not folder.is_dir():
        raise UsageError(f"{folder} is no folder; name the folder that holds the sweeps")
    if (folder / OUTPUT_MARKER).exists():
        raise UsageError(f"{folder} is an output folder; name the folder that holds the sweeps")
    files = _own_files(folder)
    if not any("/" not in file and _is_measured(folder, file) for file in files):
        raise UsageError(_nothing_here(folder))
    sweeps: list[FoundSweep] = []
    unusable: dict[str, str] = {}
    for file in filter(is_sweep, files):
        if problem := file_name_problem(file):
            unusable[file] = f"{problem}; rename it"
            continue
        try:
            sweeps.append(_found_sweep(folder, file))
        except InputRejected as rejected:
            unusable[file] = str(rejected)
    return Found(
        folder=folder.resolve().name,
        sweeps=tuple(sweeps),
        spots=tuple(file for file in files if _is_spot(folder, file)),
        logs=tuple(file for file in files if _is_log(folder, file)),
        unusable=unusable,
    )


def _own_files(folder: Path) -> tuple[str, ...]:
    """Files that would be this build's, not those of a build further down."""
    found = scan_runs(folder).files
    builds = build_folders({*found, BUILD_FILE}, root_name="build")
    return next(build.files for build in builds if build.folder == ".")


def _nothing_here(folder: Path) -> str:
    inner = sorted({parent(file) for file in scan_runs(folder).files if is_sweep(file)})
    if not inner:
        return f"{folder} holds no sweep; put its .s1p and .s2p files there first"
    without = [name for name in inner if not (folder / name / BUILD_FILE).exists()]
    if not without:
        return f"every folder with sweeps below {folder} has its {BUILD_FILE}"
    tops = [name for name in without if not any(name.startswith(f"{up}/") for up in without)]
    named = ", ".join(shown(str(folder / name)) for name in tops[:_MOST_NAMED])
    more = f" and {len(tops) - _MOST_NAMED} more" if len(tops) > _MOST_NAMED else ""
    return (
        f"{folder} holds no sweep itself, folders below it do; call `reportgen sidecar` for each "
        f"build: {named}{more}"
    )


def _found_sweep(folder: Path, file: str) -> FoundSweep:
    """One sweep, its name and its content held together."""
    data = read_bytes(folder, file, file=file, at_most=STANDARD_LIMITS.file_bytes)
    sweep, _ = parse_touchstone(data, file=file)
    words = words_of_file(file, sweep.ports)
    guess, by_name = _settled(guess_setup(sweep), words.setups)
    return FoundSweep(file=file, sweep=sweep, guess=guess, by_name=by_name, units=words.units)


def _settled(guess: Guess, named: tuple[Setup, ...]) -> tuple[Guess, bool]:
    """The guess of the data with what the name says; the name decides where the data do not."""
    if not named or guess.setup in named:
        return guess, bool(named)
    if not guess.others:
        return replace(guess, others=named[:1]), False
    rest = (guess.setup, *(other for other in guess.others if other is not named[0]))
    return Guess(setup=named[0], reason=guess.reason, others=rest), True


def _is_measured(folder: Path, file: str) -> bool:
    return is_sweep(file) or _is_spot(folder, file) or _is_log(folder, file)


def _is_spot(folder: Path, file: str) -> bool:
    return _heading(folder, file) == list(spot_readings.HEADER)


def _is_log(folder: Path, file: str) -> bool:
    return set(thermal_log.COLUMNS) <= set(_heading(folder, file))


def _heading(folder: Path, file: str) -> list[str]:
    """Names in the first line of a CSV file; none where it is no such file."""
    if not file.lower().endswith(".csv"):
        return []
    try:
        data = read_bytes(folder, file, file=file, at_most=STANDARD_LIMITS.file_bytes)
    except InputRejected:
        return []
    first = data[:1000].decode("utf-8-sig", "replace").splitlines()[:1]
    return [cell.strip().lower() for cell in first[0].split(",")] if first else []
