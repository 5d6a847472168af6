"""The two sidecars: `runs.toml` and `build.toml`, bytes in, sheets out.

Shape comes first (keys, kinds, ranges), sense second; the sense of what has the right shape is
checked even when something else has not, so that all problems of a file are told in one go.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from dataclasses import replace
from itertools import chain, islice
from typing import Any, TypeVar

from reportgen.errors import InputRejected
from reportgen.intake.paths import file_name_problem
from reportgen.intake.remarks import MOST_ERRORS
from reportgen.intake.sidecar_shape import check_shape, nearest, right_shape
from reportgen.intake.sidecar_sizes import size_problems
from reportgen.intake.sidecar_text import (
    Path,
    Problem,
    Tree,
    key_lines,
    key_path,
    line_of,
    parse_toml,
    shown_value,
)
from reportgen.model import (
    BenchSheet,
    BuildSheet,
    Core,
    Finding,
    OwnBand,
    Setup,
    Severity,
    Sheet,
    SweepEntry,
    ThermalEntry,
    Winding,
)
from reportgen.physics.allocations import known_bands

SheetT = TypeVar("SheetT", bound=Sheet)
Placed = list[tuple[Path, SheetT]]

ALL_BANDS = "all"
LARGEST_TURNS_RATIO = 1000.0
LOADED_SETUPS = frozenset(
    {Setup.LOAD, Setup.SERIES_RESISTOR, Setup.LOAD_CHECK, Setup.RESISTOR_CHECK}
)
_PAIR_SETUPS = frozenset({Setup.BACK_TO_BACK, Setup.SPOT})


def parse_bench(data: bytes, *, file: str) -> BenchSheet:
    """What is common to the bench, from the bytes of `runs.toml`.

    Raises
    ------
    InputRejected
        With every problem of the file, each with its key path.
    """
    tree = parse_toml(data, file=file)
    sheet, problems = check_shape(BenchSheet, tree)
    sense = chain(size_problems(BenchSheet, tree), _bench_sense(tree))
    return _accepted(sheet, chain(problems, sense), data, file)


def parse_build(data: bytes, *, file: str, bench: BenchSheet) -> BuildSheet:
    """One build, from the bytes of its `build.toml`.

    Parameters
    ----------
    data : bytes
        Content of the file.
    file : str
        The name that a finding gives the file.
    bench : BenchSheet
        Names the loads and calibrations that a sweep may refer to.

    Raises
    ------
    InputRejected
        With every problem of the file, each with its key path.
    """
    tree = parse_toml(data, file=file)
    sheet, problems = check_shape(BuildSheet, tree)
    sense = chain(size_problems(BuildSheet, tree), _build_sense(tree, bench))
    return _accepted(sheet, chain(problems, sense), data, file)


def completed_entry(entry: SweepEntry, sheet: BuildSheet, bench: BenchSheet) -> SweepEntry:
    """A sweep's entry with what it may leave out filled in.

    The only load (where the set-up has one), the only calibration, unit "A", and the units "A"
    and "B" of a pair.
    """
    pair = entry.setup in _PAIR_SETUPS
    only_load = _only(bench.loads | sheet.loads) if entry.setup in LOADED_SETUPS else None
    return replace(
        entry,
        load=entry.load or only_load,
        calibration=entry.calibration or _only(bench.calibrations),
        unit=entry.unit if pair else entry.unit or "A",
        units=entry.pair if pair else entry.units,
    )


def _only(known: Iterable[str]) -> str | None:
    names = list(known)
    return names[0] if len(names) == 1 else None


def _accepted(sheet: SheetT | None, problems: Iterator[Problem], data: bytes, file: str) -> SheetT:
    told = list(islice(problems, MOST_ERRORS))
    if sheet is not None and not told:
        return sheet
    places = key_lines(data.decode("utf-8-sig"))
    found = [problem.finding(file, line_of(problem.path, places)) for problem in told]
    found.sort(key=lambda finding: finding.line or 0)
    if next(problems, None) is not None:
        found.append(_too_many(file))
    raise InputRejected(tuple(found))


def _too_many(file: str) -> Finding:
    message = f"more than {MOST_ERRORS} mistakes; the others are not told"
    return Finding(
        severity=Severity.ERROR,
        code="too-many-mistakes",
        message=message,
        remedy="is this the right file?",
        file=file,
    )


# --- runs.toml -----------------------------------------------------------------------------------


def _bench_sense(tree: Tree) -> Iterator[Problem]:
    region = tree.get("region", 1)
    built_in = [band.name for band in known_bands(region if region in (1, 2, 3) else 1)]
    own = _right_entries(tree, "own_band", OwnBand)
    yield from _own_band_sense(own, built_in)
    # a band of the wrong shape still has its name
    named = [band.get("name") for band in _tables(tree, "own_band")]
    known = [*built_in, *(name for name in named if isinstance(name, str))]
    bands = tree.get("bands")
    for place, name in enumerate(bands if isinstance(bands, list) else []):
        yield from _unknown_name("band", name, known, ("bands", place))
    for name in _table(tree, "limits"):
        yield from _unknown_name("band", name, [*known, ALL_BANDS], ("limits", name))


def _own_band_sense(own: Placed[OwnBand], built_in: list[str]) -> Iterator[Problem]:
    taken: dict[str, str] = {name.casefold(): "a built-in band" for name in built_in}
    taken[ALL_BANDS] = "the word for all bands"
    for path, band in own:
        if not band.from_mhz < band.to_mhz:
            message = f"found {band.to_mhz:g}, expected more than from_mhz = {band.from_mhz:g}"
            yield Problem((*path, "to_mhz"), "wrong-order", message, "exchange the two edges")
        holder = taken.setdefault(band.name.casefold(), f"own_band[{int(path[1]) + 1}]")
        if holder != f"own_band[{int(path[1]) + 1}]":
            message = f"the name {shown_value(band.name)} is taken by {holder}"
            yield Problem((*path, "name"), "name-taken", message, "give the band another name")


def _unknown_name(what: str, name: object, known: Iterable[str], path: Path) -> Iterator[Problem]:
    """Nothing when the name is known, else a problem that names the nearest known one."""
    names = list(known)
    if not isinstance(name, str) or name in names:
        return
    if near := nearest(name, names):
        remedy = f"did you mean {shown_value(near)}?"
    elif names:
        remedy = f"name one of these: {', '.join(map(shown_value, names))}"
    else:
        remedy = f"define it in runs.toml, under [{key_path((f'{what}s', name))}]"
    yield Problem(path, f"unknown-{what}", f"no {what} is named {shown_value(name)}", remedy)


# --- build.toml ----------------------------------------------------------------------------------


def _build_sense(tree: Tree, bench: BenchSheet) -> Iterator[Problem]:
    yield from _core_sense(tree)
    yield from _winding_sense(tree)
    sweeps = _right_entries(tree, "sweep", SweepEntry)
    thermal = _right_entries(tree, "thermal", ThermalEntry)
    loads = [*bench.loads, *(name for name in _table(tree, "loads") if name not in bench.loads)]
    calibrations = list(bench.calibrations)
    yield from _file_sense([*sweeps, *thermal])
    for path, entry in sweeps:
        yield from _unit_sense(path, entry)
        needed = entry.setup in LOADED_SETUPS
        yield from _reference_sense((*path, "load"), entry.load, loads, needed=needed)
        needed = bool(calibrations) and entry.setup is not Setup.SPOT
        place = (*path, "calibration")
        yield from _reference_sense(place, entry.calibration, calibrations, needed=needed)


def _core_sense(tree: Tree) -> Iterator[Problem]:
    core = right_shape(Core, _table(tree, "core"))
    if core and not core.inner_mm < core.outer_mm:
        message = f"found {core.inner_mm:g}, expected less than outer_mm = {core.outer_mm:g}"
        remedy = "exchange the two diameters or measure again"
        yield Problem(("core", "inner_mm"), "wrong-order", message, remedy)


def _winding_sense(tree: Tree) -> Iterator[Problem]:
    winding = right_shape(Winding, _table(tree, "winding"))
    if winding and not 1 / LARGEST_TURNS_RATIO <= winding.turns_ratio <= LARGEST_TURNS_RATIO:
        message = (
            f"found {winding.high_turns:g} to {winding.low_turns:g}, "
            f"expected a ratio of at most {LARGEST_TURNS_RATIO:g}"
        )
        yield Problem(("winding", "high_turns"), "turns-ratio", message, "count the turns again")


def _file_sense(entries: list[tuple[Path, Any]]) -> Iterator[Problem]:
    first: dict[str, Path] = {}
    for path, entry in entries:
        place = (*path, "file")
        problem = file_name_problem(entry.file)
        if problem:
            message = f"found {shown_value(entry.file)}: {problem}"
            remedy = "name a file inside the build folder, with forward slashes: raw/a-load.s1p"
            yield Problem(place, "unsafe-file-name", message, remedy)
        earlier = first.setdefault(entry.file, path)
        if earlier != path:
            where = f"{earlier[0]}[{int(earlier[1]) + 1}]"
            message = f"{shown_value(entry.file)} is named by {where} already"
            yield Problem(place, "same-file", message, "name each file once")


def _unit_sense(path: Path, entry: SweepEntry) -> Iterator[Problem]:
    setup = shown_value(entry.setup.value)
    if entry.unit is not None and entry.setup is Setup.BACK_TO_BACK:
        message = f"a sweep of set-up {setup} has two units"
        remedy = 'write units = ["A", "B"], the one on port 1 first, in place of `unit`'
        yield Problem((*path, "unit"), "wrong-unit", message, remedy)
    if entry.units is not None and entry.setup not in _PAIR_SETUPS:
        message = f"a sweep of set-up {setup} has one unit"
        yield Problem((*path, "units"), "wrong-unit", message, 'write unit = "A" in place of it')
    if entry.units and entry.units[0] == entry.units[1]:
        message = f"found {shown_value(entry.units[0])} twice, expected two different units"
        yield Problem((*path, "units"), "wrong-unit", message, "name both units of the pair")


def _reference_sense(
    place: Path, name: str | None, known: list[str], *, needed: bool
) -> Iterator[Problem]:
    """A load or calibration that a sweep names, or may leave out when there is just one."""
    what = str(place[-1])
    if name is not None:
        yield from _unknown_name(what, name, known, place)
    elif needed and not known:
        message = f"missing, and no {what} is defined"
        remedy = f"define it in build.toml or runs.toml, under [{what}s.main]"
        yield Problem(place, "missing-key", message, remedy)
    elif needed and len(known) > 1:
        names = " or ".join(shown_value(each) for each in known)
        message = f"missing, and there is more than one {what}: expected {names}"
        yield Problem(place, "missing-key", message, f"say which {what} this sweep belongs to")


# --- the parts of a tree that have the right shape -----------------------------------------------


def _table(tree: Tree, key: str) -> Tree:
    value = tree.get(key)
    return value if isinstance(value, dict) else {}


def _tables(tree: Tree, key: str) -> list[Tree]:
    """Entries of a list of tables; what is no table stands as an empty one."""
    value = tree.get(key)
    entries = value if isinstance(value, list) else []
    return [entry if isinstance(entry, dict) else {} for entry in entries]


def _right_entries(tree: Tree, key: str, kind: type[SheetT]) -> Placed[SheetT]:
    """Path and content of every entry of the right shape."""
    checked = [right_shape(kind, entry) for entry in _tables(tree, key)]
    return [((key, place), entry) for place, entry in enumerate(checked) if entry is not None]
