"""Colours: text can be read in both schemes.

WCAG 2.2, success criteria 1.4.3 (text, 4.5 to 1) and 1.4.11 (graphical objects, 3 to 1);
relative luminance and contrast ratio as defined there.
"""

import pytest

from reportgen.pages.look import DARK, LIGHT, TINTS, Scheme


def channels(colour: str) -> list[float]:
    return [int(colour[place : place + 2], 16) / 255 for place in (1, 3, 5)]


def luminance(rgb: list[float]) -> float:
    linear = [c / 12.92 if c <= 0.04045 else ((c + 0.055) / 1.055) ** 2.4 for c in rgb]
    return 0.2126 * linear[0] + 0.7152 * linear[1] + 0.0722 * linear[2]


def contrast(one: list[float], other: list[float]) -> float:
    lighter, darker = sorted((luminance(one), luminance(other)), reverse=True)
    return (lighter + 0.05) / (darker + 0.05)


def test_contrast_of_black_and_white():
    assert contrast(channels("#000000"), channels("#ffffff")) == pytest.approx(21)


@pytest.mark.parametrize("scheme", [LIGHT, DARK], ids=["light", "dark"])
def test_text_and_lines_stand_out(scheme: Scheme):
    paper = channels(scheme.paper)
    for name in ("ink", "soft", "heat", "match"):
        assert contrast(channels(getattr(scheme, name)), paper) >= 4.5, name
    assert contrast(channels(scheme.baseline), paper) >= 3


@pytest.mark.parametrize("scheme", [LIGHT, DARK], ids=["light", "dark"])
def test_figures_can_be_read_on_every_tint(scheme: Scheme):
    heat, paper = channels(scheme.heat), channels(scheme.paper)
    for strength in TINTS:
        share = strength / 100
        ground = [share * h + (1 - share) * p for h, p in zip(heat, paper, strict=True)]
        assert contrast(channels(scheme.ink), ground) >= 4.5
