"""A smooth function near its estimates, as powers of single inputs and products of pairs.

With z_i the deviation of input i from its estimate in units of its u,

    f = c + sum_i P_i(z_i) + sum_(i<j) h_ij z_i z_j,    P_i of degree 8, exact at nine nodes,

costs a few operations a draw where f itself may be an inverse problem. It is used only where it
agrees with f at draws of its own, and only as far out as its nodes reach.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from itertools import combinations

import numpy as np
from numpy.typing import NDArray
from scipy.special import stdtrit

from plumbfall.estimate import Estimate
from plumbfall.uncertainty.distributions import HALF_WIDTH, tail_dof
from plumbfall.uncertainty.joint_draws import JointDraws

__all__ = ["LocalExpansion", "expand"]

Numbers = NDArray[np.float64]
Function = Callable[[Numbers], Numbers]
"""From inputs, shape (inputs, draws), to values, shape (draws,); NaN where there is none."""

REACH, FARTHEST = 4.0, 20.0
"""Outermost nodes in u of a distribution without bounds: of a normal one, and of a t at most."""

TAIL = 0.999
"""Quantile of a t distribution at its outermost node."""

BEYOND = 1.5
"""How many times as far a draw may lie by a polynomial of a low degree, ``LOW``.

Of 10 million normal ones 0.02 lie beyond 6 u. One of a high degree ends where its nodes do."""

LOW = 4

NODES = np.delete(np.cos(np.pi * np.arange(9) / 8), 4)
"""Where a polynomial is exact, over its reach, beside the estimate itself (Chebyshev's points)."""

SHRINKS = 3
"""How often the reach of an input is halved where the function has no value."""

NEGLIGIBLE = 1e-5
"""Terms smaller than this part of the function's standard deviation are left out."""

ERROR = 2e-3
"""Largest difference from the function that is taken, as part of its standard deviation.

A fifth of the smallest tolerance of one digit of u, 0.05 u, is five times as much (JCGM 101:2008,
7.9.2 and 8.2)."""

ROUNDING = 1e-12
"""Rounding of the function, in its unit or relative to it."""

CHECKED, EXTREME = 4_096, 48
"""Draws among which the lowest, the highest and some others, so many each, are checked."""


@dataclass(frozen=True, slots=True)
class LocalExpansion:
    """Coefficients over the deviations in u, arrays over (inputs,) unless stated.

    ``powers`` holds each input's coefficients of z, z^2, ... as far as they matter; ``pairs``, for
    each input, places and coefficients of those it is multiplied with. ``watched`` are inputs
    whose draws may lie beyond ``limit``.
    """

    constant: float
    value: Numbers
    u: Numbers
    powers: tuple[tuple[float, ...], ...]
    pairs: tuple[tuple[tuple[int, float], ...], ...]
    watched: tuple[int, ...]
    limit: Numbers

    def __call__(self, drawn: Numbers) -> Numbers:
        """Return the function at draws of the inputs, shape (inputs, draws).

        Summed term by term, not as a matrix product, whose rounding depends on the draws' number.
        """
        total = np.full(drawn.shape[1], self.constant)
        deviation = self._deviations(drawn)
        for place, powers in enumerate(self.powers):
            if place not in deviation:
                continue
            z = deviation[place]
            inner = np.zeros_like(z)
            for other, coefficient in self.pairs[place]:
                inner += coefficient * deviation[other]
            horner = np.zeros_like(z)
            for coefficient in reversed(powers):
                horner *= z
                horner += coefficient
            horner += inner
            horner *= z
            total += horner
        return total

    def beyond(self, drawn: Numbers) -> NDArray[np.intp]:
        """Places of the draws that lie too far out, for the function itself to work out."""
        far = np.zeros(drawn.shape[1], dtype=bool)
        for place in self.watched:
            far |= np.abs(drawn[place] - self.value[place]) > self.limit[place]
        return np.flatnonzero(far)

    def _deviations(self, drawn: Numbers) -> dict[int, Numbers]:
        used = {place for place, powers in enumerate(self.powers) if powers or self.pairs[place]}
        used |= {other for pairs in self.pairs for other, _ in pairs}
        return {p: (drawn[p] - self.value[p]) / self.u[p] for p in sorted(used)}


def expand(
    function: Function, inputs: Sequence[Estimate], *, seed: int, beside: float = 0.0
) -> LocalExpansion | None:
    """Expand a function about the estimates of its inputs.

    Parameters
    ----------
    function : callable
        Smooth where it has a value.
    inputs : sequence of Estimate
        In the function's order.
    seed : int
        Of the draws at which the expansion is checked.
    beside : float
        Standard deviation of what is added to the function independently, in its unit: errors
        are small or large beside the two together.

    Returns
    -------
    LocalExpansion or None
        ``None`` where it differs from the function by more than ``ERROR``, or the function has no
        value within reach: then only the function itself will do.
    """
    for farthest in (FARTHEST, REACH):  # heavy tails are followed as far as they can be
        reach = np.array([_reach(estimate, farthest) for estimate in inputs])
        expansion = _expand(function, inputs, reach, seed, beside)
        if expansion is not None or reach.max() <= REACH:
            break
    return expansion


def _expand(
    function: Function, inputs: Sequence[Estimate], reach: Numbers, seed: int, beside: float
) -> LocalExpansion | None:
    """Expand with the outermost nodes at ``reach``, shape (inputs,), in u."""
    value = np.array([estimate.value for estimate in inputs])
    u = np.array([estimate.u for estimate in inputs])
    moving = np.flatnonzero(u > 0).tolist()
    couples = list(combinations(moving, 2))
    sampled = _sample(function, value, u * reach, moving, couples)
    if sampled is None:
        return None
    constant, alone, together, part = sampled
    within, cut = part * reach, part < 1.0
    coefficients = _power_coefficients(alone - constant)
    slopes = coefficients[:, 0] / within[moving]
    least = NEGLIGIBLE * (deviation := math.hypot(beside, *slopes))
    powers: list[tuple[float, ...]] = [()] * len(inputs)
    pairs: list[list[tuple[int, float]]] = [[] for _ in inputs]
    even = np.zeros(len(inputs))
    for place, single in zip(moving, coefficients, strict=True):
        even[place] = (single[1::2] * 0.5 ** np.arange(2, len(NODES) + 1, 2)).sum()
        powers[place] = _that_matter(single, within[place], least)
    for (i, j), (both_up, both_down) in zip(couples, together, strict=True):
        product = (both_up + both_down) / 2 - constant - even[i] - even[j]
        product /= within[i] / 2 * within[j] / 2
        if abs(product) > least:
            pairs[i].append((j, float(product)))
    high = np.array([len(each) > LOW for each in powers])
    heavy = np.array([math.isfinite(tail_dof(estimate)) for estimate in inputs])
    expansion = LocalExpansion(
        constant=constant,
        value=value,
        u=u,
        powers=tuple(powers),
        pairs=tuple(tuple(each) for each in pairs),
        watched=tuple(np.flatnonzero((u > 0) & (heavy | high | cut)).tolist()),
        limit=np.where(high | cut, 1.0, BEYOND) * within * u,
    )
    rounding = ROUNDING * max(1.0, abs(constant))
    agrees = _agrees(expansion, function, inputs, seed, ERROR * deviation + rounding)
    return expansion if agrees else None


def _sample(
    function: Function,
    value: Numbers,
    reach: Numbers,
    moving: list[int],
    couples: list[tuple[int, int]],
) -> tuple[float, Numbers, Numbers, Numbers] | None:
    """Return the function at the estimates, at the nodes of every input and of every pair.

    Shapes are (inputs that move, nodes) and (pairs, 2); the last is the part of its reach that is
    left to each input for the function to have a value there.
    """
    part = np.ones(len(value))
    with np.errstate(all="ignore"):
        for _ in range(1 + SHRINKS):
            alone = function(_nodes(value, reach * part, moving))
            bad = np.flatnonzero(~np.isfinite(alone))
            if not len(bad):
                break
            if bad[0] == 0:
                return None
            part[[moving[place] for place in np.unique((bad - 1) // len(NODES))]] /= 2
        together = function(_pair_nodes(value, reach * part, couples))
    if len(bad) or not np.isfinite(together).all():
        return None
    return float(alone[0]), alone[1:].reshape(-1, len(NODES)), together.reshape(-1, 2), part


def _reach(estimate: Estimate, farthest: float) -> float:
    """How far out draws of an input are expected, in u."""
    if estimate.distribution in HALF_WIDTH:
        return HALF_WIDTH[estimate.distribution] * (1 + 1 / math.sqrt(2 * estimate.dof))
    if math.isinf(dof := tail_dof(estimate)):
        return REACH
    return min(max(float(stdtrit(dof, TAIL)), REACH), farthest)


def _nodes(value: Numbers, reach: Numbers, moving: list[int]) -> Numbers:
    """Return the estimates, and the nodes of every input that moves."""
    n = len(NODES)
    nodes = np.repeat(value[:, None], 1 + n * len(moving), axis=1)
    for i, place in enumerate(moving):
        nodes[place, 1 + n * i : 1 + n * (i + 1)] += reach[place] * NODES
    return nodes


def _pair_nodes(value: Numbers, reach: Numbers, couples: list[tuple[int, int]]) -> Numbers:
    """Both inputs of each pair halfway up, and both halfway down."""
    nodes = np.repeat(value[:, None], 2 * len(couples), axis=1)
    for i, couple in enumerate(couples):
        for place in couple:
            nodes[place, 2 * i : 2 * i + 2] += reach[place] * np.array([0.5, -0.5])
    return nodes


def _power_coefficients(values: Numbers) -> Numbers:
    """Coefficients of the powers from 1 of z over its reach, shape (inputs, powers)."""
    powers = NODES[:, None] ** np.arange(1, len(NODES) + 1)
    return np.asarray(np.linalg.solve(powers, values.T).T)


def _that_matter(coefficients: Numbers, reach: float, least: float) -> tuple[float, ...]:
    """Coefficients of z from those over its reach, without the last ones that are negligible."""
    count = int(np.flatnonzero(np.abs(coefficients) > least).max(initial=-1)) + 1
    return tuple((coefficients / reach ** np.arange(1.0, len(coefficients) + 1))[:count].tolist())


def _agrees(
    expansion: LocalExpansion,
    function: Function,
    inputs: Sequence[Estimate],
    seed: int,
    error: float,
) -> bool:
    """Whether the expansion is near enough at the lowest, the highest and other draws."""
    drawn = np.empty((len(inputs), CHECKED))
    # Names make streams: without them the draws are others than those of the propagation.
    nameless = [Estimate(each.value, each.u, each.distribution, each.dof) for each in inputs]
    JointDraws(nameless, seed=seed).fill(drawn)
    drawn = np.delete(drawn, expansion.beyond(drawn), axis=1)
    found = expansion(drawn)
    order = np.argsort(found)
    chosen = np.unique(
        np.concatenate([order[:EXTREME], order[-EXTREME:], np.arange(min(EXTREME, len(order)))])
    )
    with np.errstate(all="ignore"):
        apart = np.abs(found[chosen] - function(drawn[:, chosen]))
    return bool((apart <= error).all())
