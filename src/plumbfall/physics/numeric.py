"""The one type that formulas take and return: a float, or an array whose last axis is drops."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

__all__ = ["Numeric"]

Numeric = float | NDArray[np.float64]
