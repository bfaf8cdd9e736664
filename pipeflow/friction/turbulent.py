"""Turbulent pipe flow: one function a published correlation, each explicit in the wall shear stress.

Every function takes the state of the fluid at the wall (:class:`~pipeflow.friction.laminar.Wall`, from its laminar
law), that law and the bore, and gives the bulk velocity in m/s. Below its zero a logarithmic law is negative; nan or a
negative velocity means that the wall stress is too low for turbulent flow of that law.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

import numpy as np

from pipeflow.arrays import Array
from pipeflow.friction.laminar import TubeLaw, Wall
from pipeflow.sources import Range, Source


@dataclass(frozen=True)
class Bore:
    """The pipe and what fills it; arrays of one shape.

    Inside diameter and roughness in m, density in kg/m³; ``particle_size`` is the d85 of the solids in m, nan where it
    is not known or there are none.
    """

    diameter: Array
    density: Array
    roughness: Array
    particle_size: Array


def friction_velocity(wall: Wall, bore: Bore) -> Array:
    """``u* = sqrt(tau_w/rho)``, m/s."""
    return np.sqrt(wall.stress / bore.density)


def log10(x: Array) -> Array:
    """Give the decimal logarithm by the natural one, of which numpy has the faster code."""
    return np.log(x) / np.log(10.0)


def colebrook_white(wall: Wall, law: TubeLaw, bore: Bore) -> Array:
    """Newtonian flow at the apparent viscosity of the wall, smooth or rough.

    ``1/sqrt(f_D) = -2 log10[(eps/D)/3.7 + 2.51/(Re sqrt(f_D))]``; ``Re sqrt(f_D) = sqrt(8) rho u* D/mu`` holds no
    velocity, so the equation is explicit in the wall stress.
    """
    u = friction_velocity(wall, bore)
    inverse_reynolds = np.exp(np.log(wall.stress / (bore.density * u * bore.diameter)) - wall.log_rate)
    film = 2.51 / np.sqrt(8.0) * inverse_reynolds
    return -2.0 * np.sqrt(8.0) * u * log10(bore.roughness / (3.7 * bore.diameter) + film)


def dodge_metzner(wall: Wall, law: TubeLaw, bore: Bore) -> Array:
    """Power-law fluids, and any other by its local n' and K' at the turbulent wall stress.

    ``1/sqrt(f) = (4/n'^0.75) log10[Re_MR f^(1-n'/2)] - 0.4/n'^1.2``. The group ``Re_MR f^(1-n'/2)`` holds no velocity.
    Roughness multiplies f by ``f_RP(eps)/f_RP(0)`` of Reed & Pilehvari, its bracket written with the same group, so
    that a smooth pipe is Dodge & Metzner's own.
    """
    n = 1.0 / wall.inverse_local_index
    group = log_turbulence_group(wall, bore, n) / np.log(10.0)
    inverse_root = 4.0 * n**-0.75 * group - 0.4 * n**-1.2
    film = n**-1.2 * np.log10(1.26) - n**-0.75 * group
    with np.errstate(divide="ignore", invalid="ignore"):
        rough = 0.27 * bore.roughness * (3.0 * n + 1.0) / (4.0 * n * bore.diameter)
        thinning = log10(rough + 10.0**film) / film
    smooth = bore.roughness == 0
    inverse_root = inverse_root * np.where(smooth, 1.0, thinning)
    valid = (n > 0) & (n < 2) & (smooth | (film < 0))
    return np.where(valid, np.sqrt(2.0) * inverse_root * friction_velocity(wall, bore), np.nan)


def log_turbulence_group(wall: Wall, bore: Bore, n: Array) -> Array:
    """``ln[Re_MR f^(1-n'/2)] = ln[rho D^n' (2 tau_w/rho)^(1-n'/2) / (8^(n'-1) K')]``."""
    log_consistency = np.log(wall.stress) - n * wall.log_bulk_rate
    return (
        np.log(bore.density)
        + n * np.log(bore.diameter)
        + (1.0 - n / 2.0) * np.log(2.0 * wall.stress / bore.density)
        - (n - 1.0) * np.log(8.0)
        - log_consistency
    )


def wilson_thomas(wall: Wall, law: TubeLaw, bore: Bore) -> Array:
    """Thickened viscous sublayer of any rheology, with the blunting of the profile by the plug of a yield fluid.

    ``V = V_N + u* [11.6 (alpha - 1) - 2.5 ln alpha - Omega]``, ``V_N`` by Colebrook & White at the apparent viscosity
    of the wall, ``Omega = -2.5 ln(1 - phi) - 2.5 phi (1 + phi/2)``.
    """
    alpha = law.dissipation_shape(wall)
    plug = wall.plug
    blunting = -2.5 * np.log(wall.sheared) - 2.5 * plug * (1.0 + 0.5 * plug)
    gain = 11.6 * (alpha - 1.0) - 2.5 * np.log(alpha) - blunting
    return colebrook_white(wall, law, bore) + friction_velocity(wall, bore) * gain


@dataclass(frozen=True)
class TurbulentMethod:
    """A correlation with the record of its source.

    ``models`` are the keys of the rheologies it was made for; ``rising`` is False where its velocity is not a rising
    function of the wall stress and only the branch above the last turning point is meant.
    """

    source: Source
    velocity: Callable[[Wall, Any, Bore], Array]
    models: frozenset[str]
    rising: bool = True
    needs_particle_size: bool = False


ALL_MODELS = frozenset(
    {
        "newtonian", "power-law", "bingham", "herschel-bulkley", "casson",
        "cross", "carreau", "sisko", "ellis", "robertson-stiff", "tangent",
    }
)  # fmt: skip

COLEBROOK_WHITE = TurbulentMethod(
    Source(
        key="colebrook-white",
        title="Turbulent flow of a Newtonian liquid, smooth or rough pipe",
        citation="Colebrook, J. Inst. Civ. Eng. 11, 133 (1939)",
        ranges=(Range("Re_MR", 4000, 1e8), Range("eps/D", 0, 0.05)),
        confidence="high",
    ),
    colebrook_white,
    frozenset({"newtonian"}),
)
DODGE_METZNER = TurbulentMethod(
    Source(
        key="dodge-metzner",
        title="Turbulent flow of power-law fluids; roughness by Reed & Pilehvari",
        citation="Dodge & Metzner, AIChE J. 5, 189 (1959); Reed & Pilehvari, SPE 25456 (1993)",
        ranges=(Range("n'", 0.36, 1.0), Range("Re_MR", 2900, 1e5)),
        confidence="high",
        note="measured to Re_MR 36 000; its roughness factor is an upper bound",
    ),
    dodge_metzner,
    ALL_MODELS,
    rising=False,
)
WILSON_THOMAS = TurbulentMethod(
    Source(
        key="wilson-thomas",
        title="Turbulent flow with a thickened sublayer; Newtonian part by Colebrook & White",
        citation="Wilson & Thomas, Can. J. Chem. Eng. 63, 539 (1985); Thomas & Wilson, 65, 335 (1987)",
        ranges=(Range("Re_MR", 2100, 1e5), Range("eps/D", 0, 1e-3)),
        confidence="high",
        note=(
            "made for smooth pipe, and the lowest of its family near transition: judge limits on the upper figure; "
            "roughness enters its Newtonian part alone, which reads some per cent low from eps/D of 0.0003 on"
        ),
    ),
    wilson_thomas,
    ALL_MODELS,
)
