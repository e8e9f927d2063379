"""Coverage where part of an uncertainty is a scatter seen in two values only.

Welch and Satterthwaite's formula then holds too little: with one degree of freedom and a scatter
of two to five times everything else its 95 % intervals cover 87 %. Two values that happen to lie
together make the scatter, and with it the coverage factor, too small at once.

With u_A the scatter's contribution of nu degrees of freedom and u_B that of everything else,

    U^2 = t(nu_B)^2 u_B^2 + t(nu)^2 u_A^2 w,        w = u_A^2 / (u_A^2 + u_B^2 / 2)

is Student's interval where the scatter is all there is, and that of everything else where there
is no scatter. Its coverage, integrated over the chi-squared distribution of u_A^2, is 93.5 to
96.8 % for one degree of freedom, whatever the true proportion of the two (derived here, no
source; docs/uncertainty.md has the table and tests integrate it). From two degrees of freedom on
the formula of Welch and Satterthwaite covers 92.2 % and more, and stands.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray
from scipy.special import stdtridf

from plumbfall.uncertainty.coverage import coverage_factor, effective_dof

__all__ = ["FEW", "dof_with_few_values"]

Numbers = NDArray[np.float64]

FEW = 1.5
"""Scatter of fewer degrees of freedom than this is taken by the rule of this module."""

ROUNDING = 1e-12
"""Rounding of a variance, relative to it."""

PART = 0.5
"""Part of u_B^2 beside u_A^2 in the weight of the scatter."""


def dof_with_few_values(
    *,
    u: ArrayLike,
    dof: ArrayLike,
    scatter_u: ArrayLike,
    scatter_dof: ArrayLike,
    probability: float,
) -> Numbers:
    """Effective degrees of freedom whose Student's t gives the interval of this module.

    Parameters
    ----------
    u : array, shape (outputs,)
        Combined standard uncertainties.
    dof : array, shape (outputs,) [1]
        Their effective degrees of freedom by Welch and Satterthwaite.
    scatter_u : array, shape (outputs,)
        Contributions of the scatter, not above ``u``.
    scatter_dof : array, shape (outputs,) [1]
        Degrees of freedom of the scatter.
    probability : float [1]
        Coverage probability.

    Returns
    -------
    array, shape (outputs,) [1]
        ``dof`` itself where the scatter has enough degrees of freedom.
    """
    u, dof, part, few = (np.asarray(each, dtype=float) for each in (u, dof, scatter_u, scatter_dof))
    with np.errstate(invalid="ignore", divide="ignore"):
        few_values = (few < FEW) & (part > 0)
        rest_variance = u**2 - part**2
        # what rounding leaves of it is nothing
        rest_variance = np.where(rest_variance > ROUNDING * u**2, rest_variance, 0.0)
        rest_fourth = np.maximum(u**4 / dof - part**4 / few, 0.0)
        rest_dof = effective_dof(u=np.sqrt(rest_variance), contributions_fourth=rest_fourth)
        weight = part**2 / (part**2 + PART * rest_variance)
        # a rest without uncertainty has no degrees of freedom of its own
        rest_factor = coverage_factor(
            dof=np.where(rest_variance > 0, rest_dof, np.inf), probability=probability
        )
        factor = coverage_factor(dof=few, probability=probability)
        squared = rest_factor**2 * rest_variance + factor**2 * part**2 * weight
        # between these two a combined uncertainty of both kinds always lies
        k = np.clip(np.sqrt(squared) / u, rest_factor, np.maximum(factor, rest_factor))
        normal = coverage_factor(dof=np.inf, probability=probability)
        found = stdtridf((1 + probability) / 2, k)
    return np.where(few_values, np.where(k > normal * (1 + 1e-9), found, np.inf), dof)
