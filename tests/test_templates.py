"""Where templates lie, and what may pass through them."""

import re
from pathlib import Path

import pytest
from jinja2 import Environment, UndefinedError
from markupsafe import Markup

from reportgen.errors import OutputError
from reportgen.pages import templates
from reportgen.pages.templates import printable, template_folder

OURS = '[project]\nname = "reportgen"\n'


def package(folder: Path) -> Path:
    made = folder / "reportgen"
    made.mkdir()
    return made


def test_templates_in_the_package_come_first(tmp_path):
    inside = package(tmp_path) / "templates"
    inside.mkdir()
    (tmp_path / "templates").mkdir()
    (tmp_path / "pyproject.toml").write_text(OURS)
    assert template_folder(tmp_path / "reportgen") == inside


def test_templates_beside_the_package_count_in_our_own_source_tree(tmp_path):
    (tmp_path / "templates").mkdir()
    (tmp_path / "pyproject.toml").write_text(OURS)
    assert template_folder(package(tmp_path)) == tmp_path / "templates"


@pytest.mark.parametrize(
    "project", [None, '[project]\nname = "other"\n', "not toml [", "project = 3\n", "[tool]\n"]
)
def test_a_folder_of_somebody_else_is_not_taken_for_ours(tmp_path, project):
    (tmp_path / "templates").mkdir()
    if project is not None:
        (tmp_path / "pyproject.toml").write_text(project)
    with pytest.raises(OutputError, match="templates of reportgen are missing"):
        template_folder(package(tmp_path))


@pytest.mark.parametrize("value", [None, 0.1, True, 1 + 2j, ["a"], b"x"])
def test_only_text_and_whole_numbers_are_printed(value):
    with pytest.raises(TypeError, match="display turns figures into text"):
        printable(value)


def test_foreign_text_is_cleaned_and_own_markup_is_not():
    assert printable("a\u202eb") == "a[U+202E]b"
    assert printable(3) == "3"
    assert printable(Markup("<b>")) == "<b>"


@pytest.fixture
def environment() -> Environment:
    return templates._environment()


def test_text_is_escaped_and_a_misspelt_name_fails(environment):
    assert environment.from_string("{{ a }}").render(a="<\"'&>") == "&lt;&#34;&#39;&amp;&gt;"
    with pytest.raises(UndefinedError):
        environment.from_string("{{ b }}").render(a=1)


def test_templates_quote_every_attribute_and_trust_no_data(environment):
    for name in environment.list_templates(extensions=["html"]):
        source = environment.loader.get_source(environment, name)[0]
        assert "|safe" not in source.replace(" ", "")
        assert not re.search(r"=\{\{", source)
        assert "round" not in source
