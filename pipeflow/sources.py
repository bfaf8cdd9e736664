"""The machine-readable record of a published method: what it is, where it was published, where it holds."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

Confidence = Literal["exact", "high", "medium"]


@dataclass(frozen=True)
class Range:
    """The interval of one variable over which a method was published, in SI units; None is no bound."""

    variable: str
    lower: float | None
    upper: float | None

    def __str__(self) -> str:
        """``0.36 <= n' <= 1``, with the missing bound left out."""
        lower = "" if self.lower is None else f"{self.lower:g} <= "
        upper = "" if self.upper is None else f" <= {self.upper:g}"
        return f"{lower}{self.variable}{upper}"

    def holds(self, value: float, tolerance: float = 0.0) -> bool:
        """Whether a value lies in the range, bounds widened by a relative ``tolerance``."""
        above = self.lower is None or value >= self.lower * (1.0 - tolerance)
        return above and (self.upper is None or value <= self.upper * (1.0 + tolerance))


@dataclass(frozen=True)
class Source:
    """A published method.

    Attributes
    ----------
    key : str
        The name used in case files, results and documents.
    title : str
        What it computes, in the trade's words.
    citation : str
        Author, year, journal and equation.
    ranges : tuple of Range
        Where the method was published to hold; leaving one is a caution in a result.
    confidence : str
        How sure the transcription is: ``exact`` for a derivation checked by computation.
    note : str
        Anything a user must know before relying on it.
    """

    key: str
    title: str
    citation: str
    ranges: tuple[Range, ...] = ()
    confidence: Confidence = "high"
    note: str = ""
