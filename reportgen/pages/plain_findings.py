"""Findings as plain lines, for a run that imports nothing to colour them with."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from typing import Any

SEVERITIES = ("error", "warning", "note")
"""Those of `model`, which is slow to import, the gravest first."""


def finding_lines(heading: str, findings: Sequence[Mapping[str, Any]]) -> Iterator[str]:
    """Findings of one build, the gravest first, as `terminal` prints them; none: nothing."""
    if not findings:
        return
    from reportgen.pages.plain_text import clean_text

    yield clean_text(heading)
    for one in sorted(findings, key=lambda one: SEVERITIES.index(one["severity"])):
        line = f"line {one['line']}" if one["line"] else None
        place = ": ".join(part for part in (one["file"], line, one["key"]) if part)
        message = f"{place}: {one['message']}" if place else one["message"]
        remedy = f"; {clean_text(one['remedy'])}" if one["remedy"] else ""
        yield f"  {one['severity']:8}{clean_text(message)}{remedy}"


def counts_line(counts: Mapping[str, int]) -> str:
    """How many findings unchanged builds have, and where they stand; empty where they have none."""
    parts = [
        f"{counts[name]} {name}{'' if counts[name] == 1 else 's'}"
        for name in SEVERITIES
        if counts.get(name)
    ]
    return f"unchanged builds: {', '.join(parts)}; their reports tell them" if parts else ""
