"""The published equations for viscosity and solids, and the two viscosities that stand for a slurry.

Constants and limits of ANSI/HI 9.6.7-2010, in metric and US units, are from memory.
"""

import numpy as np
import pint
import pytest
from hypothesis import given
from hypothesis import strategies as st
from pump_cases import RPM
from scipy.optimize import brentq

from pipeflow.pumping.correction import (
    HI_VISCOSITY,
    efficiency_factor,
    flow_factor,
    head_factor,
    npsh_factor,
    preselected_water_duty,
    preselection_parameter,
    specific_speed,
    viscosity_parameter,
)
from pipeflow.pumping.equivalent import Outlet, equivalent_viscosity, passage_rate, twice_the_speed
from pipeflow.pumping.solids import cave, derating
from pipeflow.rheology import Bingham, Casson, HerschelBulkley, Newtonian, PowerLaw
from pipeflow.rheology.general import Carreau, Cross, Ellis, RobertsonStiff, Sisko

UNITS = pint.UnitRegistry()
CUBIC_METRE_PER_HOUR, GALLON_PER_MINUTE = UNITS("m**3/hour"), UNITS("gallon/minute")


def in_us_units(flow: float, head: float) -> tuple[float, float]:
    """A flow of so many US gal/min and a head of so many ft, in m³/h and m."""
    return (flow * GALLON_PER_MINUTE).to("m**3/hour").magnitude, UNITS.Quantity(head, "ft").to("m").magnitude


def test_constants_agree_with_those_of_us_units():
    """26.6 and 4.70 in gal/min and ft, 225 000 for NPSH, beside 16.5, 2.80 and 274 000; each to its last digit."""
    flow, head = in_us_units(1.0, 1.0)
    assert 16.5 * head**0.0625 / flow**0.375 == pytest.approx(26.6, abs=0.05 + 0.05 * 26.6 / 16.5)
    assert 2.80 / (flow**0.25 * head**0.125) == pytest.approx(4.70, abs=0.005 + 0.005 * 4.70 / 2.80)
    assert 274_000 * head / flow**0.667 == pytest.approx(225_000, abs=500 + 500 * 225 / 274)


@pytest.mark.parametrize(
    ("b", "head", "efficiency"),
    [(2, 0.996, 0.941), (5, 0.948, 0.765), (10, 0.848, 0.540), (20, 0.686, 0.274), (39.999999, 0.484, 0.076)],
)
def test_factors_by_b(b, head, efficiency):
    """Worked out apart from the program, to three digits."""
    assert float(flow_factor(b)) == pytest.approx(head, abs=5e-4)
    assert float(head_factor(b, 1.0)) == pytest.approx(head, abs=5e-4)
    assert float(efficiency_factor(b)) == pytest.approx(efficiency, abs=5e-4)


def test_no_correction_to_b_of_1_and_none_known_from_40():
    for factor in (flow_factor, efficiency_factor):
        assert (factor(np.array([0.0, 0.3, 1.0])) == 1.0).all()
        assert np.isnan(factor(np.array([40.0, 100.0, np.inf, np.nan]))).all()
    assert float(head_factor(10.0, 0.0)) == 1.0
    assert np.isnan(head_factor(39.9, np.array([-0.1, 2.5]))).all()


@given(st.floats(0.1, 39.9), st.floats(0.1, 39.9), st.floats(0.0, 1.4))
def test_factors_fall_with_b(one, other, share):
    low, high = sorted((one, other))
    for factor in (flow_factor, efficiency_factor, lambda b: head_factor(b, share)):
        assert 0.0 < factor(high) <= factor(low) <= 1.0


def test_preselection_leads_back_to_the_wanted_duty():
    """The water duty, corrected by B of its own, is near the duty wanted: the two forms of B differ by a little."""
    viscosity, flow, head = 120e-6, 100 / 3600, 72.0
    on_water = preselected_water_duty(viscosity, flow, head)
    b = float(preselection_parameter(viscosity, flow, head))
    assert b == pytest.approx(2.80 * 120**0.5 / (100**0.25 * 72**0.125), rel=1e-14)
    assert float(on_water[0] * flow_factor(b)) == pytest.approx(flow, rel=1e-14)
    assert float(on_water[1] * head_factor(b, 1.0)) == pytest.approx(head, rel=1e-14)
    full = float(viscosity_parameter(viscosity, *on_water, 2950 * RPM))
    assert full == pytest.approx(b, rel=0.1)


def test_npsh_by_hand():
    """``1 + A (1/C_H - 1) 274 000 NPSH/(Q^0.667 N^1.33)``; an end suction has A = 0.1, a side inlet 0.5."""
    part = (1 / 0.938 - 1) * 274_000 * 4.2 / (110**0.667 * 2950**1.33)
    arguments = (0.938, 4.2, 110 / 3600, 2950 * RPM)
    assert float(npsh_factor(*arguments)) == pytest.approx(1 + 0.1 * part, rel=1e-12)
    assert float(npsh_factor(*arguments, "side")) == pytest.approx(1 + 0.5 * part, rel=1e-12)
    assert float(npsh_factor(1.0, *arguments[1:])) == 1.0


def test_limits_of_the_record():
    """1 to 3000 mm²/s, 3 to 260 m³/h, 6 to 130 m a stage, n_s to 60: 13 to 1140 gal/min and 20 to 430 ft in print."""
    ranges = {bound.variable.split(" in ")[0].split(" (")[0]: bound for bound in HI_VISCOSITY.ranges}
    assert ranges["B"].upper == 40
    assert (ranges["viscosity"].lower, ranges["viscosity"].upper) == (1, 3000)
    flows, heads = ranges["best-efficiency flow"], ranges["best-efficiency head of a stage"]
    for bound, flow, head in (("lower", 13, 20), ("upper", 1140, 430)):
        hourly, metres = in_us_units(flow, head)
        assert getattr(flows, bound) == pytest.approx(hourly, rel=0.02)
        assert getattr(heads, bound) == pytest.approx(metres, rel=0.02)
    assert ranges["specific speed"].upper == 60


def test_specific_speed_of_the_limit_is_about_3000_in_us_units():
    flow, head = in_us_units(1000.0, 100.0)
    us = 60 * float(1000.0**0.5 / 100.0**0.75) / float(specific_speed(RPM, flow / 3600, head))
    assert us == pytest.approx(3000, rel=0.04)


def test_shear_rates():
    assert float(twice_the_speed(155.0)) == 310.0
    rate = passage_rate(np.array([0.0, 0.03]), Outlet(0.4, 0.03))
    assert rate[0] == 0.0
    velocity, hydraulic_diameter = 0.03 / (np.pi * 0.4 * 0.03), 4 * np.pi * 0.4 * 0.03 / (2 * np.pi * 0.4)
    assert rate[1] == pytest.approx(8 * velocity / hydraulic_diameter, rel=1e-14)


def test_two_viscosities_of_a_bingham_plastic():
    """``mu_p + tau_y/rate`` and ``mu_p``, over the density."""
    found = equivalent_viscosity(Bingham(12.0, 0.03), 1500.0, 300.0)
    assert float(found.apparent) == pytest.approx((0.03 + 12 / 300) / 1500, rel=1e-14)
    assert float(found.differential) == pytest.approx(0.03 / 1500, rel=1e-14)


@pytest.mark.parametrize(
    "law",
    [
        *(Newtonian(0.02), PowerLaw(0.5, 0.4), PowerLaw(0.01, 1.3), Bingham(12.0, 0.03), HerschelBulkley(5, 0.5, 0.5)),
        *(Casson(5, 0.02), Cross(1, 0.01, 0.3, 0.7), Carreau(1, 0.01, 0.3, 0.4), Sisko(0.01, 0.5, 0.4)),
        *(RobertsonStiff(0.5, 0.4, 3.0), Ellis(1, 2.0, 2.5)),
    ],
    ids=lambda law: law.key,
)
def test_differential_viscosity_is_the_slope(law):
    """Against a central difference, whose own error is below 1e-8 here."""
    rate, step = np.array([1.0, 30.0, 300.0, 3000.0]), 1e-5
    slope = (law.shear_stress(rate * (1 + step)) - law.shear_stress(rate * (1 - step))) / (2 * step * rate)
    np.testing.assert_allclose(law.differential_viscosity(rate), slope, rtol=1e-8)


def test_cave_by_hand_and_its_finest_solids():
    hand = 1 - 0.0385 * 1.65 * (1 + 4 / 2.65) * 0.3 * np.log(0.211 / 0.0227)
    assert float(cave(0.211e-3, 2.65, 0.30)) == pytest.approx(hand, rel=1e-14)
    assert float(cave(0.0227e-3, 2.65, 0.30)) == pytest.approx(1.0, abs=1e-12)
    assert np.isnan(cave(0.02e-3, 2.65, 0.30))
    ten_per_cent = brentq(lambda size: float(cave(size, 2.65, 0.30)) - 0.9, 1e-4, 1e-3)
    assert ten_per_cent == pytest.approx(0.0227e-3 * np.exp(0.1 / (1 - hand) * np.log(0.211 / 0.0227)), rel=1e-9)


@pytest.mark.parametrize(
    ("size", "is_viscous", "kind"),
    [
        (None, True, "viscous"),
        (10e-6, True, "viscous"),
        (25e-6, False, "viscous"),
        (35e-6, True, "lower of both"),
        (200e-6, True, "lower of both"),
        (35e-6, False, "solids"),
        (200e-6, False, "solids"),
    ],
)
def test_which_correction_applies(size, is_viscous, kind):
    decided = derating(size, is_viscous)
    assert decided.kind == kind
    assert len(decided.reason.split()) > 5
