"""A line made partly of the inputs before a change and partly of those after it, and the totals of many such lines.

The inputs that a total depends on are parted into groups, each of which changes as a whole.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, fields, replace
from itertools import groupby
from typing import Any

import numpy as np

from pipeflow.arrays import Array
from pipeflow.case.model import Case, Methods
from pipeflow.line.elements import Element, Fluid, Pipe, Vessel
from pipeflow.record.comparison import TOTALS
from pipeflow.record.inputs import canonical, encoded
from pipeflow.rheology import Rheology
from pipeflow.sizing import skeleton, stacked
from pipeflow.study.flows import solved

Group = frozenset[str]
"""Inputs that change together, by the names of their kinds."""

NAMES = tuple(key.rpartition("_")[0] for key in TOTALS)
"""The totals by their names in a solved line."""
ROUTE, EQUIPMENT, RHEOLOGY = "route", "equipment", "rheology"
KINDS_OF_PIPE = {
    "length": "lengths and rises",
    "rise": "lengths and rises",
    "diameter": "bores",
    "nominal_diameter": "bores",
    "roughness": "roughness",
    "fittings": "fittings",
    "loss_coefficient": "fittings",
}
"""The kind that each field of a pipe belongs to; any other goes with the route."""
TOGETHER = ({"methods", "particle size"}, {"methods", RHEOLOGY})
"""Kinds that cannot change apart: a method is made for a rheology, and may need the size of the solids."""


@dataclass(frozen=True)
class Line:
    """All that the totals of a line depend on, at design flow, SI."""

    flow: float
    fluid: Fluid
    route: tuple[Element, ...]
    source: Vessel | None
    destination: Vessel | None
    methods: Methods
    particle_size: float


def line_of(case: Case) -> Line:
    """Take from a case what its totals depend on."""
    methods = Methods(case.methods.turbulent, case.methods.critical, case.methods.fittings)
    return Line(case.flow.design, case.fluid, case.route, case.source, case.destination, methods, case.particle_size)


@dataclass(frozen=True)
class Transition:
    """A line before and after a change."""

    before: Line
    after: Line

    def mixed(self, new: Group) -> Line:
        """Give the line with the kinds of input named as they are after the change, the others as before."""
        one = self._choice(new)
        return Line(
            flow=one("flow").flow,
            fluid=Fluid(one("density").fluid.density, self._rheology(new)),
            route=tuple(self._element(element, new) for element in one(ROUTE).route),
            source=one("source and destination").source,
            destination=one("source and destination").destination,
            methods=one("methods").methods,
            particle_size=one("particle size").particle_size,
        )

    def groups(self) -> tuple[Group, ...]:
        """Part the inputs that changed into groups that can change apart."""
        start = canonical(encoded(self.before))
        changed = [kind for kind in self._kinds() if canonical(encoded(self.mixed(frozenset({kind})))) != start]
        found: list[Group] = [frozenset({kind}) for kind in changed]
        for together in TOGETHER:
            if together <= set(changed):
                joined = frozenset().union(*(group for group in found if group & together))
                found = [joined, *(group for group in found if not group & together)]
        return tuple(found)

    def _kinds(self) -> Iterator[str]:
        yield "density"
        yield from self._parameters().values()
        yield "flow"
        yield ROUTE
        yield from dict.fromkeys(KINDS_OF_PIPE.values())
        yield from (EQUIPMENT, "source and destination", "methods", "particle size")

    def _choice(self, new: Group) -> Any:
        return lambda kind: self.after if kind in new else self.before

    def _parameters(self) -> dict[str, str]:
        """The kind of each parameter of the rheology; another model changes as a whole."""
        old, fresh = self.before.fluid.rheology, self.after.fluid.rheology
        if type(old) is not type(fresh):
            return {"": RHEOLOGY}
        return {field.name: field.name.replace("_", " ") for field in fields(old)}  # type: ignore[arg-type]

    def _rheology(self, new: Group) -> Rheology:
        kinds, one = self._parameters(), self._choice(new)
        if "" in kinds:
            rheology: Rheology = one(RHEOLOGY).fluid.rheology
            return rheology
        law: Any = self.before.fluid.rheology
        mixed: Rheology = replace(
            law, **{name: getattr(one(kind).fluid.rheology, name) for name, kind in kinds.items()}
        )
        return mixed

    def _element(self, element: Element, new: Group) -> Element:
        """Give an element of either route; one that both have takes each of its fields from its own side."""
        old, fresh = (_named(line, element.name) for line in (self.before, self.after))
        if old is None or fresh is None or type(old) is not type(fresh):
            return element
        if not isinstance(old, Pipe):
            return fresh if EQUIPMENT in new else old
        sides = {name: fresh if KINDS_OF_PIPE.get(name, ROUTE) in new else old for name in vars(old)}
        return replace(old, **{name: getattr(side, name) for name, side in sides.items()})


def _named(line: Line, name: str) -> Element | None:
    return next((element for element in line.route if element.name == name), None)


def totals(lines: Sequence[Line]) -> Array:
    """Solve many lines, those that differ in numbers alone in one call.

    Returns
    -------
    Array
        Shape (lines, totals), m and Pa, totals as in :data:`TOTALS`; nan where a line has no answer.
    """
    found = np.empty((len(lines), len(TOTALS)))
    forms = [repr(skeleton(line)) for line in lines]
    for _, alike in groupby(sorted(range(len(lines)), key=forms.__getitem__), key=forms.__getitem__):
        places = list(alike)
        found[places] = _solved(stacked([lines[place] for place in places]))
    return found


def _solved(line: Line) -> Array:
    """Totals of a line whose numbers are arrays of one length."""
    flow = solved(line, line.methods, line.flow, with_edges=False)
    return np.stack([getattr(flow, name) for name in NAMES], axis=-1)
