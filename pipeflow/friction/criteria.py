"""Where laminar flow ends: one function a published criterion.

Each takes the state of the wall in laminar flow, its law and the bore, and gives the logarithm of a figure over its
critical value: negative while the flow is laminar, rising with the wall stress.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

import numpy as np

from pipeflow.arrays import Array
from pipeflow.friction.alternatives import hanks_ricks_log_hedstrom, hedstrom_number
from pipeflow.friction.laminar import GeneralizedPowerLawTube, TubeLaw, Wall
from pipeflow.friction.turbulent import ALL_MODELS, Bore, wilson_thomas
from pipeflow.sources import Range, Source

NEWTONIAN_CRITICAL = 2100.0
HIGHEST_RATIO_INDEX = 0.416
"""Index at which the Ryan–Johnson ratio is highest; below it the criterion is held, as measurements do not fall."""


@dataclass(frozen=True)
class Criterion:
    """A criterion for the end of laminar flow, with the record of its source and the rheologies it was made for."""

    source: Source
    excess: Callable[[Wall, Any, Bore], Array]
    models: frozenset[str]


def log_reynolds_mr(wall: Wall, bore: Bore) -> Array:
    """``ln Re_MR = ln(8 rho V²/tau_w)`` of laminar flow at this wall stress."""
    return np.log(bore.density * bore.diameter**2 / (8.0 * wall.stress)) + 2.0 * wall.log_bulk_rate


def critical_ryan_johnson(flow_index: Array) -> Array:
    """Critical Re_MR of a power-law fluid, scaled to 2100 at n = 1.

    Ryan & Johnson (1959): ``6464 n/(1+3n)² (2+n)^((2+n)/(1+n))``, of which 6464 is a rounding to 2099 at n = 1.
    """
    n = np.maximum(flow_index, HIGHEST_RATIO_INDEX)
    ratio = n / (1.0 + 3.0 * n) ** 2 * (2.0 + n) ** ((2.0 + n) / (1.0 + n))
    at_one = 3.0**1.5 / 16.0
    return NEWTONIAN_CRITICAL * ratio / at_one


def slatter(wall: Wall, law: TubeLaw, bore: Bore) -> Array:
    """Reynolds number Re_3 of the sheared annulus (Slatter 1995), with the model's own law in the annulus.

    ``Re_3 = 8 rho V_ann²/[tau at rate 8 V_ann/(D - D_plug)]``. Its critical value is 2100 at the plug and the
    Ryan–Johnson one, as Re_3 reads it, without a plug.
    """
    rate, stress = law.annulus(wall)
    velocity_squared = (bore.diameter * wall.sheared * rate) ** 2 / 8.0
    log_re3 = np.log(bore.density * velocity_squared / (wall.stress * stress)) + 2.0 * wall.log_rate
    n = law.flow_index(wall)
    without_plug = critical_ryan_johnson(n) * ((3.0 * n + 1.0) / (4.0 * n)) ** n
    return log_re3 - np.log(NEWTONIAN_CRITICAL * wall.plug + without_plug * wall.sheared)


def ryan_johnson(wall: Wall, law: TubeLaw, bore: Bore) -> Array:
    """Critical Re_MR of :func:`critical_ryan_johnson`."""
    return log_reynolds_mr(wall, bore) - np.log(critical_ryan_johnson(law.flow_index(wall)))


def mishra_tripathi(wall: Wall, law: TubeLaw, bore: Bore) -> Array:
    """Constant kinetic energy of the profile (Mishra & Tripathi 1971): ``Re_MR = 2100 (4n+2)(5n+3)/[3 (3n+1)²]``."""
    n = law.flow_index(wall)
    critical = NEWTONIAN_CRITICAL * (4.0 * n + 2.0) * (5.0 * n + 3.0) / (3.0 * (3.0 * n + 1.0) ** 2)
    return log_reynolds_mr(wall, bore) - np.log(critical)


def metzner_reed(wall: Wall, law: TubeLaw, bore: Bore) -> Array:
    """``Re_MR = 2100`` whatever the fluid (Metzner & Reed 1955): the earliest end of the usual criteria."""
    return log_reynolds_mr(wall, bore) - np.log(NEWTONIAN_CRITICAL)


def hanks(wall: Wall, law: GeneralizedPowerLawTube, bore: Bore) -> Array:
    """Stability parameter of Hanks (1963), for Herschel–Bulkley fluids by Hanks & Ricks (1974).

    Critical where the plug ratio gives the Hedstrom number of the pipe: ``He = (3232/n)(2+n)^((2+n)/(1+n))
    [phi/(1-phi)^(1+n)]^((2-n)/n) (1-phi)^-n``.
    """
    log_odds = np.log(law.yield_stress) - wall.log_excess
    return hedstrom_number(law, bore) - hanks_ricks_log_hedstrom(log_odds, law.index)


def slatter_wasp(wall: Wall, law: GeneralizedPowerLawTube, bore: Bore) -> Array:
    """Critical velocity of a Bingham plastic by its Hedstrom number (Slatter & Wasp 2000).

    ``Re_c = 2100`` to He = 1.7e3, ``155 He^0.35`` to 1.5e5, above that ``V_c = 26 sqrt(tau_y/rho)``.
    """
    number = np.exp(hedstrom_number(law, bore))
    middle = np.where(number < 1.7e3, NEWTONIAN_CRITICAL, 155.0 * number**0.35)
    critical = np.where(number > 1.5e5, 26.0 * np.sqrt(number), middle)
    return _log_plastic_reynolds(wall, law, bore) - np.log(critical)


def thomas(wall: Wall, law: GeneralizedPowerLawTube, bore: Bore) -> Array:
    """Critical Reynolds number of a Bingham plastic (Thomas 1963): ``Re_c = 1050 [1 + sqrt(1 + He/3000)]``."""
    number = np.exp(hedstrom_number(law, bore))
    return _log_plastic_reynolds(wall, law, bore) - np.log(1050.0 * (1.0 + np.sqrt(1.0 + number / 3000.0)))


def intersection(wall: Wall, law: TubeLaw, bore: Bore) -> Array:
    """Crossing of the laminar curve with Wilson & Thomas', but not below Re_MR = 2100.

    For yield fluids of a Hedstrom number above 1e5; without that floor a Newtonian liquid would cross near 1000.
    """
    turbulent = wilson_thomas(wall, law, bore)
    laminar = np.exp(wall.log_bulk_rate) * bore.diameter / 8.0
    crossing = np.log(laminar / np.where(turbulent > 0, turbulent, np.nan))
    return np.minimum(crossing, metzner_reed(wall, law, bore))


def _log_plastic_reynolds(wall: Wall, law: GeneralizedPowerLawTube, bore: Bore) -> Array:
    """``ln(rho V D/mu_p)`` of laminar flow at this wall stress."""
    return wall.log_bulk_rate + np.log(bore.density * bore.diameter**2 / 8.0) - law.log_consistency


POWER_LAW = frozenset({"newtonian", "power-law"})
BINGHAM = frozenset({"bingham"})

RYAN_JOHNSON = Criterion(
    Source(
        key="ryan-johnson",
        title="End of laminar flow of power-law fluids",
        citation="Ryan & Johnson, AIChE J. 5, 433 (1959)",
        note="held at its n = 0.416 value below that index, where measurements contradict its fall",
    ),
    ryan_johnson,
    POWER_LAW,
)
SLATTER = Criterion(
    Source(
        key="slatter",
        title="End of laminar flow by the Reynolds number of the sheared annulus, Re_3",
        citation="Slatter, PhD thesis, University of Cape Town (1994); Hydrotransport 13 (1996)",
        note="without a plug it is made to give the Ryan–Johnson value",
    ),
    slatter,
    ALL_MODELS,
)
CRITERIA = {
    criterion.source.key: criterion
    for criterion in (
        SLATTER,
        RYAN_JOHNSON,
        Criterion(
            Source(
                key="mishra-tripathi",
                title="End of laminar flow of power-law fluids, by the kinetic energy of the profile",
                citation="Mishra & Tripathi, Chem. Eng. Sci. 26, 915 (1971)",
            ),
            mishra_tripathi,
            POWER_LAW,
        ),
        Criterion(
            Source(
                key="metzner-reed-2100",
                title="End of laminar flow at Re_MR = 2100, whatever the fluid",
                citation="Metzner & Reed, AIChE J. 1, 434 (1955)",
                note="early for yield fluids and for n below 1",
            ),
            metzner_reed,
            ALL_MODELS,
        ),
        Criterion(
            Source(
                key="hanks",
                title="End of laminar flow of Bingham and Herschel–Bulkley fluids, by a stability parameter",
                citation="Hanks, AIChE J. 9, 306 (1963); Hanks & Ricks, J. Hydronautics 8, 163 (1974)",
                note="the earliest at high Hedstrom numbers, 0.3 to 0.9 of Slatter's velocity",
            ),
            hanks,
            frozenset({"bingham", "herschel-bulkley"}),
        ),
        Criterion(
            Source(
                key="slatter-wasp",
                title="End of laminar flow of Bingham plastics, by their Hedstrom number",
                citation="Slatter & Wasp, Transport and Sedimentation of Solid Particles 10 (2000)",
                note="Wilson & Thomas give 25 in place of 26",
            ),
            slatter_wasp,
            BINGHAM,
        ),
        Criterion(
            Source(
                key="thomas",
                title="End of laminar flow of Bingham plastics",
                citation="Thomas, D. G., AIChE J. 9, 310 (1963)",
                confidence="medium",
            ),
            thomas,
            BINGHAM,
        ),
        Criterion(
            Source(
                key="intersection",
                title="Crossing of the laminar and the Wilson–Thomas curve, not below Re_MR = 2100",
                citation="Hedstrom, Ind. Eng. Chem. 44, 651 (1952); Thomas & Wilson, Can. J. Chem. Eng. 65, 335 (1987)",
                ranges=(Range("He", 1e5, None),),
            ),
            intersection,
            frozenset({"bingham", "herschel-bulkley", "casson"}),
        ),
    )
}
DEFAULT_CRITERION = SLATTER
