"""What every page must hold, and what none may."""

import base64
import hashlib
import re
from dataclasses import replace
from itertools import pairwise

import pytest
import result_samples as samples
from page_reader import CASES, Page, index, report


@pytest.fixture(scope="module")
def sources():
    return {name: report(name) for name in CASES} | {"index": index()}


@pytest.fixture(scope="module")
def pages(sources):
    return {name: Page(source) for name, source in sources.items()}


# --- what no page may hold -----------------------------------------------------------------------


def test_elements_are_balanced(pages):
    assert all(page.open == [] for page in pages.values())


def test_nothing_from_elsewhere_and_no_script_but_that_of_the_index(sources, pages):
    for name, page in pages.items():
        assert not {tag for tag, _ in page.elements} & {"iframe", "object", "link", "img"}
        assert page.all("script") == ([{}] if name == "index" else [])
        for tag, attributes in page.elements:
            for attribute, value in attributes.items():
                assert not attribute.startswith("on"), (name, tag)
                if attribute in ("href", "src", "xlink:href"):
                    ours = r"(#[\w-]+|[a-z0-9-]+/(report|card)\.(html|pdf))"
                    assert re.fullmatch(ours, value), value
        addresses = set(re.findall(r'url\((?!#)["\']?([a-z]+:[^,"\')]*)', sources[name]))
        assert addresses == {"data:font/ttf;base64"}


def test_the_policy_forbids_what_is_not_needed(pages):
    expected = "default-src 'none'; img-src data:; style-src 'unsafe-inline'; font-src data:"
    for name, page in pages.items():
        (policy,) = [one["content"] for one in page.all("meta") if "http-equiv" in one]
        assert policy.startswith(expected)
        assert (policy == expected) is (name != "index")


def test_the_policy_of_the_index_names_its_one_script(sources, pages):
    """CSP Level 3, section 2.3.1: the digest is of the text between the tags, base64."""
    (script,) = re.findall(r"<script>(.*?)</script>", sources["index"], re.DOTALL)
    digest = base64.b64encode(hashlib.sha256(script.encode()).digest()).decode()
    (policy,) = [one["content"] for one in pages["index"].all("meta") if "http-equiv" in one]
    assert policy.endswith(f"; script-src 'sha256-{digest}'")


def test_no_placeholder_for_a_missing_figure_is_ever_printed(pages):
    for page in pages.values():
        assert not re.search(r"\b(nan|NaN|None|inf|True|False|Undefined)\b", page.text)


def test_no_empty_cell_in_a_table_of_figures(sources):
    for source in sources.values():
        assert not re.search(r'<td class="(soft)?">\s*</td>', source)


def test_identifiers_are_unique(pages):
    for page in pages.values():
        names = [found["id"] for _, found in page.elements if "id" in found]
        assert len(names) == len(set(names))


def test_headings_descend_by_one(pages):
    for page in pages.values():
        levels = [int(tag[1]) for tag, _ in page.elements if re.fullmatch("h[1-6]", tag)]
        assert levels[0] == 1
        assert levels.count(1) == 1
        assert all(after - before <= 1 for before, after in pairwise(levels))


def test_tables_have_captions_and_scopes_and_pictures_have_words(pages):
    for page in pages.values():
        assert len(page.all("caption")) == len(page.all("table"))
        assert all(head.get("scope") in ("row", "col") for head in page.all("th"))
        for attributes in page.all("div"):
            if attributes.get("role") == "img":
                assert len(attributes["aria-label"]) > 40
        assert page.all("html") == [{"lang": "en"}]
        assert len(page.all("main")) == 1


def test_cautions_stand_on_every_page(pages):
    for page in pages.values():
        for words in (
            "Local codes and licensed practice come first",
            "hot enough to burn skin",
            "High radio-frequency voltage.",
            "Exposure.",
            "Licence.",
            "nothing of saturation, of breakdown",
            "One unit is no production batch.",
        ):
            assert words in page.text


# --- foreign text --------------------------------------------------------------------------------


def test_hostile_text_is_shown_and_does_nothing(pages):
    for name in ("hostile", "index"):
        text = pages[name].text
        assert "<script>alert(1)</script>[U+202E]\"'{{7*7}} $x$ [U+0007] =cmd() & </style>" in text


def test_hostile_text_stays_inside_its_attribute():
    bench = replace(samples.BENCH, title='a" onmouseover="x\' y', publisher="</title><b>")
    page = Page(report("full", bench))
    assert 'a" onmouseover="x\' y' in page.text
    assert "</title><b>" in page.text
