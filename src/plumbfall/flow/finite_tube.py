"""Creeping flow past a ball at any height in a tube with a solid bottom: the converged drag.

``ball_in_tube`` states and solves the problem for a given number of multipoles and end modes;
here both are raised until two results agree.
"""

from __future__ import annotations

import numpy as np

from plumbfall.flow.ball_in_tube import BallInTube
from plumbfall.flow.reflection import EndKind

__all__ = ["finite_tube_factor", "starting_order"]


def finite_tube_factor(
    *,
    diameter_ratio: float,
    height: float,
    length: float,
    top: EndKind,
    tolerance: float = 1e-7,
) -> tuple[float, float]:
    """Converged drag on a ball at any height in a tube with a solid bottom.

    Parameters
    ----------
    diameter_ratio : float [1]
        Ball diameter over bore.
    height : float [1]
        Height of the ball's centre above the bottom over bore radius.
    length : float [1]
        Height of the lid or of the free surface above the bottom over bore radius.
    top : {"solid", "free"}
        A lid, or a free surface that stays level.
    tolerance : float
        Relative change on adding half as many orders and modes again, at which to stop.

    Returns
    -------
    tuple of two floats [1]
        Drag over Stokes drag at Reynolds number 0, and the relative change at the last step.

    Raises
    ------
    ValueError
        If the ball does not fit.
    ArithmeticError
        If the orders tried do not settle the result to the tolerance.
    """
    upside_down = height > 0.5 * length
    distance = length - height if upside_down else height
    bottom: EndKind = "solid"
    end, other_end = (top, bottom) if upside_down else (bottom, top)
    if distance <= diameter_ratio:
        raise ValueError(f"a ball of radius {diameter_ratio} does not fit at height {height}")
    order, modes = starting_order(diameter_ratio=diameter_ratio, distance=distance), 16
    last, change = np.nan, np.inf
    for _ in range(5):
        ball = BallInTube(diameter_ratio=diameter_ratio, order=order, modes=modes)
        value = ball.factor(distance=distance, end=end, length=length, other_end=other_end)
        change, last = abs(value / last - 1.0), value
        if change < tolerance:
            return value, change
        order, modes = order + order // 2, modes + modes // 2
    raise ArithmeticError(
        f"drag at diameter ratio {diameter_ratio}, height {height} unsettled by {change:.1e}"
    )


def starting_order(*, diameter_ratio: float, distance: float) -> int:
    """Order of multipole for about five digits: set by the gap to the end and that to the bore.

    Parameters
    ----------
    diameter_ratio : float [1]
        Ball diameter over bore.
    distance : float [1]
        Distance of the ball's centre from the nearer end over bore radius.

    Returns
    -------
    int
        Highest order of multipole.
    """
    # the images in the end gather at exp(-arccosh(distance/radius)) of the radius from the centre
    by_end = 12.0 / np.arccosh(distance / diameter_ratio)
    by_bore = 10.0 + 14.0 * diameter_ratio / np.sqrt(1.0 - diameter_ratio)
    return int(max(by_end, by_bore))
