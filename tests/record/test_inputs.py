"""A case comes back from its record as it was, to the last bit; what a record should not hold is said."""

import json
from dataclasses import fields, is_dataclass, replace

import numpy as np
import pytest
from hypothesis import given, settings
from making import CASES, CHANGES, case_of, text_of

from pipeflow.case.loading import load_case, load_text
from pipeflow.line.elements import Pipe
from pipeflow.record import document
from pipeflow.record.inputs import (
    MARK,
    UnknownInputsError,
    decoded,
    differences,
    digest,
    encoded,
    folded,
    unfolded,
    without_folder,
)
from pipeflow.record.kinds import classes
from pipeflow.rheology.fitting import ModelFit
from pipeflow.study import solve


def through_json(tree):
    return json.loads(json.dumps(tree, allow_nan=False))


def same(one, other):
    """Whether two trees hold the same, of the same types, nan being nan and -0.0 not 0.0."""
    if is_dataclass(one):
        return type(one) is type(other) and all(same(getattr(one, f.name), getattr(other, f.name)) for f in fields(one))
    if isinstance(one, np.ndarray):
        return one.dtype == other.dtype and one.shape == other.shape and repr(one.tolist()) == repr(other.tolist())
    if isinstance(one, tuple):
        return isinstance(other, tuple) and len(one) == len(other) and all(map(same, one, other))
    if isinstance(one, dict):
        return list(one) == list(other) and all(same(one[key], other[key]) for key in one)
    return repr(one) == repr(other)


@pytest.mark.parametrize("path", CASES, ids=lambda path: path.stem)
def test_a_demo_case_comes_back_exactly(path):
    case = without_folder(load_case(path))
    back = decoded(unfolded(through_json(folded(encoded(case)))))
    assert same(back, case)
    assert document(solve(back)) == document(solve(case))


@given(CHANGES)
@settings(max_examples=40, deadline=None)
def test_any_case_comes_back_exactly(changes):
    case = case_of(**changes)
    assert decoded(through_json(encoded(case))) == case


@pytest.mark.parametrize("path", CASES, ids=lambda path: path.stem)
def test_every_class_of_a_case_is_known(path):
    """One that is not comes from a room that ``inputs.classes`` must be told of."""

    def marks(tree):
        if isinstance(tree, dict):
            yield from [tree[MARK]] if isinstance(tree.get(MARK), str) else []
            yield from (mark for value in tree.values() for mark in marks(value))
        elif isinstance(tree, list):
            yield from (mark for value in tree for mark in marks(value))

    assert set(marks(encoded(load_case(path)))) <= {*classes(), "map", "array", "number"}


def test_numbers_that_json_has_not_come_back():
    pipe = Pipe("p", 0.1, np.float64(np.inf), rise=np.asarray(2.5))
    assert same(decoded(through_json(encoded(pipe))), replace(pipe, length=float("inf")))
    fit = ModelFit("m", residuals=np.array([[0.1, np.nan], [-0.0, np.inf]]))
    assert same(decoded(through_json(encoded(fit))), fit)


@pytest.mark.parametrize(
    "changes",
    [
        {"density": "1.4 t/m3", "length": "0.2 km", "bore": "0.15 m", "loss": "0.12 bar", "roughness": "50 µm"},
        {"flow": "2333.3333333333335 L/min", "yield_stress": "8000 mPa", "elbows": "4.0", "flow_index": "0.60"},
    ],
)
def test_comments_and_spelling_are_no_change(changes):
    plain = encoded(case_of())
    spelt = load_text("# a comment\n" + text_of(**changes).replace("flow:", "flow:   "), "other/name.yaml")
    assert digest(encoded(spelt)) == digest(plain)
    assert [*differences(plain, encoded(spelt))] == ["file"]


@pytest.mark.parametrize("change", [{"density": "1400.0001 kg/m3"}, {"elbows": "5"}, {"turbulent": "dodge-metzner"}])
def test_a_change_of_any_input_changes_the_digest(change):
    assert digest(encoded(case_of(**change))) != digest(encoded(case_of()))
    assert len([*differences(encoded(case_of()), encoded(case_of(**change)))]) == 1


def test_differences_name_elements():
    found = [*differences(encoded(case_of()), encoded(case_of(length="201 m", density="1500 kg/m3")))]
    assert found == ["fluid.density", "route[second].length"]


@pytest.mark.parametrize(
    ("spoil", "said"),
    [
        (lambda tree: tree.update(colour="red"), "Case has colour"),
        (lambda tree: tree["route"][0].update(lining=1.0), "Pipe has lining"),
        (lambda tree: tree["route"][0].pop("length"), "Pipe lacks length"),
        (lambda tree: tree["route"][0].update({MARK: "Popen"}), "'Popen'"),
        (lambda tree: tree["route"][0].update({MARK: "os.system"}), "'os.system'"),
        (lambda tree: tree["route"][0].update(length="ten"), "Pipe has a length of another kind"),
        (lambda tree: tree["route"][0].update(length=True), "Pipe has a length of another kind"),
        (lambda tree: tree["route"].append(3.0), "Case has a route of another kind"),
        (lambda tree: tree.update(flow=None), "Case has a flow of another kind"),
        (lambda tree: tree["methods"].update(turbulent=1.0), "Methods has a turbulent of another kind"),
        (lambda tree: tree["route"][0]["fittings"]["entries"].update(exit="x"), "Pipe has a fittings of another kind"),
        (
            lambda tree: tree["flow"].update(design={MARK: "array", "of": "<f8", "shape": [2], "values": [1.0, 2.0]}),
            "FlowRange has a design of another kind",
        ),
        (lambda tree: tree["route"][0].pop(MARK), "not as a record has them"),
        (lambda tree: tree["flow"].update(design={MARK: "number", "text": "ten"}), "not as a record has them"),
        (lambda tree: tree["flow"].update(design={MARK: "array", "of": "O", "shape": [1], "values": [1]}), "array"),
    ],
)
def test_what_this_version_does_not_know_is_said(spoil, said):
    tree = through_json(encoded(case_of()))
    spoil(tree)
    with pytest.raises(UnknownInputsError, match=said):
        decoded(tree)


def test_the_names_of_the_classes_are_unique():
    assert len(set(classes().values())) == len(classes())
    assert all(name == found.__name__ for name, found in classes().items())
