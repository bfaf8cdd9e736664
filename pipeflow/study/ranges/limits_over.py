"""The limits of a case over a plane of two of its inputs, as ``solve`` finds them at every point."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from dataclasses import dataclass
from typing import Final

import numpy as np

from pipeflow.arrays import Array
from pipeflow.case.model import Case
from pipeflow.case.varying import varied
from pipeflow.study.checks import dynamic_yield_stress
from pipeflow.study.flows import DESIGN, line_at, pipes_of
from pipeflow.study.ranges.boundaries import JUMP, Key, excess_of
from pipeflow.study.ranges.points import Points, points
from pipeflow.verdict import Check

LAMINAR, TURBULENT = "laminar until", "turbulent from"
REGIMES: Final = (LAMINAR, TURBULENT)
"""Names of the edges of the transition, which are no limits."""


Place = Callable[[Array, Array], tuple[dict[str, Array], Array | None]]
"""Values of inputs by key path, and the flow outright or None, at points of a plane."""


@dataclass(frozen=True)
class LimitsOver:
    """Limits over a plane, whose points stand for what ``place`` makes of them."""

    case: Case
    place: Place

    def solved(self, x: Array, y: Array) -> Points:
        """The case at points of the plane."""
        values, flow = self.place(x, y)
        return points(self.case, values, flow=flow)

    def excess(self, x: Array, y: Array) -> dict[Key, Array]:
        """How far each figure is beyond its limit, and the governing pipe beyond the edges of its transition."""
        solved = self.solved(x, y)
        checked = [solved.checks(index) for index in range(x.size)]
        return {**excess_of_checks(checked), **self._regimes(solved)}

    def _regimes(self, solved: Points) -> dict[Key, Array]:
        pipe = governing_pipe(self.case)
        if pipe is None:
            return {}
        pipes = solved.line.pipes
        velocity = solved.line.velocity[:, DESIGN, pipe]
        with np.errstate(all="ignore"):
            laminar = velocity / pipes.critical_velocity[:, DESIGN, pipe] - 1.0
            turbulent = 1.0 - velocity / pipes.turbulent_velocity[:, DESIGN, pipe]
        known = {LAMINAR: np.nan_to_num(laminar, nan=-JUMP), TURBULENT: np.nan_to_num(turbulent, nan=-JUMP)}
        return {(name, "central"): values for name, values in known.items()}


def excess_of_checks(checked: Iterable[Iterable[Check]]) -> dict[Key, Array]:
    """Excess of every check at every point; one that a point does not have holds there."""
    every = [{(check.name, figure): over for check in found for figure, over in excess_of(check).items()}
             for found in checked]  # fmt: skip
    keys = dict.fromkeys(key for one in every for key in one)
    return {key: np.array([one.get(key, -JUMP) for one in every]) for key in keys}


def with_static_yield_stress(case: Case, path: str, values: Array) -> dict[str, Array]:
    """The values of an input, and the static yield stress of the case in proportion to the dynamic one they make."""
    given = {path: values}
    stress, static = dynamic_yield_stress(case), case.restart.static_yield_stress
    if static is not None and stress > 0:
        law = varied(case, given).fluid.rheology
        given["restart.static_yield_stress"] = np.asarray(getattr(law, "yield_stress", stress)) * static / stress
    return given


def governing_pipe(case: Case) -> int | None:
    """Place of the pipe that loses most at design flow; None without pipes."""
    if not pipes_of(case):
        return None
    return int(line_at(case, np.array([case.flow.design or 1e-3])).friction_loss[0].argmax())
