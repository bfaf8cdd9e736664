"""The line solved: every element in flow order, at every flow and for every fluid, in one call."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, fields, replace
from typing import Any

import numpy as np

from pipeflow.arrays import Array, FloatOrArray
from pipeflow.constants import STANDARD_GRAVITY
from pipeflow.friction import PipeFlow, solve_pipes
from pipeflow.friction.spread import method_spread, not_worked_out
from pipeflow.line.elements import Element, Equipment, Fluid, Pipe, Vessel
from pipeflow.line.fittings import DEFAULT_METHOD
from pipeflow.line.losses import equipment_loss, minor_losses, side_by_side
from pipeflow.rheology import Rheology


@dataclass(frozen=True, eq=False)
class LineFlow:
    """Losses of a line; SI units.

    Arrays of pipes end in an axis of the pipes in route order, arrays of equipment in one of the equipment; the axes
    before it, and those of the sums, are the common shape of flow, fluid and elements.

    Attributes
    ----------
    velocity : Array
        Bulk velocity in each pipe, m/s.
    pipes : PipeFlow
        The flow in each pipe.
    friction_loss, friction_loss_upper : Array
        Pipe friction by the central method, and by the highest of its family, Pa.
    fitting_loss, equipment_loss : Array
        Pa. Fittings include the ends of the line, the changes of bore and the user's coefficients.
    pressure_loss, pressure_loss_upper : Array
        Friction, fittings and equipment together, Pa.
    head_loss, head_loss_upper, static_head, total_head, total_head_upper : Array
        Metres of the slurry.
    pressure_required, pressure_required_upper : Array
        ``rho g total_head``, Pa.
    head_loss_by_method : dict of str to Array
        Head loss with the turbulent friction of each method of the family, m; nan where one has no answer.
    left_out : dict of str to str
        Methods that are not in the upper figure of some pipe, and why.
    reducer_loss, entrance_loss, exit_loss : Array
        Parts of the fitting loss, Pa: the change of bore from the pipe before, and the ends of the line.
    """

    velocity: Array
    pipes: PipeFlow
    friction_loss: Array
    friction_loss_upper: Array
    fitting_loss: Array
    equipment_loss: Array
    pressure_loss: Array
    pressure_loss_upper: Array
    head_loss: Array
    head_loss_upper: Array
    static_head: Array
    total_head: Array
    total_head_upper: Array
    pressure_required: Array
    pressure_required_upper: Array
    head_loss_by_method: dict[str, Array]
    left_out: dict[str, str]
    reducer_loss: Array
    entrance_loss: Array
    exit_loss: Array


def solve(
    flow: FloatOrArray,
    fluid: Fluid,
    route: Sequence[Element],
    source: Vessel | None = None,
    destination: Vessel | None = None,
    *,
    turbulent: str | None = None,
    critical: str | None = None,
    fittings: str | None = None,
    particle_size: FloatOrArray = np.nan,
    with_edges: bool = True,
    with_upper: bool = True,
) -> LineFlow:
    """Solve a line for any number of flows, fluids and dimensions at once.

    Parameters
    ----------
    flow : float or array
        Volume flow, m³/s. It, the fluid and every quantity of the elements may be arrays of one leading shape.
    fluid : Fluid
    route : sequence of Pipe and Equipment, in flow order
    source, destination : Vessel, optional
        None is atmospheric pressure and no level.
    turbulent, critical, fittings : str, optional
        Keys of the methods wanted; by default those settled for the rheology.
    particle_size : float or array
        d85 of the solids, m, for the methods that need it.
    with_edges : bool
        Work the ends of laminar and the start of turbulent flow out for laminar pipes too; no loss depends on it.
    with_upper : bool
        Solve by the other methods of the family too; without, the upper figures are nan.

    Returns
    -------
    LineFlow
        At zero flow the limit as the flow starts: yield stress in pipes and fittings, no loss of equipment that
        follows the flow.
    """
    source, destination = source or Vessel(), destination or Vessel()
    pipes = [element for element in route if isinstance(element, Pipe)]
    equipment = [element for element in route if isinstance(element, Equipment)]
    flow = np.broadcast_to(flow, _leading_shape(flow, fluid, (*route, source, destination), particle_size))
    diameter = side_by_side([pipe.diameter for pipe in pipes])
    velocity = _last_axis(flow) / (np.pi / 4.0 * diameter**2)
    density, rheology = _last_axis(fluid.density), with_pipe_axis(fluid.rheology)
    roughness = side_by_side([pipe.roughness for pipe in pipes])
    given: dict[str, Any] = {"roughness": roughness, "particle_size": _last_axis(particle_size), "critical": critical}
    solved = solve_pipes(velocity, diameter, density, rheology, method=turbulent, with_edges=with_edges, **given)
    spread = not_worked_out(solved)
    if with_upper:
        spread = method_spread(solved, velocity, diameter, density, rheology, method=turbulent, **given)

    gradient_length = 4.0 * side_by_side([pipe.length for pipe in pipes]) / diameter
    friction, friction_upper = solved.wall_shear_stress * gradient_length, spread.upper * gradient_length
    losses = minor_losses(pipes, solved, velocity, diameter, density, rheology, fittings or DEFAULT_METHOD)
    of_equipment = side_by_side([equipment_loss(item, flow) for item in equipment])
    of_equipment = np.broadcast_to(of_equipment, (*solved.status.shape[:-1], len(equipment)))
    minor = losses.total.sum(axis=-1) + of_equipment.sum(axis=-1)
    pressure_loss, pressure_loss_upper = friction.sum(axis=-1) + minor, friction_upper.sum(axis=-1) + minor

    weight = np.asarray(fluid.density) * STANDARD_GRAVITY
    static_head = _static_head(weight, pipes, source, destination)
    return LineFlow(
        velocity=np.broadcast_to(velocity, solved.status.shape),
        pipes=solved,
        friction_loss=friction,
        friction_loss_upper=friction_upper,
        fitting_loss=losses.total,
        equipment_loss=of_equipment,
        pressure_loss=pressure_loss,
        pressure_loss_upper=pressure_loss_upper,
        head_loss=pressure_loss / weight,
        head_loss_upper=pressure_loss_upper / weight,
        static_head=np.broadcast_to(static_head, pressure_loss.shape),
        total_head=pressure_loss / weight + static_head,
        total_head_upper=pressure_loss_upper / weight + static_head,
        pressure_required=pressure_loss + weight * static_head,
        pressure_required_upper=pressure_loss_upper + weight * static_head,
        head_loss_by_method={
            key: ((stress * gradient_length).sum(axis=-1) + minor) / weight for key, stress in spread.by_method.items()
        },
        left_out=spread.left_out,
        reducer_loss=losses.reducer,
        entrance_loss=losses.entrance,
        exit_loss=losses.exit,
    )


def _leading_shape(
    flow: FloatOrArray, fluid: Fluid, parts: Sequence[Element | Vessel], particle_size: FloatOrArray
) -> tuple[int, ...]:
    """Give the shape that all quantities broadcast to, those that move no friction as well."""
    values = [value for part in (fluid, fluid.rheology, *parts) for value in vars(part).values()]
    return np.broadcast_shapes(*(np.shape(value) for value in (flow, particle_size, *values) if np.ndim(value)))


def _last_axis(values: FloatOrArray) -> Array:
    return np.asarray(values, dtype=np.float64)[..., None]


def with_pipe_axis(rheology: Rheology) -> Rheology:
    """Give the parameters of a rheology the last axis that pipes have."""
    parameters: dict[str, Any] = {f.name: _last_axis(getattr(rheology, f.name)) for f in fields(rheology)}  # type: ignore[arg-type]
    return replace(rheology, **parameters)  # type: ignore[type-var]


def _static_head(weight: Array, pipes: Sequence[Pipe], source: Vessel, destination: Vessel) -> Array:
    rise = sum((np.asarray(pipe.rise) for pipe in pipes), start=np.zeros(()))
    pressure = (np.asarray(destination.pressure) - source.pressure) / weight
    return np.asarray(destination.head_of_level + rise - source.level + pressure)
