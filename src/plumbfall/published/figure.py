"""One figure from print: where it stands, on what basis it is here, and what recomputes it."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from dataclasses import dataclass, replace
from decimal import Decimal
from functools import partial
from typing import Any

__all__ = ["DEFINITION", "FROM_MEMORY", "SEEN_IN_PRINT", "Figure", "called", "figures"]

SEEN_IN_PRINT = "seen-in-print"
FROM_MEMORY = "from-memory"
DEFINITION = "definition"

Compute = Callable[[], float]
FLOAT_ROUNDING = 1e-14
"""Relative tolerance of what is exact but for the rounding of floats."""


@dataclass(frozen=True, slots=True)
class Figure:
    """A figure with its digits as printed; ``source`` says where, of what, and in which unit.

    ``allowance`` is what the tolerance has beyond half of the last digit printed, and ``source``
    says why. An ``exact`` figure has no further digits; ``FLOAT_ROUNDING`` stands for the half.
    """

    id: str
    area: str
    basis: str
    source: str
    printed: str
    compute: Compute
    allowance: float = 0.0
    exact: bool = False

    @property
    def published(self) -> float:
        """The figure as a number."""
        return float(self.printed)

    @property
    def tolerance(self) -> float:
        """Largest difference that passes."""
        if self.exact:
            return FLOAT_ROUNDING * abs(self.published) + self.allowance
        exponent = int(Decimal(self.printed).as_tuple().exponent)
        return float(Decimal(5).scaleb(exponent - 1)) + self.allowance


def figures(
    area: str,
    basis: str,
    source: str,
    rows: Iterable[tuple[str, str, Compute]],
    *,
    within: float = 0.0,
    allowance: float = 0.0,
    exact: bool = False,
) -> tuple[Figure, ...]:
    """Return figures of one source, each row an id, the digits as printed and its recomputation.

    ``within`` is a relative allowance, ``allowance`` an absolute one; both add to half a digit.
    """
    made = (Figure(name, area, basis, source, text, compute) for name, text, compute in rows)
    return tuple(
        replace(one, allowance=allowance + within * abs(one.published), exact=exact) for one in made
    )


def called(function: Callable[..., Any], *, scale: float = 1.0, **given: Any) -> Compute:
    """Return a call of one shipped function; ``scale`` takes its SI value to the printed unit."""
    return partial(_call, function, scale, given)


def _call(function: Callable[..., Any], scale: float, given: dict[str, Any]) -> float:
    return scale * float(function(**given))
