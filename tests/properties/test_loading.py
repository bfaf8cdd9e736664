"""Whatever stands in a case file, it is read or it is refused with reasons: never anything else."""

from __future__ import annotations

import dataclasses
import math
import random
from pathlib import Path
from typing import Any

import numpy as np
import pytest
import yaml
from hypothesis import HealthCheck, example, given, settings
from hypothesis import strategies as st

from pipeflow.case.loading import load_case, load_text
from pipeflow.case.model import Case
from pipeflow.errors import InputError
from pipeflow.line.elements import Equipment, Pipe

FILE = Path(__file__).parents[1] / "cli" / "good.yaml"
GOOD = FILE.read_text(encoding="utf-8")
LINES = GOOD.splitlines()
WORDS = sorted(set(GOOD.replace(":", " ").replace(",", " ").split()))

KEYS = (
    "title", "fluid", "density", "rheology", "model", "flow", "design", "minimum", "route", "pipe",
    "equipment", "size", "diameter", "length", "fittings", "scenarios", "limits", "velocity", "methods",
    "pumps", "<<", "", "fluid.density", "route[suction line].length", "route[", "route[]", "pumps[x].name",
    "scenarios.thick", "[key]", "<pipe>", "<map>", "solids", "liquid", "mass_fraction", "volume_fraction", "d85",
    "site", "altitude", "status", "dry_solids", "temperature", "exponent", "time_constant", "discharge",
    "loss_coefficient", "pump", "job", "lowest_level", "curve", "variable_speed", "impeller", "motor", "stages",
    "number",
)  # fmt: skip
VALUES = (
    "140 m3/h", "12 m", "0.5", "-1", "1e999", "nan", "~", "null", "", "herschel-bulkley", "NPS 8 Sch 40",
    "candidate-a.csv", "centrifugal", "980 rpm",
    "cross", "0.5 s", "assumed", "55 t/h", "free", "24 °C", "slatter", "*a",
    "&a 1", "!!str x", "0x1F", "12:30", "true", "1420 kg/m3", "21 mPa.s", "9.5 Pa", "\x1b", "\ud800",
    "é" * 50, "1 .. 2 1/s",
)  # fmt: skip


def outcome(text: str) -> Case | InputError:
    try:
        return load_text(text, str(FILE))
    except InputError as error:
        return error


def check_outcome(result: Case | InputError) -> None:
    if isinstance(result, Case):
        assert all(math.isfinite(number) for number in numbers(dataclasses.asdict(result)))
        return
    assert result.problems
    assert [p.line or 0 for p in result.problems] == sorted(p.line or 0 for p in result.problems)
    for problem in result.problems:
        assert problem.message.isprintable()
        assert problem.key_path.isprintable()
        assert problem.message
        assert (problem.line is None) == (problem.column is None)


def numbers(value: Any) -> list[float]:
    if isinstance(value, dict):
        return [number for inner in value.values() for number in numbers(inner)]
    if isinstance(value, list | tuple):
        return [number for inner in value for number in numbers(inner)]
    return [value] if isinstance(value, float) else []


@given(st.binary(max_size=400))
@example(b"\xff\xfe\x00a")
@example(b"title: \x85\xc2\x85")
@example(b"\xed\xa0\x80")
@settings(suppress_health_check=[HealthCheck.function_scoped_fixture], deadline=None)
def test_any_bytes(tmp_path: Path, content: bytes) -> None:
    path = tmp_path / "case.yaml"
    path.write_bytes(content)
    with pytest.raises(InputError) as caught:
        load_case(path)
    check_outcome(caught.value)


@given(st.text(alphabet="abt:- \n\t[]{}#&*!|>'\"%@`?,<\0\x07\x85\ufeff\u2028\ue000\U0001f600.0", max_size=80))
@settings(max_examples=400, deadline=None)
def test_any_text_of_the_characters_yaml_reads_specially(text: str) -> None:
    check_outcome(outcome(text))


TREES = st.recursive(
    st.sampled_from(VALUES) | st.integers() | st.none() | st.booleans(),
    lambda inner: st.lists(inner, max_size=4) | st.dictionaries(st.sampled_from(KEYS), inner, max_size=6),
    max_leaves=25,
)


@given(st.dictionaries(st.sampled_from(KEYS), TREES, max_size=10))
@settings(max_examples=300, deadline=None)
def test_any_tree_of_known_keys_and_odd_values(tree: dict[str, Any]) -> None:
    check_outcome(outcome(yaml.safe_dump(tree, allow_unicode=True)))


PARTS = ("fluid", "flow", "route", "limits", "methods", "pumps", "scenarios", "source", "job")


@given(st.sampled_from(PARTS), TREES)
@settings(max_examples=300, deadline=None)
def test_a_good_case_with_one_part_replaced(part: str, tree: Any) -> None:
    case = yaml.safe_load(GOOD)
    case[part] = tree
    check_outcome(outcome(yaml.safe_dump(case)))


@given(st.integers(0, 2**32), st.integers(1, 4))
@settings(max_examples=500, deadline=None)
def test_a_good_case_with_words_lines_and_characters_changed(seed: int, count: int) -> None:
    rng = random.Random(seed)
    text = GOOD
    for _ in range(count):
        text = rng.choice((swap_word, drop_line, repeat_line, insert_character, cut))(text, rng)
    check_outcome(outcome(text))


def swap_word(text: str, rng: random.Random) -> str:
    return text.replace(rng.choice(WORDS), rng.choice((*WORDS, *VALUES[:-3], *KEYS)), 1)


def drop_line(text: str, rng: random.Random) -> str:
    lines = text.splitlines() or [""]
    del lines[rng.randrange(len(lines))]
    return "\n".join(lines)


def repeat_line(text: str, rng: random.Random) -> str:
    lines = text.splitlines()
    return "\n".join([*lines, rng.choice(LINES)])


def insert_character(text: str, rng: random.Random) -> str:
    place = rng.randrange(len(text) + 1)
    return text[:place] + rng.choice(":-{}[],&*!#\t\n '\"\0\x9f") + text[place:]


def cut(text: str, rng: random.Random) -> str:
    return text[: rng.randrange(len(text) + 1)]


QUANTITY_LINES = [number for number, line in enumerate(LINES) if line.endswith((" m", " mm", " Pa", " kPa", " kg/m3"))]


@given(st.sampled_from(QUANTITY_LINES), st.sampled_from(("nan m", "1,5 m", "1", "x", "1e400 m")))
def test_a_quantity_made_wrong_is_told_at_its_own_line(number: int, wrong: str) -> None:
    lines = LINES.copy()
    key, _, rest = lines[number].partition(": ")
    if rest.startswith(("{", "Thick")) or key.strip().startswith("-"):
        return
    lines[number] = f"{key}: {wrong}"
    result = outcome("\n".join(lines))
    assert isinstance(result, InputError)
    assert [problem.line for problem in result.problems] == [number + 1]


@given(
    density=st.floats(1, 25_000),
    flow=st.just(0.0) | st.floats(1e-6, 1e4),
    diameter=st.floats(1, 5000),
    length=st.floats(1e-3, 1e6),
)
def test_what_is_written_is_what_is_read(density: float, flow: float, diameter: float, length: float) -> None:
    text = f"""
title: t
fluid: {{density: {density!r} kg/m3, rheology: {{model: newtonian, viscosity: 1 cP}}}}
flow: {flow!r} t/h
route:
  - {{pipe: p, diameter: {diameter!r} mm, length: {length!r} m, roughness: 0 mm}}
  - {{equipment: e, pressure_loss: 1 bar, at_flow: 1 kg/s}}
"""
    case = load_text(text)
    pipe, equipment = case.route
    assert isinstance(pipe, Pipe)
    assert isinstance(equipment, Equipment)
    np.testing.assert_allclose(
        [case.fluid.density, case.flow.design, pipe.diameter, pipe.length, equipment.at_flow],
        [density, flow / 3.6 / density, diameter / 1e3, length, 1 / density],
        rtol=1e-12,
    )
    assert case.flow.minimum == case.flow.design == case.flow.maximum
