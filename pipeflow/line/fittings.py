"""Losses of fittings: ``K = K_laminar/Re_MR + K_turbulent`` on ``rho V²/2``, one continuous function."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from dataclasses import dataclass
from functools import cache

import numpy as np

from pipeflow.arrays import Array, FloatOrArray
from pipeflow.line.catalogue import INCH, table
from pipeflow.sources import Range, Source

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
EDWARDS_DARBY = Source(
    key="edwards-darby",
    title="Laminar loss constants measured with non-Newtonian fluids; turbulent constants of the three-K method",
    citation="Edwards, Jadallah & Smith, Chem. Eng. Res. Des. 63, 43 (1985); Darby, Chem. Eng. 106(7), 101 (1999)",
    confidence="medium",
    note="1 and 2 inch fittings; the range of Re_MR is that of each fitting",
)
METHODS = {source.key: source for source in (DARBY, HOOPER, EDWARDS_DARBY)}
DEFAULT_METHOD = DARBY.key
_ORDER = {
    DARBY.key: (DARBY, HOOPER),
    HOOPER.key: (HOOPER, DARBY),
    EDWARDS_DARBY.key: (EDWARDS_DARBY, DARBY, HOOPER),
}
"""For each method, where the constants of a fitting are looked for."""
EXIT = "exit"
ENDS = frozenset({"entrance", "entrance_projecting", EXIT})
"""Losses of the ends of a line; their two-K form has no size term."""


@dataclass(frozen=True)
class Fitting:
    """Constants of one fitting in every method; None where a method has none.

    Attributes
    ----------
    key, description : str
    darby : tuple of float, optional
        ``Km``, ``Ki`` and ``Kd`` (for a nominal diameter in inches).
    hooper : tuple of float, optional
        ``K1`` and ``Kinf``.
    edwards : float, optional
        ``A`` of ``K = A/Re_MR`` in laminar flow, which stands in for ``Km``.
    edwards_range : Range, optional
        Reynolds numbers over which it was measured.
    notes : mapping of str to str
        What a user must know, by the key of the method.
    """

    key: str
    description: str
    darby: tuple[float, float, float] | None
    hooper: tuple[float, float] | None
    edwards: float | None
    edwards_range: Range | None
    notes: Mapping[str, str]

    def method(self, preferred: str) -> Source:
        """Give the method its loss is worked out by: the preferred one, or the next that has constants."""
        has = {
            DARBY.key: self.darby,
            HOOPER.key: self.hooper,
            EDWARDS_DARBY.key: self.edwards and self.darby,
        }
        return next(source for source in _ORDER[preferred] if has[source.key])

    def ranges(self, preferred: str) -> tuple[Range, ...]:
        """Give the range of this fitting's constants where the source states one."""
        measured = self.method(preferred) is EDWARDS_DARBY and self.edwards_range
        return (measured,) if measured else ()

    def note(self, preferred: str) -> str:
        """What is odd in the published constants in use; empty where nothing is."""
        return self.notes.get(self.method(preferred).key, "")

    def constants(self, preferred: str, diameter: FloatOrArray, nominal: FloatOrArray) -> tuple[float, Array]:
        """``K_laminar`` and ``K_turbulent`` in a pipe of inside diameter [m] and nominal size [inches]."""
        method = self.method(preferred)
        if method is not HOOPER and self.darby:
            laminar, turbulent, size = self.darby
            if method is EDWARDS_DARBY and self.edwards:
                laminar = self.edwards
            return laminar, turbulent * (1.0 + size / np.asarray(nominal) ** 0.3)
        laminar, turbulent = self.hooper or (np.nan, np.nan)
        inverse_inches = 0.0 if self.key in ENDS else INCH / np.asarray(diameter)
        return laminar, np.asarray(turbulent * (1.0 + inverse_inches))


@cache
def fittings() -> dict[str, Fitting]:
    """Every fitting known, by its key in a case file."""
    return {row["key"]: _fitting(row) for row in table("fittings.csv")}


def _fitting(row: Mapping[str, str]) -> Fitting:
    edwards = [float(row[key]) for key in ("edwards_A", "edwards_Re_lower", "edwards_Re_upper") if row[key]]
    both = "; ".join(note for note in (row["edwards_note"], row["darby_note"]) if note)
    return Fitting(
        row["key"],
        row["description"],
        (float(row["darby_Km"]), float(row["darby_Ki"]), float(row["darby_Kd"])) if row["darby_Km"] else None,
        (float(row["hooper_K1"]), float(row["hooper_Kinf"])) if row["hooper_K1"] else None,
        edwards[0] if edwards else None,
        Range("Re_MR", edwards[1], edwards[2]) if edwards else None,
        {DARBY.key: row["darby_note"], EDWARDS_DARBY.key: both},
    )


def notes(keys: Iterable[str], preferred: str = DEFAULT_METHOD) -> Iterator[str]:
    """Word what a user must know of the constants of these fittings, once each.

    A fitting that the preferred method does not list, and what is odd or disputed in the constants in use.
    """
    for key in dict.fromkeys(keys):
        fitting = fittings()[key]
        method = fitting.method(preferred).key
        if method != preferred and preferred != EDWARDS_DARBY.key and key not in ENDS:
            yield f"{key}: not in {preferred}; its constants are those of {method}"
        if fitting.note(preferred):
            yield f"{key}: {fitting.note(preferred)}"


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
        A key of :data:`METHODS`; a fitting that the method does not list is taken from another.

    Raises
    ------
    KeyError
        For an unknown fitting or method.
    """
    laminar, turbulent = 0.0, np.zeros(np.broadcast_shapes(np.shape(diameter), np.shape(nominal)))
    for key, count in counts.items():
        one_laminar, one_turbulent = fittings()[key].constants(method, diameter, nominal)
        laminar += count * one_laminar
        turbulent = turbulent + count * one_turbulent
    return laminar, turbulent
