"""Losses of fittings: ``K = K_laminar/Re_MR + K_turbulent`` on ``rho V²/2``, one continuous function of Re_MR."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache

import numpy as np

from pipeflow.arrays import Array, FloatOrArray
from pipeflow.line.catalogue import INCH, table
from pipeflow.sources import Source

DARBY = Source(
    key="darby-3k",
    title="Three-K loss constants of fittings",
    citation="Darby, Chem. Eng. 106(7), 101 (1999); Darby, Chemical Engineering Fluid Mechanics (2001)",
    confidence="medium",
    note="Re_MR in place of Re for non-Newtonian fluids",
)
HOOPER = Source(
    key="hooper-2k",
    title="Two-K loss constants of fittings",
    citation="Hooper, Chem. Eng. 88(17), 96 (1981)",
    confidence="high",
    note="Re_MR in place of Re for non-Newtonian fluids",
)
METHODS = {source.key: source for source in (DARBY, HOOPER)}
DEFAULT_METHOD = DARBY.key
ENDS = frozenset({"entrance", "entrance_projecting", "exit"})
"""Losses of the ends of a line; their two-K form has no size term."""


@dataclass(frozen=True)
class Fitting:
    """Constants of one fitting in both methods; None where a method has none."""

    key: str
    description: str
    darby: tuple[float, float, float] | None
    hooper: tuple[float, float] | None

    def method(self, preferred: str) -> Source:
        """The method its loss is worked out by: the preferred one, or the other where that has no constants."""
        has = {DARBY.key: self.darby, HOOPER.key: self.hooper}
        other = HOOPER.key if preferred == DARBY.key else DARBY.key
        return METHODS[preferred if has[preferred] else other]

    def constants(self, preferred: str, diameter: FloatOrArray, nominal: FloatOrArray) -> tuple[float, Array]:
        """``K_laminar`` and ``K_turbulent`` in a pipe of inside diameter [m] and nominal size [inches]."""
        if self.method(preferred) is DARBY and self.darby:
            laminar, turbulent, size = self.darby
            return laminar, turbulent * (1.0 + size / np.asarray(nominal) ** 0.3)
        laminar, turbulent = self.hooper or (np.nan, np.nan)
        inverse_inches = 0.0 if self.key in ENDS else INCH / np.asarray(diameter)
        return laminar, np.asarray(turbulent * (1.0 + inverse_inches))


@cache
def fittings() -> dict[str, Fitting]:
    """Every fitting known, by its key in a case file."""
    return {row["key"]: _fitting(row) for row in table("fittings.csv")}


def _fitting(row: Mapping[str, str]) -> Fitting:
    darby, hooper = (row["darby_Km"], row["darby_Ki"], row["darby_Kd"]), (row["hooper_K1"], row["hooper_Kinf"])
    return Fitting(
        row["key"],
        row["description"],
        (float(darby[0]), float(darby[1]), float(darby[2])) if darby[0] else None,
        (float(hooper[0]), float(hooper[1])) if hooper[0] else None,
    )


def resistance(
    counts: Mapping[str, float], diameter: FloatOrArray, nominal: FloatOrArray, method: str = DEFAULT_METHOD
) -> tuple[float, Array]:
    """Sum of ``K_laminar`` and of ``K_turbulent`` over the fittings of a pipe.

    Parameters
    ----------
    counts : mapping of str to float
        Number of each fitting, by key.
    diameter : float or array
        Inside diameter, m.
    nominal : float or array
        Nominal size, inches.
    method : str
        ``darby-3k`` or ``hooper-2k``; a fitting that one of them does not list is taken from the other.

    Raises
    ------
    KeyError
        For an unknown fitting.
    """
    laminar, turbulent = 0.0, np.zeros(np.broadcast_shapes(np.shape(diameter), np.shape(nominal)))
    for key, count in counts.items():
        one_laminar, one_turbulent = fittings()[key].constants(method, diameter, nominal)
        laminar += count * one_laminar
        turbulent = turbulent + count * one_turbulent
    return laminar, turbulent
