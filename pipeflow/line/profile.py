"""Pressure and head along a line, its high and low points, and slack flow behind a high point.

The line is read at nodes: the surface of the source, the start of the route, both ends of every element, the surface
of the destination. Heads are metres of the slurry above the start of the route, pressures are gauge.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Literal

import numpy as np
from numpy.typing import NDArray

from pipeflow.arrays import Array, FloatOrArray
from pipeflow.constants import STANDARD_GRAVITY
from pipeflow.line.elements import Element, Fluid, Pipe, Vessel
from pipeflow.line.kinetics import loss_factors
from pipeflow.line.losses import side_by_side
from pipeflow.line.route import LineFlow, with_pipe_axis

Indices = NDArray[np.intp]
Place = Literal["surface", "start", "end"]
_BOTH_ENDS: tuple[Place, Place] = ("start", "end")


@dataclass(frozen=True, eq=False)
class Node:
    """A place where the line is read: an element's name (or ``source``, ``route``, ``destination``) and which end."""

    element: str
    place: Place

    def __str__(self) -> str:
        """``discharge line, start``."""
        return f"{self.element}, {self.place}"


@dataclass(frozen=True, eq=False)
class SlackFlow:
    """What the high points of a line ask for; the last axis, where there is one, is that of the elements.

    Attributes
    ----------
    head_required : Array
        Pump head with which every place downstream of the pump keeps the least pressure, m.
    head_without : Array
        Pump head that the destination alone asks for, m: ``total_head`` of the line.
    governing : array of int
        Index of the node that settles the head required: a high point, or the last node, the destination.
    share : Array
        Share of each element's length, from its start, that runs slack: partly filled, with nothing recovered.
    """

    head_required: Array
    head_without: Array
    governing: Indices
    share: Array


@dataclass(frozen=True, eq=False)
class GradeLine:
    """One hydraulic grade line; the last axis is that of the nodes.

    Attributes
    ----------
    total_head : Array
        Elevation, pressure head and kinetic head, m.
    pressure : Array
        Static pressure, gauge, Pa.
    pump_head : Array
        Head the pump gives, m.
    slack : SlackFlow or None
        None: not checked, for want of the atmospheric or the vapour pressure.
    """

    total_head: Array
    pressure: Array
    pump_head: Array
    slack: SlackFlow | None

    @property
    def lowest_pressure(self) -> Indices:
        """Index of the node of lowest pressure, the surfaces of the vessels left out."""
        return self.pressure[..., 1:-1].argmin(axis=-1) + 1

    @property
    def highest_pressure(self) -> Indices:
        """Index of the node of highest pressure, the surfaces of the vessels left out."""
        return self.pressure[..., 1:-1].argmax(axis=-1) + 1


@dataclass(frozen=True, eq=False)
class Profile:
    """The line at its nodes.

    Attributes
    ----------
    nodes : tuple of Node
    elements : tuple of str
        Names of the elements, in the order of ``SlackFlow.share``.
    distance, elevation, kinetic_head : Array
        Developed length from the start, height above it, ``alpha V²/(2 g)``, m.
    central, upper : GradeLine
        With the friction of the central method, and of the highest of its family.
    """

    nodes: tuple[Node, ...]
    elements: tuple[str, ...]
    distance: Array
    elevation: Array
    kinetic_head: Array
    central: GradeLine
    upper: GradeLine

    def along_route(self, grade: GradeLine, density: FloatOrArray) -> Array:
        """Gauge pressure at the nodes of the route, Pa; at its end not below what the vessel gives there.

        Without an exit among the fittings the static pressure of the end lies the velocity head below that, which is no
        suction.
        """
        column = np.asarray(density) * STANDARD_GRAVITY * (self.elevation[..., -1] - self.elevation[..., -2])
        pressure = grade.pressure[..., 1:-1].copy()
        pressure[..., -1] = np.maximum(pressure[..., -1], grade.pressure[..., -1] + column)
        return pressure

    @property
    def highest_point(self) -> Indices:
        """Index of the highest node of the route."""
        return self.elevation[..., 1:-1].argmax(axis=-1) + 1

    @property
    def lowest_point(self) -> Indices:
        """Index of the lowest node of the route."""
        return self.elevation[..., 1:-1].argmin(axis=-1) + 1

    def name_at(self, index: Indices | int) -> NDArray[np.str_]:
        """Name the nodes at these indices."""
        return np.array([str(node) for node in self.nodes])[np.asarray(index)]


def profile(
    line: LineFlow,
    fluid: Fluid,
    route: Sequence[Element],
    source: Vessel | None = None,
    destination: Vessel | None = None,
    *,
    pump_position: int = 0,
    pump_head: FloatOrArray | None = None,
    atmospheric_pressure: FloatOrArray | None = None,
    vapour_pressure: FloatOrArray | None = None,
    least_pressure: FloatOrArray | None = None,
) -> Profile:
    """Pressure and head along a line that has been solved.

    Parameters
    ----------
    line : LineFlow
        What :func:`pipeflow.line.route.solve` gave for the arguments that follow.
    fluid, route, source, destination
        As given there.
    pump_position : int
        Number of elements before the pump; 0 is at the start of the route. The pump stands before the entrance and
        the change of bore of the element after it.
    pump_head : float or array, optional
        Head of the pump, m. By default what the line asks for, so that the pressure at the destination is its own; a
        given head shows its surplus or want there.
    atmospheric_pressure, vapour_pressure : float or array, optional
        Absolute, Pa. With both, slack flow is checked.
    least_pressure : float or array, optional
        Absolute pressure to be kept at every node after the pump, Pa; by default the vapour pressure, the least at
        which the line passes the flow. To keep a high point full without drawing air, give the atmospheric pressure.

    Returns
    -------
    Profile
        Where a high point governs, pump head and pressures are those it asks for. Without an exit among the fittings
        the kinetic head of the last pipe is not in the sum, and its end lies that much below the vessel.
    """
    if not 0 <= pump_position <= len(route):
        raise ValueError(f"pump_position {pump_position} is outside 0 to {len(route)}")
    ends = (source or Vessel(), destination or Vessel())
    weight = np.asarray(fluid.density)[..., None] * STANDARD_GRAVITY
    kinetic = _at_nodes(_kinetic_head(line, fluid, route))
    elevation = _elevation(line, route, *ends)
    heads = (ends[0].level + ends[0].pressure / weight[..., 0], elevation[..., -1] + ends[1].pressure / weight[..., 0])
    least = None
    if atmospheric_pressure is not None and vapour_pressure is not None:
        absolute = np.asarray(vapour_pressure if least_pressure is None else least_pressure)
        least = elevation + kinetic + (absolute - atmospheric_pressure)[..., None] / weight
    static = elevation + kinetic

    def grade(friction: Array) -> GradeLine:
        steps = _steps(line, route, friction) / weight
        total, pump, slack = _total_head(steps, heads, 2 * pump_position + 2, pump_head, least)
        return GradeLine(total, weight * (total - static), pump, slack)

    central, upper = grade(line.friction_loss), grade(line.friction_loss_upper)
    names = tuple(element.name for element in route)
    return Profile(_nodes(names), names, _distance(line, route), elevation, kinetic, central, upper)


def _nodes(names: Sequence[str]) -> tuple[Node, ...]:
    between = [Node(name, place) for name in names for place in _BOTH_ENDS]
    return (Node("source", "surface"), Node("route", "start"), *between, Node("destination", "surface"))


def _along(line: LineFlow, items: Sequence[FloatOrArray]) -> Array:
    """Running sum at the start of the route and after every element."""
    shape = line.pressure_loss.shape
    each = np.broadcast_to(side_by_side(items), (*shape, len(items)))
    return np.concatenate([np.zeros((*shape, 1)), np.cumsum(each, axis=-1)], axis=-1)


def _elevation(line: LineFlow, route: Sequence[Element], source: Vessel, destination: Vessel) -> Array:
    height = _along(line, [element.rise if isinstance(element, Pipe) else 0.0 for element in route])
    first = np.broadcast_to(source.level, height.shape[:-1])[..., None]
    last = height[..., -1:] + np.asarray(destination.head_of_level)[..., None]
    return np.concatenate([first, np.repeat(height, 2, axis=-1)[..., :-1], last], axis=-1)


def _distance(line: LineFlow, route: Sequence[Element]) -> Array:
    length = _along(line, [element.length if isinstance(element, Pipe) else 0.0 for element in route])
    return np.concatenate([length[..., :1], np.repeat(length, 2, axis=-1)[..., :-1], length[..., -1:]], axis=-1)


def _kinetic_head(line: LineFlow, fluid: Fluid, route: Sequence[Element]) -> Array:
    """``alpha V²/(2 g)`` at each element; equipment has that of the pipe before it, or after it if it comes first."""
    if not line.velocity.shape[-1]:
        return np.zeros((*line.pressure_loss.shape, len(route)))
    energy = loss_factors(line.pipes, line.velocity, with_pipe_axis(fluid.rheology)).energy
    passed = np.cumsum([isinstance(element, Pipe) for element in route])
    head = energy * line.velocity**2 / (2.0 * STANDARD_GRAVITY)
    return np.asarray(head[..., np.maximum(passed - 1, 0)])


def _at_nodes(of_elements: Array) -> Array:
    nothing = np.zeros((*of_elements.shape[:-1], 2))
    return np.concatenate([nothing, np.repeat(of_elements, 2, axis=-1), nothing[..., :1]], axis=-1)


def _steps(line: LineFlow, route: Sequence[Element], friction: Array) -> Array:
    """Loss from each node to the next, Pa: within the elements, and at the joints before, between and after them."""
    inside = np.zeros((*line.pressure_loss.shape, len(route)))
    joints = np.zeros((*line.pressure_loss.shape, len(route) + 1))
    pipes = np.flatnonzero([isinstance(element, Pipe) for element in route])
    others = np.flatnonzero([not isinstance(element, Pipe) for element in route])
    arriving = line.entrance_loss + line.reducer_loss
    inside[..., pipes] = friction + line.fitting_loss - arriving - line.exit_loss
    inside[..., others] = line.equipment_loss
    joints[..., pipes] += arriving
    joints[..., pipes + 1] += line.exit_loss
    steps = np.zeros((*joints.shape[:-1], 2 * len(route) + 2))
    steps[..., 1::2], steps[..., 2::2] = joints, inside
    return steps


def _total_head(
    steps: Array, heads: tuple[Array, Array], after_pump: int, pump_head: FloatOrArray | None, least: Array | None
) -> tuple[Array, Array, SlackFlow | None]:
    """Total head at the nodes, and at the pump; ``after_pump`` is the first node after it."""
    suction = heads[0][..., None] - _sums(steps[..., : after_pump - 1])
    demand, asked = _demand(steps[..., after_pump:], heads[1], None if least is None else least[..., after_pump:])
    required = demand[..., 0] + steps[..., after_pump - 1] - suction[..., -1]
    slack = None
    if asked is not None and least is not None:
        without = heads[1] + steps[..., after_pump - 1 :].sum(axis=-1) - suction[..., -1]
        slack = _slack(steps, demand, asked, least, after_pump, (required, without))
    if pump_head is None:
        return _end_to_end(suction, demand), required, slack
    delivered = (suction[..., -1] - steps[..., after_pump - 1] + pump_head)[..., None]
    onward = delivered - _sums(steps[..., after_pump:])
    return _end_to_end(suction, onward), np.broadcast_to(pump_head, onward.shape[:-1]), slack


def _end_to_end(first: Array, second: Array) -> Array:
    """Join along the last axis, the axes before it broadcast."""
    shape = np.broadcast_shapes(first.shape[:-1], second.shape[:-1])
    return np.concatenate([np.broadcast_to(part, (*shape, part.shape[-1])) for part in (first, second)], axis=-1)


def _sums(steps: Array) -> Array:
    return np.concatenate([np.zeros((*steps.shape[:-1], 1)), np.cumsum(steps, axis=-1)], axis=-1)


def _demand(steps: Array, destination: Array, least: Array | None) -> tuple[Array, NDArray[np.bool_] | None]:
    """Head asked for at each node, from the destination backwards; and where the node itself asks, not what follows.

    Downstream of a node that asks for itself the head falls to what follows asks for: nothing is recovered.
    """
    demand, asked = [np.broadcast_to(destination, steps.shape[:-1])], [np.zeros(steps.shape[:-1], dtype=np.bool_)]
    for node in range(steps.shape[-1] - 1, -1, -1):
        following = demand[-1] + steps[..., node]
        own = following if least is None else least[..., node]
        demand.append(np.maximum(following, own))
        asked.append(own > following)
    heads = np.stack(np.broadcast_arrays(*reversed(demand)), axis=-1)
    flags = np.stack(np.broadcast_arrays(*reversed(asked)), axis=-1)
    return heads, None if least is None else flags


def _slack(
    steps: Array,
    demand: Array,
    asked: NDArray[np.bool_],
    least: Array,
    after_pump: int,
    pump: tuple[Array, Array],
) -> SlackFlow:
    governing = np.where(asked.any(axis=-1), asked.argmax(axis=-1), asked.shape[-1] - 1) + after_pump
    starts = np.arange(0, demand.shape[-1] - 1, 2)
    surplus = demand[..., starts] - demand[..., starts + 1] - steps[..., after_pump + starts]
    spare = demand[..., starts + 1] - least[..., after_pump + starts + 1]
    with np.errstate(invalid="ignore", divide="ignore"):
        share = np.where(asked[..., starts], surplus / (surplus + spare), 0.0)
    before = np.zeros((*share.shape[:-1], (after_pump - 2) // 2))
    return SlackFlow(pump[0], pump[1], governing, np.concatenate([before, share], axis=-1))
