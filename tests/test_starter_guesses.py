"""Set-up, turns and resistor guessed from sweeps: on simulated builds of random make, all shares
counted, and on sweeps of things that are no transformer."""

from __future__ import annotations

from functools import cache

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from hypothesis.extra import numpy as arrays
from simulation.bench import SWEPT_HZ, known_build, sweep_of

from reportgen.model import PORTS_OF_SETUP, Measurement, Setup, Sweep
from reportgen.physics.guess_ratio import (
    ratio_of_load,
    ratio_of_series,
    resistance_of_check,
    resistance_of_series,
)
from reportgen.physics.guess_setup import guess_setup
from reportgen.physics.network import reflection_of_impedance, resistor_ohm

CONDITIONS = (("bench", False), ("handheld", False), ("handheld", True))
BUILDS = 40


@cache
def measurements(grade: str, one_path: bool) -> tuple[tuple[float, list[Measurement]], ...]:
    """Turns ratio and every sweep of some builds that the thresholds were not chosen on."""
    found = []
    for seed in range(1000, 1000 + BUILDS):
        rng = np.random.default_rng(seed)
        known = known_build(rng, grade=grade, one_path=one_path, everything=True, checks=True)
        found.append((known.build.sheet.winding.turns_ratio, list(known.build.measurements)))
    return tuple(found)


def narrowed(sweep: Sweep, from_hz: float, to_hz: float) -> Sweep:
    inside = (sweep.frequency_hz >= from_hz) & (sweep.frequency_hz <= to_hz)
    return sweep_of(
        sweep.file, sweep.frequency_hz[inside], sweep.s[inside].copy(), one_path=sweep.one_path
    )


def shares(from_hz: float = 0.0, to_hz: float = 1e12) -> tuple[float, float]:
    """Share of guesses that are right, and of those that are wrong without a doubt told."""
    right = total = 0
    wrong_and_sure = 0
    for condition in CONDITIONS:
        for _, taken in measurements(*condition):
            for one in taken:
                guess = guess_setup(narrowed(one.sweep, from_hz, to_hz))
                hit = guess.setup is one.entry.setup
                right, total = right + hit, total + 1
                wrong_and_sure += not hit and not guess.others
    return right / total, wrong_and_sure / total


def test_nearly_every_full_sweep_is_told() -> None:
    """Of the 40 builds one is so lossy that its bare winding looks like 50 ohm, as a load does."""
    right, wrong_and_sure = shares()
    assert right >= 0.99
    assert wrong_and_sure <= 0.005


@pytest.mark.parametrize(
    ("from_hz", "to_hz", "least"),
    [(3.5e6, 3.8e6, 0.94), (7e6, 7.3e6, 0.93), (14e6, 14.35e6, 0.88)],
)
def test_most_sweeps_of_one_band_are_told(from_hz: float, to_hz: float, least: float) -> None:
    right, wrong_and_sure = shares(from_hz, to_hz)
    assert right >= least
    assert wrong_and_sure == 0


# --- what is no transformer ----------------------------------------------------------------------


def one_port(z_ohm: np.ndarray) -> Sweep:
    return sweep_of("x.s1p", SWEPT_HZ, reflection_of_impedance(z_ohm)[:, None, None])


@pytest.mark.parametrize("resistance_ohm", [450, 800, 2450, 3200])
@pytest.mark.parametrize("stray_f", [0, 5e-12])
def test_a_bare_resistor(resistance_ohm: float, stray_f: float) -> None:
    guess = guess_setup(one_port(resistor_ohm(resistance_ohm, stray_f, SWEPT_HZ)))
    assert guess.setup is Setup.LOAD_CHECK
    assert "bare resistor of some" in guess.reason


@pytest.mark.parametrize("length_m", [10.0, 20.0, 41.0])
def test_a_wire_is_an_antenna(length_m: float) -> None:
    """A lossy open line of 550 ohm: several resonances, high and low impedance in turn."""
    travel = (0.12 + 2j * np.pi * SWEPT_HZ / 2.9e8 * length_m).astype(complex)
    guess = guess_setup(one_port(550 / np.tanh(travel)))
    assert (guess.setup, guess.others) == (Setup.ANTENNA, ())
    assert "changes its sign" in guess.reason


def test_a_short_wire_begins_capacitive() -> None:
    z_ohm = 20 + 1 / (2j * np.pi * SWEPT_HZ * 25e-12)
    assert guess_setup(one_port(z_ohm)).setup is Setup.ANTENNA


@given(
    arrays.arrays(
        np.complex128,
        st.tuples(st.integers(1, 12), *[st.shared(st.integers(1, 2), key="ports")] * 2),
        elements=st.complex_numbers(max_magnitude=1e3, allow_nan=False),
    ),
    st.booleans(),
)
def test_any_sweep_gives_a_guess_of_as_many_ports(s: np.ndarray, one_path: bool) -> None:
    frequency_hz = np.linspace(1e6, 30e6, len(s))
    guess = guess_setup(sweep_of("x", frequency_hz, s, one_path=one_path and s.shape[-1] == 2))
    assert PORTS_OF_SETUP[guess.setup] == s.shape[-1]
    assert guess.setup not in guess.others
    assert guess.reason


# --- turns and resistor --------------------------------------------------------------------------


def suggestions() -> dict[str, np.ndarray]:
    """Suggested over true turns ratio or resistance, by how it was found."""
    found: dict[str, list[float]] = {}
    for condition in CONDITIONS:
        for ratio, taken in measurements(*condition):
            pair = taken[0].sweep
            bare = next(one.sweep for one in taken if one.entry.setup is Setup.OPEN)
            for one in taken:
                load_ohm = one.load.resistance_ohm if one.load else 0.0
                if one.entry.setup is Setup.LOAD:
                    for name, known in (("alone", None), ("pair", pair), ("open", bare)):
                        value = ratio_of_load(one.sweep, load_ohm, known) / ratio
                        found.setdefault(f"load, {name}", []).append(value)
                elif one.entry.setup is Setup.SERIES_RESISTOR:
                    value = ratio_of_series(one.sweep, pair) / ratio
                    found.setdefault("series turns", []).append(value)
                    value = resistance_of_series(one.sweep, pair) / load_ohm
                    found.setdefault("series ohm", []).append(value)
                elif one.entry.setup is Setup.RESISTOR_CHECK:
                    value = resistance_of_check(one.sweep) / load_ohm
                    found.setdefault("check ohm", []).append(value)
    return {name: np.array(values) for name, values in found.items()}


def test_turns_and_resistor_are_told_within_what_the_comment_says() -> None:
    found = suggestions()
    within = {name: np.quantile(np.abs(values - 1), 0.9) for name, values in found.items()}
    assert within["load, pair"] < 0.11
    assert within["load, open"] < 0.11
    assert within["series turns"] < 0.11
    assert within["series ohm"] < 0.10
    assert within["check ohm"] < 0.05
    assert 1.05 < np.median(found["load, alone"]) < 1.15
