"""Ends of the liquid: the computed excess in a tube, one infinite plane, the factor of 1907."""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import NDArray

from plumbfall.errors import InputError, PhysicsRangeError, nearest_name
from plumbfall.physics.exact_ends import (
    END_EXCESS_LEAST_GAP,
    END_EXCESS_RATIO_LIMITS,
    END_EXCESS_REACH,
    end_excess_table,
)
from plumbfall.physics.numeric import Numeric
from plumbfall.physics.ranges import check_range

__all__ = ["end_excess", "end_factor_classical", "end_factor_none", "plane_factor"]

SMALLEST_GAP = 1e-6
"""Least gap under the ball, over its radius, for which the series is summed."""

LARGEST_GAP = 1e9
"""Largest distance of the centre, over the ball's radius, for which the series is summed."""

_SURFACES = ("solid", "free")
_DECAY = 45.0  # terms below exp(-45) of the first cannot change the sum
_BLOCK = 1 << 20


def plane_factor(*, gap_ratio: Numeric, surface: str = "solid") -> Numeric:
    r"""Drag on a ball moving square to one infinite plane over its Stokes drag.

    .. math::

        K = \tfrac{4}{3} \sinh\alpha \sum_{n \ge 1} \frac{n (n + 1)}{(2n - 1)(2n + 3)}
        \left[\frac{2 \sinh(2n + 1)\alpha + (2n + 1) \sinh 2\alpha}
        {4 \sinh^2(n + \tfrac12)\alpha - (2n + 1)^2 \sinh^2\alpha} - 1\right],
        \quad \cosh\alpha = h / a

    Parameters
    ----------
    gap_ratio : float or array, shape (..., drops) [1]
        Distance of the ball's centre from the plane over the ball's radius, h/a.
    surface : str
        ``"solid"`` for a bottom, ``"free"`` for a flat surface without shear; the series of the
        latter differs in the bracket.

    Returns
    -------
    float or array [1]
        Factor K, at least 1, same shape as the input.

    Raises
    ------
    PhysicsRangeError
        If the ball touches the plane, reaches through it, or is nearer than 1e-6 of its radius;
        or beyond 1e9 radii.
    InputError
        If the surface is neither of the two.

    Valid range
    -----------
    Gap ratio 1.000001 to 1e9; Reynolds number 0; no tube.

    Notes
    -----
    The exact solution, summed to rounding. Not to be multiplied with or added to a wall factor: in
    a tube an end is felt over one bore radius, not as far as here.

    References
    ----------
    [Brenner1961]

    Examples
    --------
    >>> f"{plane_factor(gap_ratio=3.7622):.4f}"
    '1.4129'
    """
    if surface not in _SURFACES:
        near = nearest_name(surface, _SURFACES)
        raise InputError(
            f"surface '{surface}' is not known",
            key="surface",
            remedy=f"{f'did you mean {near!r}? ' if near else ''}known: {', '.join(_SURFACES)}",
        )
    ratios = np.asarray(gap_ratio, dtype=np.float64)
    check_range(
        ratios,
        low=1.0 + SMALLEST_GAP,
        high=LARGEST_GAP,
        variable="gap ratio (centre distance over ball radius)",
        where="the plane's series (Brenner 1961): the ball must be clear of the plane",
    )
    # acosh(1 + gap) without cancellation, as log1p
    gap = ratios - 1.0
    alpha = np.log1p(gap + np.sqrt(gap * (gap + 2.0))).ravel()
    total = np.zeros_like(alpha)
    last = 0
    n_terms = math.ceil(_DECAY / (2.0 * float(alpha.min(initial=_DECAY)))) + 2
    block = max(8, _BLOCK // max(alpha.size, 1))
    while last < n_terms:
        n = np.arange(last + 1, min(last + block, n_terms) + 1, dtype=np.float64)[:, np.newaxis]
        total += np.sum(_plane_terms(n, alpha, surface), axis=0)
        last += block
    factor: Numeric = (4.0 / 3.0 * np.sinh(alpha) * total).reshape(ratios.shape)[()]
    return factor


def _plane_terms(
    n: NDArray[np.float64], alpha: NDArray[np.float64], surface: str
) -> NDArray[np.float64]:
    """Terms of the series, numerator and denominator scaled by exp(-(2n+1) alpha).

    The bracket less 1 is written out, so that no term is the difference of near equals.
    """
    k = 2.0 * n + 1.0
    weight = n * (n + 1.0) / ((2.0 * n - 1.0) * (2.0 * n + 3.0))
    decay = np.exp(-k * alpha)
    grown = -np.expm1(-k * alpha)
    waist = k * np.sinh(alpha)
    if surface == "solid":
        over = (2.0 * grown + k * np.sinh(2.0 * alpha) + waist**2) * decay
        root = waist * np.exp(-0.5 * k * alpha)
        under = (grown - root) * (grown + root)
    else:
        over = (2.0 * (1.0 + decay) + waist**2 + k * np.sinh(2.0 * alpha)) * decay
        under = -np.expm1(-2.0 * k * alpha) - k * np.sinh(2.0 * alpha) * decay
    terms: NDArray[np.float64] = weight * over / under
    return terms


def end_factor_none(*, distance_ratio: Numeric) -> Numeric:
    r"""End factor of marks that are clear of both ends.

    .. math:: E = 1

    Parameters
    ----------
    distance_ratio : float or array, shape (..., drops) [1]
        Distance of the nearest mark from an end over the radius of the bore.

    Returns
    -------
    float or array [1]
        Factor of the drag, 1.

    Valid range
    -----------
    Marks at least one bore radius from the bottom and from the surface.

    Notes
    -----
    An end's part of the drag decays as exp(-8.93 h/R) with the distance h in bore radii R: at one
    radius it is 0.12 % at diameter ratio 0.1, at 1.5 radii 1e-5.

    References
    ----------
    [Plumbfall]

    Examples
    --------
    >>> f"{end_factor_none(distance_ratio=1.5):.1f}"
    '1.0'
    """
    factor: Numeric = np.ones_like(distance_ratio, dtype=np.float64)[()]
    return factor


def end_excess(*, diameter_ratio: Numeric, distance: Numeric, end: str = "bottom") -> Numeric:
    r"""Excess of the drag on a ball near an end of a tube over its drag far from the ends.

    .. math:: E = K / K_0 - 1

    Parameters
    ----------
    diameter_ratio : float or array, shape (..., drops) [1]
        Ball diameter over tube bore, symbol lambda.
    distance : float or array, shape (..., drops) [1]
        Distance of the ball's centre from the end, in bore radii.
    end : str
        ``bottom``, a solid end, or ``surface``, a free surface that stays level.

    Returns
    -------
    float or array [1]
        Excess E, 0 out of an end's reach.

    Raises
    ------
    InputError
        If the end is neither.
    PhysicsRangeError
        Beyond the range.

    Valid range
    -----------
    Within 3 bore radii of the end: diameter ratio 0.01 to 0.8, a gap between ball and end of at
    least 0.01 ball radii. Beyond: any ratio below 1. Reynolds number 0, ball on the axis.

    Notes
    -----
    Dies off within a bore radius or two, not over the height of the liquid: 0.1 % at one radius for
    ratio 0.1. The table's own error is below 1e-4 of the drag.

    References
    ----------
    [Plumbfall], [Brenner1961], [Tanner1963]

    Examples
    --------
    >>> f"{end_excess(diameter_ratio=0.1, distance=0.5):.3f}"
    '0.057'
    """
    known = {"bottom": "solid", "surface": "free"}
    if end not in known:
        raise InputError(f"there is no end '{end}'", remedy=f"known: {', '.join(known)}")
    excess, _, _ = end_excess_table(diameter_ratio, distance, known[end])  # type: ignore[arg-type]  # one of two
    if np.isnan(excess).any():
        low, high = END_EXCESS_RATIO_LIMITS
        raise PhysicsRangeError(
            f"the end excess is known for diameter ratios {low:g} to {high:g} and gaps of at least "
            f"{END_EXCESS_LEAST_GAP:g} ball radii within {END_EXCESS_REACH:g} bore radii of an "
            "end; a value asked for is outside"
        )
    return excess


def end_factor_classical(*, height_ratio: Numeric) -> Numeric:
    r"""End factor of 1907, for comparison with older work.

    .. math:: E = 1 + 3.3\, a / H

    Parameters
    ----------
    height_ratio : float or array, shape (..., drops) [1]
        Height H of the liquid over the radius a of the ball.

    Returns
    -------
    float or array [1]
        Factor of the drag, above 1.

    Valid range
    -----------
    Liquid higher than the ball's radius.

    Notes
    -----
    Adds 1.65 % at diameter ratio 0.05 and a height of ten bore radii, 3.3 % at 0.1, where the true
    effect in the middle of the tube is below 1e-8.

    References
    ----------
    [Ladenburg1907]

    Examples
    --------
    >>> f"{end_factor_classical(height_ratio=100.0):.3f}"
    '1.033'
    """
    return 1.0 + 3.3 / height_ratio
