"""The snippets of README and docs are right, and a wrong one would be found."""

import ast
import inspect
import re

import pytest
import snippets
from fenced import blocks

from pipeflow.study.pumping import checks as pump_checks


@pytest.mark.parametrize("page", snippets.PAGES, ids=lambda page: page.stem)
def test_the_snippets_of_a_page_are_right(page):
    assert list(snippets.faults(page)) == []


@pytest.mark.parametrize(
    ("text", "fault"),
    [
        ("```sh\npipeflow draw line.yaml\n```", "no command draw"),
        ("```sh\npipeflow solve --jsn line.yaml\n```", "--jsn"),
        ("```sh\npipeflow solve\n```", "pipeflow solve: "),
        ("```sh\nmake all\n```", "make is not the program's"),
        ("```yaml\ntitle: x\n```", "fluid  missing"),
        ("```yaml\nflow: 3 apples\n```", "apples"),
        ("1. As\n\n   ```yaml\n   flow: 3 apples\n   ```", "apples"),
        ("```toml\na = 1\n```", "neither run nor marked"),
        ("```yaml file=a.yaml\n```", "only the blocks of the tutorial"),
        ("`pipeflow draw`", "no command draw"),
    ],
)
def test_a_wrong_snippet_is_found(tmp_path, text, fault):
    page = tmp_path / "page.md"
    page.write_text(f"# Page\n\n{text}\n", encoding="utf-8")
    (found,) = snippets.faults(page)
    assert fault in found


@pytest.mark.parametrize(
    "text",
    [
        "```sh\npipeflow solve --json line.yaml    # two\npipeflow rerun . --since v1\n```",
        "```yaml\nflow: 120 m3/h\n```",
        "<!-- not run: needs make -->\n```sh\nmake all\n```",
        "```\npipeflow COMMAND [OPTIONS]\n```",
    ],
)
def test_a_right_snippet_is_not_blamed(tmp_path, text):
    page = tmp_path / "page.md"
    page.write_text(f"# Page\n\n{text}\n", encoding="utf-8")
    assert list(snippets.faults(page)) == []


def test_the_pages_hold_snippets_of_every_kind():
    kinds = {block.language for page in snippets.PAGES for block in blocks(page)}
    assert {"sh", "console", "yaml", "python", "text", "diff"} <= kinds


def test_every_check_of_a_pump_is_on_its_page():
    page = (snippets.ROOT / "docs" / "pumps.md").read_text(encoding="utf-8")
    makers = {"Check", "at_least", "at_most", "not_checked"}
    calls = [node for node in ast.walk(ast.parse(inspect.getsource(pump_checks))) if isinstance(node, ast.Call)]
    names = {call.args[0].value for call in calls if isinstance(call.func, ast.Name) and call.func.id in makers}
    assert len(names) > 8
    assert [name for name in names if f"`{name}`" not in page] == []


def test_the_readme_names_every_command_and_every_page():
    readme = (snippets.ROOT / "README.md").read_text(encoding="utf-8")
    named = re.findall(r"^\| `pipeflow (\w+)", readme, re.MULTILINE)
    assert sorted(named) == sorted(snippets.commands())
    pages = {page.name for page in (snippets.ROOT / "docs").glob("*.md")} - {"decisions.md"}
    assert [page for page in sorted(pages) if f"(docs/{page})" not in readme] == []


def test_the_reference_of_the_command_names_every_option():
    page = (snippets.ROOT / "docs" / "commands.md").read_text(encoding="utf-8")
    for name, command in snippets.commands().items():
        section = page.split(f"## pipeflow {name}\n")[1].split("\n## ")[0]
        options = [one.opts[0] for one in command.params if one.param_type_name == "option"]
        assert [option for option in options if f"`{option}" not in section] == []
