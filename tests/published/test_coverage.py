"""Every published example is used, or says why not."""

import ast

import pytest
import yaml
from examples import FOLDER, example, examples

COVERAGE = yaml.safe_load((FOLDER / "coverage.yaml").read_text(encoding="utf-8"))


def test_every_example_is_listed_and_nothing_else():
    assert sorted(COVERAGE) == sorted(examples())


@pytest.mark.parametrize("identity", sorted(COVERAGE))
def test_what_is_listed_exists(identity):
    """The test named is there and names the example in its docstring; else a reason of some words stands."""
    entry = COVERAGE[identity]
    if "test" not in entry:
        assert len(entry["reason"].split()) >= 5
        return
    file, name = entry["test"].split("::")
    tree = ast.parse((FOLDER / file).read_text(encoding="utf-8"))
    functions = {node.name: ast.get_docstring(node) or "" for node in tree.body if isinstance(node, ast.FunctionDef)}
    assert functions[name].startswith(f"{identity}.")


def test_every_example_says_how_it_was_obtained():
    allowed = ("read", "read in a public reworking of the example", "from memory (confidence")
    for identity in examples():
        assert example(identity).obtained.startswith(allowed), identity
