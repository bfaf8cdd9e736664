"""Everything that the page for the design file shows of one case."""

from __future__ import annotations

from dataclasses import dataclass

from pipeflow.case.model import Case, Limits
from pipeflow.study.assumed import AssumedInput, assumed_inputs
from pipeflow.study.curve import curve
from pipeflow.study.curve_result import CurveResult
from pipeflow.study.flows import pipes_of
from pipeflow.study.result import Result
from pipeflow.study.sizing import SizingResult, size
from pipeflow.study.solving import solve
from pipeflow.verdict import Check


@dataclass(frozen=True)
class DesignFile:
    """A case solved, its system curves with the pumps, its sizes, and what rests on assumed inputs.

    ``sizing`` is None where the case says no limits or no sizes to try.
    """

    result: Result
    curve: CurveResult
    sizing: SizingResult | None
    assumed: tuple[AssumedInput, ...]

    @property
    def case(self) -> Case:
        """The case itself."""
        return self.result.case

    @property
    def checks(self) -> tuple[Check, ...]:
        """Every check: of the line in every scenario, and of the pumps in every condition."""
        line = [check for one in (self.result, *self.result.scenarios.values()) for check in one.checks]
        pumps = [check for one in self.curve.conditions for pump in one.pumps for check in pump.checks]
        return (*line, *pumps)

    @property
    def is_preliminary(self) -> bool:
        """Some check could not be made."""
        return any(check.status == "not checked" for check in self.checks)

    @property
    def fails(self) -> bool:
        """A limit or check of the line fails, or no candidate pump holds."""
        return self.result.fails or self.curve.fails


def design_file(case: Case) -> DesignFile:
    """Work a case out for its page."""
    return DesignFile(solve(case), curve(case), _sizing(case), assumed_inputs(case))


def _sizing(case: Case) -> SizingResult | None:
    has_limits = any(one.limits != Limits() for one in (case, *case.scenarios.values()))
    if not has_limits or not pipes_of(case):
        return None
    return size(case)
