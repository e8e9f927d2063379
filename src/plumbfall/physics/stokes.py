"""Stokes' law inverted, and the numbers that go with it."""

from __future__ import annotations

import math

from plumbfall.physics.numeric import Numeric

__all__ = [
    "drag_coefficient",
    "reynolds_number",
    "shear_rate",
    "shear_stress",
    "stokes_viscosity",
    "stokes_viscosity_of_weight",
]


def stokes_viscosity(
    *,
    ball_diameter: Numeric,
    ball_density: Numeric,
    liquid_density: Numeric,
    fall_speed: Numeric,
    gravity: Numeric,
) -> Numeric:
    r"""Viscosity by Stokes' law alone: no walls, no inertia, no ends, no run-in.

    .. math:: \eta = (\rho_b - \rho_f)\, g\, d^2 / (18 v)

    Parameters
    ----------
    ball_diameter : float or array, shape (..., drops) [m]
        Diameter d.
    ball_density : float or array, shape (..., drops) [kg/m3]
        Density of the ball.
    liquid_density : float or array, shape (..., drops) [kg/m3]
        Density of the liquid at the temperature of the drop.
    fall_speed : float or array, shape (..., drops) [m/s]
        Speed v of the ball.
    gravity : float or array, shape (..., drops) [m/s2]
        Local acceleration of free fall, along the tube.

    Returns
    -------
    float or array [Pa.s]
        Viscosity.

    Valid range
    -----------
    Unbounded liquid, Reynolds number 0.

    Notes
    -----
    Reads high wherever walls or inertia act: in a tube by 12 % at diameter ratio 0.05 and 26 % at
    0.1; unbounded by 1.7 % at Reynolds number 0.1 and 14 % at 1.

    References
    ----------
    [Stokes1851]

    Examples
    --------
    >>> value = stokes_viscosity(
    ...     ball_diameter=2e-3, ball_density=7700.0, liquid_density=970.0,
    ...     fall_speed=0.0147, gravity=9.81
    ... )
    >>> f"{value:.4f}"
    '0.9981'
    """
    return (ball_density - liquid_density) * gravity * ball_diameter**2 / (18.0 * fall_speed)


def stokes_viscosity_of_weight(
    *, effective_weight: Numeric, ball_diameter: Numeric, fall_speed: Numeric
) -> Numeric:
    r"""Viscosity by Stokes' law from the weight less buoyancy, however that was found.

    .. math:: \eta = W / (3 \pi d v)

    Parameters
    ----------
    effective_weight : float or array, shape (..., drops) [N]
        Weight less buoyancy W.
    ball_diameter : float or array, shape (..., drops) [m]
        Diameter d.
    fall_speed : float or array, shape (..., drops) [m/s]
        Speed v of the ball.

    Returns
    -------
    float or array [Pa.s]
        Viscosity; divided by the drag factor it is the liquid's.

    Valid range
    -----------
    Unbounded liquid, Reynolds number 0.

    Notes
    -----
    As for the density form; by 12 % high at diameter ratio 0.05 if walls are left out.

    References
    ----------
    [Stokes1851]

    Examples
    --------
    >>> value = stokes_viscosity_of_weight(
    ...     effective_weight=2.7655e-4, ball_diameter=2e-3, fall_speed=0.0147
    ... )
    >>> f"{value:.4f}"
    '0.9981'
    """
    return effective_weight / (3.0 * math.pi * ball_diameter * fall_speed)


def reynolds_number(
    *, ball_diameter: Numeric, fall_speed: Numeric, liquid_density: Numeric, viscosity: Numeric
) -> Numeric:
    r"""Reynolds number of a falling ball, on its diameter.

    .. math:: Re = \rho_f v d / \eta

    Parameters
    ----------
    ball_diameter : float or array, shape (..., drops) [m]
        Diameter d.
    fall_speed : float or array, shape (..., drops) [m/s]
        Speed v of the ball.
    liquid_density : float or array, shape (..., drops) [kg/m3]
        Density of the liquid.
    viscosity : float or array, shape (..., drops) [Pa.s]
        Viscosity of the liquid.

    Returns
    -------
    float or array [1]
        Reynolds number.

    Valid range
    -----------
    A definition.

    Notes
    -----
    Some older papers use the radius and so half this number.

    References
    ----------
    [Clift1978]

    Examples
    --------
    >>> value = reynolds_number(
    ...     ball_diameter=2e-3, fall_speed=0.01, liquid_density=1000.0, viscosity=0.5
    ... )
    >>> f"{value:.3f}"
    '0.040'
    """
    return liquid_density * fall_speed * ball_diameter / viscosity


def drag_coefficient(*, inertia_factor: Numeric, reynolds: Numeric) -> Numeric:
    r"""Drag coefficient on the frontal area from the drag factor.

    .. math:: C_d = 24\, K / Re

    Parameters
    ----------
    inertia_factor : float or array, shape (..., drops) [1]
        Drag over Stokes' drag, K (unbounded: the inertia factor).
    reynolds : float or array, shape (..., drops) [1]
        Reynolds number on the diameter.

    Returns
    -------
    float or array [1]
        Drag coefficient.

    Valid range
    -----------
    Reynolds number above 0. A definition.

    Notes
    -----
    Common practice draws it as the straight line 24/Re below Reynolds number 1; at 1 that is
    12 % below the unbounded drag.

    References
    ----------
    [Clift1978]

    Examples
    --------
    >>> f"{drag_coefficient(inertia_factor=1.0, reynolds=0.1):.0f}"
    '240'
    """
    return 24.0 * inertia_factor / reynolds


def shear_rate(*, fall_speed: Numeric, ball_diameter: Numeric) -> Numeric:
    r"""Greatest shear rate at the surface of the ball, unbounded.

    .. math:: \dot\gamma = 3 v / d

    Parameters
    ----------
    fall_speed : float or array, shape (..., drops) [m/s]
        Speed v of the ball.
    ball_diameter : float or array, shape (..., drops) [m]
        Diameter d.

    Returns
    -------
    float or array [1/s]
        Shear rate at the equator.

    Valid range
    -----------
    Newtonian liquid, unbounded, Reynolds number 0.

    Notes
    -----
    Averages over the surface are also quoted, between v/d and 2v/d.

    References
    ----------
    [HappelBrenner1965]

    Examples
    --------
    >>> f"{shear_rate(fall_speed=0.0147, ball_diameter=2e-3):.2f}"
    '22.05'
    """
    return 3.0 * fall_speed / ball_diameter


def shear_stress(
    *, ball_diameter: Numeric, ball_density: Numeric, liquid_density: Numeric, gravity: Numeric
) -> Numeric:
    r"""Greatest shear stress at the surface of the ball, whatever the viscosity.

    .. math:: \tau = (\rho_b - \rho_f)\, g\, d / 6

    Parameters
    ----------
    ball_diameter : float or array, shape (..., drops) [m]
        Diameter d.
    ball_density : float or array, shape (..., drops) [kg/m3]
        Density of the ball.
    liquid_density : float or array, shape (..., drops) [kg/m3]
        Density of the liquid.
    gravity : float or array, shape (..., drops) [m/s2]
        Local acceleration of free fall.

    Returns
    -------
    float or array [Pa]
        Shear stress at the equator.

    Valid range
    -----------
    Newtonian liquid, unbounded, Reynolds number 0.

    Notes
    -----
    Viscosity times the greatest shear rate under Stokes' law; walls and inertia share the load.

    References
    ----------
    [HappelBrenner1965]

    Examples
    --------
    >>> value = shear_stress(
    ...     ball_diameter=2e-3, ball_density=7700.0, liquid_density=970.0, gravity=9.81
    ... )
    >>> f"{value:.2f}"
    '22.01'
    """
    return (ball_density - liquid_density) * gravity * ball_diameter / 6.0
