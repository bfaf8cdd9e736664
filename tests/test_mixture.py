"""The mixture by its balances: worked values, round trips, limits, and arrays."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from pipeflow.rheology import mixture

FRACTIONS = st.floats(1e-3, 0.999)
SOLIDS = st.floats(1100, 8000)
LIQUIDS = st.floats(600, 1500)


def test_half_quartz_in_water_by_mass() -> None:
    density = mixture.density_by_mass(0.5, 2650.0, 1000.0)
    share = mixture.volume_fraction(0.5, 2650.0, density)
    assert density == pytest.approx(5300 / 3.65, rel=1e-15)
    assert round(float(density), 2) == 1452.05
    assert round(float(share), 5) == 0.27397
    assert mixture.mass_fraction(share, 2650.0, density) == pytest.approx(0.5, rel=1e-15)


def test_a_litre_put_together_by_hand() -> None:
    # 0.3 L of solids at 2.5 kg/L and 0.7 L of liquid at 1.1 kg/L: 0.75 kg and 0.77 kg
    assert mixture.density_by_volume(0.3, 2500.0, 1100.0) == pytest.approx(1520.0, rel=1e-15)
    assert mixture.mass_fraction(0.3, 2500.0, 1520.0) == pytest.approx(0.75 / 1.52, rel=1e-15)
    assert mixture.slurry_flow(0.75, 0.75 / 1.52, 1520.0) == pytest.approx(1e-3, rel=1e-15)


@given(FRACTIONS, SOLIDS, LIQUIDS)
def test_fractions_of_mass_and_volume_tell_of_one_mixture(fraction: float, solids: float, liquid: float) -> None:
    density = mixture.density_by_mass(fraction, solids, liquid)
    share = mixture.volume_fraction(fraction, solids, density)
    assert mixture.density_by_volume(share, solids, liquid) == pytest.approx(float(density), rel=1e-13)
    assert mixture.mass_fraction(share, solids, density) == pytest.approx(fraction, rel=1e-14)
    closed = fraction / (fraction + (1 - fraction) * solids / liquid)
    assert share == pytest.approx(closed, rel=1e-12)


@given(FRACTIONS, SOLIDS, LIQUIDS)
def test_the_liquid_is_found_again(share: float, solids: float, liquid: float) -> None:
    density = mixture.density_by_volume(share, solids, liquid)
    # the liquid is a difference of two larger figures where there is little of it
    tolerance = 1e-15 * float(density) / ((1 - share) * liquid) * 10
    assert mixture.liquid_density(share, solids, density) == pytest.approx(liquid, rel=tolerance)


@given(st.floats(1e-6, 1e3), FRACTIONS, SOLIDS)
def test_flows_of_slurry_and_solids_are_inverse(dry: float, fraction: float, density: float) -> None:
    flow = mixture.slurry_flow(dry, fraction, density)
    assert mixture.dry_solids_flow(flow, fraction, density) == pytest.approx(dry, rel=1e-14)


def test_without_solids_it_is_the_liquid_and_without_liquid_the_solids() -> None:
    ends = np.array([0.0, 1.0])
    np.testing.assert_allclose(mixture.density_by_mass(ends, 2650.0, 998.0), [998.0, 2650.0], rtol=1e-15)
    np.testing.assert_allclose(mixture.density_by_volume(ends, 2650.0, 998.0), [998.0, 2650.0], rtol=1e-15)


def test_solids_that_outweigh_the_mixture_leave_no_liquid() -> None:
    assert mixture.liquid_density(0.5, 2650.0, 1200.0) < 0


def test_arrays_broadcast() -> None:
    fraction, solids = np.linspace(0.1, 0.6, 4)[:, None], np.array([2200.0, 2650.0, 4100.0])
    density = mixture.density_by_mass(fraction, solids, 1000.0)
    assert density.shape == (4, 3)
    assert density[2, 1] == mixture.density_by_mass(fraction[2, 0], 2650.0, 1000.0)
    assert mixture.slurry_flow(10.0, fraction, density).shape == (4, 3)
