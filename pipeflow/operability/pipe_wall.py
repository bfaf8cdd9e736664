"""What the wall of a pipe can hold, and the pressure of a sudden stop.

Forms of the codes only: allowable stresses, joint factors, ratings and deratings are inputs, from the code itself.
SI units; arrays broadcast.
"""

from __future__ import annotations

import numpy as np

from pipeflow.arrays import Array, FloatOrArray
from pipeflow.sources import Range, Source

B31_3 = Source(
    key="b31.3",
    title="Wall of a process pipe under internal pressure",
    citation="ASME B31.3, straight pipe: t = P D/[2 (S E W + P Y)] + c",
    ranges=(Range("t/D", None, 1.0 / 6.0),),
    note="its form; Y = 0.4 for ductile metals below some 480 °C; stress, factors and allowances are inputs",
)
B31_4 = Source(
    key="b31.4",
    title="Wall of a liquid or slurry pipeline under internal pressure",
    citation="ASME B31.4: t = P D/(2 F E S_y)",
    confidence="medium",
    note="its form; design factor F = 0.72, from memory; yield strength, joint factor and allowances are inputs",
)
RATED = Source(
    key="pressure-rating",
    title="Rated pressure of a pipe, derated for its temperature",
    citation="the maker's rating times the derating factor; both are inputs",
    confidence="exact",
)
JOUKOWSKY = Source(
    key="joukowsky",
    title="Pressure rise of a sudden stop",
    citation="Joukowsky (1898): rho a dV, a² = (K/rho)/[1 + (K/E)(D/t)]; slow closure Michaud (1878): 2 rho L dV/t_c",
    note="a thin wall free to move; entrained air lowers it, solids raise the density; an estimate, no surge study",
)
WATER_MODULUS = 2.2e9
"""Bulk modulus of water, Pa (common practice)."""
WALL_MODULUS = {"steel": 200e9, "sanitary": 193e9, "polyethylene": 1.0e9}
"""Elastic modulus of pipe materials, Pa (common practice; polyethylene: short-term, 20 °C)."""


def thickness_b31_3(
    pressure: FloatOrArray,
    outside_diameter: FloatOrArray,
    stress: FloatOrArray,
    *,
    joint_factor: FloatOrArray = 1.0,
    weld_factor: FloatOrArray = 1.0,
    coefficient: FloatOrArray = 0.4,
) -> Array:
    """``P D/[2 (S E W + P Y)]`` [m]: thickness for pressure, without allowances and mill tolerance."""
    strength = np.asarray(stress) * joint_factor * weld_factor
    return np.asarray(np.asarray(pressure) * outside_diameter / (2.0 * (strength + np.asarray(pressure) * coefficient)))


def pressure_b31_3(
    thickness: FloatOrArray,
    outside_diameter: FloatOrArray,
    stress: FloatOrArray,
    *,
    joint_factor: FloatOrArray = 1.0,
    weld_factor: FloatOrArray = 1.0,
    coefficient: FloatOrArray = 0.4,
) -> Array:
    """``2 S E W t/(D - 2 Y t)`` [Pa]: what the thickness left holds; nan beyond t = D/6."""
    wall, outside = np.asarray(thickness, dtype=np.float64), np.asarray(outside_diameter, dtype=np.float64)
    strength = np.asarray(stress) * joint_factor * weld_factor
    held = 2.0 * strength * wall / (outside - 2.0 * np.asarray(coefficient) * wall)
    return np.where(wall < outside / 6.0, held, np.nan)


def thickness_b31_4(
    pressure: FloatOrArray,
    outside_diameter: FloatOrArray,
    yield_strength: FloatOrArray,
    *,
    design_factor: FloatOrArray = 0.72,
    joint_factor: FloatOrArray = 1.0,
) -> Array:
    """``P D/(2 F E S_y)`` [m]: thickness for pressure, without allowances."""
    strength = np.asarray(design_factor) * joint_factor * yield_strength
    return np.asarray(np.asarray(pressure) * outside_diameter / (2.0 * strength))


def pressure_b31_4(
    thickness: FloatOrArray,
    outside_diameter: FloatOrArray,
    yield_strength: FloatOrArray,
    *,
    design_factor: FloatOrArray = 0.72,
    joint_factor: FloatOrArray = 1.0,
) -> Array:
    """``2 F E S_y t/D`` [Pa]: what the thickness left holds."""
    strength = np.asarray(design_factor) * joint_factor * yield_strength
    return np.asarray(2.0 * strength * thickness / outside_diameter)


def thickness_left(wall: FloatOrArray, mill_tolerance: FloatOrArray = 0.0, allowances: FloatOrArray = 0.0) -> Array:
    """``t (1 - tolerance) - allowances`` [m]; nan where nothing is left."""
    left = np.asarray(wall) * (1.0 - np.asarray(mill_tolerance)) - allowances
    return np.where(left > 0, left, np.nan)


def wave_speed(
    density: FloatOrArray,
    diameter: FloatOrArray,
    wall: FloatOrArray,
    *,
    wall_modulus: FloatOrArray,
    bulk_modulus: FloatOrArray = WATER_MODULUS,
) -> Array:
    """Speed of a pressure wave [m/s], ``sqrt[(K/rho)/(1 + (K/E)(D/t))]``; nothing is known of entrained gas.

    Examples
    --------
    >>> round(float(wave_speed(1000.0, 0.2, 0.008, wall_modulus=200e9)))
    1314
    """
    slack = 1.0 + np.asarray(bulk_modulus) / wall_modulus * np.asarray(diameter) / wall
    return np.asarray(np.sqrt(np.asarray(bulk_modulus) / density / slack))


def surge_pressure(
    density: FloatOrArray,
    velocity: FloatOrArray,
    speed: FloatOrArray,
    length: FloatOrArray,
    closure_time: FloatOrArray = 0.0,
) -> Array:
    """Pressure rise [Pa] when the flow is stopped: ``rho a V``, or ``2 rho L V/t_c`` if the closure is the slower.

    Parameters
    ----------
    density, velocity, speed, length, closure_time : float or array
        kg/m³, m/s, wave speed in m/s, length of the line in m, s.
    """
    travel = 2.0 * np.asarray(length) / speed
    share = travel / np.maximum(closure_time, travel)
    return np.asarray(density * np.asarray(velocity) * speed * share)
