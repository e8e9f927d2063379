"""Balls that do not agree, and viscosities that follow the balls' size or the shear."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
from numpy.typing import NDArray

from plumbfall.findings.ball_fits import Trend
from plumbfall.findings.data import APART, Found, RunData
from plumbfall.findings.significance import detectable
from plumbfall.results import Finding

__all__ = ["balls_disagree", "diameter_ratio_trend", "shear_dependence"]

MOST_OF_IT = 0.9
"""A single bad ball makes a trend take at most three quarters of the squares, among equal steps."""

WITHOUT_SHEAR = "drop balls of equal diameter and different density, which tell one from the other"


def balls_disagree(data: RunData) -> Iterator[Found]:
    """Find balls whose means differ by more than their uncertainties and scatter allow."""
    fits, errors = data.ball_fits, data.errors
    explained = _found(data, fits.size) | _found(data, fits.shear) | _found(data, fits.wall)
    for run_set in np.flatnonzero((fits.p_value < data.level) & ~explained):
        groups = np.flatnonzero(errors.group_set == run_set)
        names = [data.balls[code].name for code in errors.group_ball[groups]]
        apart = fits.apart[groups]
        balls = data.balls_of_sets
        allowed = np.sqrt(fits.group_variance[groups] + balls.scatter[groups])
        worst = int(np.argmax(np.abs(apart) / np.where(allowed > 0, allowed, 1.0)))
        k = len(groups)
        if k == 2:
            low, high = names[int(np.argmin(apart))], names[int(np.argmax(apart))]
            what = f"ball {high} gives {100 * np.ptp(apart) / 2:.2f} % more than ball {low}"
            drops = np.flatnonzero(data.selection.run_set == run_set)
        else:
            what = (
                f"ball {names[worst]} gives {100 * abs(apart[worst]):.2f} % "
                f"{'more' if apart[worst] > 0 else 'less'} than the {k - 1} others together"
            )
            drops = np.flatnonzero(errors.group == groups[worst])
        effect = float(-apart[worst] / k)
        seen = detectable(
            standard_error=allowed[worst] * np.sqrt(k / (k - 1)),
            dof=fits.scatter_dof[run_set],
            level=data.level,
        )
        yield (
            int(run_set),
            Finding(
                code="balls-disagree",
                severity="warning",
                drops=data.numbers(drops),
                statistic=float(fits.f[run_set]),
                p_value=float(fits.p_value[run_set]),
                effect=effect,
                detectable=float(seen),
                message=f"{what}, more than their uncertainties and the scatter of their drops "
                f"allow (F = {fits.f[run_set]:.3g} for {fits.dof[run_set]} and "
                f"{_dof(fits.scatter_dof[run_set])} degrees of freedom); without it the viscosity "
                f"would change by {100 * effect:+.2f} %",
                remedy="clean, weigh and measure the ball again, and look whether it was taken for "
                "another one",
            ),
        )


def diameter_ratio_trend(data: RunData) -> Iterator[Found]:
    """Find viscosities that follow the balls' size, as a wrong wall correction makes them."""
    fits = data.ball_fits
    for run_set in np.flatnonzero(_found(data, fits.size) & ~fits.separable):
        yield _size_found(data, int(run_set), fits.size, separable=False)
    for run_set in np.flatnonzero(_found(data, fits.wall) & fits.separable):
        yield _size_found(data, int(run_set), fits.wall, separable=True)


def _size_found(data: RunData, run_set: int, trend: Trend, *, separable: bool) -> Found:
    groups = np.flatnonzero(data.errors.group_set == run_set)
    ratio = data.balls_of_sets.diameter_ratio[groups]
    change = float(trend.value[run_set])
    way = "rises" if change > 0 else "falls"
    if separable:
        cause = (
            "balls of other density show that it is the size and not the shear: the walls are not "
            "corrected rightly, or the balls were measured wrongly"
        )
        remedy = "check the tube's bore, the diameters and their gauge, and methods.drag"
    else:
        cause = (
            "whether the walls or the shear do it cannot be told, as the size changes both here"
            if change < 0
            else "the walls or the diameters, or a liquid that thickens with shear; which one "
            "cannot be told, as the size changes both here"
        )
        remedy = f"{WITHOUT_SHEAR}; check the bore, the diameters and their gauge"
    return (
        run_set,
        Finding(
            code="diameter-ratio-trend",
            severity="warning",
            statistic=float(trend.value[run_set] / trend.error[run_set]),
            p_value=float(trend.p_value[run_set]),
            effect=change,
            detectable=_detectable(data, trend, run_set),
            message=f"the viscosity {way} by {100 * abs(change):.2f} % "
            f"({_bounds(trend, run_set)}) from the smallest ball to the largest "
            f"(diameter ratio {ratio.min():.3g} to {ratio.max():.3g}); {cause}",
            remedy=remedy,
        ),
    )


def shear_dependence(data: RunData) -> Iterator[Found]:
    """Find viscosities that follow the shear where the balls' size cannot be what does it."""
    fits = data.ball_fits
    for run_set in np.flatnonzero(_found(data, fits.shear) & fits.separable):
        groups = np.flatnonzero(data.errors.group_set == run_set)
        stress = data.balls_of_sets.shear_stress[groups]
        change = float(fits.shear.value[run_set])
        yield (
            int(run_set),
            Finding(
                code="shear-dependence",
                severity="warning",
                statistic=float(change / fits.shear.error[run_set]),
                p_value=float(fits.shear.p_value[run_set]),
                effect=change,
                detectable=_detectable(data, fits.shear, int(run_set)),
                message=f"the viscosity {'rises' if change > 0 else 'falls'} by "
                f"{100 * abs(change):.2f} % ({_bounds(fits.shear, int(run_set))}) with the shear, "
                f"between balls of {stress.min():.3g} to {stress.max():.3g} Pa and beyond what "
                "their sizes do: the liquid is not Newtonian, or the densities of the balls are "
                "wrong; the value is an apparent viscosity",
                remedy="weigh the balls; if their densities hold, quote the viscosity with its "
                "shear rate, ball by ball",
            ),
        )


def _found(data: RunData, trend: Trend) -> NDArray[np.bool_]:
    """Whether a trend is found, and the balls agree beside it or it is nearly all there is."""
    good = (trend.rest_p_value >= APART) | (trend.explained >= MOST_OF_IT)
    return np.asarray((trend.p_value < data.level) & good)


def _bounds(trend: Trend, run_set: int) -> str:
    return f"standard uncertainty {100 * trend.error[run_set]:.2g} %"


def _detectable(data: RunData, trend: Trend, run_set: int) -> float:
    dof = data.ball_fits.scatter_dof[run_set]
    error = trend.error[run_set]
    return float(detectable(standard_error=error, dof=dof, level=data.level))


def _dof(dof: float) -> str:
    return f"{dof:.0f}" if dof < 1e4 else "very many"
