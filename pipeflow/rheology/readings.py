"""Viscometer readings as read: what was measured, on what, on which sample. SI units."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import Any, Literal, Self

import numpy as np
from numpy.typing import NDArray

from pipeflow.arrays import Array
from pipeflow.rootfind import take

IntArray = NDArray[np.int64]


@dataclass(frozen=True)
class Sample:
    """What the readings were taken on; None where the sheet does not say.

    Attributes
    ----------
    temperature : float or None
        K.
    solids : float or None
        Solids content as the laboratory states it, a fraction.
    density, particle_density : float or None
        Of the sample and of its solids, kg/m³.
    particle_size : float or None
        A coarse size of the solids, m.
    dwell_time : float or None
        Time at each reading, s.
    shear_history : str or None
        ``fresh`` or ``sheared``.
    static_yield_stress, rest_time : float or None
        Stress that started flow, Pa, after a rest, s.
    """

    name: str = ""
    date: str = ""
    instrument: str = ""
    temperature: float | None = None
    solids: float | None = None
    density: float | None = None
    particle_density: float | None = None
    particle_size: float | None = None
    dwell_time: float | None = None
    shear_history: Literal["fresh", "sheared"] | None = None
    static_yield_stress: float | None = None
    rest_time: float | None = None
    notes: tuple[str, ...] = ()


@dataclass(frozen=True)
class Readings:
    """What readings of every kind have, row by row.

    Attributes
    ----------
    lines : IntArray
        Lines of the file.
    resolution : Array
        Half the last printed digit of what gives the stress, relative to it.
    ramps : NDArray
        ``up``, ``down`` or empty.
    sample : Sample
    """

    lines: IntArray
    resolution: Array
    ramps: NDArray[np.str_]
    sample: Sample

    def only(self, kept: NDArray[np.bool_]) -> Self:
        """Some of the rows."""
        columns = ((name, value) for name, value in vars(self).items() if isinstance(value, np.ndarray))
        rows: dict[str, Any] = {name: take(value, kept) for name, value in columns}
        return replace(self, **rows)


@dataclass(frozen=True)
class CurveReadings(Readings):
    """Shear rate [1/s] and shear stress [Pa], as the instrument works them out."""

    shear_rate: Array
    shear_stress: Array


@dataclass(frozen=True)
class TubeReadings(Readings):
    """Tube viscometer: inside diameter and length [m], pressure drop [Pa] and flow [m³/s] of each run."""

    diameter: Array
    length: Array
    pressure_drop: Array
    flow: Array

    @property
    def bulk_rate(self) -> Array:
        """``8V/D = 32 Q/(pi D³)``, 1/s."""
        return 32.0 * self.flow / (np.pi * self.diameter**3)

    @property
    def velocity(self) -> Array:
        """Bulk velocity, m/s."""
        return self.bulk_rate * self.diameter / 8.0


@dataclass(frozen=True)
class CylinderReadings(Readings):
    """Concentric cylinders: speed [rad/s], stress at the bob [Pa], radii and sheared height [m]."""

    speed: Array
    bob_stress: Array
    bob_radius: float
    cup_radius: float
    height: float | None = None
    rotating: Literal["bob", "cup"] = "bob"

    @property
    def radius_ratio(self) -> float:
        """Cup over bob."""
        return self.cup_radius / self.bob_radius
