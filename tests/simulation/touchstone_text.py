"""A sweep as the text of a Touchstone file, in each of its formats and units.

So few digits are printed that rounding, which differs from machine to machine, does not show.
"""

from __future__ import annotations

from collections.abc import Iterable

import numpy as np

DECIMALS_OF_UNIT = {"Hz": 0, "kHz": 1, "MHz": 4, "GHz": 7}
HZ_OF_UNIT = {"Hz": 1.0, "kHz": 1e3, "MHz": 1e6, "GHz": 1e9}


def _angle_deg(wave: np.ndarray) -> np.ndarray:
    return np.degrees(np.angle(wave))


def _columns(wave: np.ndarray, form: str) -> tuple[tuple[np.ndarray, int], tuple[np.ndarray, int]]:
    """Both columns of a parameter, each with its number of decimals."""
    if form == "RI":
        return (wave.real, 6), (wave.imag, 6)
    level = np.abs(wave)
    if form == "MA":
        return (level, 6), (_angle_deg(wave), 4)
    return (20 * np.log10(np.maximum(level, 1e-10)), 5), (_angle_deg(wave), 4)


def touchstone_text(
    frequency_hz: np.ndarray, s: np.ndarray, *, form: str, unit: str, comments: Iterable[str]
) -> str:
    """Text of a one- or two-port sweep; what was not measured is written as 0."""
    ports = s.shape[-1]
    order = [(0, 0)] if ports == 1 else [(0, 0), (1, 0), (0, 1), (1, 1)]
    columns = [_texts(frequency_hz / HZ_OF_UNIT[unit], DECIMALS_OF_UNIT[unit])]
    for to, out_of in order:
        wave = s[:, to, out_of]
        if not np.any(wave):
            columns += [["-200" if form == "DB" else "0"] * len(wave), ["0"] * len(wave)]
            continue
        columns += [_texts(column, decimals) for column, decimals in _columns(wave, form)]
    rows = (" ".join(row) for row in zip(*columns, strict=True))
    head = [f"! {comment}" for comment in comments]
    return "\n".join([*head, f"# {unit} S {form} R 50", *rows, ""])


def _texts(values: np.ndarray, decimals: int) -> list[str]:
    return [f"{value:.{decimals}f}" for value in values]
