"""Turbulent correlations beside the defaults, each explicit in the wall shear stress like those of ``turbulent``.

They serve to choose from, and to show how far published methods lie apart. ``K`` and ``n`` are the parameters of a
power law past its yield stress, ``R`` the radius of the pipe.
"""

from __future__ import annotations

import numpy as np

from pipeflow.arrays import Array
from pipeflow.friction.laminar import GeneralizedPowerLawTube, TubeLaw, Wall
from pipeflow.friction.turbulent import (
    Bore,
    TurbulentMethod,
    friction_velocity,
    log10,
    log_turbulence_group,
)
from pipeflow.quadrature import gauss_legendre
from pipeflow.rootfind import find_root
from pipeflow.sources import Range, Source

POWER_LAW = frozenset({"newtonian", "power-law"})
POWER_LAW_PAST_YIELD = frozenset({"newtonian", "power-law", "bingham", "herschel-bulkley"})


def torrance(wall: Wall, law: GeneralizedPowerLawTube, bore: Bore) -> Array:
    """Logarithmic law of a Herschel–Bulkley fluid (Torrance 1963); the lower of its smooth and rough forms.

    ``V/u* = 3.8/n + (2.78/n) ln[(1-phi) rho u*^(2-n) R^n/K] - 4.17``; rough ``(2.5/n) ln(R/eps) + 8.5 - 3.75/n``.
    """
    n, u, radius = law.index, friction_velocity(wall, bore), bore.diameter / 2.0
    log_reynolds = np.log(bore.density) + (2.0 - n) * np.log(u) + n * np.log(radius) - law.log_consistency
    smooth = 3.8 / n + 2.78 / n * (np.log(wall.sheared) + log_reynolds) - 4.17
    with np.errstate(divide="ignore"):
        rough = 2.5 / n * np.log(radius / bore.roughness) + 8.5 - 3.75 / n
    return u * np.minimum(smooth, rough)


def slatter_turbulent(wall: Wall, law: GeneralizedPowerLawTube, bore: Bore) -> Array:
    """Roughness Reynolds number of the solids themselves (Slatter 1994): ``d_x`` the d85, or the wall if it is rougher.

    ``Re_r = 8 rho u*²/[tau_y + K (8u*/d_x)^n]``; up to 3.32 ``V/u* = 2.5 ln(R/d_x) + 2.5 ln Re_r + 1.75``, above
    ``2.5 ln(R/d_x) + 4.75``.
    """
    u = friction_velocity(wall, bore)
    size = np.fmax(bore.particle_size, bore.roughness)
    size = np.where(np.isnan(bore.particle_size), np.nan, size)
    stress = law.yield_stress + np.exp(law.log_consistency + law.index * np.log(8.0 * u / size))
    core = 2.5 * np.log(bore.diameter / (2.0 * size))
    smooth = 2.5 * np.log(8.0 * wall.stress / stress) + 1.75
    rough = 2.5 * np.log(3.32) + 1.75
    return u * (core + np.minimum(smooth, rough))


def irvine(wall: Wall, law: TubeLaw, bore: Bore) -> Array:
    """Power form of the friction factor of smooth pipe (Irvine 1988): ``f = [D(n)/Re_MR]^(1/(3n+1))``.

    ``D(n) = 2^(n+4)/7^(7n) [4n/(3n+1)]^(3n²)``.
    """
    n = 1.0 / wall.inverse_local_index
    log_consistency = np.log(wall.stress) - n * wall.log_bulk_rate
    log_group = np.log(bore.density) + n * np.log(bore.diameter) - (n - 1.0) * np.log(8.0) - log_consistency
    log_d = (n + 4.0) * np.log(2.0) - 7.0 * n * np.log(7.0) + 3.0 * n * n * np.log(4.0 * n / (3.0 * n + 1.0))
    log_stress = (3.0 * n + 1.0) * np.log(2.0 * wall.stress / bore.density)
    return np.exp((log_stress + log_group - log_d) / (7.0 * n))


def clapp(wall: Wall, law: TubeLaw, bore: Bore) -> Array:
    """Logarithmic law of a power-law fluid in smooth pipe (Clapp 1961).

    ``1/sqrt(f) = 2.69/n - 2.95 + (4.53/n) log10[Re_MR f^(1-n/2)] + 0.68 (5n-8)/n``.
    """
    n = 1.0 / wall.inverse_local_index
    group = log_turbulence_group(wall, bore, n) / np.log(10.0)
    inverse_root = 2.69 / n - 2.95 + 4.53 / n * group + 0.68 * (5.0 * n - 8.0) / n
    return np.sqrt(2.0) * friction_velocity(wall, bore) * inverse_root


def tomita(wall: Wall, law: GeneralizedPowerLawTube, bore: Bore) -> Array:
    """Bingham plastic in smooth pipe by similar laminar and turbulent numbers (Tomita 1959).

    ``f_T = f/(1-phi)``, ``Re_T = (rho V D/mu_p)(1-phi)(phi⁴ - 4 phi + 3)/3``,
    ``1/sqrt(f_T) = 4 log10(Re_T sqrt(f_T)) - 0.4``.
    """
    plug, u = wall.plug, friction_velocity(wall, bore)
    opening = wall.sheared**2 * (3.0 + plug * (2.0 + plug)) / 3.0
    log_group = np.log(np.sqrt(2.0) * bore.density * u * bore.diameter * np.sqrt(wall.sheared) * opening)
    inverse_root = 4.0 * (log_group - law.log_consistency) / np.log(10.0) - 0.4
    return np.sqrt(2.0) * u * inverse_root / np.sqrt(wall.sheared)


def hedstrom(wall: Wall, law: GeneralizedPowerLawTube, bore: Bore) -> Array:
    """Newtonian flow at the plastic viscosity (Hedstrom 1952): a simple upper estimate for a Bingham plastic."""
    u = friction_velocity(wall, bore)
    film = 2.51 / np.sqrt(8.0) * np.exp(law.log_consistency) / (bore.density * u * bore.diameter)
    return -2.0 * np.sqrt(8.0) * u * log10(bore.roughness / (3.7 * bore.diameter) + film)


HANKS_NODES = 48
"""Leave an error of 2e-8 in the wall stress at the median of 2 000 random pipes, 2e-4 at worst (n = 0.21)."""
MIXING_STEPS = 5


def hanks(wall: Wall, law: GeneralizedPowerLawTube, bore: Bore) -> Array:
    """Mixing length in smooth pipe, damped from the critical state (Hanks & Dadia 1971; Hanks & Ricks 1975).

    Solves ``tau_y + K g^n + rho l² g² = tau_w xi`` over the section, ``xi = r/R``, then ``V = R ∫ g xi² dxi``;
    ``l = 0.36 R (1-xi) {1 - exp[-a (1-xi)]}``, ``a = (R_h - R_h,c)/(2 sqrt(2) B)``,
    ``R_h² = 2 rho D² tau_w^(2/n-1)/K^(2/n)``.
    """
    n, radius = law.index, bore.diameter / 2.0
    log_rh = 0.5 * (
        np.log(2.0 * bore.density)
        + 2.0 * np.log(bore.diameter)
        + (2.0 / n - 1.0) * np.log(wall.stress)
        - 2.0 / n * law.log_consistency
    )
    log_hedstrom = hedstrom_number(law, bore)
    damping = (np.exp(log_rh) - np.exp(_critical_log_rh(law, log_hedstrom))) / (
        2.0 * np.sqrt(2.0) * _hanks_b(n, log_hedstrom)
    )
    damping = np.maximum(damping, 0.0)
    depth, weight = _depths(_log_sublayer(wall, law, bore, damping))
    depth, weight = wall.sheared * depth, wall.sheared * weight  # 1 - xi
    length = 0.36 * radius * depth * -np.expm1(-damping * depth)
    log_excess = np.log(wall.stress * (wall.sheared - depth))
    rate = np.exp(_log_rate_with_mixing(log_excess, law, np.log(bore.density * length**2)))
    return radius * (weight * rate * (1.0 - depth) ** 2).sum(axis=0)


def _log_sublayer(wall: Wall, law: GeneralizedPowerLawTube, bore: Bore, damping: Array) -> Array:
    """Logarithm of the share of the radius where viscous stress rules, by the mixing length close to the wall."""
    log_length = np.log(0.18 * bore.diameter * damping)  # l = this times the depth squared
    viscous = law.log_consistency + (law.index - 2.0) * wall.log_rate
    return 0.25 * (viscous - np.log(bore.density) - 2.0 * log_length)


def _depths(log_sublayer: Array) -> tuple[Array, Array]:
    """Depths below the wall over (0, 1) and their weights, evenly spread in the logarithm down to the sublayer."""
    position, weight = (part[:, None] for part in gauss_legendre(HANKS_NODES))
    stretch = np.clip(6.0 - log_sublayer, 8.0, 300.0)
    grown, full = np.exp(stretch * position), np.expm1(stretch)
    return (grown - 1.0) / full, weight * stretch * grown / full


def _log_rate_with_mixing(log_excess: Array, law: GeneralizedPowerLawTube, log_mixing: Array) -> Array:
    """Solve ``K g^n + M g² = e`` for ln g: Newton in logarithms, where the sum is convex and of slope n to 2."""
    n, log_k = law.index, law.log_consistency
    y = np.minimum((log_excess - log_k) / n, (log_excess - log_mixing) / 2.0)
    for _ in range(MIXING_STEPS):
        balance = np.exp(log_mixing - log_k + (2.0 - n) * y)  # turbulent over viscous stress
        total = log_k + n * y + np.log1p(balance)
        y = y - (total - log_excess) / (n + (2.0 - n) * balance / (1.0 + balance))
    return y


def hedstrom_number(law: GeneralizedPowerLawTube, bore: Bore) -> Array:
    """``ln He``, ``He = (rho D²/tau_y)(tau_y/K)^(2/n)``; -inf without a yield stress."""
    n = law.index
    log_yield = np.log(law.yield_stress)
    return np.log(bore.density * bore.diameter**2) + (2.0 / n - 1.0) * log_yield - 2.0 / n * law.log_consistency


def hanks_ricks_log_hedstrom(log_odds: Array, n: Array) -> Array:
    """``ln He`` at which a plug ratio is critical (Hanks & Ricks 1974), by ``ln[phi_c/(1-phi_c)]``.

    ``He = (3232/n)(2+n)^((2+n)/(1+n)) [phi/(1-phi)^(1+n)]^((2-n)/n) (1-phi)^-n``.
    """
    log_open = -np.logaddexp(0.0, log_odds)  # ln(1 - phi)
    constant = np.log(3232.0 / n) + (2.0 + n) / (1.0 + n) * np.log(2.0 + n)
    return constant + (2.0 - n) / n * (log_odds - n * log_open) - n * log_open


def _critical_log_rh(law: GeneralizedPowerLawTube, log_hedstrom: Array) -> Array:
    n = law.index
    power_law = 0.5 * (np.log(6464.0 / n) + (2.0 + n) / (1.0 + n) * np.log(2.0 + n))
    yielding = np.isfinite(log_hedstrom)
    if not yielding.any():
        return power_law
    start = np.where(yielding, (log_hedstrom - np.log(16800.0)) / 3.0, np.nan)
    odds = find_root(_hanks_excess, start, np.full_like(start, 2.0), (n, log_hedstrom))
    log_plug = -np.logaddexp(0.0, -odds)
    critical = 0.5 * (np.log(2.0) + log_hedstrom + (1.0 - 2.0 / n) * log_plug)
    return np.where(yielding, critical, power_law)


def _hanks_excess(log_odds: Array, n: Array, log_hedstrom: Array) -> tuple[Array, None]:
    return hanks_ricks_log_hedstrom(log_odds, n) - log_hedstrom, None


def _hanks_b(n: Array, log_hedstrom: Array) -> Array:
    number = np.exp(log_hedstrom)
    return 22.0 / n * (1.0 + 0.00352 * number / (1.0 + 0.000504 * number) ** 2)


TORRANCE = TurbulentMethod(
    Source(
        key="torrance",
        title="Turbulent flow of Herschel–Bulkley fluids, smooth or fully rough pipe",
        citation="Torrance, South African Mech. Eng. 13, 89 (1963)",
        confidence="medium",
        note="the coefficient 2.78 is also quoted as 2.75; the lower of the smooth and the rough form is taken",
    ),
    torrance,
    POWER_LAW_PAST_YIELD,
)
SLATTER_TURBULENT = TurbulentMethod(
    Source(
        key="slatter",
        title="Turbulent flow of slurries, the solids as roughness",
        citation="Slatter, PhD thesis, University of Cape Town (1994); Hydrotransport 13 (1996)",
        note="needs the d85 of the solids, and moves 13 to 20 % for a tenfold of it",
    ),
    slatter_turbulent,
    POWER_LAW_PAST_YIELD,
    needs_particle_size=True,
)
IRVINE = TurbulentMethod(
    Source(
        key="irvine",
        title="Turbulent flow of power-law fluids in smooth pipe, explicit",
        citation="Irvine, Chem. Eng. Commun. 65, 39 (1988)",
        ranges=(Range("n'", 0.35, 0.89), Range("Re_MR", 2000, 50_000)),
        confidence="medium",
        note="stated to within 8 %; roughness is not covered",
    ),
    irvine,
    POWER_LAW,
)
CLAPP = TurbulentMethod(
    Source(
        key="clapp",
        title="Turbulent flow of power-law fluids in smooth pipe",
        citation="Clapp, Int. Dev. Heat Transfer, ASME, part III, 652 (1961)",
        ranges=(Range("n'", 0.70, 0.81), Range("Re_MR", 5500, 43_000)),
        note="roughness is not covered",
    ),
    clapp,
    POWER_LAW,
)
TOMITA = TurbulentMethod(
    Source(
        key="tomita",
        title="Turbulent flow of Bingham plastics in smooth pipe",
        citation="Tomita, Bull. JSME 2, 10 (1959)",
        confidence="medium",
        note="roughness is not covered; its power-law form lies 12 to 96 % high and is left out",
    ),
    tomita,
    frozenset({"newtonian", "bingham"}),
)
HEDSTROM = TurbulentMethod(
    Source(
        key="hedstrom",
        title="Turbulent flow of a Bingham plastic as a Newtonian liquid of its plastic viscosity",
        citation="Hedstrom, Ind. Eng. Chem. 44, 651 (1952)",
        note="an upper estimate",
    ),
    hedstrom,
    frozenset({"newtonian", "bingham"}),
)
HANKS = TurbulentMethod(
    Source(
        key="hanks",
        title="Turbulent flow by a damped mixing length, smooth pipe",
        citation=(
            "Hanks & Dadia, AIChE J. 17, 554 (1971); Hanks & Ricks, J. Hydronautics 9, 39 (1975); "
            "Hanks, AIChE J. 24 (1978)"
        ),
        confidence="medium",
        note="its damping fit reads 20 to 34 % low at Hedstrom numbers of 1e3 to 1e4; roughness is not covered",
    ),
    hanks,
    POWER_LAW_PAST_YIELD,
)
