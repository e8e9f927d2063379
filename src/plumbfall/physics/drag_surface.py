r"""The computed drag as polynomials: excess over creeping flow in a tube, and unbounded.

In a tube, with t = ln(lambda / (1 - lambda)), Re_s = 20 exp(t) and
x = ln(1 + (Re / Re_s)^2) / 2, the excess is

.. math:: \ln (K / K_0) = x \, H(t, 2 x / x_{100} - 1)

with H a polynomial through the nodes of the table; x_100 is x at Reynolds number 100. As x starts
as Re^2 and goes over into ln Re, the excess is even in Re, as it must be between walls, and exact
at 0. Unbounded, ln phi = ln(1 + Re) p(ln(1 + 4 sqrt(Re))) with Oseen's p(0) = 3/16; the square root
crowds nodes where the terms in Re^2 ln Re would slow a polynomial down.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache

import numpy as np
from numpy.polynomial import chebyshev
from numpy.typing import NDArray

from plumbfall.physics.numeric import Numeric
from plumbfall.physics.tables import shipped_table

__all__ = [
    "HIGHEST_REYNOLDS",
    "RATIO_LIMITS",
    "BoundExcess",
    "bind_excess",
    "unbounded_excess",
]

Array = NDArray[np.float64]

RATIO_LIMITS = (0.01, 0.8)
"""Diameter ratios of the table."""
HIGHEST_REYNOLDS = 100.0
"""Largest Reynolds number of the table."""

_SCREENING = 20.0
_LOG_HIGHEST = float(np.log(HIGHEST_REYNOLDS))
_OSEEN = 3.0 / 16.0
_STRETCH = 4.0


@dataclass(frozen=True, slots=True)
class BoundExcess:
    """ln(K / K0) of given balls in tubes as a function of ln Re.

    ``powers`` are the coefficients of H over the powers of its second argument, lowest first,
    shape (powers, ...), ``turned`` their derivatives by t, ``None`` until they are asked for;
    ``log_scale`` is ln Re_s and ``span`` x at the largest Reynolds number.
    """

    position: Array
    powers: Array
    log_scale: Array
    span: Array
    turned: Array | None = None

    def take(self, index: NDArray[np.intp]) -> BoundExcess:
        """Return the excess of some of the balls, shape (balls,), in an order of their own."""
        return BoundExcess(
            position=self.position[index],
            powers=self.powers.take(index, axis=1),
            log_scale=self.log_scale[index],
            span=self.span[index],
            turned=self._turned().take(index, axis=1),
        )

    def _turned(self) -> Array:
        if self.turned is not None:
            return self.turned
        return _surface().powers_at(self.position, derivative=True)

    def __call__(self, log_reynolds: Array) -> tuple[Array, Array]:
        """Excess and its slope by ln Re."""
        x, share = self._variable(log_reynolds)
        height, slope = _horner(self.powers, x * (2.0 / self.span) - 1.0)
        slope *= x
        slope *= 2.0 / self.span
        slope += height
        slope *= share
        height *= x
        return height, slope

    def with_ratio_slope(self, log_reynolds: Array) -> tuple[Array, Array, Array]:
        """Excess, its slope by ln Re, and that by t = ln(ratio / (1 - ratio)) at the same Re."""
        x, share = self._variable(log_reynolds)
        argument = x * (2.0 / self.span) - 1.0
        height, slope = _horner(self.powers, argument)
        by_ratio = _horner_value(self._turned(), argument)
        slope *= x
        slope *= 2.0 / self.span
        end_share = -np.expm1(-2.0 * self.span)
        by_ratio += slope * (end_share / self.span)
        slope += height
        slope *= share
        by_ratio *= x
        by_ratio -= slope
        height *= x
        return height, slope, by_ratio

    def inertia_share(self, log_reynolds: Array) -> Array:
        """Re^2 / (Re^2 + Re_s^2): 0 where walls screen all inertia, 1 where they screen none."""
        return self._variable(log_reynolds)[1]

    def _variable(self, log_reynolds: Array) -> tuple[Array, Array]:
        return _log_root(log_reynolds - self.log_scale)


def bind_excess(diameter_ratio: Array) -> BoundExcess:
    """Bind the excess to diameter ratios within the limits of the table, any shape."""
    position = np.log(diameter_ratio / (1.0 - diameter_ratio))
    log_scale = np.log(_SCREENING) + position
    span, _ = _log_root(_LOG_HIGHEST - log_scale)
    powers = _surface().powers_at(position)
    return BoundExcess(position=position, powers=powers, log_scale=log_scale, span=span)


def unbounded_excess(log_reynolds: Array) -> tuple[Array, Array]:
    """Return ln phi of an unbounded ball, and its slope by ln Re, to the largest Re."""
    root = _STRETCH * np.exp(0.5 * log_reynolds)
    reynolds = (root / _STRETCH) ** 2
    powers, scale = _unbounded()
    height, slope = _horner(powers.reshape(-1, *(1,) * np.ndim(root)), scale * np.log1p(root) - 1.0)
    leading = np.log1p(reynolds)
    slope *= leading * (0.5 * scale) * root / (1.0 + root)
    slope += height * reynolds / (1.0 + reynolds)
    height *= leading
    return height, slope


@dataclass(frozen=True)
class _Surface:
    """H as a tensor: Chebyshev series in the position, powers of the second argument."""

    series: Array
    low: float
    high: float

    def powers_at(self, position: Array, *, derivative: bool = False) -> Array:
        """Coefficients over the powers at positions t, or their derivatives by t."""
        width = self.high - self.low
        scaled = (2.0 * np.ravel(position) - self.low - self.high) / width
        series = chebyshev.chebder(self.series) * (2.0 / width) if derivative else self.series
        powers = series.T @ _chebyshev(scaled, series.shape[0])
        return powers.reshape(series.shape[1], *np.shape(position))


@cache
def _surface() -> _Surface:
    arrays = shipped_table("drag_map").arrays
    ratio, reynolds = arrays["diameter_ratio"], arrays["reynolds"]
    position = np.log(ratio / (1.0 - ratio))
    log_scale = np.log(_SCREENING) + position[:, None]
    x, _ = _log_root(np.log(reynolds) - log_scale)
    span, _ = _log_root(_LOG_HIGHEST - log_scale)
    height = np.log(arrays["drag_factor"] / arrays["creeping_factor"][:, None]) / x
    # The nodes of the table are Chebyshev points of these variables, so the systems are benign.
    rows = np.stack(
        [
            _as_powers(_through(2.0 * at / end - 1.0, values))
            for at, end, values in zip(x, span, height, strict=True)
        ]
    )
    low, high = position[0], position[-1]
    series = _through((2.0 * position - low - high) / (high - low), rows)
    return _Surface(series=series, low=float(low), high=float(high))


@cache
def _unbounded() -> tuple[Array, float]:
    """Powers of p over its variable stretched to -1 to 1, and the scale of the stretching."""
    arrays = shipped_table("drag_map").arrays
    reynolds = arrays["unbounded_reynolds"]
    height = np.append(_OSEEN, np.log(arrays["unbounded_factor"]) / np.log1p(reynolds))
    variable = np.append(0.0, np.log1p(_STRETCH * np.sqrt(reynolds)))
    scale = float(2.0 / variable[-1])
    return _as_powers(_through(variable * scale - 1.0, height)), scale


def _through(points: Array, values: Array) -> Array:
    """Chebyshev series through as many points of [-1, 1] as it has terms."""
    terms = chebyshev.chebvander(points, len(points) - 1)
    return np.asarray(np.linalg.solve(terms, values), dtype=np.float64)


def _chebyshev(x: Array, count: int) -> Array:
    """First Chebyshev polynomials of positions, shape (count, positions)."""
    terms = np.empty((count, x.size))
    terms[0], terms[1] = 1.0, x
    twice = 2.0 * x
    for n in range(2, count):
        np.multiply(twice, terms[n - 1], out=terms[n])
        terms[n] -= terms[n - 2]
    return terms


def _as_powers(series: Array) -> Array:
    return np.asarray(chebyshev.cheb2poly(series), dtype=np.float64)


def _log_root(log_ratio: Numeric) -> tuple[Array, Array]:
    """Return ln(1 + r^2) / 2 of ln r, and its slope r^2 / (1 + r^2)."""
    square = np.exp(2.0 * np.asarray(log_ratio))
    return 0.5 * np.log1p(square), square / (1.0 + square)


def _horner_value(powers: Array, argument: Array) -> Array:
    """Value of polynomials with their coefficients on the first axis, lowest first."""
    value = np.broadcast_to(
        powers[-1], np.broadcast_shapes(powers.shape[1:], np.shape(argument))
    ).copy()
    for coefficient in powers[-2::-1]:
        value *= argument
        value += coefficient
    return value


def _horner(powers: Array, argument: Array) -> tuple[Array, Array]:
    """Value and slope of polynomials with their coefficients on the first axis, lowest first."""
    shape = np.broadcast_shapes(powers.shape[1:], np.shape(argument))
    value = np.broadcast_to(powers[-1], shape).copy()
    slope = np.zeros_like(value)
    for coefficient in powers[-2::-1]:
        slope *= argument
        slope += value
        value *= argument
        value += coefficient
    return value, slope
