"""What must be known of sampled figures, in words: beside the inputs, beside the limits, and of the whole."""

from __future__ import annotations

import math
from collections.abc import Iterator
from typing import Final

from pipeflow.study.sampling.inputs import UncertainInput, instead_of_readings
from pipeflow.study.sampling.uncertainty import Odds, UncertaintyResult
from pipeflow.units import format_si, significant

LEAST_IMPOSSIBLE: Final = 1e-4
ONE_SIDED: Final = 0.75
"""Share of a range on one side of the value of the case from which it is told."""
MARK: Final = "*"


def known_to(one: UncertainInput) -> str:
    """Write what is known of an input, marked where a part of it is left out."""
    return f"{one.said} {MARK}" if one.impossible > LEAST_IMPOSSIBLE else one.said


def percent(share: float) -> str:
    """Write a share in per cent, to a tenth, or finer where it is small."""
    if not math.isfinite(share):
        return "–"
    return f"{100.0 * share:.1f} %" if share >= 0.001 or share == 0 else f"{100.0 * share:.1g} %"


def input_notes(result: UncertaintyResult) -> Iterator[str]:
    """Word what is not what a reader of the inputs would think."""
    for one in result.inputs:
        if one.impossible > LEAST_IMPOSSIBLE:
            yield (
                f"{MARK} {one.name}: {percent(one.impossible)} of '{one.said}' is not possible; the possible part "
                "stands for the whole (truncated)"
            )
    for one in result.inputs:
        if not 1.0 - ONE_SIDED < one.above < ONE_SIDED:
            side, share = ("above", one.above) if one.above > 0.5 else ("below", 1.0 - one.above)
            yield f"{one.name}: {percent(share)} of the samples lie {side} the {one.of_case} of the case"
    listed = instead_of_readings(result.case)
    if listed:
        yield (
            f"the scatter of the fit to the readings is left out: of the rheology {', '.join(listed)} alone is "
            "uncertain, since it is listed"
        )


def limit_notes(result: UncertaintyResult) -> Iterator[str]:
    """Word the limits that hold in the case itself and fail in most samples, or the other way round."""
    for odds in result.limits:
        if odds.case_fails != (odds.probability.value > 0.5):
            verdicts = ("fails", "holds") if odds.case_fails else ("holds", "fails")
            yield (
                f"{odds.name.replace('_', ' ')}: the case itself has {_figure(odds, odds.of_case)} and {verdicts[0]} "
                f"(upper figure); the median of the samples is {_figure(odds, odds.median)}, and most of them "
                f"{verdicts[1].removesuffix('s')}"
            )


def _figure(odds: Odds, value: float) -> str:
    if odds.name == "deposition":
        return f"{significant(value, 3)} of its velocity" if math.isfinite(value) else "no turbulent pipe"
    return format_si(value, odds.unit)


def uncertainty_cautions(result: UncertaintyResult) -> Iterator[str]:
    """Word what must be known of the figures."""
    if result.lost:
        share = percent(result.lost / result.evaluations)
        yield f"no answer in {result.lost} of the lines solved ({share}); no figure holds them"
    if result.beyond_tested > 0:
        share = percent(result.beyond_tested)
        yield f"a law of the rheology is asked beyond the range tested in {share} of the samples"
    if any(odds.name == "deposition" for odds in result.limits) and result.not_turbulent > 0:
        yield (
            f"some pipe is not turbulent at minimum flow in {percent(result.not_turbulent)} of the samples: deposition "
            "says nothing of it, and solids may settle there"
        )
    yield (
        "only what is listed is uncertain; inputs not listed are taken as exact. A bare tolerance is any value within "
        "it as likely; the method of friction runs from the central to the upper figure (docs/uncertainty.md)"
    )
