"""Slurry of solids and liquid: densities, fractions and flows, by the balances of mass and volume.

Fractions are 0 to 1, of the mixture as it stands in the pipe: a delivered concentration differs from it where solids
lag behind the liquid. Dissolved matter belongs to the liquid, so that total solids or Brix are no volume fraction.
Densities in kg/m³; floats or arrays, which broadcast.
"""

from __future__ import annotations

import numpy as np

from pipeflow.arrays import Array, FloatOrArray


def density_by_mass(mass_fraction: FloatOrArray, solids_density: FloatOrArray, liquid_density: FloatOrArray) -> Array:
    """Density of the mixture [kg/m³]: ``1/rho_m = C_w/rho_s + (1 - C_w)/rho_f``.

    Examples
    --------
    >>> round(float(density_by_mass(0.5, 2650.0, 1000.0)), 2)
    1452.05
    """
    c = np.asarray(mass_fraction)
    return np.asarray(1.0 / (c / solids_density + (1.0 - c) / liquid_density))


def density_by_volume(
    volume_fraction: FloatOrArray, solids_density: FloatOrArray, liquid_density: FloatOrArray
) -> Array:
    """Density of the mixture [kg/m³]: ``rho_m = C_v rho_s + (1 - C_v) rho_f``."""
    c = np.asarray(volume_fraction)
    return np.asarray(c * solids_density + (1.0 - c) * liquid_density)


def volume_fraction(mass_fraction: FloatOrArray, solids_density: FloatOrArray, mixture_density: FloatOrArray) -> Array:
    """Volume fraction of the solids: ``C_v = C_w rho_m/rho_s``."""
    return np.asarray(mass_fraction * np.asarray(mixture_density) / solids_density)


def mass_fraction(volume_fraction: FloatOrArray, solids_density: FloatOrArray, mixture_density: FloatOrArray) -> Array:
    """Mass fraction of the solids: ``C_w = C_v rho_s/rho_m``."""
    return np.asarray(volume_fraction * np.asarray(solids_density) / mixture_density)


def liquid_density(volume_fraction: FloatOrArray, solids_density: FloatOrArray, mixture_density: FloatOrArray) -> Array:
    """Density of the liquid [kg/m³] that the solids leave: ``rho_f = (rho_m - C_v rho_s)/(1 - C_v)``.

    Not above zero where the solids alone outweigh the mixture.
    """
    c = np.asarray(volume_fraction)
    return np.asarray((mixture_density - c * solids_density) / (1.0 - c))


def slurry_flow(dry_solids: FloatOrArray, mass_fraction: FloatOrArray, mixture_density: FloatOrArray) -> Array:
    """Volume flow of the mixture [m³/s] that carries a mass flow of dry solids [kg/s]: ``Q = M_s/(C_w rho_m)``."""
    return np.asarray(dry_solids / (np.asarray(mass_fraction) * mixture_density))


def dry_solids_flow(flow: FloatOrArray, mass_fraction: FloatOrArray, mixture_density: FloatOrArray) -> Array:
    """Mass flow of dry solids [kg/s] in a volume flow of the mixture [m³/s]: ``M_s = Q C_w rho_m``."""
    return np.asarray(flow * np.asarray(mass_fraction) * mixture_density)
