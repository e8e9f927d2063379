"""What is known of one quantity: value, standard uncertainty, distribution, dof, name."""

from __future__ import annotations

import math
from dataclasses import dataclass

__all__ = ["DISTRIBUTIONS", "Estimate"]

DISTRIBUTIONS = ("exact", "normal", "rectangular", "triangular", "arcsine", "t")
"""Shapes an estimate may have; ``t`` is a mean of repeated readings (JCGM 101, 6.4.9)."""


@dataclass(frozen=True, slots=True)
class Estimate:
    """A quantity in SI units with its standard uncertainty.

    ``name`` is the key path in the bench sheet (``tube.A.bore``). Two estimates of one name are
    one and the same random variable; that rule gives every correlation in plumbfall.
    """

    value: float
    u: float = 0.0
    distribution: str = "exact"
    dof: float = math.inf
    name: str = ""
    unit: str = "1"
    text: str = ""

    def _repr_html_(self) -> str:
        from html import escape

        written = f" (written {escape(self.text)})" if self.text else ""
        return (
            f"<code>{escape(self.name)}</code> {self.value:.10g} {escape(self.unit)}, standard "
            f"uncertainty {self.u:.3g}, {escape(self.distribution)}{written}"
        )

    @property
    def exact(self) -> bool:
        """Whether no uncertainty was stated."""
        return self.u == 0.0

    @property
    def relative(self) -> float:
        """Standard uncertainty over the size of the value."""
        return self.u / abs(self.value)
