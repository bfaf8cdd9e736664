"""Everything that the page for the design file shows of one case."""

from __future__ import annotations

from dataclasses import dataclass

from pipeflow.case.model import Case
from pipeflow.errors import InputError
from pipeflow.study.assumed import AssumedInput, assumed_inputs
from pipeflow.study.pumping.curve import curve
from pipeflow.study.pumping.result import CurveResult
from pipeflow.study.ranges.sweeping import Sweep, solids_sweep
from pipeflow.study.result import Result
from pipeflow.study.sampling.uncertainty import UncertaintyResult, uncertainty
from pipeflow.study.sizes.sizing import SizingResult, size
from pipeflow.study.solving import solve
from pipeflow.verdict import Check

SAMPLES = 1024
"""Enough to tell the quantiles to a hundredth, and quick enough for a page."""


@dataclass(frozen=True)
class DesignFile:
    """A case solved, its system curves with the pumps, its sizes, and what rests on assumed inputs.

    ``sizing`` is None where no size can be tried; ``why_not_sized`` then says what the case lacks. ``solids`` is the
    line at a little more and less solids, None where the rheology does not follow them; ``uncertainty`` is None where
    the case neither states any nor rests on readings.
    """

    result: Result
    curve: CurveResult
    sizing: SizingResult | None
    why_not_sized: str
    assumed: tuple[AssumedInput, ...]
    solids: Sweep | None = None
    uncertainty: UncertaintyResult | None = None

    @property
    def case(self) -> Case:
        """The case itself."""
        return self.result.case

    @property
    def checks_of_line(self) -> tuple[Check, ...]:
        """Every check of the line, in the case itself and in every scenario."""
        return tuple(check for one in (self.result, *self.result.scenarios.values()) for check in one.checks)

    @property
    def checks(self) -> tuple[Check, ...]:
        """Every check: of the line, and of the pumps in every condition."""
        pumps = [check for one in self.curve.conditions for pump in one.pumps for check in pump.checks]
        return (*self.checks_of_line, *pumps)

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
    sizing, why_not = _sizing(case)
    result = solve(case)
    return DesignFile(
        result, curve(case), sizing, why_not, assumed_inputs(case), solids_sweep(case), _sampled(case, result)
    )


def _sampled(case: Case, result: Result) -> UncertaintyResult | None:
    if not case.uncertainty and not case.sheets:
        return None
    return uncertainty(case, samples=SAMPLES, checks=[check.name for check in result.checks], workers=1)


def _sizing(case: Case) -> tuple[SizingResult | None, str]:
    try:
        return size(case), ""
    except InputError as refused:
        return None, "; ".join(f"{problem.key_path}: {problem.message}" for problem in refused.problems)
