"""How fast particles settle, and what holds them up: at rest, hindered, and in laminar flow.

Sizes in m, densities in kg/m³, viscosities in Pa.s; every argument may be an array, they broadcast.
"""

from __future__ import annotations

import numpy as np

from pipeflow.arrays import Array, FloatOrArray
from pipeflow.constants import STANDARD_GRAVITY
from pipeflow.friction import Regime
from pipeflow.operability.limits import at_least
from pipeflow.operability.state import LineState
from pipeflow.rootfind import find_root
from pipeflow.sources import Range, Source
from pipeflow.verdict import Check

STOKES = Source(
    key="stokes",
    title="Settling velocity of a small sphere",
    citation="Stokes, Trans. Cambridge Phil. Soc. 9, 8 (1851)",
    ranges=(Range("Re_p", None, 0.3),),
)
SCHILLER_NAUMANN = Source(
    key="schiller-naumann",
    title="Settling velocity of a sphere beyond Stokes' law",
    citation="Schiller & Naumann, Z. Ver. Dtsch. Ing. 77, 318 (1935): C_D = 24 (1 + 0.15 Re^0.687)/Re",
    ranges=(Range("Re_p", None, 1000.0),),
    note="from memory; spheres, natural grains settle somewhat slower",
)
RICHARDSON_ZAKI = Source(
    key="richardson-zaki",
    title="Hindered settling: the velocity falls with a power of the liquid's share",
    citation="Richardson & Zaki, Trans. Inst. Chem. Eng. 32, 35 (1954)",
    note="exponent 4.8 for small particles in wide vessels, falling to 2.4; from memory",
)
STEINOUR = Source(
    key="steinour",
    title="Hindered settling of small spheres",
    citation="Steinour, Ind. Eng. Chem. 36, 618 (1944): e² 10^(-1.82 (1-e))",
    confidence="medium",
    note="from memory",
)
STATIC_SUSPENSION = Source(
    key="static-suspension",
    title="Yield stress that holds a particle up in a fluid at rest",
    citation="Beris et al., J. Fluid Mech. 158, 219 (1985): tau_y >= 0.048 g d (rho_s - rho_f); measured 0.05 to 0.2",
    confidence="medium",
    note="judged at 0.1, common practice; proves nothing for a fluid that is sheared, in which particles settle "
    "whatever its yield stress; vibration counts as shear",
)
LAMINAR_TRANSPORT = Source(
    key="laminar-transport-gradient",
    title="Pressure gradient that moves coarse solids in laminar flow",
    citation="Thomas (1979); Gillies et al. (1999, 2000): 1 to 2 kPa/m",
    confidence="medium",
    note="from memory; a rule of thumb, and a bed may still form slowly",
)
YIELD_GRAVITY = 0.1
"""Share of ``g d (rho_s - rho_f)`` that the yield stress must reach; band 0.048 to 0.2."""
TRANSPORT_GRADIENT = 2000.0
"""Upper end of the rule of thumb, Pa/m."""
COARSE = 100e-6
"""Size from which solids settle in laminar flow, m; 100 to 150 µm are named."""


def stokes_velocity(
    size: FloatOrArray, solids_density: FloatOrArray, liquid_density: FloatOrArray, viscosity: FloatOrArray
) -> Array:
    """``g d² (rho_s - rho_f)/(18 mu)`` [m/s]; particle Reynolds number up to some 0.3.

    Examples
    --------
    >>> round(float(stokes_velocity(1e-4, 2600.0, 1000.0, 1e-3)), 5)
    0.00872
    """
    difference = np.asarray(solids_density) - liquid_density
    return np.asarray(STANDARD_GRAVITY * np.asarray(size) ** 2 * difference / (18.0 * np.asarray(viscosity)))


def terminal_velocity(
    size: FloatOrArray, solids_density: FloatOrArray, liquid_density: FloatOrArray, viscosity: FloatOrArray
) -> Array:
    """Velocity of one sphere in a still liquid [m/s], Schiller & Naumann's drag; Re_p up to 1000.

    Solves ``Re (1 + 0.15 Re^0.687) = Re_Stokes`` for Re; nan for particles that do not sink.
    """
    stokes = stokes_velocity(size, solids_density, liquid_density, viscosity)
    scale = np.asarray(viscosity) / (np.asarray(liquid_density) * size)
    flat = np.broadcast_to(np.asarray(stokes / scale), np.broadcast_shapes(np.shape(stokes), np.shape(scale)))
    with np.errstate(invalid="ignore", divide="ignore"):
        target = np.log(np.where(flat > 0, flat, np.nan)).reshape(-1)
    root = find_root(_drag_excess, target - np.log1p(0.15 * np.exp(0.5 * target)), np.ones_like(target), (target,))
    return np.asarray(np.exp(root).reshape(flat.shape) * scale)


def _drag_excess(log_reynolds: Array, target: Array) -> tuple[Array, Array]:
    inertia = 0.15 * np.exp(0.687 * log_reynolds)
    return log_reynolds + np.log1p(inertia) - target, 1.0 + 0.687 * inertia / (1.0 + inertia)


def hindered_share(volume_fraction: FloatOrArray, exponent: FloatOrArray = 4.8) -> Array:
    """``(1-C)^exponent``: velocity among other particles over that of one alone (Richardson & Zaki)."""
    return np.asarray((1.0 - np.asarray(volume_fraction)) ** exponent)


def steinour_share(volume_fraction: FloatOrArray) -> Array:
    """``e² 10^(-1.82 (1-e))`` with the liquid's share e = 1 - C, on Stokes' velocity in the liquid alone (Steinour)."""
    liquid = 1.0 - np.asarray(volume_fraction)
    return np.asarray(liquid**2 * 10.0 ** (-1.82 * (1.0 - liquid)))


def static_yield_needed(size: FloatOrArray, solids_density: FloatOrArray, carrier_density: FloatOrArray) -> Array:
    """``0.1 g d |rho_s - rho_f|`` [Pa]: static yield stress that holds particles up in a fluid at rest."""
    return np.asarray(YIELD_GRAVITY * STANDARD_GRAVITY * size * np.abs(np.asarray(solids_density) - carrier_density))


def laminar_transport_check(state: LineState) -> Check | None:
    """Hold the gradient of pipes that are not turbulent at minimum flow against the rule for coarse solids."""
    flow = state.minimum
    slow = np.flatnonzero(state.regimes(flow) != Regime.TURBULENT)
    if not slow.size:
        return None
    gradient = (state.line.friction_loss[flow] / state.length)[slow]
    worst = int(slow[gradient.argmin()])
    basis = (
        f"{state.named(worst, 'minimum')}; a rule of thumb, 1 to 2 kPa/m, common practice; the yield stress does not "
        "hold solids up under shear"
    )
    value = float(gradient.min())
    return at_least(
        "laminar_transport", value, TRANSPORT_GRADIENT, "Pa/m", basis, LAMINAR_TRANSPORT.key, below="caution"
    )


def static_suspension_check(yield_stress: float, size: float, of_size: str, densities: tuple[float, float]) -> Check:
    """Hold a yield stress, Pa, against the one that keeps particles up at rest; densities of solids and liquid."""
    needed = float(static_yield_needed(size, *densities))
    basis = (
        f"{of_size} {size * 1e3:.3g} mm in the fluid at rest, at 0.1 g d (rho_s - rho_f), common practice (0.048 to "
        "0.2); proves nothing under shear"
    )
    return at_least("static_suspension", yield_stress, needed, "Pa", basis, STATIC_SUSPENSION.key, below="caution")
