"""Tube and cylinder readings of known fluids, made by integrating their flow, give the fluids back to 0.1 %."""

from __future__ import annotations

from dataclasses import fields

import numpy as np
import pytest
from true_viscometers import FLUIDS, Fluid, cylinder_speed, tube_flow

from pipeflow.rheology import Cross, Rheology
from pipeflow.rheology.fitting import fit_curve
from pipeflow.rheology.flowcurve import flow_curve
from pipeflow.rheology.readings import CylinderReadings, Sample, TubeReadings

PERMILLE = 1e-3


def tubes(
    fluid: Fluid,
    diameters: tuple[float, ...],
    ratios: tuple[float, ...],
    end: float = 0.0,
    slip: float = 0.0,
    m: float = 1.0,
) -> tuple[TubeReadings, np.ndarray]:
    """Runs at eight stresses of each tube; ``slip`` is the slip velocity in m/s at the highest stress."""
    stresses = [fluid.stress(rate) for rate in np.geomspace(15.0, 1200.0, 8)]
    rows = []
    for diameter in diameters:
        for ratio in ratios:
            for stress in stresses:
                area = np.pi * diameter**2 / 4.0
                flow = tube_flow(fluid.rate, fluid.tau_y, stress, diameter)
                flow += slip * (stress / stresses[-1]) ** m * area
                rows.append((diameter, ratio * diameter, 4.0 * stress * (ratio + end), flow, fluid.rate(stress)))
    diameter, length, drop, flow, rate = np.array(rows).T
    common = (np.arange(len(rows)), np.full(len(rows), 1e-9), np.full(len(rows), ""), Sample())
    return TubeReadings(*common, diameter, length, drop, flow), rate


def cylinders(fluid: Fluid, ratio: float) -> tuple[CylinderReadings, np.ndarray]:
    bob = 0.02
    stresses = np.array([fluid.stress(rate) for rate in np.geomspace(2.0, 1000.0, 14)])
    speeds = np.array([cylinder_speed(fluid, stress, bob, bob * ratio) for stress in stresses])
    common = (np.arange(14), np.full(14, 1e-9), np.full(14, ""), Sample())
    rates = np.array([fluid.rate(stress) for stress in stresses])
    return CylinderReadings(*common, speeds, stresses, bob, bob * ratio, 0.06), rates


def assert_parameters(found: Rheology | None, true: Rheology) -> None:
    assert type(found) is type(true)
    for field in fields(true):  # type: ignore[arg-type]
        assert getattr(found, field.name) == pytest.approx(getattr(true, field.name), rel=PERMILLE)


def assert_recovered(readings: TubeReadings | CylinderReadings, rates: np.ndarray, fluid: Fluid) -> None:
    curve = flow_curve(readings)
    np.testing.assert_allclose(curve.shear_rate, rates, rtol=PERMILLE)
    fit = fit_curve(curve.shear_rate, curve.shear_stress, resolution=1e-5)
    assert_parameters(fit.of(fit.selected or "").law, fluid.rheology())


@pytest.mark.parametrize("name", FLUIDS)
def test_one_tube(name: str) -> None:
    assert_recovered(*tubes(FLUIDS[name], (0.02,), (80.0,)), FLUIDS[name])


@pytest.mark.parametrize("ratio", [1.0847, 1.2, 2.0])
@pytest.mark.parametrize("name", FLUIDS)
def test_cylinders_of_narrow_and_wide_gap(name: str, ratio: float) -> None:
    assert_recovered(*cylinders(FLUIDS[name], ratio), FLUIDS[name])


@pytest.mark.parametrize("name", FLUIDS)
def test_end_loss_by_length(name: str) -> None:
    readings, rates = tubes(FLUIDS[name], (0.01,), (20.0, 40.0, 80.0), end=3.0)
    assert_recovered(readings, rates, FLUIDS[name])
    assert any("end loss of 3 diameters" in text for text in flow_curve(readings).corrections)


@pytest.mark.parametrize("m", [1.0, 2.0])
@pytest.mark.parametrize("name", FLUIDS)
def test_slip_by_diameter(name: str, m: float) -> None:
    readings, rates = tubes(FLUIDS[name], (0.01, 0.02, 0.04), (60.0,), slip=0.03, m=m)
    assert_recovered(readings, rates, FLUIDS[name])
    assert any(f"as tau_w^{m:.2f}" in text for text in flow_curve(readings).corrections)


@pytest.mark.parametrize("name", ["thinning 0.3 with yield", "bingham", "casson"])
def test_end_loss_and_slip_together(name: str) -> None:
    readings, rates = tubes(FLUIDS[name], (0.01, 0.02, 0.04), (30.0, 60.0), end=2.0, slip=0.03)
    assert_recovered(readings, rates, FLUIDS[name])


def test_without_slip_none_is_found() -> None:
    readings, _ = tubes(FLUIDS["bingham"], (0.01, 0.02, 0.04), (60.0,))
    corrections = flow_curve(readings).corrections
    assert "no slip is seen between the tube diameters" in corrections
    assert not any(text.startswith("slip of") for text in corrections)


def test_the_newtonian_rate_would_be_far_off() -> None:
    """The correction is not a small one, so that the tests above say something."""
    curve = flow_curve(cylinders(FLUIDS["thinning 0.3"], 1.2)[0])
    assert np.max(curve.shear_rate / curve.plain_rate) > 1.3


@pytest.mark.parametrize("kind", ["tube", "cylinders"])
def test_a_fluid_that_follows_no_law_is_met_by_its_slope(kind: str) -> None:
    """A Cross fluid: rates within 5 %, nearer than the best law leaves them; said as a caution."""
    law = Cross(5.0, 0.02, 0.3, 0.8)
    stresses = law.shear_stress(np.geomspace(1.0, 1000.0, 20))
    common = (np.arange(20), np.full(20, 1e-6), np.full(20, ""), Sample())
    if kind == "tube":
        flows = np.array([tube_flow(lambda s: float(law.shear_rate(s)), 0.0, stress, 0.02) for stress in stresses])
        one = np.ones(20)
        curve = flow_curve(TubeReadings(*common, 0.02 * one, 2.0 * one, 400.0 * stresses, flows))
    else:
        fluid = Fluid(0.0, 1.0)
        object.__setattr__(fluid, "rate", lambda stress: float(law.shear_rate(stress)))
        speeds = np.array([cylinder_speed(fluid, stress, 0.02, 0.022) for stress in stresses])
        curve = flow_curve(CylinderReadings(*common, speeds, stresses, 0.02, 0.022, 0.06))
    np.testing.assert_allclose(curve.shear_rate, law.shear_rate(stresses), rtol=0.05)
    np.testing.assert_allclose(curve.shear_rate[4:-4], law.shear_rate(stresses)[4:-4], rtol=0.015)
    assert any("none of the laws" in text for text in curve.cautions)
