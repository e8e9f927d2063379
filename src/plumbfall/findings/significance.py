"""How sure a statistical warning must be, so that all of them together stay quiet on clean sets.

Of clean sets at most one in twenty may be warned about. Grubbs' tests for one and for two
outliers keep the 1 % of ISO 5725-2 each; the other tests share ``warning_level`` (3 %) equally.
By Bonferroni's bound the chance of any false warning is then at most 1 + 1 + 3 = 5 %, however the
tests depend on each other; a test that cannot be made of a set only makes it less. Holm's steps
would gain nothing: they lower a limit only after another test has already found something.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray
from scipy.special import fdtrc, nctdtrinc, stdtr, stdtrit

from plumbfall.findings.limits import Limits

__all__ = ["FEW", "POWER", "TESTS", "detectable", "f_p_value", "level_of_each", "t_p_value"]

TESTS = (
    "time-trend",
    "temperature-trend",
    "temperature-lag",
    "not-equilibrated",
    "intervals-disagree",
    "balls-disagree",
    "shear-dependence",
    "diameter-ratio-trend",
    "swapped-ball-suspected",
    "scatter-small",
    "scatter-large",
    "minutes-as-decimals-suspected",
    "slope-unknown",
    "resolution-coarse",
    "duplicate-rows",
)
"""Tests that share ``warning_level``. A detector that judges by a p-value stands here once."""

FEW = 4
"""With fewer degrees of freedom the formula of Welch and Satterthwaite is not applied.

It would trust a scatter that is small by chance.
"""

POWER = 0.80
"""A detectable effect is one that is found this often (common practice, no source)."""


def level_of_each(limits: Limits) -> float:
    """Significance that each of the tests in :data:`TESTS` warns at.

    Examples
    --------
    >>> print(f"{len(TESTS) * level_of_each(Limits()):.2f}")
    0.03
    """
    return limits.warning_level / len(TESTS)


def t_p_value(*, t: ArrayLike, dof: ArrayLike) -> NDArray[np.float64]:
    """Two-sided probability of a Student t at least as far from 0; 1 where there is no dof."""
    t, dof = np.asarray(t, dtype=float), np.asarray(dof, dtype=float)
    with np.errstate(invalid="ignore"):
        p_value = 2 * stdtr(np.maximum(dof, 1e-300), -np.abs(t))
    return np.where((dof > 0) & ~np.isnan(t), p_value, 1.0)


def f_p_value(*, f: ArrayLike, dof: ArrayLike, dof_within: ArrayLike) -> NDArray[np.float64]:
    """Probability of a Fisher F at least as large; 1 where there is no dof."""
    f, dof, within = (np.asarray(x, dtype=float) for x in (f, dof, dof_within))
    able = (dof > 0) & (within > 0) & ~np.isnan(f)
    with np.errstate(invalid="ignore"):
        # the limit of many degrees of freedom; the special function has none at infinity
        p_value = fdtrc(np.maximum(dof, 1), np.clip(within, 1e-3, 1e8), np.maximum(f, 0.0))
    return np.where(able, p_value, 1.0)


def detectable(
    *, standard_error: ArrayLike, dof: ArrayLike, level: float, power: float = POWER
) -> NDArray[np.float64]:
    """Smallest effect that a two-sided t-test finds so often; NaN where it cannot be made.

    Parameters
    ----------
    standard_error : array
        Of the effect, in any unit.
    dof : array
        Degrees of freedom of the standard error.
    level : float
        Significance of the test.
    power : float
        How often the effect is to be found.

    Returns
    -------
    array
        The noncentrality that gives the power times the standard error, in the unit of the
        effect; NaN where there are no degrees of freedom. Some 10 us each.

    References
    ----------
    Power of the two-sided t-test by the noncentral t distribution (any text on sample sizes).

    Examples
    --------
    A drift over ten drops, end to end, in standard deviations of one drop:

    >>> print(f"{detectable(standard_error=9 / 82.5**0.5, dof=8, level=0.05):.1f}")
    3.2
    """
    dof = np.asarray(dof, dtype=float)
    able = np.where(dof > 0, np.minimum(dof, 1e7), np.nan)
    reach = nctdtrinc(able, 1 - power, stdtrit(able, 1 - level / 2))
    result: NDArray[np.float64] = reach * np.asarray(standard_error, dtype=float)
    return result
