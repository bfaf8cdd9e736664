"""Minor losses of a line: fittings, its ends, the changes of bore between pipes, equipment.

Laminar terms are written with ``rho V²/(2 Re_MR) = tau_w,laminar/16``, so that every loss has its limit at rest.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from pipeflow.arrays import Array, FloatOrArray
from pipeflow.friction import PipeFlow
from pipeflow.line.elements import Equipment, Pipe
from pipeflow.line.fittings import EXIT, fittings, resistance
from pipeflow.line.kinetics import KineticFactors, laminar_state, turbulent_share
from pipeflow.rheology import Rheology
from pipeflow.sources import Range, Source

EXPANSION = Source(
    key="expansion-momentum",
    title="Sudden expansion by the momentum balance, with the velocity profile of laminar flow",
    citation="Borda (1766); Carnot (1803); with alpha and beta of the profiles, derived in docs/catalogue.md",
    ranges=(Range("Re_MR", 100, None),),
    confidence="exact",
    note="in turbulent flow (1-s)²; a gradual expansion loses less; below the range the friction of the mixing "
    "itself, worth one or two diameters of pipe, is left out",
)
CONTRACTION = Source(
    key="contraction",
    title="Sudden contraction: 0.5 (1-s) and a laminar term of 160 (1-s)/Re_MR",
    citation="0.5 (1-s): Crane, Technical Paper 410; 160/Re: Hooper's flush entrance, Chem. Eng. 88(17), 96 (1981)",
    confidence="medium",
    note="reaches Hooper's entrance where the pipe before is wide; a gradual reducer loses less",
)
ENTRANCE_LAMINAR = 160.0
ENTRANCE_TURBULENT = 0.5


@dataclass(frozen=True, eq=False)
class MinorLosses:
    """Losses that each pipe is charged with, Pa; the last axis is that of the pipes.

    Attributes
    ----------
    total : Array
        All of them: fittings, ends of the line, user's coefficients, change of bore from the pipe before.
    reducer, entrance, exit : Array
        Those of these that belong to a place rather than along the pipe.
    """

    total: Array
    reducer: Array
    entrance: Array
    exit: Array


def minor_losses(
    pipes: Sequence[Pipe],
    flow: PipeFlow,
    velocity: Array,
    diameter: Array,
    density: Array,
    rheology: Rheology,
    method: str,
) -> MinorLosses:
    """Work out every loss of the pipes but friction.

    Parameters
    ----------
    pipes : sequence of Pipe
    flow : PipeFlow
        Their flow, solved with the edges of the transition.
    velocity, diameter, density : Array
        m/s, m, kg/m³; they and the parameters of ``rheology`` broadcast to the shape of ``flow``.
    method : str
        Key of the method of fitting losses.
    """
    shape = flow.wall_shear_stress.shape
    dynamic = np.broadcast_to(density * velocity**2 / 2.0, shape)
    sixteenth = flow.laminar_wall_shear_stress / 16.0
    diameter = np.broadcast_to(diameter, shape)
    named = [_resistance(pipe, pipe.fittings.keys() - {EXIT}, method) for pipe in pipes]
    ends = [_resistance(pipe, pipe.fittings.keys() & {"entrance", "entrance_projecting"}, method) for pipe in pipes]
    exits = [pipe.fittings.get(EXIT, 0.0) for pipe in pipes]
    coefficient = side_by_side([pipe.loss_coefficient for pipe in pipes])

    changes = bool(np.any(diameter[..., 1:] != diameter[..., :-1]))
    reducer = exit_loss = np.zeros(shape)
    if changes or any(exits):
        laminar, share = laminar_state(flow, rheology), turbulent_share(flow, velocity)
        exit_loss = np.asarray(exits) * exit_coefficient(laminar.energy, share) * dynamic
        reducer = _reducers(diameter, dynamic, sixteenth, laminar, share) if changes else reducer
    along = _loss(named, sixteenth, dynamic) + coefficient * dynamic
    return MinorLosses(along + exit_loss + reducer, reducer, _loss(ends, sixteenth, dynamic), exit_loss)


def side_by_side(items: Sequence[FloatOrArray]) -> Array:
    """Lay one quantity of all elements along a last axis."""
    if not items:
        return np.zeros(0)
    return np.stack(np.broadcast_arrays(*(np.asarray(item, dtype=np.float64) for item in items)), axis=-1)


def _resistance(pipe: Pipe, keys: set[str], method: str) -> tuple[float, Array]:
    counts = {key: count for key, count in pipe.fittings.items() if key in keys}
    return resistance(counts, pipe.diameter, pipe.nominal_diameter, method)


def _loss(constants: Sequence[tuple[float, Array]], sixteenth: Array, dynamic: Array) -> Array:
    laminar, turbulent = (side_by_side([pair[place] for pair in constants]) for place in (0, 1))
    return laminar * sixteenth + turbulent * dynamic


def exit_coefficient(laminar_energy: FloatOrArray, turbulent_share: FloatOrArray) -> Array:
    """Loss coefficient of an exit into a vessel: all the kinetic energy of the stream.

    ``alpha`` of the profile in laminar flow, 2 for a Newtonian fluid and 1 for a plug; the published 1 in turbulent
    flow; along ln V between them in the transition, so that it is continuous.

    Parameters
    ----------
    laminar_energy : float or array
        ``alpha`` of laminar flow.
    turbulent_share : float or array
        0 in laminar, 1 in turbulent flow.
    """
    alpha = np.asarray(laminar_energy)
    published = fittings()[EXIT].constants("hooper-2k", 1.0, 1.0)[1]
    return np.asarray(alpha + turbulent_share * (published - alpha))


def expansion_coefficient(
    area_ratio: FloatOrArray, before: KineticFactors, after: KineticFactors, turbulent_share: FloatOrArray
) -> Array:
    """Loss coefficient of a sudden expansion, on ``rho V²/2`` of the narrower pipe before it.

    Momentum balance ``alpha_1 - 2 beta_1 s + s² (2 beta_2 - alpha_2)`` with the profiles of laminar flow, and
    ``(1-s)²`` of even flow in turbulent; between them along ln V of the pipe before, whose jet does the mixing. (With
    each pipe's own regime a turbulent stream that calms down would gain energy in a slight expansion.)

    Parameters
    ----------
    area_ratio : float or array
        ``s``, narrower area over wider, from 0 to 1.
    before, after : KineticFactors
        Of laminar flow in the pipes before and after.
    turbulent_share : float or array
        Of the pipe before: 0 in laminar, 1 in turbulent flow.
    """
    s = np.asarray(area_ratio)
    laminar = before.energy - 2.0 * before.momentum * s + s**2 * (2.0 * after.momentum - after.energy)
    return np.asarray(laminar + turbulent_share * ((1.0 - s) ** 2 - laminar))


def contraction_constants(area_ratio: FloatOrArray) -> tuple[Array, Array]:
    """``K_laminar`` and ``K_turbulent`` of a sudden contraction, on the narrower pipe after it: 160 and 0.5 by (1-s).

    The laminar constant falls between the two readings of the contractions that Edwards et al. (1985) measured.

    Parameters
    ----------
    area_ratio : float or array
        ``s``, narrower area over wider, from 0 to 1.
    """
    step = 1.0 - np.asarray(area_ratio)
    return ENTRANCE_LAMINAR * step, ENTRANCE_TURBULENT * step


def _reducers(diameter: Array, dynamic: Array, sixteenth: Array, laminar: KineticFactors, share: Array) -> Array:
    """Loss of the change of bore before each pipe, charged to the pipe after it; none before the first."""
    before, after = (slice(None, -1), slice(1, None))
    ratio = (diameter[..., before] / diameter[..., after]) ** 2
    first, second = (
        KineticFactors(*(value[..., side] for value in vars(laminar).values())) for side in (before, after)
    )
    widening = expansion_coefficient(ratio, first, second, share[..., before]) * dynamic[..., before]
    with np.errstate(divide="ignore", invalid="ignore"):
        narrow_laminar, narrow_turbulent = contraction_constants(1.0 / ratio)
    narrowing = narrow_laminar * sixteenth[..., after] + narrow_turbulent * dynamic[..., after]
    loss = np.where(ratio < 1.0, widening, np.where(ratio > 1.0, narrowing, 0.0 * dynamic[..., after]))
    return np.concatenate([np.zeros((*loss.shape[:-1], 1)), loss], axis=-1)


def equipment_loss(item: Equipment, flow: FloatOrArray) -> Array:
    """Loss of equipment [Pa] at a volume flow [m³/s].

    At rest the limit as the flow starts: nothing where the loss follows the flow, all of a fixed one. nan for a
    negative flow or a reference flow that is not positive.
    """
    if item.at_flow is None:
        return np.asarray(item.pressure_loss, dtype=np.float64)
    with np.errstate(all="ignore"):
        relative = np.asarray(flow, dtype=np.float64) / item.at_flow
        relative = np.where((relative >= 0) & (np.asarray(item.at_flow) > 0), relative, np.nan)
        factor = np.where(np.asarray(item.exponent) == 0.0, 1.0 + 0.0 * relative, relative**item.exponent)
        return np.asarray(item.pressure_loss * factor)
