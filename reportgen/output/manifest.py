"""`manifest.json`: what went in, under which settings, and what came out."""

from __future__ import annotations

import hashlib
import json
from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from reportgen.model import InputFile

MANIFEST_FILE = "manifest.json"
SCHEMA = 1


@dataclass(frozen=True, kw_only=True, slots=True)
class OutputFile:
    """A file that was written, by path below the output folder."""

    file: str
    sha256: str


@dataclass(frozen=True, kw_only=True, slots=True)
class BuildRecord:
    """One build folder of a run: what was read of it and what was written for it."""

    key: str
    folder: str
    published: bool
    inputs: tuple[InputFile, ...] = ()
    outputs: tuple[OutputFile, ...] = ()


def output_file(file: str, data: bytes) -> OutputFile:
    """A written file with its hash."""
    return OutputFile(file=file, sha256=hashlib.sha256(data).hexdigest())


def manifest_document(
    *,
    program_version: str,
    baseline: str | None,
    inputs: Sequence[InputFile],
    builds: Sequence[BuildRecord],
    outputs: Sequence[OutputFile],
) -> dict[str, Any]:
    """What a repeat needs, and what a reader can check."""
    return {
        "schema": SCHEMA,
        "program_version": program_version,
        "settings": {"baseline": baseline},
        "inputs": [_input(one) for one in inputs],
        "builds": [
            {
                "key": build.key,
                "folder": build.folder,
                "published": build.published,
                "inputs": [_input(one) for one in build.inputs],
                "outputs": [_output(one) for one in build.outputs],
            }
            for build in builds
        ],
        "outputs": [_output(one) for one in outputs],
    }


def _input(one: InputFile) -> dict[str, Any]:
    return {"file": one.file, "sha256": one.sha256, "points": one.points}


def _output(one: OutputFile) -> dict[str, Any]:
    return {"file": one.file, "sha256": one.sha256}


def read_earlier(out: Path) -> dict[str, BuildRecord]:
    """Build records of the run before, by key; none where there was none or it is not readable."""
    try:
        document = json.loads((out / MANIFEST_FILE).read_bytes())
        records = [_record(entry) for entry in document["builds"]]
    except (OSError, ValueError, KeyError, TypeError, RecursionError):
        return {}
    return {record.key: record for record in records}


def _record(entry: dict[str, Any]) -> BuildRecord:
    return BuildRecord(
        key=str(entry["key"]),
        folder=str(entry["folder"]),
        published=bool(entry["published"]),
        outputs=tuple(
            OutputFile(file=str(one["file"]), sha256=str(one["sha256"]))
            for one in entry["outputs"]
            if _is_below(str(one["file"]), str(entry["key"]))
        ),
    )


def _is_below(file: str, key: str) -> bool:
    """True for a plain file in the build's own folder: a manifest may have been edited."""
    folder, _, name = file.partition("/")
    return folder == key and bool(name) and "/" not in name and name not in (".", "..")
