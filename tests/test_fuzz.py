"""Every reader of a foreign file on files that are nearly right: a bounded part of `tests/fuzz`."""

from __future__ import annotations

import pytest
from fuzz.seeds import seeds
from fuzz.targets import TARGETS
from hypothesis import given, settings
from hypothesis import strategies as st

EXAMPLES = {"touchstone": 150, "build": 60, "bench": 60, "spot": 60, "log": 60}
CASES = [(name, seed) for name in TARGETS for seed in seeds(name)]
TOKENS = st.sampled_from(
    ["", "0", "-1", "1e308", "-1e308", "1e-320", "1e400", "nan", "-inf", "1.#IND", "1D5", "1_0",
     "0x1F", "\u0663", "\u2212" "1", "\u202e", "\x00", "\x1a", "\ufeff", "#", "!", "[", "]", "[[",
     '"', "'''", "=", ",", ";", "<", "R75", "Z", "GHz", "[End]", "[Version] 2.0", "true", "{}",
     "2026-10-04", "a.b", "../x", "9" * 400, "x" * 300, "\r", "\u00e9", "9223372036854775808"]
)  # fmt: skip
PLACES = st.floats(0, 1, exclude_max=True)
DAMAGE = st.one_of(
    st.tuples(st.sampled_from(["drop", "double", "cut"]), PLACES, PLACES),
    st.tuples(st.sampled_from(["swap"]), PLACES, PLACES),
    st.tuples(st.sampled_from(["put", "instead"]), PLACES, TOKENS),
)


def damaged(seed: bytes, damages: list[tuple[str, float, object]]) -> bytes:
    """A seed with its words or its lines dropped, doubled, swapped, replaced, or its end cut."""
    text = seed[1:].decode("utf-8", "surrogateescape")
    for count, (what, place, other) in enumerate(damages):
        joint = "\n" if count % 2 else " "
        parts = text.split(joint)
        at = int(place * len(parts))
        if what == "drop":
            del parts[at]
        elif what == "double":
            parts.insert(at, parts[at])
        elif what == "cut":
            parts[at:] = [parts[at][: int(place * len(parts[at]))]]
        elif what == "swap" and isinstance(other, float):
            there = int(other * len(parts))
            parts[at], parts[there] = parts[there], parts[at]
        elif what == "put":
            parts.insert(at, str(other))
        else:
            parts[at] = str(other)
        text = joint.join(parts)
    return seed[:1] + text.encode("utf-8", "surrogateescape")


@pytest.mark.parametrize(("target", "seed"), CASES)
def test_seeds_keep_the_promises(target: str, seed: bytes) -> None:
    TARGETS[target](seed)


@pytest.mark.parametrize("target", TARGETS)
def test_damaged_files_keep_the_promises(target: str) -> None:
    @settings(max_examples=EXAMPLES[target])
    @given(
        st.sampled_from(seeds(target)),
        st.lists(DAMAGE, min_size=1, max_size=6),
        st.integers(0, 255),
    )
    def damage_and_read(seed: bytes, damages: list, choice: int) -> None:
        data = damaged(seed, damages)
        TARGETS[target](bytes([choice]) + data[1:])

    damage_and_read()


@pytest.mark.parametrize("target", TARGETS)
def test_any_bytes_keep_the_promises(target: str) -> None:
    @settings(max_examples=40)
    @given(st.binary(max_size=200))
    def read(data: bytes) -> None:
        TARGETS[target](data)

    read()


# what a fuzzer has found once: the input, and the promise that it broke
FINDS = {
    # below a millihertz a frequency rounds to nought
    "spot at no frequency": ("spot", b"\0frequency_mhz,through_loss_db\n1e-12,1\n"),
    # the nominal load was out of the range of numbers
    "turns that overflow": (
        "build",
        b'\0name = "x"\n[winding]\nlow_turns = 1e-300\nhigh_turns = 24\n',
    ),
    # warnings that stood between a hundred errors and the last one were counted as errors
    "warnings among errors": (
        "touchstone",
        b"\1# Z " + b"x " * 100 + b"\ntext\n1 0 0\nR 0\n",
    ),
    # a hundred errors on a second option line, of which nobody wanted to know
    "second option line": ("touchstone", b"\0#MHz S RI R 50\n# " + b"x " * 200 + b"\n1 0 0\n"),
}


@pytest.mark.parametrize(("target", "data"), FINDS.values(), ids=FINDS)
def test_finds_stay_mended(target: str, data: bytes) -> None:
    TARGETS[target](data)
