"""Laws of solids content and temperature, given and fitted; published temperature series by a second route."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest
import yaml
from scipy.stats import linregress

from pipeflow.rheology.conditions import (
    ArrheniusDependence,
    ExponentialDependence,
    PowerDependence,
    best_dependence,
    fit_dependence,
)

SOLIDS = np.array([0.44, 0.48, 0.52, 0.56])
KELVIN = np.array([278.15, 298.15, 323.15, 348.15])
TOPIC = Path(__file__).parents[1] / "published" / "06_flow_curve_fitting.yaml"


def test_laws_from_their_definitions() -> None:
    assert PowerDependence((0.4, 0.6), 200.0, 4.0).value(0.5) == pytest.approx(200 * 0.0625)
    assert ExponentialDependence((0.4, 0.6), 0.01, 12.0).value(0.5) == pytest.approx(0.01 * np.exp(6))
    arrhenius = ArrheniusDependence((280.0, 350.0), 2.0, 20_000.0, 300.0)
    assert arrhenius.value(300.0) == pytest.approx(2.0)
    assert arrhenius.value(320.0) == pytest.approx(2.0 * np.exp(20_000 / 8.314462618 * (1 / 320 - 1 / 300)), rel=1e-9)


@pytest.mark.parametrize("kind", ["power", "exponential", "arrhenius"])
def test_a_law_is_given_back(kind: str) -> None:
    law = {
        "power": PowerDependence((0.44, 0.56), 300.0, 4.2),
        "exponential": ExponentialDependence((0.44, 0.56), 0.02, 11.0),
        "arrhenius": ArrheniusDependence((278.15, 348.15), 2.0, 25_000.0, 300.0),
    }[kind]
    conditions = KELVIN if kind == "arrhenius" else SOLIDS
    found = fit_dependence(kind, conditions, law.value(conditions))
    np.testing.assert_allclose(found.law.value(conditions), law.value(conditions), rtol=1e-12)
    assert found.law.tested == pytest.approx(law.tested)
    assert found.r_squared == pytest.approx(1.0, abs=1e-12)
    assert best_dependence(law.variable, conditions, law.value(conditions)).law.key == kind


def test_outside_the_tested_range_is_told() -> None:
    law = PowerDependence((0.44, 0.56), 300.0, 4.2)
    assert law.holds(0.44)
    assert law.holds(np.array([0.5, 0.56]))
    assert not law.holds(0.57)
    assert not law.holds(np.array([0.43, 0.5]))


def test_what_cannot_be_a_law_is_refused() -> None:
    for conditions, values in ((SOLIDS[:1], np.ones(1)), (SOLIDS, np.zeros(4)), (np.full(3, 0.5), np.ones(3))):
        with pytest.raises(ValueError, match="two conditions"):
            fit_dependence("power", conditions, values)


@pytest.mark.parametrize("fluid", ["control", "guar", "arabic", "xanthan"])
@pytest.mark.parametrize("parameter", ["K", "tau_y"])
def test_nectars_at_four_temperatures(fluid: str, parameter: str) -> None:
    """FIT-NECTAR-T (article of 2012, table 2; read, its units not legible): no activation energy is printed.

    Ours is held to a regression of a general library, with its standard error; every parameter falls on heating.
    """
    entries = yaml.safe_load(TOPIC.read_text(encoding="utf-8"))
    inputs = next(entry["inputs"] for entry in entries if entry["id"] == "FIT-NECTAR-T")
    values = np.array(inputs[fluid][parameter])
    found = fit_dependence("arrhenius", KELVIN, values)
    line = linregress(1.0 / KELVIN, np.log(values))
    assert found.slope == pytest.approx(line.slope * 8.31446261815324, rel=1e-9)
    assert found.slope_error == pytest.approx(line.stderr * 8.31446261815324, rel=1e-6)
    assert found.slope > 0
    assert found.r_squared == pytest.approx(line.rvalue**2, rel=1e-9)


def test_tomato_concentrates_by_solids() -> None:
    """Harper & El Sahrigi 1965, consistency at 32.2 °C by total solids (from memory, confidence medium)."""
    solids = np.array([0.058, 0.128, 0.160, 0.250, 0.300])
    consistency = np.array([0.22, 2.0, 3.16, 12.9, 18.7])
    found = fit_dependence("power", solids, consistency)
    line = linregress(np.log(solids), np.log(consistency))
    assert found.slope == pytest.approx(line.slope, rel=1e-9)
    assert 2.0 < found.slope < 3.5
    assert found.scatter < 0.2
