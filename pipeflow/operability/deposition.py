"""Velocity below which solids settle out of turbulent flow: one function a published formula.

``diameter`` and ``size`` in m, ``relative_density`` S = rho_s/rho_f, ``volume_fraction`` C of all solids,
``viscosity`` nu of the carrier liquid in m²/s; arrays broadcast. All were made for Newtonian carriers in turbulent
flow.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from pipeflow.arrays import Array, FloatOrArray
from pipeflow.constants import STANDARD_GRAVITY
from pipeflow.friction import Regime
from pipeflow.operability.limits import at_least
from pipeflow.operability.state import LineState
from pipeflow.sources import Source
from pipeflow.verdict import Check

DURAND_FACTOR = 1.34
"""F_L of sands coarser than 1 to 2 mm; less for finer ones, by a chart."""
PARTICLES_FALLING = 0.96
"""chi of Oroskar & Turian: share of eddies faster than the settling particles (common practice)."""
SUBLAYER = 5.0
"""Thickness of the viscous sublayer in nu/u*."""


@dataclass(frozen=True)
class Solids:
    """Particles and the liquid that carries them.

    Parameters
    ----------
    size : float or array
        m.
    relative_density : float or array
        Of the solids to the liquid.
    volume_fraction : float or array
        Of all solids in the slurry.
    viscosity : float or array
        Kinematic, of the liquid, m²/s.
    """

    size: FloatOrArray
    relative_density: FloatOrArray
    volume_fraction: FloatOrArray
    viscosity: FloatOrArray


def durand(diameter: FloatOrArray, solids: Solids) -> Array:
    """``1.34 sqrt(2 g D (S-1))`` [m/s]: coarse sand; above what finer solids need."""
    return np.asarray(DURAND_FACTOR * np.sqrt(2.0 * STANDARD_GRAVITY * np.asarray(diameter) * _excess(solids)))


def wasp(diameter: FloatOrArray, solids: Solids) -> Array:
    """``3.116 C^0.186 sqrt(2 g D (S-1)) (d/D)^(1/6)`` [m/s]."""
    relative = (solids.size / np.asarray(diameter)) ** (1.0 / 6.0)
    base = np.sqrt(2.0 * STANDARD_GRAVITY * np.asarray(diameter) * _excess(solids))
    return np.asarray(3.116 * solids.volume_fraction**0.186 * base * relative)


def oroskar_turian(diameter: FloatOrArray, solids: Solids) -> Array:
    """``1.85 C^0.1536 (1-C)^0.3564 (d/D)^-0.378 N^0.09 chi^0.30 w`` [m/s], ``w = sqrt(g d (S-1))``, ``N = D w/nu``."""
    base = np.sqrt(STANDARD_GRAVITY * solids.size * _excess(solids))
    fraction = solids.volume_fraction
    reynolds = np.asarray(diameter) * base / solids.viscosity
    crowd = 1.85 * fraction**0.1536 * (1.0 - fraction) ** 0.3564
    relative = (solids.size / np.asarray(diameter)) ** -0.378
    return np.asarray(crowd * relative * reynolds**0.09 * PARTICLES_FALLING**0.30 * base)


def thomas(diameter: FloatOrArray, solids: Solids) -> Array:
    """``9.0 [g nu (S-1)]^0.37 (D/nu)^0.11`` [m/s]: particles inside the viscous sublayer, the least any solids need."""
    nu = solids.viscosity
    return np.asarray(9.0 * (STANDARD_GRAVITY * nu * _excess(solids)) ** 0.37 * (np.asarray(diameter) / nu) ** 0.11)


def _excess(solids: Solids) -> Array:
    return np.maximum(np.asarray(solids.relative_density) - 1.0, 0.0)


@dataclass(frozen=True)
class DepositionFormula:
    """A formula with the record of its source."""

    source: Source
    velocity: Callable[[FloatOrArray, Solids], Array]


FORMULAS = {
    formula.source.key: formula
    for formula in (
        DepositionFormula(
            Source(
                key="durand",
                title="Deposition velocity of coarse sand",
                citation="Durand & Condolios (1952)",
                note="F_L = 1.34 from memory; the chart of finer solids is not read, so that it is an upper figure; "
                "an English version of 1953 is said to carry values 1.3 times as high",
            ),
            durand,
        ),
        DepositionFormula(
            Source(
                key="wasp",
                title="Deposition velocity, with the concentration and size of the solids",
                citation="Wasp, Kenny & Gandhi, Solid-Liquid Flow Slurry Pipeline Transportation (1977)",
                confidence="medium",
                note="constant 3.116 from memory; another form has 3.8 C^0.25",
            ),
            wasp,
        ),
        DepositionFormula(
            Source(
                key="oroskar-turian",
                title="Deposition velocity by the energy of the eddies",
                citation="Oroskar & Turian, AIChE J. 26, 550 (1980), the fitted form",
                note="from memory; chi = 0.96 is common practice",
            ),
            oroskar_turian,
        ),
        DepositionFormula(
            Source(
                key="thomas-sublayer",
                title="Deposition velocity of particles inside the viscous sublayer",
                citation="Thomas, A. D., Int. J. Multiphase Flow 5, 113 (1979), as in Karassik et al., Pump Handbook",
                note="the least that any solids need; the coefficient 9.0 was read",
            ),
            thomas,
        ),
    )
}


def _is_in_sublayer(size: FloatOrArray, viscosity: FloatOrArray, friction_velocity: FloatOrArray) -> NDArray[np.bool_]:
    return np.asarray(np.asarray(size) * friction_velocity < SUBLAYER * np.asarray(viscosity))


def deposition_velocity(
    diameter: FloatOrArray, solids: Solids, friction_velocity: FloatOrArray, formula: str | None = None
) -> Array:
    """Deposition velocity [m/s] by one of :data:`FORMULAS`, or by the default one of each element; all broadcast."""
    if formula is not None:
        return FORMULAS[formula].velocity(diameter, solids)
    inside = _is_in_sublayer(solids.size, solids.viscosity, friction_velocity)
    return np.where(inside, thomas(diameter, solids), oroskar_turian(diameter, solids))


def default_formula(size: FloatOrArray, viscosity: FloatOrArray, friction_velocity: float) -> str:
    """Choose a formula: Thomas for particles inside the viscous sublayer ``5 nu/u*``, else Oroskar & Turian.

    Parameters
    ----------
    size : float
        m.
    viscosity : float
        Kinematic, of the carrier, m²/s.
    friction_velocity : float
        ``u* = sqrt(tau_w/rho)``, m/s.
    """
    inside = bool(_is_in_sublayer(size, viscosity, friction_velocity))
    return "thomas-sublayer" if inside else "oroskar-turian"


def band(diameter: float, solids: Solids) -> dict[str, float]:
    """Deposition velocity by every formula, m/s."""
    return {key: float(formula.velocity(diameter, solids)) for key, formula in FORMULAS.items()}


def deposition_check(state: LineState, solids: Solids, of_size: str, formula: str | None) -> Check:
    """Hold the velocities at minimum flow against deposition; never ok for pipes that are not turbulent.

    ``of_size`` names the size the solids are judged by, as ``d85``; ``formula`` one of :data:`FORMULAS`.
    """
    flow = state.minimum
    velocity, turbulent = state.line.velocity[flow], state.regimes(flow) == Regime.TURBULENT
    friction_velocity = np.sqrt(state.line.pipes.wall_shear_stress[flow] / state.density)
    keys = [formula or default_formula(solids.size, solids.viscosity, float(u)) for u in friction_velocity]
    limits = np.array([FORMULAS[k].velocity(bore, solids) for k, bore in zip(keys, state.diameter, strict=True)])
    judged = np.where(turbulent, velocity / limits, np.inf)
    worst = int((judged if turbulent.any() else velocity / limits).argmin())
    each = ", ".join(f"{key} {figure:.3g}" for key, figure in band(float(state.diameter[worst]), solids).items())
    basis = (
        f"{state.named(worst, 'minimum')}, by {keys[worst]} with {of_size} {solids.size * 1e3:.3g} mm in the liquid "
        f"alone; constants from memory; the formulas give {each} m/s"
    )
    found = at_least("deposition", float(velocity[worst]), float(limits[worst]), "m/s", basis, keys[worst])
    if turbulent.all() or (found.status == "fail" and turbulent.any()):
        return found
    names = ", ".join(name for name, is_turbulent in zip(state.names, turbulent, strict=True) if not is_turbulent)
    said = f"{basis}; {names} not turbulent, of which these formulas say nothing: solids may settle there"
    return replace(found, status="caution", basis=said)
