"""The force that pulls a ball down: its weight less its buoyancy, and weighing in air."""

from __future__ import annotations

import math

from plumbfall.physics.numeric import Numeric

__all__ = [
    "AIR_DENSITY",
    "WEIGHTS_DENSITY",
    "effective_weight",
    "effective_weight_of_mass",
    "mass_from_weighing",
    "sphere_volume",
]

AIR_DENSITY = 1.2
"""Density of air in a conventional weighing, kg/m3 (OIML D 28)."""

WEIGHTS_DENSITY = 8000.0
"""Density of the reference weights in a conventional weighing, kg/m3 (OIML D 28)."""


def sphere_volume(*, ball_diameter: Numeric) -> Numeric:
    r"""Volume of a ball.

    .. math:: V = \pi d^3 / 6

    Parameters
    ----------
    ball_diameter : float or array, shape (..., drops) [m]
        Diameter d.

    Returns
    -------
    float or array [m3]
        Volume V.

    Valid range
    -----------
    Any diameter.

    Notes
    -----
    Exact for a sphere.

    References
    ----------
    [ISO80000-3]

    Examples
    --------
    >>> f"{sphere_volume(ball_diameter=2.0e-3):.5e}"
    '4.18879e-09'
    """
    return math.pi / 6.0 * ball_diameter**3


def effective_weight(
    *, ball_diameter: Numeric, ball_density: Numeric, liquid_density: Numeric, gravity: Numeric
) -> Numeric:
    r"""Weight less buoyancy of a ball of known density.

    .. math:: W = (\rho_b - \rho_f)\, g\, \pi d^3 / 6

    Parameters
    ----------
    ball_diameter : float or array, shape (..., drops) [m]
        Diameter d.
    ball_density : float or array, shape (..., drops) [kg/m3]
        Density of the ball.
    liquid_density : float or array, shape (..., drops) [kg/m3]
        Density of the liquid at the temperature of the drop.
    gravity : float or array, shape (..., drops) [m/s2]
        Local acceleration of free fall, along the tube.

    Returns
    -------
    float or array [N]
        Force W; negative where the ball would rise.

    Valid range
    -----------
    Ball fully under the surface.

    Notes
    -----
    Exact (Archimedes). Relative sensitivities: 3 to diameter, 1/(1-r) to ball density and
    -r/(1-r) to liquid density, with r the liquid's density over the ball's.

    References
    ----------
    [Stokes1851]

    Examples
    --------
    >>> value = effective_weight(
    ...     ball_diameter=2e-3, ball_density=7700.0, liquid_density=970.0, gravity=9.81
    ... )
    >>> f"{value:.4e}"
    '2.7655e-04'
    """
    return (ball_density - liquid_density) * gravity * (math.pi / 6.0) * ball_diameter**3


def effective_weight_of_mass(
    *, ball_mass: Numeric, ball_diameter: Numeric, liquid_density: Numeric, gravity: Numeric
) -> Numeric:
    r"""Weight less buoyancy of a ball that was weighed.

    .. math:: W = (m - \rho_f\, \pi d^3 / 6)\, g

    Parameters
    ----------
    ball_mass : float or array, shape (..., drops) [kg]
        Mass m, corrected for the buoyancy of air.
    ball_diameter : float or array, shape (..., drops) [m]
        Diameter d.
    liquid_density : float or array, shape (..., drops) [kg/m3]
        Density of the liquid at the temperature of the drop.
    gravity : float or array, shape (..., drops) [m/s2]
        Local acceleration of free fall, along the tube.

    Returns
    -------
    float or array [N]
        Force W; negative where the ball would rise.

    Valid range
    -----------
    Ball fully under the surface.

    Notes
    -----
    Exact (Archimedes). Relative sensitivity to diameter -3r/(1-r), to mass 1/(1-r): for a ball
    nearly as light as the liquid the density form, or weighing in the liquid, is the better one.

    References
    ----------
    [Stokes1851]

    Examples
    --------
    >>> value = effective_weight_of_mass(
    ...     ball_mass=32.254e-6, ball_diameter=2e-3, liquid_density=970.0, gravity=9.81
    ... )
    >>> f"{value:.4e}"
    '2.7655e-04'
    """
    return (ball_mass - liquid_density * (math.pi / 6.0) * ball_diameter**3) * gravity


def mass_from_weighing(
    *,
    reading: Numeric,
    ball_diameter: Numeric,
    air_density: Numeric = AIR_DENSITY,
    weights_density: Numeric = WEIGHTS_DENSITY,
) -> Numeric:
    r"""Mass of a ball from a balance reading in air.

    .. math:: m = m_r (1 - \rho_a / \rho_w) + \rho_a\, \pi d^3 / 6

    Parameters
    ----------
    reading : float or array, shape (..., drops) [kg]
        Balance reading, of one ball.
    ball_diameter : float or array, shape (..., drops) [m]
        Diameter d.
    air_density : float or array, shape (..., drops) [kg/m3]
        Density of the air at the balance.
    weights_density : float or array, shape (..., drops) [kg/m3]
        Density of the weights the balance was adjusted with.

    Returns
    -------
    float or array [kg]
        Mass m.

    Valid range
    -----------
    Any ball.

    Notes
    -----
    Balance of forces at the reading; the same as the usual quotient form, but explicit, as the
    volume is taken from the diameter. Changes the mass of plastic by 0.09 %, of steel by nothing.

    References
    ----------
    [OIMLD28]

    Examples
    --------
    >>> f"{mass_from_weighing(reading=5.0e-6, ball_diameter=2.0e-3):.6e}"
    '5.004277e-06'
    """
    displaced_air = air_density * (math.pi / 6.0) * ball_diameter**3
    return reading * (1.0 - air_density / weights_density) + displaced_air
