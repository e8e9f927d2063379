"""Whether the balls of a run set agree, and if not, whether they follow their size or the shear.

Generalised least squares of the ball means under their declared covariance. With exact balls and
nothing shared the statistic is the F of the one-way analysis of variance by ball.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from plumbfall.findings.ball_means import BallMeans, Batch
from plumbfall.findings.least_squares import weighted_squares
from plumbfall.findings.significance import FEW, f_p_value, t_p_value

__all__ = ["BallFits", "Trend", "ball_fits"]

Numbers = NDArray[np.float64]

FEWEST_BALLS = 3
"""Fewer balls than this show a difference, never a trend."""

LEAST_CONTRAST = 0.05
"""Balls whose sizes (or shear at one size) differ by less show no trend: 5 %."""

MOST_LEVERAGE = 0.95
"""A trend that hangs on one ball by more than this cannot be told from that ball being bad."""


@dataclass(frozen=True, slots=True)
class Trend:
    """Change of ln(viscosity) from the lowest to the highest value of a covariate, (run sets,).

    ``rest_p_value`` says whether the balls agree once the trend is taken off, ``explained`` what
    part of their squares it takes: where both are small, a single bad ball is likelier than a
    trend. NaN, and ``p_value`` 1, where the balls do not tell.
    """

    value: Numbers
    error: Numbers
    p_value: Numbers
    rest_p_value: Numbers
    explained: Numbers


@dataclass(frozen=True, slots=True)
class BallFits:
    """What the ball means of every run set say, arrays of shape (run sets,) unless said.

    ``f`` and ``p_value`` say whether the balls agree, with ``dof`` and ``scatter_dof`` degrees of
    freedom. ``size`` is the trend with the diameter ratio alone; ``shear`` the trend with shear
    stress and ``wall`` that with the diameter ratio where each can be told from the other
    (``separable``). ``group_variance``, of shape (groups,), is how far the declared errors set each
    ball apart from the others of its set, ``apart`` how far it is.
    """

    f: Numbers
    p_value: Numbers
    dof: NDArray[np.intp]
    scatter_dof: Numbers
    size: Trend
    shear: Trend
    wall: Trend
    separable: NDArray[np.bool_]
    group_variance: Numbers
    apart: Numbers


def ball_fits(balls: BallMeans, n_sets: int) -> BallFits:
    """Fit the ball means of every run set.

    Parameters
    ----------
    balls : BallMeans
        Ball means and what is declared of them.
    n_sets : int
        How many run sets there are.

    Returns
    -------
    BallFits
        In columns over the run sets.
    """

    def blank(value: float) -> Numbers:
        return np.full(n_sets, value)

    def trend() -> Trend:
        return Trend(blank(np.nan), blank(np.nan), blank(1.0), blank(1.0), blank(0.0))

    fits = BallFits(
        f=blank(np.nan),
        p_value=blank(1.0),
        dof=np.zeros(n_sets, dtype=np.intp),
        scatter_dof=blank(0.0),
        size=trend(),
        shear=trend(),
        wall=trend(),
        separable=np.zeros(n_sets, dtype=bool),
        group_variance=np.zeros(len(balls.value)),
        apart=np.zeros(len(balls.value)),
    )
    for batch in balls.batches():
        _fit(fits, balls, batch)
    return fits


def _fit(fits: BallFits, balls: BallMeans, batch: Batch) -> None:
    at, k = batch.run_set, batch.value.shape[1]
    declared = batch.covariance.copy()
    declared[:, np.arange(k), np.arange(k)] -= batch.scatter
    centre = np.eye(k) - 1 / k
    apart = np.diagonal(centre @ declared @ centre, axis1=1, axis2=2)
    fits.group_variance[batch.groups] = np.maximum(apart, 0.0)
    fits.apart[batch.groups] = (batch.value * k / (k - 1)) if k > 1 else batch.value
    of_scatter = (1 - 1 / k) * batch.scatter.sum(axis=1)
    with np.errstate(invalid="ignore", divide="ignore"):
        # Welch and Satterthwaite: what the bench sheet declares is taken as known
        more = ((of_scatter + apart.sum(axis=1)) / of_scatter) ** 2
        dof = np.where(batch.scatter_dof >= FEW, batch.scatter_dof * more, batch.scatter_dof)
    fits.dof[at] = k - 1
    fits.scatter_dof[at] = dof
    inverse: Numbers = np.asarray(np.linalg.inv(batch.covariance), dtype=float)
    ones = np.ones_like(batch.value)
    rest = weighted_squares(inverse, batch.value, [ones])[0]
    fits.f[at] = rest / (k - 1)
    fits.p_value[at] = f_p_value(f=fits.f[at], dof=k - 1, dof_within=dof)
    if k < FEWEST_BALLS:
        return
    with np.errstate(invalid="ignore", divide="ignore"):
        size = balls.diameter_ratio[batch.groups]  # walls act by it, nearly in proportion
        shear = np.log(balls.shear_stress[batch.groups])
    sized = _tells(size, LEAST_CONTRAST * size.mean(axis=1))
    size = size - size.mean(axis=1, keepdims=True)
    shear = shear - shear.mean(axis=1, keepdims=True)
    with np.errstate(invalid="ignore", divide="ignore"):
        # balls of one density have a stress in proportion to their size
        log_size = np.log(balls.diameter_ratio[batch.groups])
        log_size = log_size - log_size.mean(axis=1, keepdims=True)
        along = np.where(sized, (log_size * shear).sum(axis=1) / (log_size**2).sum(axis=1), 0.0)
    sheared = _tells(shear - along[:, None] * log_size, LEAST_CONTRAST)
    both = sized & sheared & (k > FEWEST_BALLS)
    fits.separable[at] = both | (sheared & ~sized)
    for trend, covariate, known, where in (
        (fits.size, size, [ones], sized),
        (fits.shear, shear, [ones, size], both),
        (fits.shear, shear, [ones], sheared & ~sized),
        (fits.wall, size, [ones, shear], both),
    ):
        part = np.flatnonzero(where)
        if not len(part):
            continue
        whole = fits.f[at[part]] * (k - 1)
        rest, value, error = weighted_squares(
            inverse[part], batch.value[part], [column[part] for column in known], covariate[part]
        )
        span, left = np.ptp(covariate[part], axis=1), k - len(known) - 1
        trend.value[at[part]], trend.error[at[part]] = value * span, error * span
        trend.p_value[at[part]] = t_p_value(t=value / error, dof=dof[part])
        trend.rest_p_value[at[part]] = f_p_value(f=rest / left, dof=left, dof_within=dof[part])
        trend.explained[at[part]] = 1 - rest / np.where(whole > 0, whole, np.inf)


def _tells(covariate: Numbers, contrast: Numbers | float) -> NDArray[np.bool_]:
    """Whether a covariate changes enough within each set, and not by one ball alone."""
    apart = (covariate - covariate.mean(axis=1, keepdims=True)) ** 2
    with np.errstate(invalid="ignore", divide="ignore"):
        leverage = 1 / covariate.shape[1] + apart.max(axis=1) / apart.sum(axis=1)
    return np.asarray((np.ptp(covariate, axis=1) >= contrast) & (leverage <= MOST_LEVERAGE))
