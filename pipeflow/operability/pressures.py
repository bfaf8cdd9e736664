"""The pressures a line must stand: lowest points, pipe wall, sudden stop."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, replace

import numpy as np

from pipeflow.arrays import Array
from pipeflow.constants import STANDARD_GRAVITY
from pipeflow.line.elements import Pipe
from pipeflow.line.profile import Profile, profile
from pipeflow.line.site import SEA_LEVEL_PRESSURE
from pipeflow.operability.limits import at_most, not_checked
from pipeflow.operability.pipe_wall import (
    B31_3,
    B31_4,
    JOUKOWSKY,
    RATED,
    WALL_MODULUS,
    WATER_MODULUS,
    pressure_b31_3,
    pressure_b31_4,
    surge_pressure,
    thickness_left,
    wave_speed,
)
from pipeflow.operability.restart import Stopped
from pipeflow.operability.state import LineState
from pipeflow.verdict import Check, Status

METHOD_KEYS = (B31_3.key, B31_4.key, RATED.key)
PEOPLE = "local codes and a licensed engineer settle the wall"


@dataclass(frozen=True)
class Wall:
    """A pipe's wall: material, outside diameter and nominal thickness in m; None where not known."""

    material: str | None = None
    outside_diameter: float | None = None
    thickness: float | None = None


@dataclass(frozen=True)
class WallInputs:
    """What holds the pressure; SI, None where the case does not say."""

    code: str | None = None
    allowable_stress: float | None = None
    yield_strength: float | None = None
    design_factor: float | None = None
    joint_factor: float | None = None
    weld_factor: float | None = None
    coefficient_y: float | None = None
    mill_tolerance: float = 0.0
    corrosion_allowance: float = 0.0
    wear_allowance: float = 0.0
    pressure_rating: float | None = None
    temperature_derating: float | None = None
    shut_in_pressure: float | None = None
    closure_time: float | None = None
    bulk_modulus: float | None = None
    elastic_modulus: float | None = None

    def allowed(self, name: str, wall: Wall) -> tuple[float, str]:
        """Pressure that a pipe's wall holds, Pa, and by which method; or nan, and the case key that it needs."""
        if wall.material in ("polyethylene", None) or self.code is None:
            return self._rated("pipe_wall.pressure_rating" if wall.material == "polyethylene" else "pipe_wall.code")
        if wall.thickness is None or wall.outside_diameter is None:
            return np.nan, f"route[{name}].size"
        left = thickness_left(wall.thickness, self.mill_tolerance, self.corrosion_allowance + self.wear_allowance)
        joint = self.joint_factor or 1.0
        if self.code == "B31.3":
            return self._b31_3(float(left), wall.outside_diameter, joint)
        if self.yield_strength is None:
            return np.nan, "pipe_wall.yield_strength"
        factors = {"design_factor": self.design_factor or 0.72, "joint_factor": joint}
        return float(pressure_b31_4(left, wall.outside_diameter, self.yield_strength, **factors)), B31_4.key

    def _rated(self, lacking: str) -> tuple[float, str]:
        if self.pressure_rating is None:
            return np.nan, lacking
        return self.pressure_rating * (self.temperature_derating or 1.0), RATED.key

    def _b31_3(self, left: float, outside: float, joint: float) -> tuple[float, str]:
        if self.allowable_stress is None:
            return np.nan, "pipe_wall.allowable_stress"
        if left >= outside / 6.0:  # beyond the form
            return self._rated("pipe_wall.pressure_rating")
        coefficient = 0.4 if self.coefficient_y is None else self.coefficient_y
        factors = {"joint_factor": joint, "weld_factor": self.weld_factor or 1.0, "coefficient": coefficient}
        return float(pressure_b31_3(left, outside, self.allowable_stress, **factors)), B31_3.key


def profile_of(state: LineState, pump_position: int, absolute: tuple[float, float] | None = None) -> Profile:
    """Pressures of the line run full; with the atmosphere and the vapour pressure, Pa, as its high points ask for."""
    atmosphere, vapour = absolute or (None, None)
    return profile(
        state.line,
        state.fluid,
        state.route,
        state.source,
        state.destination,
        pump_position=pump_position,
        atmospheric_pressure=atmosphere,
        vapour_pressure=vapour,
    )


def runs_full(found: Profile) -> bool:
    """Whether no high point asks for more than the destination does: the pressures are then those of a full line."""
    slack = found.central.slack
    return slack is not None and bool(np.all(slack.governing == len(found.nodes) - 1))


def lowest_pressure_check(
    state: LineState, found: Profile, atmosphere: float | None, vapour: float | None
) -> Check | None:
    """Look for places below the atmosphere, and for boiling where the vapour pressure is known.

    ``atmosphere`` and ``vapour`` are absolute, Pa. Without them only a line that falls below the atmosphere is told.
    """
    pressure = found.along_route(found.central, state.density).round(6)
    flow, node = np.unravel_index(int(pressure.argmin()), pressure.shape)
    value = float(pressure[flow, node])
    needs = tuple(key for key, one in (("site", atmosphere), ("fluid.liquid.vapour_pressure", vapour)) if one is None)
    at = f"gauge, of the full line, at {found.nodes[int(node) + 1]}"
    if value <= -SEA_LEVEL_PRESSURE and (atmosphere is None or vapour is None):
        basis = f"{at}; no line holds less than a vacuum: it runs slack"
        return Check("lowest_pressure", "fail", value, -SEA_LEVEL_PRESSURE, "Pa", basis, sense="at least")
    if atmosphere is None or vapour is None:
        return not_checked("lowest_pressure", needs, "Pa", at, value) if value < 0 or len(needs) == 1 else None
    limit = vapour - atmosphere
    status: Status = "fail" if value <= limit else "caution" if value < 0 else "ok"
    basis = f"{at}; below {limit / 1e3:.4g} kPa it boils and the line runs slack, below 0 it draws air through leaks"
    return Check("lowest_pressure", status, value, limit, "Pa", basis, sense="at least")


def pressures_by_pipe(
    state: LineState, found: Profile, stopped: Stopped | None, inputs: WallInputs, pump_position: int
) -> dict[str, Array]:
    """Highest pressure in each pipe, Pa: running, at restart, shut in."""
    at = [index for index, element in enumerate(state.route) if isinstance(element, Pipe)]
    starts = np.array([2 + 2 * index for index in at])
    ends = starts + 1
    running = np.maximum(found.upper.pressure[:, starts], found.upper.pressure[:, ends]).max(axis=0)
    elevation = found.elevation[state.maximum]
    lowest = np.minimum(elevation[starts], elevation[ends])
    weight = state.density * STANDARD_GRAVITY
    after_pump = np.array(at) >= pump_position
    pressures = {"running": running}
    if stopped is not None:
        demand = stopped.demand(state)
        pressures["at restart"] = np.where(after_pump, np.maximum(demand[:-1], demand[1:]), -np.inf)
    if inputs.shut_in_pressure is not None:
        shut = inputs.shut_in_pressure + weight * (elevation[2 + 2 * pump_position - 1] - lowest)
        pressures["shut in"] = np.where(after_pump, shut, -np.inf)
    return pressures


def wall_checks(
    state: LineState, walls: tuple[Wall, ...], pressures: dict[str, Array], inputs: WallInputs
) -> Iterator[Check]:
    """Hold the wall of each pipe against the worst of its pressures; the sudden stop is told apart."""
    allowed = [inputs.allowed(name, wall) for name, wall in zip(state.names, walls, strict=True)]
    limits = np.array([limit for limit, _ in allowed])
    lacking = tuple(dict.fromkeys(key for _, key in allowed if key not in METHOD_KEYS))
    if lacking and not np.any(np.isfinite(limits)):
        yield not_checked("pipe_wall", lacking, "Pa", "pressure of the wall")
        return
    if "shut in" not in pressures:
        lacking += ("pipe_wall.shut_in_pressure",)
    found = _worst_wall(state, allowed, pressures)
    if lacking and found.status == "ok":
        found = replace(
            found, status="not checked", basis=f"{found.basis}; needs {' and '.join(lacking)}", needs=lacking
        )
    yield found
    if not lacking or lacking == ("pipe_wall.shut_in_pressure",):
        yield _surge(state, walls, pressures["running"], limits, inputs)


def _worst_wall(state: LineState, allowed: list[tuple[float, str]], pressures: dict[str, Array]) -> Check:
    """Judge the pipe nearest its limit; one with nothing left of its wall is the worst there is."""
    limits = np.array([_or_extreme(limit, key) for limit, key in allowed])
    every = np.stack(list(pressures.values()))
    ratio = every / limits
    which, worst = (int(place) for place in np.unravel_index(int(ratio.argmax()), ratio.shape))
    basis = f"{list(pressures)[which]}, {state.named(worst)}; {PEOPLE}"
    value, (limit, source) = float(every[which, worst]), allowed[worst]
    if np.isnan(limit):
        said = f"{basis}; nothing is left of the wall after its allowances"
        return Check("pipe_wall", "fail", value, None, "Pa", said, source=source)
    return at_most("pipe_wall", value, value, limit, "Pa", basis, source)


def _or_extreme(limit: float, key: str) -> float:
    """Put a limit that is not known beyond any pressure, and that of a wall worn through below."""
    return 1e100 if key not in METHOD_KEYS else 1e-100 if np.isnan(limit) else limit


def _surge(state: LineState, walls: tuple[Wall, ...], running: Array, limits: Array, inputs: WallInputs) -> Check:
    rises = [_rise(state, wall, index, inputs) for index, wall in enumerate(walls)]
    needs = tuple(f"route[{name}].size" for name, rise in zip(state.names, rises, strict=True) if np.isnan(rise))
    if needs:
        return not_checked("surge", needs, "Pa", "sudden stop; the wave needs the wall", None, JOUKOWSKY.key)
    total = running + np.array(rises)
    worst = int((total / limits).argmax())
    assumed = "" if inputs.closure_time else "stopped at once; "
    value = float(total[worst])
    basis = (
        f"running and {rises[worst] / 1e3:.4g} kPa of a sudden stop, {state.named(worst)}; {assumed}an estimate, not a "
        f"surge study; {PEOPLE}"
    )
    found = at_most("surge", value, value, float(limits[worst]), "Pa", basis, JOUKOWSKY.key)
    return found if found.status == "ok" else replace(found, status="caution")


def _rise(state: LineState, wall: Wall, index: int, inputs: WallInputs) -> float:
    if wall.thickness is None or wall.material is None:
        return np.nan
    modulus = inputs.elastic_modulus or WALL_MODULUS[wall.material]
    speed = wave_speed(
        state.density,
        float(state.diameter[index]),
        wall.thickness,
        wall_modulus=modulus,
        bulk_modulus=inputs.bulk_modulus or WATER_MODULUS,
    )
    velocity = float(state.line.velocity[state.maximum, index])
    return float(surge_pressure(state.density, velocity, speed, state.length.sum(), inputs.closure_time or 0.0))
