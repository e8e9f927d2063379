"""Drift through a run set, drops that follow the thermometer, and a lagging thermometer."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
from numpy.typing import NDArray

from plumbfall.findings.data import APART, Found, RunData
from plumbfall.findings.residuals import residuals
from plumbfall.findings.significance import detectable, f_p_value, t_p_value
from plumbfall.results import Finding
from plumbfall.uncertainty.coverage import coverage_factor

__all__ = ["drifting", "lagging", "temperature_lag", "temperature_trend", "time_trend", "warming"]

CONTRADICTS = 3.0
"""Standard errors by which the drops of the balls must be off a drift to speak against it."""

TELLS = 0.05
"""Significance by which one of two trends is preferred to the other; no warning comes of it."""


def time_trend(data: RunData) -> Iterator[Found]:
    """Find run sets whose viscosity rises or falls from drop to drop."""
    trends = data.trends
    for run_set in np.flatnonzero(drifting(data)):
        yield _drift(
            data,
            int(run_set),
            trends.drift.value[run_set],
            trends.drift_error[run_set],
            int(trends.drift.dof[run_set]),
            trends.drift_p_value[run_set],
            data.level / 2,  # its p-value is twice the lesser of the t-test's and the ranks'
        )
    yield from _from_ball_to_ball(data)


def _from_ball_to_ball(data: RunData) -> Iterator[Found]:
    """Find drifts that balls dropped one after the other hide: their differences look the same.

    The drift must account for all of these, and the drops of each ball must not contradict it.
    """
    by_ball = data.residuals.by_ball
    if not by_ball.any():
        return
    errors, within = data.errors, data.trends.drift
    joint = residuals(
        data.selection.run_set, errors, data.ball_fits.group_variance, np.zeros_like(by_ball)
    ).slope(data.order)
    with np.errstate(invalid="ignore", divide="ignore"):
        p_value = t_p_value(t=joint.value / joint.error, dof=joint.dof)
        f = joint.rest / joint.dof
        contradicts = np.abs(within.value - joint.value) > CONTRADICTS * within.error
    rest = f_p_value(f=f, dof=joint.dof, dof_within=errors.scatter_dof)
    found = by_ball & (p_value < data.level) & (rest >= APART) & ~contradicts & ~drifting(data)
    for run_set in np.flatnonzero(found):
        yield _drift(
            data,
            int(run_set),
            joint.value[run_set],
            joint.error[run_set],
            int(joint.dof[run_set]),
            p_value[run_set],
            data.level,
            "; the balls were dropped one after the other, and balls that differ would look the "
            "same",
            "; drop the balls in turn, which tells a drift from a ball",
        )


def _drift(
    data: RunData,
    run_set: int,
    slope: float,
    error: float,
    dof: int,
    p_value: float,
    level: float,
    but: str = "",
    also: str = "",
) -> Found:
    """Return the finding of a drift; ``slope`` and its standard error are per drop.

    ``level`` is that at which the t-test alone finds it.
    """
    steps = float(data.order[data.selection.run_set == run_set].max())
    drift, error = float(slope) * steps, float(error) * steps
    half = float(coverage_factor(dof=dof, probability=0.95)) * error
    bounds = data.outputs.of("viscosity")
    part = abs(drift) * bounds.value[run_set] / bounds.expanded[run_set]
    return (
        run_set,
        Finding(
            code="time-trend",
            severity="warning",
            statistic=drift / error,
            p_value=float(p_value),
            effect=drift,
            detectable=float(detectable(standard_error=error, dof=dof, level=level)),
            message=f"the viscosity {'rises' if drift > 0 else 'falls'} by "
            f"{100 * abs(drift):.2f} % from the first drop to the last (95 % interval "
            f"{100 * (drift - half):+.2f} to {100 * (drift + half):+.2f} %), {part:.1f} times "
            f"the expanded uncertainty{but}",
            remedy="look for evaporation, water taken up, settling or a bath that drifts; "
            f"repeat the run set with fresh liquid at a steady temperature{also}",
        ),
    )


def temperature_trend(data: RunData) -> Iterator[Found]:
    """Find run sets whose drops follow their temperatures otherwise than the slope given says."""
    trends = data.trends
    for run_set in np.flatnonzero(warming(data)):
        rest, error = float(trends.warming[run_set]), float(trends.warming_error[run_set])
        slope = float(data.warmth.slope[run_set])
        span = float(data.temperature_range[run_set])
        liquid = _liquid(data, int(run_set))
        seen = detectable(
            standard_error=error * span, dof=trends.warming_dof[run_set], level=data.level
        )
        drift = trends.drift_p_value[run_set] < data.level
        also = "; that accounts for their drift in time too" if drift else ""
        given = f"where {100 * slope:.2g} %/K is given" if slope else "and no slope is given"
        yield (
            int(run_set),
            Finding(
                code="temperature-trend",
                severity="warning",
                statistic=rest / error,
                p_value=float(trends.warming_p_value[run_set]),
                effect=rest * span,
                detectable=float(seen),
                message=f"the drops change by {100 * (slope + rest):.2g}({100 * error:.1g}) %/K "
                f"with their temperatures {given}; over the {span:.2f} K of this set that leaves "
                f"{100 * abs(rest) * span:.2f} % of viscosity uncorrected{also}",
                remedy=f"check viscosity_slope of [liquid.{liquid}], and that the thermometer "
                "stands in the liquid beside the balls' path"
                if slope
                else f"add viscosity_slope to [liquid.{liquid}], and keep the temperature steady",
            ),
        )


def temperature_lag(data: RunData) -> Iterator[Found]:
    """Find drops that follow the change of the temperature: the thermometer lags the liquid."""
    trends = data.trends
    for run_set in np.flatnonzero(lagging(data)):
        value, error = float(trends.lag.value[run_set]), float(trends.lag.error[run_set])
        slope = float(data.warmth.slope[run_set])
        at = data.selection.run_set == run_set
        change = np.ptp(data.temperature_change[at])
        late = f", some {abs(value / slope):.1f} drops late" if slope else ""
        yield (
            int(run_set),
            Finding(
                code="temperature-trend",
                severity="warning",
                statistic=value / error,
                p_value=float(trends.lag_p_value[run_set]),
                effect=value * change,
                detectable=float(
                    detectable(
                        standard_error=error * change,
                        dof=trends.lag.dof[run_set],
                        level=data.level,
                    )
                ),
                message="the drops follow how fast the temperature changes and not how high it "
                f"reads: the thermometer lags the liquid, or the liquid the bath{late}; that is "
                f"{100 * abs(value) * change:.2f} % of viscosity within this set",
                remedy="put the thermometer into the liquid beside the balls' path, and wait until "
                "it is steady before dropping",
            ),
        )


def drifting(data: RunData) -> NDArray[np.bool_]:
    """Whether drops drift with their order, and nothing else accounts for it, (run sets,)."""
    by_warmth = warming(data) & (data.trends.drift_beside >= TELLS)
    found: NDArray[np.bool_] = (data.trends.drift_p_value < data.level) & ~data.settling
    return found & ~by_warmth


def lagging(data: RunData) -> NDArray[np.bool_]:
    """Whether drops follow the change of temperature and not temperature itself, (run sets,)."""
    found: NDArray[np.bool_] = (data.trends.lag_p_value < data.level) & ~warming(data)
    return found


def warming(data: RunData) -> NDArray[np.bool_]:
    """Whether drops follow temperature, and not the time that goes with it, (run sets,)."""
    trends = data.trends
    by_time = (
        (trends.drift_p_value < data.level)
        & (trends.drift_beside < TELLS)
        & (trends.warming_beside >= TELLS)
    )
    found: NDArray[np.bool_] = (trends.warming_p_value < data.level) & ~by_time
    return found


def _liquid(data: RunData, run_set: int) -> str:
    cells = data.selection.cells
    first = np.flatnonzero(cells.run_set == run_set)[0]
    return str(data.liquids[cells.liquid[first]].name)
