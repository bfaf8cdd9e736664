"""The line of a case over samples of its inputs, in one solution: the figures of it."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Final

import numpy as np

from pipeflow.arrays import Array, FloatOrArray
from pipeflow.case.model import Case
from pipeflow.case.varying import VariedCase, varied
from pipeflow.constants import STANDARD_GRAVITY
from pipeflow.line.elements import Pipe
from pipeflow.line.route import LineFlow
from pipeflow.study.flows import solved
from pipeflow.study.sampling.inputs import METHOD

HEAD_LOSS: Final = "head_loss"
TOTAL_HEAD: Final = "total_head"
POWER: Final = "hydraulic_power"


@dataclass(frozen=True, eq=False)
class SampledLine:
    """A line solved at one flow of every sample, SI.

    Attributes
    ----------
    case : Case
    given : VariedCase
        Its inputs.
    flow : float or Array
        m³/s.
    line : LineFlow
        By the central and the upper method.
    share : float or Array
        Place between the two, 0 to 1.
    """

    case: Case
    given: VariedCase
    flow: FloatOrArray
    line: LineFlow
    share: FloatOrArray

    @classmethod
    def of(cls, case: Case, given: VariedCase, flow: FloatOrArray, share: FloatOrArray | None) -> SampledLine:
        """Solve it; by the central method alone where no place between the two is given."""
        line = solved(given, case.methods, flow, with_edges=False, with_upper=share is not None)
        return cls(case, given, flow, line, 0.0 if share is None else share)

    @property
    def pipes(self) -> list[Pipe]:
        """The pipes, in flow order."""
        return [element for element in self.given.route if isinstance(element, Pipe)]

    @property
    def stress_ratio(self) -> Array:
        """Wall shear stress over the central one, ``(upper/central)^share``; a pipe a column."""
        lost = self.line.friction_loss
        with np.errstate(all="ignore"):
            upper = np.where(lost == 0, 1.0, self.line.friction_loss_upper / lost)
        return np.asarray(upper ** np.asarray(self.share)[..., None])

    @property
    def wall_shear_stress(self) -> Array:
        """Pa, a pipe a column."""
        return self.line.pipes.wall_shear_stress * self.stress_ratio

    @property
    def pressure_loss(self) -> Array:
        """Friction, fittings and equipment, Pa."""
        more = self.line.friction_loss * (self.stress_ratio - 1.0)
        return np.asarray(self.line.pressure_loss + more.sum(axis=-1))

    @property
    def weight(self) -> FloatOrArray:
        """``rho g``, N/m³."""
        return self.given.fluid.density * STANDARD_GRAVITY

    @property
    def head_loss(self) -> Array:
        """The pressure loss in metres of the slurry."""
        return self.pressure_loss / self.weight

    @property
    def total_head(self) -> Array:
        """Head loss and static head, m."""
        return self.head_loss + self.line.static_head

    @property
    def hydraulic_power(self) -> Array:
        """``rho g Q H`` of the total head, W."""
        return self.weight * self.flow * self.total_head


def split(case: Case, inputs: Mapping[str, Array]) -> tuple[VariedCase, FloatOrArray, int]:
    """Tell the inputs of the case from the place between the methods; the third is the number of samples."""
    values = {path: value for path, value in inputs.items() if path != METHOD}
    return varied(case, values), inputs.get(METHOD, 0.0), next(iter(inputs.values())).size


def of_every_sample(outputs: Mapping[str, FloatOrArray], samples: int) -> dict[str, Array]:
    """Give each output one value a sample, also where nothing of it varies."""
    return {name: np.broadcast_to(np.asarray(value, dtype=np.float64), samples) for name, value in outputs.items()}


@dataclass(frozen=True)
class Figures:
    """Head loss, total head and hydraulic power at design flow; nan where the line has no answer."""

    case: Case

    def __call__(self, inputs: Mapping[str, Array]) -> dict[str, Array]:
        """Work them out for every sample: m, m and W."""
        given, share, samples = split(self.case, inputs)
        at = SampledLine.of(self.case, given, given.design, share)
        return of_every_sample({HEAD_LOSS: at.head_loss, TOTAL_HEAD: at.total_head, POWER: at.hydraulic_power}, samples)
