"""A rotodynamic pump in a slurry: the water curve at its speed, corrected once, then put together with its equals.

The curve is read by the flow of the slurry. That makes it explicit even where the equivalent viscosity follows the flow
through the impeller: flow -> shear rate -> viscosity -> B -> flow on water.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import Literal

import numpy as np
from numpy.typing import NDArray

from pipeflow.arrays import Array, FloatOrArray
from pipeflow.constants import STANDARD_GRAVITY
from pipeflow.pumping.correction import (
    CENTISTOKE,
    HI_NPSH,
    HI_VISCOSITY,
    HIGHEST_B,
    HOUR,
    efficiency_factor,
    flow_factor,
    head_factor,
    npsh_factor,
    specific_speed,
    viscosity_parameter,
)
from pipeflow.pumping.curve import WaterCurve, at_speed
from pipeflow.pumping.equivalent import (
    APPARENT_FOR_HEAD,
    DIFFERENTIAL_FOR_EFFICIENCY,
    OUTLET_PASSAGE,
    TWICE_THE_SPEED,
    EquivalentViscosity,
    Outlet,
    equivalent_viscosity,
    passage_rate,
    twice_the_speed,
)
from pipeflow.pumping.solids import CAVE, Derating, PumpedSolids, cave, derating
from pipeflow.pumping.state import PumpState
from pipeflow.rheology.models import Rheology
from pipeflow.rootfind import find_root
from pipeflow.sources import Source

Status = Literal["as measured", "corrected", "refused"]

TEST_WATER = 1.75e-6
"""Highest kinematic viscosity of the clean cold water a pump is tested on, m²/s (ISO 9906, from memory)."""
SLOW_RATE = 100.0
"""Shear rate, 1/s, low for a pump, at which a pump without a speed asks whether a fluid is as thin as water."""
ESTABLISHED_SHARE = 0.4
"""Share of the best-efficiency flow below which a corrected head is not established."""
VENDOR_MUST_CONFIRM = (
    "the pump standard's correction is for Newtonian liquids and excludes slurries: head, efficiency and NPSH in the "
    "slurry are estimates, and the vendor must confirm them"
)


@dataclass(frozen=True, eq=False)
class Correction:
    """What stands between the water curve and the slurry's; arrays of the shape of the flow asked at.

    Attributes
    ----------
    method : str
        ``none``, ``hi-9.6.7``, ``cave`` or ``lower of hi-9.6.7 and cave``.
    viscosity : EquivalentViscosity
        Shear rate and the two kinematic viscosities.
    b_head, b_efficiency : Array
        B of the apparent viscosity, for head and flow, and of the differential one, for efficiency.
    flow_factor, head_factor, best_head_factor : Array
        The last at the best-efficiency flow, by the viscosity of this flow.
    efficiency_by_differential, efficiency_by_apparent : Array
        Factors of the efficiency by each viscosity (and no more than that of the solids, where they count).
    """

    method: str
    viscosity: EquivalentViscosity
    b_head: Array
    b_efficiency: Array
    flow_factor: Array
    head_factor: Array
    best_head_factor: Array
    efficiency_by_differential: Array
    efficiency_by_apparent: Array

    @property
    def efficiency_factor(self) -> Array:
        """The factor to report: by the differential viscosity."""
        return self.efficiency_by_differential

    @property
    def efficiency_factor_lower(self) -> Array:
        """The lower of the two, which the motor must cover."""
        return np.minimum(self.efficiency_by_differential, self.efficiency_by_apparent)


@dataclass(frozen=True, eq=False)
class SlurryCurve:
    """A pump, or equal pumps together, in a slurry; made by :func:`slurry_curve`.

    Attributes
    ----------
    water : WaterCurve
        Of one pump at its running speed.
    density : float
        kg/m³.
    rheology : Rheology
    outlet : Outlet or None
        Of the impeller; with it the shear rate follows the flow.
    solids : PumpedSolids or None
    inlet : str
        ``end`` or ``side``.
    series, parallel : int
        Equal pumps one after another, and such trains side by side.
    """

    water: WaterCurve
    density: float
    rheology: Rheology
    outlet: Outlet | None = None
    solids: PumpedSolids | None = None
    inlet: str = "end"
    series: int = 1
    parallel: int = 1

    @cached_property
    def derating(self) -> Derating:
        """Which correction applies, and why."""
        return derating(None if self.solids is None else self.solids.median_size, not self.is_thin)

    @property
    def status(self) -> Status:
        """Whether the water curve stands, was corrected, or cannot be."""
        if self.refusal:
            return "refused"
        return "as measured" if self.method == "none" else "corrected"

    @property
    def method(self) -> str:
        """Key of the correction in use."""
        if not self._is_viscous:
            return CAVE.key if self._has_solids else "none"
        return f"lower of {HI_VISCOSITY.key} and {CAVE.key}" if self._has_solids else HI_VISCOSITY.key

    @cached_property
    def refusal(self) -> str:
        """Why there are no figures in this slurry; empty where there are."""
        if not self._is_viscous:
            return ""
        if np.isnan(self._speed):
            return "its speed is not given, and the slurry is thicker than water: it cannot be corrected"
        if self.water.best_flow is None:
            return (
                "the curve has no efficiency column, so its best-efficiency flow is not known, and the slurry is "
                "thicker than the water it was measured on: it cannot be corrected"
            )
        highest = max(self._b_at_best)
        if highest < HIGHEST_B:
            return ""
        size = f"B is {highest:.3g} at its best-efficiency flow" if np.isfinite(highest) else "B is beyond all bounds"
        return (
            f"{size}; the published correction ends at {HIGHEST_B:g}, and beyond it only a test or the vendor can tell"
        )

    @cached_property
    def is_thin(self) -> bool:
        """Whether the slurry is no thicker than the water of a pump test, or B is at most 1: no viscous correction."""
        viscosity = self._viscosity(np.asarray(self._reference_flow))
        thickest = max(float(viscosity.apparent), float(viscosity.differential))
        return thickest <= TEST_WATER or (self.water.best_flow is not None and max(self._b_at_best) <= 1.0)

    @property
    def ends(self) -> tuple[float, float]:
        """First and last flow of the slurry, m³/s, of all pumps together; nan where there are no figures."""
        first, last = self._from_water(np.array(self.water.ends))
        return float(first) * self.parallel, float(last) * self.parallel

    @property
    def best_flow(self) -> float | None:
        """Flow of the slurry at the best-efficiency point, m³/s, of all pumps together; None without an efficiency."""
        if self.water.best_flow is None or self.refusal:
            return None
        return float(self._from_water(np.array([self.water.best_flow]))[0]) * self.parallel

    def state(self, flow: FloatOrArray) -> PumpState:
        """What the pumps give at flows of the slurry [m³/s], all together; nan outside the curve."""
        total = np.asarray(flow, dtype=np.float64)
        one, factors = total / self.parallel, self.correction(total)
        on_water = one / factors.flow_factor
        head = self.series * factors.head_factor * self.water.head_at(on_water)
        efficiency = self.water.efficiency_at(on_water)
        central, lower = efficiency * factors.efficiency_factor, efficiency * factors.efficiency_factor_lower
        hydraulic = self.density * STANDARD_GRAVITY * total * head
        return PumpState(
            flow=np.where(np.isfinite(head), total, np.nan),
            head=head,
            efficiency=central,
            efficiency_lower=lower,
            shaft_power=hydraulic / np.where(central > 0, central, np.nan),
            shaft_power_upper=hydraulic / np.where(lower > 0, lower, np.nan),
            npsh_required=self.water.npsh_required_at(on_water) * self._npsh_factor(factors),
            established=np.isfinite(head) & self._is_established(on_water),
        )

    def flow_and_head(self, flow: Array) -> tuple[Array, Array]:
        """Flow [m³/s] and head [m], as :func:`pipeflow.pumping.duty.duties` takes a pump."""
        state = self.state(flow)
        return state.flow, state.head

    def correction(self, flow: FloatOrArray) -> Correction:
        """The factors at flows of the slurry [m³/s], of all pumps together."""
        one = np.asarray(flow, dtype=np.float64) / self.parallel
        viscosity = self._viscosity(one)
        b_head, b_efficiency = self._b(viscosity.apparent), self._b(viscosity.differential)
        if self.refusal:
            b_head = b_efficiency = np.full(one.shape, np.nan)
        solids = self._solids_factor()
        counted = (b_head, b_efficiency) if self._is_viscous else (np.ones(one.shape), np.ones(one.shape))
        of_flow = flow_factor(counted[0])
        at_best = np.minimum(of_flow, solids)
        of_head = head_factor(counted[0], one / of_flow / self._reference_flow)
        return Correction(
            method=self.method,
            viscosity=viscosity,
            b_head=b_head,
            b_efficiency=b_efficiency,
            flow_factor=of_flow,
            head_factor=np.minimum(of_head, solids),
            best_head_factor=at_best,
            efficiency_by_differential=np.minimum(efficiency_factor(counted[1]), solids),
            efficiency_by_apparent=np.minimum(efficiency_factor(counted[0]), solids),
        )

    @property
    def sources(self) -> tuple[Source, ...]:
        """Records of the methods in use."""
        viscous: tuple[Source, ...] = ()
        if self._is_viscous:
            rate = TWICE_THE_SPEED if self.outlet is None else OUTLET_PASSAGE
            viscous = (HI_VISCOSITY, HI_NPSH, APPARENT_FOR_HEAD, DIFFERENTIAL_FOR_EFFICIENCY, rate)
        return (*viscous, CAVE) if self._has_solids else viscous

    @property
    def values_in_range(self) -> dict[str, float]:
        """The variables of the ranges of :attr:`sources`, by name and in their units, at the best-efficiency flow."""
        found = {"d50, m": self.solids.median_size} if self._has_solids and self.solids is not None else {}
        if not self._is_viscous or self.water.best_flow is None:
            return found
        head = float(self.water.best_head or np.nan) / self.water.stages
        viscosity = self._viscosity(self._flow_at_best)
        named = (
            max(self._b_at_best),
            CENTISTOKE * float(np.maximum(viscosity.apparent, viscosity.differential)),
            HOUR * self.water.best_flow,
            head,
            float(specific_speed(self._speed, self.water.best_flow, head)),
        )
        return found | dict(zip((bound.variable for bound in HI_VISCOSITY.ranges), named, strict=True))

    @property
    def _speed(self) -> float:
        return float("nan") if self.water.speed is None else self.water.speed

    @property
    def _has_solids(self) -> bool:
        return self.solids is not None and self.derating.kind != "viscous"

    @property
    def _is_viscous(self) -> bool:
        return self.derating.kind != "solids" and not self.is_thin

    @property
    def _reference_flow(self) -> float:
        """Flow on water that shares of the best-efficiency flow are of: a low one where that is not known, m³/s."""
        return ESTABLISHED_SHARE * self.water.ends[1] if self.water.best_flow is None else self.water.best_flow

    def _is_established(self, on_water: Array) -> NDArray[np.bool_]:
        if self.method == "none":
            return np.ones(on_water.shape, dtype=bool)
        best = self.water.ends[1] if self.water.best_flow is None else self.water.best_flow
        return on_water >= ESTABLISHED_SHARE * best

    def _solids_factor(self) -> float:
        if not self._has_solids or self.solids is None:
            return 1.0
        return float(cave(self.solids.median_size, self.solids.relative_density, self.solids.mass_fraction))

    def _viscosity(self, one: Array) -> EquivalentViscosity:
        """The two viscosities at flows of one pump."""
        by_speed = SLOW_RATE if np.isnan(self._speed) else twice_the_speed(self._speed)
        rate = by_speed if self.outlet is None else passage_rate(one, self.outlet)
        return equivalent_viscosity(self.rheology, self.density, np.broadcast_to(rate, np.shape(one)))

    def _b(self, kinematic_viscosity: Array) -> Array:
        """B at a viscosity, nan where the best-efficiency point is not known."""
        if self.water.best_flow is None or self.water.best_head is None:
            return np.full(np.shape(kinematic_viscosity), np.nan)
        head = self.water.best_head / self.water.stages
        return viscosity_parameter(kinematic_viscosity, self.water.best_flow, head, self._speed)

    @cached_property
    def _b_at_best(self) -> tuple[float, float]:
        """B of the apparent and of the differential viscosity at the best-efficiency point; 40 where no flow is one."""
        viscosity = self._viscosity(self._flow_at_best)
        least = 0.0 if np.isfinite(self._best_slurry_flow) else HIGHEST_B
        return max(float(self._b(viscosity.apparent)), least), max(float(self._b(viscosity.differential)), least)

    @cached_property
    def _best_slurry_flow(self) -> Array:
        """Flow of the slurry of one pump at its best-efficiency point, m³/s; nan where B is past the method's end."""
        return self._solved(np.array([self.water.best_flow or np.nan]))[0]

    @property
    def _flow_at_best(self) -> Array:
        """The same, that on water where it is nan."""
        found = self._best_slurry_flow
        return np.where(np.isfinite(found), found, self.water.best_flow or np.nan)

    def _from_water(self, on_water: Array) -> Array:
        """Flow of the slurry in one pump where it is this on water, m³/s; nan where B is past the method's end."""
        return self._solved(on_water) if self._is_viscous else on_water

    def _solved(self, on_water: Array) -> Array:
        """Solve ``q/C_Q(q) = Q_W``: an increasing function of ln q, without a figure below the root where B is 40."""
        with np.errstate(divide="ignore"):
            target = np.log(on_water)
        root = find_root(self._excess, target, np.ones_like(target), (target,))
        with np.errstate(invalid="ignore"):
            is_met = np.abs(self._excess(root, target)[0]) < 1e-9  # and not the edge of the figures
        return np.where(on_water > 0, np.where(is_met, np.exp(root), np.nan), on_water)

    def _excess(self, log_flow: Array, target: Array) -> tuple[Array, None]:
        viscosity = self._viscosity(np.exp(log_flow))
        return log_flow - np.log(flow_factor(self._b(viscosity.apparent))) - target, None

    def _npsh_factor(self, factors: Correction) -> Array:
        if not self._is_viscous or self.water.best_flow is None:
            return np.ones(factors.flow_factor.shape)
        best_npsh = self.water.npsh_required_at(self.water.best_flow)
        return npsh_factor(factors.flow_factor, best_npsh, self.water.best_flow, self._speed, self.inlet)


def slurry_curve(
    water: WaterCurve,
    speed: float,
    density: float,
    rheology: Rheology,
    *,
    outlet: Outlet | None = None,
    solids: PumpedSolids | None = None,
    inlet: str = "end",
    series: int = 1,
    parallel: int = 1,
) -> SlurryCurve:
    """Correct the water curve of one pump for a slurry.

    The curve is scaled to the running speed first, since B depends on it; then corrected; then equal pumps are put
    together.

    Parameters
    ----------
    water : WaterCurve
        Of one pump; one without a speed is taken as measured at the running speed.
    speed : float
        Running speed, rad/s; nan where it is not known, and then only liquids as thin as water are pumped.
    density : float
        Of the slurry, kg/m³.
    rheology : Rheology
        With parameters that are numbers, not arrays.
    outlet : Outlet, optional
        Of the impeller; without it the shear rate is twice the angular speed.
    solids : PumpedSolids, optional
    inlet : str
        ``end`` or ``side``.
    series, parallel : int
        Equal pumps one after another, and such trains side by side.

    Returns
    -------
    SlurryCurve
    """
    running = at_speed(water, speed)
    return SlurryCurve(running, density, rheology, outlet, solids, inlet, series, parallel)
