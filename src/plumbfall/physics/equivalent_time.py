"""The time that another ball would take in the same liquid and tube."""

from __future__ import annotations

from plumbfall.physics.factors import wall_factor
from plumbfall.physics.numeric import Numeric

__all__ = ["equivalent_time"]


def equivalent_time(
    *,
    fall_time: Numeric,
    ball_diameter: Numeric,
    ball_density: Numeric,
    other_ball_diameter: Numeric,
    other_ball_density: Numeric,
    liquid_density: Numeric,
    tube_bore: Numeric,
    method: str = "exact",
) -> Numeric:
    r"""Time of another ball over the same distance, from that of the ball that was dropped.

    .. math:: t_2 = t_1 \frac{(\rho_1 - \rho_f)\, d_1^2 / K_1}{(\rho_2 - \rho_f)\, d_2^2 / K_2}

    Parameters
    ----------
    fall_time : float or array, shape (..., drops) [s]
        Time t1 of the ball that was dropped.
    ball_diameter : float or array, shape (..., drops) [m]
        Its diameter d1.
    ball_density : float or array, shape (..., drops) [kg/m3]
        Its density rho1.
    other_ball_diameter : float or array, shape (..., drops) [m]
        Diameter d2 of the other ball.
    other_ball_density : float or array, shape (..., drops) [kg/m3]
        Its density rho2.
    liquid_density : float or array, shape (..., drops) [kg/m3]
        Density of the liquid.
    tube_bore : float or array, shape (..., drops) [m]
        Bore of the tube, the same for both.
    method : str
        Law of the wall factor K, as for :func:`plumbfall.physics.wall_factor`.

    Returns
    -------
    float or array [s]
        Time t2 of the other ball.

    Valid range
    -----------
    Both balls denser than the liquid and within the range of the wall factor, and both Reynolds
    numbers far below 1: inertia, which slows each ball by some 3/16 of its Reynolds number, is
    left out.

    Notes
    -----
    Where commerce quotes seconds with a ball of 2.38 mm (3/32 in), times of other balls are
    converted to it by this; walls are the larger part of it for balls of different size.

    References
    ----------
    [ASTMD1343]

    Examples
    --------
    >>> seconds = equivalent_time(
    ...     fall_time=20.0, ball_diameter=3.175e-3, ball_density=7900.0,
    ...     other_ball_diameter=2.381e-3, other_ball_density=7900.0, liquid_density=900.0,
    ...     tube_bore=25.0e-3,
    ... )
    >>> f"{seconds:.2f}"
    '32.71'
    """
    first = (ball_density - liquid_density) * ball_diameter**2
    first = first / wall_factor(diameter_ratio=ball_diameter / tube_bore, method=method)
    other = (other_ball_density - liquid_density) * other_ball_diameter**2
    other = other / wall_factor(diameter_ratio=other_ball_diameter / tube_bore, method=method)
    time: Numeric = fall_time * first / other
    return time
