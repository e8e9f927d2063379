"""Whether a tube constant is one: whether sets agree, and whether it changes along the range."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.special import stdtr, stdtrit

from plumbfall.uncertainty.coverage import effective_dof
from plumbfall.uncertainty.least_squares import fit_linear

__all__ = ["Constancy", "Trend", "constancy"]

Numbers = NDArray[np.float64]

ALIKE = 0.05
"""Relative range of a condition below which no trend along it is looked for."""

NO_LIMIT = 1e9
"""Degrees of freedom that stand for infinitely many in F and t."""


@dataclass(frozen=True, slots=True)
class Trend:
    """How ln K changes with the logarithm of a condition.

    ``slope`` is d ln K/d ln(condition) with standard uncertainty ``u``; ``change`` is that of K,
    as a ratio, from the least to the most of the condition, and ``detectable`` the least change
    that would be seen four times in five at the 5 % level.
    """

    along: str
    least: float
    most: float
    slope: float
    u: float
    dof: float
    p_value: float
    change: float
    detectable: float


@dataclass(frozen=True, slots=True)
class Constancy:
    """Tests of a constant; NaN chi-squared and no trends where one set is all there is."""

    chi_squared: float
    dof: int
    p_value: float
    trends: tuple[Trend, ...]

    @property
    def least_p_value(self) -> float:
        """The smallest p-value of all tests; 1 where there are none."""
        found = [self.p_value, *(trend.p_value for trend in self.trends)]
        return min((p for p in found if not math.isnan(p)), default=1.0)


def constancy(
    log_values: Numbers,
    covariance: Numbers,
    own_u: Numbers,
    own_dof: Numbers,
    conditions: Mapping[str, Numbers],
) -> Constancy:
    """Test whether one constant serves all sets.

    Parameters
    ----------
    log_values : array, shape (sets,)
        Logarithms of the constant by set.
    covariance : array, shape (sets, sets)
        Of the logarithms.
    own_u, own_dof : array, shape (sets,)
        Relative standard uncertainty that each set has to itself (it is in the covariance), and
        its degrees of freedom.
    conditions : mapping of str to array, shape (sets,)
        What the constant may depend on, all above zero.

    Returns
    -------
    Constancy
        Chi-squared of the generalised least squares, and a trend along each condition that varies.
        Few degrees of freedom of the scatter are allowed for: chi-squared is referred to
        Johansen's F, a slope over its uncertainty to t.
    """
    trends = tuple(
        _trend(name, log_values, covariance, own_u, own_dof, at)
        for name, at in conditions.items()
        if len(at) > 1 and at.max() > at.min() * (1 + ALIKE)
    )
    if len(log_values) < 2:
        return Constancy(math.nan, 0, math.nan, trends)
    fit = fit_linear(np.ones((len(log_values), 1)), log_values, covariance)
    return Constancy(fit.chi_squared, fit.dof, fit.p_value(own_u**2, own_dof), trends)


def _trend(
    along: str,
    log_values: Numbers,
    covariance: Numbers,
    own_u: Numbers,
    own_dof: Numbers,
    at: Numbers,
) -> Trend:
    x = np.log(at)
    fit = fit_linear(np.column_stack([np.ones(len(x)), x - x.mean()]), log_values, covariance)
    slope, u = float(fit.parameters[1]), float(fit.u[1])
    own = fit.sensitivities[1] * own_u
    dof = float(effective_dof(u=u, contributions_fourth=(own**4 / own_dof).sum()))
    finite = min(dof, NO_LIMIT)
    p = 2 * float(stdtr(finite, -abs(slope) / u)) if u > 0 else math.nan
    span = math.log(at.max() / at.min())
    seen = float(stdtrit(finite, 0.975) + stdtrit(finite, 0.8)) * u * span
    return Trend(
        along=along,
        least=float(at.min()),
        most=float(at.max()),
        slope=slope,
        u=u,
        dof=dof,
        p_value=p,
        change=math.expm1(slope * span),
        detectable=math.expm1(seen),
    )
