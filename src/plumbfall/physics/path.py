"""The mean of the end excess over a ball's path between two marks.

A ball's time between marks is the integral of dz/v, and its speed goes as 1/(1 + E), so that the
mean of E over the path is what counts, not E in the middle.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

import numpy as np
from numpy.typing import NDArray

from plumbfall.physics.exact import creeping_wall_factor
from plumbfall.physics.exact_ends import (
    END_EXCESS_RATIO_LIMITS,
    END_EXCESS_REACH,
    end_excess_table,
)

__all__ = ["PathExcess", "path_excess"]

Numbers = NDArray[np.float64]

NODES, WEIGHTS = np.polynomial.legendre.leggauss(40)
"""Quadrature over the reach of an end; 40 nodes agree with 400 to 1e-12 of the mean."""

GAP = 1e-12
"""Keeps the logarithm of a gap that is not there; the look-up then answers NaN."""


@dataclass(frozen=True, slots=True)
class PathExcess:
    """Mean excess over a path, and its derivatives.

    ``by_ratio`` is with respect to ln(diameter ratio) at a given bore, ``by_bore`` to ln(bore) at
    a given ratio, ``by_distance`` to the distance from the end [1/m]. ``at_far_mark`` is the excess
    where the path ends.
    """

    mean: Numbers
    by_ratio: Numbers
    by_bore: Numbers
    by_distance: Numbers
    at_far_mark: Numbers


def path_excess(
    ratio: Numbers,
    distance: Numbers,
    length: Numbers,
    radius: Numbers,
    end: Literal["solid", "free"],
) -> PathExcess:
    """Average one end's excess over a path that starts at a distance from it.

    Parameters
    ----------
    ratio : array [1]
        Ball diameter over tube bore.
    distance : array [m]
        Distance of the path's near end from the end of the tube, infinite where there is none.
    length : array [m]
        Length of the path.
    radius : array [m]
        Bore radius.
    end : {"solid", "free"}
        What the end is.

    Returns
    -------
    PathExcess
        Mean and derivatives, arrays that broadcast; NaN where the excess cannot be had.
    """
    start, whole = distance / radius, length / radius
    near = np.minimum(start, END_EXCESS_REACH)
    far = np.minimum(start + whole, END_EXCESS_REACH)
    felt = (far > near) | ~((ratio >= 0.0) & (ratio < 1.0) & (whole > 0.0))
    if not felt.all():  # nothing is felt of an end out of reach, and nothing need be worked out
        return _where_felt(ratio, distance, length, radius, end, felt)
    # equal steps of ln(gap): near contact the excess goes as the gap's inverse
    gap = np.maximum(near - ratio, GAP)
    half = np.log(np.maximum(far - ratio, GAP) / gap) / 2
    gaps = gap * np.exp(half * (1 + NODES[:, None]))
    places = ratio + gaps
    excess, _, of_ratio = _excess(ratio, places, end)
    within = far > near
    share = np.where(within, half, 0.0) / whole
    mean = share * (WEIGHTS @ np.where(within, gaps * excess, 0.0))
    by_ratio = share * (WEIGHTS @ np.where(within, gaps * of_ratio, 0.0)) * ratio
    at_near, _, _ = _excess(ratio, np.where(within, near, END_EXCESS_REACH), end)
    at_far, _, _ = _excess(ratio, far, end)
    by_distance = (at_far - at_near) / length
    reach = np.where(within, start, 0.0)  # an end out of reach may be infinitely far
    by_bore = mean - (at_far * (reach + whole) - at_near * reach) / whole
    return PathExcess(mean, by_ratio, by_bore, by_distance, at_far)


def _where_felt(
    ratio: Numbers,
    distance: Numbers,
    length: Numbers,
    radius: Numbers,
    end: Literal["solid", "free"],
    felt: NDArray[np.bool_],
) -> PathExcess:
    """Average over the paths of which some may be within reach; all is 0 on the others."""
    found = np.zeros((5, *felt.shape))
    if felt.any():
        near, space, way, bore = (
            np.broadcast_to(part, felt.shape)[felt] for part in (ratio, distance, length, radius)
        )
        there = path_excess(near, space, way, bore, end)
        found[:, felt] = (
            there.mean,
            there.by_ratio,
            there.by_bore,
            there.by_distance,
            there.at_far_mark,
        )
    return PathExcess(*found)


def _excess(
    ratio: Numbers, places: Numbers, end: Literal["solid", "free"]
) -> tuple[Numbers, Numbers, Numbers]:
    """Excess of the table; below its least ratio that of a small ball.

    A small ball's drag in a given place is 1 / (1 - C ratio) times its Stokes drag (Faxén 1922 in a
    tube, Lorentz 1907 near a plane). C is read where the table ends.
    """
    least = END_EXCESS_RATIO_LIMITS[0]
    small = ratio < least
    found = end_excess_table(np.where(small, least, ratio), places, end)
    excess, of_place, of_ratio = (np.asarray(part) for part in found)
    if not small.any():
        return excess, of_place, of_ratio
    edge_wall = float(creeping_wall_factor(least)[0])
    wall, wall_slope = creeping_wall_factor(np.where(small, ratio, least))
    edge = edge_wall * (1.0 + excess)
    coefficient = (1.0 - 1.0 / edge) / least
    factor = 1.0 / (1.0 - coefficient * np.minimum(ratio, least))
    share = factor / wall
    by_place = share * factor * ratio * of_place * edge_wall / (edge**2 * least)
    by_ratio = share * (factor * coefficient - wall_slope / np.where(small, ratio, least))
    return (
        np.where(small, share - 1.0, excess),
        np.where(small, by_place, of_place),
        np.where(small, by_ratio, of_ratio),
    )
