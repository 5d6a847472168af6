"""The nouns: what a sidecar says, what a sweep holds, what a build measures.

All are frozen. Those that hold arrays compare by identity and own read-only arrays.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from datetime import date
from enum import StrEnum
from typing import Annotated, ClassVar, Literal

import numpy as np
from annotated_types import Ge, Gt, Le, Len, Lt
from numpy.typing import NDArray

OUTPUT_MARKER = ".reportgen-output"
"""File that tells an output folder of ours: never scanned, and nothing removed without it."""

RealArray = NDArray[np.float64]
ComplexArray = NDArray[np.complex128]

# --- what may stand in a sidecar: one line per kind of value ---------------------------------

Text = Annotated[str, Len(0, 2000)]
Name = Annotated[str, Len(1, 120)]
FileName = Annotated[str, Len(1, 240)]
Positive = Annotated[float, Gt(0), Lt(1e7)]
NonNegative = Annotated[float, Ge(0), Lt(1e7)]
Percent = Annotated[float, Ge(0), Le(100)]
Decibel = Annotated[float, Ge(0), Le(200)]
Count = Annotated[int, Ge(1), Lt(1000)]
Turns = Annotated[float, Gt(0), Lt(1000)]
TemperatureLimit = Annotated[float, Gt(0), Le(500)]


class Sheet:
    """Base of everything read from a sidecar: unknown keys and loose types are errors."""

    __slots__ = ()
    __pydantic_config__: ClassVar[dict[str, object]] = {
        "extra": "forbid",
        "strict": True,
        "allow_inf_nan": False,
    }


# --- runs.toml: what is common to the bench --------------------------------------------------


@dataclass(frozen=True, kw_only=True, slots=True)
class OwnBand(Sheet):
    """A band of any service, named by the workshop."""

    name: Name
    from_mhz: Positive
    to_mhz: Positive


@dataclass(frozen=True, kw_only=True, slots=True)
class Limits(Sheet):
    """Acceptance limits for one band or for all."""

    swr: Annotated[float, Gt(1), Le(100)] | None = None
    efficiency_percent: Percent | None = None


@dataclass(frozen=True, kw_only=True, slots=True)
class Calibration(Sheet):
    """What one calibration of the analyzer leaves uncorrected."""

    grade: Literal["handheld", "bench"] = "handheld"
    performed_on: date | None = None
    directivity_db: Decibel | None = None
    source_match_db: Decibel | None = None
    load_match_db: Decibel | None = None
    tracking_db: Decibel | None = None
    isolation_db: Decibel | None = None
    noise_db: Decibel | None = None
    drift_db: Decibel | None = None
    connection_db: Decibel | None = None


@dataclass(frozen=True, kw_only=True, slots=True)
class Load(Sheet):
    """A resistor used on the bench as the load of the high side, or in series with it."""

    resistance_ohm: Positive
    tolerance_percent: Percent = 1.0
    stray_pf: Literal["fit"] | Annotated[float, Ge(-50), Le(1000)] = "fit"
    body_pf: Annotated[float, Ge(0), Le(100)] = 0.1


@dataclass(frozen=True, kw_only=True, slots=True)
class BenchSheet(Sheet):
    """`runs.toml`."""

    schema: Literal[1] = 1
    title: Name = "Bench results"
    publisher: Annotated[str, Len(0, 120)] = ""
    baseline: Name | None = None
    region: Literal[1, 2, 3] = 1
    bands: Annotated[tuple[Name, ...], Len(1, 100)] | None = None
    power_w: Positive = 100.0
    paper: Literal["A4", "Letter"] = "A4"
    locale: Annotated[str, Len(2, 20)] = "en"
    limits: dict[Name, Limits] = field(default_factory=dict)
    own_band: Annotated[tuple[OwnBand, ...], Len(0, 100)] = ()
    duty: dict[Name, Percent] = field(default_factory=dict)
    calibrations: dict[Name, Calibration] = field(default_factory=dict)
    loads: dict[Name, Load] = field(default_factory=dict)


# --- build.toml: one build -------------------------------------------------------------------


class Setup(StrEnum):
    """How a unit was connected while a sweep was taken."""

    BACK_TO_BACK = "back-to-back"
    LOAD = "load"
    OPEN = "open"
    SHORT = "short"
    SERIES_RESISTOR = "series-resistor"
    DIRECT = "direct"
    LOAD_CHECK = "load-check"
    RESISTOR_CHECK = "resistor-check"
    THRU_CHECK = "thru-check"
    ANTENNA = "antenna"
    SPOT = "spot"


PORTS_OF_SETUP = {
    Setup.BACK_TO_BACK: 2,
    Setup.LOAD: 1,
    Setup.OPEN: 1,
    Setup.SHORT: 1,
    Setup.SERIES_RESISTOR: 2,
    Setup.DIRECT: 2,
    Setup.LOAD_CHECK: 1,
    Setup.RESISTOR_CHECK: 2,
    Setup.THRU_CHECK: 2,
    Setup.ANTENNA: 1,
    Setup.SPOT: 0,
}


SETUPS_WITHOUT_UNIT = frozenset(
    {Setup.LOAD_CHECK, Setup.RESISTOR_CHECK, Setup.THRU_CHECK, Setup.ANTENNA}
)


@dataclass(frozen=True, kw_only=True, slots=True)
class Winding(Sheet):
    """The turns of both sides."""

    low_turns: Turns
    high_turns: Turns
    isolated: bool = False
    wire_mm: Positive | None = None
    temperature_limit_c: TemperatureLimit | None = None

    @property
    def turns_ratio(self) -> float:
        """High-side turns over low-side turns [ratio]."""
        return self.high_turns / self.low_turns


@dataclass(frozen=True, kw_only=True, slots=True)
class Core(Sheet):
    """A ring core, or a stack of them."""

    outer_mm: Positive
    inner_mm: Positive
    height_mm: Positive
    stack: Count = 1
    initial_permeability: Positive | None = None
    material: Text = ""
    temperature_limit_c: TemperatureLimit | None = None
    flux_limit_mt: Positive | None = None


@dataclass(frozen=True, kw_only=True, slots=True)
class Compensation(Sheet):
    """The capacitor across one side of the transformer."""

    capacitor_pf: NonNegative = 0.0
    side: Literal["low", "high"] = "low"
    tolerance_percent: Percent = 5.0
    rated_v: Positive | None = None
    loss_tangent: Annotated[float, Ge(0), Lt(1)] | None = None


@dataclass(frozen=True, kw_only=True, slots=True)
class Match(Sheet):
    """The two resistances between which the transformer is to match."""

    source_ohm: Positive = 50.0
    load_ohm: Positive | None = None


@dataclass(frozen=True, kw_only=True, slots=True)
class Rating(Sheet):
    """What the build is asked to stand."""

    power_w: Positive | None = None
    load_swr: Annotated[float, Ge(1), Le(100)] = 2.0
    ambient_max_c: Annotated[float, Ge(-60), Le(150)] = 40.0
    enclosure: Text = ""
    enclosure_limit_c: TemperatureLimit | None = None


@dataclass(frozen=True, kw_only=True, slots=True)
class SweepEntry(Sheet):
    """One `[[sweep]]` of a build: a file and how it was taken."""

    file: FileName
    setup: Setup
    unit: Name | None = None
    units: Annotated[tuple[Name, ...], Len(2, 2)] | None = None
    load: Name | None = None
    calibration: Name | None = None
    repeat: Count = 1
    frequency_unit: Literal["Hz", "kHz", "MHz", "GHz"] | None = None
    decimal: Literal[",", "."] | None = None
    reverse_ports: bool = False

    @property
    def pair(self) -> tuple[str, str]:
        """The two units of a back-to-back sweep, the one on port 1 first."""
        return (self.units[0], self.units[1]) if self.units else ("A", "B")


@dataclass(frozen=True, kw_only=True, slots=True)
class ThermalEntry(Sheet):
    """One `[[thermal]]` of a build: a temperature log under power."""

    file: FileName
    power_w: Positive
    frequency_mhz: Positive
    unit: Name = "A"


@dataclass(frozen=True, kw_only=True, slots=True)
class Part(Sheet):
    """One line of the parts list."""

    name: Name
    quantity: Positive | None = None
    note: Text = ""


@dataclass(frozen=True, kw_only=True, slots=True)
class BuildSheet(Sheet):
    """`build.toml`."""

    name: Name
    winding: Winding
    schema: Literal[1] = 1
    summary: Text = ""
    measured_on: date | None = None
    notes: Text = ""
    core: Core | None = None
    compensation: Compensation = field(default_factory=Compensation)
    match: Match = field(default_factory=Match)
    rating: Rating = field(default_factory=Rating)
    sweep: Annotated[tuple[SweepEntry, ...], Len(0, 200)] = ()
    thermal: Annotated[tuple[ThermalEntry, ...], Len(0, 20)] = ()
    part: Annotated[tuple[Part, ...], Len(0, 200)] = ()
    record: dict[Name, Text | int | float] = field(default_factory=dict)
    loads: dict[Name, Load] = field(default_factory=dict)

    @property
    def nominal_load_ohm(self) -> float:
        """Resistance that the build is meant to match to its source [ohm]."""
        if self.match.load_ohm is not None:
            return self.match.load_ohm
        return self.match.source_ohm * self.winding.turns_ratio**2


# --- findings --------------------------------------------------------------------------------


class Severity(StrEnum):
    """How much a finding weighs: an error leaves something out, the others do not."""

    ERROR = "error"
    WARNING = "warning"
    NOTE = "note"


@dataclass(frozen=True, kw_only=True, slots=True)
class Finding:
    """Something wrong or worth knowing about an input, and what to do about it.

    `file` is relative to the build's folder, or to the runs folder for what concerns all builds.
    """

    severity: Severity
    code: str
    message: str
    remedy: str = ""
    file: str | None = None
    line: int | None = None
    key: str | None = None


# --- sweeps ----------------------------------------------------------------------------------


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Sweep:
    """One Touchstone file as read: network data referred to 50 ohm.

    `s` is (F, n, n) complex [ratio], frequency ascending and above 0. Where only the path from
    port 1 was measured (`one_path`), the column of port 2 holds zeros that mean nothing.
    """

    file: str
    sha256: str
    frequency_hz: RealArray
    s: ComplexArray
    reference_ohm: tuple[float, ...]
    one_path: bool = False

    def __post_init__(self) -> None:
        points = len(self.frequency_hz)
        ports = self.s.shape[-1]
        if self.s.shape != (points, ports, ports) or len(self.reference_ohm) != ports:
            raise ValueError(f"sweep {self.file}: shapes disagree")
        self.frequency_hz.setflags(write=False)
        self.s.setflags(write=False)

    @property
    def ports(self) -> int:
        """Number of ports, 1 or 2."""
        return int(self.s.shape[-1])


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Measurement:
    """A sweep together with the set-up it was taken in."""

    entry: SweepEntry
    sweep: Sweep
    load: Load | None = None


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class ThermalLog:
    """Temperatures under constant power that is switched on at the first row, (N,) each.

    `time_s` ascends from the first row on [s]; `core_c` and `ambient_c` in degrees Celsius.
    """

    file: str
    sha256: str
    time_s: RealArray
    core_c: RealArray
    ambient_c: RealArray

    def __post_init__(self) -> None:
        columns = (self.time_s, self.core_c, self.ambient_c)
        if len({column.shape for column in columns}) != 1 or self.time_s.ndim != 1:
            raise ValueError(f"log {self.file}: columns disagree")
        for column in columns:
            column.setflags(write=False)

    @property
    def span_s(self) -> float:
        """From the first row to the last [s]."""
        return float(self.time_s[-1] - self.time_s[0])


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class HeatRun:
    """A temperature log together with the unit, power and frequency that it was taken at."""

    entry: ThermalEntry
    log: ThermalLog


@dataclass(frozen=True, kw_only=True, slots=True)
class InputFile:
    """A file that was read for a build; `points` is None for what is not a sweep."""

    file: str
    sha256: str
    points: int | None = None


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Build:
    """One build as it comes from its folder, ready to be computed."""

    key: str
    folder: str
    sheet: BuildSheet
    measurements: tuple[Measurement, ...]
    heat_runs: tuple[HeatRun, ...] = ()
    inputs: tuple[InputFile, ...] = ()
    findings: tuple[Finding, ...] = ()


@dataclass(frozen=True, kw_only=True, slots=True)
class FailedBuild:
    """A folder that cannot be published, and why."""

    key: str
    folder: str
    findings: tuple[Finding, ...]


# --- figures ---------------------------------------------------------------------------------


class Method(StrEnum):
    """How loss follows from the sweeps that are there."""

    HALVING = "halving"
    BISECTION = "bisection"
    BISECTION_LOAD = "bisection+load"
    THREE_PAIRS = "three-pairs"
    THREE_PAIRS_LOAD = "three-pairs+load"
    TERMINATIONS = "terminations"
    SERIES_RESISTOR = "series-resistor"
    DIRECT = "direct"
    LOAD_ONLY = "load-only"


class Verdict(StrEnum):
    """How a build compares with the baseline in one band."""

    BETTER = "better"
    WORSE = "worse"
    SAME = "same within uncertainty"
    NOT_COMPARABLE = "not comparable"
    NOT_MEASURED = "not measured"


@dataclass(frozen=True, kw_only=True, slots=True)
class Band:
    """A named range of frequency, edges in hertz."""

    name: str
    from_hz: float
    to_hz: float

    @property
    def centre_hz(self) -> float:
        """Middle of the band [Hz]."""
        return (self.from_hz + self.to_hz) / 2


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Curves:
    """What one method gives over frequency; each (..., F), draws leading; None: not measured.

    `efficiency_ratio` : power into the load over power entering the low side [ratio].
    `reflection_ratio` : abs(gamma_in)^2 at the low side, re the source resistance [ratio].
    `halved_pair_ratio` : root of the through power ratio of two units back to back [ratio].
    `native` : (F,) bool, true where a point was swept and not interpolated to a band edge.
    `efficiency_low95`, `efficiency_high95` : ends of the 95 % interval of efficiency [ratio].
    """

    frequency_hz: RealArray
    native: NDArray[np.bool_]
    efficiency_ratio: RealArray | None = None
    reflection_ratio: RealArray | None = None
    halved_pair_ratio: RealArray | None = None
    efficiency_low95: RealArray | None = None
    efficiency_high95: RealArray | None = None


@dataclass(frozen=True, kw_only=True, slots=True)
class Figure:
    """One quantity in one band; the 95 % intervals are of the mean and of the worst.

    None: not known, or infinite.
    """

    mean: float | None
    worst: float | None
    centre: float | None
    worst_at_hz: float | None
    low95: float | None = None
    high95: float | None = None
    worst_low95: float | None = None
    worst_high95: float | None = None


@dataclass(frozen=True, kw_only=True, slots=True)
class MeasuredBand:
    """A band that the sweep covers, wholly or in part; `reason` says which part."""

    band: Band
    covered_hz: tuple[float, float]
    points: int
    interpolated: bool
    figures: dict[str, Figure]
    reason: str | None = None

    @property
    def partial(self) -> bool:
        """True when the sweep ends inside the band."""
        return self.covered_hz != (self.band.from_hz, self.band.to_hz)


@dataclass(frozen=True, kw_only=True, slots=True)
class NotMeasured:
    """A band without figures, and why."""

    band: Band
    reason: str


BandResult = MeasuredBand | NotMeasured


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class MethodResult:
    """What one method says of one unit, or of the mean of a pair.

    `unit` is None where the figures are a mean over `units`. `load_ohm` is the load the figures
    hold for; `reason` says why loss is missing where it is.
    """

    method: Method
    unit: str | None
    units: tuple[str, ...]
    load_ohm: float
    curves: Curves
    bands: tuple[BandResult, ...]
    reason: str | None = None


@dataclass(frozen=True, kw_only=True, slots=True)
class Bandwidth:
    """A contiguous range in which a criterion holds; true flags: it ends with the sweep."""

    criterion: str
    from_hz: float
    to_hz: float
    from_sweep_edge: bool
    to_sweep_edge: bool


@dataclass(frozen=True, kw_only=True, slots=True)
class Fitted:
    """A quantity that the data themselves named; value None: they could not."""

    quantity: str
    of: str
    value: float | None
    u95: float | None = None
    reason: str | None = None


@dataclass(frozen=True, kw_only=True, slots=True)
class Agreement:
    """Whether a method says the same as the best one for its units, and where it differs most.

    `difference_db` is its heat loss minus that of `against` in `band`, `u95_db` the difference's
    own uncertainty. `agrees` None: not comparable, `reason` says why.
    """

    method: Method
    unit: str | None
    against: Method
    agrees: bool | None
    band: str | None = None
    difference_db: float | None = None
    u95_db: float | None = None
    reason: str | None = None


@dataclass(frozen=True, kw_only=True, slots=True)
class BudgetLine:
    """What one contribution alone makes of the uncertainty of heat loss, by band [dB]."""

    contribution: str
    u95_db: dict[str, float]


@dataclass(frozen=True, kw_only=True, slots=True)
class Advice:
    """A further sweep, and what it would do to the uncertainty of the band it helps most [dB]."""

    sweep: str
    band: str
    u95_db: float
    u95_then_db: float


class Judgement(StrEnum):
    """Whether a figure keeps to a limit; the whole interval has to."""

    PASS = "pass"
    FAIL = "fail"
    UNDECIDED = "undecided"
    NOT_MEASURED = "not measured"


@dataclass(frozen=True, kw_only=True, slots=True)
class Interval:
    """A value with the ends of its 95 % interval; None: not known, or infinite."""

    value: float
    low95: float | None
    high95: float | None


@dataclass(frozen=True, kw_only=True, slots=True)
class HeatSplitBand:
    """Heat at the rated power by part [W], and the core's share of it [ratio]."""

    band: str
    winding_w: float
    core_w: float
    capacitor_w: float
    core_share: Interval


@dataclass(frozen=True, kw_only=True, slots=True)
class WindingFigures:
    """What the circuit says of the winding, at the low side; the lead counts as leakage."""

    leakage_h: Interval
    magnetising_h: Interval
    magnetising_at_hz: float
    coupling_ratio: Interval


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Permeability:
    """Relative permeability of the core over frequency, (F,) each.

    `lossy` is the lossy part, positive; the real part means something up to `real_to_hz`.
    """

    frequency_hz: RealArray
    real: RealArray
    real_low95: RealArray
    real_high95: RealArray
    real_to_hz: float
    lossy: RealArray
    lossy_low95: RealArray
    lossy_high95: RealArray


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class HeatSplit:
    """Where the heat goes."""

    bands: tuple[HeatSplitBand, ...]
    winding: WindingFigures
    permeability: Permeability | None


@dataclass(frozen=True, kw_only=True, slots=True)
class StressBand:
    """Stress in one band at the rated power; None: not asked for, or not known.

    `heat_w` is the upper end of the heat's interval at the worst frequency and, where the method
    knows it, the worst load of the SWR; `matched_heat_w` the same into the nominal load.
    `surface_rise_k` is the range of two published formulas for a bare surface in free air [K].
    Volts and amperes in rms.
    """

    band: str
    peak_flux_t: float | None
    capacitor_v: float | None
    capacitor_a: float | None
    heat_w: float | None
    matched_heat_w: float | None
    surface_rise_k: tuple[float, float] | None


@dataclass(frozen=True, kw_only=True, slots=True)
class FirstLimit:
    """The limit that is met first, and the power at which it is [W]; `band` None: in all.

    `limit` : as given, flux [mT] or volts [V].
    """

    what: str
    band: str | None
    power_w: float
    limit: float | None = None


@dataclass(frozen=True, kw_only=True, slots=True)
class Stress:
    """Largest volts and amperes (rms) at the rated power for the load SWR of the rating.

    `heat_load_swr` : the SWR that the heat holds for, 1 where other loads are not known.
    """

    power_w: float
    load_swr: float
    heat_load_swr: float
    low_side_v: float
    low_side_a: float
    high_side_v: float
    high_side_a: float
    bands: tuple[StressBand, ...]
    first_limit: FirstLimit | None


@dataclass(frozen=True, kw_only=True, slots=True)
class ThermalFit:
    """What a temperature log says of a unit: one body, evenly heated, one time constant.

    `power_w` was entering the low side at `frequency_hz` and made `heat_w`; the core ends `rise_k`
    above its surroundings, and was `start_k` above them at the first row.
    """

    file: str
    unit: str
    power_w: float
    frequency_hz: float
    heat_w: Interval
    rise_k: Interval
    start_k: float
    time_constant_s: Interval
    resistance_k_per_w: Interval
    span_s: float


@dataclass(frozen=True, kw_only=True, slots=True)
class ThermalBand:
    """What heat permits in one band.

    `continuous_w` : power that ends at the limit in the hottest surroundings, into the worst load
    of the SWR that heat is known for [W]; None: `reason`. `matched_w` : into the nominal load.
    `extrapolated` : that is beyond what the log covers.
    `minutes_to_limit` : from cold at the rated power, sent without a pause; None: never.
    """

    band: str
    continuous_w: float | None
    matched_w: float | None = None
    extrapolated: bool = False
    minutes_to_limit: float | None = None
    reason: str | None = None


@dataclass(frozen=True, kw_only=True, slots=True)
class PermittedMode:
    """Peak envelope power that a mode may have over all bands [W], and what bounds it there.

    `high_side_v` : the most across the high side then, rms, for the load SWR of the rating.
    `bound_by` : "heat", or the limit of `FirstLimit` that is met before; `band` None: in all.
    """

    mode: str
    duty_percent: float
    power_w: float
    high_side_v: float
    band: str | None
    bound_by: str
    extrapolated: bool


@dataclass(frozen=True, kw_only=True, slots=True)
class Permitted:
    """The power that a build stands for a load SWR and surroundings that the rating names.

    `limit_of` : what the lowest temperature limit is of, "core", "wire" or "enclosure". `modes`
    begins with the mode that may have least. `load_swr` is the SWR that volts and flux hold for,
    `heat_load_swr` the one of the heat.
    """

    limit_c: float
    limit_of: str
    ambient_max_c: float
    load_swr: float
    heat_load_swr: float
    bands: tuple[ThermalBand, ...]
    modes: tuple[PermittedMode, ...]

    @property
    def limiting(self) -> PermittedMode:
        """The mode and band that may have least power."""
        return self.modes[0]


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class WarmUp:
    """A warm-up curve through the rows of a log, long logs averaged; (N,) each [s] and [C].

    `rise_k` : final rise above the surroundings [K], `start_k` : rise at the first row [K].
    """

    rise_k: Interval
    start_k: float
    time_constant_s: Interval
    time_s: RealArray
    core_c: RealArray
    ambient_c: RealArray
    fitted_c: RealArray


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Thermal:
    """What the temperature logs say; `fit` is the one with the greatest resistance, by `warm_up`.

    `permitted` None: `reason` says what is missing.
    """

    fits: tuple[ThermalFit, ...]
    fit: ThermalFit
    warm_up: WarmUp
    permitted: Permitted | None
    reason: str | None = None


@dataclass(frozen=True, kw_only=True, slots=True)
class LotBand:
    """Heat loss of several units of a build in one band [dB]."""

    band: str
    least_db: float
    greatest_db: float
    standard_deviation_db: float
    worst_unit: str


@dataclass(frozen=True, kw_only=True, slots=True)
class Lot:
    """How alike the units of a build are: each by its best method."""

    units: tuple[str, ...]
    bands: tuple[LotBand, ...]


@dataclass(frozen=True, kw_only=True, slots=True)
class Repeatability:
    """How far sweeps of the same connection made anew differ, root mean square [ratio]."""

    file: str
    of: str
    rms_ratio: float


@dataclass(frozen=True, kw_only=True, slots=True)
class LimitResult:
    """The worst of a quantity in one band against the workshop's limit.

    References
    ----------
    JCGM 106:2012, clause 8.3: the uncertainty is the guard band.
    """

    band: str
    quantity: str
    limit: float
    value: float | None
    low95: float | None
    high95: float | None
    judgement: Judgement


@dataclass(frozen=True, kw_only=True, slots=True)
class BandComparison:
    """This build minus the baseline in one band; None: not comparable, `reason` says why."""

    band: str
    heat_loss_db: float | None
    heat_w: float | None
    heat_loss_u95_db: float | None = None
    heat_loss_low95_db: float | None = None
    heat_loss_high95_db: float | None = None
    verdict: Verdict | None = None
    reason: str | None = None


@dataclass(frozen=True, kw_only=True, slots=True)
class Comparison:
    """This build against the baseline build."""

    key: str
    name: str
    bands: tuple[BandComparison, ...]


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class BuildResult:
    """Everything computed of one build; `chosen` is the result, `methods` all that was computed.

    `loss_draws_db` : draws of the result's mean heat loss by band, (K,) each [dB].
    """

    build: Build
    power_w: float
    chosen: MethodResult
    units: tuple[MethodResult, ...]
    methods: tuple[MethodResult, ...]
    bandwidths: tuple[Bandwidth, ...]
    fitted: tuple[Fitted, ...]
    findings: tuple[Finding, ...]
    loss_draws_db: dict[str, RealArray] = field(default_factory=dict)
    agreements: tuple[Agreement, ...] = ()
    budget: tuple[BudgetLine, ...] = ()
    advice: tuple[Advice, ...] = ()
    limits: tuple[LimitResult, ...] = ()
    heat_split: HeatSplit | None = None
    stress: Stress | None = None
    thermal: Thermal | None = None
    lot: Lot | None = None
    repeatability: tuple[Repeatability, ...] = ()
