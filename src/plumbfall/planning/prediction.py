"""How uncertain a run set of so many drops will be: the budget of the reduction, foreseen.

What the bench's entries contribute is the same for one drop and for many. The drops' scatter is
what the instruments declare, or the bench's known repeatability where that is more; a run set of n
drops will observe it with n - 1 degrees of freedom.
"""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from plumbfall.bench.keys import key_path
from plumbfall.estimate import Estimate
from plumbfall.measurement.balance import Numbers
from plumbfall.planning.conditions import Conditions
from plumbfall.planning.evaluation import Evaluation
from plumbfall.run_sets.repeatability import FEWEST
from plumbfall.uncertainty.coverage import coverage_factor, effective_dof
from plumbfall.uncertainty.few_values import FEW, dof_with_few_values

__all__ = ["Part", "Prediction"]


EVERY = slice(None)


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
        self._spreads = [key_path("ball", name, "spread") for name in bench.balls]
        self._instruments = list(_declaring(evaluation.conditions))
        self._shared = shared.variance
        with np.errstate(divide="ignore", invalid="ignore"):
            self._fourth = self._shared**2 / shared.effective_dof

    def expanded(
        self, drops: int | NDArray[np.intp], places: NDArray[np.intp] | slice = EVERY
    ) -> Numbers:
        """Return the relative expanded uncertainty of run sets of so many drops."""
        u, factor = self._combined(drops, places)
        return np.asarray(factor * u)

    @cached_property
    def known(self) -> dict[str, Estimate]:
        """Every estimate that a part may be of, by name."""
        made = self.evaluation
        return {
            **made.conditions.bench.quantities(),
            **{estimate.name: estimate for estimate in made.inputs.estimates},
        }

    @cached_property
    def own_names(self) -> frozenset[str]:
        """Names of entries that declare a standard deviation of drops or balls."""
        instruments = (name for name, _ in self._instruments)
        return frozenset({"scatter.relative", *self._spreads, *instruments})

    def floor(self) -> Numbers:
        """Return the relative expanded uncertainty that no number of drops goes below."""
        dof = effective_dof(u=np.sqrt(self._shared), contributions_fourth=self._fourth)
        return coverage_factor(dof=dof, probability=self.coverage) * np.sqrt(self._shared)

    def drops_needed(self, target: float, fewest: int, most: int) -> NDArray[np.intp]:
        """Return the least number of drops that reaches a target, 0 where none does."""
        needed = np.zeros(len(self._shared), dtype=np.intp)
        missing = np.flatnonzero(self.expanded(most) <= target)
        for drops in range(fewest, most + 1):
            reached = self.expanded(drops, missing) <= target
            needed[missing[reached]] = drops
            missing = missing[~reached]
            if not len(missing):
                break
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

    def factor(self, place: int, drops: int) -> float:
        """Return the coverage factor of a run set of so many drops."""
        return float(self._combined(drops, np.array([place]))[1][0])

    def _combined(
        self, drops: int | NDArray[np.intp], places: NDArray[np.intp] | slice
    ) -> tuple[Numbers, Numbers]:
        n = np.asarray(drops, dtype=float)
        scatter = self.scatter[places] ** 2 / n
        dof = np.maximum(n - 1, 1)
        if self._known is not None:
            dof = np.where(n < FEWEST, self._known.dof, dof)
        else:
            dof = np.where(n < 2, np.inf, dof)
        u = np.sqrt(self._shared[places] + scatter)
        fourth = self._fourth[places] + scatter**2 / dof
        effective = effective_dof(u=u, contributions_fourth=fourth)
        if (dof < FEW).any():
            effective = dof_with_few_values(
                u=u,
                dof=effective,
                scatter_u=np.sqrt(scatter),
                scatter_dof=dof,
                probability=self.coverage,
            )
        return u, coverage_factor(dof=effective, probability=self.coverage)

    def _own_parts(self, place: int) -> dict[str, float]:
        """Relative variances of what each drop has to itself, by the entry that declares it."""
        own, made = self.evaluation.own, self.evaluation
        ball = self._spreads[made.ball[made.solved[place]]]
        parts = {ball: float(own.spread[place])}
        if self._by_bench[place]:
            assert self._known is not None  # it is what the scatter is from
            return parts | {"scatter.relative": self._known.relative.value**2}
        for name, kind in self._instruments:
            parts[name] = float(getattr(own, kind)[place])
        return parts

    def _largest_own(self, place: int) -> str:
        parts = self._own_parts(place)
        return max(parts, key=lambda name: parts[name])


def _declaring(conditions: Conditions) -> Iterator[tuple[str, str]]:
    """Yield the entries that declare what each drop has to itself, and which error that is."""
    bench = conditions.bench
    if conditions.timer >= 0:
        timer = list(bench.timers)[conditions.timer]
        for kind in ("per_drop", "resolution"):
            yield key_path("timer", timer, kind), kind
    if conditions.thermometer >= 0:
        thermometer = list(bench.thermometers)[conditions.thermometer]
        yield key_path("thermometer", thermometer, "per_reading"), "per_reading"
