"""What would halve a run set's expanded uncertainty: one change at a time, all else as it is."""

from __future__ import annotations

import dataclasses
import math
from collections.abc import Callable, Sequence

import numpy as np

from plumbfall.results import BudgetLine, Improvement
from plumbfall.uncertainty.coverage import coverage_factor, effective_dof
from plumbfall.uncertainty.few_values import dof_with_few_values

__all__ = ["improvements"]

DOMINANT = 0.9
"""Lines are looked at, the largest first, until they make up this part of the variance."""

MOST_LINES = 5

TOGETHER = "all of these together"
"""Name of the change of all dominant lines, given where none alone is enough."""

MOST_REPEATS = 10_000
"""More drops or balls than this are no proposal."""


def improvements(
    budget: Sequence[BudgetLine], *, n_drops: int, n_balls: int, coverage: float, own: str
) -> tuple[Improvement, ...]:
    """Say of each dominant line of a budget what change of it would halve the bounds.

    An input's standard uncertainty shrinks, its degrees of freedom staying; what a drop or a ball
    has to itself shrinks with the root of their number, and observed scatter gains a degree of
    freedom with each. The coverage factor follows as it does in the result.

    Parameters
    ----------
    budget : sequence of BudgetLine
        The largest part first.
    n_drops, n_balls : int
        Used drops of the set, and their balls.
    coverage : float
        Coverage probability of the bounds.
    own : str
        Name of the line of the set's own observed scatter.

    Returns
    -------
    tuple of Improvement
        The largest part first; where none alone can do it, the last says to what part all of
        them together must shrink. Empty without a budget.
    """
    if not budget:
        return ()
    repeated = [line for line in budget if line.scope == "drop" or line.input == own]
    found: list[Improvement] = []
    seen = 0.0
    grouped = False
    for line in budget:
        if seen >= DOMINANT or len(found) >= MOST_LINES:
            break
        seen += line.share
        if line not in repeated:
            found.append(_of_input(line, budget, coverage, own))
        elif not grouped:  # all that repetition averages, named by its largest part
            grouped = True
            number = n_balls if line.scope == "ball" else n_drops
            found.append(_of_repetition(line, repeated, budget, number, coverage, own))
    if len(found) > 1 and all(one.needed is None for one in found):
        names = {one.input for one in found} | (
            {line.input for line in repeated} if grouped else set()
        )
        found.append(_of_all(names, budget, coverage, own))
    return tuple(found)


def _of_all(
    names: set[str], budget: Sequence[BudgetLine], coverage: float, own: str
) -> Improvement:
    """Say to what part all dominant contributions must shrink together."""
    now = _expanded(budget, coverage, own)

    def left(factor: float) -> float:
        changed = [
            dataclasses.replace(each, contribution=factor * each.contribution)
            if each.input in names
            else each
            for each in budget
        ]
        return _expanded(changed, coverage, own) / now

    return Improvement(TOGETHER, "factor", "1", 1.0, _crossing(left), left(0.0))


def _expanded(budget: Sequence[BudgetLine], coverage: float, own: str) -> float:
    contributions = np.array([line.contribution for line in budget])
    dof = np.array([line.dof for line in budget])
    u = math.sqrt(float(np.sum(contributions**2)))
    scatter = np.array([line.input == own for line in budget])
    effective = dof_with_few_values(
        u=u,
        dof=effective_dof(u=u, contributions_fourth=np.sum(contributions**4 / dof)),
        scatter_u=contributions[scatter].sum(),
        scatter_dof=dof[scatter][0] if scatter.any() else np.inf,
        probability=coverage,
    )
    return float(coverage_factor(dof=effective, probability=coverage)) * u


def _of_input(
    line: BudgetLine, budget: Sequence[BudgetLine], coverage: float, own: str
) -> Improvement:
    now = _expanded(budget, coverage, own)

    def left(factor: float) -> float:
        changed = [
            dataclasses.replace(each, contribution=factor * each.contribution)
            if each is line
            else each
            for each in budget
        ]
        return _expanded(changed, coverage, own) / now

    factor = _crossing(left)
    return Improvement(
        input=line.input,
        what="standard uncertainty",
        unit=line.unit,
        now=line.u,
        needed=None if factor is None else factor * line.u,
        remaining=left(0.0),
    )


def _of_repetition(
    line: BudgetLine,
    repeated: Sequence[BudgetLine],
    budget: Sequence[BudgetLine],
    number: int,
    coverage: float,
    own: str,
) -> Improvement:
    now = _expanded(budget, coverage, own)
    names = {each.input for each in repeated}

    def left(count: float) -> float:
        changed = []
        for each in budget:
            if each.input in names:
                contribution = each.contribution * math.sqrt(number / count)
                gained = count - number if each.input == own else 0.0
                each = dataclasses.replace(each, contribution=contribution, dof=each.dof + gained)
            changed.append(each)
        return _expanded(changed, coverage, own) / now

    needed: int | None = None
    if left(MOST_REPEATS) <= 0.5:
        low, high = number, MOST_REPEATS
        while high - low > 1:
            middle = (low + high) // 2
            low, high = (low, middle) if left(middle) <= 0.5 else (middle, high)
        needed = high
    return Improvement(
        input=line.input,
        what="balls" if line.scope == "ball" else "drops",
        unit="1",
        now=float(number),
        needed=None if needed is None else float(needed),
        remaining=left(1e12),
    )


def _crossing(left: Callable[[float], float]) -> float | None:
    """Factor at which half remains; ``None`` where not even zero leaves half."""
    low, at_low, high, at_high = 0.0, left(0.0) - 0.5, 1.0, 0.5
    if at_low > 0:
        return None
    last = 0.0
    for _ in range(100):  # false position; an end that stays twice is halved (Illinois)
        tried = (low * at_high - high * at_low) / (at_high - at_low)
        found = left(tried) - 0.5
        if abs(found) < 1e-9 or high - low < 1e-12:
            return tried
        if found > 0:
            high, at_high = tried, found
            at_low = at_low / 2 if last > 0 else at_low
        else:
            low, at_low = tried, found
            at_high = at_high / 2 if last < 0 else at_high
        last = found
    return low
