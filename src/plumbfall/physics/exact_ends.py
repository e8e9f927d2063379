"""Look-up of the end excess: what a nearby end of the tube adds to the drag on a ball."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache
from typing import Literal

import numpy as np
from numpy.polynomial import chebyshev
from numpy.typing import NDArray

from plumbfall.physics.numeric import Numeric
from plumbfall.physics.tables import shipped_table

__all__ = [
    "END_EXCESS_LEAST_GAP",
    "END_EXCESS_RATIO_LIMITS",
    "END_EXCESS_REACH",
    "end_excess_table",
]

Array = NDArray[np.float64]

END_EXCESS_RATIO_LIMITS = (0.01, 0.8)
"""Diameter ratios between which the end excess is known within the reach of an end."""

END_EXCESS_LEAST_GAP = 0.01
"""Least gap between ball and end, in ball radii, for which the end excess is known."""

END_EXCESS_REACH = 3.0
"""Distance in bore radii at which an end is no longer felt: the excess is below 1e-9 there."""

_BLOCK = 4096  # points at a time, so that the work stays in the processor's cache


@dataclass(frozen=True)
class _Series:
    """Chebyshev series of T in place u and log odds v of the ratio, both from -1 to 1.

    ln(1 + E) = T (ratio/distance) exp(-decay (distance - ratio)): near the end T is of the order
    of the lubrication logarithm, far from it an oscillation of bounded size.
    """

    coefficients: Array
    slopes_in_place: Array
    slopes_in_ratio: Array
    stretch: float
    decay: float

    def __call__(self, place: Array, ratio: Array) -> tuple[Array, Array, Array]:
        in_place = chebyshev.chebvander(place, self.coefficients.shape[0] - 1)
        in_ratio = chebyshev.chebvander(ratio, self.coefficients.shape[1] - 1)
        across = in_place @ self.coefficients
        return (
            np.einsum("ij,ij->i", across, in_ratio),
            np.einsum("ij,ij->i", in_place[:, :-1] @ self.slopes_in_place, in_ratio),
            np.einsum("ij,ij->i", in_place @ self.slopes_in_ratio, in_ratio[:, :-1]),
        )


@cache
def _series(end: Literal["solid", "free"]) -> _Series:
    table = shipped_table("end_excess")
    ratio, distance = table.arrays["diameter_ratio"][:, None], table.arrays["distance"]
    stretch, decay = (float(str(table.about[key])) for key in ("stretch", "decay"))
    exponent = np.log1p(table.arrays[f"excess_{end}"])
    values = exponent * (distance / ratio) * np.exp(decay * (distance - ratio))
    places, _ = _places(ratio, distance, stretch)
    # the places are the same Chebyshev points for every ratio
    along = chebyshev.chebfit(places[0], values.T, distance.shape[1] - 1)
    log_odds, _ = _log_odds(ratio[:, 0])
    coefficients: Array = np.asarray(
        chebyshev.chebfit(log_odds, along.T, ratio.size - 1).T, dtype=np.float64
    )
    return _Series(
        coefficients=coefficients,
        slopes_in_place=np.asarray(chebyshev.chebder(coefficients, axis=0), dtype=np.float64),
        slopes_in_ratio=np.asarray(chebyshev.chebder(coefficients, axis=1), dtype=np.float64),
        stretch=stretch,
        decay=decay,
    )


def _log_odds(ratio: Array) -> tuple[Array, Array]:
    """Variable v from -1 to 1, and its slope."""
    low, high = (np.log(limit / (1.0 - limit)) for limit in END_EXCESS_RATIO_LIMITS)
    scale = 2.0 / (high - low)
    odds = ratio / (1.0 - ratio)
    return scale * (np.log(odds) - low) - 1.0, scale / (ratio * (1.0 - ratio))


def _places(ratio: Array, distance: Array, stretch: float) -> tuple[Array, tuple[Array, Array]]:
    """Variable u from -1 to 1, and its slopes in distance and in ratio."""
    gap, farthest = distance - ratio, END_EXCESS_REACH - ratio
    least = np.log(END_EXCESS_LEAST_GAP) + stretch * END_EXCESS_LEAST_GAP * ratio
    span = np.log(farthest / ratio) + stretch * farthest - least
    share = (np.log(gap / ratio) + stretch * gap - least) / span
    of_distance = (1.0 / gap + stretch) / span
    least_slope = stretch * END_EXCESS_LEAST_GAP
    span_slope = -1.0 / farthest - 1.0 / ratio - stretch - least_slope
    of_ratio = (-1.0 / gap - 1.0 / ratio - stretch - least_slope - share * span_slope) / span
    return 2.0 * share - 1.0, (2.0 * of_distance, 2.0 * of_ratio)


def _inside(series: _Series, ratio: Array, distance: Array) -> tuple[Array, Array, Array]:
    place, (place_of_distance, place_of_ratio) = _places(ratio, distance, series.stretch)
    log_odds, odds_of_ratio = _log_odds(ratio)
    value, in_place, in_odds = series(place, log_odds)
    scale = ratio / distance * np.exp(-series.decay * (distance - ratio))
    exponent = value * scale
    of_distance = in_place * place_of_distance * scale - exponent * (1 / distance + series.decay)
    of_ratio = (in_place * place_of_ratio + in_odds * odds_of_ratio) * scale
    of_ratio += exponent * (1 / ratio + series.decay)
    excess = np.expm1(exponent)
    return excess, (1.0 + excess) * of_distance, (1.0 + excess) * of_ratio


def end_excess_table(
    diameter_ratio: Numeric, distance: Numeric, end: Literal["solid", "free"]
) -> tuple[Numeric, Numeric, Numeric]:
    r"""Excess of the drag on a ball near an end of a long tube, at Reynolds number 0.

    .. math:: E = K/K_0 - 1

    Parameters
    ----------
    diameter_ratio : float or array, shape (..., drops) [1]
        Ball diameter over tube bore.
    distance : float or array, shape (..., drops) [1]
        Distance of the ball's centre from the end over the bore radius.
    end : {"solid", "free"}
        Solid bottom or lid, or a free surface that stays level.

    Returns
    -------
    tuple of three floats or arrays [1]
        Excess E, dE/d(distance), dE/d(diameter ratio). All are 0 beyond the reach of the end,
        3 bore radii, and NaN beyond the limits.

    Valid range
    -----------
    Within the reach: diameter ratio 0.01 to 0.8, gap between ball and end at least 0.01 ball
    radii. Beyond the reach: any ratio below 1. Ball on the axis; the other end out of reach.

    Raises
    ------
    ValueError
        If the end is neither solid nor free.

    Notes
    -----
    Interpolates the table of ``plumbfall.flow.end_excess`` to 1e-4 of the drag. Near
    a free surface the excess swings about 0 as it dies away, beyond about one bore radius.

    References
    ----------
    [Brenner1961], [Tanner1963]

    Examples
    --------
    >>> excess, _, _ = end_excess_table(0.1, 1.0, "solid")
    >>> f"{excess:.5f}"
    '0.00116'
    """
    if end not in ("solid", "free"):
        raise ValueError(f"end is {end!r}, expected 'solid' or 'free'")
    ratio, place = np.broadcast_arrays(
        np.asarray(diameter_ratio, dtype=float), np.asarray(distance, dtype=float)
    )
    shape = ratio.shape
    ratio, place = ratio.ravel(), place.ravel()
    low, high = END_EXCESS_RATIO_LIMITS
    near = (ratio >= low) & (ratio <= high) & (place < END_EXCESS_REACH)
    near &= place >= ratio * (1.0 + END_EXCESS_LEAST_GAP * (1.0 - 1e-9))
    far = (ratio >= 0.0) & (ratio < 1.0) & (place >= END_EXCESS_REACH)
    found = np.where(far, 0.0, np.nan) * np.ones((3, 1))
    inside = np.flatnonzero(near)
    series = _series(end)
    for start in range(0, inside.size, _BLOCK):
        part = inside[start : start + _BLOCK]
        found[:, part] = _inside(series, ratio[part], place[part])
    if not shape:
        return float(found[0, 0]), float(found[1, 0]), float(found[2, 0])
    excess, of_distance, of_ratio = found.reshape(3, *shape)
    return excess, of_distance, of_ratio
