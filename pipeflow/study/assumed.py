"""What rests on inputs that nobody measured: the line solved again with each of them changed by a stated step."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, fields, replace
from typing import Any

import numpy as np

from pipeflow.case.model import Case, Followed
from pipeflow.line.elements import Element, Equipment, Pipe, Vessel
from pipeflow.rheology import Rheology, mixture
from pipeflow.study.flows import line_at

STEP = 0.1
"""Share by which an input is raised and lowered."""
LEVEL_STEP, PRESSURE_STEP, SOLIDS_STEP = 1.0, 1e4, 0.01
"""Steps of what may be zero, m and Pa, and of a fraction of solids."""


@dataclass(frozen=True)
class AssumedInput:
    """One assumed input and what the total head does when it is changed.

    Attributes
    ----------
    path : str
        Its key path.
    why : str
        ``the case says so``, or the default that stands for it.
    step : str
        By how much it was raised and lowered, in words.
    raised, lowered : float or None
        Change of the upper total head at design flow, m; None where the changed line has no solution.
    """

    path: str
    why: str
    step: str
    raised: float | None
    lowered: float | None

    @property
    def effect(self) -> float:
        """The larger of both changes, m, without its sign."""
        return max((abs(change) for change in (self.raised, self.lowered) if change is not None), default=np.inf)


@dataclass(frozen=True)
class _Change:
    """An input, by how much it moves, and the case with it moved either way."""

    path: str
    step: str
    raised: Case
    lowered: Case


def assumed_inputs(case: Case) -> tuple[AssumedInput, ...]:
    """Change each assumed or defaulted input, one at a time, and rank them by their effect on the total head.

    Sizes and routes are taken as they are; of an assumed pipe, its length, roughness and rise are changed.
    """
    head = _head(case)
    said = [("the case says so", change) for path in case.assumed for change in _changes(case, path)]
    default = [
        (f"default of {material}", change)
        for name, material in case.default_roughness.items()
        for change in _of_element(case, name, ("roughness",))
    ]
    found = []
    for why, change in (*said, *default):
        raised, lowered = (_difference(_head(one), head) for one in (change.raised, change.lowered))
        found.append(AssumedInput(change.path, why, change.step, raised, lowered))
    return tuple(sorted(found, key=lambda one: -one.effect))


def _head(case: Case) -> float:
    return float(line_at(case, case.flow.design).total_head_upper)


def _difference(head: float, base: float) -> float | None:
    return float(head - base) if np.isfinite(head) and np.isfinite(base) else None


def _changes(case: Case, path: str) -> Iterator[_Change]:
    """Every figure of one map of the case that the head depends on."""
    if path.startswith("route["):
        yield from _of_element(case, path[len("route[") : -1], ("length", "roughness", "rise", "pressure_loss"))
    elif path == "fluid":
        yield _changed(path + ".density", case, lambda by: _fluid(case, density=case.fluid.density * by))
    elif path == "fluid.rheology":
        yield from _of_rheology(case, path)
    elif path == "fluid.solids" and case.solids:
        yield _of_solids(case, path)
    elif path == "flow":
        yield _changed(path, case, lambda by: replace(case, flow=replace(case.flow, design=case.flow.design * by)))
    elif path in ("source", "destination"):
        yield from _of_vessel(case, path)


def _changed(path: str, case: Case, by_factor: Any) -> _Change:
    return _Change(path, f"{STEP:.0%}", by_factor(1.0 + STEP), by_factor(1.0 - STEP))


def _fluid(case: Case, **changed: Any) -> Case:
    return replace(case, fluid=replace(case.fluid, **changed))


def _of_rheology(case: Case, path: str) -> Iterator[_Change]:
    law: Any = case.fluid.rheology
    for field in fields(law):

        def by_factor(by: float, name: str = field.name) -> Case:
            return _fluid(case, rheology=replace(law, **{name: getattr(law, name) * by}))

        yield _changed(f"{path}.{field.name}", case, by_factor)


def _of_solids(case: Case, path: str) -> _Change:
    raised, lowered = (_at_solids(case, step) for step in (SOLIDS_STEP, -SOLIDS_STEP))
    return _Change(f"{path}.mass_fraction", f"{SOLIDS_STEP:g}", raised, lowered)


def _at_solids(case: Case, step: float) -> Case:
    """The case at another fraction of solids: its density where that is mixed, its parameters where they follow."""
    solids = case.solids
    assert solids is not None
    fraction, density = solids.mass_fraction + step, case.fluid.density
    if case.density_is_mixed and case.liquid and case.liquid.density:
        density = mixture.density_by_mass(fraction, solids.density, case.liquid.density)
    law = _followed(case.fluid.rheology, case.followed, fraction)
    return _fluid(case, density=density, rheology=law)


def _followed(law: Rheology, followed: tuple[Followed, ...], fraction: float) -> Rheology:
    changed: dict[str, Any] = {
        one.parameter: float(one.law.value(fraction)) for one in followed if one.law.variable == "solids"
    }
    return replace(law, **changed)  # type: ignore[type-var]


def _of_vessel(case: Case, name: str) -> Iterator[_Change]:
    vessel: Vessel | None = getattr(case, name)
    if vessel is None:
        return
    for field, step, words in (("level", LEVEL_STEP, "1 m"), ("pressure", PRESSURE_STEP, "10 kPa")):
        ends = (_with(case, name, replace(vessel, **{field: getattr(vessel, field) + by})) for by in (step, -step))
        yield _Change(f"{name}.{field}", words, *ends)


def _with(case: Case, name: str, value: Any) -> Case:
    changed: dict[str, Any] = {name: value}
    return replace(case, **changed)


def _of_element(case: Case, name: str, wanted: tuple[str, ...]) -> Iterator[_Change]:
    element: Element = next(one for one in case.route if one.name == name)
    if not isinstance(element, Pipe | Equipment):
        return
    for field in fields(element):
        value = getattr(element, field.name)
        if field.name in wanted and np.any(np.asarray(value) != 0):

            def by_factor(by: float, name: str = field.name, value: Any = value) -> Case:
                changed: dict[str, Any] = {name: value * by}
                other = replace(element, **changed)
                return replace(case, route=tuple(other if one is element else one for one in case.route))

            yield _changed(f"route[{element.name}].{field.name}", case, by_factor)
