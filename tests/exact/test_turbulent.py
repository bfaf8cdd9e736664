"""Turbulent laws against bisection on their classical implicit forms in f and Re (tests/exact/reference.py).

1e-10 relative, the arithmetic asked for; the formulas are from memory of the papers named in reference.py. Truth runs
from the stress to the velocity, so that the project's root find has nothing in common with it.
"""

import mpmath as mp
import numpy as np
import pytest
from reference import (
    Fluid,
    colebrook_factor,
    dodge_metzner_factor,
    dodge_metzner_velocity,
    plug_blunting,
    random_fluid,
    rheogram_ratio,
    wilson_thomas_velocity,
)

from pipeflow.friction import Regime, Status, bulk_velocity, solve_pipes
from pipeflow.rheology import Newtonian, PowerLaw

TOLERANCE = 1e-10


def power_law_of_reynolds(reynolds, n, velocity, diameter, density):
    """Consistency for a wanted ``Re_MR = rho V^(2-n) D^n/(8^(n-1) K')``, ``K' = K ((3n+1)/(4n))^n``."""
    apparent = density * velocity ** (2 - n) * diameter**n / (8 ** (n - 1) * reynolds)
    return apparent / ((3 * n + 1) / (4 * n)) ** n


def reynolds_of(consistency, n, velocity, diameter, density):
    n = mp.mpf(n)
    apparent = consistency * ((3 * n + 1) / (4 * n)) ** n
    return density * mp.mpf(velocity) ** (2 - n) * mp.mpf(diameter) ** n / (8 ** (n - 1) * apparent)


def turbulent_power_law_cases(roughness_share, count=80):
    rng = np.random.default_rng(11)
    for _ in range(count):
        n = float(rng.uniform(0.1, 1.9))
        reynolds = 10.0 ** rng.uniform(np.log10(5200), 7)
        velocity, diameter = 10.0 ** rng.uniform(-1, 1), 10.0 ** rng.uniform(-2, 0)
        density = float(rng.uniform(700, 2000))
        rough = roughness_share * 10.0 ** rng.uniform(-5, -2)
        yield n, velocity, diameter, density, power_law_of_reynolds(reynolds, n, velocity, diameter, density), rough


@pytest.mark.parametrize("roughness_share", [0.0, 1.0], ids=["smooth: Dodge-Metzner", "rough: with Reed-Pilehvari"])
def test_power_law_factor(roughness_share):
    turbulent = 0
    for n, velocity, diameter, density, consistency, rough in turbulent_power_law_cases(roughness_share):
        flow = solve_pipes(velocity, diameter, density, PowerLaw(consistency, n), roughness=rough * diameter)
        assert flow.status == Status.CONVERGED
        if flow.regime != Regime.TURBULENT:
            continue
        turbulent += 1
        reynolds = reynolds_of(consistency, n, velocity, diameter, density)
        factor = dodge_metzner_factor(reynolds, n, mp.mpf(rough * diameter) / diameter)
        ours = 2 * float(flow.wall_shear_stress) / (density * velocity**2)
        assert ours == pytest.approx(float(factor), rel=TOLERANCE)
    assert turbulent >= 60


@pytest.mark.parametrize("relative", [0.0, 1e-6, 1e-4, 1e-3, 1e-2, 0.05])
def test_colebrook_factor(relative):
    for reynolds in np.geomspace(4100.0, 1e8, 15):
        viscosity = 1000.0 * 2.0 * 0.1 / reynolds
        flow = solve_pipes(2.0, 0.1, 1000.0, Newtonian(viscosity), roughness=relative * 0.1)
        assert flow.regime == Regime.TURBULENT
        truth = colebrook_factor(1000 * 2 * mp.mpf(0.1) / mp.mpf(viscosity), mp.mpf(relative * 0.1) / mp.mpf(0.1))
        ours = 8 * float(flow.wall_shear_stress) / (1000.0 * 4.0)
        assert ours == pytest.approx(float(truth), rel=TOLERANCE)


def turbulent_cases(model, law, count, plug_at_most):
    """Fluids whose wall stress is well into turbulent flow, with the velocity the reference gives for it."""
    rng = np.random.default_rng(23)
    for _ in range(count):
        wall_rate = 10.0 ** rng.uniform(2, 4.5)
        plug = float(10.0 ** rng.uniform(-6, np.log10(plug_at_most)))
        # as n nears 2, Re_MR stops depending on the velocity and the laminar edge runs off to e^-500 of it
        fluid = random_fluid(model, rng, wall_rate, plug, highest_n=1.9)
        diameter = 10.0 ** rng.uniform(-2, 0)
        roughness = diameter * float(rng.choice([0.0, 10.0 ** rng.uniform(-5, -2)]))
        # (rho u* D/mu_eq)^2 = rho (D rate)^2/tau_w from 10^5 to 10^10 settles the density
        density = 10.0 ** rng.uniform(5, 10) * float(fluid.stress(wall_rate)) / (diameter * wall_rate) ** 2
        yield fluid, wall_rate, diameter, density, roughness, law(fluid, wall_rate, diameter, density, roughness)


@pytest.mark.parametrize("model", ["newtonian", "power-law", "bingham", "herschel-bulkley", "casson"])
def test_wilson_thomas(model):
    """alpha by quadrature of the rheogram, Omega by quadrature of the two profiles, V_N by bisected Colebrook."""
    turbulent = 0
    for fluid, wall_rate, diameter, density, roughness, velocity in turbulent_cases(
        model, wilson_thomas_velocity, 100, 0.9
    ):
        pipe = (diameter, density, fluid.rheology())
        flow = solve_pipes(float(velocity), *pipe, roughness=roughness, method="wilson-thomas")
        assert flow.status == Status.CONVERGED
        if flow.regime != Regime.TURBULENT:
            continue
        turbulent += 1
        stress = fluid.stress(wall_rate)
        assert float(flow.wall_shear_stress) == pytest.approx(float(stress), rel=TOLERANCE)
        assert float(flow.wall_shear_rate) == pytest.approx(wall_rate, rel=TOLERANCE)
        back = bulk_velocity(float(stress), *pipe, roughness=roughness, method="wilson-thomas")
        assert float(back) == pytest.approx(float(velocity), rel=TOLERANCE)
    assert turbulent >= 60


@pytest.mark.parametrize("model", ["bingham", "herschel-bulkley", "casson"])
def test_dodge_metzner_of_yield_fluids_takes_its_constants_at_the_turbulent_wall_stress(model):
    """n' by numerical differentiation at that stress; a false lower root would show as another stress."""
    turbulent = 0
    for fluid, wall_rate, diameter, density, roughness, velocity in turbulent_cases(
        model, dodge_metzner_velocity, 25, 0.1
    ):
        pipe = (diameter, density, fluid.rheology())
        flow = solve_pipes(float(velocity), *pipe, roughness=roughness, method="dodge-metzner")
        if flow.regime != Regime.TURBULENT:
            continue
        turbulent += 1
        assert float(flow.wall_shear_stress) == pytest.approx(float(fluid.stress(wall_rate)), rel=TOLERANCE)
    assert turbulent >= 12


def test_reference_quantities_in_their_limits():
    """alpha is 1 for a Newtonian fluid and Omega 0 without a plug; Bingham alpha is 1 + phi (Wilson & Thomas 1985)."""
    assert float(rheogram_ratio(Fluid("newtonian", 0.0, 0.3, 1.0), 50)) == pytest.approx(1, abs=1e-15)
    assert float(rheogram_ratio(Fluid("bingham", 15.0, 0.3, 1.0), 50)) == pytest.approx(1.5, abs=1e-15)
    assert float(plug_blunting(mp.mpf("1e-9"))) == pytest.approx(0, abs=1e-15)


@pytest.mark.parametrize("n", [2.0, 2.5])
def test_no_turbulent_figure_from_n_2_on(n):
    """``Re_MR ~ V^(2-n)`` no longer rises with the velocity, so nothing ends laminar flow."""
    consistency = np.array([1e-12, 1.0])
    flow = solve_pipes(3.0, 0.1, 1000.0, PowerLaw(consistency, n), with_edges=True)
    assert flow.status.tolist() == [Status.NO_ROOT, Status.CONVERGED]
    assert np.isnan(flow.wall_shear_stress[0])
    assert flow.regime[1] == Regime.LAMINAR
    assert np.isnan(flow.turbulent_velocity).all()
