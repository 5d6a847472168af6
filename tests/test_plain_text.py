"""Foreign text: nothing invisible passes."""

import unicodedata

from hypothesis import given
from hypothesis import strategies as st

from reportgen.pages.plain_text import LONGEST_TEXT, clean_text, text_lines

INVISIBLE = {"Cc", "Cf", "Cs", "Co", "Cn", "Zl", "Zp"}


@given(st.text())
def test_no_control_or_bidirectional_character_is_left(text: str) -> None:
    assert not {unicodedata.category(letter) for letter in clean_text(text)} & INVISIBLE


VISIBLE_ASCII = st.characters(min_codepoint=33, max_codepoint=126)


@given(st.text(alphabet=VISIBLE_ASCII, max_size=50))
def test_ordinary_text_stays_as_it_is(text: str) -> None:
    assert clean_text(text) == text


def test_invisible_characters_are_shown_by_their_code_point():
    # U+202E RIGHT-TO-LEFT OVERRIDE and U+200B ZERO WIDTH SPACE, Unicode Standard, chapter 23.
    assert clean_text("report\u202egpj.\u200bexe\x07") == "report[U+202E]gpj.[U+200B]exe[U+0007]"


def test_long_text_is_cut_and_says_so():
    cut = clean_text("x" * 5000)
    assert len(cut) == LONGEST_TEXT
    assert cut.endswith("\u2026")


def test_text_that_grows_by_being_shown_is_cut_too():
    assert len(clean_text("\u202e" * LONGEST_TEXT)) == LONGEST_TEXT


def test_piles_of_marks_are_cut():
    assert len(clean_text("a" + "\u0316" * 50)) == 4


def test_padding_of_figures_survives():
    assert clean_text("0.5\u2007\u2007") == "0.5\u2007\u2007"


def test_lines_without_the_empty_ones():
    assert text_lines("one\r\n\n  \rtwo") == ("one", "two")
