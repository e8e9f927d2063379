"""How uncertain a run set of so many drops will be: the budget of the reduction, foreseen.

What the bench's entries contribute is the same for one drop and for many. The drops' scatter is
what the instruments declare, or the bench's known repeatability where that is more; a run set of n
drops will observe it with n - 1 degrees of freedom.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from plumbfall.bench.keys import key_path
from plumbfall.measurement.balance import Numbers
from plumbfall.planning.evaluation import Evaluation
from plumbfall.run_sets.repeatability import FEWEST
from plumbfall.uncertainty.coverage import coverage_factor, effective_dof

__all__ = ["Part", "Prediction"]


@dataclass(frozen=True, slots=True)
class Part:
    """One input's part: its contribution relative to the viscosity, and its share of u squared."""

    input: str
    contribution: float
    share: float


class Prediction:
    """Predicted uncertainty of the solved combinations of an evaluation, arrays (solved,)."""

    def __init__(self, evaluation: Evaluation, coverage: float) -> None:
        self.evaluation = evaluation
        self.coverage = coverage
        own, shared = evaluation.own, evaluation.shared
        bench = evaluation.conditions.bench
        self._known = bench.scatter
        instruments = own.per_drop + own.resolution + own.per_reading
        known = 0.0 if bench.scatter is None else bench.scatter.relative.value**2
        self.scatter: Numbers = np.sqrt(np.maximum(instruments, known) + own.spread)
        """Relative standard deviation of one drop's viscosity."""
        self._by_bench = instruments < known
        self._shared = shared.variance
        with np.errstate(divide="ignore", invalid="ignore"):
            self._fourth = self._shared**2 / shared.effective_dof

    def expanded(self, drops: int | NDArray[np.intp]) -> Numbers:
        """Return the relative expanded uncertainty of run sets of so many drops."""
        u, factor = self._combined(drops)
        return np.asarray(factor * u)

    def floor(self) -> Numbers:
        """Return the relative expanded uncertainty that no number of drops goes below."""
        dof = effective_dof(u=np.sqrt(self._shared), contributions_fourth=self._fourth)
        return coverage_factor(dof=dof, probability=self.coverage) * np.sqrt(self._shared)

    def drops_needed(self, target: float, fewest: int, most: int) -> NDArray[np.intp]:
        """Return the least number of drops that reaches a target, 0 where none does."""
        needed = np.zeros(len(self._shared), dtype=np.intp)
        for drops in range(fewest, most + 1):
            missing = needed == 0
            if not missing.any():
                break
            needed[missing & (self.expanded(drops) <= target)] = drops
        return needed

    def dominant(self, drops: int) -> list[str]:
        """Return the input that contributes most to each combination."""
        shared = self.evaluation.shared.contributions
        squares = shared.data**2
        starts = shared.indptr[:-1]
        largest = np.maximum.reduceat(squares, starts) if len(starts) else np.zeros(0)
        rows = np.repeat(np.arange(len(starts)), np.diff(shared.indptr))
        at = np.flatnonzero(squares == largest[rows])[::-1]
        column = np.zeros(len(starts), dtype=np.intp)
        column[rows[at]] = shared.indices[at]
        own = self.scatter**2 / drops > largest
        return [
            self._largest_own(place) if own[place] else self.evaluation.columns[column[place]]
            for place in range(len(starts))
        ]

    def budget(self, place: int, drops: int) -> tuple[Part, ...]:
        """Return the parts of one combination's uncertainty, the largest first."""
        indices, contributions = self.evaluation.shared.row(place)
        variances: dict[str, float] = {}
        for column, contribution in zip(indices.tolist(), contributions.tolist(), strict=True):
            name = self.evaluation.columns[column]
            variances[name] = variances.get(name, 0.0) + contribution**2
        for name, variance in self._own_parts(place).items():
            variances[name] = variances.get(name, 0.0) + variance / drops
        total = sum(variances.values()) or 1.0
        return tuple(
            Part(name, math.sqrt(variance), variance / total)
            for name, variance in sorted(variances.items(), key=lambda item: (-item[1], item[0]))
            if variance > 0
        )

    def factor(self, drops: int) -> Numbers:
        """Return the coverage factors of run sets of so many drops."""
        return self._combined(drops)[1]

    def _combined(self, drops: int | NDArray[np.intp]) -> tuple[Numbers, Numbers]:
        n = np.asarray(drops, dtype=float)
        scatter = self.scatter**2 / n
        dof = np.maximum(n - 1, 1)
        if self._known is not None:
            dof = np.where(n < FEWEST, self._known.dof, dof)
        else:
            dof = np.where(n < 2, np.inf, dof)
        u = np.sqrt(self._shared + scatter)
        effective = effective_dof(u=u, contributions_fourth=self._fourth + scatter**2 / dof)
        return u, coverage_factor(dof=effective, probability=self.coverage)

    def _own_parts(self, place: int) -> dict[str, float]:
        """Relative variances of what each drop has to itself, by the entry that declares it."""
        evaluation, own = self.evaluation, self.evaluation.own
        conditions = evaluation.conditions
        bench = conditions.bench
        ball = list(bench.balls)[evaluation.ball[evaluation.solved[place]]]
        parts = {key_path("ball", ball, "spread"): float(own.spread[place])}
        if self._by_bench[place]:
            assert bench.scatter is not None  # it is what the scatter is from
            return parts | {"scatter.relative": bench.scatter.relative.value**2}
        if conditions.timer >= 0:
            timer = list(bench.timers)[conditions.timer]
            parts[key_path("timer", timer, "per_drop")] = float(own.per_drop[place])
            parts[key_path("timer", timer, "resolution")] = float(own.resolution[place])
        if conditions.thermometer >= 0:
            name = list(bench.thermometers)[conditions.thermometer]
            parts[key_path("thermometer", name, "per_reading")] = float(own.per_reading[place])
        return parts

    def _largest_own(self, place: int) -> str:
        parts = self._own_parts(place)
        return max(parts, key=lambda name: parts[name])
