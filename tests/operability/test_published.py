"""Published figures of settling, entrance, transition, wall thickness; each says where it was read or recalled.

The figures are those of the collection in ``tests/published``; the ids in the comments are its own.
"""

import numpy as np
import pytest

from pipeflow.friction.solver import critical_velocities
from pipeflow.operability.deposition import FORMULAS, Solids
from pipeflow.operability.entrance import langhaar, poole_ridley, turbulent_entrance
from pipeflow.operability.pipe_wall import (
    pressure_b31_3,
    pressure_b31_4,
    surge_pressure,
    thickness_b31_3,
    thickness_b31_4,
    wave_speed,
)
from pipeflow.operability.settling import hindered_share, steinour_share, stokes_velocity, terminal_velocity
from pipeflow.rheology import Bingham

INCH, PSI = 0.0254, 6894.757293


def test_hindered_settling_of_glass():
    """SE-CR2-5.3, read in a public reworking of Coulson & Richardson vol. 2, example 5.3."""
    single = float(stokes_velocity(1e-4, 2600.0, 1000.0, 1e-3))
    assert single == pytest.approx(0.00872, abs=5e-6)
    fractions = np.linspace(0.05, 0.4, 350001)
    flux = single * fractions * hindered_share(fractions, 4.8)
    assert fractions[flux.argmax()] == pytest.approx(0.172, abs=0.0005)
    assert flux.max() == pytest.approx(0.000606, abs=1e-6)


def test_hindered_settling_at_60_per_cent():
    """SE-GEAN-14.3-2, reworking of Geankoplis; the book rounds e to 0.622 and psi to 0.205: within 0.4 %, so 1e-5."""
    volume = (0.6 / 2467) / (0.6 / 2467 + 0.4 / 998)
    velocity = float(stokes_velocity(1.554e-4, 2467.0, 998.0, 1.005e-3) * steinour_share(volume))
    assert velocity == pytest.approx(0.001525, abs=1e-5)


def test_terminal_velocity_of_limestone():
    """SE-MCC-7.1, read, McCabe, Smith & Harriott, example 7.1; their drag is of a chart."""
    assert float(terminal_velocity(0.161e-3, 2800.0, 995.7, 0.801e-3)) == pytest.approx(0.022, abs=0.0005)


@pytest.mark.parametrize(
    ("size", "wanted"),
    [
        (1e-4, {"oroskar-turian": 2.06032236, "durand": 3.4090793, "wasp": 1.56931839, "thomas-sublayer": 0.581684536}),
        (3e-4, {"oroskar-turian": 2.47522354, "durand": 3.4090793, "wasp": 1.88465244, "thomas-sublayer": 0.581684536}),
        (1e-3, {"oroskar-turian": 3.02646166, "durand": 3.4090793, "wasp": 2.30344438, "thomas-sublayer": 0.581684536}),
    ],
)
def test_deposition_velocities_are_those_of_the_benchmarks(size, wanted):
    """Computed from the formulas, not published: a regression."""
    solids = Solids(size, 2.65, 0.15, 1e-6)
    found = {key: float(formula.velocity(0.2, solids)) for key, formula in FORMULAS.items()}
    assert found == pytest.approx(wanted, rel=1e-8)


def test_entrance_length_of_laminar_flow():
    """NE-GEAN-2.10-8, read in a public reworking of Geankoplis, example 2.10-8."""
    reynolds = 998.2 * 0.10 * 0.010 / 1.005e-3
    assert reynolds == pytest.approx(993.2, abs=0.1)
    assert float(langhaar(reynolds)) * 0.010 == pytest.approx(0.571, abs=0.0005)


def test_entrance_length_by_poole_and_ridley():
    """0.601 at n = 1 and no inertia; at Re 993 within 2 % of Langhaar, whose constant is another."""
    assert float(poole_ridley(0.0, 1.0)) == pytest.approx(0.601, abs=0.0005)
    assert float(poole_ridley(993.2, 1.0)) == pytest.approx(float(langhaar(993.2)), rel=0.02)
    assert float(turbulent_entrance(1e6)) == pytest.approx(44.0, rel=1e-12)


def test_hanks_transition_of_a_coal_slurry():
    """TR-CHHA-3.8, from memory (confidence high): Chhabra & Richardson, example 3.8."""
    found = critical_velocities(0.40, 1160.0, Bingham(0.5, 0.014))
    assert float(found["hanks"]) == pytest.approx(0.354, abs=0.002)
    # the example's simple form is that of Thomas with 1000 in place of 1050
    assert float(found["thomas"]) * 1000 / 1050 == pytest.approx(0.41, abs=0.005)


def test_wall_of_an_18_inch_pipeline():
    """B31.4 example read in a public page: 300 psi, 18 in, 35 ksi gives S = 25.2 ksi and t = 0.107 in."""
    thickness = float(thickness_b31_4(300 * PSI, 18 * INCH, 35e3 * PSI)) / INCH
    assert pytest.approx(25.2, abs=0.05) == 0.72 * 35.0
    assert thickness == pytest.approx(0.107, abs=0.0005)


@pytest.mark.parametrize("pressure", [2e5, 1e6, 8e6])
def test_what_a_wall_holds_is_the_inverse_of_what_a_pressure_needs(pressure):
    thick = thickness_b31_3(pressure, 0.2191, 138e6, joint_factor=0.85, coefficient=0.4)
    assert float(pressure_b31_3(thick, 0.2191, 138e6, joint_factor=0.85)) == pytest.approx(pressure, rel=1e-12)
    thick = thickness_b31_4(pressure, 0.2191, 241e6, joint_factor=0.8)
    assert float(pressure_b31_4(thick, 0.2191, 241e6, joint_factor=0.8)) == pytest.approx(pressure, rel=1e-12)


def test_a_wall_too_thick_for_the_form_has_no_answer():
    assert np.isnan(pressure_b31_3(0.04, 0.2, 138e6))


def test_sudden_stop():
    """Some 1.3 MPa per m/s of water in a steel pipe; a closure twice the travel time of the wave halves it."""
    speed = float(wave_speed(1000.0, 0.2, 0.008, wall_modulus=200e9))
    assert float(surge_pressure(1000.0, 1.0, speed, 500.0)) == pytest.approx(1.3e6, rel=0.02)
    halved = surge_pressure(1000.0, 1.0, speed, 500.0, 2.0 * (2.0 * 500.0 / speed))
    assert float(halved) == pytest.approx(0.5 * 1000.0 * speed, rel=1e-12)
    assert float(surge_pressure(1000.0, 1.0, speed, 500.0, 0.5)) == pytest.approx(1000.0 * speed, rel=1e-12)
