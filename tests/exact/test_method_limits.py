"""What each turbulent method and each criterion becomes for a Newtonian liquid and for a power-law fluid.

A published correlation need not reach the smooth Newtonian law: how far it stays away is known of each, and asserted to
the digits it is known to. The formulas at n = 1 and no yield stress are from memory of the papers that the records of
the methods name. Correlations are read at a wall stress, so that no regime comes between.
"""

import numpy as np
import pytest

from pipeflow.friction import solve_pipes
from pipeflow.friction.criteria import CRITERIA
from pipeflow.friction.methods import TURBULENT
from pipeflow.friction.tube import tube_law
from pipeflow.friction.turbulent import Bore
from pipeflow.rheology import Bingham, HerschelBulkley, Newtonian, PowerLaw

REYNOLDS = np.array([1e4, 1e5])
SIZE = 50e-6


def arrays(*values):
    return np.broadcast_arrays(*(np.atleast_1d(np.asarray(value, float)) for value in values))


def velocity(key, stress, law, diameter=0.1, density=1000.0, particle_size=SIZE):
    """V of a correlation in smooth pipe at a wall stress."""
    bore = Bore(*arrays(diameter, density, 0.0, particle_size, stress)[:4])
    tube = tube_law(law, lambda value: np.broadcast_to(np.asarray(value, float), bore.diameter.shape))
    with np.errstate(divide="ignore"):
        return TURBULENT[key].velocity(tube.wall(np.log(stress - tube.yield_stress)), tube, bore)


def friction_factor(key, law_of):
    """Fanning factor at REYNOLDS for a fluid given by the viscosity, V = 2 m/s, D = 0.1 m: by bisection in ln tau."""
    viscosity = 1000.0 * 2.0 * 0.1 / REYNOLDS
    low, high = np.full(2, np.log(1e-1)), np.full(2, np.log(1e2))
    for _ in range(100):
        middle = (low + high) / 2
        reached = velocity(key, np.exp(middle), law_of(viscosity)) < 2.0
        low, high = np.where(reached, middle, low), np.where(reached, high, middle)
    return np.exp(low) / 2000.0


def root_of(slope, constant):
    """Fanning factor of ``1/sqrt f = slope log10(Re sqrt f) + constant``, iterated."""
    root = np.full(2, 14.0)
    for _ in range(300):
        root = slope * np.log10(REYNOLDS / root) + constant
    return root**-2


def logarithmic(slope, constant):
    """The same of ``V/u* = slope ln(rho u* R/mu) + constant``: V/u* is sqrt(2/f), rho u* R/mu is Re sqrt(f/8)."""
    return root_of(slope * np.log(10) / np.sqrt(2), (constant - slope * np.log(np.sqrt(8))) / np.sqrt(2))


COLEBROOK = root_of(4, -4 * np.log10(2.51 / 2))
NEWTONIAN = {
    # the law at n = 1 without a yield stress; per cent of Nikuradse's factor at Re 1e4 and 1e5
    "colebrook-white": (COLEBROOK, -0.1, -0.1),
    "wilson-thomas": (COLEBROOK, -0.1, -0.1),  # alpha is 1 and Omega 0
    "hedstrom": (COLEBROOK, -0.1, -0.1),
    "dodge-metzner": (root_of(4, -0.4), 0.0, 0.0),
    "tomita": (root_of(4, -0.4), 0.0, 0.0),
    "torrance": (logarithmic(2.78, 3.8 - 4.17), 5.5, -1.3),
    "slatter": (logarithmic(2.5, 1.75), -0.1, -0.8),  # solids that do not reach out of the sublayer
    "clapp": (root_of(4.53, 2.69 - 2.95 + 0.68 * (5 - 8)), 5.3, -1.5),
    "irvine": ((2**5 / 7**7 / REYNOLDS) ** 0.25, 2.2, -1.3),
    "hanks": (None, 1.9, 0.4),  # a mixing length, integrated: no closed law
}


@pytest.mark.parametrize("key", TURBULENT)
def test_newtonian_limit(key):
    """Half a tenth of a per cent is half the last digit of the deviation as it is known."""
    law, at_1e4, at_1e5 = NEWTONIAN[key]
    factor = friction_factor(key, Newtonian)
    if law is not None:
        np.testing.assert_allclose(factor, law, rtol=1e-10)
    assert 100 * (factor / root_of(4, -0.4) - 1) == pytest.approx([at_1e4, at_1e5], abs=0.05)


STRESS = np.geomspace(5.0, 500.0, 20)
INDICES = (0.3, 0.5, 0.8, 1.0, 1.2)


def applying_to(*models):
    return [key for key, method in TURBULENT.items() if set(models) <= method.models]


@pytest.mark.parametrize("n", INDICES)
@pytest.mark.parametrize("key", applying_to("power-law", "herschel-bulkley"))
def test_power_law_limit(key, n):
    """Without a yield stress a Herschel–Bulkley fluid is the power-law fluid.

    It is approached in proportion to the yield stress, by Hanks for n above 1 to the Hedstrom number, its (2/n - 1)th
    power.
    """
    there = velocity(key, STRESS, PowerLaw(0.05, n))
    np.testing.assert_allclose(velocity(key, STRESS, HerschelBulkley(0.0, 0.05, n)), there, rtol=1e-13)
    near, nearer = (np.abs(velocity(key, STRESS, HerschelBulkley(y, 0.05, n)) / there - 1) for y in (1e-5, 1e-7))
    assert near.max() < 1e-3
    assert np.all(nearer <= 1.2 * 100 ** -min(1.0, 2 / n - 1) * near + 1e-12)


@pytest.mark.parametrize("key", applying_to("newtonian"))
def test_every_model_reaches_the_newtonian_liquid(key):
    there = velocity(key, STRESS, Newtonian(0.004))
    for law in (PowerLaw(0.004, 1.0), Bingham(0.0, 0.004), HerschelBulkley(0.0, 0.004, 1.0)):
        if law.key in TURBULENT[key].models:
            np.testing.assert_allclose(velocity(key, STRESS, law), there, rtol=1e-13)


def critical(key, law):
    flow = solve_pipes(1e-3, 0.1, 1000.0, law, critical=key, with_edges=True)
    return float(flow.reynolds_critical)


NEWTONIAN_ENDS = {
    # by the formula of each at n = 1 without a yield stress; Hanks & Ricks' constant gives 6464 sqrt(27)/16
    "slatter": 2100.0,
    "ryan-johnson": 2100.0,
    "mishra-tripathi": 2100.0,
    "metzner-reed-2100": 2100.0,
    "slatter-wasp": 2100.0,
    "thomas": 2100.0,
    "intersection": 2100.0,  # its floor: the curves themselves cross near 1000
    "hanks": 6464 * 27**0.5 / 16,
}


@pytest.mark.parametrize("key", CRITERIA)
def test_newtonian_end_of_laminar_flow(key):
    """Those of yield fluids at a yield stress of 1e-12 of the wall stress."""
    models = CRITERIA[key].models
    laws = [law for law in (Newtonian(1e-3), PowerLaw(1e-3, 1.0), Bingham(1e-14, 1e-3)) if law.key in models]
    for law in laws:
        assert critical(key, law) == pytest.approx(NEWTONIAN_ENDS[key], rel=1e-6)


@pytest.mark.parametrize("n", [0.45, 0.6, 0.8, 1.0, 1.2])
def test_power_law_end_of_laminar_flow(n):
    """Re_3 and Hanks & Ricks tend to the value of Ryan & Johnson: Slatter's by this program, Hanks' by his constant."""
    printed = 6464 * n / (1 + 3 * n) ** 2 * (2 + n) ** ((2 + n) / (1 + n))
    scaled = printed * 2100 / (6464 * 27**0.5 / 16)
    for key in ("slatter", "ryan-johnson"):
        assert critical(key, PowerLaw(0.01, n)) == pytest.approx(scaled, rel=1e-9)
    for key, value in (("slatter", scaled), ("hanks", printed)):
        assert critical(key, HerschelBulkley(1e-12, 0.01, n)) == pytest.approx(value, rel=1e-6)
