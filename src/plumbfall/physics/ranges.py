"""One check for every range: number, limit and law are named, and nothing is clipped."""

from __future__ import annotations

import math

import numpy as np

from plumbfall.errors import PhysicsRangeError
from plumbfall.physics.numeric import Numeric

__all__ = ["check_range"]


def check_range(value: Numeric, *, low: float, high: float, variable: str, where: str) -> None:
    """Raise :class:`PhysicsRangeError` unless every value is from ``low`` to ``high``.

    ``variable`` says what the value is, with its unit where it has one; ``where`` names the law.
    """
    values = np.asarray(value, dtype=np.float64)
    outside = ~((values >= low) & (values <= high))
    if not outside.any():
        return
    worst = float(values[outside].flat[0])
    if math.isnan(worst):
        raise PhysicsRangeError(f"{variable} is not a number; {where} cannot be used")
    limit, word = (low, "below") if worst < low else (high, "beyond")
    raise PhysicsRangeError(f"{variable} {worst:.7g} is {word} {limit:.7g}, the limit of {where}")
