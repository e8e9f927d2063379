r"""Inversion of Laplace transforms whose singularities lie on the negative real axis.

The Bromwich integral is bent into a hyperbola round that axis and summed by the midpoint rule,
with the shape that is best for all times of a window together (Weideman and Trefethen 2007, Math.
Comp. 76, 1341). One set of transform values thus serves a whole decade of times, and the error
falls as a power of the number of nodes.
"""

from __future__ import annotations

from dataclasses import dataclass
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray
from scipy.optimize import minimize_scalar

__all__ = ["Contour", "contour", "contours", "invert"]

Array = NDArray[np.float64]
ComplexArray = NDArray[np.complex128]


@dataclass(frozen=True)
class Contour:
    """Nodes and weights of a contour that serves times from ``first`` to ``last``.

    The complex conjugate half of the contour is left out: the transforms are of real functions.
    """

    first: float
    last: float
    nodes: ComplexArray
    weights: ComplexArray

    def invert(self, transform: ComplexArray, times: Array) -> Array:
        """Return the function of time from its transform at the nodes, shape (..., nodes)."""
        waves = np.exp(self.nodes[:, None] * times) * self.weights[:, None]
        found: Array = (transform @ waves).imag
        return found


def _spread(angle: float, window: float) -> float:
    numerator = (np.pi - 2.0 * angle) * window + 4.0 * angle - np.pi
    return float(np.arccosh(numerator / ((4.0 * angle - np.pi) * np.sin(angle))))


def contour(*, first: float, last: float, nodes: int) -> Contour:
    """Return the best hyperbola for a window of times.

    Parameters
    ----------
    first, last : float
        Ends of the window.
    nodes : int
        Transform values that it will ask for.

    Returns
    -------
    Contour
        Nodes and weights.
    """
    window = last / first

    def slowness(angle: float) -> float:
        return -(np.pi - 2.0 * angle) / _spread(angle, window)

    angle = minimize_scalar(slowness, bounds=(np.pi / 4 + 1e-3, np.pi / 2 - 1e-3)).x
    spread = _spread(angle, window)
    size = (4.0 * angle - np.pi) * np.pi / spread * nodes / last
    step = spread / nodes
    place = 1j * step * (np.arange(nodes) + 0.5) - angle
    # d(node)/d(parameter), the step and 1 / (2 pi i), twice for the conjugate half
    weights = size * 1j * np.cos(place) * step / np.pi
    return Contour(first=first, last=last, nodes=size * (1.0 + np.sin(place)), weights=weights)


def contours(*, first: float, last: float, nodes: int, window: float = 10.0) -> list[Contour]:
    """Return contours whose windows cover times from ``first`` to ``last`` without a gap.

    Parameters
    ----------
    first, last : float
        Ends of the times to cover.
    nodes : int
        Nodes of each contour.
    window : float
        Largest ratio of the last to the first time of one contour.

    Returns
    -------
    list of Contour
        In rising order of time.
    """
    count = max(1, int(np.ceil(np.log(last / first) / np.log(window) - 1e-9)))
    edges = np.geomspace(first, last, count + 1)
    return [
        contour(first=float(low), last=float(high), nodes=nodes) for low, high in pairwise(edges)
    ]


def invert(transforms: list[ComplexArray], windows: list[Contour], times: Array) -> Array:
    """Return functions of time from their transforms, each time from the window it falls into.

    Parameters
    ----------
    transforms : list of complex arrays, shape (..., nodes)
        Transforms at the nodes of each window.
    windows : list of Contour
        In rising order; they cover the times.
    times : array, shape (times,)
        When, in any order.

    Returns
    -------
    array, shape (..., times)
        The functions.
    """
    edges = np.array([one.last for one in windows[:-1]])
    which = np.searchsorted(edges, times)
    found = np.empty((*transforms[0].shape[:-1], times.size))
    for i, (transform, window) in enumerate(zip(transforms, windows, strict=True)):
        found[..., which == i] = window.invert(transform, times[which == i])
    return found
