"""The control chart of a history of checks, which tells whether the bench is as it was.

One point is one check. The limits come from what changes from one check to the next, so that
they hold whatever differs between run sets; the scatter of drops within a set is too small a
measure of that, and its limits would be passed every other day.
"""

from __future__ import annotations

import datetime as dt
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from plumbfall.calibration.control_charts import (
    ACTION,
    ROUNDING,
    WARNING,
    Drift,
    Individuals,
    drift,
    ewma,
    ewma_limits,
    individuals,
    moving_ranges,
    run_signals,
)
from plumbfall.calibration.history_lines import HistoryLine
from plumbfall.calibration.moments import moment_of
from plumbfall.errors import InputError, nearest_name

__all__ = ["ControlChart", "ControlPoint", "control_chart"]

Numbers = NDArray[np.float64]

WEIGHT = 0.2
"""Weight of the newest point in the moving average (common practice, no source)."""

FEWEST = 2
PROVISIONAL = 20
"""Points below which limits are provisional (common practice, no source)."""


@dataclass(frozen=True, slots=True)
class ControlPoint:
    """One check: its bias and standard uncertainty in percent, and what it signals.

    ``moving_range`` is its distance from the point before, ``None`` for the first; ``average`` is
    the moving average with this point, between ``average_low`` and ``average_high`` in control.
    """

    when: str
    run_set: str
    reference: str
    value: float
    u: float | None
    decision: str
    moving_range: float | None
    average: float
    average_low: float
    average_high: float
    signals: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class ControlChart:
    """Points in order of time with the limits of a bench in control, in percent.

    The limits come from the first ``baseline`` points. ``drift`` is in percent a day, or a point
    where all points are of one moment; ``None`` with fewer than three. ``left_out`` counts checks
    without a bias.
    """

    points: tuple[ControlPoint, ...]
    limits: Individuals
    baseline: int
    weight: float
    drift: Drift | None
    drift_by: str
    references: tuple[str, ...]
    left_out: int = 0

    @property
    def centre(self) -> float:
        """Mean of the baseline's points."""
        return self.limits.centre

    @property
    def warning(self) -> tuple[float, float]:
        """Two standard deviations either way."""
        return self.limits.limits(WARNING)

    @property
    def action(self) -> tuple[float, float]:
        """Three standard deviations either way."""
        return self.limits.limits(ACTION)

    @property
    def out_of_control(self) -> bool:
        """Whether any point signals."""
        return any(point.signals for point in self.points)

    @property
    def provisional(self) -> bool:
        """Whether the limits rest on few points."""
        return self.baseline < PROVISIONAL


def control_chart(
    lines: Sequence[HistoryLine],
    *,
    reference: str | None = None,
    baseline: int | None = None,
    path: str = "",
) -> ControlChart:
    """Make the chart of a history.

    Parameters
    ----------
    lines : sequence of HistoryLine
        Checks; put in order of their time.
    reference : str, optional
        Chart the checks of this reference liquid alone.
    baseline : int, optional
        Take the limits from the first so many points, made while the bench was known to be in
        order; from all of them where not given.
    path : str
        The file, for messages.

    Returns
    -------
    ControlChart
        Limits, points with their signals, and the drift.

    Raises
    ------
    InputError
        With fewer than two points, or an unknown reference.

    References
    ----------
    ISO 7870-2 (single values and moving range, tests); ISO 7870-6 (moving average).
    """
    known = tuple(dict.fromkeys(line.reference for line in lines))
    if reference is not None and reference not in known:
        near = nearest_name(reference, known)
        raise InputError(
            f"has no check of reference '{reference}'",
            path=path,
            remedy=f"did you mean '{near}'?" if near else f"it has {', '.join(known) or 'none'}",
        )
    mine = [line for line in lines if reference in (None, line.reference)]
    kept = _in_order([line for line in mine if line.bias_percent is not None], path)
    count = len(kept) if baseline is None else min(baseline, len(kept))
    if len(kept) < FEWEST or count < FEWEST:
        raise InputError(
            f"has {len(kept)} checks with a bias" if count == len(kept) else "baseline is below 2",
            path=path,
            remedy="a chart needs two points or more, and twenty for limits that stand",
        )
    values = np.array([line.bias_percent for line in kept], dtype=float)
    limits = individuals(values[:count])
    averages = ewma(values, weight=WEIGHT, start=limits.centre)
    low, high = ewma_limits(centre=limits.centre, sd=limits.sd, weight=WEIGHT, count=len(values))
    signals = run_signals(values, centre=limits.centre, sd=limits.sd)
    ranges = moving_ranges(values)
    rounding = ROUNDING * float(np.abs(values).max())
    points = []
    for place, line in enumerate(kept):
        drifted = not low[place] - rounding <= averages[place] <= high[place] + rounding
        point = ControlPoint(
            when=line.when,
            run_set=line.run_set,
            reference=line.reference,
            value=float(values[place]),
            u=line.u_percent,
            decision=line.decision,
            moving_range=float(ranges[place - 1]) if place else None,
            average=float(averages[place]),
            average_low=float(low[place]),
            average_high=float(high[place]),
            signals=signals[place] + (("average-beyond-limits",) if drifted else ()),
        )
        points.append(point)
    days = _days(kept)
    by_day = len(np.unique(days)) >= 3
    return ControlChart(
        points=tuple(points),
        limits=limits,
        baseline=count,
        weight=WEIGHT,
        drift=drift(days if by_day else np.arange(len(kept)), values),
        drift_by="day" if by_day else "point",
        references=tuple(dict.fromkeys(line.reference for line in kept)),
        left_out=len(mine) - len(kept),
    )


def _in_order(lines: Sequence[HistoryLine], path: str) -> list[HistoryLine]:
    """Sort by time; checks of one moment stay in the order of the file."""
    moments = [_moment(line) for line in lines]
    zones = {moment.tzinfo is not None for moment in moments}
    if len(zones) > 1:
        raise InputError(
            "some moments have a time zone and some have none, so that they have no order",
            path=path,
            remedy="write all of them with a zone, such as 2026-03-02T09:10:00+01:00, or none",
        )
    order = sorted(range(len(lines)), key=lambda place: moments[place])
    return [lines[place] for place in order]


def _days(lines: Sequence[HistoryLine]) -> Numbers:
    moments = [_moment(line) for line in lines]
    return np.array([(moment - moments[0]).total_seconds() / 86400 for moment in moments])


def _moment(line: HistoryLine) -> dt.datetime:
    moment = moment_of(line.when)
    assert moment is not None  # read_history refuses lines without one
    return moment
