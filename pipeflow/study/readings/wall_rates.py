"""Shear rates at the walls of a line, between its lowest and highest flow."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from pipeflow.case.model import Case
from pipeflow.study.flows import line_at, pipes_of


@dataclass(frozen=True)
class WallRates:
    """Wall shear rates of pipes that shear alike, at minimum, design and maximum flow, 1/s; nan where not found."""

    pipes: tuple[str, ...]
    minimum: float
    design: float
    maximum: float


def wall_rates(case: Case) -> tuple[WallRates, ...]:
    """Give the wall shear rates of every pipe, those of one bore together, in flow order."""
    flow = case.flow
    line = line_at(case, np.array([flow.minimum, flow.design, flow.maximum]))
    by_rates: dict[tuple[float, ...], list[str]] = {}
    for index, pipe in enumerate(pipes_of(case)):
        rates = tuple(float(f"{rate:.6g}") for rate in line.pipes.wall_shear_rate[:, index])
        by_rates.setdefault(rates, []).append(pipe.name)
    return tuple(WallRates(tuple(names), *rates) for rates, names in by_rates.items())
