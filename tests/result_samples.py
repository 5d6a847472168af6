"""Invented results, for looking at pages: no measurement stands behind them."""

from __future__ import annotations

from datetime import date

import numpy as np

from reportgen.model import (
    Band,
    BandComparison,
    Bandwidth,
    BenchSheet,
    Build,
    BuildResult,
    BuildSheet,
    Calibration,
    Comparison,
    Compensation,
    Core,
    Curves,
    FailedBuild,
    Figure,
    Finding,
    Fitted,
    InputFile,
    Load,
    MeasuredBand,
    Measurement,
    Method,
    MethodResult,
    NotMeasured,
    Part,
    Rating,
    Setup,
    Severity,
    Sweep,
    SweepEntry,
    Verdict,
    Winding,
)
from reportgen.physics.allocations import amateur_bands
from reportgen.physics.quantities import QUANTITIES, Better

BANDS = tuple(band for band in amateur_bands(2) if band.name != "6 m")
HOSTILE = (
    "<script>alert(1)</script>\u202e\"'{{7*7}} $x$ \x07 =cmd() & </style> https://example.org/"
)


def curves(level: float = 1.0, *, top_hz: float = 31e6, loss: bool = True) -> Curves:
    """A smooth, made-up unit: loss grows at both ends, the match gets worse upwards."""
    grid = np.geomspace(1.5e6, top_hz, 1201)
    edges = [edge for band in BANDS for edge in (band.from_hz, band.to_hz) if edge <= top_hz]
    frequency_hz = np.union1d(grid, edges)
    mhz = frequency_hz / 1e6
    loss_db = level * (0.38 + 0.16 * (2.5 / mhz) ** 1.5 + 0.5 * (mhz / 30) ** 1.6)
    loss_db = loss_db + 0.012 * np.sin(9 * np.log(mhz))
    rho = 0.035 + 0.12 * (1.8 / mhz) + 0.26 * (mhz / 30) ** 1.8 * level
    halved = loss_db + 0.3 * rho
    return Curves(
        frequency_hz=frequency_hz,
        native=np.isin(frequency_hz, grid),
        efficiency_ratio=10 ** (-loss_db / 10) if loss else None,
        reflection_ratio=rho**2,
        halved_pair_ratio=10 ** (-halved / 10) if loss else None,
    )


def figures_of(found: Curves, band: Band, power_w: float, u95: float | None) -> dict[str, Figure]:
    inside = (found.frequency_hz >= band.from_hz) & (found.frequency_hz <= band.to_hz)
    return {
        quantity.key: _figure(quantity, ratio[inside], found.frequency_hz[inside], power_w, u95)
        for quantity in QUANTITIES
        if (ratio := quantity.ratio(found)) is not None
    }


def _figure(quantity, ratio, frequency_hz, power_w, u95) -> Figure:
    values = quantity.value(ratio, power_w)
    worst = int(np.argmin(values) if quantity.better is Better.HIGHER else np.argmax(values))
    mean = float(quantity.value(np.array([np.mean(ratio)]), power_w)[0])
    half = None if u95 is None else u95 * abs(mean)
    return Figure(
        mean=mean,
        worst=float(values[worst]),
        centre=float(values[len(values) // 2]),
        worst_at_hz=float(frequency_hz[worst]),
        low95=None if half is None else mean - half,
        high95=None if half is None else mean + half,
    )


def band_results(found: Curves, power_w: float, u95: float | None = None):
    top = float(found.frequency_hz[-1])
    return tuple(_band_result(found, band, top, power_w, u95) for band in BANDS)


def _band_result(found, band, top, power_w, u95):
    if band.from_hz >= top:
        return NotMeasured(band=band, reason="the sweeps end at 22 MHz")
    end = min(band.to_hz, top)
    return MeasuredBand(
        band=band,
        covered_hz=(band.from_hz, end),
        points=2 if band.name == "60 m" else 23,
        interpolated=band.name == "60 m",
        figures=figures_of(found, band, power_w, u95),
        reason=None if end == band.to_hz else "the sweeps end at 21.2 MHz",
    )


def method_result(
    method: Method, found: Curves, unit: str | None = None, u95: float | None = None
) -> MethodResult:
    return MethodResult(
        method=method,
        unit=unit,
        units=("A", "B") if unit is None else (unit,),
        load_ohm=3200.0,
        curves=found,
        bands=band_results(found, 60.0, u95),
        reason="a back-to-back pair or an open and a short would give it"
        if found.efficiency_ratio is None
        else None,
    )


def halving(found: Curves) -> MethodResult:
    only = Curves(
        frequency_hz=found.frequency_hz,
        native=found.native,
        halved_pair_ratio=found.halved_pair_ratio,
    )
    return method_result(Method.HALVING, only)


def sweep(file: str, setup: Setup, ports: int, **entry) -> Measurement:
    frequency_hz = np.geomspace(1.5e6, 31e6, 1001)
    return Measurement(
        entry=SweepEntry(file=file, setup=setup, **entry),
        sweep=Sweep(
            file=file,
            sha256="5" * 64,
            frequency_hz=frequency_hz,
            s=np.zeros((1001, ports, ports), dtype=complex),
            reference_ohm=(50.0,) * ports,
            one_path=ports == 2,
        ),
        load=Load(resistance_ohm=3185.0, tolerance_percent=0.5) if setup is Setup.LOAD else None,
    )


def build(name: str, key: str, **sheet) -> Build:
    given = {
        "summary": "One ring of 36 mm, 3 turns to 24, for an end-fed wire of about 3200 ohm",
        "measured_on": date(2026, 10, 4),
        "notes": "Wound with the high side spread over two thirds of the ring.",
        "core": Core(
            outer_mm=36,
            inner_mm=23,
            height_mm=15,
            initial_permeability=620,
            material="nickel-zinc ferrite",
        ),
        "compensation": Compensation(capacitor_pf=82),
        "rating": Rating(power_w=60, enclosure="sealed box"),
        "part": (
            Part(
                name="ring core, 36 mm",
                quantity=1,
                note="any nickel-zinc grade of this permeability",
            ),
            Part(name="capacitor, 82 pF, 500 V, C0G", quantity=1),
            Part(name="enamelled wire, 0.8 mm, 1.9 m"),
        ),
        "record": {"operator": "bench 2", "temperature_c": 21.5, "data": "simulated"},
    } | sheet
    return Build(
        key=key,
        folder=key,
        sheet=BuildSheet(
            name=name, winding=Winding(low_turns=3, high_turns=24, wire_mm=0.8), **given
        ),
        measurements=(
            sweep("pair-ab.s2p", Setup.BACK_TO_BACK, 2, units=("A", "B"), calibration="evening"),
            sweep("a-load.s1p", Setup.LOAD, 1, unit="A", load="main", calibration="evening"),
            sweep("b-load.s1p", Setup.LOAD, 1, unit="B", load="main", calibration="evening"),
        ),
        inputs=(
            InputFile(file="build.toml", sha256="a1" * 32),
            InputFile(file="pair-ab.s2p", sha256="b2" * 32, points=1001),
            InputFile(file="a-load.s1p", sha256="c3" * 32, points=1001),
        ),
    )


FINDINGS = (
    Finding(
        severity=Severity.WARNING,
        code="one-path",
        file="pair-ab.s2p",
        message="S12 and S22 are zero throughout: the analyzer measured one path",
        remedy='sweep the pair once more the other way round and name it with units = ["B", "A"]',
    ),
    Finding(
        severity=Severity.NOTE,
        code="few-points",
        file="pair-ab.s2p",
        message="60 m holds 2 points; its figures are interpolated",
    ),
)


def full(
    level: float = 1.0, name: str = "Alder", key: str = "alder", u95: float | None = None, **sheet
):
    found = curves(level)
    chosen = method_result(Method.BISECTION_LOAD, found, u95=u95)
    units = tuple(
        method_result(Method.BISECTION_LOAD, curves(level * factor), unit)
        for unit, factor in (("A", 0.97), ("B", 1.03))
    )
    return BuildResult(
        build=build(name, key, **sheet),
        power_w=60.0,
        chosen=chosen,
        units=units,
        methods=(chosen, method_result(Method.BISECTION, curves(level * 1.01)), halving(found)),
        bandwidths=(
            Bandwidth(
                criterion="swr <= 2",
                from_hz=1.5e6,
                to_hz=29_812_345.0,
                from_sweep_edge=True,
                to_sweep_edge=False,
            ),
            Bandwidth(
                criterion="efficiency_ratio >= 0.85",
                from_hz=2_104_000.0,
                to_hz=23.4e6,
                from_sweep_edge=False,
                to_sweep_edge=False,
            ),
        ),
        fitted=(
            Fitted(quantity="stray_pf", of="loads.main", value=3.127),
            Fitted(
                quantity="stray_pf",
                of="loads.spare",
                value=None,
                reason="its reactance is too small to be seen",
            ),
        ),
        findings=FINDINGS,
    )


def load_only() -> BuildResult:
    chosen = method_result(Method.LOAD_ONLY, curves(1.3, loss=False), "A")
    return BuildResult(
        build=build("Hazel", "hazel", record={}),
        power_w=60.0,
        chosen=chosen,
        units=(),
        methods=(chosen,),
        bandwidths=(),
        fitted=(),
        findings=(),
    )


def partial() -> BuildResult:
    chosen = method_result(Method.BISECTION, curves(1.1, top_hz=21.2e6))
    return BuildResult(
        build=build("Rowan", "rowan"),
        power_w=60.0,
        chosen=chosen,
        units=(),
        methods=(chosen,),
        bandwidths=(),
        fitted=(),
        findings=(),
    )


def hostile() -> BuildResult:
    wide = "W" * 300
    sheet = {
        "summary": HOSTILE,
        "notes": HOSTILE + "\n" + wide,
        "part": (Part(name=HOSTILE, note=wide),),
        "record": {HOSTILE[:100]: HOSTILE, "url": "javascript:alert(1)"},
    }
    return full(name=HOSTILE[:100], key="hostile", **sheet)


def comparison(own: BuildResult, other: BuildResult, *, judged: bool = False) -> Comparison:
    pairs = zip(own.chosen.bands, other.chosen.bands, strict=True)
    return Comparison(
        key=other.build.key,
        name=other.build.sheet.name,
        bands=tuple(_compared(one, two, judged) for one, two in pairs),
    )


def _compared(one, two, judged: bool) -> BandComparison:
    if not all(isinstance(x, MeasuredBand) and "heat_w" in x.figures for x in (one, two)):
        return BandComparison(
            band=one.band.name,
            heat_loss_db=None,
            heat_w=None,
            verdict=Verdict.NOT_MEASURED,
            reason="this build's loss was not measured",
        )
    difference = {
        key: one.figures[key].mean - two.figures[key].mean for key in ("heat_loss_db", "heat_w")
    }
    return BandComparison(
        band=one.band.name,
        **difference,
        heat_loss_u95_db=0.021 if judged else None,
        verdict=Verdict.BETTER if judged else None,
    )


BENCH = BenchSheet(
    title="Bench results, autumn",
    publisher="Example Workshop",
    baseline="birch",
    power_w=60,
    calibrations={"evening": Calibration(performed_on=date(2026, 10, 4))},
    loads={"main": Load(resistance_ohm=3185, tolerance_percent=0.5)},
)

FAILED = (
    FailedBuild(
        key="elder",
        folder="elder",
        findings=(
            Finding(
                severity=Severity.ERROR,
                code="sidecar",
                file="build.toml",
                line=7,
                key="winding.low_turns",
                message='found "3 turns", expected a number above 0',
                remedy="write 3",
            ),
        ),
    ),
)
