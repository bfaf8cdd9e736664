"""Names for the numeric types that cross the rooms."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
FloatOrArray = float | Array
