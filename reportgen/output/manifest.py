"""`manifest.json`: what went in, under which settings, what came out, and what did not.

Beside it, while a run is under way, stands the journal: a line for each build that is finished. A
run that was interrupted goes on from there. The records are named tuples because `dataclasses` is
slow to import.
"""

from __future__ import annotations

import json
import os
import stat
from collections import Counter
from collections.abc import Iterable, Mapping, Sequence
from hashlib import sha256
from pathlib import Path
from types import MappingProxyType
from typing import Any, NamedTuple

from reportgen.output.fingerprints import hash_of_file

MANIFEST_FILE = "manifest.json"
JOURNAL_FILE = ".reportgen-journal"
SCHEMA = 1
SEVERITIES = ("error", "warning", "note")
"""Those of `model`, which is slow to import, the gravest first."""

_OF_A_FINDING = ("severity", "code", "file", "line", "key", "message", "remedy")

Document = dict[str, Any]

_NONE: Mapping[str, Any] = MappingProxyType({})


class OutputFile(NamedTuple):
    """A file that was written, by path below the output folder, and its size [bytes]."""

    file: str
    sha256: str
    bytes: int


class BuildRecord(NamedTuple):
    """One build folder of a run: what was read of it, what was written for it, or why nothing.

    `fingerprint` : of all that decides what is published of it.
    `findings` : how many there are, by severity, of a build that was published.
    `failure` : findings of a build that was not, as plain data.
    `retry` : it failed by a fault, not by its inputs, so it is tried again.
    `outputs` of a failed build are those of an earlier run that still stand.
    """

    key: str
    folder: str
    published: bool
    fingerprint: str = ""
    retry: bool = False
    inputs: tuple[Document, ...] = ()
    outputs: tuple[OutputFile, ...] = ()
    findings: Mapping[str, int] = _NONE
    failure: tuple[Document, ...] = ()


class Manifest(NamedTuple):
    """What a run leaves behind.

    `state` : fingerprint of the program, all inputs and settings; None: not everything is made.
    `findings` : of the runs folder itself, as plain data.
    `written_ns` : when it was written, by the clock of the file system [ns].
    """

    builds: Mapping[str, BuildRecord] = _NONE
    outputs: tuple[OutputFile, ...] = ()
    findings: tuple[Document, ...] = ()
    state: str | None = None
    written_ns: int = 0

    def counts(self) -> Counter[str]:
        """Findings of all published builds, by severity."""
        found: Counter[str] = Counter()
        for record in self.builds.values():
            found.update(record.findings)
        return found

    def severities(self) -> set[str]:
        """Of all findings there are."""
        failures = [one for record in self.builds.values() for one in record.failure]
        return {str(one["severity"]) for one in (*self.findings, *failures)} | set(self.counts())


def output_file(file: str, data: bytes) -> OutputFile:
    """A written file with its hash."""
    return OutputFile(file=file, sha256=sha256(data).hexdigest(), bytes=len(data))


def stands(out: Path, one: OutputFile, written_ns: int = 0) -> bool:
    """Whether a file is as it was written.

    Its size and the time of its last change say so; where the time is later than the manifest's,
    its hash.
    """
    path = f"{out}/{one.file}"
    try:
        status = os.lstat(path)
    except OSError:
        return False
    if not stat.S_ISREG(status.st_mode) or status.st_size != one.bytes:
        return False
    return status.st_ctime_ns <= written_ns or hash_of_file(path) == one.sha256


# --- written -------------------------------------------------------------------------------------


def manifest_document(
    manifest: Manifest,
    *,
    program_version: str,
    baseline: str | None,
    inputs: Sequence[Document],
) -> Document:
    """What a repeat needs, and what a reader can check."""
    return {
        "schema": SCHEMA,
        "program_version": program_version,
        "settings": {"baseline": baseline},
        "state": manifest.state,
        "inputs": list(inputs),
        "findings": list(manifest.findings),
        "builds": [record_document(record) for record in manifest.builds.values()],
        "outputs": [_output(one) for one in manifest.outputs],
    }


def record_document(record: BuildRecord) -> Document:
    """A build's record as plain data."""
    return {
        "key": record.key,
        "folder": record.folder,
        "published": record.published,
        "fingerprint": record.fingerprint,
        "retry": record.retry,
        "inputs": list(record.inputs),
        "outputs": [_output(one) for one in record.outputs],
        "findings": dict(record.findings),
        "failure": list(record.failure),
    }


def _output(one: OutputFile) -> Document:
    return {"file": one.file, "sha256": one.sha256, "bytes": one.bytes}


def write_in_journal(out: Path, record: BuildRecord) -> None:
    """Note a build in the journal, before its pages are moved in."""
    line = json.dumps(record_document(record), separators=(",", ":"))
    with (out / JOURNAL_FILE).open("a", encoding="utf-8") as journal:
        journal.write(f"\n{line}\n")  # a line that was cut off spoils no other


def remove_journal(out: Path) -> None:
    """Everything in the journal stands in the manifest."""
    (out / JOURNAL_FILE).unlink(missing_ok=True)


# --- read ----------------------------------------------------------------------------------------

_NOT_READABLE = (OSError, ValueError, KeyError, TypeError, AttributeError, RecursionError)


def read_manifest(out: Path) -> Manifest:
    """What the run before left; empty where there was none or it is not readable."""
    try:
        with (out / MANIFEST_FILE).open("rb") as file:
            document = json.loads(file.read())
            written_ns = os.fstat(file.fileno()).st_ctime_ns
        return _manifest(document, written_ns)
    except _NOT_READABLE:
        return Manifest()


def read_journal(out: Path) -> dict[str, BuildRecord]:
    """Builds that an interrupted run had finished."""
    try:
        lines = (out / JOURNAL_FILE).read_bytes().splitlines()
    except OSError:
        return {}
    return _by_key(_readable_records(lines))


def _readable_records(lines: Iterable[bytes]) -> Iterable[BuildRecord]:
    for line in lines:
        try:
            yield _record(json.loads(line))
        except _NOT_READABLE:
            continue


def _manifest(document: Document, written_ns: int) -> Manifest:
    return Manifest(
        builds=_by_key(_record(entry) for entry in document["builds"]),
        outputs=_outputs(document["outputs"]),
        findings=tuple(_finding(one) for one in document.get("findings", ())),
        state=document.get("state"),
        written_ns=written_ns,
    )


def _by_key(records: Iterable[BuildRecord]) -> dict[str, BuildRecord]:
    return {record.key: record for record in records}


def _record(entry: Document) -> BuildRecord:
    key = str(entry["key"])
    return BuildRecord(
        key=key,
        folder=str(entry["folder"]),
        published=bool(entry["published"]),
        fingerprint=str(entry.get("fingerprint", "")),
        retry=bool(entry.get("retry")),
        inputs=tuple(dict(one) for one in entry["inputs"]),
        outputs=tuple(one for one in _outputs(entry["outputs"]) if _is_below(one.file, key)),
        findings={str(name): int(count) for name, count in entry.get("findings", {}).items()},
        failure=tuple(_finding(one) for one in entry.get("failure", ())),
    )


def _finding(entry: Document) -> Document:
    if entry["severity"] not in SEVERITIES:
        raise ValueError(f"no severity: {entry['severity']!r}")
    return {name: entry[name] for name in _OF_A_FINDING}


def _outputs(entries: Iterable[Document]) -> tuple[OutputFile, ...]:
    return tuple(
        OutputFile(
            file=str(one["file"]), sha256=str(one["sha256"]), bytes=int(one.get("bytes", -1))
        )
        for one in entries
    )


def _is_below(file: str, key: str) -> bool:
    """True for a plain file in the build's own folder: a manifest may have been edited."""
    folder, _, name = file.partition("/")
    plain = key.replace("-", "").isalnum() and key.isascii()
    return plain and folder == key and "/" not in name and name not in ("", ".", "..")
