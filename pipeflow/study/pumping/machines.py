"""A candidate pump of a case as the physics takes it: its curve at a speed, in what the line holds."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from pipeflow.case.model import Case, Pump
from pipeflow.constants import STANDARD_GRAVITY
from pipeflow.pumping.curve import WaterCurve, at_speed, in_parallel, in_series, trimmed
from pipeflow.pumping.displacement import DisplacementPump
from pipeflow.pumping.equivalent import Outlet
from pipeflow.pumping.slurry_curve import SlurryCurve, slurry_curve
from pipeflow.pumping.solids import PumpedSolids
from pipeflow.pumping.speed import TOO_FAST, speed_for
from pipeflow.rheology import Newtonian
from pipeflow.study.checks import carrier_density
from pipeflow.study.pumping.demand import Demand

Machine = SlurryCurve | DisplacementPump
CENTRIFUGAL = "centrifugal"
RATE_IN_GAPS = 1e4
"""Order of the shear rates in the gaps of a positive-displacement pump, 1/s (common practice)."""


def made(pump: Pump, case: Case, speed: float | None) -> Machine:
    """Make the pump, or the equal pumps together, at a speed, rad/s, in the fluid of the case."""
    if pump.kind != CENTRIFUGAL:
        return _of_displacement(pump, case, speed)
    in_line = pump.arrangement == "series"
    return slurry_curve(
        water_curve(pump),
        np.nan if speed is None else speed,
        float(case.fluid.density),
        case.fluid.rheology,
        outlet=_outlet(pump),
        solids=_solids(case),
        inlet=pump.inlet,
        series=pump.number if in_line else 1,
        parallel=1 if in_line else pump.number,
    )


def at_low_flow(machine: SlurryCurve) -> SlurryCurve:
    """The pump read with the shear rate of twice its speed, which holds at low flow and for one about to start."""
    return replace(machine, outlet=None)


def water_curve(pump: Pump) -> WaterCurve:
    """The curve of one pump on water, its impeller cut, at the speed of the curve."""
    table = pump.table
    efficiency, npsh = (np.array(column) if column else None for column in (table.efficiency, table.npsh_required))
    known = pump.curve_speed if pump.curve_speed is not None else pump.speed
    curve = WaterCurve(np.array(table.flow), np.array(table.head), efficiency, npsh, known, pump.stages)
    return trimmed(curve, _cut(pump))


def all_on_water(pump: Pump, speed: float | None) -> WaterCurve:
    """The curve of all pumps together on water at a speed, rad/s."""
    one = water_curve(pump) if speed is None else at_speed(water_curve(pump), speed)
    return in_series(one, pump.number) if pump.arrangement == "series" else in_parallel(one, pump.number)


def settled_speeds(pump: Pump, case: Case, demand: Demand, *, for_restart: bool) -> tuple[float | None, float | None]:
    """Speeds to run at on the central and the upper system curve, rad/s.

    Where the speed varies it is the one that gives the design flow, or else the end of its range nearest to that; the
    highest to set a line going.
    """
    if for_restart and pump.speed_maximum is not None:
        return pump.speed_maximum, pump.speed_maximum
    if pump.speed_minimum is None or pump.speed_maximum is None or case.flow.design <= 0:
        return pump.speed, pump.speed
    heads = demand.at(np.array([case.flow.design]))
    central, upper = (float(each[0]) for each in (heads.central, heads.upper))
    ends = pump.speed_minimum, pump.speed_maximum
    return _speed(pump, case, central, ends), _speed(pump, case, upper, ends)


def _speed(pump: Pump, case: Case, head: float, ends: tuple[float, float]) -> float:
    if pump.kind != CENTRIFUGAL:
        return float(np.clip(_displaced_at(pump, case, head), *ends))

    def curve_at(speed: float) -> SlurryCurve:
        machine = made(pump, case, speed)
        assert isinstance(machine, SlurryCurve)
        return machine

    found = speed_for(case.flow.design, head, curve_at, ends)
    return found.speed if found.speed is not None else ends[0] if found.reason == TOO_FAST else ends[1]


def _displaced_at(pump: Pump, case: Case, head: float) -> float:
    """Speed at which a positive-displacement pump gives the design flow against a head, m, rad/s."""
    at_curve_speed = _of_displacement(pump, case, pump.curve_speed)
    pressure = float(case.fluid.density) * STANDARD_GRAVITY * head
    one = case.flow.design / at_curve_speed.parallel + float(at_curve_speed.slip_at(pressure))
    known = pump.curve_speed if pump.curve_speed is not None else pump.speed
    if known is None or not np.isfinite(one):
        return np.inf
    return known * one / at_curve_speed.displaced_flow


def _of_displacement(pump: Pump, case: Case, speed: float | None) -> DisplacementPump:
    table = pump.table
    efficiency, npsh = (np.array(column) if column else None for column in (table.efficiency, table.npsh_required))
    return DisplacementPump(
        np.array(table.pressure),
        np.array(table.flow),
        float(case.fluid.density),
        efficiency,
        npsh,
        curve_speed=pump.curve_speed,
        speed=speed,
        slip_factor=_slip_factor(pump, case),
        parallel=pump.number,
    )


def _slip_factor(pump: Pump, case: Case) -> float:
    """Slip over that of the curve: as the viscosities of Newtonian liquids; of others as measured."""
    law = case.fluid.rheology
    if pump.test_viscosity is None or not isinstance(law, Newtonian):
        return 1.0
    return pump.test_viscosity / float(law.viscosity)


def thinner_than_tested(pump: Pump, case: Case) -> bool:
    """Whether a liquid that is not Newtonian is thinner, at the rates of narrow gaps, than that of the curve."""
    law = case.fluid.rheology
    if pump.test_viscosity is None or isinstance(law, Newtonian):
        return False
    return bool(law.apparent_viscosity(RATE_IN_GAPS) < pump.test_viscosity)


def _cut(pump: Pump) -> float:
    if pump.trimmed_diameter is None or pump.impeller_diameter is None:
        return 1.0
    return pump.trimmed_diameter / pump.impeller_diameter


def _outlet(pump: Pump) -> Outlet | None:
    if pump.outlet_width is None or pump.impeller_diameter is None:
        return None
    return Outlet(pump.trimmed_diameter or pump.impeller_diameter, pump.outlet_width)


def _solids(case: Case) -> PumpedSolids | None:
    solids = case.solids
    if solids is None or solids.d50 is None:
        return None
    return PumpedSolids(solids.d50, solids.density / carrier_density(case, solids), solids.mass_fraction)
