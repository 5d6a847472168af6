"""The listing: the same words in Markdown, HTML and plain text, safe wherever they are pasted."""

import re
from dataclasses import replace
from html.parser import HTMLParser

import kit_samples
import power_samples
import pytest
import result_samples as samples
from kit_samples import RESULTS, hostile_bench, named, with_power, words_of

from reportgen.model import Part
from reportgen.pages.kit_words import CAUTIONS
from reportgen.pages.line_breaks import columns_of
from reportgen.pages.listing import (
    markdown_text,
    render_listing_html,
    render_listing_markdown,
    render_listing_text,
)

RENDERERS = {
    "html": render_listing_html,
    "md": render_listing_markdown,
    "txt": render_listing_text,
}
CASES = pytest.mark.parametrize("result", RESULTS.values(), ids=RESULTS)
FORMATS = pytest.mark.parametrize("render", RENDERERS.values(), ids=RENDERERS)


class Page(HTMLParser):
    """Tags, attributes and text of a piece of HTML."""

    def __init__(self, text: str) -> None:
        super().__init__()
        self.tags: list[str] = []
        self.attributes: list[tuple[str, str]] = []
        self.pieces: list[str] = []
        self.feed(text)
        self.close()

    def handle_starttag(self, tag, attrs) -> None:
        self.tags.append(tag)
        self.attributes += attrs

    def handle_data(self, data) -> None:
        self.pieces.append(data)

    @property
    def text(self) -> str:
        return " ".join("".join(self.pieces).split())


def listing(result, kind: str, bench=samples.BENCH) -> str:
    return RENDERERS[kind](words_of(result, bench)).decode()


def plain(result, kind: str) -> str:
    """What a reader sees, spaces made even."""
    text = listing(result, kind)
    return Page(text).text if kind == "html" else " ".join(text.split())


# --- content ---------------------------------------------------------------------------------


@pytest.mark.parametrize("kind", RENDERERS)
def test_all_three_say_what_they_have_to(kind):
    text = plain(named("Alder"), kind)
    for words in (
        "Alder", "One ring of 36 mm", "50 Ω to 3200 Ω, 3 turns to 24", "160 m", "10 m",
        "Heat loss, dB", "82 pF across the low side", "2 units on a network analyzer",
        "2026-10-04 by Example Workshop", "No power is named: there is no temperature log.",
        "1 \u00d7 capacitor, 82 pF, 500 V, C0G", "Computed from 3 sweeps by reportgen 1.2.3",
        "half of the 95 % interval",
    ):  # fmt: skip
        assert words in text
    assert "simulated data." in text.lower()
    assert text.index(CAUTIONS[0]) < text.index("Keep to the exposure limits")
    assert not re.search(r"\b(nan|NaN|None|inf)\b", text)


@pytest.mark.parametrize("kind", RENDERERS)
def test_band_table_holds_every_band_with_its_interval(kind):
    text = plain(named("Alder"), kind)
    for band in samples.BANDS:
        pattern = rf"{band.name}[ |]+[\d.]+ ± [\d.]+[ |]+[\d.]+ ± [\d.]+[ |]+\d\.\d+"
        assert re.search(pattern, text), band.name


@pytest.mark.parametrize("kind", RENDERERS)
def test_without_loss_it_says_so_and_why(kind):
    text = plain(samples.load_only(), kind)
    assert "Efficiency: not measured." in text
    assert "A back-to-back pair or an open and a short would give it." in text
    assert "Heat loss" not in text
    assert "imulated" not in text


@pytest.mark.parametrize("kind", RENDERERS)
def test_a_power_stands_with_its_condition_or_not_at_all(kind):
    with_log = plain(with_power(power_samples.permitted()), kind)
    assert "35 W of carrier on every band" in with_log
    assert "around it (sealed box) and any load within SWR 2.5 of 3200 Ω." in with_log
    assert not re.search(r"\d\s*W\b", plain(named("Alder"), kind))


@pytest.mark.parametrize("kind", RENDERERS)
def test_what_was_not_swept_says_why(kind):
    text = plain(samples.partial(), kind)
    assert "not measured: the sweeps end at 22 MHz" in text
    assert "15 m: only 21.0\u201321.2 MHz of the band" in text


@pytest.mark.parametrize("kind", RENDERERS)
def test_decimal_comma(kind):
    bench = replace(samples.BENCH, locale="de")
    text = listing(named("Alder", part=()), kind, bench).replace("1.2.3", "")
    assert re.search(r"\d,\d", text)
    assert not re.search(r"\d\.\d", text)


def test_lengths_of_wire_are_told_and_pieces_counted():
    parts = (
        Part(name="wire", quantity=1.6, note="metres"),
        Part(name="ring", quantity=2.0, note="any"),
        Part(name="glue"),
    )
    assert words_of(named("Alder", part=parts)).parts == (
        "wire, 1.6 metres", "2 \u00d7 ring (any)", "glue",
    )  # fmt: skip


@FORMATS
@CASES
def test_the_same_result_gives_the_same_bytes(render, result):
    assert render(words_of(result)) == render(words_of(result))


# --- HTML ------------------------------------------------------------------------------------

PLAIN_TAGS = {
    "p", "strong", "br", "bdi", "ul", "li", "table", "thead", "tbody", "tr", "th", "td",
}  # fmt: skip


@CASES
def test_html_has_plain_tags_and_inline_styles_only(result):
    html = listing(result, "html", hostile_bench())
    page = Page(html)
    assert set(page.tags) <= PLAIN_TAGS
    assert {name for name, _ in page.attributes} <= {"style", "scope", "colspan"}
    assert html.isascii()
    assert "http" not in " ".join(value for _, value in page.attributes)


def test_html_sets_no_colour_so_that_it_reads_on_any_ground():
    styles = {
        value for name, value in Page(listing(named("x"), "html")).attributes if name == "style"
    }
    properties = {rule.split(":")[0] for style in styles for rule in style.split(";")}
    assert properties == {"border-collapse", "text-align", "padding", "border-bottom"}
    assert not re.search(r"#|rgb|color", " ".join(styles))


def test_hostile_text_is_text_in_html():
    text = Page(listing(RESULTS["foreign"], "html", hostile_bench())).text
    assert "<script>alert(1)</script>[U+202E]" in text
    assert "<b>x</b> [U+202E]$x_1$ [U+0007]`*_[a](b)|" in text
    assert "{{7*7}}" in text


# --- Markdown --------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("foreign", "safe"),
    [
        ("a|b", "a\\|b"),
        ("`rm`", "\\`rm\\`"),
        ("[a](javascript:x)", "\\[a\\](javascript&#58;x)"),
        ("![a](b)", "\\!\\[a\\](b)"),
        ("<img src=x onerror=y>", "&lt;img src=x onerror=y&gt;"),
        ("&lt;b&gt;", "&amp;lt;b&amp;gt;"),
        ("**a** _b_ ~~c~~", "\\*\\*a\\*\\* \\_b\\_ \\~\\~c\\~\\~"),
        ("# a", "\\# a"),
        ("- a", "&#45; a"),
        ("+ a", "&#43; a"),
        ("===", "&#61;=="),
        ("1. a", "&#49;. a"),
        ("12) a", "&#49;2) a"),
        ("1.5 m", "1.5 m"),
        ("https://x.org", "https&#58;//x.org"),
        ("www.x.org", "www&#46;x.org"),
        ("a@b.c", "a&#64;b.c"),
        ("a\nb\r\n\nc", "a b c"),
        ("\x07\u202e", "\\[U+0007\\]\\[U+202E\\]"),
        ("\\", "\\\\"),
        ("$x$", "\\$x\\$"),
        ("4: the kit", "4: the kit"),
    ],
)
def test_foreign_text_is_text_in_markdown(foreign, safe):
    # CommonMark 0.31.2, 2.4 and 2.5: a backslash before ASCII punctuation and a numeric character
    # reference stand for the character, never for markup.
    assert markdown_text(foreign) == safe


def test_hostile_names_open_no_markup():
    text = listing(RESULTS["foreign"], "md", hostile_bench())
    assert "<" not in text
    assert not re.search(r"(?<!\\)[`\[\]]", text)
    assert not re.search(r"https?:", text)
    for line in text.splitlines():
        if line.startswith("|"):
            assert len(re.findall(r"(?<!\\)\|", line)) == 5


@CASES
def test_markdown_blocks_begin_as_intended(result):
    text = listing(result, "md", hostile_bench())
    beginnings = {re.match(r"\S+", block)[0] for block in text.split("\n\n")}
    marked = {word for word in beginnings if re.match(r"[#>|*+=~-]|\d+[.)]$", word)}
    assert {word for word in marked if not word.startswith("**")} == {"##", "|", "-"}


# --- plain text ------------------------------------------------------------------------------


@CASES
def test_text_is_at_most_72_columns_wide(result):
    text = listing(result, "txt", hostile_bench())
    assert max(map(columns_of, text.splitlines())) <= 72
    assert not re.search("[\u00a0\u2007\u2009\t\r\x00-\x09\x0b-\x1f\x7f-\x9f\u202a-\u202e]", text)


def test_columns_of_the_table_end_below_each_other():
    lines = listing(named("Alder"), "txt").splitlines()
    start = next(index for index, line in enumerate(lines) if line.startswith("Band "))
    table = [line for line in lines[start : start + 12] if not line.startswith("-")]
    ends = {tuple(found.end() for found in re.finditer(r"\S(?=  |$)", line)) for line in table}
    assert {end[-1] for end in ends} == {len(lines[start])}
    assert len({line.index("±") for line in table[1:]}) == 1


def test_wide_letters_take_two_columns():
    # Unicode Standard Annex 11: ideographs are wide
    assert columns_of("a\u6f22") == 3
    assert columns_of("e\u0301") == 1
    text = listing(named("\u6f22" * 100), "txt")
    assert max(map(columns_of, text.splitlines())) <= 72


def test_a_long_word_is_cut_and_nothing_is_lost():
    text = listing(named(kit_samples.LONG_WORD), "txt")
    assert text.startswith("W" * 72 + "\n" + "W" * 48 + "\n")
