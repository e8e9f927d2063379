"""Polynomial pieces of a quadrilateral element: nodes, quadrature and shape functions."""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache

import numpy as np
from numpy.polynomial import legendre
from numpy.typing import NDArray

__all__ = ["QuadElement", "lagrange", "lobatto_nodes", "quad_element"]

Array = NDArray[np.float64]


def lobatto_nodes(degree: int) -> Array:
    """Return the Gauss-Lobatto points of a degree on [-1, 1], ends included, ascending."""
    if degree == 1:
        return np.array([-1.0, 1.0])
    series = np.zeros(degree + 1)
    series[degree] = 1.0
    inner = np.sort(legendre.legroots(legendre.legder(series)).real)
    return np.concatenate(([-1.0], inner, [1.0]))


def lagrange(degree: int, points: Array) -> tuple[Array, Array]:
    """Return Lagrange polynomials on the Lobatto nodes, and their slopes, at some points.

    Both have shape (points, degree + 1). They are built from Legendre polynomials, which keeps
    them accurate to rounding at the degrees used here (up to about 12).
    """
    nodal = np.linalg.inv(legendre.legvander(lobatto_nodes(degree), degree))
    slopes = np.stack(
        [
            legendre.legval(points, legendre.legder(column)) if order else np.zeros_like(points)
            for order, column in enumerate(np.eye(degree + 1))
        ],
        axis=-1,
    )
    return legendre.legvander(points, degree) @ nodal, slopes @ nodal


@dataclass(frozen=True)
class QuadElement:
    """Taylor-Hood pair on the square [-1, 1]^2: velocity of a degree, pressure one lower.

    Local nodes are numbered with the second coordinate running fastest. ``points`` has shape
    (points, 2); the shape functions have shape (points, nodes).
    """

    degree: int
    points: Array
    weights: Array
    velocity: Array
    velocity_first: Array
    velocity_second: Array
    pressure: Array


@lru_cache(maxsize=8)
def quad_element(degree: int) -> QuadElement:
    """Return the element of a velocity degree, with two more Gauss points than the degree."""
    points, weights = legendre.leggauss(degree + 2)
    value, slope = lagrange(degree, points)
    lower, _ = lagrange(degree - 1, points)
    return QuadElement(
        degree=degree,
        points=np.stack(np.meshgrid(points, points, indexing="ij"), axis=-1).reshape(-1, 2),
        weights=np.outer(weights, weights).ravel(),
        velocity=_product(value, value),
        velocity_first=_product(slope, value),
        velocity_second=_product(value, slope),
        pressure=_product(lower, lower),
    )


def _product(first: Array, second: Array) -> Array:
    return np.asarray(np.kron(first, second), dtype=np.float64)
