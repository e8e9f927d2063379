"""Run-in: how far a ball falls from rest before its speed is steady."""

from __future__ import annotations

import numpy as np
from scipy.special import wofz

from plumbfall.physics.numeric import Numeric
from plumbfall.physics.ranges import check_range

__all__ = [
    "creeping_start_speed_ratio",
    "relaxation_time",
    "run_in_distance",
    "run_in_guard_distance",
]

_GUARD_DIAMETERS = 25.0 / 3.0
_GUARD_REYNOLDS = (5.0, 30.0)


def relaxation_time(
    *,
    ball_diameter: Numeric,
    ball_density: Numeric,
    liquid_density: Numeric,
    viscosity: Numeric,
    drag_factor: Numeric = 1.0,
) -> Numeric:
    r"""Time in which a ball's speed approaches its steady value, the liquid's own start left out.

    .. math:: \tau = \frac{m + m_f / 2}{3 \pi \eta d K}
        = \frac{(\rho_b + \rho_f / 2)\, d^2}{18\, \eta K}

    Parameters
    ----------
    ball_diameter : float or array, shape (..., drops) [m]
        Diameter d.
    ball_density : float or array, shape (..., drops) [kg/m3]
        Density of the ball; its mass is m.
    liquid_density : float or array, shape (..., drops) [kg/m3]
        Density of the liquid; half the displaced mass m_f moves with the ball.
    viscosity : float or array, shape (..., drops) [Pa.s]
        Viscosity of the liquid.
    drag_factor : float or array, shape (..., drops) [1]
        Drag over Stokes' drag, K.

    Returns
    -------
    float or array [s]
        Relaxation time.

    Valid range
    -----------
    Release from rest, fully submerged, in quiet liquid.

    Notes
    -----
    The vortex layer round the starting ball lengthens the run-in, by some times where the liquid
    is thick: see :func:`run_in_guard_distance`.

    References
    ----------
    [Clift1978]

    Examples
    --------
    >>> value = relaxation_time(
    ...     ball_diameter=2e-3, ball_density=7800.0, liquid_density=970.0, viscosity=1.0
    ... )
    >>> f"{value * 1e3:.2f}"
    '1.84'
    """
    moved_density = ball_density + 0.5 * liquid_density
    return moved_density * ball_diameter**2 / (18.0 * viscosity * drag_factor)


def run_in_distance(
    *, fall_speed: Numeric, relaxation_time: Numeric, fraction: float = 0.99
) -> Numeric:
    r"""Distance fallen from rest until a fraction of the steady speed, by a simple exponential.

    .. math:: x_f = v \tau \left[\ln\frac{1}{1 - f} - f\right]

    Parameters
    ----------
    fall_speed : float or array, shape (..., drops) [m/s]
        Steady speed v.
    relaxation_time : float or array, shape (..., drops) [s]
        Relaxation time tau.
    fraction : float [1]
        Fraction f of the steady speed, such as 0.99 or 0.999.

    Returns
    -------
    float or array [m]
        Distance below the point of release.

    Valid range
    -----------
    Fraction from 0 to below 1; release from rest, fully submerged.

    Notes
    -----
    3.615 v tau to 99 %, 5.909 v tau to 99.9 %. Too short in thick liquids (0.13 mm against an
    exact 0.90 mm to 99.9 % for 2 mm steel in 1 Pa.s), where both are nothing.

    References
    ----------
    [Clift1978]

    Examples
    --------
    >>> f"{run_in_distance(fall_speed=1.0, relaxation_time=1.0):.3f}"
    '3.615'
    >>> f"{run_in_distance(fall_speed=1.0, relaxation_time=1.0, fraction=0.999):.3f}"
    '5.909'
    """
    return fall_speed * relaxation_time * (-float(np.log1p(-fraction)) - fraction)


def run_in_guard_distance(
    *,
    ball_diameter: Numeric,
    tube_bore: Numeric,
    fall_speed: Numeric,
    liquid_density: Numeric,
    viscosity: Numeric,
) -> Numeric:
    r"""Distance above the first mark below which a release may bias a 0.2 % result.

    .. math:: y = \min\left(\frac{v R^2}{4 \nu},\; \frac{25}{3} d \right),
        \quad \text{the second for } 5 \le Re \le 30

    Parameters
    ----------
    ball_diameter : float or array, shape (..., drops) [m]
        Diameter d.
    tube_bore : float or array, shape (..., drops) [m]
        Bore, 2R.
    fall_speed : float or array, shape (..., drops) [m/s]
        Steady speed v.
    liquid_density : float or array, shape (..., drops) [kg/m3]
        Density of the liquid.
    viscosity : float or array, shape (..., drops) [Pa.s]
        Viscosity of the liquid; over the density it is nu.

    Returns
    -------
    float or array [m]
        Distance from release to first mark that is enough.

    Raises
    ------
    PhysicsRangeError
        If a Reynolds number is beyond 30, up to which the rule was derived.

    Valid range
    -----------
    Reynolds number 0 to 30; release from rest, fully submerged.

    Notes
    -----
    Walls end the start-up by diffusion over the bore, inertia by carrying the wake away; the
    quicker of the two rules. A rule of thumb from computed starts: 0.2 % after 20 mm for 3 mm
    steel at Reynolds number 6.8.

    References
    ----------
    [Plumbfall]

    Examples
    --------
    >>> value = run_in_guard_distance(
    ...     ball_diameter=2e-3,
    ...     tube_bore=40e-3,
    ...     fall_speed=13e-3,
    ...     liquid_density=970.0,
    ...     viscosity=1.0,
    ... )
    >>> f"{value * 1e3:.2f}"
    '1.26'
    """
    low, high = _GUARD_REYNOLDS
    kinematic_speed = fall_speed * liquid_density / viscosity
    reynolds = kinematic_speed * ball_diameter
    check_range(
        reynolds,
        low=0.0,
        high=high,
        variable="Reynolds number",
        where="the run-in rule of thumb",
    )
    by_walls = kinematic_speed * (0.5 * tube_bore) ** 2 / 4.0
    by_inertia = np.where(reynolds >= low, _GUARD_DIAMETERS * ball_diameter, np.inf)
    distance: Numeric = np.minimum(by_walls, by_inertia)[()]
    return distance


def creeping_start_speed_ratio(
    *,
    time: Numeric,
    ball_diameter: Numeric,
    ball_density: Numeric,
    liquid_density: Numeric,
    viscosity: Numeric,
) -> Numeric:
    r"""Speed over steady speed of a ball released from rest in unbounded creeping flow.

    .. math::

        \frac{v}{v_t} = \frac{1}{c} \frac{\operatorname{Im} g(p)}{\operatorname{Im} p}, \quad
        g(p) = \frac{w(-i p \sqrt{s}) - 1}{p}, \quad c\, p^2 + p + 1 = 0, \quad
        c = \tfrac{2}{9}\left(\frac{\rho_b}{\rho_f} + \tfrac12\right), \quad s = \frac{4 \nu t}{d^2}

    Parameters
    ----------
    time : float or array, shape (..., drops) [s]
        Time since the release.
    ball_diameter : float or array, shape (..., drops) [m]
        Diameter d.
    ball_density : float or array, shape (..., drops) [kg/m3]
        Density of the ball.
    liquid_density : float or array, shape (..., drops) [kg/m3]
        Density of the liquid.
    viscosity : float or array, shape (..., drops) [Pa.s]
        Viscosity of the liquid.

    Returns
    -------
    float or array [1]
        Speed over its value long after the release.

    Valid range
    -----------
    Ball denser than 0.625 of the liquid; Reynolds number 0; no walls.

    Notes
    -----
    The history force in closed form, with w the Faddeeva function. Its slow tail, 1/sqrt(t), is
    cut short by walls and by inertia: in a tube it overstates the run-in many times.

    References
    ----------
    [Boggio1907], [Clift1978]

    Examples
    --------
    >>> value = creeping_start_speed_ratio(
    ...     time=1e-3, ball_diameter=2e-3, ball_density=8040.0, liquid_density=1000.0, viscosity=1.0
    ... )
    >>> f"{1.0 - value:.3f}"
    '0.695'
    """
    c = 2.0 / 9.0 * (ball_density / liquid_density + 0.5)
    s = 4.0 * viscosity / liquid_density * time / ball_diameter**2
    p = (-1.0 + 1j * np.sqrt(4.0 * c - 1.0)) / (2.0 * c)
    g = (wofz(-1j * p * np.sqrt(s)) - 1.0) / p
    ratio: Numeric = np.imag(g) / np.imag(p) / c
    return ratio
