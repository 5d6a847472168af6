"""Whether anything changed since the pages were made, decided before anything slow is imported."""

from __future__ import annotations

import os
from collections.abc import Collection
from pathlib import Path

from reportgen.output.fingerprints import (
    MARKER,
    Seen,
    fingerprint,
    fingerprint_of_seen,
    program_fingerprint,
    seen_files,
)
from reportgen.output.manifest import Manifest, read_manifest, stands

OURS_FOR_A_WHILE = ".reportgen-"
"""How names begin of what a run leaves only when it was interrupted; the marker aside."""


def state_of(seen: Seen, root: Path, baseline: str | None) -> str:
    """Fingerprint of all that decides what is published: program, inputs, settings."""
    name = root.resolve().name if "build.toml" in seen else ""  # the key of a build at the top
    return fingerprint([program_fingerprint(), fingerprint_of_seen(seen), name, baseline or ""])


def look_at(runs: Path) -> Seen | None:
    """Everything in a runs folder; None where it cannot be read."""
    try:
        return seen_files(runs)
    except OSError:
        return None


def find_unchanged(
    seen: Seen, runs: Path, out: Path, *, baseline: str | None, only: Collection[str]
) -> Manifest | None:
    """The manifest, where all that it tells still holds and stands; None: there is work to do."""
    manifest = read_manifest(out)
    if manifest.state is None or manifest.state != state_of(seen, runs, baseline):
        return None
    if not set(only) <= manifest.builds.keys() or not _is_at_rest(out):
        return None
    if any(record.retry for record in manifest.builds.values()):
        return None
    return manifest if _all_stands(out, manifest) else None


def _is_at_rest(out: Path) -> bool:
    """Ours, and no interrupted run has left anything."""
    return [name for name in os.listdir(out) if name.startswith(OURS_FOR_A_WHILE)] == [MARKER]


def _all_stands(out: Path, manifest: Manifest) -> bool:
    files = [*manifest.outputs]
    for record in manifest.builds.values():
        files += record.outputs if record.published else ()
    return all(stands(out, one, manifest.written_ns) for one in files)
