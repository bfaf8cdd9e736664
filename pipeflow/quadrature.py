"""Gauss–Legendre rules on (0, 1), worked out on first use."""

from __future__ import annotations

from functools import cache

import numpy as np

from pipeflow.arrays import Array


@cache
def gauss_legendre(points: int) -> tuple[Array, Array]:
    """Nodes and weights on (0, 1) of the rule that is exact for polynomials up to degree ``2 points - 1``."""
    nodes, weights = np.polynomial.legendre.leggauss(points)
    return (nodes + 1.0) / 2.0, weights / 2.0
