"""The limits of a case over samples of its inputs: those that are figures of the line itself."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from functools import cached_property
from typing import Final

import numpy as np

from pipeflow.arrays import Array, FloatOrArray
from pipeflow.case.model import Case
from pipeflow.case.varying import VariedCase, varied
from pipeflow.friction import Regime
from pipeflow.line.elements import Pipe
from pipeflow.line.fittings import DEFAULT_METHOD, EXIT, resistance
from pipeflow.line.losses import side_by_side
from pipeflow.line.route import with_pipe_axis
from pipeflow.operability.deposition import Solids, deposition_velocity
from pipeflow.operability.restart import RESTART_FACTOR, STATIC_RATIO, demand_along, yield_pressure
from pipeflow.study.checks import carried_solids
from pipeflow.study.flows import pipes_of
from pipeflow.study.sampling.line import SampledLine, of_every_sample, split

BEYOND_TESTED: Final = "beyond tested"
NOT_TURBULENT: Final = "not turbulent"
"""Outputs beside the limits: samples beyond the tested range of a law, and those with a pipe not turbulent at minimum
flow, of which a deposition velocity says nothing."""


@dataclass(frozen=True)
class Limit:
    """A limit that can be held against samples; ``figure`` in ``unit``, as the check of the same name has it."""

    name: str
    unit: str
    basis: str
    figure: Callable[[SampledLine], FloatOrArray]
    at_minimum_flow: bool = False
    is_least: bool = False

    def of(self, case: Case) -> float | None:
        """The limit a case states; None where it states none, or the figure cannot be had."""
        if self.name == "deposition":
            return 1.0 if _settles(case) else None
        if self.name == "temperature_rise" and case.specific_heat is None:
            return None
        if self.name not in ("head_loss", "pressure_loss", "temperature_rise") and not pipes_of(case):
            return None
        stated: float | None = getattr(case.limits, self.name)
        return stated


def _settles(case: Case) -> bool:
    return carried_solids(case) is not None and case.flow.minimum > 0 and bool(pipes_of(case))


def _wall_shear_rate(at: SampledLine) -> Array:
    rate = with_pipe_axis(at.given.fluid.rheology).shear_rate(at.wall_shear_stress)
    return np.asarray(rate.max(axis=-1))


def _temperature_rise(at: SampledLine) -> Array:
    assert at.case.specific_heat is not None
    return np.asarray(at.pressure_loss / (at.given.fluid.density * at.case.specific_heat))


def _restart_pressure(at: SampledLine) -> Array:
    """Pressure the pump must add to restart the full line."""
    static, method = at.given.static_yield_stress, at.case.methods.fittings or DEFAULT_METHOD
    if static is None:
        static = STATIC_RATIO * np.asarray(getattr(at.given.fluid.rheology, "yield_stress", 0.0))
    length, diameter, rise = (
        side_by_side([getattr(pipe, key) for pipe in at.pipes]) for key in ("length", "diameter", "rise")
    )
    laminar = np.array([_laminar_resistance(pipe, method) for pipe in at.pipes])
    factor = at.case.restart.factor or RESTART_FACTOR
    yielding = factor * yield_pressure(length, diameter, np.asarray(static)[..., None], laminar)
    every = at.line.pressure_loss[..., None]
    yielding, rising, _ = np.broadcast_arrays(yielding, np.asarray(at.weight)[..., None] * rise, every)
    source, end = at.given.source, at.given.destination
    demand = demand_along(yielding, rising, end.pressure + at.weight * np.asarray(end.head_of_level))
    return np.asarray(demand[..., 0] - source.pressure - at.weight * source.level)


def _laminar_resistance(pipe: Pipe, method: str) -> float:
    counts = {key: count for key, count in pipe.fittings.items() if key != EXIT}
    return resistance(counts, pipe.diameter, pipe.nominal_diameter, method)[0]


def _share_of_deposition(at: SampledLine) -> Array:
    """Least velocity over that of deposition, of the turbulent pipes; infinite where none is."""
    slurry = at.given.slurry
    liquid = np.asarray(slurry.liquid_density)
    columns = (slurry.size, slurry.solids_density / liquid, slurry.volume_fraction, slurry.liquid_viscosity / liquid)
    solids = Solids(*(np.asarray(column)[..., None] for column in columns))
    shear = np.sqrt(at.line.pipes.wall_shear_stress / np.asarray(at.given.fluid.density)[..., None])
    bores = side_by_side([pipe.diameter for pipe in at.pipes])
    with np.errstate(divide="ignore"):
        ratio = at.line.velocity / deposition_velocity(bores, solids, shear, at.case.methods.deposition)
    judged = np.where(at.line.pipes.regime == Regime.TURBULENT, ratio, np.inf)
    return np.asarray(np.where(np.isnan(ratio).any(axis=-1), np.nan, judged.min(axis=-1)))


LIMITS: Final = (
    Limit("head_loss", "m", "at maximum flow", lambda at: at.head_loss),
    Limit("pressure_loss", "Pa", "at maximum flow", lambda at: at.pressure_loss),
    Limit("velocity_minimum", "m/s", "at minimum flow", lambda at: at.line.velocity.min(axis=-1), True, True),
    Limit("velocity_maximum", "m/s", "at maximum flow", lambda at: at.line.velocity.max(axis=-1)),
    Limit("wall_shear_rate", "1/s", "at maximum flow", _wall_shear_rate),
    Limit("wall_shear_stress", "Pa", "at maximum flow", lambda at: at.wall_shear_stress.max(axis=-1)),
    Limit("temperature_rise", "K", "at maximum flow", _temperature_rise),
    Limit("restart_pressure", "Pa", "after a stop", _restart_pressure),
    Limit("deposition", "", "at minimum flow", _share_of_deposition, True, True),
)


def limits_of(case: Case) -> dict[str, tuple[Limit, float]]:
    """Give the limits that a case states, and that can be sampled, with what they are, by name."""
    stated = {limit.name: (limit, limit.of(case)) for limit in LIMITS}
    return {name: (limit, value) for name, (limit, value) in stated.items() if value is not None}


def failing(name: str) -> str:
    """Name of the output that tells whether a limit fails."""
    return f"fails {name}"


def figure_of(name: str) -> str:
    """Name of the output that holds the figure a limit is held against."""
    return f"{name} itself"


def figures_of_case(case: Case) -> dict[str, float]:
    """Give the figure of each limit for the case as it stands, by the upper method, as its checks are judged."""
    at_flows = _AtFlows(case, varied(case, {}), 1.0)
    return {name: float(limit.figure(at_flows.of(limit))) for name, (limit, _) in limits_of(case).items()}


class _AtFlows:
    """The line at the flows that limits are judged at, each solved once, and only if asked for."""

    def __init__(self, case: Case, given: VariedCase, share: FloatOrArray) -> None:
        self.case, self.given, self.share = case, given, share

    @cached_property
    def slow(self) -> SampledLine:
        """At minimum flow; no limit there asks for an upper figure."""
        return SampledLine.of(self.case, self.given, self.given.minimum, None)

    @cached_property
    def fast(self) -> SampledLine:
        """At maximum flow."""
        return SampledLine.of(self.case, self.given, self.given.maximum, self.share)

    def of(self, limit: Limit) -> SampledLine:
        """The one a limit is judged at."""
        return self.slow if limit.at_minimum_flow else self.fast


@dataclass(frozen=True)
class Failures:
    """The figure of each limit of a case, and whether it fails: 1 or 0; nan where the line has no answer."""

    case: Case

    def __call__(self, inputs: Mapping[str, Array]) -> dict[str, Array]:
        """Hold every limit against every sample."""
        given, share, samples = split(self.case, inputs)
        at_flows = _AtFlows(self.case, given, share)
        found: dict[str, FloatOrArray] = {BEYOND_TESTED: given.is_carried_on}
        for name, (limit, value) in limits_of(self.case).items():
            found |= _held(limit, value, at_flows.of(limit))
            if name == "deposition":
                found[NOT_TURBULENT] = np.any(at_flows.slow.line.pipes.regime != Regime.TURBULENT, axis=-1)
        return of_every_sample(found, samples)


def _held(limit: Limit, value: float, at: SampledLine) -> dict[str, FloatOrArray]:
    figure = np.where(np.isnan(at.pressure_loss), np.nan, limit.figure(at))
    fails = figure < value if limit.is_least else figure > value
    return {failing(limit.name): np.where(np.isnan(figure), np.nan, fails), figure_of(limit.name): figure}
