"""What the pump's vendor is to be told: duties of case and scenarios at design and maximum flow; which governs."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace

import numpy as np

from pipeflow.arrays import known
from pipeflow.case.model import Case
from pipeflow.constants import STANDARD_GRAVITY
from pipeflow.study.pumping.conditions import conditions
from pipeflow.study.pumping.demand import Demand

HIGHEST_HEAD, HIGHEST_POWER, LOWEST_NPSH = "highest head", "highest power", "lowest NPSH available"
"""What a duty may govern by."""
ALIKE = 1e-9
"""Figures within this share of each other are one: the first then governs."""


@dataclass(frozen=True)
class VendorDuty:
    """What the line asks of its pump in one condition at one flow, by the upper figure; None where there is none.

    Attributes
    ----------
    condition : str
        The case itself or a scenario.
    at : str
        ``design`` or ``maximum``.
    flow, head, pressure : float or None
        m³/s; m of what flows; Pa, the head times its weight.
    power : float or None
        Hydraulic power ``rho g Q H``, W.
    npsh_available : float or None
        At the pump's inlet and the lowest level of the source, m; None where the case does not tell.
    governs : tuple of str
        What it is the extreme of among all duties.
    case : Case
        The condition itself: what flows.
    """

    condition: str
    at: str
    flow: float
    head: float | None
    pressure: float | None
    power: float | None
    npsh_available: float | None
    case: Case
    governs: tuple[str, ...] = ()


def vendor_duties(case: Case) -> tuple[VendorDuty, ...]:
    """Give the duties of a case and its scenarios that a pump is to be offered for.

    Parameters
    ----------
    case : Case

    Returns
    -------
    tuple of VendorDuty
        At design flow, and at maximum flow where that is higher, in the order of the file.
    """
    asked = [(name, one) for name, kind, one in conditions(replace(case, pumps=())) if kind in ("case", "scenario")]
    duties = [duty for name, one in asked for duty in _duties(name, one)]
    governing = {
        HIGHEST_HEAD: _extreme([duty.head for duty in duties]),
        HIGHEST_POWER: _extreme([duty.power for duty in duties]),
        LOWEST_NPSH: _extreme([None if duty.npsh_available is None else -duty.npsh_available for duty in duties]),
    }
    return tuple(
        replace(duty, governs=tuple(what for what, at in governing.items() if at == place))
        for place, duty in enumerate(duties)
    )


def _duties(name: str, case: Case) -> Iterator[VendorDuty]:
    flows = {"design": case.flow.design, "maximum": case.flow.maximum}
    if case.flow.maximum <= case.flow.design:
        del flows["maximum"]
    weight = float(case.fluid.density) * STANDARD_GRAVITY
    found = Demand(case).at(np.array(list(flows.values())))
    for index, (at, flow) in enumerate(flows.items()):
        head = known(found.upper[index])
        pressure = None if head is None else weight * head
        power = None if pressure is None else pressure * flow
        yield VendorDuty(name, at, flow, head, pressure, power, known(found.npsh_available[index]), case)


def _extreme(figures: Sequence[float | None]) -> int | None:
    """Place of the first figure that none exceeds; None without figures."""
    known = [figure for figure in figures if figure is not None]
    if not known:
        return None
    least = max(known) - ALIKE * abs(max(known))
    return next(place for place, figure in enumerate(figures) if figure is not None and figure >= least)
