"""From which to which viscosity each ball will do in its tube, and what limits it at either end."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from plumbfall.measurement.balance import Codes, Numbers
from plumbfall.planning.conditions import Conditions
from plumbfall.planning.evaluation import Evaluation, evaluate
from plumbfall.planning.judgement import Reason, reasons_against, spoken_of
from plumbfall.planning.prediction import Prediction
from plumbfall.planning.wanted import Wanted

__all__ = ["Window", "usable_windows", "viscosity_span"]

PER_DECADE = 8
HALVINGS = 8
"""From the steps of the grid to a thousandth of the viscosity."""


@dataclass(frozen=True, slots=True)
class Window:
    """Viscosities [Pa.s] for which a ball will do in a tube; both ``None`` where there are none.

    A limit is what speaks against the ball just outside, ``None`` where the window goes on beyond
    what was looked at. Without a window ``low_limit`` says what speaks against the ball where most
    viscosities are asked for. ``input`` is the largest part of the uncertainty where that limits.
    """

    tube: str
    ball: str
    low: float | None
    high: float | None
    low_limit: Reason | None
    high_limit: Reason | None
    low_input: str | None = None
    high_input: str | None = None


def viscosity_span(wanted: Wanted) -> tuple[float, float]:
    """Return the viscosities [Pa.s] between which windows are looked for, whole decades."""
    low, high = min(wanted.viscosities), max(wanted.viscosities)
    first, last = math.ceil(math.log10(low)) - 2, math.floor(math.log10(high)) + 3
    return 10.0**first, 10.0**last


def usable_windows(
    conditions: Conditions, wanted: Wanted, tube: Codes, ball: Codes, fewest: int
) -> tuple[Window, ...]:
    """Find the window of every pair of tube and ball, the widest where there are several.

    Parameters
    ----------
    conditions : Conditions
        What all drops have in common.
    wanted : Wanted
        Target, number of drops, longest time.
    tube, ball : array of int, shape (pairs,)
        Codes into the bench's tubes and balls.
    fewest : int
        Least number of drops that is made.
    """
    n = len(tube)
    span = [math.log(edge) for edge in viscosity_span(wanted)]
    count = max(int(PER_DECADE * (span[1] - span[0]) / math.log(10)), 2) + 1
    grid = np.linspace(span[0], span[1], count)

    def judged(pairs: Codes, log_viscosity: Numbers) -> _Judged:
        return _Judged(conditions, wanted, tube[pairs], ball[pairs], np.exp(log_viscosity), fewest)

    good = judged(np.repeat(np.arange(n), count), np.tile(grid, n)).good.reshape(n, count)
    starts, ends = zip(*(_widest(row) for row in good), strict=True)
    first, last = np.array(starts), np.array(ends)
    some = np.flatnonzero(first >= 0)
    step = grid[1] - grid[0]
    low, high = grid[first[some]], grid[last[some]]
    opens, closes = first[some] > 0, last[some] < count - 1
    inner = np.concatenate([low[opens], high[closes]])
    outer = np.concatenate([low[opens] - step, high[closes] + step])
    pairs = np.concatenate([some[opens], some[closes]])
    for _ in range(HALVINGS if len(pairs) else 0):
        middle = (inner + outer) / 2
        fine = judged(pairs, middle).good
        inner, outer = np.where(fine, middle, inner), np.where(fine, outer, middle)
    low[opens], high[closes] = inner[: opens.sum()], inner[opens.sum() :]

    none = np.flatnonzero(first < 0)
    middle = np.full(len(none), np.mean(np.log(wanted.viscosities)))
    limits = []
    if len(pairs) + len(none):
        outside = judged(np.concatenate([pairs, none]), np.concatenate([outer, middle]))
        limits = [outside.limit(place) for place in range(len(pairs) + len(none))]
    below = dict(zip(some[opens].tolist(), limits, strict=False))
    above = dict(zip(some[closes].tolist(), limits[opens.sum() :], strict=False))
    below |= dict(zip(none.tolist(), limits[len(pairs) :], strict=True))
    tubes, balls = list(conditions.bench.tubes), list(conditions.bench.balls)
    bounds = {pair: (low[at], high[at]) for at, pair in enumerate(some.tolist())}
    windows = []
    for pair in range(n):
        edges = bounds.get(pair)
        low_limit, low_input = below.get(pair, (None, None))
        high_limit, high_input = above.get(pair, (None, None))
        windows.append(
            Window(
                tube=tubes[tube[pair]],
                ball=balls[ball[pair]],
                low=None if edges is None else float(np.exp(edges[0])),
                high=None if edges is None else float(np.exp(edges[1])),
                low_limit=low_limit,
                high_limit=high_limit,
                low_input=low_input,
                high_input=high_input,
            )
        )
    return tuple(windows)


class _Judged:
    """Combinations and whether they will do, shape (combinations,)."""

    def __init__(
        self,
        conditions: Conditions,
        wanted: Wanted,
        tube: Codes,
        ball: Codes,
        viscosity: Numbers,
        fewest: int,
    ) -> None:
        self.evaluation: Evaluation = evaluate(conditions, tube, ball, viscosity, wanted.drops)
        self.prediction = Prediction(self.evaluation, wanted.coverage)
        self.wanted = wanted
        solved = self.evaluation.solved
        self.needed = np.zeros(len(solved), dtype=np.intp)
        fine = self.evaluation.fallen.time[solved] <= wanted.longest
        if wanted.target is not None:
            self.needed = self.prediction.drops_needed(wanted.target, fewest, wanted.most_drops)
            fine &= self.needed > 0
        fine &= np.array([self._clean(rank) for rank in range(len(solved))], dtype=bool)
        self.good: NDArray[np.bool_] = np.zeros(len(viscosity), dtype=bool)
        self.good[solved] = fine
        self._rank = {place: rank for rank, place in enumerate(solved.tolist())}

    def _clean(self, rank: int) -> bool:
        return not spoken_of(self.evaluation.found[rank], self.wanted.target)[0]

    def limit(self, place: int) -> tuple[Reason | None, str | None]:
        """Return what speaks against a combination, and its largest part of the uncertainty."""
        rank = self._rank.get(place)
        reasons = reasons_against(
            self.evaluation, self.prediction, self.wanted, self.needed, place, rank
        )
        if not reasons:
            return None, None
        part = None
        if rank is not None:
            parts = self.prediction.budget(rank, self.wanted.most_drops)
            part = parts[0].input if parts else None
        return reasons[0], part


def _widest(good: NDArray[np.bool_]) -> tuple[int, int]:
    """First and last place of the longest run of good ones, -1 where there is none."""
    edges = np.diff(np.concatenate([[False], good, [False]]).astype(int))
    starts, ends = np.flatnonzero(edges == 1), np.flatnonzero(edges == -1) - 1
    if not len(starts):
        return -1, -1
    longest = int(np.argmax(ends - starts))
    return int(starts[longest]), int(ends[longest])
