r"""Drag factor K over diameter ratio and Reynolds number, from the computed table.

Within the table (diameter ratio 0.01 to 0.8) K is K0 of exact creeping flow times the computed
excess (:mod:`plumbfall.physics.drag_surface`). In wider tubes the walls count only through how far
they screen the inertia, which depends on v R / nu alone, that is on Re over ratio. To the order of
the ratio the effect of the walls on 1 / K is linear (Faxén 1922), so there

.. math::
    \frac1K = \frac1{\phi(Re)} + \frac{1 - 1 / K_0(\lambda)}{1 - 1 / K_0(0.01)}
    \left[\frac1{K(0.01, Re')} - \frac1{\phi(Re')}\right], \qquad Re' = 0.01 \, Re / \lambda

The bracket falls to almost 0 as Re' rises: K is K0 at Reynolds number 0 and the unbounded phi where
there is no tube. Beyond Re' = 100 the last bracket, 1e-5, is kept.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache

import numpy as np
from numpy.typing import NDArray

from plumbfall.physics.drag_surface import (
    HIGHEST_REYNOLDS,
    RATIO_LIMITS,
    BoundExcess,
    bind_excess,
    unbounded_excess,
)
from plumbfall.physics.exact import creeping_wall_factor
from plumbfall.physics.numeric import Numeric
from plumbfall.physics.ranges import check_range

__all__ = ["BoundDragMap", "DragMap", "tube_drag_table"]

Array = NDArray[np.float64]

_LOW, _HIGH = RATIO_LIMITS
_LOG_TOP = float(np.log(HIGHEST_REYNOLDS))
_ROUNDING = 1e-12  # ln 100 asked for is within the range however it was rounded
_FARTHEST = 700.0  # in place of the infinite ln(0.01 / ratio) where there is no tube
_BOUND = 5e-5  # the worst node's change between degrees; solver one degree up: within 1.5e-5
_WIDE_BOUND = 1.5e-4  # measured against the solver between ratios 0.001 and 0.01: 1.2e-4
_WHERE = "the computed drag table"


@dataclass(frozen=True, slots=True)
class DragMap:
    """The computed drag law of a ball on the axis of a tube.

    Examples
    --------
    >>> drag = DragMap().at(0.1)
    >>> f"{drag.factor(1.0):.4f} {drag.wall:.4f}"
    '1.2895 1.2632'
    """

    @property
    def max_reynolds(self) -> float:
        """Largest Reynolds number."""
        return HIGHEST_REYNOLDS

    @property
    def max_ratio(self) -> float:
        """Largest ball diameter over tube bore."""
        return _HIGH

    @property
    def description(self) -> str:
        """The law in one line, for a report."""
        return "computed table of walls and inertia together"

    @property
    def source(self) -> str:
        """Where the law is from, for a report."""
        return "computed by plumbfall from Navier-Stokes and Stokes flow"

    def at(self, diameter_ratio: Numeric) -> BoundDragMap:
        """Bind the law to balls in tubes, shape (..., drops).

        Raises
        ------
        PhysicsRangeError
            If a ratio is not from 0 to 0.8.
        """
        check_range(diameter_ratio, low=0.0, high=_HIGH, variable="diameter ratio", where=_WHERE)
        ratio = np.asarray(diameter_ratio, dtype=np.float64)
        wall, wall_slope = creeping_wall_factor(ratio)
        wide = ratio < _LOW
        return BoundDragMap(
            law=self,
            ratio=ratio,
            wall=wall,
            wall_slope=wall_slope,
            excess=bind_excess(np.maximum(ratio, _LOW)),
            log_base=np.log(np.where(wide, _edge_wall(), wall)),
            wide=wide,
            farther=_farther(ratio),
        )


@dataclass(frozen=True, slots=True)
class BoundDragMap:
    """Drag factor K of given balls as a function of ln Re, with its derivatives.

    ``wall`` is K0 and ``wall_slope`` its local power d ln K0 / d ln(ratio). Beyond the largest
    Reynolds number everything is NaN. Minus infinity stands for Reynolds number 0. In a tube
    ``wide`` of the table, the table is read at its edge and at a Reynolds number ``farther`` up in
    ln Re, where the wall's factor has the logarithm ``log_base``.
    """

    law: DragMap
    ratio: Array
    wall: Numeric
    wall_slope: Numeric
    excess: BoundExcess
    log_base: Array
    wide: NDArray[np.bool_]
    farther: Array

    def take(self, index: NDArray[np.intp]) -> BoundDragMap:
        """Return the law of some of the balls, shape (balls,), in an order of their own."""
        return BoundDragMap(
            law=self.law,
            ratio=self.ratio[index],
            wall=np.asarray(self.wall)[index],
            wall_slope=np.asarray(self.wall_slope)[index],
            excess=self.excess.take(index),
            log_base=self.log_base[index],
            wide=self.wide[index],
            farther=self.farther[index],
        )

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
        """The law in one line."""
        return self.law.description

    @property
    def source(self) -> str:
        """Where the law is from."""
        return self.law.source

    def evaluate(self, log_reynolds: Numeric) -> tuple[Numeric, Numeric]:
        """Return ln K and its slope d ln K / d ln Re."""
        x = self._within(log_reynolds)
        log_factor, slope = self.excess(self._read_at(x))
        log_factor += self.log_base
        if self.wide.any():
            self._widen(x, log_factor, slope, None)
        return _plain(log_factor), _plain(slope)

    def expand(self, log_reynolds: Numeric) -> tuple[Numeric, Numeric, Numeric]:
        """Return ln K and its slopes d ln K / d ln(ratio) and d ln K / d ln Re."""
        x = self._within(log_reynolds)
        log_factor, slope, by_ratio = self.excess.with_ratio_slope(self._read_at(x))
        log_factor += self.log_base
        by_ratio /= 1.0 - self.ratio
        by_ratio += self.wall_slope
        if self.wide.any():
            self._widen(x, log_factor, slope, by_ratio)
        return _plain(log_factor), _plain(by_ratio), _plain(slope)

    def slopes(self, log_reynolds: Numeric) -> tuple[Numeric, Numeric]:
        """Return the local powers d ln K / d ln(ratio) and d ln K / d ln Re."""
        return self.expand(log_reynolds)[1:]

    def factor(self, reynolds: Numeric) -> Numeric:
        """Return K at a Reynolds number, 0 included."""
        with np.errstate(divide="ignore"):
            log_reynolds = np.log(reynolds)
        return _plain(np.exp(self.evaluate(log_reynolds)[0]))

    def check(self, reynolds: Numeric) -> None:
        """Raise :class:`PhysicsRangeError` unless every Reynolds number is within range."""
        check_range(
            reynolds, low=0.0, high=HIGHEST_REYNOLDS, variable="Reynolds number", where=_WHERE
        )

    def relative_bound(self, log_reynolds: Numeric) -> Numeric:
        """Return the half-width of the law's own error relative to K, taken as rectangular.

        It covers the error of the solver and of the interpolation, and fades with the inertia:
        the exact wall factor needs none. In tubes wider than the table's it is of the first order
        in Re, as the screening there is an approximation.
        """
        share = self.excess.inertia_share(self._read_at(self._within(log_reynolds)))
        return _plain(np.where(self.wide, _WIDE_BOUND * np.sqrt(share), _BOUND * share))

    def _within(self, log_reynolds: Numeric) -> Array:
        x = np.asarray(log_reynolds, dtype=np.float64)
        beyond = x > _LOG_TOP
        if not beyond.any():
            return x
        return np.where(x > _LOG_TOP + _ROUNDING, np.nan, np.minimum(x, _LOG_TOP))

    def _read_at(self, x: Array) -> Array:
        return np.minimum(x + self.farther, _LOG_TOP) if self.wide.any() else x

    def _widen(self, x: Array, log_factor: Array, slope: Array, by_ratio: Array | None) -> None:
        """Turn the table's values at its edge into those of the wide tubes, in place."""
        shape = log_factor.shape
        wide = np.broadcast_to(self.wide, shape)

        def of_wide(values: Numeric) -> Array:
            return np.broadcast_to(values, shape)[wide]

        x, farther = of_wide(x), of_wide(self.farther)
        wall, wall_slope = of_wide(self.wall), of_wide(self.wall_slope)
        unbounded, unbounded_slope = unbounded_excess(x)
        inner, inner_slope = unbounded_excess(np.minimum(x + farther, _LOG_TOP))
        edge, inner, free = np.exp(-log_factor[wide]), np.exp(-inner), np.exp(-unbounded)
        edge_walls = 1.0 - 1.0 / _edge_wall()
        share = (1.0 - 1.0 / wall) / edge_walls
        total = free + share * (edge - inner)
        held = x + farther > _LOG_TOP + _ROUNDING
        change = share * np.where(held, 0.0, inner * inner_slope - edge * slope[wide])
        log_factor[wide] = -np.log(total)
        slope[wide] = (free * unbounded_slope - change) / total
        if by_ratio is not None:
            share_slope = wall_slope / (wall * edge_walls)
            by_ratio[wide] = (change - share_slope * (edge - inner)) / total


def tube_drag_table(*, diameter_ratio: Numeric, reynolds: Numeric) -> Numeric:
    r"""Drag factor of a ball on the axis of a tube, walls and inertia together, as computed.

    .. math:: \ln K = \ln K_0(\lambda) + x \, H(t, 2 x / x_{100} - 1), \qquad
        x = \tfrac12 \ln \left[1 + (Re / Re_s)^2\right], \quad
        Re_s = 20 \, e^t, \quad t = \ln \frac{\lambda}{1 - \lambda}

    Parameters
    ----------
    diameter_ratio : float or array, shape (..., drops) [1]
        Ball diameter over tube bore, symbol lambda.
    reynolds : float or array, shape (..., drops) [1]
        Reynolds number on the diameter, Re.

    Returns
    -------
    float or array [1]
        Factor K, at least 1.

    Raises
    ------
    PhysicsRangeError
        Outside the valid range.

    Valid range
    -----------
    Diameter ratio 0 to 0.8, Reynolds number 0 to 100; steady flow, ball on the axis.

    Notes
    -----
    H goes through the nodes of the table of ``plumbfall.flow.navier_stokes``; for ratios below
    0.01 see the head of this module. The error stays below 5e-5 of K, in wider tubes 1.5e-4.

    References
    ----------
    [Plumbfall], [Faxen1922]

    Examples
    --------
    >>> f"{tube_drag_table(diameter_ratio=0.3, reynolds=5.0):.4f}"
    '2.4523'
    """
    drag = DragMap().at(diameter_ratio)
    drag.check(reynolds)
    return drag.factor(reynolds)


def _farther(ratio: Array) -> Array:
    """Return ln(0.01 / ratio) where the tube is wider than the table's, else 0."""
    with np.errstate(divide="ignore"):
        farther: Array = np.clip(np.log(_LOW) - np.log(ratio), 0.0, _FARTHEST)
    return farther


@cache
def _edge_wall() -> float:
    return float(creeping_wall_factor(_LOW)[0])


def _plain(values: Array) -> Numeric:
    return float(values) if np.ndim(values) == 0 else values
