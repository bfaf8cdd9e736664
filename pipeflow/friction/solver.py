"""Wall shear stress of a full pipe at a given velocity: laminar, transitional and turbulent flow on one curve."""

from __future__ import annotations

from dataclasses import dataclass
from enum import IntEnum

import numpy as np
from numpy.typing import NDArray

from pipeflow.arrays import Array, FloatOrArray
from pipeflow.friction.criteria import CRITERIA, Criterion
from pipeflow.friction.laminar import TubeLaw, Wall
from pipeflow.friction.methods import critical_criterion, turbulent_method
from pipeflow.friction.transition import Edges, TurbulentBranch, transition_edges
from pipeflow.friction.tube import tube_law
from pipeflow.friction.turbulent import Bore, TurbulentMethod
from pipeflow.rheology import Rheology
from pipeflow.rootfind import find_root, take

CHUNK = 32768
"""Pipes solved at a time: their working arrays then stay in the processor's cache, and memory is bounded."""


class Regime(IntEnum):
    """State of the flow in one pipe."""

    NO_FLOW = 0
    LAMINAR = 1
    TRANSITIONAL = 2
    TURBULENT = 3


class Status(IntEnum):
    """How the solution of one pipe ended."""

    CONVERGED = 0
    AT_REST = 1
    NO_ROOT = 2
    INVALID = 3


@dataclass(frozen=True, eq=False)
class PipeFlow:
    """Flow in each pipe; arrays of one shape, SI units, nan where ``status`` says that there is no answer.

    At rest the figures are the limit as the flow starts: the wall stress is the yield stress.

    Attributes
    ----------
    wall_shear_stress : Array
        tau_w, Pa.
    excess_stress : Array
        tau_w - tau_y, Pa, with the digits that the difference would lose near the plug.
    laminar_wall_shear_stress : Array
        Wall stress that laminar flow would have at the same velocity, Pa.
    wall_shear_rate : Array
        Shear rate of the fluid at tau_w, 1/s.
    local_flow_index, wall_flow_index : Array
        n' of Metzner & Reed at the laminar wall stress, and at tau_w.
    reynolds_mr : Array
        ``8 rho V²/tau_w,laminar``.
    regime, status : array of int
        Members of :class:`Regime` and :class:`Status`.
    critical_velocity, turbulent_velocity, reynolds_critical : Array
        End of laminar flow, start of fully turbulent flow, m/s, and Re_MR at the former; nan where not asked for.
    """

    wall_shear_stress: Array
    excess_stress: Array
    laminar_wall_shear_stress: Array
    wall_shear_rate: Array
    local_flow_index: Array
    wall_flow_index: Array
    reynolds_mr: Array
    regime: NDArray[np.int8]
    status: NDArray[np.int8]
    critical_velocity: Array
    turbulent_velocity: Array
    reynolds_critical: Array


@dataclass(frozen=True, eq=False)
class Methods:
    """The published methods that one curve is made of."""

    turbulent: TurbulentMethod
    critical: Criterion

    @classmethod
    def chosen(cls, rheology: Rheology, turbulent: str | None, critical: str | None) -> Methods:
        """Look the methods up by their keys, or take the defaults of the rheology."""
        return cls(turbulent_method(rheology, turbulent), critical_criterion(rheology, critical))


def wall_shear_stress(
    velocity: FloatOrArray,
    diameter: FloatOrArray,
    density: FloatOrArray,
    rheology: Rheology,
    *,
    roughness: FloatOrArray = 0.0,
    method: str | None = None,
) -> Array:
    """Wall shear stress at a bulk velocity.

    Parameters
    ----------
    velocity, diameter, density, roughness : float or array
        m/s, m, kg/m³ and m; they and the parameters of ``rheology`` broadcast.
    rheology : Rheology
    method : str, optional
        Key of a turbulent correlation; by default the one settled for the rheology.

    Returns
    -------
    Array
        tau_w in Pa; nan for an element without an answer (:func:`solve_pipes` says why).

    Raises
    ------
    ValueError
        For an unknown ``method``, one that was not made for the rheology, or shapes that do not broadcast.

    Examples
    --------
    >>> from pipeflow.rheology import Newtonian
    >>> round(float(wall_shear_stress(0.1, 0.05, 1000.0, Newtonian(0.1))), 9)
    1.6
    """
    return solve_pipes(velocity, diameter, density, rheology, roughness=roughness, method=method).wall_shear_stress


def solve_pipes(
    velocity: FloatOrArray,
    diameter: FloatOrArray,
    density: FloatOrArray,
    rheology: Rheology,
    *,
    roughness: FloatOrArray = 0.0,
    particle_size: FloatOrArray = np.nan,
    method: str | None = None,
    critical: str | None = None,
    with_edges: bool = False,
) -> PipeFlow:
    """Solve any number of pipes in one call; as :func:`wall_shear_stress`, with all that is known of each.

    ``particle_size`` is the d85 of the solids, m, for the methods that need it; ``critical`` the key of the criterion
    for the end of laminar flow. ``with_edges`` works the critical velocities out for laminar pipes too, where the
    stress does not need them.
    """
    methods = Methods.chosen(rheology, method, critical)
    shape, speed, law, bore = _flat(velocity, rheology, diameter, density, roughness, particle_size)
    pieces = []
    with np.errstate(all="ignore"):
        for first in range(0, max(speed.size, 1), CHUNK):
            part = slice(first, first + CHUNK)
            pieces.append(_solve(speed[part], take(law, part), take(bore, part), methods, with_edges))
    return _joined(pieces, shape)


def critical_velocities(diameter: FloatOrArray, density: FloatOrArray, rheology: Rheology) -> dict[str, Array]:
    """End of laminar flow, m/s, by every criterion that knows the rheology; arguments as for the solver."""
    shape, one, law, bore = _flat(1.0, rheology, diameter, density, 0.0, np.nan)
    known = {key: criterion for key, criterion in CRITERIA.items() if rheology.key in criterion.models}
    with np.errstate(all="ignore"):
        start = law.guess(np.log(8.0 * one / bore.diameter))
        found = {key: transition_edges(law, bore, start, criterion) for key, criterion in known.items()}
        return {key: np.exp(edges.log_velocity).reshape(shape) for key, edges in found.items()}


def _flat(
    first: FloatOrArray, rheology: Rheology, *of_bore: FloatOrArray
) -> tuple[tuple[int, ...], Array, TubeLaw, Bore]:
    """Bring the pipes to one shape, flat: that shape, the first quantity, the law and the bore."""
    shape = np.broadcast_shapes(*(np.shape(value) for value in (first, *of_bore, *vars(rheology).values())))

    def flatten(value: object) -> Array:
        return np.broadcast_to(np.asarray(value, dtype=np.float64), shape).reshape(-1)

    return shape, flatten(first), tube_law(rheology, flatten), Bore(*(flatten(value) for value in of_bore))


def _joined(pieces: list[PipeFlow], shape: tuple[int, ...]) -> PipeFlow:
    columns = zip(*(vars(piece).values() for piece in pieces), strict=True)
    return PipeFlow(*(np.concatenate(column).reshape(shape) for column in columns))


def _solve(velocity: Array, law: TubeLaw, bore: Bore, methods: Methods, with_edges: bool) -> PipeFlow:
    status = _status_of_input(velocity, law, bore)
    log_bulk = np.where(status == Status.CONVERGED, np.log(8.0 * velocity / bore.diameter), np.nan)
    laminar = find_root(_laminar_excess, law.guess(log_bulk), np.ones_like(log_bulk), (law, log_bulk))
    wall = law.wall(laminar)
    beyond = methods.critical.excess(wall, law, bore) > 0
    excess, regime = laminar.copy(), np.where(beyond, Regime.TURBULENT, Regime.LAMINAR).astype(np.int8)
    velocities = np.full((3, velocity.size), np.nan)  # critical, turbulent, and Re_MR at the former

    some = np.flatnonzero(np.isfinite(laminar) & (with_edges | beyond))
    if some.size:
        law_here, bore_here = take(law, some), take(bore, some)
        edges = transition_edges(law_here, bore_here, laminar[some], methods.critical)
        branch = TurbulentBranch.after(edges, methods.turbulent, law_here, bore_here)
        velocities[:, some] = np.exp([edges.log_velocity, branch.log_velocity, edges.log_reynolds])
        past = np.flatnonzero(beyond[some])
        excess[some[past]], regime[some[past]] = _past_laminar(
            np.log(velocity[some[past]]), take(edges, past), take(branch, past)
        )
    return _answer(velocity, law, bore, wall, excess, regime, status, velocities)


def _status_of_input(velocity: Array, law: TubeLaw, bore: Bore) -> NDArray[np.int8]:
    log_rate = law.wall(np.zeros_like(velocity)).log_rate
    sound = (
        (velocity >= 0) & (bore.diameter > 0) & (bore.density > 0) & (bore.roughness >= 0) & (law.yield_stress >= 0)
        & np.isfinite(velocity + bore.diameter + bore.density + bore.roughness + law.yield_stress + log_rate)
    )  # fmt: skip
    moving = np.where(velocity == 0, Status.AT_REST, Status.CONVERGED)
    return np.where(sound, moving, Status.INVALID).astype(np.int8)


def _laminar_excess(log_excess: Array, law: TubeLaw, log_bulk: Array) -> tuple[Array, Array]:
    wall = law.wall(log_excess)
    return wall.log_bulk_rate - log_bulk, wall.slope


def _past_laminar(log_velocity: Array, edges: Edges, branch: TurbulentBranch) -> tuple[Array, NDArray[np.int8]]:
    """Steps 3 and 4: the turbulent law from its edge on, a straight line in ln V - ln tau_w up to it."""
    turbulent = log_velocity >= branch.log_velocity
    on_law = branch.log_excess_at(np.maximum(log_velocity, branch.log_velocity))
    yield_stress = branch.law.yield_stress
    log_stress_1 = np.log(yield_stress + np.exp(edges.log_excess))
    log_stress_2 = np.log(yield_stress + np.exp(on_law))
    share = (log_velocity - edges.log_velocity) / (branch.log_velocity - edges.log_velocity)
    stress = np.exp(log_stress_1 + share * (log_stress_2 - log_stress_1))
    excess = np.where(turbulent, on_law, np.log(stress - yield_stress))
    return excess, np.where(turbulent, Regime.TURBULENT, Regime.TRANSITIONAL).astype(np.int8)


def _answer(
    velocity: Array,
    law: TubeLaw,
    bore: Bore,
    laminar: Wall,
    excess: Array,
    regime: NDArray[np.int8],
    status: NDArray[np.int8],
    velocities: Array,
) -> PipeFlow:
    """Put the answer together, with the limit Q -> 0+ for pipes at rest."""
    rest = status == Status.AT_REST
    wall = law.wall(np.where(rest, -np.inf, excess))
    lost = (status == Status.CONVERGED) & np.isnan(wall.stress)
    return PipeFlow(
        wall_shear_stress=wall.stress,
        excess_stress=np.exp(wall.log_excess),
        laminar_wall_shear_stress=np.where(rest, law.yield_stress, laminar.stress),
        wall_shear_rate=np.exp(wall.log_rate),
        local_flow_index=1.0 / laminar.inverse_local_index,
        wall_flow_index=1.0 / wall.inverse_local_index,
        reynolds_mr=np.where(rest, 0.0, 8.0 * bore.density * velocity**2 / laminar.stress),
        regime=np.where((status == Status.CONVERGED) & ~lost, regime, Regime.NO_FLOW).astype(np.int8),
        status=np.where(lost, Status.NO_ROOT, status).astype(np.int8),
        critical_velocity=velocities[0],
        turbulent_velocity=velocities[1],
        reynolds_critical=velocities[2],
    )


def bulk_velocity(
    wall_shear_stress: FloatOrArray,
    diameter: FloatOrArray,
    density: FloatOrArray,
    rheology: Rheology,
    *,
    roughness: FloatOrArray = 0.0,
    particle_size: FloatOrArray = np.nan,
    method: str | None = None,
    critical: str | None = None,
) -> Array:
    """Bulk velocity [m/s] at a wall shear stress [Pa]: the inverse of :func:`wall_shear_stress`, same arguments.

    Zero up to the yield stress; nan where the input means nothing or no edge of the transition exists.
    """
    methods = Methods.chosen(rheology, method, critical)
    shape, stress, law, bore = _flat(wall_shear_stress, rheology, diameter, density, roughness, particle_size)
    with np.errstate(all="ignore"):
        velocity = np.where(stress <= law.yield_stress, 0.0, _velocity(stress, law, bore, methods))
        return np.where(_status_of_input(velocity, law, bore) == Status.INVALID, np.nan, velocity).reshape(shape)


def _velocity(stress: Array, law: TubeLaw, bore: Bore, methods: Methods) -> Array:
    excess = np.log(stress - law.yield_stress)
    wall = law.wall(excess)
    edges = transition_edges(law, bore, excess, methods.critical)
    branch = TurbulentBranch.after(edges, methods.turbulent, law, bore)
    begin = branch.log_excess_at(branch.log_velocity)
    log_stress = [np.log(law.yield_stress + np.exp(x)) for x in (edges.log_excess, begin)]
    share = (np.log(stress) - log_stress[0]) / (log_stress[1] - log_stress[0])
    line = np.exp(edges.log_velocity + share * (branch.log_velocity - edges.log_velocity))
    laminar = np.exp(wall.log_bulk_rate) * bore.diameter / 8.0
    past = np.where(excess < begin, line, methods.turbulent.velocity(wall, law, bore))
    return np.where(methods.critical.excess(wall, law, bore) > 0, past, laminar)
