"""What the self-test found of every figure from print, as frozen records and as a document."""

from __future__ import annotations

import math
from collections import Counter
from dataclasses import dataclass
from typing import Any

__all__ = ["AREAS", "BASES", "SCHEMA", "CheckedFigure", "SelfTest"]

SCHEMA = "plumbfall/selftest/1"
AREAS = ("chain", "flow", "uncertainty", "statistics", "liquid")
BASES = ("seen-in-print", "from-memory", "definition")


@dataclass(frozen=True, slots=True)
class CheckedFigure:
    """A figure from print beside what the shipped code computes, in the unit ``source`` names.

    ``printed`` has the digits as printed. ``computed`` is NaN where the computation raised an
    exception; ``problem`` then says which.
    """

    id: str
    area: str
    basis: str
    source: str
    printed: str
    published: float
    computed: float
    tolerance: float
    problem: str = ""

    @property
    def difference(self) -> float:
        """Computed less published."""
        return self.computed - self.published

    @property
    def passed(self) -> bool:
        """Whether the difference is within the tolerance."""
        return abs(self.difference) <= self.tolerance

    def to_dict(self) -> dict[str, Any]:
        """Return the item of the schema; ``computed`` is ``None`` where there is no number."""
        return {
            "id": self.id,
            "area": self.area,
            "basis": self.basis,
            "source": self.source,
            "published": self.published,
            "computed": self.computed if math.isfinite(self.computed) else None,
            "tolerance": self.tolerance,
            "passed": self.passed,
        }


@dataclass(frozen=True, slots=True)
class SelfTest:
    """Every figure that was recomputed."""

    items: tuple[CheckedFigure, ...]

    @property
    def passed(self) -> int:
        """How many figures agree."""
        return sum(item.passed for item in self.items)

    @property
    def failed(self) -> int:
        """How many do not."""
        return len(self.items) - self.passed

    def totals(self) -> Counter[tuple[str, str]]:
        """Return how many figures there are of each area and basis."""
        return Counter((item.area, item.basis) for item in self.items)

    def to_dict(self) -> dict[str, Any]:
        """Return the document of the schema ``plumbfall/selftest/1``."""
        return {
            "schema": SCHEMA,
            "items": [item.to_dict() for item in self.items],
            "passed": self.passed,
            "failed": self.failed,
        }
