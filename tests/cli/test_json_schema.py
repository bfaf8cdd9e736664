"""The JSON Schema of the case file: as the program would write it now, true to what the program reads.

A validator of no connection with the program judges the cases.
"""

from __future__ import annotations

import json
import re
import subprocess
import sys
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import pytest
from jsonschema import Draft202012Validator

from pipeflow import units
from pipeflow.case import json_schema
from pipeflow.case.loading import load_text
from pipeflow.case.nodes import Mapping, Node, Scalar, UnreadableError, read_tree
from pipeflow.errors import InputError

HERE = Path(__file__).parent
DOCS = HERE.parents[1] / "docs"
CASES = sorted((HERE.parents[1] / "cases").glob("*.yaml"))
SPOILT = sorted((HERE / "spoilt").glob("*.yaml"))
SCHEMA = json.loads((DOCS / "case.schema.json").read_text(encoding="utf-8"))
VALIDATOR = Draft202012Validator(SCHEMA)

LEFT_TO_THE_PROGRAM = {
    "07": "a number too large to compute with",
    "21": "readings that are not there",
    "22": "a size that only looks like one",
    "25": "the material of a size",
    "26": "roughness against bore",
    "27": "rise against length",
    "30": "names given twice",
    "32": "flows in order",
    "33": "velocities in order",
    "34": "below vacuum",
    "50": "the name of an element",
    "51": "a scenario against the case",
    "53": "a control character",
    "54": "the length of a name",
    "61": "a falling stress",
    "62": "viscosities in order",
    "66": "a method against the rheology",
    "67": "a criterion against the rheology",
    "68": "a method against the solids",
    "69": "a density against the mixture",
    "74": "sizes in order",
    "75": "solids against the density",
    "76": "dry solids of no solids",
    "81": "a pressure no place has",
    "82": "below absolute zero",
    "89": "a density against the mixture",
    "95": "flows by mass and by volume",
    "96": "a curve that is not there",
    "97": "an invisible character",
    "98": "a size without its schedule",
    "100": "a speed within its range",
    "101": "a speed the range needs",
    "102": "speeds in order",
    "103": "keys of a kind of pump",
    "104": "keys of a kind of pump",
    "107": "the arrangement of one",
    "108": "an arrangement of a kind of pump",
    "109": "diameters in order",
    "116": "a second pump in the route",
    "117": "the pump's two places",
    "119": "levels in order",
    **dict.fromkeys(map(str, range(123, 135)), "what stands in a curve"),
    "135": "a curve that is not there",
    "136": "the name of a pump",
    "137": "a scenario against the case",
    "140": "a key path",
    "141": "a key path that is no number",
    "142": "the unit of a key path",
    "143": "ends in order",
    "144": "the value of the case",
    "145": "a tolerance of nothing",
    "146": "a tolerance of less",
    "151": "per cent of zero",
    "153": "a pipe of the route",
}
"""What a schema cannot say, or is not asked to, by the number of the spoilt file."""
NOTATION = {"18", "41", "42", "43", "44", "45", "46", "47", "52", "57", "58"}
"""Spoilt files whose fault is one of YAML."""


def plain(node: Node) -> Any:
    """Give the values an editor's reader of YAML 1.2 would."""
    if isinstance(node, Scalar):
        if node.is_null:
            return None
        if node.plain and re.fullmatch(units.NUMBER, node.text):
            return float(node.text)
        return {"true": True, "false": False}.get(node.text, node.text) if node.plain else node.text
    if isinstance(node, Mapping):
        return {key: plain(value) for key, value in node.values.items()}
    return [plain(item) for item in node.items]


def faults(text: str) -> list[str]:
    return [error.message for error in VALIDATOR.iter_errors(plain(read_tree(text)[0]))]


def examples() -> list[str]:
    """Give the example of the page, and its pieces put in its place."""
    first, *pieces = re.findall(r"```yaml\n(.*?)```", (DOCS / "case-file.md").read_text(encoding="utf-8"), re.DOTALL)
    blocks = re.split(r"(?m)^(?=\w)", first)
    given = [[*re.findall(r"(?m)^(\w+):", piece), "scenarios"] for piece in pieces]
    return [first] + [
        piece + "".join(block for block in blocks if block.split(":")[0] not in keys)
        for piece, keys in zip(pieces, given, strict=True)
    ]


def test_the_file_is_what_the_program_writes() -> None:
    assert (DOCS / "case.schema.json").read_text(encoding="utf-8") == json_schema.text()


def test_it_is_a_schema() -> None:
    Draft202012Validator.check_schema(SCHEMA)


@pytest.mark.parametrize("path", [*CASES, HERE / "good.yaml"], ids=lambda path: path.stem)
def test_cases_fit_it(path: Path) -> None:
    assert faults(path.read_text(encoding="utf-8")) == []


@pytest.mark.parametrize("text", examples(), ids=["full", "model", "mixture", "sizing", "pumps"])
def test_the_examples_of_the_page_fit_it(text: str) -> None:
    load_text(text, str(HERE / "case.yaml"))
    assert faults(text) == []


def number(path: Path) -> str:
    return path.stem.split("-")[0]


@pytest.mark.parametrize("path", [path for path in SPOILT if number(path) not in NOTATION], ids=lambda path: path.stem)
def test_what_it_finds_wrong_in_spoilt_cases(path: Path) -> None:
    assert bool(faults(path.read_text(encoding="utf-8"))) == (number(path) not in LEFT_TO_THE_PROGRAM)


def quantities() -> Iterator[tuple[str, str]]:
    for name in SCHEMA["$defs"]:
        sign = name.replace("_", " ").removeprefix("quantity of ")
        dimensions = sign.removesuffix(" above 0").removesuffix(" of 0 or more").split(" or ")
        if name.startswith("quantity_of_"):
            yield from ((name, unit) for dimension in dimensions for unit in units.UNITS[dimension])


@pytest.mark.parametrize(("name", "unit"), list(quantities()))
def test_every_spelling_of_a_quantity_fits_and_no_other(name: str, unit: str) -> None:
    pattern = re.compile(SCHEMA["$defs"][name]["pattern"])
    spellings = {unit, unit.replace("3", "³"), unit.replace("2", "^2"), unit.replace(".", "·"), unit.replace("µ", "μ")}
    for number in ("1", "+1.5", ".5", "2.5e-05", "10"):
        assert all(pattern.search(f"{number}{space}{spelt}") for spelt in spellings for space in ("", " "))
    for wrong in (f"1 {unit}x", "1", f"1,5 {unit}", f"1 2 {unit}", f"nan {unit}"):
        assert not pattern.search(wrong)
    assert bool(pattern.search(f"-1 {unit}")) == (not name.endswith(("_above_0", "_or_more")))
    zeros = [f"0 {unit}", f"+0.0 {unit}", f".0e5 {unit}"]  # '+0.01/s' would be no zero
    assert [bool(pattern.search(zero)) for zero in zeros] == [not name.endswith("_above_0")] * 3


SMALL = """
title: 12
fluid: {density: 1 kg/L, rheology: {model: newtonian, viscosity: 1 cP}}
flow: 36 m3/h
route:
  - {pipe: p, diameter: 100 mm, length: 10 m}
scenarios:
  s: {%s}
"""


@pytest.mark.parametrize(
    ("changes", "fits"),
    [
        ("fluid.density: 1.2 t/m3", True),
        ("fluid.rheology: {model: power-law, consistency: 2 Pa.s^n, flow_index: 0.4}", True),
        ("'route[p].rise': 3 m, 'route[p].diameter': null, 'route[p].size': nps 4 sch 40", True),
        ("'route[p].fittings.elbow_90': 3, flow: {design: 3 t/h}, limits.velocity.maximum: 3 m/s", True),
        ("fluid.density: 1.2", False),
        ("fluid.desnity: 1.2 t/m3", False),
        ("'route[p].rise': 3", False),
        ("'route[p].size': 4 inch", False),
        ("fluid.rheology: {model: power-law, viscosity: 2 Pa.s}", False),
        ("scenarios: {}", False),
    ],
)
def test_changes_of_scenarios_are_checked_too(changes: str, fits: bool) -> None:
    text = SMALL % changes
    assert (faults(text) == []) == fits
    try:
        load_text(text)
        is_read = True
    except (InputError, UnreadableError):
        is_read = False
    assert is_read == fits


def parts(schema: Any) -> Iterator[dict[str, Any]]:
    if isinstance(schema, dict):
        yield from ([schema] if schema.get("type") == "object" and "properties" in schema else [])
        for key, inner in schema.items():
            yield from parts(inner) if key != "scenarios" else ()
    elif isinstance(schema, list):
        for inner in schema:
            yield from parts(inner)


def test_every_key_is_explained() -> None:
    properties = [(key, told) for part in parts(SCHEMA) for key, told in part["properties"].items()]
    assert len(properties) > 120
    assert [key for key, told in properties if not told.get("description")] == []


def test_solving_does_not_write_schemas() -> None:
    program = "import sys, pipeflow.study, pipeflow.case.loading; print('pipeflow.case.json_schema' in sys.modules)"
    done = subprocess.run([sys.executable, "-c", program], capture_output=True, text=True, check=True)
    assert done.stdout == "False\n"
