"""How far the published methods lie apart: the upper figure of turbulent and transitional flow."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, fields, replace
from typing import Any

import numpy as np
from numpy.typing import NDArray

from pipeflow.arrays import Array, FloatOrArray
from pipeflow.friction.methods import FAMILY, LEFT_OUT_OF_FAMILY, TURBULENT, turbulent_method
from pipeflow.friction.solver import PipeFlow, Regime, solve_pipes
from pipeflow.friction.turbulent import TurbulentMethod
from pipeflow.rheology import Rheology
from pipeflow.rootfind import take


@dataclass(frozen=True, eq=False)
class Spread:
    """Wall shear stress by every method of the family.

    Attributes
    ----------
    upper : Array
        The highest, Pa; in laminar flow the central figure.
    by_method : dict of str to Array
        Wall shear stress by each method, Pa; nan where it is left out or has no answer.
    left_out : dict of str to str
        Why a method that knows the rheology, or the pipes here, adds nothing.
    """

    upper: Array
    by_method: dict[str, Array]
    left_out: dict[str, str]


def method_spread(
    central: PipeFlow,
    velocity: FloatOrArray,
    diameter: FloatOrArray,
    density: FloatOrArray,
    rheology: Rheology,
    *,
    roughness: FloatOrArray = 0.0,
    particle_size: FloatOrArray = np.nan,
    method: str | None = None,
    critical: str | None = None,
) -> Spread:
    """Solve the pipes that ``central`` found past laminar flow by every method of the family.

    Arguments as those that gave ``central``, whose own method is not solved again.
    """
    shape, flat = central.status.shape, _flat(central)
    past = np.flatnonzero(central.regime > Regime.LAMINAR)
    arguments = {
        "velocity": velocity,
        "diameter": diameter,
        "density": density,
        "roughness": roughness,
        "particle_size": particle_size,
    }
    picked = {key: _pick(value, shape, past) for key, value in arguments.items()}
    fluid = _pick_rheology(rheology, shape, past)
    own = turbulent_method(rheology, method)
    upper = central.wall_shear_stress.copy()
    by_method, left_out = {}, _never_in_family(rheology)
    for each in FAMILY if rheology.key != "newtonian" else ():
        key = each.source.key
        if rheology.key not in each.models:
            continue
        if each.needs_particle_size and np.all(np.isnan(particle_size)):
            left_out[key] = "it needs the d85 of the solids"
            continue
        stress = central.wall_shear_stress.copy()
        by_method[key] = stress
        if not past.size:
            continue
        found = (
            take(flat, past) if each is own else solve_pipes(**picked, rheology=fluid, method=key, critical=critical)  # type: ignore[arg-type]
        )
        inside = _within_index_range(each, rheology, found.local_flow_index)
        stress.flat[past] = np.where(inside, found.wall_shear_stress, np.nan)
        upper = np.fmax(upper, stress)
        if not inside.all():
            left_out[key] = f"it holds for {each.source.ranges[0]}"
        elif np.isnan(found.wall_shear_stress).any():
            left_out[key] = "it has no answer in some pipe"
    return Spread(np.where(np.isnan(central.wall_shear_stress), np.nan, upper), by_method, left_out)


def not_worked_out(central: PipeFlow) -> Spread:
    """Stand for a spread that was not asked for: nan, and no method."""
    return Spread(np.full(central.status.shape, np.nan), {}, {})


def _flat(flow: PipeFlow) -> PipeFlow:
    return PipeFlow(*(getattr(flow, field.name).reshape(-1) for field in fields(PipeFlow)))


def _never_in_family(rheology: Rheology) -> dict[str, str]:
    if rheology.key == "newtonian":
        return {}
    return {key: why for key, why in LEFT_OUT_OF_FAMILY.items() if rheology.key in TURBULENT[key].models}


def _within_index_range(method: TurbulentMethod, rheology: Rheology, index: Array) -> NDArray[np.bool_]:
    """Whether the index of a power law is in a method's range; no other law is held to it, since its n' varies.

    Its range of Reynolds numbers is not asked, so that the upper figure has no jump along a system curve.
    """
    bounds = [bound for bound in method.source.ranges if bound.variable == "n'" and rheology.key == "power-law"]
    if not bounds or method.source.key == "dodge-metzner":
        return np.ones(index.shape, dtype=bool)
    lower, upper = bounds[0].lower or 0.0, bounds[0].upper or np.inf
    return (index >= lower * (1.0 - 1e-9)) & (index <= upper * (1.0 + 1e-9))


def _pick(value: FloatOrArray, shape: tuple[int, ...], index: NDArray[np.intp]) -> Array:
    return np.broadcast_to(np.asarray(value, dtype=np.float64), shape).reshape(-1)[index]


def _pick_rheology(rheology: Rheology, shape: tuple[int, ...], index: NDArray[np.intp]) -> Rheology:
    parameters: Mapping[str, Any] = {
        f.name: _pick(getattr(rheology, f.name), shape, index)
        for f in fields(rheology)  # type: ignore[arg-type]
    }
    return replace(rheology, **parameters)  # type: ignore[type-var]
