"""Scores of a result against a reference value (ISO 13528)."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray

__all__ = ["e_n", "z_prime_score", "z_score", "zeta_score"]

Numbers = NDArray[np.float64]


def e_n(
    *,
    value: ArrayLike,
    expanded: ArrayLike,
    reference_value: ArrayLike,
    reference_expanded: ArrayLike,
) -> Numbers:
    """Difference over the expanded uncertainty of the difference; satisfactory within 1.

    Both expanded uncertainties are of one coverage probability, and the two values must be
    independent.

    Parameters
    ----------
    value, expanded : array
        Results and their expanded uncertainties.
    reference_value, reference_expanded : array
        Reference values and theirs, in the same unit.

    Returns
    -------
    array [1]
        E_n with its sign.

    References
    ----------
    ISO 13528; ISO/IEC 17043.

    Examples
    --------
    >>> found = e_n(value=1.012, expanded=0.010, reference_value=1.0, reference_expanded=0.003)
    >>> f"{found:.4f}"
    '1.1494'
    """
    return np.asarray(
        np.subtract(value, reference_value) / np.hypot(expanded, reference_expanded), dtype=float
    )


def zeta_score(
    *, value: ArrayLike, u: ArrayLike, reference_value: ArrayLike, reference_u: ArrayLike
) -> Numbers:
    """Difference over the standard uncertainty of the difference.

    Up to 2 is satisfactory, from 2 to 3 questionable, and from 3 on unsatisfactory. The two
    values must be independent.

    Parameters
    ----------
    value, u : array
        Results and their standard uncertainties.
    reference_value, reference_u : array
        Reference values and theirs, in the same unit.

    Returns
    -------
    array [1]
        Zeta with its sign.

    References
    ----------
    ISO 13528; ISO/IEC 17043.
    """
    return np.asarray(np.subtract(value, reference_value) / np.hypot(u, reference_u), dtype=float)


def z_score(*, value: ArrayLike, assigned: ArrayLike, sd: ArrayLike) -> Numbers:
    """Difference from an assigned value over the standard deviation for the assessment.

    Parameters
    ----------
    value, assigned : array
        Results and assigned values.
    sd : array
        Standard deviation for proficiency assessment.

    Returns
    -------
    array [1]
        Read as zeta is.

    References
    ----------
    ISO 13528 (formula from memory).
    """
    return np.asarray(np.subtract(value, assigned) / sd, dtype=float)


def z_prime_score(
    *, value: ArrayLike, assigned: ArrayLike, sd: ArrayLike, assigned_u: ArrayLike
) -> Numbers:
    """Z-score that allows for the assigned value's own standard uncertainty.

    Parameters
    ----------
    value, assigned : array
        Results and assigned values.
    sd : array
        Standard deviation for proficiency assessment.
    assigned_u : array
        Standard uncertainty of the assigned values.

    Returns
    -------
    array [1]
        Read as zeta is.

    References
    ----------
    ISO 13528 (formula from memory).
    """
    return z_score(value=value, assigned=assigned, sd=np.hypot(sd, assigned_u))
