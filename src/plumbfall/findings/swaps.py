"""Drops and balls that look like another ball of the bench, or like a slip in a diameter."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
from numpy.typing import NDArray

from plumbfall.findings.data import Found, RunData
from plumbfall.findings.other_balls import Candidates, candidates, shifts
from plumbfall.findings.significance import t_p_value
from plumbfall.findings.swap_words import Swap, SwapFit, swap_finding

__all__ = ["swapped_ball"]

Numbers = NDArray[np.float64]
Codes = NDArray[np.intp]

FEWEST = 4
"""Drops of a set; among fewer nothing that stands out can be told from scatter."""
WORTH_A_LOOK = 0.01
"""Significance from which a set is looked into; no finding comes of that alone."""
FARTHEST = 8
"""So many drops, the farthest out, are tried one by one and in pairs."""
ALIKE = 1.5
"""Explanations whose remaining squares differ by less than this factor are named together."""


def swapped_ball(data: RunData) -> Iterator[Found]:
    """Try every other ball of the bench for the drops, and the balls, that stand out.

    A drop of ball A that was ball B in truth is off by the ratio of (ball density - liquid
    density) d^2 / drag of the two. The part of the scatter that goes along with such a pattern is
    judged by the t-test of its slope, Bonferroni's bound over all that was tried; and the slope
    must be 1, within 1 % of viscosity or what the scatter allows.
    """
    others = candidates(data)
    if len(data.balls) < 1:
        return
    for run_set in np.flatnonzero(_worth_a_look(data)):
        drops = np.flatnonzero(data.selection.run_set == run_set)
        yield from _look_into(data, int(run_set), drops, others)


def _worth_a_look(data: RunData) -> NDArray[np.bool_]:
    """Say which sets have a drop, a pair of drops or a ball that stands out."""
    n_sets, run_set, y = len(data.names), data.selection.run_set, data.errors.value
    n = data.weights.n_drops
    able = (n >= FEWEST) & (np.bincount(run_set[~data.errors.whole], minlength=n_sets) == 0)
    high, low = np.full(n_sets, -np.inf), np.full(n_sets, np.inf)
    np.maximum.at(high, run_set, y)
    np.minimum.at(low, run_set, y)
    squares = np.bincount(run_set, weights=y**2, minlength=n_sets)
    with np.errstate(invalid="ignore", divide="ignore"):
        share = np.minimum((high - low) ** 2 / 2 / squares, 1.0)
        t = np.sqrt((n - 2) * share / (1 - share))
        pair = t_p_value(t=t, dof=n - 2) * n * (n - 1)
    far = high - low > data.limits.swap_effect
    stands_out = (data.suspects.p_value < WORTH_A_LOOK) | (pair < WORTH_A_LOOK)
    return np.asarray(able & far & (stands_out | _ball_matches(data)))


def _ball_matches(data: RunData) -> NDArray[np.bool_]:
    """Say which sets have a ball that is off by what another one, or a slip, would make it."""
    fits, errors, n_sets = data.ball_fits, data.errors, len(data.names)
    group = np.flatnonzero((fits.p_value < WORTH_A_LOOK)[errors.group_set])
    found = np.zeros(n_sets, dtype=bool)
    if not len(group):
        return found
    first = np.zeros(len(errors.group_set), dtype=np.intp)
    first[errors.group[::-1]] = np.arange(len(errors.group))[::-1]
    run_set = errors.group_set[group]
    shift = shifts(data, first[group], candidates(data), data.scatter.mean[run_set])
    balls = np.bincount(errors.group_set, minlength=n_sets)[run_set, None]
    apart = fits.apart[group, None]
    both = shift * balls / np.maximum(balls - 1, 1)  # two balls taken for each other
    with np.errstate(invalid="ignore"):
        near = np.fmin(np.abs(apart - shift), np.abs(apart - both)) < np.fmax(
            3 * data.limits.swap_match, np.abs(shift) / 4
        )
        match = near & (np.abs(shift) > data.limits.swap_effect)
    found[run_set[match.any(axis=1)]] = True
    return found


def _look_into(data: RunData, run_set: int, drops: Codes, others: Candidates) -> Iterator[Found]:
    y = data.errors.value[drops]
    own = data.selection.cells.ball[data.selection.cell[drops]]
    median = float(np.median(data.columns.at_set[drops]))
    shift = shifts(data, drops, others, np.full(len(drops), median))
    swaps = list(_suppose(y, own, shift, others))
    fits = _explain(data, drops, y, swaps)
    if not fits:
        return
    best = min(fits, key=lambda fit: fit.left)
    alike = [fit for fit in fits if fit.left <= ALIKE * best.left]
    yield run_set, swap_finding(data, drops, others, best, alike)


def _suppose(y: Numbers, own: Codes, shift: Numbers, others: Candidates) -> Iterator[Swap]:
    """Yield what may have happened: one drop, two drops, a ball or two balls taken for others."""
    n = len(y)
    bench_balls = np.flatnonzero(others.as_written)
    far = np.argsort(-np.abs(y - np.median(y)), kind="stable")[:FARTHEST]

    def swap(pairs: list[tuple[Codes, int]]) -> Swap:
        shifted, truly = np.zeros(n), np.full(n, -1, dtype=np.intp)
        for places, candidate in pairs:
            shifted[places], truly[places] = shift[places, candidate], candidate
        return Swap(shifted, truly)

    used = np.unique(own)
    several = {ball: np.flatnonzero(own == ball) for ball in used.tolist()}
    for i in far:
        if len(several[own[i]]) > 1:
            for candidate in bench_balls[bench_balls != own[i]]:
                yield swap([(np.array([i]), int(candidate))])
        for j in far[far > i]:
            if own[i] != own[j]:
                yield swap([(np.array([i]), int(own[j])), (np.array([j]), int(own[i]))])
    if len(used) < 2:
        return  # nothing to hold a ball against
    for ball, places in several.items():
        for candidate in range(len(others.ball)):
            slip_of_own = others.ball[candidate] == ball
            if candidate != ball and (others.as_written[candidate] or slip_of_own):
                yield swap([(places, candidate)])
        for other in used[used > ball].tolist():
            if len(places) > 1 or len(several[other]) > 1:
                yield swap([(places, other), (several[other], ball)])


def _explain(data: RunData, drops: Codes, y: Numbers, swaps: list[Swap]) -> list[SwapFit]:
    """Return the exchanges that explain a set's scatter beyond chance."""
    limits, n = data.limits, len(drops)
    weight = 1 / data.errors.variance[drops]
    shift = np.array([swap.shift for swap in swaps]).reshape(len(swaps), n)
    size = np.abs(shift).max(axis=1, initial=0.0)
    # a drop's own timing, which for a faster ball is more than its row's ball would have
    own = data.inputs.per_drop[data.selection.cell[drops]] / data.selection.time[drops]
    moved = shift != 0
    clock = np.sqrt(moved @ own**2) / np.maximum(moved.sum(axis=1), 1)

    def centred(values: Numbers) -> Numbers:
        mean: Numbers = np.asarray(values @ weight / weight.sum())
        return np.asarray(values - mean[..., None])

    h, c = centred(shift), centred(y)
    with np.errstate(invalid="ignore", divide="ignore"):
        along = h**2 @ weight
        slope = (h * c) @ weight / along
        rest = ((c - slope[:, None] * h) ** 2) @ weight
        error = np.sqrt(rest / (n - 2) / along)
        p_value = np.minimum(t_p_value(t=slope / error, dof=n - 2) * len(swaps), 1.0)
        left = ((c - h) ** 2) @ weight
        near = np.abs(slope - 1) * size < np.fmax(
            np.fmin(limits.swap_match, size / 4), 3 * np.hypot(error * size, clock)
        )
    good = (p_value < data.level) & near & (size > limits.swap_effect)
    return [SwapFit(swaps[at], float(p_value[at]), float(left[at])) for at in np.flatnonzero(good)]
