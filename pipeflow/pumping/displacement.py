"""Pumps of positive displacement: flow against pressure difference, slip, power, what speeds up a suction line."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from functools import cached_property

import numpy as np

from pipeflow.arrays import Array, FloatOrArray
from pipeflow.constants import STANDARD_GRAVITY
from pipeflow.pumping.curve import interpolant
from pipeflow.pumping.state import PumpState
from pipeflow.sources import Source

SLIP = Source(
    key="displacement-slip",
    title="Flow of a pump of positive displacement",
    citation="Q = Q_th - Q_slip(dp), Q_th ~ N; P = Q_th dp/eta_hm",
    confidence="exact",
    note=(
        "slip and eta_hm at one pressure difference are kept at another speed; the slip is that of the test liquid, "
        "more than a thicker slurry's, so that the flow errs low; friction in the pump rises with viscosity and is the "
        "vendor's to state"
    ),
)
GAP_SLIP = Source(
    key="gap-slip",
    title="Leakage of a power-law fluid through a plane gap",
    citation="plane Poiseuille flow: W [n b²/(2(2n+1))] [b dp/(2 K L)]^(1/n); n = 1: W b³ dp/(12 mu L)",
    confidence="exact",
    note="the walls at rest, no yield stress: scales a measured slip from one fluid to another",
)
ACCELERATION = Source(
    key="acceleration-head",
    title="Head that speeds up the suction line at each stroke of a reciprocating pump",
    citation="ANSI/HI 6.1-6.5: h_a = L V N C/(k g), N in 1/min",
    confidence="medium",
    note="C 0.4 simplex, 0.2 duplex, 0.066 triplex; k 1.4 (stiff liquid) to 2.5 (soft); no dampener",
)
CYLINDER_FACTOR = {1: 0.4, 2: 0.2, 3: 0.066}
"""C of the acceleration head by the number of cylinders, double-acting for the first two (from memory)."""
POWER_MUST_BE_CONFIRMED = (
    "power and torque of a positive-displacement pump are those in the liquid of its test: the drag in its gaps rises "
    "with viscosity, the friction of a rubber stator changes with heat, and the vendor must confirm them"
)
DEAD_HEAD = (
    "a pump of positive displacement against a shut valve or a plugged line builds pressure until something breaks: it "
    "needs a relief device of its own without a valve before it, sized and set by a licensed engineer to the local code"
)


@dataclass(frozen=True, eq=False)
class DisplacementPump:
    """A pump of positive displacement at its running speed, in a fluid.

    Attributes
    ----------
    pressure : Array
        Pressure difference, Pa, strictly rising.
    flow : Array
        m³/s, of one pump at the speed of the curve, falling.
    density : float
        Of the fluid, kg/m³: heads are metres of it.
    efficiency : Array or None
        Overall, hydraulic power over shaft power; fraction.
    npsh_required : Array or None
        m.
    curve_speed, speed : float or None
        Of the curve and the running one, rad/s; equal where either is None.
    slip_factor : Array or float
        Slip over that of the curve, at each pressure; 1 unless :func:`slip_ratio` gives another.
    parallel : int
        Equal pumps side by side.
    """

    pressure: Array
    flow: Array
    density: float
    efficiency: Array | None = None
    npsh_required: Array | None = None
    curve_speed: float | None = None
    speed: float | None = None
    slip_factor: FloatOrArray = 1.0
    parallel: int = 1

    @property
    def ends(self) -> tuple[float, float]:
        """First and last pressure difference, Pa: the parameter of this pump."""
        return float(self.pressure[0]), float(self.pressure[-1])

    @property
    def speed_ratio(self) -> float:
        """Running speed over that of the curve."""
        return 1.0 if self.speed is None or self.curve_speed is None else self.speed / self.curve_speed

    @property
    def displaced_flow(self) -> float:
        """Q_th of one pump at the speed of the curve, m³/s: its flow without pressure, by the first two rows."""
        slope = (self.flow[1] - self.flow[0]) / (self.pressure[1] - self.pressure[0])
        return float(self.flow[0] - slope * self.pressure[0])

    def slip_at(self, pressure: FloatOrArray) -> Array:
        """Slip of one pump [m³/s] at a pressure difference [Pa], nan outside the curve."""
        return self._slip(np.asarray(pressure, dtype=np.float64))

    def state(self, pressure: FloatOrArray) -> PumpState:
        """What the pumps give at pressure differences [Pa], all together; nan outside the curve or without a flow."""
        given = np.asarray(pressure, dtype=np.float64)
        displaced = self.speed_ratio * self.displaced_flow
        one = displaced - self.slip_at(given)
        flow = np.where(one >= 0, self.parallel * one, np.nan)
        power = np.where(one >= 0, self.parallel * displaced * given / self._mechanical(given), np.nan)
        efficiency = flow * given / np.where(power > 0, power, np.nan)
        return PumpState(
            flow=flow,
            head=np.where(np.isfinite(flow), given / (self.density * STANDARD_GRAVITY), np.nan),
            efficiency=efficiency,
            efficiency_lower=efficiency,
            shaft_power=power,
            shaft_power_upper=power,
            npsh_required=interpolant(self.pressure, self.npsh_required)(given),
            established=np.isfinite(flow),
        )

    def flow_and_head(self, pressure: Array) -> tuple[Array, Array]:
        """Flow [m³/s] and head [m], as :func:`pipeflow.pumping.duty.duties` takes a pump."""
        state = self.state(pressure)
        return state.flow, state.head

    def torque(self, pressure: FloatOrArray) -> Array:
        """Torque at the shaft of one pump [N m], which its speed does not change; nan without speed or efficiency."""
        speed = self.speed if self.curve_speed is None else self.curve_speed
        given = np.asarray(pressure, dtype=np.float64)
        return self.displaced_flow * given / self._mechanical(given) / (np.nan if speed is None else speed)

    @cached_property
    def _slip(self) -> Callable[[Array], Array]:
        return interpolant(self.pressure, (self.displaced_flow - self.flow) * self.slip_factor)

    @cached_property
    def _mechanical(self) -> Callable[[Array], Array]:
        """Hydraulic and mechanical efficiency, ``eta Q_th/Q`` of the curve, over the rows that have one."""
        if self.efficiency is None:
            return interpolant(self.pressure, None)
        known = (self.efficiency > 0) & (self.flow > 0)
        if np.count_nonzero(known) < 2:
            return interpolant(self.pressure, None)
        return interpolant(self.pressure[known], (self.efficiency * self.displaced_flow)[known] / self.flow[known])


def gap_leakage(
    width: FloatOrArray,
    gap: FloatOrArray,
    length: FloatOrArray,
    pressure: FloatOrArray,
    consistency: FloatOrArray,
    flow_index: FloatOrArray,
) -> Array:
    """``W [n b²/(2(2n+1))] [b dp/(2 K L)]^(1/n)`` [m³/s]: a power-law fluid through a plane gap.

    Parameters
    ----------
    width, gap, length : float or array
        W and b across the flow and L along it, m.
    pressure : float or array
        Difference along the gap, Pa.
    consistency, flow_index : float or array
        K in Pa.s^n, and n.
    """
    n, b = np.asarray(flow_index, dtype=np.float64), np.asarray(gap, dtype=np.float64)
    wall_rate = (b * pressure / (2.0 * np.asarray(consistency) * length)) ** (1.0 / n)
    return width * n * b**2 / (2.0 * (2.0 * n + 1.0)) * wall_rate


def slip_ratio(
    pressure: FloatOrArray,
    gap: FloatOrArray,
    length: FloatOrArray,
    test_viscosity: FloatOrArray,
    consistency: FloatOrArray,
    flow_index: FloatOrArray = 1.0,
) -> Array:
    """Slip of a power-law fluid over that of the liquid of the test, at each pressure [Pa] through one gap.

    Parameters
    ----------
    pressure : float or array
        Pressure difference, Pa; at zero the ratio is its limit where it has one.
    gap, length : float or array
        Of the leak, m.
    test_viscosity : float or array
        Of the liquid of the curve, Pa.s.
    consistency, flow_index : float or array
        Of the fluid, Pa.s^n and -.
    """
    given = np.maximum(np.asarray(pressure, dtype=np.float64), np.finfo(float).tiny ** 0.25)
    fluid = gap_leakage(1.0, gap, length, given, consistency, flow_index)
    return fluid / gap_leakage(1.0, gap, length, given, test_viscosity, 1.0)


def acceleration_head(
    length: FloatOrArray, velocity: FloatOrArray, speed: FloatOrArray, cylinders: int, constant: float
) -> Array:
    """``L V N C/(k g)`` [m], N in 1/min; nan for a number of cylinders without a published C.

    Parameters
    ----------
    length, velocity : float or array
        Of the suction line, m, and in it, m/s.
    speed : float or array
        Of the crank, rad/s.
    cylinders : int
        1, 2 or 3.
    constant : float
        k, 1.4 to 2.5.
    """
    factor = CYLINDER_FACTOR.get(cylinders, float("nan"))
    turns = np.asarray(speed) * 30.0 / np.pi
    return np.asarray(length) * velocity * turns * factor / (constant * STANDARD_GRAVITY)
