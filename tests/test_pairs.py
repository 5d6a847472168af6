"""From the sweeps of a pair to one matrix: repeats, missing paths, polarity."""

from dataclasses import replace

import numpy as np
import pytest
from measurements import load_swept, pair_swept
from simulation.bench import matrix_of, sweep_of
from simulation.transformer import chain_of_unit, random_unit, twin_of
from two_ports import back_to_back, matrices_of

from reportgen.model import Load, Measurement, Setup, SweepEntry
from reportgen.physics.network import Chain, Scattering
from reportgen.physics.pairs import (
    find_pairs,
    oriented_scatterings,
    pair_findings,
    scattering_of_pair,
)

HZ = np.linspace(1.5e6, 30e6, 30)


@pytest.fixture(scope="module")
def units() -> dict[str, Chain]:
    """Three unequal units of one build."""
    rng = np.random.default_rng(5)
    design = random_unit(rng)
    return {name: chain_of_unit(twin_of(design, rng, 0.1), HZ) for name in "ABC"}


def two(units: dict[str, Chain], names: str) -> dict[str, Chain]:
    return {name: units[name] for name in names}


def true_pair(units: dict[str, Chain]) -> np.ndarray:
    return matrix_of(back_to_back(units["A"], units["B"]))


def put_together(*measurements: Measurement) -> np.ndarray:
    (pair,) = find_pairs(measurements)
    return matrices_of(scattering_of_pair(pair, oriented_scatterings(pair, HZ)))


def test_pairs_are_found_in_the_order_of_their_first_sweep(units):
    ab, ca, ba = (
        pair_swept(HZ, two(units, names), file=f"{names}.s2p") for names in ("AB", "CA", "BA")
    )
    load = load_swept(HZ, "A", units["A"], Load(resistance_ohm=2450))
    found = find_pairs([load, ab, ca, ba])
    assert [pair.units for pair in found] == [("A", "B"), ("C", "A")]
    assert [pair.files for pair in found] == ["AB.s2p, BA.s2p", "CA.s2p"]


def test_two_paths_are_taken_as_they_are(units):
    np.testing.assert_allclose(put_together(pair_swept(HZ, two(units, "AB"))), true_pair(units))


def test_the_other_way_round_is_turned_back(units):
    """A pair is found as its first sweep has it: B on port 1."""
    found = put_together(pair_swept(HZ, two(units, "BA")), pair_swept(HZ, two(units, "AB")))
    np.testing.assert_allclose(found, matrix_of(back_to_back(units["B"], units["A"])))


def test_one_path_swept_both_ways_is_as_good_as_two_paths(units):
    both = put_together(
        pair_swept(HZ, two(units, "AB"), one_path=True),
        pair_swept(HZ, two(units, "BA"), one_path=True),
    )
    np.testing.assert_allclose(both, true_pair(units))


def test_one_path_alone_takes_the_far_match_from_the_near_one(units):
    found = put_together(pair_swept(HZ, two(units, "AB"), one_path=True))
    true = true_pair(units)
    np.testing.assert_allclose(found[:, 0, 0], true[:, 0, 0])
    np.testing.assert_allclose(found[:, 1, 1], true[:, 0, 0])
    np.testing.assert_allclose(found[:, 0, 1], true[:, 1, 0])
    assert np.max(np.abs(found[:, 1, 1] - true[:, 1, 1])) > 0.01


def test_one_path_from_the_other_side_alone(units):
    """The column of port 2, all zeros in the file, must not come in anywhere."""
    (pair,) = find_pairs([pair_swept(HZ, two(units, "BA"), one_path=True)])
    found = matrices_of(scattering_of_pair(pair, oriented_scatterings(pair, HZ)))
    turned = matrix_of(back_to_back(units["B"], units["A"]))
    np.testing.assert_allclose(found[:, 0, 0], turned[:, 0, 0])
    np.testing.assert_allclose(found[:, 1, 1], turned[:, 0, 0])


def test_a_guessed_path_does_not_dilute_a_measured_one(units):
    found = put_together(
        pair_swept(HZ, two(units, "AB"), one_path=True), pair_swept(HZ, two(units, "AB"))
    )
    np.testing.assert_allclose(found, true_pair(units))


def test_repeats_are_averaged(units):
    def with_error(file: str, error: complex) -> Measurement:
        one = pair_swept(HZ, two(units, "AB"), file=file)
        return replace(one, sweep=sweep_of(file, HZ, one.sweep.s + error))

    found = put_together(with_error("1.s2p", 0.03), with_error("2.s2p", -0.01j))
    np.testing.assert_allclose(found, true_pair(units) + 0.015 - 0.005j)


@pytest.mark.parametrize("one_path", [False, True])
def test_windings_joined_the_wrong_way_round_are_turned(units, one_path):
    wrong = pair_swept(HZ, two(units, "AB"), wrong_way_round=True, one_path=one_path)
    right = pair_swept(HZ, two(units, "AB"), one_path=one_path)
    np.testing.assert_allclose(put_together(wrong), put_together(right))
    np.testing.assert_allclose(put_together(right, wrong), put_together(right))


def test_wrong_polarity_is_said(units):
    wrong = pair_swept(HZ, two(units, "AB"), wrong_way_round=True, file="wrong.s2p")
    (pair,) = find_pairs([pair_swept(HZ, two(units, "AB")), wrong])
    (finding,) = pair_findings(pair)
    assert (finding.code, finding.severity, finding.file) == ("polarity", "note", "wrong.s2p")
    assert finding.message == (
        "S21 begins beyond +-90 degrees: the two units are joined the wrong way round; its sign "
        "was changed"
    )


def test_one_path_is_said_with_the_remedy(units):
    (pair,) = find_pairs([pair_swept(HZ, two(units, "AB"), one_path=True)])
    (finding,) = pair_findings(pair)
    assert (finding.code, finding.severity) == ("one-path-pair", "note")
    assert finding.message == (
        "only one path of the pair A and B was measured; S22 is taken to equal S11, which costs "
        "up to 0.13 dB when the units differ"
    )
    assert finding.remedy == (
        'sweep the pair again the other way round and enter it with units = ["B", "A"]'
    )


@pytest.mark.parametrize(("names", "one_path"), [(("AB", "BA"), True), (("AB",), False)])
def test_nothing_to_say_where_both_ways_were_measured(units, names, one_path):
    (pair,) = find_pairs(
        [pair_swept(HZ, two(units, way), one_path=one_path, file=way) for way in names]
    )
    assert pair_findings(pair) == ()


def test_polarity_is_read_where_something_passes():
    """At the lowest points next to nothing passes, and its phase means nothing."""
    s21 = np.where(HZ < 4e6, -0.01, 0.9).astype(complex)
    zero = np.zeros_like(s21)
    sweep = sweep_of("x.s2p", HZ, matrix_of(Scattering(zero, s21, s21, zero)))
    entry = SweepEntry(file="x.s2p", setup=Setup.BACK_TO_BACK, units=("A", "B"))
    found = put_together(Measurement(entry=entry, sweep=sweep))
    np.testing.assert_allclose(found[:, 1, 0], s21)
