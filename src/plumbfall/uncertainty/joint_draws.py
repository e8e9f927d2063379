"""Draws of all inputs together, some of them correlated (JCGM 101:2008, 6.4.8)."""

from __future__ import annotations

import math
from collections.abc import Sequence

import numpy as np
from numpy.typing import ArrayLike, NDArray

from plumbfall.errors import InputError, Problem
from plumbfall.estimate import Estimate
from plumbfall.uncertainty.distributions import Stream, open_stream, problems_of, tail_dof
from plumbfall.uncertainty.draw_pool import DrawPool, Replay

__all__ = ["JointDraws", "lower_factor"]

Numbers = NDArray[np.float64]

ROUNDING = 1e-10
"""What a correlation matrix may be off by: computed ones carry rounding, typed ones do not."""


class JointDraws:
    """The inputs' draws in order, as many at a time as there is room for.

    Parameters
    ----------
    inputs : sequence of Estimate
        Of two with one name, both have the same draws; they must be equal.
    seed : int
        Not below zero.
    correlation : array, shape (inputs, inputs), optional
        Correlation coefficients; only normal inputs of infinite dof may be correlated.
    pool : DrawPool, optional
        Of the same seed: where draws come from that other propagations have made.

    Raises
    ------
    InputError
        With everything wrong with the inputs at once.
    """

    def __init__(
        self,
        inputs: Sequence[Estimate],
        *,
        seed: int,
        correlation: ArrayLike | None = None,
        pool: DrawPool | None = None,
    ) -> None:
        self.inputs = tuple(inputs)
        if not self.inputs:
            raise InputError("there are no inputs to draw", remedy="give at least one")
        if isinstance(seed, bool) or not isinstance(seed, int | np.integer) or seed < 0:
            raise InputError(
                f"seed = {seed!r} is not a whole number from 0 up", remedy="write 0, or 12345"
            )
        problems = [problem for estimate in self.inputs for problem in problems_of(estimate)]
        problems += _contradictions(self.inputs)
        if problems:
            raise InputError(problems)
        self._correlated, self._factor = _correlated(self.inputs, correlation)
        self._streams: dict[int, Stream | Replay] = {}
        self._deviates: dict[int, Stream] = {}
        for place, estimate in enumerate(self.inputs):
            if place in self._correlated:
                self._deviates[place] = open_stream(estimate, seed=int(seed), place=place)
            elif pool is not None:
                self._streams[place] = pool.stream(estimate, place)
            else:
                self._streams[place] = open_stream(estimate, seed=int(seed), place=place)

    def heavy(self, dof: float) -> list[int]:
        """Places of the inputs drawn from a t distribution of no more than so many dof."""
        return [i for i, estimate in enumerate(self.inputs) if tail_dof(estimate) <= dof]

    def fill(self, out: Numbers) -> None:
        """Fill with the next draws, shape (inputs, draws); its rows must be contiguous."""
        for i, stream in self._streams.items():
            stream.fill(out[i])
        for i, deviates in self._deviates.items():
            deviates.standardised(out[i])
        # from the last row up, in place: a row is made of itself and of those above it. Summed
        # row by row, not as a matrix product, whose rounding depends on the number of draws.
        for row in reversed(range(len(self._correlated))):
            i = self._correlated[row]
            out[i] *= self._factor[row, row]
            for column in range(row):
                if self._factor[row, column]:
                    out[i] += self._factor[row, column] * out[self._correlated[column]]
            out[i] *= self.inputs[i].u
            out[i] += self.inputs[i].value


def lower_factor(correlation: Numbers) -> Numbers:
    """Lower triangular L with L L' the matrix; L has zero columns where that is singular.

    Raises
    ------
    InputError
        Where the matrix is not positive semidefinite: no quantities are correlated like that.

    Examples
    --------
    >>> lower_factor(np.array([[1.0, -1.0], [-1.0, 1.0]])).tolist()
    [[1.0, 0.0], [-1.0, 0.0]]
    """
    n = len(correlation)
    factor = np.zeros((n, n))
    for j in range(n):
        left = correlation[j:, j] - factor[j:, :j] @ factor[j, :j]
        # at a singular step the rest of the column must vanish with the pivot, to its square root
        if left[0] < -ROUNDING or np.abs(left[1:]).max(initial=0.0) > math.sqrt(
            max(left[0], 0.0) + ROUNDING
        ):
            raise InputError(
                "the correlation matrix is not positive semidefinite",
                remedy="check its coefficients: no quantities can be correlated like that",
            )
        if left[0] > ROUNDING:
            factor[j:, j] = left / math.sqrt(left[0])
    return factor


def _contradictions(inputs: Sequence[Estimate]) -> list[Problem]:
    """Two different estimates of one name."""
    first: dict[str, Estimate] = {}
    return [
        Problem(
            f"it is given twice, as {known.value:g} and as {estimate.value:g}, "
            "or with different uncertainties",
            "one name is one quantity: make the two equal, or rename one",
            key=estimate.name,
        )
        for estimate in inputs
        if estimate.name
        for known in (first.setdefault(estimate.name, estimate),)
        if (known.value, known.u, known.distribution, known.dof)
        != (estimate.value, estimate.u, estimate.distribution, estimate.dof)
    ]


def _correlated(
    inputs: Sequence[Estimate], correlation: ArrayLike | None
) -> tuple[list[int], Numbers]:
    """Places of the inputs that are correlated with others, and the factor of their matrix."""
    if correlation is None:
        return [], np.zeros((0, 0))
    matrix, n = np.asarray(correlation, dtype=float), len(inputs)
    if matrix.shape != (n, n):
        raise InputError(
            f"the correlation matrix has the shape {matrix.shape}, with {n} inputs",
            remedy=f"give {n} rows of {n} coefficients",
        )
    if not (
        np.allclose(matrix, matrix.T, rtol=0, atol=ROUNDING)
        and np.allclose(np.diag(matrix), 1.0, rtol=0, atol=ROUNDING)
        and np.abs(matrix).max() <= 1.0 + ROUNDING
    ):
        raise InputError(
            "the correlation matrix is not one",
            remedy="give a symmetric matrix of coefficients from -1 to 1, with 1 on the diagonal",
        )
    others = (matrix != 0.0) & ~np.eye(n, dtype=bool)
    places = [i for i in range(n) if others[i].any() and not inputs[i].exact]
    problems, names = [], set()
    for i in places:
        estimate = inputs[i]
        called = estimate.name or f"input {i + 1}"
        if estimate.distribution in ("normal", "t") and math.isinf(estimate.dof):
            if estimate.name in names:
                problems.append(
                    Problem(
                        "it is given twice and correlated with other inputs",
                        "give it once",
                        key=called,
                    )
                )
            names.update({estimate.name} - {""})
            continue
        problems.append(
            Problem(
                f"it is {estimate.distribution} with {estimate.dof:g} degrees of freedom, and "
                "only normal inputs of infinite degrees of freedom can be drawn correlated",
                "take it as normal, or write it as a function of independent inputs",
                key=called,
            )
        )
    if problems:
        raise InputError(problems)
    return places, lower_factor(matrix[np.ix_(places, places)])
