"""The unit of the frequencies in a sweep file: what the option line says, and doubts about it."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from reportgen.intake.option_line import EXAMPLE, HERTZ_PER_UNIT, Option
from reportgen.intake.remarks import Remarks
from reportgen.model import Band, RealArray

_SUSPECT_HZ = 10e9
_UNITS = list(HERTZ_PER_UNIT)


def choose_unit(
    option: Option,
    setting: str | None,
    frequency: RealArray,
    bands: Sequence[Band],
    remarks: Remarks,
) -> str:
    """Unit of the frequencies as they stand in the file; what is doubtful about it is remarked.

    Parameters
    ----------
    option : Option
        What the option line says.
    setting : str or None
        What the sidecar says; it prevails.
    frequency : (F,) array
        As it stands in the file [unit].
    bands : sequence of Band
        The bands that the sweep is meant for; empty: nothing is known about them.
    remarks : Remarks
        Takes what is found.
    """
    finite = frequency[np.isfinite(frequency)]
    if not option.found:
        _remark_no_option_line(option, setting, finite, remarks)
    elif not option.unit_found:
        _remark_no_unit(option, setting, finite, bands, remarks)
    elif setting not in (None, option.unit):
        remarks.warn(
            "unit-overridden",
            f"the option line says {option.unit}, the setting `frequency_unit` {setting}; "
            f"read in {setting} as set",
            "take the setting out, unless the option line is known to be wrong",
            option.line,
        )
    unit = setting or option.unit
    if not remarks.rejected:
        _remark_implausible_unit(unit, finite, bands, option.line, remarks)
    return unit


def _remark_no_option_line(
    option: Option, setting: str | None, frequency: RealArray, remarks: Remarks
) -> None:
    missing = "no option line" if option.line is None else "the option line is empty"
    if setting:
        remarks.warn(
            "no-option-line",
            f"{missing}; read in {setting} as set by `frequency_unit`, and as S, MA, 50 ohm as "
            "Touchstone has it",
            f"add `{EXAMPLE}` as it applies",
            option.line,
        )
        return
    remarks.error(
        "no-option-line",
        f"{missing}; Touchstone would mean GHz, S, MA, 50 ohm{_by_that_rule(frequency)}",
        f"add `{EXAMPLE}` as it applies, or set `frequency_unit` for this sweep",
        option.line,
    )


def _by_that_rule(frequency: RealArray) -> str:
    return f": by that rule the sweep is {_span(frequency, 'GHz')}" if len(frequency) else ""


def _span(frequency: RealArray, unit: str) -> str:
    return f"{frequency.min():.6g} to {frequency.max():.6g} {unit}"


def _remark_no_unit(
    option: Option,
    setting: str | None,
    frequency: RealArray,
    bands: Sequence[Band],
    remarks: Remarks,
) -> None:
    if setting:
        message = f"the option line names no unit; read in {setting} as set by `frequency_unit`"
    else:
        message = f"the option line names no unit; Touchstone means GHz{_by_that_rule(frequency)}"
    suspect = len(frequency) and float(frequency.min()) * HERTZ_PER_UNIT["GHz"] > _SUSPECT_HZ
    if suspect and not setting and all(band.to_hz <= _SUSPECT_HZ for band in bands):
        remarks.error(
            "unit-missing",
            f"{message}, and no band lies above 10 GHz",
            f"name the unit, as in `{EXAMPLE}`, or set `frequency_unit` for this sweep",
            option.line,
        )
    else:
        remarks.warn("unit-missing", message, f"name the unit, as in `{EXAMPLE}`", option.line)


def _remark_implausible_unit(
    unit: str, frequency: RealArray, bands: Sequence[Band], line: int | None, remarks: Remarks
) -> None:
    if not len(frequency) or not bands or _touched(frequency, unit, bands):
        return
    at = _UNITS.index(unit)
    for other in sorted(_UNITS, key=lambda other: abs(_UNITS.index(other) - at)):
        if _touched(frequency, other, bands):
            remarks.warn(
                "unit-implausible",
                f"the sweep is {_span(frequency, unit)} and touches no band; "
                f"is the unit {other} instead of {unit}?",
                f'correct the option line, or set `frequency_unit = "{other}"` for this sweep',
                line,
            )
            return


def _touched(frequency: RealArray, unit: str, bands: Sequence[Band]) -> bool:
    low_hz = float(frequency.min()) * HERTZ_PER_UNIT[unit]
    high_hz = float(frequency.max()) * HERTZ_PER_UNIT[unit]
    return any(low_hz <= band.to_hz and high_hz >= band.from_hz for band in bands)
