"""Distributions of one uncertain input, kept within what is possible.

Where a distribution reaches impossible values, the part of it that is possible stands for the whole: its density is
divided by that share (truncation), and ``impossible`` tells the share left out.
"""

from __future__ import annotations

import math
from abc import ABC, abstractmethod
from dataclasses import dataclass

import numpy as np
from scipy.special import ndtr, ndtri

from pipeflow.arrays import Array, FloatOrArray
from pipeflow.sources import Source

RECTANGULAR = Source(
    key="gum-rectangular",
    title="A tolerance without more said is a rectangular distribution: any value within it is as likely",
    citation="JCGM 100:2008 (GUM), 4.3.7; JCGM 101:2008, 6.4.2",
)


class Distribution(ABC):
    """Distribution of one number."""

    @property
    @abstractmethod
    def impossible(self) -> float:
        """Share of the distribution as stated that lies outside what is possible, 0 to 1."""

    @abstractmethod
    def quantile(self, probability: FloatOrArray) -> Array:
        """The value that a share ``probability``, above 0 and below 1, of the possible part lies below."""

    @abstractmethod
    def below(self, value: float) -> float:
        """Share of the possible part that lies below a value."""


@dataclass(frozen=True)
class Rectangular(Distribution):
    """Any value from ``lower`` to ``upper`` as likely; possible from ``least`` to ``most``."""

    lower: float
    upper: float
    least: float = -math.inf
    most: float = math.inf

    @property
    def ends(self) -> tuple[float, float]:
        """Lower and upper end of the possible part."""
        return max(self.lower, self.least), min(self.upper, self.most)

    @property
    def impossible(self) -> float:
        """Share outside what is possible."""
        low, high = self.ends
        return 1.0 - max(high - low, 0.0) / (self.upper - self.lower)

    def quantile(self, probability: FloatOrArray) -> Array:
        """Between the ends, in proportion."""
        low, high = self.ends
        return np.asarray(low + (high - low) * np.asarray(probability))

    def below(self, value: float) -> float:
        """In proportion."""
        low, high = self.ends
        return min(max((value - low) / (high - low), 0.0), 1.0)


@dataclass(frozen=True)
class Normal(Distribution):
    """Normal with a ``mean`` and a standard ``deviation`` above 0; possible from ``least`` to ``most``."""

    mean: float
    deviation: float
    least: float = -math.inf
    most: float = math.inf

    @property
    def impossible(self) -> float:
        """Share outside what is possible."""
        low, high = (np.asarray((end - self.mean) / self.deviation) for end in (self.least, self.most))
        return float(ndtr(low) + ndtr(-high))

    def quantile(self, probability: FloatOrArray) -> Array:
        """Of the truncated normal."""
        low, high = (np.asarray((end - self.mean) / self.deviation) for end in (self.least, self.most))
        return self.mean + self.deviation * truncated_normal(probability, low, high)

    def below(self, value: float) -> float:
        """Of the truncated normal."""
        low, high, at = (float(ndtr((end - self.mean) / self.deviation)) for end in (self.least, self.most, value))
        return min(max((at - low) / (high - low), 0.0), 1.0)


def truncated_normal(probability: FloatOrArray, lower: Array, upper: Array) -> Array:
    """Quantile of the standard normal between two ends, which broadcast with the probability.

    Worked out on the side of the ends that keeps the digits of a far tail.
    """
    flip = lower > 0
    low, high = np.where(flip, -upper, lower), np.where(flip, -lower, upper)
    share = np.where(flip, 1.0 - np.asarray(probability), probability)
    below, above = ndtr(low), ndtr(high)
    value = ndtri(below + share * (above - below))
    return np.asarray(np.where(flip, -value, value))
