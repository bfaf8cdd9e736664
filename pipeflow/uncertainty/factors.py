"""Factors that are uncertain by themselves: one input, or several that scatter together."""

from __future__ import annotations

from abc import ABC, abstractmethod
from dataclasses import dataclass
from typing import Literal

import numpy as np

from pipeflow.arrays import Array
from pipeflow.uncertainty.distributions import Distribution, truncated_normal

Scale = Literal["plain", "logarithm", "root"]
"""What scatters normally: the quantity, its natural logarithm, or its square root."""

RIDGE = 1e-12
"""Added to a correlation matrix, so that one singular by rounding has a root."""


@dataclass(frozen=True)
class Factor(ABC):
    """Something uncertain by itself; independent of every other factor."""

    name: str

    @property
    @abstractmethod
    def columns(self) -> int:
        """Uniform numbers that one sample takes."""

    @abstractmethod
    def values(self, uniform: Array) -> dict[str, Array]:
        """Values of its inputs by name, from uniform numbers of shape (samples, columns), above 0 and below 1."""


@dataclass(frozen=True)
class Independent(Factor):
    """One input of one distribution."""

    distribution: Distribution

    @property
    def columns(self) -> int:
        """One."""
        return 1

    def values(self, uniform: Array) -> dict[str, Array]:
        """Inverse of the distribution."""
        return {self.name: self.distribution.quantile(uniform[:, 0])}


@dataclass(frozen=True, eq=False)
class Correlated(Factor):
    """Inputs that scatter together: a normal distribution of several unknowns.

    Each unknown is kept within what is possible given those before it (truncation of its conditional distribution).

    Parameters
    ----------
    name : str
    inputs : tuple of str
        Names of the inputs, one an unknown.
    middle : Array
        Mean of the unknowns.
    covariance : Array
        Of the unknowns.
    scales : tuple of str
        What of each input the unknown is.
    least, most : Array
        Ends of what is possible of each unknown.
    """

    inputs: tuple[str, ...]
    middle: Array
    covariance: Array
    scales: tuple[Scale, ...]
    least: Array
    most: Array

    @property
    def columns(self) -> int:
        """One an unknown."""
        return len(self.inputs)

    def unknowns(self, uniform: Array) -> Array:
        """Sample the unknowns; the last axis is theirs."""
        root = _root(self.covariance)
        standard = np.zeros_like(uniform)
        found = np.empty_like(uniform)
        for index, own in enumerate(np.diag(root)):
            mean = self.middle[index] + standard[:, :index] @ root[index, :index]
            if own > 0:
                ends = (self.least[index] - mean) / own, (self.most[index] - mean) / own
                standard[:, index] = truncated_normal(uniform[:, index], *ends)
            found[:, index] = mean + own * standard[:, index]
        return found

    def values(self, uniform: Array) -> dict[str, Array]:
        """The inputs of each sample."""
        columns = self.unknowns(uniform).T
        return {
            name: _back(column, scale) for name, column, scale in zip(self.inputs, columns, self.scales, strict=True)
        }


def _root(covariance: Array) -> Array:
    """Lower triangle whose square is the covariance; rows of zeros for unknowns without scatter."""
    deviation = np.sqrt(np.diag(covariance))
    scale = np.where(deviation > 0, deviation, 1.0)
    correlation = covariance / np.outer(scale, scale)
    fixed = deviation == 0
    correlation[fixed, fixed] = 1.0
    root = np.linalg.cholesky(correlation + RIDGE * np.eye(deviation.size))
    return np.asarray(root * deviation[:, None])


def _back(unknown: Array, scale: Scale) -> Array:
    if scale == "logarithm":
        return np.asarray(np.exp(unknown))
    return unknown**2 if scale == "root" else unknown
