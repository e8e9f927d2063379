"""What a call costs in processor time."""

from __future__ import annotations

import math
import time
from collections.abc import Callable

__all__ = ["cost"]


def cost(function: Callable[[], object], repeats: int = 3) -> float:
    """Return the least processor time of several calls, in seconds."""
    best = math.inf
    for _ in range(repeats):
        start = time.process_time()
        function()
        best = min(best, time.process_time() - start)
    return best
