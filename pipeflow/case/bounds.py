"""Which values an input may take: of its kind, and beside the other inputs of its case, as a case file is judged."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace
from typing import Final

import numpy as np
from numpy.typing import NDArray

from pipeflow.arrays import FloatOrArray
from pipeflow.case.fluid_part import DENSITY_TOLERANCE, LIGHTEST_LIQUID
from pipeflow.case.model import Case, Solids
from pipeflow.case.route_part import RELATIVE_ROUGHNESS_MAX
from pipeflow.case.schema import VACUUM
from pipeflow.line.elements import Pipe
from pipeflow.rheology import Carreau, Cross, Rheology, mixture

SLACK: Final = 1e-9
"""Share by which a value of a case may pass another that it is held against."""


@dataclass(frozen=True)
class Bounds:
    """Values that are possible, SI; the lower end belongs to them where ``with_lower``, the upper where ``with_upper``.

    An end at infinity is none. ``why_below`` and ``why_above`` say what is wrong past an end that other inputs of the
    case set.
    """

    lower: float = -math.inf
    upper: float = math.inf
    with_lower: bool = False
    with_upper: bool = False
    why_below: str = ""
    why_above: str = ""

    def hold(self, values: FloatOrArray) -> NDArray[np.bool_]:
        """Whether each value is possible."""
        given = np.asarray(values, dtype=np.float64)
        above = given >= self.lower if self.with_lower else given > self.lower
        below = given <= self.upper if self.with_upper else given < self.upper
        return np.asarray(above & below)

    def refusal(self, value: float) -> str:
        """Say why a value is not possible."""
        why = self.why_below if value <= self.lower else self.why_above if value >= self.upper else ""
        return why or f"must be {self}"

    def __str__(self) -> str:
        """``above 0``, ``0 or more``, ``above 0 and at most 2``."""
        lower = f"{self.lower:g} or more" if self.with_lower else f"above {self.lower:g}"
        upper = f"{'at most' if self.with_upper else 'below'} {self.upper:g}"
        ends = ((lower, self.lower, self.why_below), (upper, self.upper, self.why_above))
        return " and ".join(text for text, end, why in ends if math.isfinite(end) and not why) or "any number"


ANY: Final = Bounds()
POSITIVE: Final = Bounds(0.0)
NOT_NEGATIVE: Final = Bounds(0.0, with_lower=True)
FRACTION: Final = Bounds(0.0, 1.0)
INDEX: Final = Bounds(0.0, 2.0, with_upper=True)
EXPONENT: Final = Bounds(0.0, 10.0, with_upper=True)
ELLIS: Final = Bounds(1.0, 10.0, with_lower=True, with_upper=True)
COEFFICIENT: Final = Bounds(0.0, 1e6, with_lower=True, with_upper=True)
GAUGE: Final = Bounds(VACUUM, with_lower=True, why_below="below full vacuum; pressures are gauge, 0 is the atmosphere")


def at_least(end: float, why: str) -> Bounds:
    """From an end that other inputs set, which is above 0."""
    return Bounds(end * (1.0 - SLACK), with_lower=True, why_below=why) if end > 0 else POSITIVE


def at_most(end: float, why: str, least: Bounds = POSITIVE) -> Bounds:
    """Up to an end that other inputs set, from that of a kind of input."""
    return Bounds(least.lower, end * (1.0 + SLACK), least.with_lower, with_upper=True, why_above=why)


def of_pipe(pipe: Pipe) -> dict[str, Bounds]:
    """Bounds of the dimensions of a pipe by key."""
    length, rise = float(pipe.length), abs(float(pipe.rise))
    bore, roughness = float(pipe.diameter), float(pipe.roughness)
    steep = f"rises more than the pipe is long ({length:.6g} m)"
    most = RELATIVE_ROUGHNESS_MAX * bore
    rough = f"too rough: at most a tenth of the bore, {most * 1e3:.3g} mm"
    narrow = f"too narrow for a roughness of {roughness * 1e3:.3g} mm: that is at most a tenth of the bore"
    climb = length * (1.0 + SLACK)
    return {
        "diameter": at_least(roughness / RELATIVE_ROUGHNESS_MAX, narrow),
        "length": at_least(rise, f"shorter than the pipe rises ({rise:.6g} m)"),
        "rise": Bounds(-climb, climb, with_lower=True, with_upper=True, why_below=steep, why_above=steep),
        "roughness": at_most(most, rough, NOT_NEGATIVE),
        "loss_coefficient": COEFFICIENT,
    }


def of_source_level(lowest: float | None) -> Bounds:
    """Bounds of the level of the source, above the lowest one that the case gives."""
    if lowest is None:
        return ANY
    return Bounds(lowest, with_lower=True, why_below=f"below 'lowest_level', {lowest:g} m")


def of_flows(minimum: float, design: float, maximum: float) -> dict[str, Bounds]:
    """Bounds of three flows, each between its neighbours."""
    order = "minimum <= design <= maximum is needed"
    below_minimum, below_design, below_maximum = (
        at_most(end, f"more than '{key}'; {order}", NOT_NEGATIVE)
        for key, end in (("design", design), ("maximum", maximum), ("", math.inf))
    )
    above = {key: f"less than '{key}'; {order}" for key in ("minimum", "design")}
    return {
        "minimum": below_minimum,
        "design": _from(minimum, above["minimum"], below_design),
        "maximum": _from(design, above["design"], below_maximum),
    }


def _from(lower: float, why: str, bounds: Bounds) -> Bounds:
    return Bounds(lower * (1.0 - SLACK), bounds.upper, True, bounds.with_upper, why, bounds.why_above)


def of_sizes(solids: Solids) -> dict[str, Bounds]:
    """Bounds of the sizes of the solids, each beside the other."""
    finer = "85 % of the solids are finer than d85"
    return {
        "d50": POSITIVE if solids.d85 is None else at_most(solids.d85, f"more than 'd85'; {finer}"),
        "d85": at_least(solids.d50 or 0.0, f"less than 'd50'; {finer}"),
    }


def of_rheology(law: Rheology) -> dict[str, Bounds]:
    """Bounds of the parameters of a law that other parameters of it set, by name."""
    if law.key == "ellis":
        return {"exponent": ELLIS}
    if not isinstance(law, Cross | Carreau):
        return {}
    low, high = float(law.infinite_shear_viscosity), float(law.zero_shear_viscosity)
    falling = "the model is one of falling viscosity"
    found = {
        "infinite_shear_viscosity": at_most(high, f"more than 'zero_shear_viscosity'; {falling}", NOT_NEGATIVE),
        "zero_shear_viscosity": at_least(low, f"less than 'infinite_shear_viscosity'; {falling}"),
    }
    return found | _of_rising(law, found) if isinstance(law, Cross) else found


def _of_rising(law: Cross, found: dict[str, Bounds]) -> dict[str, Bounds]:
    """Bounds within which the stress of a Cross fluid rises with the rate.

    Its slope is least where ``(lambda rate)**m = (m+1)/(m-1)``, and above 0 there where
    ``eta_inf/(eta_0 - eta_inf) > (m-1)**2/(4m)``.
    """
    low, high, exponent = (float(one) for one in (law.infinite_shear_viscosity, law.zero_shear_viscosity, law.exponent))
    why = "with these parameters the shear stress falls as the shear rate rises, which no fluid does"
    share = low / (high - low) if high > low else math.inf
    steepest = (math.sqrt(share) + math.sqrt(share + 1.0)) ** 2
    bounds = {"exponent": replace(EXPONENT, upper=steepest, why_above=why) if steepest < EXPONENT.upper else EXPONENT}
    least = (exponent - 1.0) ** 2 / (4.0 * exponent)
    if exponent > 1.0:
        name, other = "infinite_shear_viscosity", "zero_shear_viscosity"
        bounds[name] = replace(found[name], lower=high * least / (1.0 + least), why_below=why)
        bounds[other] = replace(found[other], upper=low * (1.0 + 1.0 / least), why_above=why)
    return bounds


def of_density(case: Case) -> Bounds:
    """Densities of the slurry that its solids and liquid agree with.

    A measured density is uncertain by more than that: these hold for a density that is given, not for its tolerance.
    """
    if case.solids is None:
        return POSITIVE
    mixed = _mixed_of(case)
    if mixed is None:
        return _of_what_is_left(case.solids)
    why = f"solids and liquid make {mixed:.5g} kg/m3: more than 1 % apart; vary the solids, and the density follows"
    slack = DENSITY_TOLERANCE * (1.0 + SLACK)
    return Bounds(mixed * (1.0 - slack), mixed * (1.0 + slack), True, True, why, why)


def _mixed_of(case: Case) -> float | None:
    """Density that solids and liquid make; None where the liquid is what the solids leave of the density stated."""
    liquid = case.liquid
    if case.solids is None or liquid is None or liquid.density is None:
        return None
    mixed, stated = _mixed(case.solids, liquid.density), float(case.fluid.density)
    return mixed if case.density_is_mixed or not math.isclose(mixed, stated, rel_tol=1e-12) else None


def _of_what_is_left(solids: Solids) -> Bounds:
    why = "{} to hold these solids: what they leave for the liquid is {} than any"
    heaviest = math.inf if solids.fraction_given_by == "volume" else solids.density / solids.mass_fraction
    return Bounds(
        _mixed(solids, LIGHTEST_LIQUID),
        heaviest,
        with_lower=True,
        why_below=why.format("too light", "lighter"),
        why_above=why.format("too heavy", "heavier"),
    )


def _mixed(solids: Solids, liquid_density: float) -> float:
    if solids.fraction_given_by == "volume":
        return float(mixture.density_by_volume(solids.volume_fraction, solids.density, liquid_density))
    return float(mixture.density_by_mass(solids.mass_fraction, solids.density, liquid_density))
