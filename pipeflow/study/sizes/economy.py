"""What the sizes of a line cost a year: pipe paid off, maintained, and the energy of its friction."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from pipeflow import sizing
from pipeflow.case.model import Case, Cost
from pipeflow.line.catalogue import PipeSize
from pipeflow.line.route import LineFlow
from pipeflow.study.flows import DESIGN, pipes_of

FLATNESS = 0.05
"""Costs within this share of the lowest are called equal."""


@dataclass(frozen=True)
class Bore:
    """A bore to try: as a size of the catalogue, or free."""

    name: str
    diameter: float
    nominal: float
    size: PipeSize | None


@dataclass(frozen=True)
class Economy:
    """The cheapest size of those that pass, a year's cost, and those no more than a few per cent above it."""

    size: str
    cost_per_year: float
    equal: tuple[str, ...]
    without_price: tuple[str, ...]


def cost_per_year(case: Case, line: LineFlow, bore: Bore, pipes: Sequence[str]) -> float | None:
    """Annual cost of the pipes that vary and of the energy of the whole line at design flow; None without a price."""
    cost = case.sizing.cost
    price = price_of(cost, bore) if cost else None
    if cost is None or price is None:
        return None
    length = sum(float(pipe.length) for pipe in pipes_of(case) if pipe.name in pipes)
    power = float(line.pressure_loss[DESIGN]) * case.flow.design / cost.pump_efficiency
    return float(
        sizing.annual_cost(
            price * length,
            power,
            interest_rate=cost.interest_rate,
            years=cost.years,
            maintenance=cost.maintenance,
            hours_per_year=cost.hours_per_year,
            energy_price_per_kwh=cost.energy_price_per_kwh,
        )
    )


def price_of(cost: Cost, bore: Bore) -> float | None:
    """Price of a metre: of the size, or by the law; None where neither is given."""
    if bore.name in cost.prices:
        return cost.prices[bore.name]
    if cost.price_at_100_mm is None:
        return None
    return float(cost.price_at_100_mm * (bore.diameter / 0.1) ** cost.price_exponent)


def economy(names: Sequence[str], costs_known: Sequence[float | None]) -> Economy | None:
    """Choose the cheapest of the sizes that pass; None where no cost is known."""
    costs = {name: cost for name, cost in zip(names, costs_known, strict=True) if cost is not None}
    if not costs:
        return None
    cheapest = min(costs, key=lambda name: costs[name])
    without = tuple(name for name in names if name not in costs)
    return Economy(cheapest, costs[cheapest], tuple(sizing.within(costs, FLATNESS)), without)
