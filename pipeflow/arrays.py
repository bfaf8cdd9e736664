"""Names for the numeric types that cross the rooms."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
FloatOrArray = float | Array


def known(value: FloatOrArray) -> float | None:
    """Give one number, the first of an array; None where it is not finite."""
    figure = float(np.asarray(value).ravel()[0])
    return figure if np.isfinite(figure) else None
