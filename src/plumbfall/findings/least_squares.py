"""Generalised least squares of a few values in each of many sets."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

__all__ = ["weighted_squares"]

Numbers = NDArray[np.float64]


def weighted_squares(
    inverse: Numbers, value: Numbers, known: list[Numbers], covariate: Numbers | None = None
) -> tuple[Numbers, Numbers, Numbers]:
    """Weighted squares that are left, and the last covariate's slope with its standard error.

    Covariates are taken off one after another, each cleared of those before it; shapes (sets, k)
    and (sets, k, k).
    """

    def product(a: Numbers, b: Numbers) -> Numbers:
        return np.asarray(np.einsum("si,sij,sj->s", a, inverse, b))

    basis: list[Numbers] = []
    rest, slope, error = value, np.full(len(value), np.nan), np.full(len(value), np.nan)
    for column in [*known, *([covariate] if covariate is not None else [])]:
        for earlier in basis:
            share = product(column, earlier) / product(earlier, earlier)
            column = column - share[:, None] * earlier
        basis.append(column)
        weight = product(column, column)
        slope, error = product(column, rest) / weight, 1 / np.sqrt(weight)
        rest = rest - slope[:, None] * column
    return product(rest, rest), slope, error
