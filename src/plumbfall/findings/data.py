"""What detectors look at: a reduction's columns, and the findings they make of them."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from plumbfall.bench.records import Ball, Bench, Liquid, Tube
from plumbfall.findings.ball_fits import BallFits, ball_fits
from plumbfall.findings.ball_means import BallMeans, ball_means
from plumbfall.findings.clock_steps import ClockSteps, steps_of
from plumbfall.findings.drop_errors import DropErrors, drop_errors
from plumbfall.findings.interval_drops import IntervalDrops, interval_drops
from plumbfall.findings.interval_fits import IntervalFits, interval_fits
from plumbfall.findings.limits import Limits
from plumbfall.findings.residuals import Residuals, residuals
from plumbfall.findings.significance import level_of_each
from plumbfall.findings.suspects import Pairs, Suspects, pairs, suspects
from plumbfall.findings.trends import Trends, Warmth, change_of, trends
from plumbfall.measurement.columns import DropColumns
from plumbfall.measurement.ends import Ends
from plumbfall.measurement.inputs import Inputs
from plumbfall.measurement.selection import Selection
from plumbfall.measurement.sensitivities import Sums
from plumbfall.measurement.values import Weights
from plumbfall.physics.drag import DragLaw
from plumbfall.results import Finding
from plumbfall.run_sets.jacobian import Jacobian
from plumbfall.run_sets.outputs import Outputs
from plumbfall.run_sets.repeatability import Repeatability
from plumbfall.run_sets.temperature_fit import TemperatureFit
from plumbfall.timings.records import Timings

__all__ = ["Detector", "Found", "RunData"]

APART = 0.05
"""Significance from which on balls are taken to disagree, where drops are compared with others.

No warning comes of it: the drops of such a set are then compared within each ball alone.
"""

Found = tuple[int, Finding]
"""A run set's place in ``RunData.names``, and what was found in it."""


@dataclass(frozen=True)
class RunData:
    """Everything known once the drops are reduced and the uncertainties propagated.

    ``ends`` is what the tubes' ends add to each cell's path, ``None`` where nothing is added;
    ``fits`` are the temperature laws fitted to the run sets, where that is asked for.
    """

    bench: Bench
    timings: Timings
    selection: Selection
    inputs: Inputs
    columns: DropColumns
    sums: Sums
    weights: Weights
    scatter: Repeatability
    jacobian: Jacobian
    outputs: Outputs
    law: DragLaw
    limits: Limits
    ends: Ends | None = None
    unstated: tuple[str, ...] = ()
    fits: tuple[TemperatureFit, ...] = ()

    @property
    def names(self) -> tuple[str, ...]:
        """Run-set names."""
        return self.selection.names

    @property
    def row_set(self) -> NDArray[np.intp]:
        """The run set of every row of the timing table, used or not, shape (rows,)."""
        return self.selection.row_set

    @cached_property
    def drop_numbers(self) -> NDArray[np.intp]:
        """The drop number of each used drop, as recorded, shape (drops,)."""
        return self.timings.table["drop"].to_numpy(dtype=np.intp)[self.selection.row]

    @cached_property
    def tubes(self) -> tuple[Tube, ...]:
        """Tubes in the order their codes count."""
        return tuple(self.bench.tubes.values())

    @cached_property
    def balls(self) -> tuple[Ball, ...]:
        """Balls in the order their codes count."""
        return tuple(self.bench.balls.values())

    @cached_property
    def liquids(self) -> tuple[Liquid, ...]:
        """Liquids in the order their codes count."""
        return tuple(self.bench.liquids.values())

    @property
    def level(self) -> float:
        """Significance that each statistical test warns at."""
        return level_of_each(self.limits)

    @cached_property
    def steps(self) -> ClockSteps:
        """Steps in which the times of each set were written down."""
        return steps_of(self.selection, self.inputs)

    @cached_property
    def errors(self) -> DropErrors:
        """What each drop's own error is made of."""
        return drop_errors(
            self.selection,
            self.inputs,
            self.columns,
            self.sums,
            self.weights.weight,
            self.bench.scatter,
            np.maximum(self.steps.found, self.steps.declared),
        )

    @cached_property
    def balls_of_sets(self) -> BallMeans:
        """Ball means, and how far the bench sheet allows them to differ."""
        return ball_means(
            self.selection,
            self.inputs,
            self.columns,
            self.sums,
            self.weights.weight,
            self.errors,
        )

    @cached_property
    def ball_fits(self) -> BallFits:
        """Whether the balls of each set agree, and whether they follow size or shear."""
        return ball_fits(self.balls_of_sets, len(self.names))

    @cached_property
    def residuals(self) -> Residuals:
        """What is left of each drop once its set's mean, and its ball, are taken off."""
        fits = self.ball_fits
        return residuals(
            self.selection.run_set, self.errors, fits.group_variance, fits.p_value < APART
        )

    @cached_property
    def suspects(self) -> Suspects:
        """Each run set's farthest drop, and how likely it is one of the others."""
        return suspects(self.residuals)

    @cached_property
    def suspect_pairs(self) -> Pairs:
        """Each run set's two farthest drops on one side."""
        return pairs(self.residuals, self.suspects)

    @cached_property
    def warmth(self) -> Warmth:
        """Temperatures of the drops, and what is known of them and of the liquids' slopes."""
        n, cells = len(self.names), self.selection.cells
        entry = self.inputs.roles["slope"].entry
        u = np.append(self.inputs.u, 0.0)[entry]
        reading, slope, slope_u = np.zeros(n), np.zeros(n), np.zeros(n)
        for of_set, of_cell in (
            (reading, self.inputs.per_reading),
            (slope, self.inputs.roles["slope"].value),
            (slope_u, u),
        ):
            of_set[cells.run_set] = of_cell
        return Warmth(self.columns.temperature, reading, slope, slope_u)

    @cached_property
    def trends(self) -> Trends:
        """Whether the drops of each set drift, and with what."""
        return trends(self.residuals, self.order, self.warmth)

    @cached_property
    def interval_drops(self) -> IntervalDrops | None:
        """Intervals between successive marks as drops of their own; ``None`` without any."""
        return interval_drops(
            self.bench,
            self.selection,
            self.columns,
            self.law,
            self.timings.marks_s,
            self.steps.found,
        )

    @cached_property
    def interval_fits(self) -> IntervalFits:
        """Whether the intervals of each run set and tube agree; asked only where there are some."""
        assert self.interval_drops is not None
        return interval_fits(self.interval_drops)

    @cached_property
    def temperature_change(self) -> NDArray[np.float64]:
        """Change of the temperature about each drop, from drop to drop, shape (drops,) [K]."""
        return change_of(self.columns.temperature, self.order, self.selection.run_set)

    @cached_property
    def settling(self) -> NDArray[np.bool_]:
        """Whether the first drops approach the others as a bath settles, shape (run sets,).

        Not by the first drop alone, and better than by a straight line.
        """
        found = self.trends
        return np.asarray(
            (found.settling_p_value < self.level)
            & (found.settling_beside < APART)
            & (found.settling.rest < found.drift.rest)
        )

    @cached_property
    def order(self) -> NDArray[np.float64]:
        """Place of each used drop in its run set, by drop number, from 0, shape (drops,)."""
        run_set = self.selection.run_set
        sorted_ = np.lexsort((self.selection.row, self.drop_numbers, run_set))
        starts = np.cumsum(self.weights.n_drops) - self.weights.n_drops
        place = np.empty(len(run_set))
        place[sorted_] = np.arange(len(run_set)) - starts[run_set[sorted_]]
        return place

    @cached_property
    def temperature_range(self) -> NDArray[np.float64]:
        """Range of the drops' temperatures by run set, NaN where unknown, shape (run sets,)."""
        n = len(self.names)
        low, high = np.full(n, np.inf), np.full(n, -np.inf)
        with np.errstate(invalid="ignore"):
            np.minimum.at(low, self.selection.run_set, self.columns.temperature)
            np.maximum.at(high, self.selection.run_set, self.columns.temperature)
        return np.where(np.isfinite(high), high - low, np.nan)

    def flagged(self, flag: NDArray[np.bool_]) -> Iterator[tuple[int, NDArray[np.intp]]]:
        """Run sets with flagged drops, and the places of these drops."""
        at = np.flatnonzero(flag)
        for run_set in np.unique(self.selection.run_set[at]):
            yield int(run_set), at[self.selection.run_set[at] == run_set]

    def numbers(self, drops: NDArray[np.intp]) -> tuple[int, ...]:
        """Drop numbers at the places given."""
        return tuple(int(number) for number in self.drop_numbers[drops])

    def pairs(self, kind: str) -> NDArray[np.intp]:
        """Distinct (run set, code of a kind) pairs in use, shape (pairs, 2)."""
        codes = getattr(self.selection.cells, kind)
        return np.unique(np.stack([self.selection.cells.run_set, codes], axis=1), axis=0)


Detector = Callable[[RunData], Iterator[Found]]
