"""The line-sizing loop over diameter: one line of many variants at many bores, solved at once.

A variant is a line with its own fluid, flows and ends, as a scenario makes it; what must hold of all of them is asked
of the same bore. Nothing here knows case files.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, fields, is_dataclass, replace
from numbers import Real
from typing import Any, TypeVar

import numpy as np
from numpy.typing import NDArray

from pipeflow.arrays import Array, FloatOrArray
from pipeflow.constants import STANDARD_GRAVITY
from pipeflow.line import route
from pipeflow.line.elements import Element, Fluid, Pipe, Vessel
from pipeflow.line.route import LineFlow
from pipeflow.operability.restart import yield_pressure
from pipeflow.rootfind import find_root
from pipeflow.sources import Source

T = TypeVar("T")
Places = NDArray[np.intp]

ANNUALISED = Source(
    key="annualised-cost",
    title="Annual cost of pipe and pumping energy",
    citation="price (a + maintenance) + energy; a = i (1+i)^N/((1+i)^N - 1), the capital recovery factor",
    confidence="exact",
    note="the optimum is flat: 20 % of the bore changes the cost by a few per cent",
)
ROOT_MARGIN = 1e-11
"""Relative step of a bore past its root, so that rounding leaves the limit met."""
NO_FIGURE = 50.0
"""Logarithm of limit over figure that stands for a figure which asks for nothing."""


@dataclass(frozen=True)
class Variant:
    """A line with its fluid, flows and ends.

    Attributes
    ----------
    flows : Array
        Volume flows, m³/s.
    particle_size : float
        d85 of the solids, m, nan where not known.
    limits : dict of str to float
        Highest allowed value of figures of :data:`FIGURES` at the last flow, SI.
    static_yield_stress : float
        Pa, the factor of the restart on it; 0 for a fluid that does not gel.
    laminar_resistance : tuple of float
        Sum of the laminar constants of the fittings of each pipe.
    specific_heat : float
        J/(kg K), nan where not known.
    """

    flows: Array
    fluid: Fluid
    route: tuple[Element, ...]
    source: Vessel
    destination: Vessel
    particle_size: float
    limits: dict[str, float]
    static_yield_stress: float
    laminar_resistance: tuple[float, ...]
    specific_heat: float


@dataclass(frozen=True)
class MethodKeys:
    """Methods by their keys; None leaves the choice to the program."""

    turbulent: str | None = None
    critical: str | None = None
    fittings: str | None = None


@dataclass(frozen=True)
class Bores:
    """Bores to try, arrays of one length: inside diameter, m, nominal size, inches, roughness of the material, m."""

    diameter: Array
    nominal: Array
    roughness: Array


def mapped(item: T, change: Callable[[Array], Array]) -> T:
    """Change every array in a tree of dataclasses and tuples."""
    if isinstance(item, np.ndarray):
        return change(item)  # type: ignore[return-value]
    if is_dataclass(item) and not isinstance(item, type):
        return replace(item, **{f.name: mapped(getattr(item, f.name), change) for f in fields(item)})
    if isinstance(item, tuple):
        return tuple(mapped(one, change) for one in item)  # type: ignore[return-value]
    return item


def stacked(items: Sequence[T]) -> T:
    """Make one tree of several alike: numbers and arrays side by side along a first axis, all else as in the first."""
    first: Any = items[0]
    if isinstance(first, Real | np.ndarray):
        return np.stack([np.asarray(item, dtype=np.float64) for item in items])  # type: ignore[return-value]
    if is_dataclass(first) and not isinstance(first, type):
        columns = {f.name: stacked([getattr(item, f.name) for item in items]) for f in fields(first)}
        return replace(first, **columns)  # type: ignore[return-value]
    if isinstance(first, tuple):
        return tuple(stacked(each) for each in zip(*items, strict=True))  # type: ignore[return-value]
    return items[0]


def skeleton(item: Any) -> Any:
    """Everything of a tree but its numbers: trees of one skeleton can be stacked."""
    if isinstance(item, Real | np.ndarray):
        return "number"
    if is_dataclass(item) and not isinstance(item, type):
        return (type(item).__name__, *(skeleton(getattr(item, f.name)) for f in fields(item)))
    if isinstance(item, tuple):
        return tuple(skeleton(one) for one in item)
    return repr(sorted(item.items())) if isinstance(item, dict) else item


def solve_grid(
    variants: Sequence[Variant],
    bores: Bores,
    pipes: frozenset[str],
    assumed_roughness: Sequence[frozenset[str]],
    methods: MethodKeys,
) -> LineFlow:
    """Solve variants of one skeleton at every bore and flow in one call.

    Parameters
    ----------
    variants : sequence of Variant
    bores : Bores
    pipes : frozenset of str
        Names of the pipes that vary.
    assumed_roughness : sequence of frozenset of str
        Pipes of each variant whose roughness is that of the material, and so follows the bore.
    methods : MethodKeys

    Returns
    -------
    LineFlow
        Of shape (bores, variants, flows).
    """
    together = stacked(variants)
    together = replace(mapped(together, lambda array: array[..., None]), flows=together.flows)
    diameter, nominal, rough = (one[:, None, None] for one in (bores.diameter, bores.nominal, bores.roughness))

    def varied(element: Element) -> Element:
        if not isinstance(element, Pipe) or element.name not in pipes:
            return element
        follows = np.array([element.name in names for names in assumed_roughness])[:, None]
        roughness = np.where(follows, rough, element.roughness)
        return replace(element, diameter=diameter, nominal_diameter=nominal, roughness=roughness)

    return _solved(replace(together, route=tuple(varied(element) for element in together.route)), methods)


def _solved(variant: Variant, methods: MethodKeys) -> LineFlow:
    return route.solve(
        variant.flows,
        variant.fluid,
        variant.route,
        variant.source,
        variant.destination,
        turbulent=methods.turbulent,
        critical=methods.critical,
        fittings=methods.fittings,
        particle_size=variant.particle_size,
    )


def at(line: LineFlow, index: tuple[int, ...]) -> LineFlow:
    """Pick one line out of a grid."""
    picked = mapped(line, lambda array: array[index])
    return replace(picked, head_loss_by_method={key: loss[index] for key, loss in line.head_loss_by_method.items()})


@dataclass(frozen=True)
class _Solved:
    """A line solved at its highest flow, its variant and its pipes, whose arrays have the shape of the line."""

    variant: Variant
    line: LineFlow

    @property
    def pipes(self) -> list[Pipe]:
        return [element for element in self.variant.route if isinstance(element, Pipe)]

    def stress(self) -> Array:
        shapes = [np.asarray(4.0 * np.asarray(pipe.length) / pipe.diameter) for pipe in self.pipes]
        return np.asarray(self.line.friction_loss_upper / np.stack(np.broadcast_arrays(*shapes), axis=-1))

    def rate(self) -> Array:
        return np.asarray(route.with_pipe_axis(self.variant.fluid.rheology).shear_rate(self.stress()))

    def heating(self) -> Array:
        heat = np.asarray(self.variant.fluid.density) * self.variant.specific_heat
        return np.asarray(self.line.pressure_loss_upper / heat)

    def restart(self) -> Array:
        """Pressure the pump must add: from the end backwards, a crest asking for no less than the atmosphere."""
        one = self.variant
        weight = np.asarray(one.fluid.density) * STANDARD_GRAVITY
        demand = np.asarray(one.destination.pressure + weight * one.destination.head_of_level)
        for pipe, resistance in zip(reversed(self.pipes), reversed(one.laminar_resistance), strict=True):
            gel = yield_pressure(pipe.length, pipe.diameter, one.static_yield_stress, resistance)
            demand = np.maximum(demand + gel + weight * pipe.rise, 0.0)
        return np.asarray(demand - one.source.pressure - weight * one.source.level)


FIGURES: dict[str, Callable[[_Solved], Array]] = {
    "head_loss": lambda one: one.line.head_loss_upper,
    "pressure_loss": lambda one: one.line.pressure_loss_upper,
    "velocity_maximum": lambda one: one.line.velocity.max(axis=-1),
    "wall_shear_rate": lambda one: one.rate().max(axis=-1),
    "wall_shear_stress": lambda one: one.stress().max(axis=-1),
    "temperature_rise": lambda one: one.heating(),
    "restart_pressure": lambda one: one.restart(),
}
"""Figures that fall as the bore grows and rise with flow, length and yield stress, by the name of their check."""


@dataclass(frozen=True)
class Root:
    """Where one limit of one variant is met.

    ``value`` is that of what was solved for: the end of its range where the limit is met all along the range, inf
    (``-inf`` for what figures rise with) where it is met nowhere.
    """

    limit: str
    variant: int
    value: float


def roots(
    variants: Sequence[Variant],
    change: Callable[[Variant, Array], Variant],
    ends: tuple[float, float],
    methods: MethodKeys,
    *,
    falling: bool = False,
) -> list[Root]:
    """Solve for what meets each limit of each variant, one variant and limit an element.

    Parameters
    ----------
    variants : sequence of Variant
        Of one skeleton; their last flow is solved at.
    change : callable
        ``change(variant, value)`` with the arrays of the variant and the values tried, of one length.
    ends : tuple of float
        Lowest and highest value to try, above 0.
    methods : MethodKeys
    falling : bool
        The figures fall as the value grows, as they do with the bore.
    """
    asked = [(name, index, limit) for index, one in enumerate(variants) for name, limit in one.limits.items()]
    if not asked:
        return []
    excess = _Excess(
        stacked([replace(variants[index], flows=variants[index].flows[-1], limits={}) for _, index, _ in asked]),
        np.array([list(FIGURES).index(name) for name, _, _ in asked]),
        np.array([limit for _, _, limit in asked]),
        change,
        methods,
        -1.0 if falling else 1.0,
    )
    found = excess.roots(np.log(ends))
    return [Root(name, index, float(value)) for (name, index, _), value in zip(asked, found, strict=True)]


@dataclass(frozen=True)
class _Excess:
    """Logarithm of figure over limit for every limit of every variant, rising with the logarithm of what changes."""

    variants: Variant
    kind: Places
    limit: Array
    change: Callable[[Variant, Array], Variant]
    methods: MethodKeys
    sign: float

    def roots(self, ends: Array) -> Array:
        rows = np.arange(self.limit.size)
        with np.errstate(all="ignore"):
            low, high = (self.at(np.full(rows.size, end), rows) for end in ends)
            inside = np.flatnonzero(~(low >= 0) & (high > 0) if self.sign < 0 else (low < 0) & ~(high <= 0))
            start = np.full(inside.size, ends.mean())
            found = find_root(self._residual, start, np.ones_like(start), (inside,), float(ends[0]))
        edge = np.where(low >= 0, ends[0], np.inf) if self.sign < 0 else np.where(high <= 0, ends[1], -np.inf)
        edge[inside] = found
        return np.asarray(np.exp(edge))

    def _residual(self, log_value: Array, row: Places) -> tuple[Array, None]:
        return self.at(log_value, row), None

    def at(self, log_value: Array, row: Places) -> Array:
        here = self.change(mapped(self.variants, lambda array: array[row]), np.exp(log_value))
        solved, kind, limit = _Solved(here, _solved(here, self.methods)), self.kind[row], self.limit[row]
        return self.sign * _log_excess(solved, kind, limit)


def _log_excess(solved: _Solved, kind: Places, limit: Array) -> Array:
    """Logarithm of figure over limit, element by element; a figure that asks for nothing is far below it."""
    found = np.full(limit.shape, np.nan)
    for place in np.unique(kind):
        here = kind == place
        figure = np.broadcast_to(list(FIGURES.values())[int(place)](solved), limit.shape)[here]
        found[here] = np.where(figure > 0, np.log(np.where(figure > 0, figure, 1.0) / limit[here]), -NO_FIGURE)
        found[here] = np.where(np.isnan(figure), np.nan, found[here])
    return found


def with_bore(pipes: frozenset[str], inch: float) -> Callable[[Variant, Array], Variant]:
    """Make the change of :func:`roots` that gives some pipes one bore, m; ``inch`` turns it into the nominal size."""

    def change(variant: Variant, bore: Array) -> Variant:
        return replace(
            variant,
            route=tuple(
                replace(element, diameter=bore, nominal_diameter=bore / inch)
                if isinstance(element, Pipe) and element.name in pipes
                else element
                for element in variant.route
            ),
        )

    return change


def capital_recovery(interest_rate: FloatOrArray, years: FloatOrArray) -> Array:
    """``i (1+i)^N/((1+i)^N - 1)``: annual share of a price paid off over N years.

    Examples
    --------
    >>> round(float(capital_recovery(0.08, 15)), 5)
    0.11683
    """
    growth = (1.0 + np.asarray(interest_rate)) ** years
    return np.asarray(interest_rate * growth / (growth - 1.0))


def annual_cost(
    price: FloatOrArray,
    power: FloatOrArray,
    *,
    interest_rate: float,
    years: float,
    maintenance: float,
    hours_per_year: float,
    energy_price_per_kwh: float,
) -> Array:
    """Annual cost of pipe of a price and of a pumping power in W, in the currency of the price."""
    capital = np.asarray(price) * (capital_recovery(interest_rate, years) + maintenance)
    return np.asarray(capital + np.asarray(power) / 1e3 * hours_per_year * energy_price_per_kwh)


def within(costs: Mapping[str, float], share: float) -> list[str]:
    """Name what costs no more than the cheapest and a share on it."""
    least = min(costs.values())
    return [name for name, cost in costs.items() if cost <= least * (1.0 + share)]
