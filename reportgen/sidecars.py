"""What helps to write sidecars: their JSON Schema for editors."""

from __future__ import annotations

import json

from reportgen.intake.sidecar_schema import sidecar_schema
from reportgen.model import BenchSheet, BuildSheet


def schema_text(of: str) -> str:
    """JSON Schema of `build.toml` ("build") or `runs.toml` ("runs")."""
    kind = {"build": BuildSheet, "runs": BenchSheet}[of]
    return json.dumps(sidecar_schema(kind), indent=2, ensure_ascii=False)
