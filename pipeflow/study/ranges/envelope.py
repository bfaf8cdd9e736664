"""The duty envelope: where, over flow and solids or yield stress, a line keeps every limit, and what ends it."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import Final, Literal

import numpy as np

from pipeflow.arrays import Array
from pipeflow.case.axes import Axis
from pipeflow.case.model import Case
from pipeflow.case.variables import Variable, variable, variables
from pipeflow.errors import InputError, Problem
from pipeflow.operability.energy import specific_energy
from pipeflow.study.checks import carried_solids
from pipeflow.study.flows import DESIGN, pipes_of
from pipeflow.study.ranges.boundaries import Boundary, Figure, crossings
from pipeflow.study.ranges.limits_over import LimitsOver, governing_pipe, with_static_yield_stress
from pipeflow.study.ranges.points import case_at
from pipeflow.study.ranges.pumps_over import PUMPS, PumpsOver
from pipeflow.study.ranges.sweeping import SOLIDS
from pipeflow.study.ranges.window import Interval, Ring, Window
from pipeflow.verdict import Check

COLUMNS, ROWS = 41, 17
FLOWS: Final = (0.4, 1.6)
"""Ends of the flow, as shares of the minimum and the maximum of the case."""
STRESSES: Final = (0.5, 2.0)
"""Ends of a parameter of the rheology, as shares of that of the case."""
Standing = Literal["inside", "central", "outside"]


@dataclass(frozen=True)
class WindowAt:
    """The flows of the window at one value of the other input: by the upper figure, and by the central one alone.

    ``closed_by`` names the limits that leave no flow by a figure.
    """

    value: float
    upper: tuple[Interval, ...]
    central: tuple[Interval, ...]
    closed_by: dict[Figure, tuple[str, ...]]


@dataclass(frozen=True)
class Stated:
    """The limit a boundary stands for; ``limit`` is None where it is not one number all over the map."""

    limit: float | None
    unit: str
    sense: str


@dataclass(frozen=True)
class Envelope:
    """Where a line may be operated.

    Attributes
    ----------
    flow : Axis
        Volume flow of the slurry, minimum and maximum alike, m³/s.
    up : Axis
        The other input; the value of the case is among them.
    boundaries : tuple of Boundary
        Of the limits, of what each pump gives, and of the regime of the governing pipe.
    limits : dict of str to Stated
        What the boundaries of limits stand for.
    window : tuple of tuple of str
        By value and flow: ``inside``, ``central`` where a limit is kept by the central figure alone, or ``outside``.
    energy : tuple of tuple of float
        By value and flow: kWh for a tonne of dry solids (of slurry, without solids) and a kilometre, losses only.
    rows : tuple of WindowAt
        The window at every value.
    areas : dict of Figure to tuple of Ring
        The window by each figure as closed lines of points (flow, value), SI.
    governing_pipe : str
        The pipe that loses most, whose transition is drawn; empty without pipes.
    cautions : tuple of str
    """

    case: Case
    flow: Axis
    up: Axis
    boundaries: tuple[Boundary, ...]
    limits: dict[str, Stated]
    window: tuple[tuple[Standing, ...], ...]
    energy: tuple[tuple[float, ...], ...]
    rows: tuple[WindowAt, ...]
    areas: dict[Figure, tuple[Ring, ...]]
    governing_pipe: str
    cautions: tuple[str, ...]

    @property
    def own(self) -> WindowAt:
        """The window at the value that the case has."""
        here = self.up.variable.value
        return min(self.rows, key=lambda row: abs(row.value - here))

    @property
    def holds(self) -> bool:
        """Whether the flows of the case, at its own value, lie within the window by the central figure at least."""
        asked = self.case.flow
        slack = 1e-9 * asked.maximum
        return any(one.low <= asked.minimum + slack and asked.maximum <= one.high + slack for one in self.own.central)

    def case_at(self, flow: float, value: float) -> Case:
        """The case that a point of the map stands for."""
        given = with_static_yield_stress(self.case, self.up.variable.path, np.asarray(value))
        return case_at(self.case, {path: float(one) for path, one in given.items()}, flow)


def up_variable(case: Case) -> Variable:
    """What the flow is set against: solids where the rheology follows them, else the yield stress.

    A rheology without a yield stress has its consistency or viscosity in its place.
    """
    if case.solids is not None and any(one.law.variable == "solids" for one in case.followed):
        return variable(case, SOLIDS)
    stress = variables(case).get("fluid.rheology.yield_stress")
    if stress is not None and stress.value > 0:
        return stress
    return next(one for path, one in variables(case).items() if path.startswith("fluid.rheology.") and one.value > 0)


def default_ends(case: Case, up: Variable) -> tuple[float, float]:
    """Ends of the other input: the range tested of solids, else half and twice that of the case where that can be."""
    laws = [one.law for one in case.followed if one.law.variable == "solids"]
    if up.path == SOLIDS and laws:
        return max(law.tested[0] for law in laws), min(law.tested[1] for law in laws)
    low, high = (up.value * share for share in STRESSES)
    return max(low, up.bounds.lower), min(high, up.bounds.upper)


def envelope(case: Case, flow: Axis | None = None, up: Axis | None = None) -> Envelope:
    """Draw the duty envelope of a case.

    Parameters
    ----------
    case : Case
    flow : Axis, optional
        Ends of the volume flow, m³/s; by default from 0.4 of the minimum to 1.6 of the maximum of the case.
    up : Axis, optional
        Ends of the other input; by default of what the rheology follows.

    Raises
    ------
    InputError
        The case has no flow.
    """
    if case.flow.maximum <= 0:
        raise InputError([Problem(case.file, None, None, "flow", "a line at rest has no envelope; give a flow")])
    up = _axis_of(case) if up is None else through(up.variable, up.values[0], up.values[-1])
    ends = FLOWS[0] * (case.flow.minimum or case.flow.maximum), FLOWS[1] * case.flow.maximum
    low, high = (flow.values[0], flow.values[-1]) if flow is not None else ends
    across = np.unique(np.append(np.linspace(low, high, COLUMNS), [one for one in _flows(case) if low < one < high]))
    path = up.variable.path
    limits = LimitsOver(case, lambda x, y: (with_static_yield_stress(case, path, y), x))
    found = crossings(limits, across, up.array)
    if case.pumps:
        found = found.joined(crossings(PumpsOver(case, path), across, up.array, along_rows=True))
    central, upper = Window(found, "central"), Window(found, "upper")
    pipe = governing_pipe(case)
    return Envelope(
        case=case,
        flow=Axis(Variable("flow", "volume flow", case.flow.design), tuple(across.tolist())),
        up=up,
        boundaries=tuple(one for one in found.boundaries() if one.name != PUMPS),
        limits=dict(_limits(limits, across, up.array)),
        window=_standings(central, upper),
        energy=tuple(map(tuple, _energy(limits, across, up.array).tolist())),
        rows=tuple(
            WindowAt(
                value=float(value),
                upper=tuple(upper.intervals(j)),
                central=tuple(central.intervals(j)),
                closed_by={window.figure: window.closed_by(j) for window in (upper, central)},
            )
            for j, value in enumerate(found.y)
        ),
        areas={"upper": upper.areas(), "central": central.areas()},
        governing_pipe="" if pipe is None else pipes_of(case)[pipe].name,
        cautions=tuple(_cautions(case, up)),
    )


def _flows(case: Case) -> tuple[float, ...]:
    return case.flow.minimum, case.flow.design, case.flow.maximum


def _axis_of(case: Case) -> Axis:
    found = up_variable(case)
    return through(found, *default_ends(case, found))


def through(up: Variable, low: float, high: float) -> Axis:
    """Values between two ends, evenly spaced, and that of the case where it is among them."""
    every = np.linspace(low, high, ROWS)
    if low < up.value < high:
        every = np.unique(np.append(every[np.abs(every - up.value) > 1e-9 * (high - low)], up.value))
    return Axis(up, tuple(every.tolist()))


def _energy(limits: LimitsOver, flow: Array, up: Array) -> Array:
    """Energy in kWh for a tonne and a kilometre, of shape (up, flow)."""
    x, y = np.meshgrid(flow, up)
    solved = limits.solved(x.ravel(), y.ravel())
    length = sum(float(pipe.length) for pipe in pipes_of(limits.case))
    density = np.array([float(case.fluid.density) for case in solved.cases])
    share = np.array([case.solids.mass_fraction if case.solids else 1.0 for case in solved.cases])
    loss = solved.line.pressure_loss_upper[:, DESIGN]
    with np.errstate(all="ignore"):
        return specific_energy(loss, length or np.nan, density, share).reshape(x.shape)


def _standings(central: Window, upper: Window) -> tuple[tuple[Standing, ...], ...]:
    names = np.where(central.beyond, "outside", np.where(upper.beyond, "central", "inside"))
    return tuple(map(tuple, names.tolist()))


def _limits(over: LimitsOver, flow: Array, up: Array) -> Iterator[tuple[str, Stated]]:
    """The limit of each check, from the corners of the map."""
    x, y = np.array([flow[0], flow[-1], flow[0], flow[-1]]), np.array([up[0], up[0], up[-1], up[-1]])
    solved = over.solved(x, y)
    every: dict[str, list[Check]] = {}
    for index in range(x.size):
        for check in solved.checks(index):
            every.setdefault(check.name, []).append(check)
    for name, found in every.items():
        limits = [check.limit for check in found if check.limit is not None]
        is_one = bool(limits) and np.ptp(limits) <= 1e-9 * abs(limits[0])
        yield name, Stated(limits[0] if is_one else None, found[0].unit, found[0].sense)


def _cautions(case: Case, up: Axis) -> Iterator[str]:
    path = up.variable.path
    stress = float(getattr(case.fluid.rheology, "yield_stress", 0.0))
    if case.restart.static_yield_stress is not None and stress > 0:
        yield "the static yield stress that the case gives is taken in proportion to the dynamic one over the map"
    laws = [one.law for one in case.followed if one.law.variable == "solids"]
    if path == SOLIDS and any(not law.holds(np.array(up.values)) for law in laws):
        yield "the map goes past the solids tested: the rheology there is a guess"
    if path == SOLIDS and not laws:
        yield "the rheology of this case does not follow the solids: only density and settling change with them"
    if carried_solids(case) is not None:
        yield "no formula speaks of deposition outside turbulent flow: solids may settle there, whatever the map shows"
    if case.scenarios:
        yield "the scenarios of the case are not asked"
    yield from _about_pumps(case)


def _about_pumps(case: Case) -> Iterator[str]:
    if case.pumps:
        yield "pumps at their highest speed, throttled below that; the vendor must confirm head and NPSH in this slurry"
    fixed = [pump.name for pump in case.pumps if pump.kind != "centrifugal" and pump.speed_maximum is None]
    if fixed:
        yield f"{', '.join(fixed)}: one speed gives one flow; less takes another speed or a bypass"
