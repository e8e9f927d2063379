"""The drag law that the inverse solves with: bound to the balls once, then quick in ln Re."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import Any, Protocol

import numpy as np
from numpy.typing import NDArray

from plumbfall.errors import InputError
from plumbfall.physics.drag_map import DragMap
from plumbfall.physics.laws import DEFAULTS, Law, law
from plumbfall.physics.numeric import Numeric

__all__ = ["TABLE", "Bound", "BoundDrag", "DragLaw"]

TABLE, JOINING = "table", "screened"
"""The computed law, and the rule that joins others where none is named."""

Array = NDArray[np.float64]


class Bound(Protocol):
    """A drag law bound to balls in tubes: K as a function of ln Re, with its derivatives."""

    @property
    def wall(self) -> Numeric:
        """K at Reynolds number 0."""

    @property
    def wall_slope(self) -> Numeric:
        """Local power d ln K / d ln(ratio) at Reynolds number 0."""

    def take(self, index: NDArray[np.intp]) -> Bound:
        """Return the law of some of the balls, shape (balls,), in an order of their own."""

    @property
    def max_reynolds(self) -> float:
        """Largest Reynolds number."""

    @property
    def max_ratio(self) -> float:
        """Largest ball diameter over tube bore."""

    def evaluate(self, log_reynolds: Numeric) -> tuple[Numeric, Numeric]:
        """Return ln K and its slope d ln K / d ln Re."""

    def expand(self, log_reynolds: Numeric) -> tuple[Numeric, Numeric, Numeric]:
        """Return ln K and its slopes d ln K / d ln(ratio) and d ln K / d ln Re."""

    def slopes(self, log_reynolds: Numeric) -> tuple[Numeric, Numeric]:
        """Return the local powers d ln K / d ln(ratio) and d ln K / d ln Re."""

    def factor(self, reynolds: Numeric) -> Numeric:
        """Return K at a Reynolds number, 0 included."""

    def check(self, reynolds: Numeric) -> None:
        """Raise :class:`PhysicsRangeError` unless every Reynolds number is within range."""

    def relative_bound(self, log_reynolds: Numeric) -> Numeric:
        """Return the half-width of the law's own error relative to K."""


@dataclass(frozen=True, slots=True)
class DragLaw:
    """A choice of laws for walls and inertia and of the rule that joins them.

    The computed table has walls and inertia in it. Where a law of the one or the other is named
    and no rule, the screened rule joins them.

    Raises
    ------
    InputError
        If a law is not known, or the table is named together with other laws.

    Examples
    --------
    >>> drag = DragLaw()
    >>> drag.max_reynolds, drag.max_ratio
    (100.0, 0.8)
    >>> log_factor, slope = drag.at(0.1).evaluate(np.log(1.0))
    >>> f"{np.exp(log_factor):.4f} {slope:.3f}"
    '1.2895 0.037'
    """

    together: str = ""
    walls: str = DEFAULTS["walls"]
    inertia: str = DEFAULTS["inertia"]
    together_law: Law = field(init=False, repr=False)
    wall_law: Law = field(init=False, repr=False)
    inertia_law: Law = field(init=False, repr=False)

    def __post_init__(self) -> None:
        single = (self.walls, self.inertia) == (DEFAULTS["walls"], DEFAULTS["inertia"])
        if not self.together:
            object.__setattr__(self, "together", TABLE if single else JOINING)
        if self.together == TABLE and not single:
            raise InputError(
                f"the drag law '{TABLE}' has walls and inertia in it",
                key="methods.drag",
                remedy=f"name a rule to join '{self.walls}' and '{self.inertia}', such as "
                f"'{JOINING}', or '{TABLE}' alone",
            )
        object.__setattr__(self, "together_law", law("together", self.together))
        object.__setattr__(self, "wall_law", law("walls", self.walls))
        object.__setattr__(self, "inertia_law", law("inertia", self.inertia))

    @property
    def reynolds_law(self) -> Law:
        """The law that sets the largest Reynolds number."""
        return min(self.together_law, self.inertia_law, key=lambda one: one.high)

    @property
    def max_reynolds(self) -> float:
        """Largest Reynolds number."""
        return self.reynolds_law.high

    @property
    def ratio_law(self) -> Law:
        """The law that sets the largest diameter ratio."""
        walls, rule = self.wall_law, self.together_law
        return walls if walls.high <= rule.ratio_high else rule

    @property
    def max_ratio(self) -> float:
        """Largest ball diameter over tube bore."""
        return min(self.wall_law.high, self.together_law.ratio_high)

    @property
    def description(self) -> str:
        """The choice in one line, for a report."""
        if self.together == TABLE:
            return DragMap().description
        return f"{self.together} rule, walls {self.walls}, inertia {self.inertia}"

    @property
    def source(self) -> str:
        """Where the rule and the two laws are from, for a report."""
        laws = (self.together_law, self.wall_law, self.inertia_law)
        if self.together == TABLE:
            return self.together_law.citation
        return "; ".join(dict.fromkeys(one.citation for one in laws))

    def at(self, diameter_ratio: Numeric) -> Bound:
        """Bind the law to balls in tubes, shape (..., drops), computing the walls once.

        Raises
        ------
        PhysicsRangeError
            If a ratio is outside the range of the walls or of the rule.
        """
        if self.together == TABLE:
            return DragMap().at(diameter_ratio)
        self.wall_law.check(diameter_ratio)
        self.together_law.check_ratio(diameter_ratio)
        wall, wall_slope = _kernel(self.wall_law)(diameter_ratio)
        return BoundDrag(
            law=self,
            ratio=diameter_ratio,
            wall=wall,
            wall_slope=wall_slope,
            wall_excess=wall - 1.0,
        )


@dataclass(frozen=True, slots=True, eq=False)
class BoundDrag:
    """Drag factor K of given balls as a function of ln Re, with its derivatives.

    ``wall`` is K0 and ``wall_slope`` its local power d ln K0 / d ln(ratio). Nothing here checks
    the Reynolds number, so that an iteration may pass the limit; :meth:`check` does.
    """

    law: DragLaw
    ratio: Numeric
    wall: Numeric
    wall_slope: Numeric
    wall_excess: Numeric

    def take(self, index: NDArray[np.intp]) -> BoundDrag:
        """Return the law of some of the balls, shape (balls,), in an order of their own."""
        of_balls = (np.asarray(part)[index] for part in self._parts())
        return BoundDrag(self.law, *of_balls)

    def _parts(self) -> tuple[Numeric, ...]:
        return (self.ratio, self.wall, self.wall_slope, self.wall_excess)

    @property
    def max_reynolds(self) -> float:
        """Largest Reynolds number."""
        return self.law.max_reynolds

    @property
    def max_ratio(self) -> float:
        """Largest ball diameter over tube bore."""
        return self.law.max_ratio

    @property
    def description(self) -> str:
        """The choice of laws in one line."""
        return self.law.description

    @property
    def source(self) -> str:
        """Where the laws are from."""
        return self.law.source

    def evaluate(self, log_reynolds: Numeric) -> tuple[Numeric, Numeric]:
        """Return ln K and its slope d ln K / d ln Re."""
        excess, by_log = self._inertia(log_reynolds)
        total, slope = _kernel(self.law.together_law)(self.wall_excess, excess)
        slope *= by_log
        total += 1.0
        slope /= total
        return (
            self._shaped(np.log(total, out=total), log_reynolds),
            self._shaped(slope, log_reynolds),
        )

    def expand(self, log_reynolds: Numeric) -> tuple[Numeric, Numeric, Numeric]:
        """Return ln K and its slopes d ln K / d ln(ratio) and d ln K / d ln Re."""
        rule = _kernel(self.law.together_law)
        excess, by_log = self._inertia(log_reynolds)
        total, by_inertia = rule(self.wall_excess, excess)
        _, by_wall = rule(excess, self.wall_excess + np.zeros_like(total))
        factor = 1.0 + total
        return (
            self._shaped(np.log(factor), log_reynolds),
            self._shaped(by_wall * (self.wall * self.wall_slope) / factor, log_reynolds),
            self._shaped(by_inertia * by_log / factor, log_reynolds),
        )

    def slopes(self, log_reynolds: Numeric) -> tuple[Numeric, Numeric]:
        """Return the local powers d ln K / d ln(ratio) and d ln K / d ln Re."""
        return self.expand(log_reynolds)[1:]

    def factor(self, reynolds: Numeric) -> Numeric:
        """Return K at a Reynolds number, 0 included."""
        with np.errstate(divide="ignore"):
            log_reynolds = np.log(reynolds)
        excess, _ = self._inertia(log_reynolds)
        total, _ = _kernel(self.law.together_law)(self.wall_excess, excess)
        return self._shaped(1.0 + total, reynolds)

    def check(self, reynolds: Numeric) -> None:
        """Raise :class:`PhysicsRangeError` unless every Reynolds number is within range."""
        self.law.reynolds_law.check(reynolds)

    def relative_bound(self, log_reynolds: Numeric) -> Numeric:
        """Return the half-width of the law's own error relative to K, taken as rectangular.

        How far the chosen laws take K from the computed table, and the table's own error.
        """
        computed = DragMap().at(self.ratio)
        apart = self.evaluate(log_reynolds)[0] - computed.evaluate(log_reynolds)[0]
        return computed.relative_bound(log_reynolds) + np.abs(np.expm1(apart))

    def _inertia(self, log_reynolds: Numeric) -> tuple[Array, Array]:
        """Excess of the inertia and its slope, as arrays of one dimension at least."""
        excess, slope = _kernel(self.law.inertia_law)(np.atleast_1d(log_reynolds))
        shape = np.broadcast_shapes(excess.shape, np.shape(self.wall_excess))
        if excess.shape != shape:
            return np.broadcast_to(excess, shape).copy(), np.broadcast_to(slope, shape).copy()
        return excess, slope

    def _shaped(self, values: Array, log_reynolds: Numeric) -> Numeric:
        """Values as a float where ball and Reynolds number are single."""
        single = np.ndim(log_reynolds) == 0 and np.ndim(self.wall_excess) == 0
        return values[0] if single else values


def _kernel(chosen: Law) -> Any:
    assert chosen.kernel is not None  # the laws of walls, inertia and together all have one
    return chosen.kernel
