"""The card of a build: one page of paper and two pictures, whatever a build is called."""

import io
import re
import shutil
import subprocess
from dataclasses import replace

import kit_samples
import pikepdf
import power_samples
import pytest
import result_samples as samples
from kit_samples import RESULTS, hostile_bench, named, with_bands, with_power, words_of
from PIL import Image
from test_look import contrast
from test_pdf import of_kind

from reportgen.model import FirstLimit, Interval
from reportgen.pages.card import card_pictures, picture_alt, render_card_pdf
from reportgen.pages.card_picture import draw_square, draw_wide
from reportgen.pages.kit_words import SHORT_CAUTION
from reportgen.pages.look import LIGHT
from reportgen.physics.permitted_power import permitted_of

CASES = pytest.mark.parametrize("result", RESULTS.values(), ids=RESULTS)
PICTURES = pytest.mark.parametrize("draw", [draw_wide, draw_square], ids=["wide", "square"])


def card(result, bench=samples.BENCH) -> bytes:
    return render_card_pdf(words_of(result, bench), bench, "1.2.3")


def opened(data: bytes) -> pikepdf.Pdf:
    return pikepdf.open(io.BytesIO(data))


def page_text(data: bytes) -> str:
    if (pdftotext := shutil.which("pdftotext")) is None:
        pytest.skip("pdftotext is not installed")
    done = subprocess.run(
        [pdftotext, "-layout", "-", "-"], input=data, capture_output=True, check=True
    )
    return re.sub(r"\s+", " ", done.stdout.decode())


# --- paper -----------------------------------------------------------------------------------


@CASES
@pytest.mark.parametrize("paper", ["A4", "Letter"])
def test_one_small_page_of_the_benchs_paper(result, paper):
    bench = hostile_bench(paper=paper)
    data = card(result, bench)
    with opened(data) as pdf:
        assert len(pdf.pages) == 1
        width, height = (round(float(edge)) for edge in pdf.pages[0].mediabox[2:])
    # ISO 216: A4 is 210 mm by 297 mm. ANSI/ASME Y14.1: size A is 8.5 in by 11 in.
    assert (width, height) == {"A4": (595, 842), "Letter": (612, 792)}[paper]
    assert len(data) < 100_000


def test_the_fullest_card_is_one_page():
    sheet = {"summary": "several words " * 140, "core": replace(
        samples.full().build.sheet.core, material="nickel-zinc ferrite " * 90)}  # fmt: skip
    result = named("W " * 60, with_bands(40), **sheet)
    result = with_power(power_samples.permitted(extrapolated=True), result)
    with opened(card(result, hostile_bench(paper="Letter"))) as pdf:
        assert len(pdf.pages) == 1


def test_language_title_and_tags():
    with opened(card(named("Alder"))) as pdf:
        assert pdf.Root.Lang == "en"
        assert pdf.docinfo["/Title"] == "Alder: card"
        assert pdf.Root.MarkInfo.Marked
        with pdf.open_metadata() as metadata:
            assert metadata["pdfuaid:part"] == "1"
        assert [str(one.S) for one in of_kind(pdf, "/H1")] == ["/H1"]


def test_the_bands_stand_in_words():
    with opened(card(named("Alder"))) as pdf:
        (figure,) = of_kind(pdf, "/Figure")
    alt = str(figure.Alt)
    assert "95\u00a0% intervals" in alt
    assert all(f"{band.name} " in alt for band in samples.BANDS)


def test_it_says_what_it_has_to():
    text = page_text(card(named("Alder")))
    for words in (
        "Alder", "Example Workshop", "50 Ω to 3200 Ω, 3 turns to 24", "Simulated data.",
        "Mean efficiency", "82 pF across the low side", "1 ring, 36 \u00d7 23 \u00d7 15 mm",
        "2 units on a network analyzer", "2026-10-04", "Local codes and licensed practice",
    ):  # fmt: skip
        assert words in text
    assert "Simulated" not in page_text(card(samples.load_only()))


def test_without_loss_it_says_so_and_why():
    text = page_text(card(samples.load_only()))
    assert "Not measured" in text
    assert "A back-to-back pair or an open and a short would give it." in text
    assert "efficiency, %" not in text


def test_what_was_not_swept_is_not_measured():
    text = page_text(card(samples.partial()))
    assert "12 m not measured" in text
    assert "The sweeps cover 15 m only in part and 12 m and 10 m not at all." in text
    assert not re.search(r"\b(nan|NaN|None|inf)\b", text)


def test_decimal_comma():
    text = page_text(card(named("Alder"), replace(samples.BENCH, locale="de")))
    assert re.search(r"\d,\d", text)
    assert not re.search(r"\d\.\d", text.replace("1.2.3", ""))


# --- power -----------------------------------------------------------------------------------


def power_of(result) -> str:
    return words_of(result).power


def test_no_power_without_a_temperature_log():
    result = replace(named("Alder"), stress=power_samples.stress(FirstLimit(
        what="flux", band="160 m", power_w=17.1)))  # fmt: skip
    assert power_of(result) == "No power is named: there is no temperature log."
    words = words_of(result)
    everything = " ".join([page_text(card(result)), picture_alt(words)])
    assert not re.search(r"\d\s*W\b", everything)


def test_a_log_that_permits_none_names_none():
    assert power_of(with_power(None)) == "No power is named: no temperature limit is given."


def test_a_power_stands_with_its_whole_condition():
    text = page_text(card(with_power(power_samples.permitted())))
    assert (
        "Handles 35 W of carrier on every band, limited by core heating on 80 m, with up to 40 °C "
        "around it (sealed box) and any load within SWR 2.5 of 3200 Ω." in text
    )


@pytest.mark.parametrize(("stress_w", "bound_by"), [(17.9, "flux"), (1e5, "heat")])
def test_the_lesser_of_heat_and_stress_is_named(stress_w, bound_by):
    result = named("Alder")
    sheet = replace(
        result.build.sheet, core=replace(result.build.sheet.core, temperature_limit_c=90)
    )
    fit = replace(power_samples.fit(), resistance_k_per_w=Interval(value=9, low95=8, high95=10))
    flux = FirstLimit(what="flux", band="160 m", power_w=stress_w)
    permitted = permitted_of(
        fit, power_samples.stress(flux), sheet, {"carrier": 100.0, "voice": 20.0}
    )
    assert permitted.limiting.bound_by == bound_by
    watts = re.search(r"Handles (\d+)\u00a0W", power_of(with_power(permitted)))
    assert float(watts[1]) <= min(stress_w, permitted.limiting.power_w)
    assert (watts[1] == "17") == (bound_by == "flux")


@PICTURES
def test_the_condition_of_a_power_is_never_cut(draw):
    drawing = draw(words_of(RESULTS["power"]), "en")
    drawn = " ".join(text.get_text() for text in drawing.figure.texts)
    assert (
        "any load within SWR 2.5 of 3200\u00a0Ω. It is an extrapolation, more than twice what was"
        in drawn
    )


def test_a_power_whose_condition_has_no_room_is_left_to_the_report():
    permitted = power_samples.permitted()
    modes = (replace(permitted.modes[0], mode="m" * 120, band="b" * 120),)
    result = with_power(replace(permitted, modes=modes))
    text = page_text(card(result))
    assert "Named in the report, with its conditions." in text
    assert "35 W" not in text


# --- pictures --------------------------------------------------------------------------------


def test_sizes_and_what_stands_in_the_files():
    for data, size in zip(card_pictures(words_of(named("Alder")), "en"), (630, 1200), strict=True):
        picture = Image.open(io.BytesIO(data))
        assert picture.size == (1200, size)
        assert picture.mode == "RGB"
        assert set(picture.text) == {"Title", "Description"}
        assert picture.text["Title"] == "Alder"
        assert SHORT_CAUTION in picture.text["Description"]


def test_the_same_result_gives_the_same_bytes():
    words = words_of(named("Alder"))
    assert card_pictures(words, "en") == card_pictures(words, "en")
    assert card(named("Alder")) == card(named("Alder"))


@CASES
@PICTURES
def test_all_text_lies_within_the_margins_and_on_nothing_else(draw, result):
    drawing = draw(words_of(result, hostile_bench()), "en")
    width, height = (72 * edge for edge in drawing.figure.get_size_inches())
    boxes = [text.get_window_extent() for text in drawing.figure.texts if text.get_text()]
    assert len(boxes) > 15
    for box in boxes:
        assert box.x0 >= 55
        assert box.y0 >= 20
        assert box.x1 <= width - 55
        assert box.y1 <= height - 20
    for index, one in enumerate(boxes):
        for other in boxes[index + 1 :]:
            across = min(one.x1, other.x1) - max(one.x0, other.x0)
            down = min(one.y1, other.y1) - max(one.y0, other.y0)
            assert across <= 1 or down <= 0.45 * min(one.height, other.height)


def test_a_name_of_120_characters_is_shown_whole():
    assert len(kit_samples.LONG_NAME) == 120
    for draw in (draw_wide, draw_square):
        drawing = draw(words_of(RESULTS["long name"]), "en")
        drawn = " ".join(text.get_text() for text in drawing.figure.texts)
        assert kit_samples.LONG_NAME in drawn
    assert kit_samples.LONG_NAME in page_text(card(RESULTS["long name"]))


@PICTURES
def test_foreign_text_is_drawn_as_text(draw):
    drawing = draw(words_of(RESULTS["foreign"], hostile_bench()), "en")
    drawn = "".join(text.get_text() for text in drawing.figure.texts)
    assert "[U+202E]$x_1$" in drawn
    assert "\u202e" not in drawn
    assert not any(text.get_parse_math() for text in drawing.figure.texts)
    drawing.png({})  # a letter that the font lacks would warn


def test_letters_that_the_font_lacks_stand_as_their_code_points():
    text = page_text(card(RESULTS["foreign"])).replace(" ", "")
    assert "[U+6F22]" in text
    assert "[U+1F600]" in text


@PICTURES
def test_bands_that_find_no_room_are_counted(draw):
    drawing = draw(words_of(RESULTS["40 bands"]), "en")
    assert "and 25 more bands, in the report" in [one.get_text() for one in drawing.figure.texts]


@PICTURES
def test_text_stands_out_from_the_paper(draw):
    """WCAG 2.2, success criterion 1.4.3: 4.5 to 1."""
    drawing = draw(words_of(RESULTS["no loss"]), "en")
    for colour in {text.get_color() for text in drawing.figure.texts}:
        assert contrast(colour, LIGHT.paper) >= 4.5
    picture = Image.open(io.BytesIO(drawing.png({})))
    assert picture.getpixel((2, 2)) == (255, 255, 255)
