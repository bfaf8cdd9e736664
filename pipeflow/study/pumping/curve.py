"""The system curve of a case in every condition, its pumps on it, and which of them to take."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import replace

import numpy as np

from pipeflow.arrays import Array
from pipeflow.case.model import Case
from pipeflow.study.flows import pipes_of
from pipeflow.study.pumping.conditions import conditions, is_gelled
from pipeflow.study.pumping.ranking import ranked
from pipeflow.study.pumping.result import Condition, CurveResult, Flush, Kind, PumpOnLine
from pipeflow.study.pumping.system_curve import flows_of_interest, system_curve
from pipeflow.study.result import MethodUse
from pipeflow.study.solving import solve


def curve(case: Case) -> CurveResult:
    """Draw the system curves of a case and set its pumps on them.

    Parameters
    ----------
    case : Case

    Returns
    -------
    CurveResult
        Of the case, its scenarios and, where it names pumps, of the line full of water and set going after a stop.
    """
    every = list(conditions(case))
    flow = flows_of_interest([one for _, _, one in every])
    found = tuple(_condition(name, kind, one, flow) for name, kind, one in every)
    low, high = _envelope([one for one in found if one.kind in ("case", "scenario")])
    return CurveResult(
        conditions=found,
        envelope_low=low,
        envelope_high=high,
        ranking=ranked(found),
        cautions=_cautions(case),
        methods=tuple(_methods(found)),
    )


def _cautions(case: Case) -> tuple[str, ...]:
    if not case.pumps:
        return ()
    from pipeflow.pumping.displacement import POWER_MUST_BE_CONFIRMED
    from pipeflow.pumping.slurry_curve import VENDOR_MUST_CONFIRM
    from pipeflow.study.pumping.machines import CENTRIFUGAL

    kinds = {VENDOR_MUST_CONFIRM if pump.kind == CENTRIFUGAL else POWER_MUST_BE_CONFIRMED for pump in case.pumps}
    return tuple(sorted(kinds))


def _condition(name: str, kind: Kind, case: Case, flow: Array) -> Condition:
    pumps: tuple[PumpOnLine, ...] = ()
    if case.pumps:
        from pipeflow.study.pumping.on_line import pumps_on_line

        pumps = pumps_on_line(case, kind)
    flushes = tuple(_flushes(case, pumps)) if kind == "water" else ()
    return Condition(name, kind, case, system_curve(case, flow), pumps, flushes, tuple(_about(kind, case)))


def _about(kind: Kind, case: Case) -> Iterator[str]:
    if kind == "restart" and is_gelled(case):
        yield "the gel unbroken at every flow, which only its first figure is sure of: as the line moves, it thins"
    elif kind == "restart":
        yield "the curve is that of the moving slurry; the head that sets the line going is held against in the check"


def _envelope(conditions: Sequence[Condition]) -> tuple[tuple[float, ...], tuple[float, ...]]:
    low = np.min([one.system.pump_head for one in conditions], axis=0)
    high = np.max([one.system.pump_head_upper for one in conditions], axis=0)
    return tuple(low.tolist()), tuple(high.tolist())


def _flushes(case: Case, pumps: Sequence[PumpOnLine]) -> Iterator[Flush]:
    """Say what each pump makes of the line full of water."""
    pipes = pipes_of(case)
    if not pipes:
        return
    areas = np.pi / 4.0 * np.array([float(pipe.diameter) for pipe in pipes]) ** 2
    volume = float(areas @ np.array([float(pipe.length) for pipe in pipes]))
    for pump in pumps:
        if pump.duty is not None and pump.duty.flow > 0:
            flow = pump.duty.flow
            yield Flush(pump.name, flow / float(areas.max()), volume, volume / flow)


def _methods(conditions: Sequence[Condition]) -> Iterator[MethodUse]:
    """Methods of the line in the case itself, and of its pumps in any condition, each once."""
    yield from solve(replace(conditions[0].case, scenarios={})).methods
    said: set[str] = set()
    for condition in conditions:
        for pump in condition.pumps:
            for use in pump.methods:
                if use.source.key not in said:
                    said.add(use.source.key)
                    yield use
