"""The line solved: every element in flow order, at every flow and for every fluid, in one call."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, fields, replace
from typing import Any

import numpy as np

from pipeflow.arrays import Array, FloatOrArray
from pipeflow.constants import STANDARD_GRAVITY
from pipeflow.friction import PipeFlow, solve_pipes
from pipeflow.friction.spread import method_spread
from pipeflow.line.elements import Element, Equipment, Fluid, Pipe, Vessel
from pipeflow.line.fittings import DEFAULT_METHOD, resistance
from pipeflow.rheology import Rheology


@dataclass(frozen=True)
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
        Pa.
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

    Returns
    -------
    LineFlow
        At zero flow the limit as the flow starts: yield stress in pipes and fittings, no loss of equipment that
        follows the flow.
    """
    pipes = [element for element in route if isinstance(element, Pipe)]
    equipment = [element for element in route if isinstance(element, Equipment)]
    diameter = _side_by_side([pipe.diameter for pipe in pipes])
    velocity = _last_axis(flow) / (np.pi / 4.0 * diameter**2)
    density, rheology = _last_axis(fluid.density), _with_pipe_axis(fluid.rheology)
    roughness = _side_by_side([pipe.roughness for pipe in pipes])
    given: dict[str, Any] = {"roughness": roughness, "particle_size": _last_axis(particle_size), "critical": critical}
    solved = solve_pipes(velocity, diameter, density, rheology, method=turbulent, with_edges=True, **given)
    spread = method_spread(solved, velocity, diameter, density, rheology, **given)

    gradient_length = 4.0 * _side_by_side([pipe.length for pipe in pipes]) / diameter
    friction, friction_upper = solved.wall_shear_stress * gradient_length, spread.upper * gradient_length
    fitting_loss = _fitting_loss(pipes, solved, velocity, density, fittings or DEFAULT_METHOD)
    equipment_loss = _side_by_side([_equipment_loss(item, flow) for item in equipment])
    equipment_loss = np.broadcast_to(equipment_loss, (*solved.status.shape[:-1], len(equipment)))
    minor = fitting_loss.sum(axis=-1) + equipment_loss.sum(axis=-1)
    pressure_loss, pressure_loss_upper = friction.sum(axis=-1) + minor, friction_upper.sum(axis=-1) + minor

    weight = np.asarray(fluid.density) * STANDARD_GRAVITY
    static_head = _static_head(weight, pipes, source or Vessel(), destination or Vessel())
    return LineFlow(
        velocity=np.broadcast_to(velocity, solved.status.shape),
        pipes=solved,
        friction_loss=friction,
        friction_loss_upper=friction_upper,
        fitting_loss=fitting_loss,
        equipment_loss=equipment_loss,
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
            key: ((stress * gradient_length).sum(axis=-1) + minor) / weight
            for key, stress in spread.by_method.items()
        },
        left_out=spread.left_out,
    )


def _last_axis(values: FloatOrArray) -> Array:
    return np.asarray(values, dtype=np.float64)[..., None]


def _side_by_side(items: Sequence[FloatOrArray]) -> Array:
    """Lay one quantity of all elements along a last axis."""
    if not items:
        return np.zeros(0)
    return np.stack(np.broadcast_arrays(*(np.asarray(item, dtype=np.float64) for item in items)), axis=-1)


def _with_pipe_axis(rheology: Rheology) -> Rheology:
    parameters: dict[str, Any] = {f.name: _last_axis(getattr(rheology, f.name)) for f in fields(rheology)}  # type: ignore[arg-type]
    return replace(rheology, **parameters)  # type: ignore[type-var]


def _fitting_loss(pipes: Sequence[Pipe], solved: PipeFlow, velocity: Array, density: Array, method: str) -> Array:
    """``(K_laminar/Re_MR + K_turbulent) rho V²/2``, with ``rho V²/(2 Re_MR) = tau_w,laminar/16`` so that rest is a limit."""
    constants = [resistance(pipe.fittings, pipe.diameter, pipe.nominal_diameter, method) for pipe in pipes]
    laminar = _side_by_side([pair[0] for pair in constants])
    turbulent = _side_by_side([pair[1] for pair in constants])
    return laminar * solved.laminar_wall_shear_stress / 16.0 + turbulent * density * velocity**2 / 2.0


def _equipment_loss(item: Equipment, flow: FloatOrArray) -> FloatOrArray:
    if item.at_flow is None:
        return item.pressure_loss
    with np.errstate(invalid="ignore"):
        return item.pressure_loss * (np.asarray(flow) / item.at_flow) ** item.exponent


def _static_head(weight: Array, pipes: Sequence[Pipe], source: Vessel, destination: Vessel) -> Array:
    rise = sum((np.asarray(pipe.rise) for pipe in pipes), start=np.zeros(()))
    pressure = (np.asarray(destination.pressure) - source.pressure) / weight
    return np.asarray(destination.level + rise - source.level + pressure)
