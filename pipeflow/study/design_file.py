"""Everything that the page for the design file shows of one case."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

from pipeflow.case.model import Case
from pipeflow.errors import InputError
from pipeflow.study.assumed import AssumedInput, assumed_inputs
from pipeflow.study.pumping.conditions import OWN
from pipeflow.study.pumping.curve import curve
from pipeflow.study.pumping.result import CurveResult
from pipeflow.study.pumping.vendor import VendorDuty, vendor_duties
from pipeflow.study.ranges.sweeping import Sweep, solids_sweep
from pipeflow.study.result import Result
from pipeflow.study.sampling.uncertainty import UncertaintyResult, uncertainty
from pipeflow.study.sizes.sizing import SizingResult, size
from pipeflow.study.solving import solve
from pipeflow.verdict import Check

SAMPLES = 1024
"""Enough to tell the quantiles to a hundredth, and quick enough for a page."""


@dataclass(frozen=True)
class Judged:
    """A check with where it was made: the condition, and the pump if it is one of a pump."""

    condition: str
    check: Check
    pump: str = ""


@dataclass(frozen=True)
class DesignFile:
    """A case solved, its system curves with the pumps, its sizes, and what rests on assumed inputs.

    ``sizing`` is None where no size can be tried; ``why_not_sized`` then says what the case lacks. ``solids`` is the
    line at a little more and less solids, None where the rheology does not follow them; ``uncertainty`` is None where
    the case neither states any nor rests on readings. ``vendor`` holds the duties that a pump is to be offered for.
    """

    result: Result
    curve: CurveResult
    sizing: SizingResult | None
    why_not_sized: str
    assumed: tuple[AssumedInput, ...]
    solids: Sweep | None = None
    uncertainty: UncertaintyResult | None = None
    vendor: tuple[VendorDuty, ...] = ()

    @property
    def case(self) -> Case:
        """The case itself."""
        return self.result.case

    @property
    def checks_of_line(self) -> tuple[Check, ...]:
        """Every check of the line, in the case itself and in every scenario."""
        return tuple(one.check for one in self._judged_line())

    def _judged_line(self) -> Iterator[Judged]:
        for name, result in ((OWN, self.result), *self.result.scenarios.items()):
            yield from (Judged(name, check) for check in result.checks)

    def _judged_pumps(self) -> Iterator[Judged]:
        for one in self.curve.conditions:
            for pump in one.pumps:
                yield from (Judged(one.name, check, pump.name) for check in pump.checks)

    @property
    def conditions(self) -> tuple[str, ...]:
        """Names of the case itself and its scenarios."""
        return OWN, *self.result.scenarios

    @property
    def judged(self) -> tuple[Judged, ...]:
        """The checks that matter: of the line, and of the pump ranked first if it holds, of every pump if none does."""
        kept = (one for one in self._judged_pumps() if self.curve.fails or one.pump == self.first_pump)
        return (*self._judged_line(), *kept)

    @property
    def first_pump(self) -> str | None:
        """The candidate ranked first, if it holds in every condition."""
        return next((one.name for one in self.curve.ranking[:1] if one.holds), None)

    @property
    def failing(self) -> tuple[Judged, ...]:
        """Why the case fails: checks of the line, and those of the pumps where no candidate holds."""
        return tuple(one for one in self.judged if one.check.status == "fail")

    @property
    def not_checked(self) -> tuple[Judged, ...]:
        """What could not be checked of the line, and of the pump ranked first if it holds; no other is bought."""
        unsure = (one for one in self.judged if one.check.status == "not checked")
        return tuple(one for one in unsure if one.pump in ("", self.first_pump))

    @property
    def is_preliminary(self) -> bool:
        """Some check that matters could not be made."""
        return bool(self.not_checked)

    @property
    def fails(self) -> bool:
        """A limit or check of the line fails, or no candidate pump holds."""
        return bool(self.failing)


def design_file(case: Case) -> DesignFile:
    """Work a case out for its page."""
    sizing, why_not = _sizing(case)
    result = solve(case)
    return DesignFile(
        result=result,
        curve=curve(case),
        sizing=sizing,
        why_not_sized=why_not,
        assumed=assumed_inputs(case),
        solids=solids_sweep(case),
        uncertainty=_sampled(case, result),
        vendor=vendor_duties(case),
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
