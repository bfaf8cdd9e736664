"""A solved line as the checks read it."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from pipeflow.arrays import Array
from pipeflow.friction import Regime
from pipeflow.line.elements import Element, Fluid, Pipe, Vessel
from pipeflow.line.fittings import EXIT, resistance
from pipeflow.line.route import LineFlow


@dataclass(frozen=True)
class LineState:
    """One line of one fluid, solved at several flows; the first axis of ``line`` is that of the flows.

    Attributes
    ----------
    minimum, maximum : int
        Places of the lowest and highest flow on that axis.
    fittings : str
        Key of the method of fitting losses.
    """

    route: Sequence[Element]
    fluid: Fluid
    source: Vessel
    destination: Vessel
    line: LineFlow
    fittings: str
    minimum: int = 1
    maximum: int = 2

    @cached_property
    def pipes(self) -> tuple[Pipe, ...]:
        """The pipes, in flow order."""
        return tuple(element for element in self.route if isinstance(element, Pipe))

    @cached_property
    def names(self) -> tuple[str, ...]:
        """Their names."""
        return tuple(pipe.name for pipe in self.pipes)

    @cached_property
    def diameter(self) -> Array:
        """Their bores, m."""
        return np.array([pipe.diameter for pipe in self.pipes], dtype=np.float64)

    @cached_property
    def length(self) -> Array:
        """Their lengths, m."""
        return np.array([pipe.length for pipe in self.pipes], dtype=np.float64)

    @cached_property
    def laminar_resistance(self) -> Array:
        """Sum of the laminar constants of each pipe's fittings."""
        return np.array([self._resistance(pipe) for pipe in self.pipes], dtype=np.float64)

    def _resistance(self, pipe: Pipe) -> float:
        counts = {key: count for key, count in pipe.fittings.items() if key != EXIT}
        return resistance(counts, pipe.diameter, pipe.nominal_diameter, self.fittings)[0]

    @cached_property
    def density(self) -> float:
        """Of the fluid, kg/m³."""
        return float(self.fluid.density)

    @cached_property
    def stress_upper(self) -> Array:
        """Wall shear stress by the highest method of the family, Pa."""
        return self.line.friction_loss_upper * self.diameter / (4.0 * self.length)

    def regimes(self, flow: int) -> NDArray[np.int8]:
        """Regime of each pipe at a flow."""
        regimes: NDArray[np.int8] = self.line.pipes.regime[flow]
        return regimes

    def moving(self, flow: int) -> bool:
        """Whether there are pipes, and the fluid moves in them."""
        return bool(self.pipes) and bool(np.all(self.regimes(flow) != Regime.NO_FLOW))

    def named(self, index: int, flow: str = "") -> str:
        """``at minimum flow, in suction line``."""
        return f"at {flow} flow, in {self.names[index]}" if flow else f"in {self.names[index]}"
