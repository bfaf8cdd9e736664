"""Sheets at several solids contents joined into one fluid."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest

from pipeflow.case.viscometer import load_readings
from pipeflow.rheology import HerschelBulkley
from pipeflow.rheology.readings import CurveReadings, Sample
from pipeflow.rheology.series import fluid_series
from pipeflow.rheology.sheet import FitResult, UnfitError, fit_sheet

CASES = Path(__file__).parents[2] / "cases"
RATES = np.geomspace(2.0, 600.0, 12)


def sheet(solids: float | None, law: HerschelBulkley, kelvin: float | None = None) -> FitResult:
    sample = Sample(solids=solids, temperature=kelvin)
    common = (np.arange(12), np.full(12, 1e-6), np.full(12, ""), sample)
    return fit_sheet(CurveReadings(*common, RATES, law.shear_stress(RATES)))


def test_laws_of_solids_are_given_back() -> None:
    def law(solids: float) -> HerschelBulkley:
        return HerschelBulkley(2000.0 * solids**5, 0.002 * np.exp(11.0 * solids), 0.6)

    series = fluid_series([sheet(solids, law(solids)) for solids in (0.44, 0.48, 0.52, 0.56)], "solids")
    assert series.laws["yield_stress"].law.key == "power"
    assert series.laws["consistency"].law.key == "exponential"
    found, true = series.at(np.array([0.46, 0.55])), law(0.46)
    assert isinstance(found, HerschelBulkley)
    assert np.asarray(found.yield_stress)[0] == pytest.approx(true.yield_stress, rel=1e-6)
    assert np.asarray(found.consistency)[0] == pytest.approx(true.consistency, rel=1e-6)
    assert found.flow_index == pytest.approx(0.6, rel=1e-6)
    assert series.holds(0.5)
    assert not series.holds(0.58)


def test_laws_of_temperature_are_given_back() -> None:
    def law(kelvin: float) -> HerschelBulkley:
        thinner = float(np.exp(2500.0 * (1 / kelvin - 1 / 300.0)))
        return HerschelBulkley(8.0 * thinner**0.5, 1.5 * thinner, 0.5)

    sheets = [sheet(None, law(kelvin), kelvin) for kelvin in (280.0, 300.0, 330.0)]
    series = fluid_series(sheets, "temperature")
    assert series.laws["consistency"].slope == pytest.approx(2500.0 * 8.31446261815324, rel=1e-6)
    assert series.laws["yield_stress"].slope == pytest.approx(1250.0 * 8.31446261815324, rel=1e-6)


def test_the_demo_sheets_make_one_fluid() -> None:
    results = [fit_sheet(load_readings(CASES / f"thickener-underflow-{name}.csv")) for name in (48, 52, 56)]
    series = fluid_series(results, "solids")
    assert series.model == "herschel-bulkley"
    assert series.tested == (0.48, 0.56)
    assert float(np.asarray(series.at(0.54).yield_stress)) == pytest.approx(12.6, rel=0.03)
    assert series.flow_index_spread < 0.03


def test_what_cannot_be_joined_is_said() -> None:
    law = HerschelBulkley(10.0, 2.0, 0.5)
    known = sheet(0.5, law)
    unknown = replace(known, curve=replace(known.curve, sample=Sample(name="bucket 3")))
    with pytest.raises(UnfitError, match="bucket 3 does not state its solids"):
        fluid_series([known, unknown], "solids")
    with pytest.raises(UnfitError, match="two conditions"):
        fluid_series([known, known], "solids")
