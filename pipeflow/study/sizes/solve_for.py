"""The most a line takes: the flow, length, yield stress or solids at which its first limit is met."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, fields, replace
from typing import Any, Final

import numpy as np

from pipeflow import sizing
from pipeflow.arrays import Array
from pipeflow.case.model import Case
from pipeflow.errors import InputError, Problem
from pipeflow.line.elements import Pipe
from pipeflow.sizing import Root, Variant
from pipeflow.study.checks import dynamic_yield_stress
from pipeflow.study.flows import pipes_of
from pipeflow.study.sizes.sizing import OWN, alike, methods_of, refused, variant, varying
from pipeflow.units import echo

SPAN: Final = 1e4
"""How far from the value of the case an answer is looked for, as a factor."""


@dataclass(frozen=True)
class Answer:
    """The most a line takes of one quantity.

    Attributes
    ----------
    quantity : str
        One of ``flow``, ``length``, ``yield-stress``, ``solids``.
    value : float or None
        In ``unit``; None where the line as it stands takes none of it.
    present : float
        What the case has.
    limit, scenario : str
        What settles it.
    note : str
        What was varied, and how.
    each : dict of str to float
        Value at which each limit is met, by its name and scenario.
    highest : float
        The highest value looked for; an answer of that much is met by no limit.
    """

    case: Case
    quantity: str
    value: float | None
    present: float
    unit: str
    limit: str
    scenario: str
    note: str
    each: dict[str, float]
    highest: float


def solve_for(case: Case, quantity: str) -> Answer:
    """Find the most the line takes of a quantity, judged on the upper figure at maximum flow.

    Raises
    ------
    InputError
        The case states no limit that the quantity bears on, or has no such quantity.
    """
    by_name = {"flow": _flow, "length": _length, "yield-stress": _yield_stress, "solids": _solids}
    if quantity not in by_name:
        message = f"found {echo(quantity)}; accepted: {', '.join(by_name)}"
        raise InputError([Problem("--solve-for", None, None, "", message)])
    varying(case)
    return by_name[quantity](case)


def _flow(case: Case) -> Answer:
    def change(one: Variant, flow: Array) -> Variant:
        return replace(one, flows=flow)

    present = case.flow.maximum
    if present <= 0:
        raise refused(case, "flow", "a line at rest has no flow to begin from")
    note = "the maximum flow of the case and of every scenario; least velocities and deposition are not asked"
    return _answer(case, "flow", "m3/s", present, change, (present / SPAN, present * SPAN), note, scenarios=True)


def _length(case: Case) -> Answer:
    pipes = varying(case)
    present = sum(float(pipe.length) for pipe in pipes_of(case) if pipe.name in pipes)

    def change(one: Variant, length: Array) -> Variant:
        def longer(element: Any) -> Any:
            is_one = isinstance(element, Pipe) and element.name in pipes
            return replace(element, length=element.length * length / present) if is_one else element

        return replace(one, route=tuple(longer(element) for element in one.route))

    note = f"length of {', '.join(pipes)} together, each in its share; rise and fittings as they are"
    return _answer(case, "length", "m", present, change, (present / SPAN, present * SPAN), note, scenarios=True)


def _yield_stress(case: Case) -> Answer:
    present = dynamic_yield_stress(case)
    law: Any = case.fluid.rheology
    if present <= 0 or "yield_stress" not in {field.name for field in fields(law)}:
        raise refused(case, "fluid.rheology", f"a {law.key} fluid has no yield stress to vary by itself")
    ratio = variant(case).static_yield_stress / present
    measured = case.restart.static_yield_stress is not None

    def change(one: Variant, stress: Array) -> Variant:
        varied: Any = one.fluid.rheology
        rheology = replace(varied, yield_stress=stress)
        static = one.static_yield_stress if measured else ratio * stress
        return replace(one, fluid=replace(one.fluid, rheology=rheology), static_yield_stress=static)  # type: ignore[arg-type]

    note = "yield stress of the case itself, all else of the rheology as it is; scenarios are not asked"
    return _answer(case, "yield-stress", "Pa", present, change, (present / SPAN, present * SPAN), note)


def _solids(case: Case) -> Answer:
    """Between the solids of the case and its scenarios, whose density and rheology are known."""
    points = sorted(_points(case), key=lambda point: point[0])
    if case.solids is None or len(points) < 2:
        message = "the most solids are found between those of the case and of its scenarios: at least two are needed"
        raise refused(case, "fluid.solids", message)
    fractions = np.array([fraction for fraction, _ in points])
    each = sizing.stacked([one.fluid for _, one in points])
    static = np.array([variant(one).static_yield_stress for _, one in points])

    def change(one: Variant, fraction: Array) -> Variant:
        law: Any = each.rheology
        parameters = {f.name: _between(fraction, fractions, getattr(law, f.name)) for f in fields(law)}
        density = np.interp(fraction, fractions, np.asarray(each.density))
        fluid = replace(one.fluid, density=density, rheology=replace(law, **parameters))
        return replace(one, fluid=fluid, static_yield_stress=_between(fraction, fractions, static))  # type: ignore[arg-type]

    note = (
        "volume fraction of the solids; density linear and parameters of the rheology log-linear in it between the "
        "case and its scenarios, never beyond them"
    )
    ends = float(fractions[0]), float(fractions[-1])
    return _answer(case, "solids", "", case.solids.volume_fraction, change, ends, note)


def _points(case: Case) -> list[tuple[float, Case]]:
    cases = [case, *case.scenarios.values()]
    known = [one for one in cases if one.solids and type(one.fluid.rheology) is type(case.fluid.rheology)]
    return list({one.solids.volume_fraction: (one.solids.volume_fraction, one) for one in known if one.solids}.values())


def _between(fraction: Array, fractions: Array, values: Any) -> Array:
    known = np.asarray(values)
    if np.all(known > 0):
        return np.asarray(np.exp(np.interp(fraction, fractions, np.log(known))))
    return np.asarray(np.interp(fraction, fractions, known))


def _answer(
    case: Case,
    quantity: str,
    unit: str,
    present: float,
    change: Callable[[Variant, Array], Variant],
    ends: tuple[float, float],
    note: str,
    scenarios: bool = False,
) -> Answer:
    cases = {OWN: case, **(case.scenarios if scenarios else {})}
    found: list[tuple[str, Root]] = []
    for group in alike(cases):
        names, variants = list(group), [variant(one) for one in group.values()]
        found += [
            (names[root.variant], root) for root in sizing.roots(variants, change, ends, methods_of(group[names[0]]))
        ]
    if not found:
        raise refused(case, "limits", f"none that more {quantity} would meet; give one, as {{head_loss: 60 m}}")
    name, first = min(found, key=lambda pair: pair[1].value if np.isfinite(pair[1].value) else -np.inf)
    each = {f"{root.limit} ({name})": root.value for name, root in found}
    value = first.value if first.value > 0 and np.isfinite(first.value) else None
    most = ends[1] * (1.0 - 1e-9)
    return Answer(case, quantity, value, present, unit, first.limit, name, note, each, most)
