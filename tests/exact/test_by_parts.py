"""The by-parts integral, which needs ``tau(rate)`` alone, against every closed form of laminar tube flow.

Closed forms: power law, Buckingham–Reiner and its extension to Herschel–Bulkley fluids as the program has them (held
to 30 digits in test_laminar.py); Sisko's integral of ``tau³`` and that of Robertson & Stiff over ``tau² rate dtau``,
derived here and evaluated at 30 digits. 1e-10 relative, the arithmetic asked for. Cross and Carreau have no closed
form: test_general_laminar.py holds them to quadrature.
"""

from dataclasses import dataclass

import mpmath as mp
import numpy as np
import pytest
import reference  # noqa: F401  (sets the digits)

from pipeflow.friction import Regime, solve_pipes
from pipeflow.friction.general_laminar import ByPartsTube
from pipeflow.friction.tube import tube_law
from pipeflow.rheology import (
    Bingham,
    Carreau,
    Cross,
    Ellis,
    GeneralRheology,
    HerschelBulkley,
    Newtonian,
    PowerLaw,
    RobertsonStiff,
    Sisko,
)

TOLERANCE = 1e-10


@dataclass(frozen=True)
class YieldPowerLaw(GeneralRheology):
    """``tau_y + K rate^n`` as anyone would write it: a law without a closed form, for all the program can tell."""

    consistency: float
    flow_index: float
    yield_stress: float = 0.0

    key = "herschel-bulkley"

    def excess(self, rate):
        return self.consistency * rate**self.flow_index


def twins(count, highest_plug):
    """The same fluid twice, and a wall shear rate at which its plug is up to ``highest_plug`` of the radius."""
    rng = np.random.default_rng(5)
    for number in range(count):
        n = (1.0, float(rng.uniform(0.1, 1.9)))[number % 2]
        wall_rate, stress = 10.0 ** rng.uniform(-3, 5), 10.0 ** rng.uniform(-2, 3)
        plug = 0.0 if number % 4 < 2 else float(rng.uniform(0.0, highest_plug))
        tau_y, consistency = plug * stress, (1 - plug) * stress / wall_rate**n
        closed = HerschelBulkley(tau_y, consistency, n)
        if number % 4 == 0:
            closed = Newtonian(consistency)
        elif number % 4 == 1:
            closed = PowerLaw(consistency, n)
        elif number % 4 == 2:
            closed = Bingham(tau_y, consistency)
        yield YieldPowerLaw(consistency, n, tau_y), closed, wall_rate


def test_state_of_the_wall_and_shapes():
    """Above a plug of 0.999 the difference ``1 - tau/tau_w`` has lost the digits that this tolerance needs."""
    for general, closed, wall_rate in twins(120, 0.999):
        tubes = [tube_law(law, lambda value: np.atleast_1d(np.asarray(value, float))) for law in (general, closed)]
        assert isinstance(tubes[0], ByPartsTube)
        assert not isinstance(tubes[1], ByPartsTube)
        log_excess = np.atleast_1d(np.log(general.excess(wall_rate)))
        walls = [tube.wall(log_excess) for tube in tubes]
        ratio = float(walls[1].bulk_ratio[0])
        for name, absolute in (
            ("stress", 0.0),
            ("plug", 0.0),
            ("bulk_ratio", 0.0),
            ("log_rate", TOLERANCE),
            ("inverse_local_index", 4 / ratio * TOLERANCE),  # 4/ratio - 3
        ):
            ours, truth = (float(getattr(wall, name)[0]) for wall in walls)
            assert ours == pytest.approx(truth, rel=TOLERANCE, abs=absolute), name
        shapes = [tube.dissipation_shape(wall) for tube, wall in zip(tubes, walls, strict=True)]
        assert shapes[0] == pytest.approx(shapes[1], rel=TOLERANCE)


def agreeing(flows, limit):
    """All pipes of a fluid without a yield stress; else those that both have laminar, or both turbulent."""
    one, other = (flow.regime for flow in flows)
    if not np.any(limit.yield_stress):
        np.testing.assert_array_equal(one, other)
        return np.full(one.shape, True)
    return (one == other) & (one != Regime.TRANSITIONAL)


@pytest.mark.parametrize("method", ["wilson-thomas", "dodge-metzner"])
def test_whole_curve(method):
    """Laminar, transitional and turbulent, by the solver.

    Slatter's criterion reads the index of a general law past its yield stress as the local n', so the two end laminar
    flow apart where there is a plug: pipes that one of them has in the transition are then left out.
    """
    seen = set()
    for general, closed, wall_rate in twins(60, 0.95):
        velocity, diameter = np.geomspace(1e-2, 1e3, 30) * wall_rate * 0.1 / 8, 0.1
        density = float(100 * closed.shear_stress(wall_rate) / (8 * (wall_rate * diameter / 8) ** 2))
        flows = [solve_pipes(velocity, diameter, density, law, method=method) for law in (general, closed)]
        compared = agreeing(flows, closed)
        np.testing.assert_allclose(
            flows[0].wall_shear_stress[compared], flows[1].wall_shear_stress[compared], rtol=TOLERANCE
        )
        seen |= set(flows[1].regime[compared].tolist())
    assert seen == {Regime.LAMINAR, Regime.TRANSITIONAL, Regime.TURBULENT}


def sisko(rng, wall_rate):
    """``∫ tau³ d rate = e³g⁴/4 + 3e²K g^(3+n)/(3+n) + 3eK² g^(2+2n)/(2+2n) + K³ g^(1+3n)/(1+3n)``."""
    e, k, n = 10.0 ** rng.uniform(-3, 1), 10.0 ** rng.uniform(-2, 2), float(rng.uniform(0.1, 1.5))
    g, exact = mp.mpf(wall_rate), mp.mpf(n)
    cubes = e**3 * g**4 / 4 + 3 * mp.mpf(e) ** 2 * k * g ** (3 + exact) / (3 + exact)
    cubes += 3 * e * mp.mpf(k) ** 2 * g ** (2 + 2 * exact) / (2 + 2 * exact)
    cubes += mp.mpf(k) ** 3 * g ** (1 + 3 * exact) / (1 + 3 * exact)
    stress = e * g + k * g**exact
    return Sisko(e, k, n), stress, mp.mpf(4) / 3 * (g - cubes / stress**3)


def robertson_stiff(rng, wall_rate):
    """``G = 4/tau_w³ [(tau_w^(3+1/B) - tau_0^(3+1/B))/(A^(1/B) (3+1/B)) - C (tau_w³ - tau_0³)/3]``, tau_0 = A C^B."""
    a, b = 10.0 ** rng.uniform(-2, 2), float(rng.uniform(0.15, 1.2))
    c = wall_rate * 10.0 ** rng.uniform(-4, 1)
    exact = mp.mpf(b)
    stress, rest = a * (mp.mpf(wall_rate) + c) ** exact, a * mp.mpf(c) ** exact
    power = 3 + 1 / exact
    bulk = (stress**power - rest**power) / (mp.mpf(a) ** (1 / exact) * power) - c * (stress**3 - rest**3) / 3
    return RobertsonStiff(a, b, c), stress, 4 * bulk / stress**3


@pytest.mark.parametrize("closed_form", [sisko, robertson_stiff])
def test_other_closed_forms(closed_form):
    rng = np.random.default_rng(6)
    for _ in range(60):
        wall_rate, diameter = 10.0 ** rng.uniform(-2, 4), 10.0 ** rng.uniform(-2, 0)
        law, stress, bulk_rate = closed_form(rng, wall_rate)
        velocity = bulk_rate * diameter / 8
        density = float(10.0 ** rng.uniform(-3, 2) * stress / (8 * velocity**2))
        flow = solve_pipes(float(velocity), diameter, density, law)
        assert flow.regime == Regime.LAMINAR
        assert float(flow.wall_shear_stress) == pytest.approx(float(stress), rel=TOLERANCE)
        assert float(flow.wall_shear_rate) == pytest.approx(wall_rate, rel=TOLERANCE)


@pytest.mark.parametrize(
    ("general", "limit"),
    [
        (Sisko(0.3, 0.0, 0.5), Newtonian(0.3)),
        (Sisko(0.0, 3.0, 0.4), PowerLaw(3.0, 0.4)),
        (Sisko(0.1, 0.2, 1.0), Newtonian(0.1 + 0.2)),
        (RobertsonStiff(3.0, 0.4, 0.0), PowerLaw(3.0, 0.4)),
        (RobertsonStiff(0.3, 1.0, 40.0), Bingham(12.0, 0.3)),
        (Cross(0.3, 0.3, 2.0, 0.6), Newtonian(0.3)),
        (Cross(0.3, 0.01, 0.0, 0.6), Newtonian(0.3)),
        (Carreau(0.3, 0.01, 2.0, 1.0), Newtonian(0.3)),
        (Carreau(0.3, 0.01, 0.0, 0.5), Newtonian(0.3)),
        (Ellis(0.6, 5.0, 1.0), Newtonian(0.3)),
        (Ellis(0.3, 1e60, 2.0), Newtonian(0.3)),
    ],
    ids=lambda law: type(law).__name__,
)
@pytest.mark.parametrize("method", ["wilson-thomas", "dodge-metzner"])
def test_general_laws_reach_their_limits(general, limit, method):
    """Every regime. Ellis at alpha = 1 is half ``eta_0``, a trap of the law itself."""
    velocity = np.geomspace(1e-3, 60.0, 60)
    one, other = (solve_pipes(velocity, 0.1, 1100.0, law, method=method) for law in (general, limit))
    assert set(np.unique(other.regime)) == {1, 2, 3}
    compared = agreeing([one, other], limit)
    np.testing.assert_allclose(one.wall_shear_stress[compared], other.wall_shear_stress[compared], rtol=TOLERANCE)
    assert compared.sum() > 50
