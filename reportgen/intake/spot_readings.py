"""Readings taken off a screen: through loss of a pair at a few frequencies, as CSV."""

from __future__ import annotations

import hashlib
from collections.abc import Iterator

import numpy as np

from reportgen.intake.frequency_axis import HIGHEST_HZ
from reportgen.intake.number_lines import read_number
from reportgen.intake.remarks import Remarks, quoted
from reportgen.intake.sweep_text import decode_text
from reportgen.model import Finding, Sweep

HEADER = ("frequency_mhz", "through_loss_db")
MAX_BYTES = 2**20

_LOSS_LIMIT_DB = 200.0


def parse_spot_readings(data: bytes, *, file: str) -> tuple[Sweep, tuple[Finding, ...]]:
    """Readings as a sweep of the magnitude of S21 alone; its other parameters mean nothing.

    Parameters
    ----------
    data : bytes
        CSV with the columns `frequency_mhz` and `through_loss_db` (positive), separated by commas.
    file : str
        Name of the file for findings.

    Raises
    ------
    InputRejected
        With all that is wrong in the file.
    """
    remarks = Remarks(file)
    text = decode_text(data, remarks, max_bytes=MAX_BYTES)
    rows = [line.split(",") for line in text.split("\n")]
    names = tuple(cell.strip().lower() for cell in rows[0]) if rows else ()
    if names != HEADER:
        remarks.reject(
            "spot-header",
            f"the first line is {quoted(','.join(names))}, expected {','.join(HEADER)}",
            "name the two columns so, with a comma between them",
            1,
        )
    readings = dict(_readings(rows[1:], remarks))
    if not readings and not remarks.rejected:
        remarks.error("no-data", "no readings below the heading", "enter a line for each reading")
    remarks.stop_if_rejected()
    frequency_hz = np.array(sorted(readings))
    through = 10 ** (-np.array([readings[hz] for hz in frequency_hz]) / 20)
    s = np.zeros((frequency_hz.size, 2, 2), dtype=complex)
    s[:, 1, 0] = s[:, 0, 1] = through
    sweep = Sweep(
        file=file,
        sha256=hashlib.sha256(data).hexdigest(),
        frequency_hz=frequency_hz,
        s=s,
        reference_ohm=(50.0, 50.0),
        one_path=True,
    )
    return sweep, remarks.findings


def _readings(rows: list[list[str]], remarks: Remarks) -> Iterator[tuple[float, float]]:
    """Frequency [Hz] and loss [dB] of each line that can be used."""
    seen: set[float] = set()
    for line, row in enumerate(rows, start=2):
        if not any(cell.strip() for cell in row):
            continue
        values = [read_number(cell.strip()) for cell in row]
        if len(values) != len(HEADER) or any(value is None for value in values):
            remarks.error(
                "spot-line",
                f"found {quoted(','.join(row))}, expected two numbers with decimal points",
                "correct the line",
                line,
            )
            continue
        megahertz, loss_db = (float(value) for value in values if value is not None)
        frequency_hz = round(megahertz * 1e6, 3) if abs(megahertz) < HIGHEST_HZ else np.inf
        usable = 0 < frequency_hz <= HIGHEST_HZ and abs(loss_db) < _LOSS_LIMIT_DB
        if not usable or frequency_hz in seen:
            remarks.error(
                "spot-value",
                f"found {quoted(','.join(row))}, expected a frequency above 0 that stands once, "
                "and a loss in decibels",
                "correct the line",
                line,
            )
            continue
        seen.add(frequency_hz)
        yield frequency_hz, loss_db
