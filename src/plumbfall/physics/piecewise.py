"""A smooth function of one variable as short polynomials on equal pieces, for speed over drops."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from numpy.polynomial import chebyshev
from numpy.typing import NDArray

__all__ = ["Piecewise"]

Array = NDArray[np.float64]

_BLOCK = 8192  # points at a time, so that the work stays in the processor's cache


class Piecewise:
    """Polynomials of one degree on equal pieces of an interval.

    Parameters
    ----------
    function : callable
        What to represent; smooth, takes and returns an array.
    low, high : float
        Ends of the interval.
    pieces, degree : int
        Number of pieces, and the degree of the polynomial on each.
    """

    def __init__(
        self,
        function: Callable[[Array], Array],
        *,
        low: float,
        high: float,
        pieces: int,
        degree: int,
    ) -> None:
        self.low, self.high, self._pieces = low, high, pieces
        nodes = chebyshev.chebpts1(degree + 1)
        middles = low + (high - low) * (np.arange(pieces) + 0.5) / pieces
        half = (high - low) / pieces / 2
        values = np.stack([function(middle + half * nodes) for middle in middles], axis=1)
        fitted = chebyshev.chebfit(nodes, values, degree)
        # powers of t in -1 to 1, lowest first: (degree + 1, pieces)
        self._powers = np.stack([chebyshev.cheb2poly(column) for column in fitted.T], axis=1)

    def __call__(self, points: Array) -> tuple[Array, Array]:
        """Value and first derivative; beyond the interval the outermost piece is continued.

        Parameters
        ----------
        points : array, any shape
            Where to evaluate.

        Returns
        -------
        tuple of two arrays, of the same shape
            Value and derivative.
        """
        flat = np.ravel(points)
        value, slope = np.empty_like(flat), np.empty_like(flat)
        for start in range(0, flat.size, _BLOCK):
            part = slice(start, start + _BLOCK)
            value[part], slope[part] = self._block(flat[part])
        return value.reshape(np.shape(points)), slope.reshape(np.shape(points))

    def _block(self, points: Array) -> tuple[Array, Array]:
        scale = self._pieces / (self.high - self.low)
        position = (points - self.low) * scale
        with np.errstate(invalid="ignore"):  # NaN falls on some piece and stays NaN
            piece = np.clip(position, 0, self._pieces - 1).astype(np.intp)
        t = 2.0 * (position - piece) - 1.0
        value = self._powers[-1].take(piece, mode="clip")
        slope = np.zeros_like(t)
        for powers in self._powers[-2::-1]:
            slope *= t
            slope += value
            value *= t
            value += powers.take(piece, mode="clip")
        slope *= 2.0 * scale
        return value, slope
