"""A case at many values of its inputs: its line solved in one call, each point judged by the checks of ``solve``."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, fields, replace
from typing import Any

import numpy as np

from pipeflow import sizing
from pipeflow.arrays import Array, FloatOrArray
from pipeflow.case.model import Case, FlowRange, Followed, Liquid, Solids
from pipeflow.case.varying import Slurry, VariedCase, varied
from pipeflow.line.elements import Fluid
from pipeflow.line.route import LineFlow
from pipeflow.study.checks import checks
from pipeflow.study.flows import solved
from pipeflow.study.readings.answers import beyond_tested, rheology_checks
from pipeflow.verdict import Check


@dataclass(frozen=True, eq=False)
class Points:
    """Cases that differ in some of their inputs, and their lines.

    Attributes
    ----------
    cases : tuple of Case
        Without scenarios.
    line : LineFlow
        Of shape (points, 3): design, minimum and maximum flow.
    """

    cases: tuple[Case, ...]
    line: LineFlow

    def one(self, index: int) -> LineFlow:
        """The line of one point at its three flows, as :func:`pipeflow.study.checks.checks` takes it."""
        return sizing.at(self.line, (index,))

    def checks(self, index: int) -> tuple[Check, ...]:
        """What ``solve`` finds of one point."""
        case, line = self.cases[index], self.one(index)
        flows = (case.flow.design, case.flow.minimum, case.flow.maximum)
        with np.errstate(all="ignore"):
            return tuple(rheology_checks(beyond_tested(case, line, flows), checks(case, line)))


def points(case: Case, values: Mapping[str, Array], flow: Array | None = None) -> Points:
    """Solve a case at many values of its inputs.

    Parameters
    ----------
    case : Case
    values : mapping of str to Array
        By key path of :func:`pipeflow.case.variables.variables`, SI; all of one length.
    flow : Array, optional
        Volume flow of the slurry at each point, m³/s, for minimum, design and maximum alike.

    Raises
    ------
    VariableError
        A path that cannot be varied.
    """
    given = varied(case, values, flow=flow)
    count = max([one.size for one in values.values()] + ([] if flow is None else [flow.size]))
    flows = [np.broadcast_to(one, (count,)) for one in (given.design, given.minimum, given.maximum)]
    with np.errstate(all="ignore"):
        return Points(
            tuple(_case_at(case, given, values, index) for index in range(count)),
            _solved(case, given, np.stack(flows, axis=-1)),
        )


def case_at(case: Case, values: Mapping[str, float], flow: float | None = None) -> Case:
    """Give the case that has these values, SI, in the place of its own; without scenarios.

    A parameter that follows the solids or the temperature is its law's there, beyond the range tested as well.
    """
    return _case_at(case, varied(case, values, flow=flow), values, 0)


def _solved(case: Case, given: VariedCase, flow: Array) -> LineFlow:
    """Solve with the axis of the flows last."""
    return solved(sizing.mapped(given, _with_axis), case.methods, flow)


def _with_axis(values: Array) -> Array:
    return values[..., None] if values.ndim else values


def _case_at(case: Case, given: VariedCase, values: Mapping[str, FloatOrArray], index: int) -> Case:
    def here(value: FloatOrArray) -> float:
        return float(value) if np.ndim(value) == 0 else float(np.asarray(value)[index])

    def pick(item: Any) -> Any:
        return sizing.mapped(item, lambda array: here(array))  # type: ignore[arg-type, return-value]

    picked: Slurry = pick(given.slurry)
    own = {path: here(value) for path, value in values.items()}
    fluid: Fluid = pick(given.fluid)
    fluid = replace(fluid, density=float(fluid.density), rheology=_plain(fluid.rheology))
    static = given.static_yield_stress
    return replace(
        case,
        fluid=fluid,
        flow=FlowRange(*(here(one) for one in (given.minimum, given.design, given.maximum))),
        source=pick(given.source) if case.source or _any_of(own, "source.") else None,
        destination=pick(given.destination) if case.destination or _any_of(own, "destination.") else None,
        route=pick(given.route),
        restart=replace(case.restart, static_yield_stress=None if static is None else here(static)),
        sizes={name: size for name, size in case.sizes.items() if f"route[{name}].diameter" not in own},
        followed=tuple(_followed(one, fluid, picked, own) for one in case.followed),
        temperature=own.get("fluid.temperature", case.temperature),
        solids=_solids(case.solids, picked, own),
        liquid=_liquid(case.liquid, own),
        scenarios={},
    )


def _any_of(own: Mapping[str, float], *homes: str) -> bool:
    return any(path.startswith(homes) for path in own)


def _plain(law: Any) -> Any:
    return replace(law, **{field.name: float(getattr(law, field.name)) for field in fields(law)})


def _followed(one: Followed, fluid: Fluid, slurry: Slurry, own: Mapping[str, float]) -> Followed:
    condition = one.condition
    if one.law.variable == "solids" and _any_of(own, "fluid.solids.", "fluid.liquid."):
        condition = float(slurry.mass_fraction)
    elif one.law.variable == "temperature":
        condition = own.get("fluid.temperature", condition)
    return replace(one, condition=condition, value=float(getattr(fluid.rheology, one.parameter)))


def _solids(solids: Solids | None, slurry: Slurry, own: Mapping[str, float]) -> Solids | None:
    if solids is None:
        return None
    return replace(
        solids,
        density=float(slurry.solids_density),
        mass_fraction=float(slurry.mass_fraction),
        volume_fraction=float(slurry.volume_fraction),
        d50=own.get("fluid.solids.d50", solids.d50),
        d85=own.get("fluid.solids.d85", solids.d85),
    )


def _liquid(liquid: Liquid | None, own: Mapping[str, float]) -> Liquid | None:
    if liquid is None:
        return None
    return replace(
        liquid,
        density=own.get("fluid.liquid.density", liquid.density),
        viscosity=own.get("fluid.liquid.viscosity", liquid.viscosity),
    )


STATUSES = ("ok", "not checked", "caution", "fail")


def worst_of(found: Sequence[Check]) -> Check | None:
    """The check with the worst status, the first of several; None where all hold or could not be made."""
    worst = max(found, key=lambda check: STATUSES.index(check.status), default=None)
    return worst if worst is not None and worst.status in ("caution", "fail") else None
