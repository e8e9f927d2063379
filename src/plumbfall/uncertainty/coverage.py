"""Degrees of freedom and coverage factors of the GUM (JCGM 100:2008, annex G)."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray
from scipy.special import chdtri, ndtri, stdtrit

__all__ = ["coverage_factor", "effective_dof", "joint_coverage_factor"]


def effective_dof(*, u: ArrayLike, contributions_fourth: ArrayLike) -> NDArray[np.float64]:
    """Effective degrees of freedom by Welch and Satterthwaite, not truncated.

    Parameters
    ----------
    u : array, shape (outputs,)
        Combined standard uncertainties.
    contributions_fourth : array, shape (outputs,)
        Sum of each contribution's fourth power over its degrees of freedom.

    Returns
    -------
    array, shape (outputs,) [1]
        Infinite where no contribution has finite degrees of freedom.

    References
    ----------
    JCGM 100:2008, G.4.1, formula (G.2b).
    """
    fourth = np.asarray(contributions_fourth, dtype=float)
    with np.errstate(divide="ignore", invalid="ignore"):
        return np.where(fourth > 0, np.asarray(u, dtype=float) ** 4 / fourth, np.inf)


def coverage_factor(*, dof: ArrayLike, probability: float) -> NDArray[np.float64]:
    """Student's t for a two-sided coverage probability; dof need not be whole.

    Parameters
    ----------
    dof : array [1]
        Degrees of freedom, infinite allowed.
    probability : float [1]
        Coverage probability, between 0 and 1.

    Returns
    -------
    array [1]
        Coverage factor k, the shape of ``dof``.

    References
    ----------
    JCGM 100:2008, G.3.2 and table G.2.

    Examples
    --------
    >>> f"{coverage_factor(dof=10, probability=0.95):.2f}"
    '2.23'
    """
    dof = np.asarray(dof, dtype=float)
    tail = (1 + probability) / 2
    finite = np.where(np.isfinite(dof), dof, 1.0)
    factor: NDArray[np.float64] = np.where(np.isfinite(dof), stdtrit(finite, tail), ndtri(tail))
    return factor


def joint_coverage_factor(*, outputs: int, probability: float) -> float:
    """Factor of the ellipse that holds several normal results together.

    Parameters
    ----------
    outputs : int
        How many results there are.
    probability : float [1]
        Coverage probability, between 0 and 1.

    Returns
    -------
    float [1]
        k of the region d' V^-1 d <= k^2, V being the covariance and d the distance from the values.

    References
    ----------
    JCGM 102:2011, 6.5.2.

    Examples
    --------
    >>> f"{joint_coverage_factor(outputs=2, probability=0.95):.3f}"
    '2.448'
    """
    return float(np.sqrt(chdtri(outputs, 1 - probability)))
