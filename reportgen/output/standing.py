"""What earlier runs have left in the output folder: which builds need not be made again."""

from __future__ import annotations

from bisect import bisect_left
from collections.abc import Iterable, Iterator, Mapping
from dataclasses import dataclass
from pathlib import Path

from reportgen.output.fingerprints import Seen, fingerprint
from reportgen.output.manifest import (
    BuildRecord,
    Manifest,
    OutputFile,
    read_journal,
    read_manifest,
    stands,
)


@dataclass(frozen=True, kw_only=True, slots=True)
class Standing:
    """The manifest of the last run that came to its end, and what one after it has finished."""

    out: Path
    manifest: Manifest
    journal: Mapping[str, BuildRecord]

    def record(self, key: str) -> BuildRecord | None:
        """The latest record of a build."""
        return self.journal.get(key) or self.manifest.builds.get(key)

    def unchanged(self, key: str, wanted: str) -> BuildRecord | None:
        """The record of a build that need not be made again; `wanted` is its fingerprint now."""
        record = self.record(key)
        if record is None or record.fingerprint != wanted or record.retry:
            return None
        written_ns = self.manifest.written_ns
        if record.published and not all(
            stands(self.out, one, written_ns) for one in record.outputs
        ):
            return None
        return record

    def outputs(self) -> Iterator[OutputFile]:
        """Every file that was written for a build."""
        for record in (*self.manifest.builds.values(), *self.journal.values()):
            yield from record.outputs

    def names_of(self, key: str) -> set[str]:
        """Names of all files that were written for one build."""
        records = (self.manifest.builds.get(key), self.journal.get(key))
        files = (one.file for record in records if record for one in record.outputs)
        return {file.rpartition("/")[2] for file in files}


def read_standing(out: Path) -> Standing:
    """What stands in an output folder."""
    return Standing(out=out, manifest=read_manifest(out), journal=read_journal(out))


class BuildFingerprints:
    """Fingerprints of build folders.

    Parameters
    ----------
    seen : mapping of str to str
        Everything in the runs folder, with hashes.
    settings : str
        Fingerprint of what concerns every build.
    """

    def __init__(self, seen: Seen, settings: str) -> None:
        self.seen, self.settings = seen, settings
        self.paths = sorted(seen)

    def of(self, key: str, folder: str, files: Iterable[str], compared_with: str) -> str:
        """Of one build: its files, names of whatever else lies there, settings, baseline."""
        before = "" if folder == "." else f"{folder}/"
        own = {f"{before}{file}" for file in files}
        parts = [self.settings, compared_with, key, folder]
        for path in self._below(before):
            parts += [path, self.seen[path] if path in own else "of another build"]
        return fingerprint(parts)

    def _below(self, before: str) -> Iterator[str]:
        for path in self.paths[bisect_left(self.paths, before) :]:
            if not path.startswith(before):
                return
            yield path
