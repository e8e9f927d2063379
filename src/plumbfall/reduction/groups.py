"""Places of what belongs to each run set."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

__all__ = ["grouped"]


def grouped(codes: NDArray[np.intp], n_groups: int) -> list[NDArray[np.intp]]:
    """Return the places at which each code stands, in order."""
    order = np.argsort(codes, kind="stable")
    return np.split(order, np.cumsum(np.bincount(codes, minlength=n_groups))[:-1])
