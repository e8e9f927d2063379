"""Numbers as JSON can hold them."""

from __future__ import annotations

import math

__all__ = ["finite_or_none"]


def finite_or_none(value: float | None) -> float | None:
    """Return a finite float (of numpy or Python) as a Python float, anything else as ``None``."""
    return float(value) if value is not None and math.isfinite(value) else None
