"""One or two inputs of a case over a range: what the line does at every point, and which limit speaks against it."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace
from typing import Final

import numpy as np

from pipeflow.arrays import Array
from pipeflow.case.axes import Axis as Axis
from pipeflow.case.model import Case, shown_condition
from pipeflow.case.variables import Variable as Variable
from pipeflow.case.variables import variable, variables
from pipeflow.errors import InputError, Problem
from pipeflow.friction import Regime
from pipeflow.operability.energy import specific_energy
from pipeflow.study.flows import DESIGN, pipes_of
from pipeflow.study.ranges.boundaries import Boundary, crossings
from pipeflow.study.ranges.limits_over import LimitsOver
from pipeflow.study.ranges.points import Points, points, worst_of
from pipeflow.study.ranges.runs import Run, runs_over
from pipeflow.verdict import Check

SOLIDS: Final = "fluid.solids.mass_fraction"
SOLIDS_STEPS: Final = (-0.02, -0.01, 0.0, 0.01, 0.02)
"""Mass fractions about that of the case that a report looks at."""


@dataclass(frozen=True)
class SweptPoint:
    """The line at one point of a sweep, at design flow; limits are judged as ``solve`` does.

    Attributes
    ----------
    values : tuple of float
        Of the inputs swept, SI.
    regime : str
        Of the pipes, ``mixed`` where they differ.
    velocity : float
        Highest of the pipes, m/s.
    head_loss, head_loss_upper, total_head, total_head_upper : float
        m of the slurry.
    pressure_required, pressure_required_upper : float
        Pa.
    power, power_upper : float
        Hydraulic, the pressure required times the flow, W.
    specific_energy : float
        Of the losses by the upper figure, kWh for a tonne and a kilometre: of dry solids, or of the slurry where the
        case has none; nan without pipes.
    checks : tuple of Check
    is_carried_on : bool
        A law of the rheology is asked outside the range it was tested over.
    """

    values: tuple[float, ...]
    regime: str
    velocity: float
    head_loss: float
    head_loss_upper: float
    total_head: float
    total_head_upper: float
    pressure_required: float
    pressure_required_upper: float
    power: float
    power_upper: float
    specific_energy: float
    checks: tuple[Check, ...]
    is_carried_on: bool

    @property
    def worst(self) -> Check | None:
        """The check that speaks most against the point; None where none does."""
        return worst_of(self.checks)

    @property
    def status(self) -> str:
        """``ok``, ``caution`` or ``fail``."""
        return self.worst.status if self.worst else "ok"


@dataclass(frozen=True)
class Sweep:
    """A case over a range of one or two of its inputs.

    Attributes
    ----------
    axes : tuple of Axis
    points : tuple of SweptPoint
        The second input fastest.
    cautions : tuple of str
    boundaries : tuple of Boundary
        Where limits are met and the regime of the governing pipe changes, over two inputs: (first, second), SI.
    runs : tuple of Run
        Over one input, the values at which each check fails or calls for thought.
    """

    case: Case
    axes: tuple[Axis, ...]
    points: tuple[SweptPoint, ...]
    cautions: tuple[str, ...]
    boundaries: tuple[Boundary, ...] = ()
    runs: tuple[Run, ...] = ()

    @property
    def shape(self) -> tuple[int, ...]:
        """Number of values of each input."""
        return tuple(len(axis.values) for axis in self.axes)

    def grid(self, name: str) -> Array:
        """A figure of the points, of the shape of the sweep."""
        return np.array([getattr(point, name) for point in self.points], dtype=np.float64).reshape(self.shape)

    @property
    def has_other_flows(self) -> bool:
        """Limits are judged at other flows than the design flow."""
        flow = self.case.flow
        return not flow.minimum == flow.design == flow.maximum

    @property
    def fails(self) -> bool:
        """A limit fails somewhere."""
        return any(point.status == "fail" for point in self.points)


def sweep(case: Case, axes: Sequence[Axis]) -> Sweep:
    """Solve a case over every combination of values of its inputs, in one call.

    Parameters
    ----------
    case : Case
    axes : sequence of Axis
        One or two, of different inputs.

    Raises
    ------
    InputError
        A value of one input is not possible beside one of the other.
    """
    mesh = np.meshgrid(*(axis.array for axis in axes), indexing="ij")
    values = {axis.variable.path: each.ravel() for axis, each in zip(axes, mesh, strict=True)}
    solved = points(case, values)
    if len(axes) > 1:
        _refuse_at_odds(axes, solved.cases)
    every = tuple(_point(solved, index, tuple(float(each[index]) for each in values.values()))
                  for index in range(mesh[0].size))  # fmt: skip
    runs = runs_over(case, axes[0], [point.checks for point in every]) if len(axes) == 1 else ()
    return Sweep(case, tuple(axes), every, tuple(_cautions(solved, case, axes)), _boundaries(case, axes), runs)


def _refuse_at_odds(axes: Sequence[Axis], cases: Sequence[Case]) -> None:
    for case in cases:
        known = variables(case)
        for one in (known[axis.variable.path] for axis in axes if axis.variable.path in known):
            refusal = one.refusal(one.value)
            if refusal:
                message = f"found {one.shown(one.value)} in these ranges; {refusal}"
                raise InputError([Problem("sweep", None, None, one.path, message)])


def _boundaries(case: Case, axes: Sequence[Axis]) -> tuple[Boundary, ...]:
    if len(axes) < 2:
        return ()
    first, second = axes
    paths = first.variable.path, second.variable.path
    over = LimitsOver(case, lambda x, y: ({paths[0]: x, paths[1]: y}, None))
    return crossings(over, first.array, second.array).boundaries()


def solids_sweep(case: Case) -> Sweep | None:
    """Look two points of solids to either side, where the rheology follows them; None where it does not.

    Outside the range tested nothing is computed, and a caution says so.
    """
    laws = [one.law for one in case.followed if one.law.variable == "solids"]
    if case.solids is None or not laws:
        return None
    here = case.solids.mass_fraction
    wanted = [here + step for step in SOLIDS_STEPS]
    kept = [value for value in wanted if value == here or all(law.holds(value) for law in laws)]
    found = sweep(case, [Axis(variable(case, SOLIDS), tuple(kept))])
    if len(kept) == len(wanted):
        return found
    low, high = max(law.tested[0] for law in laws), min(law.tested[1] for law in laws)
    ends = " .. ".join(shown_condition("solids", end) for end in (low, high))
    said = (
        f"solids of {', '.join(f'{value:.4g}' for value in wanted if value not in kept)} are outside the range tested"
    )
    return replace(found, cautions=(*found.cautions, f"{said}, {ends}: nothing is known of the rheology there"))


def _point(solved: Points, index: int, values: tuple[float, ...]) -> SweptPoint:
    case, line = solved.cases[index], solved.line
    row = (index, DESIGN)
    flow, density = case.flow.design, float(case.fluid.density)
    length = sum(float(pipe.length) for pipe in pipes_of(case))
    share = case.solids.mass_fraction if case.solids else 1.0
    required, upper = float(line.pressure_required[row]), float(line.pressure_required_upper[row])
    energy = specific_energy(line.pressure_loss_upper[row], length, density, share) if length else np.nan
    return SweptPoint(
        values=values,
        regime=_regime(line.pipes.regime[row]),
        velocity=float(line.velocity[row].max(initial=0.0)),
        head_loss=float(line.head_loss[row]),
        head_loss_upper=float(line.head_loss_upper[row]),
        total_head=float(line.total_head[row]),
        total_head_upper=float(line.total_head_upper[row]),
        pressure_required=required,
        pressure_required_upper=upper,
        power=required * flow,
        power_upper=upper * flow,
        specific_energy=float(energy),
        checks=solved.checks(index),
        is_carried_on=any(one.is_carried_on for one in case.followed),
    )


def _regime(regimes: Array) -> str:
    names = {Regime(int(regime)).name.lower().replace("_", " ") for regime in regimes}
    return names.pop() if len(names) == 1 else "mixed" if names else "no flow"


def _cautions(solved: Points, case: Case, axes: Sequence[Axis]) -> Iterator[str]:
    carried = {one.law.variable: one.law.tested for each in solved.cases for one in each.followed if one.is_carried_on}
    for name, tested in carried.items():
        shown = " .. ".join(shown_condition(name, end) for end in tested)
        yield f"the rheology is carried on past the {name} tested, {shown}, at some points: a guess there"
    paths = {axis.variable.path for axis in axes}
    if "flow" in paths and not case.flow.minimum == case.flow.design == case.flow.maximum:
        yield "the minimum and maximum flow, at which limits are judged, vary in proportion to the design flow"
    follows = any(one.law.variable == "solids" for one in case.followed)
    if any(path.endswith(("mass_fraction", "volume_fraction")) for path in paths) and not follows:
        yield "the rheology of this case does not follow the solids: only density and settling change with them"
    if "fluid.rheology.yield_stress" in paths and case.restart.static_yield_stress is not None:
        yield "the static yield stress that the case gives for a restart stays as it is"
