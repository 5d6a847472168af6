"""A strict reader of Touchstone files, versions 1 and 2, with one or two ports.

It never guesses in silence: what is unusual is remarked, what is ambiguous is refused.

References
----------
.. [1] Touchstone File Format Specification, version 2.1, IBIS Open Forum, 26 January 2024.
"""

from __future__ import annotations

import hashlib
from collections.abc import Sequence

import numpy as np

from reportgen.intake.data_rows import Rows, check_name, read_rows
from reportgen.intake.frequency_axis import (
    Points,
    ascending_points,
    distinct_points,
    finite_points,
    points_above_zero,
)
from reportgen.intake.frequency_unit import choose_unit
from reportgen.intake.option_line import (
    HERTZ_PER_UNIT,
    Option,
    ohms,
    read_option_line,
    remark_impedance_comments,
)
from reportgen.intake.reference import scattering_at_50_ohm, scattering_of_impedance
from reportgen.intake.remarks import Remarks, listed_lines
from reportgen.intake.sweep_text import SweepLines, decode_text, split_lines
from reportgen.intake.version_two import read_version_two
from reportgen.model import Band, ComplexArray, Finding, RealArray, Sweep
from reportgen.physics.network import ANALYZER_OHM

NOT_MEASURED_BELOW = 1e-9
"""Magnitude under which a whole column of S counts as not measured [ratio]."""
LARGEST_MAGNITUDE = 1e3
"""Magnitude of S above which a file holds something else than S [ratio]."""

_LINES_PER_POINT = 4
_FURTHER_LINES = 1000
_HERTZ_DECIMALS = 3


@np.errstate(all="ignore")  # what overflows becomes inf or nan, and is refused as that
def parse_touchstone(
    data: bytes,
    *,
    file: str,
    frequency_unit: str | None = None,
    decimal: str | None = None,
    reverse_ports: bool = False,
    bands: Sequence[Band] = (),
    max_bytes: int = 64 * 2**20,
    max_points: int = 200_001,
) -> tuple[Sweep, tuple[Finding, ...]]:
    """One sweep re 50 ohm, ascending above 0 Hz, and what there is to say about its file.

    Parameters
    ----------
    data : bytes
        The whole file.
    file : str
        Its name for the findings; where it ends as `.s2p` does, the ports are compared.
    frequency_unit : "Hz", "kHz", "MHz", "GHz" or None
        Prevails over the option line.
    decimal : ",", "." or None
        Decimal sign; a comma is read as one only when set.
    reverse_ports : bool
        Exchange the ports of a two-port file.
    bands : sequence of Band
        The bands that the sweep is meant for.
    max_bytes, max_points : int
        The largest file and the longest sweep that are read.

    Raises
    ------
    InputRejected
        With every finding, when the file cannot be used.
    """
    remarks = Remarks(file)
    text = decode_text(data, remarks, max_bytes=max_bytes)
    lines = split_lines(text, remarks, max_lines=_LINES_PER_POINT * max_points + _FURTHER_LINES)
    option, rows = _read(lines, remarks, decimal or ".", max_points)
    reference_ohm = _reference_of_ports(option, rows.ports, remarks)
    unit = choose_unit(option, frequency_unit, rows.frequency, bands, remarks)
    remarks.stop_if_rejected()
    points = finite_points(_points(rows, option.format, HERTZ_PER_UNIT[unit]), bands, remarks)
    remarks.stop_if_rejected()
    if reverse_ports:
        points, reference_ohm = _reversed(points, reference_ohm, remarks)
    one_path = option.parameter == "S" and _is_one_path(points.network, remarks)
    s = _at_50_ohm(points.network, option, reference_ohm, remarks)
    points = Points(points.frequency_hz, s, points.lines)
    _refuse_absurd_magnitude(points, remarks)
    points = _in_order(points, remarks)
    sweep = Sweep(
        file=file,
        sha256=hashlib.sha256(data).hexdigest(),
        frequency_hz=points.frequency_hz,
        s=points.network,
        reference_ohm=reference_ohm,
        one_path=one_path,
    )
    return sweep, remarks.findings


def _read(
    lines: SweepLines, remarks: Remarks, decimal: str, max_points: int
) -> tuple[Option, Rows]:
    if lines.keywords:
        option, rows = read_version_two(lines, remarks, decimal=decimal, max_points=max_points)
    else:
        option = read_option_line(lines, remarks, decimal=decimal)
        rows = read_rows(lines, remarks, decimal=decimal, max_points=max_points)
        check_name(remarks.file, rows, remarks)
    remark_impedance_comments(lines.comments, option, remarks)
    if option.format == "MA":
        _refuse_negative_magnitude(rows, remarks)
    return option, rows


def _refuse_negative_magnitude(rows: Rows, remarks: Remarks) -> None:
    negative = rows.lines[(rows.values[:, 1::2] < 0).any(axis=1)]
    if len(negative):
        remarks.error(
            "negative-magnitude",
            f"the magnitude is negative in {len(negative)} of {len(rows)} rows; "
            "format MA expects 0 and above (are the numbers DB or RI?)",
            "correct the format on the option line",
            int(negative[0]),
        )


def _refuse_absurd_magnitude(points: Points, remarks: Remarks) -> None:
    absurd = points.lines[np.abs(points.network).max(axis=(1, 2)) > LARGEST_MAGNITUDE]
    if len(absurd):
        remarks.error(
            "absurd-magnitude",
            f"an S parameter is larger than {LARGEST_MAGNITUDE:g} in {listed_lines(absurd)}; "
            "a passive network has at most 1",
            "see whether parameter, format and reference on the option line are right",
            int(absurd[0]),
        )


def _in_order(points: Points, remarks: Remarks) -> Points:
    points = ascending_points(points_above_zero(points, remarks), remarks)
    remarks.stop_if_rejected()
    points = distinct_points(points, remarks)
    remarks.stop_if_rejected()
    return points


# --- numbers ---------------------------------------------------------------------------------


def _points(rows: Rows, number_format: str, hertz_per_unit: float) -> Points:
    """The rows as network matrices.

    Frequencies are rounded to 1 mHz, so that 0.0073 GHz is the band edge 7.3 MHz and not beside
    it. Two ports stand as N11 N21 N12 N22: pages 9 and 10 of [1]_.
    """
    frequency_hz = np.round(rows.frequency * hertz_per_unit, _HERTZ_DECIMALS)
    pairs = rows.values[:, 1:].reshape(len(rows), rows.ports, rows.ports, 2)
    network = _complex(pairs[..., 0], pairs[..., 1], number_format)
    return Points(frequency_hz, network.swapaxes(1, 2), rows.lines)


def _complex(first: RealArray, second: RealArray, number_format: str) -> ComplexArray:
    """Complex numbers from the pairs of RI, MA or DB; the angle is in degrees."""
    if number_format == "RI":
        numbers = np.empty(first.shape, dtype=complex)
        numbers.real, numbers.imag = first, second
        return numbers
    magnitude = np.power(10.0, first / 20) if number_format == "DB" else first
    return np.asarray(magnitude * np.exp(1j * np.deg2rad(second)))


# --- ports and references --------------------------------------------------------------------


def _reference_of_ports(option: Option, ports: int, remarks: Remarks) -> tuple[float, ...]:
    """Reference of each port [ohm]; one on the option line holds for all."""
    found = option.reference_ohm
    if ports and len(found) > ports:
        remarks.error(
            "reference-count",
            f"{len(found)} references ({ohms(found)} ohm) for {ports} "
            f"{'port' if ports == 1 else 'ports'}; expected one, or one for each port",
            "correct the numbers behind R on the option line",
            option.line,
        )
    elif option.parameter == "Z" and option.normalized and len(set(found)) > 1:
        remarks.error(
            "reference-count",
            f"Z data with the references {ohms(found)} ohm; expected one reference, since it is "
            "not laid down how several normalise them",
            "export S parameters",
            option.line,
        )
    return found if len(found) == ports else found[:1] * ports


def _reversed(
    points: Points, reference_ohm: tuple[float, ...], remarks: Remarks
) -> tuple[Points, tuple[float, ...]]:
    if len(reference_ohm) == 1:
        remarks.warn(
            "one-port-reversed",
            "`reverse_ports` is set, but the file has one port; nothing was exchanged",
            "take the setting out",
        )
    network = points.network[:, ::-1, ::-1]
    return Points(points.frequency_hz, network, points.lines), reference_ohm[::-1]


def _is_one_path(s: ComplexArray, remarks: Remarks) -> bool:
    """Whether the column of port 2 was not measured."""
    if s.shape[-1] == 1:
        return False
    largest = np.abs(s).max(axis=0)
    if largest[1, 0] < NOT_MEASURED_BELOW <= largest[0, 1]:
        remarks.warn(
            "ports-reversed",
            "S21 is zero, S12 is not: ports reversed?",
            "set `reverse_ports = true` for this sweep if so",
        )
    if largest[:, 1].max() >= NOT_MEASURED_BELOW:
        return False
    remarks.note(
        "one-path",
        "S12/S22 are all zero: treated as not measured (one path)",
        "sweep again with the ports exchanged, where the reverse direction matters",
    )
    return True


def _at_50_ohm(
    network: ComplexArray, option: Option, reference_ohm: tuple[float, ...], remarks: Remarks
) -> ComplexArray:
    if option.parameter == "S" and set(reference_ohm) == {ANALYZER_OHM}:
        return network
    if option.parameter == "S":
        _remark_reference(network, option, reference_ohm, remarks)
    try:
        if option.parameter == "S":
            s = scattering_at_50_ohm(network, reference_ohm)
        else:
            unit_ohm = reference_ohm[0] if option.normalized else 1.0
            s = scattering_of_impedance(network * unit_ohm)
    except np.linalg.LinAlgError:
        s = np.full_like(network, np.nan)
    if not np.isfinite(s).all():
        remarks.reject(
            "not-convertible",
            f"the {option.parameter} data re {ohms(reference_ohm)} ohm cannot be converted to "
            "S re 50 ohm: their impedance is without bounds or -50 ohm",
            "see whether parameter, format and reference on the option line are right",
            option.reference_line,
        )
    return s


def _remark_reference(
    s: ComplexArray, option: Option, reference_ohm: tuple[float, ...], remarks: Remarks
) -> None:
    stated = ohms(tuple(dict.fromkeys(reference_ohm)))
    empty = (np.abs(s) < NOT_MEASURED_BELOW).all(axis=(0, 1))
    if len(reference_ohm) > 1 and empty.any():
        remarks.reject(
            "one-path-reference",
            f"the reference is {stated} ohm and one path only was measured; converting to 50 ohm "
            "needs all four S parameters",
            "sweep with a reference of 50 ohm, or both ways",
            option.reference_line,
        )
    remarks.note(
        "reference",
        f"the data are re {stated} ohm; they were converted to 50 ohm",
        "nothing to do, if the calibration was made so",
        option.reference_line,
    )
