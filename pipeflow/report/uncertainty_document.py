"""How sure the answer is, as a part of the JSON document: SI numbers, units at the end of keys, null for no value."""

from __future__ import annotations

from typing import Any

from pipeflow.arrays import known
from pipeflow.study.sampling.inputs import instead_of_readings
from pipeflow.study.sampling.uncertainty import Bar, Estimate, Index, Odds, Spread, UncertaintyResult


def uncertainty_document(result: UncertaintyResult) -> dict[str, Any]:
    """Lay it out."""
    keys = {name: f"{name}_{spread.unit}" for name, spread in result.figures.items()}
    return {
        "samples": result.samples,
        "seed": result.seed,
        "lines_solved": result.evaluations,
        "lines_without_answer": result.lost,
        "share_beyond_tested": known(result.beyond_tested),
        "share_not_turbulent_at_minimum_flow": known(result.not_turbulent),
        "inputs": [
            {
                "name": one.name,
                "known_to": one.said,
                "from_5_to_95": one.covers,
                "impossible_share": one.impossible,
                "share_above_the_case": one.above,
            }
            for one in result.inputs
        ],
        "listed_instead_of_readings": list(instead_of_readings(result.case)),
        "figures": {keys[name]: _spread(spread, result.median[name]) for name, spread in result.figures.items()},
        "limits": [_odds(odds) for odds in result.limits],
        "not_sampled": list(result.not_sampled),
        "tornado": [_bar(bar, keys) for bar in result.tornado],
        "methods": [{"key": source.key, "title": source.title, "citation": source.citation, "note": source.note}
                    for source in result.methods],
    }  # fmt: skip


def _spread(spread: Spread, median: float) -> dict[str, Any]:
    estimates = {
        "mean": spread.mean,
        "standard_deviation": spread.deviation,
        "p5": spread.p5,
        "p50": spread.p50,
        "p95": spread.p95,
    }
    return {
        **{name: known(estimate.value) for name, estimate in estimates.items()},
        "standard_errors": {name: known(estimate.error) for name, estimate in estimates.items()},
        "at_medians": known(median),
        "sensitivity": [_index(index) for index in spread.indices],
    }


def _index(index: Index) -> dict[str, Any]:
    return {
        "input": index.factor,
        **_with_error("first_order", index.first),
        **_with_error("total", index.total),
    }


def _with_error(name: str, estimate: Estimate) -> dict[str, Any]:
    return {name: known(estimate.value), f"{name}_standard_error": known(estimate.error)}


def _odds(odds: Odds) -> dict[str, Any]:
    return {
        "name": odds.name,
        "limit": odds.limit,
        "unit": odds.unit,
        "sense": "at least" if odds.is_least else "at most",
        "basis": odds.basis,
        **_with_error("probability_of_failing", odds.probability),
        "of_case_upper": known(odds.of_case),
        "median_of_samples": known(odds.median),
    }


def _bar(bar: Bar, keys: dict[str, str]) -> dict[str, Any]:
    ends = {key: [known(bar.low[name]), known(bar.high[name])] for name, key in keys.items()}
    return {"input": bar.factor, **ends}
