"""What a case asks of its line, held against the line solved; each check of :mod:`pipeflow.operability` in order."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from pipeflow.case.model import Case
from pipeflow.case.model import Solids as CaseSolids
from pipeflow.friction import Status
from pipeflow.line.catalogue import find_size
from pipeflow.line.elements import Vessel
from pipeflow.line.fittings import DEFAULT_METHOD
from pipeflow.line.profile import Profile
from pipeflow.line.route import LineFlow
from pipeflow.line.site import SEA_LEVEL_PRESSURE
from pipeflow.operability.deposition import Solids, deposition_check
from pipeflow.operability.entrance import entrance_check
from pipeflow.operability.limits import at_least, at_most, not_checked
from pipeflow.operability.pressures import (
    Wall,
    lowest_pressure_check,
    pressures_by_pipe,
    profile_of,
    runs_full,
    wall_checks,
)
from pipeflow.operability.product import heating_check, shear_checks
from pipeflow.operability.residence import residence_checks
from pipeflow.operability.restart import Stopped, restart_checks
from pipeflow.operability.settling import COARSE, laminar_transport_check, static_suspension_check
from pipeflow.operability.state import LineState
from pipeflow.operability.transition import margin_check
from pipeflow.rheology import mixture
from pipeflow.study.flows import MAXIMUM, MINIMUM, pipes_of, pump_position
from pipeflow.study.profile import atmospheric_pressure
from pipeflow.verdict import Check


def checks(case: Case, line: LineFlow) -> Iterator[Check]:
    """Every check that the case asks for, and those that always mean something.

    Parameters
    ----------
    case : Case
    line : LineFlow
        The case solved at design, minimum and maximum flow.
    """
    if np.any(line.pipes.status == Status.NO_ROOT):
        yield Check("solution", "fail", None, None, "", "no wall shear stress was found for some pipe and flow")
    yield from _losses(case, line)
    state = state_of(case, line)
    if not state.pipes:
        return
    yield from _velocities(case, state)
    moving = state.moving(MAXIMUM)
    if case.solids is not None and state.moving(MINIMUM):
        yield from _solids(case, state)
    elif case.solids is not None:
        yield Check(
            "deposition", "caution", 0.0, None, "m/s", "at rest at minimum flow: solids settle, and pack with time"
        )
    margin = margin_check(state) if state.moving(MINIMUM) else None
    if margin is not None:
        yield margin
    if moving:
        yield from _product(case, state)
    yield from _stopped(case, state)
    yield from _pressures(case, state)
    if moving and case.hold_times:
        yield from residence_checks(state, case.hold_times)


def state_of(case: Case, line: LineFlow) -> LineState:
    """Lay a solved case out as the checks read it."""
    return LineState(
        case.route,
        case.fluid,
        case.source or Vessel(),
        case.destination or Vessel(),
        line,
        case.methods.fittings or DEFAULT_METHOD,
        MINIMUM,
        MAXIMUM,
    )


def _losses(case: Case, line: LineFlow) -> Iterator[Check]:
    limits = case.limits
    for name, unit, limit, central, upper in (
        ("head_loss", "m", limits.head_loss, line.head_loss, line.head_loss_upper),
        ("pressure_loss", "Pa", limits.pressure_loss, line.pressure_loss, line.pressure_loss_upper),
    ):
        if limit is not None:
            yield at_most(name, float(central[MAXIMUM]), float(upper[MAXIMUM]), limit, unit, "at maximum flow")


def _velocities(case: Case, state: LineState) -> Iterator[Check]:
    velocity, limits = state.line.velocity, case.limits
    if limits.velocity_minimum is not None:
        slowest = int(velocity[MINIMUM].argmin())
        value, basis = float(velocity[MINIMUM, slowest]), state.named(slowest, "minimum")
        yield at_least("velocity_minimum", value, limits.velocity_minimum, "m/s", basis)
    if limits.velocity_maximum is not None:
        fastest = int(velocity[MAXIMUM].argmax())
        value, basis = float(velocity[MAXIMUM, fastest]), state.named(fastest, "maximum")
        yield at_most("velocity_maximum", value, value, limits.velocity_maximum, "m/s", basis)


def _solids(case: Case, state: LineState) -> Iterator[Check]:
    solids, liquid = case.solids, case.liquid
    if solids is None:
        return
    size, of_size = _size(solids)
    viscosity = liquid.viscosity if liquid else None
    needs = {"fluid.solids.d85": size, "fluid.liquid.viscosity": viscosity}
    lacking = tuple(key for key, value in needs.items() if value is None)
    density = carrier_density(case, solids)
    if solids.density <= density:
        return
    carried = carried_solids(case)
    if carried is None:
        yield not_checked("deposition", lacking, "m/s", "velocity at minimum flow against deposition")
    else:
        yield deposition_check(state, carried, of_size, case.methods.deposition)
    if size is None:
        return
    transport = laminar_transport_check(state) if size > COARSE else None
    if transport is not None:
        yield transport
    yield static_suspension_check(_static_yield_stress(case), size, of_size, (solids.density, density))


def _size(solids: CaseSolids) -> tuple[float | None, str]:
    """Size that solids are judged by, m, and its name."""
    return (solids.d85, "d85") if solids.d85 is not None else (solids.d50, "d50")


def carrier_density(case: Case, solids: CaseSolids) -> float:
    """Density of the liquid that carries the solids, kg/m³: as given, else what they leave."""
    if case.liquid and case.liquid.density:
        return case.liquid.density
    return float(mixture.liquid_density(solids.volume_fraction, solids.density, float(case.fluid.density)))


def carried_solids(case: Case) -> Solids | None:
    """Solids as the formulas of deposition take them; None where they do not sink, or something is not known."""
    solids, viscosity = case.solids, case.liquid.viscosity if case.liquid else None
    if solids is None or viscosity is None:
        return None
    size, density = _size(solids)[0], carrier_density(case, solids)
    if size is None or solids.density <= density:
        return None
    return Solids(size, solids.density / density, solids.volume_fraction, viscosity / density)


def _static_yield_stress(case: Case) -> float:
    measured = case.restart.static_yield_stress
    return dynamic_yield_stress(case) if measured is None else measured


def dynamic_yield_stress(case: Case) -> float:
    """Yield stress of the rheology, Pa."""
    return float(np.asarray(getattr(case.fluid.rheology, "yield_stress", 0.0)))


def _product(case: Case, state: LineState) -> Iterator[Check]:
    yield from shear_checks(state, case.limits.wall_shear_rate, case.limits.wall_shear_stress)
    yield entrance_check(state, case.fluid.rheology.key == "newtonian")
    heating = heating_check(state, case.specific_heat, case.limits.temperature_rise)
    if heating is not None:
        yield heating


def stopped_line(case: Case) -> Stopped | None:
    """Give the case as a stopped line; None where nothing gels and no restart is asked for."""
    restart, dynamic = case.restart, dynamic_yield_stress(case)
    measured = restart.static_yield_stress
    if measured is None and case.fluid.rheology.key == "newtonian":
        measured = 0.0
    stopped = Stopped.of(measured, dynamic, restart.factor, pump_position(case))
    asked = stopped.static_yield_stress > 0 or case.limits.restart_pressure is not None
    return stopped if asked else None


def _stopped(case: Case, state: LineState) -> Iterator[Check]:
    stopped = stopped_line(case)
    if stopped is not None:
        yield from restart_checks(state, stopped, case.limits.restart_pressure)


def _pressures(case: Case, state: LineState) -> Iterator[Check]:
    vapour = case.liquid.vapour_pressure if case.liquid else None
    if case.pipe_wall is None:
        yield not_checked("pipe_wall", ("pipe_wall",), "Pa", "pressure of the wall")
    position, atmosphere = pump_position(case), atmospheric_pressure(case)
    full: Profile | None = None
    if case.pipe_wall is not None:
        found = profile_of(state, position, (atmosphere or SEA_LEVEL_PRESSURE, vapour or 0.0))
        pressures = pressures_by_pipe(state, found, stopped_line(case), case.pipe_wall, position)
        yield from wall_checks(state, walls_of(case, state), pressures, case.pipe_wall)
        full = found if runs_full(found) else None
    lowest = lowest_pressure_check(state, full or profile_of(state, position), atmosphere, vapour)
    if lowest is not None:
        yield lowest


def walls_of(case: Case, state: LineState) -> tuple[Wall, ...]:
    """Walls of the pipes that are given by size."""
    return tuple(wall_of(case.sizes.get(name)) for name in state.names)


def wall_of(size: str | None) -> Wall:
    """Wall of a size of the catalogue; one of which nothing is known without."""
    found = find_size(size) if size else None
    return Wall(found.material, found.outside_diameter, found.wall) if found else Wall()


def allowed_pressures(case: Case) -> dict[str, float]:
    """Pressure that the wall of each pipe holds, Pa, nan where the case lacks what it takes; none without walls."""
    if case.pipe_wall is None:
        return {}
    sizes = {pipe.name: case.sizes.get(pipe.name) for pipe in pipes_of(case)}
    return {name: case.pipe_wall.allowed(name, wall_of(size))[0] for name, size in sizes.items()}
