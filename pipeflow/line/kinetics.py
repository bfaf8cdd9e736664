"""How unevenly a pipe flows: kinetic-energy factor, momentum factor, and the greatest velocity over the mean.

With ``w = u/u_max`` the moments ``M_k = Int w^k dA/A`` of the velocity profile give ``alpha = M_3/M_1³``
(Coriolis), ``beta = M_2/M_1²`` (Boussinesq) and ``u_max/V = 1/M_1``. A kinetic head is ``alpha V²/(2 g)``.
Some texts on foods use ``2/alpha`` under the same name.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import singledispatch

import numpy as np

from pipeflow.arrays import Array, FloatOrArray
from pipeflow.friction import PipeFlow, Regime
from pipeflow.friction.laminar import CassonTube, GeneralizedPowerLawTube, TubeLaw, Wall
from pipeflow.friction.tube import tube_law
from pipeflow.quadrature import gauss_legendre
from pipeflow.rheology import Rheology
from pipeflow.sources import Source

KINETIC_FACTORS = Source(
    key="kinetic-factors",
    title="Kinetic-energy and momentum factors of laminar flow, integrated over the velocity profile",
    citation="Coriolis (1836); Boussinesq (1877); power law: Metzner & Reed, AIChE J. 1, 434 (1955)",
    confidence="exact",
    note="in turbulent flow 1, as published loss constants have it",
)
LOGARITHMIC_PROFILE = Source(
    key="logarithmic-profile",
    title="Kinetic-energy and momentum factors of turbulent flow, from the logarithmic velocity profile",
    citation="Prandtl (1933), von Karman constant 0.4, the profile taken over the whole section",
    confidence="high",
    note="not used in losses",
)
VON_KARMAN = 0.4
ALMOST_AT_REST = -60.0
"""Logarithm of a stress so small that every law without a yield stress is at its limit of no flow."""


@dataclass(frozen=True, eq=False)
class KineticFactors:
    """Dimensionless factors of a velocity profile, arrays of one shape.

    Attributes
    ----------
    energy : Array
        ``alpha``: kinetic energy carried over that of an even flow, 1 for a plug, 2 for a Newtonian fluid.
    momentum : Array
        ``beta``: momentum carried over that of an even flow, 1 and 4/3.
    maximum_velocity : Array
        ``u_max/V``, 1 and 2.
    """

    energy: Array
    momentum: Array
    maximum_velocity: Array


def _from_moments(first: Array, second: Array, third: Array) -> KineticFactors:
    return KineticFactors(third / first**3, second / first**2, 1.0 / first)


@singledispatch
def laminar_factors(law: TubeLaw, wall: Wall) -> KineticFactors:
    """Kinetic factors of laminar flow.

    A law registers its closed form here; any other is integrated from its shear rate.

    Parameters
    ----------
    law : TubeLaw
    wall : Wall
        The fluid at the wall, arrays of any shape.
    """
    return integrated_factors(law, wall)


@laminar_factors.register
def _(law: GeneralizedPowerLawTube, wall: Wall) -> KineticFactors:
    return generalized_power_law_factors(wall.plug, law.index)


@laminar_factors.register
def _(law: CassonTube, wall: Wall) -> KineticFactors:
    return casson_factors(wall.plug)


def generalized_power_law_factors(plug: FloatOrArray, flow_index: FloatOrArray) -> KineticFactors:
    """Kinetic factors of ``tau = tau_y + K rate**n``: Newtonian, power-law, Bingham, Herschel–Bulkley fluids.

    Past the plug ``w = 1 - x^m`` with ``m = (n+1)/n`` and x from 0 at the plug to 1 at the wall, so that
    ``M_k = phi² + 2 (1-phi) [phi A_k + (1-phi) B_k]``, ``A_k = Int (1-x^m)^k dx`` and ``B_k = Int x (1-x^m)^k
    dx``: products of positive terms, without cancellation. Without a plug ``alpha = 3
    (3n+1)²/((2n+1)(5n+3))`` and ``beta = (3n+1)/(2n+1)``.

    Parameters
    ----------
    plug : float or array
        ``phi = tau_y/tau_w``, from 0 to 1.
    flow_index : float or array
        n, above 0.

    Examples
    --------
    >>> float(generalized_power_law_factors(0.0, 1.0).energy)
    2.0
    """
    phi, n = np.asarray(plug, dtype=np.float64), np.asarray(flow_index, dtype=np.float64)
    sheared, m = 1.0 - phi, (n + 1.0) / n

    def moment(k: int) -> Array:
        even, weighted = _beta_product(m, 1.0, k), _beta_product(m, 2.0, k)
        return phi**2 + 2.0 * sheared * (phi * even + sheared * weighted)

    return _from_moments(moment(1), moment(2), moment(3))


def _beta_product(m: Array, power: float, k: int) -> Array:
    """``Int_0^1 x^(power-1) (1 - x^m)^k dx``, a beta function of whole k."""
    value = np.ones_like(m) / power
    for factor in range(1, k + 1):
        value = value * (factor * m / (factor * m + power))
    return value


def casson_factors(plug: FloatOrArray) -> KineticFactors:
    """Kinetic factors of Casson's fluid.

    In ``y = sqrt(r/R) = s + (1-s) z``, ``s = sqrt(phi)``, the profile past the plug is the polynomial ``w =
    [4 s (1-z³) + 3 (1-s) (1-z⁴)]/(3 + s)`` and ``M_k = s⁴ + 4 (1-s) Int y³ w^k dz``; eight Gauss–Legendre
    points integrate its degree of 15 exactly, and every term is positive.

    Parameters
    ----------
    plug : float or array
        ``phi = tau_y/tau_w``, from 0 to 1.
    """
    s = np.sqrt(np.asarray(plug, dtype=np.float64))[..., None]
    z, weight = gauss_legendre(8)
    y = s + (1.0 - s) * z
    w = (4.0 * s * (1.0 - z**3) + 3.0 * (1.0 - s) * (1.0 - z**4)) / (3.0 + s)

    def moment(k: int) -> Array:
        return np.asarray((s**4)[..., 0] + (4.0 * (1.0 - s) * y**3 * w**k * weight).sum(axis=-1))

    return _from_moments(moment(1), moment(2), moment(3))


POINTS = 40


def integrated_factors(law: TubeLaw, wall: Wall) -> KineticFactors:
    """Kinetic factors of any law, from its shear rate at the stresses between plug and wall.

    The velocity at a point is the integral of the shear rate from there to the wall. Both integrals run over
    ``x = t²`` from the plug to the wall, at the Gauss–Legendre points of t and the polynomial through them.
    """
    t, weight = gauss_legendre(POINTS)
    rate = np.stack([np.exp(law.wall(wall.log_excess + 2.0 * np.log(one)).log_rate - wall.log_rate) for one in t])
    velocity = np.tensordot(_integrals_to_the_wall(t), (rate.T * 2.0 * t).T, axes=1)
    greatest = np.tensordot(weight, (rate.T * 2.0 * t).T, axes=1)
    w = velocity / greatest
    spread = (slice(None),) + (None,) * wall.plug.ndim
    area = 2.0 * wall.sheared * (wall.plug + wall.sheared * t[spread] ** 2) * 2.0 * t[spread]

    def moment(k: int) -> Array:
        sheared = np.tensordot(weight, area * w**k, axes=1)
        return np.asarray(wall.plug**2 + np.where(wall.sheared == 0.0, 0.0, sheared))

    return _from_moments(moment(1), moment(2), moment(3))


def _integrals_to_the_wall(t: Array) -> Array:
    """Matrix from values at the points to integrals, from each point to 1, of the polynomial through them."""
    legendre = np.polynomial.legendre
    basis = legendre.legvander(2.0 * t - 1.0, POINTS - 1)
    integral = np.stack([legendre.legval(2.0 * t - 1.0, legendre.legint(row, lbnd=1)) for row in np.eye(POINTS)])
    return np.asarray(-0.5 * integral.T @ np.linalg.inv(basis))


def turbulent_factors(fanning_factor: FloatOrArray) -> KineticFactors:
    """Kinetic factors of turbulent flow with the logarithmic profile ``u = u_max + (u*/0.4) ln(y/R)``.

    With ``e = sqrt(f/2)/0.4``: ``alpha = 1 + 15/4 e² - 9/4 e³``, ``beta = 1 + 5/4 e²``, ``u_max/V = 1 + 3/2
    e``. The profile is that of a Newtonian liquid; a plug or shear thinning make it flatter.

    Parameters
    ----------
    fanning_factor : float or array
        f, up to some 0.02; Re_MR above that of transition.
    """
    e = np.sqrt(np.asarray(fanning_factor) / 2.0) / VON_KARMAN
    return KineticFactors(1.0 + 3.75 * e**2 - 2.25 * e**3, 1.0 + 1.25 * e**2, 1.0 + 1.5 * e)


def laminar_state(flow: PipeFlow, rheology: Rheology) -> KineticFactors:
    """Kinetic factors that each pipe would have in laminar flow; at rest the limit as the flow starts.

    Parameters
    ----------
    flow : PipeFlow
    rheology : Rheology
        Its parameters broadcast to the shape of ``flow``.
    """
    stress = flow.laminar_wall_shear_stress

    def flat(values: object) -> Array:
        return np.broadcast_to(np.asarray(values, dtype=np.float64), stress.shape).reshape(-1)

    with np.errstate(all="ignore"):
        law = tube_law(rheology, flat)
        factors = laminar_factors(law, law.wall(_log_excess(flat(stress), law.yield_stress)))
    sound = np.isfinite(stress)
    return KineticFactors(*(np.where(sound, values.reshape(stress.shape), np.nan) for values in vars(factors).values()))


def _log_excess(stress: Array, yield_stress: Array) -> Array:
    """``ln(tau_w - tau_y)``; at rest that of a full plug, or of a stress so small that the law is at its limit."""
    excess = stress - yield_stress
    at_rest = np.where(yield_stress > 0, -np.inf, ALMOST_AT_REST)
    return np.where(excess <= 0, at_rest, np.log(excess))


def turbulent_share(flow: PipeFlow, velocity: Array) -> Array:
    """Place in the transition along ln V, 0 up to its laminar edge and 1 from its turbulent one."""
    inside = flow.regime == Regime.TRANSITIONAL
    with np.errstate(all="ignore"):
        start, end = np.log(flow.critical_velocity), np.log(flow.turbulent_velocity)
        along = (np.log(velocity) - start) / (end - start)
    share = np.where(inside, along, np.where(flow.regime == Regime.TURBULENT, 1.0, 0.0))
    return np.where(np.isfinite(flow.wall_shear_stress), share, np.nan)


def pipe_factors(flow: PipeFlow, velocity: Array, density: FloatOrArray, rheology: Rheology) -> KineticFactors:
    """Kinetic factors of the profile in each pipe: laminar, logarithmic, and along ln V in the transition.

    For residence times and kinetic energy; losses take turbulent flow as even (:func:`loss_factors`).
    """
    share = turbulent_share(flow, velocity)
    laminar = laminar_state(flow, rheology)
    with np.errstate(all="ignore"):
        turbulent = turbulent_factors(2.0 * flow.wall_shear_stress / (density * velocity**2))
    return _between(laminar, turbulent, share)


def loss_factors(flow: PipeFlow, velocity: Array, rheology: Rheology) -> KineticFactors:
    """Kinetic factors that losses are written with: laminar, 1 in turbulent flow, along ln V between them.

    Published constants of turbulent losses (``(1-s)²``, 1 for an exit) stand for even flow, with the effect
    of the profile in them.
    """
    laminar, share = laminar_state(flow, rheology), turbulent_share(flow, velocity)
    even = np.ones_like(share)
    return _between(laminar, KineticFactors(even, even, even), share)


def _between(laminar: KineticFactors, turbulent: KineticFactors, share: Array) -> KineticFactors:
    pairs = zip(vars(laminar).values(), vars(turbulent).values(), strict=True)
    return KineticFactors(*(np.where(share > 0, low + share * (high - low), low + 0.0 * share) for low, high in pairs))
