"""Colours: text can be read in both schemes, lines stand out and differ for every eye.

WCAG 2.2, success criteria 1.4.3 (text, 4.5 to 1) and 1.4.11 (graphical objects, 3 to 1);
relative luminance and contrast ratio as defined there. Colour-blind eyes: matrices for complete
protanopia, deuteranopia and tritanopia of Machado, Oliveira and Fernandes, "A physiologically-based
model for simulation of color vision deficiency", IEEE Trans. Visualization and Computer Graphics
15 (2009) 1291, for linear RGB; values from memory. Distance: CIE 1976 L*a*b*, IEC 61966-2-1 (sRGB)
with the white of D65; 2.3 is the least that is noticed in patches side by side (common practice),
and thin lines apart need several times that.
"""

from itertools import combinations

import numpy as np
import pytest

from reportgen.pages import look
from reportgen.pages.look import DARK, LIGHT, TINTS, Scheme, style_variables, tint

SCHEMES = pytest.mark.parametrize("scheme", [LIGHT, DARK], ids=["light", "dark"])
SEEN_BY = {
    "common": np.eye(3),
    "protanopia": np.array(
        [
            [0.152286, 1.052583, -0.204868],
            [0.114503, 0.786281, 0.099216],
            [-0.003882, -0.048116, 1.051998],
        ]
    ),
    "deuteranopia": np.array(
        [
            [0.367322, 0.860646, -0.227968],
            [0.280085, 0.672501, 0.047413],
            [-0.011820, 0.042940, 0.968881],
        ]
    ),
    "tritanopia": np.array(
        [
            [1.255528, -0.076749, -0.178779],
            [-0.078411, 0.930809, 0.147602],
            [0.004733, 0.691367, 0.303900],
        ]
    ),
}
XYZ_OF_RGB = np.array(
    [[0.4124, 0.3576, 0.1805], [0.2126, 0.7152, 0.0722], [0.0193, 0.1192, 0.9505]]
)
SERIES = ("heat", "match", "baseline")
LEAST_DISTANCE = 20


def linear(colour: str) -> np.ndarray:
    values = np.array([int(colour[place : place + 2], 16) / 255 for place in (1, 3, 5)])
    return np.where(values <= 0.04045, values / 12.92, ((values + 0.055) / 1.055) ** 2.4)


def luminance(colour: str) -> float:
    return float(XYZ_OF_RGB[1] @ linear(colour))


def contrast(one: str, other: str) -> float:
    lighter, darker = sorted((luminance(one), luminance(other)), reverse=True)
    return (lighter + 0.05) / (darker + 0.05)


def lab(rgb: np.ndarray) -> np.ndarray:
    ratio = XYZ_OF_RGB @ np.clip(rgb, 0, 1) / XYZ_OF_RGB.sum(axis=1)
    root = np.where(ratio > (6 / 29) ** 3, np.cbrt(ratio), ratio / (3 * (6 / 29) ** 2) + 4 / 29)
    return np.array([116 * root[1] - 16, 500 * (root[0] - root[1]), 200 * (root[1] - root[2])])


def distance(one: str, other: str, eye: str = "common") -> float:
    seen = [lab(SEEN_BY[eye] @ linear(colour)) for colour in (one, other)]
    return float(np.linalg.norm(seen[0] - seen[1]))


def test_contrast_of_black_and_white():
    assert contrast("#000000", "#ffffff") == pytest.approx(21)
    assert distance("#000000", "#ffffff") == pytest.approx(100, abs=0.1)


@pytest.mark.parametrize("eye", SEEN_BY)
def test_every_eye_sees_grey_as_grey(eye: str):
    assert SEEN_BY[eye].sum(axis=1) == pytest.approx(1, abs=2e-6)


@pytest.mark.parametrize("eye", ["protanopia", "deuteranopia"])
def test_the_check_sees_red_and_green_that_are_alike_to_some(eye: str):
    assert distance("#9c8b2d", "#c07a2e") > LEAST_DISTANCE > 2 * distance("#9c8b2d", "#c07a2e", eye)


@SCHEMES
def test_text_and_lines_stand_out(scheme: Scheme):
    for name in ("ink", "soft", "heat", "match"):
        assert contrast(getattr(scheme, name), scheme.paper) >= 4.5, name
    for name in SERIES:
        assert contrast(getattr(scheme, name), scheme.paper) >= 3, name


@SCHEMES
@pytest.mark.parametrize("eye", SEEN_BY)
def test_series_of_a_chart_differ_for_every_eye(scheme: Scheme, eye: str):
    colours = [getattr(scheme, name) for name in SERIES]
    assert min(distance(*pair, eye) for pair in combinations(colours, 2)) >= LEAST_DISTANCE


@SCHEMES
@pytest.mark.parametrize("eye", SEEN_BY)
def test_builds_on_common_axes_differ_for_every_eye(scheme: Scheme, eye: str):
    colours = [getattr(scheme, series.colour) for series in look.SERIES]
    assert min(contrast(colour, scheme.paper) for colour in colours) >= 3
    assert min(distance(*pair, eye) for pair in combinations(colours, 2)) >= LEAST_DISTANCE


def test_builds_on_common_axes_differ_without_colour():
    assert len({series.dash for series in look.SERIES}) == len(look.SERIES)
    assert len({series.marker for series in look.SERIES}) == len(look.SERIES)


@SCHEMES
def test_figures_can_be_read_on_every_tint(scheme: Scheme):
    grounds = [tint(scheme, level) for level in range(len(TINTS))]
    assert grounds[0] == scheme.paper
    for ground in grounds:
        assert contrast(scheme.ink, ground) >= 4.5
        assert ground in style_variables(scheme)
    assert all(distance(*pair) > 2.3 for pair in combinations(grounds, 2))
