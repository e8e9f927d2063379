"""Local acceleration of free fall from latitude and elevation, for sites without a measured one."""

from __future__ import annotations

import math

import numpy as np

from plumbfall.physics.numeric import Numeric
from plumbfall.physics.ranges import check_range

__all__ = [
    "STANDARD_GRAVITY",
    "normal_gravity",
    "normal_gravity_by_elevation",
    "normal_gravity_by_latitude",
]

STANDARD_GRAVITY = 9.80665
"""Conventional acceleration of free fall, m/s2 (3rd CGPM, 1901)."""

# Defining and derived constants of the ellipsoid WGS 84 (NGA.STND.0036, tables 3.1 to 3.7).
_EQUATOR = 9.7803253359
_SOMIGLIANA = 0.00193185265241
_ECCENTRICITY_SQUARED = 6.69437999014e-3
_SEMI_MAJOR_AXIS = 6378137.0
_FLATTENING = 1.0 / 298.257223563
_ROTATION = 0.00344978650684  # angular velocity squared times a^2 b / GM


def normal_gravity(*, latitude: Numeric, elevation: Numeric = 0.0) -> Numeric:
    r"""Gravity of the reference ellipsoid at a latitude, reduced to an elevation in free air.

    .. math::

        \gamma = \gamma_e \frac{1 + k \sin^2\varphi}{\sqrt{1 - e^2 \sin^2\varphi}}
        \left[1 - \frac{2h}{a}(1 + f + m - 2 f \sin^2\varphi) + \frac{3 h^2}{a^2}\right]

    Parameters
    ----------
    latitude : float or array [rad]
        Geodetic latitude, north or south.
    elevation : float or array [m]
        Height h above the ellipsoid; height above sea level will do.

    Returns
    -------
    float or array [m/s2]
        Acceleration of free fall.

    Raises
    ------
    PhysicsRangeError
        If a latitude or an elevation is outside the range.

    Valid range
    -----------
    Latitude -pi/2 to pi/2 rad; elevation -500 to 10 000 m.

    Notes
    -----
    The truth differs by the local gravity anomaly: commonly under 5e-4 m/s2, rarely above
    2e-3 m/s2 (0.02 %). Height above sea level instead of above the ellipsoid adds up to 3e-4 m/s2.

    References
    ----------
    [NGA2014]

    Examples
    --------
    >>> import math
    >>> f"{normal_gravity(latitude=math.radians(45.0)):.5f}"
    '9.80620'
    """
    sine_squared = _sine_squared(latitude, elevation)
    at_sea_level = (
        _EQUATOR
        * (1.0 + _SOMIGLIANA * sine_squared)
        / np.sqrt(1.0 - _ECCENTRICITY_SQUARED * sine_squared)
    )
    gravity: Numeric = at_sea_level * _free_air(sine_squared, elevation)
    return gravity


def normal_gravity_by_latitude(*, latitude: Numeric, elevation: Numeric = 0.0) -> Numeric:
    r"""Change of normal gravity with latitude.

    .. math:: \partial\gamma / \partial\varphi

    Parameters
    ----------
    latitude : float or array [rad]
        Geodetic latitude, north or south.
    elevation : float or array [m]
        Height above the ellipsoid.

    Returns
    -------
    float or array [m/s2/rad]
        Derivative of :func:`normal_gravity`.

    Raises
    ------
    PhysicsRangeError
        If a latitude or an elevation is outside the range.

    Valid range
    -----------
    As for :func:`normal_gravity`.

    Notes
    -----
    Analytic. At 45 degrees one degree of latitude is 9.1e-4 m/s2, 0.009 % of the viscosity.

    References
    ----------
    [NGA2014]

    Examples
    --------
    >>> import math
    >>> f"{normal_gravity_by_latitude(latitude=math.radians(45.0)) * math.radians(1.0):.1e}"
    '9.1e-04'
    """
    sine_squared = _sine_squared(latitude, elevation)
    log_slope = (
        _SOMIGLIANA / (1.0 + _SOMIGLIANA * sine_squared)
        + 0.5 * _ECCENTRICITY_SQUARED / (1.0 - _ECCENTRICITY_SQUARED * sine_squared)
        + 4.0 * _FLATTENING * elevation / _SEMI_MAJOR_AXIS / _free_air(sine_squared, elevation)
    )
    slope: Numeric = (
        normal_gravity(latitude=latitude, elevation=elevation)
        * log_slope
        * np.sin(2.0 * np.asarray(latitude))
    )
    return slope


def normal_gravity_by_elevation(*, latitude: Numeric, elevation: Numeric = 0.0) -> Numeric:
    r"""Change of normal gravity with elevation, in free air.

    .. math:: \partial\gamma / \partial h

    Parameters
    ----------
    latitude : float or array [rad]
        Geodetic latitude, north or south.
    elevation : float or array [m]
        Height above the ellipsoid.

    Returns
    -------
    float or array [1/s2]
        Derivative of :func:`normal_gravity`.

    Raises
    ------
    PhysicsRangeError
        If a latitude or an elevation is outside the range.

    Valid range
    -----------
    As for :func:`normal_gravity`.

    Notes
    -----
    Analytic; -3.086e-6 m/s2 a metre, the usual free-air gradient. Rock below the site gives back
    about a third of it, which this leaves out.

    References
    ----------
    [NGA2014]

    Examples
    --------
    >>> import math
    >>> f"{normal_gravity_by_elevation(latitude=math.radians(45.0)):.3e}"
    '-3.086e-06'
    """
    sine_squared = _sine_squared(latitude, elevation)
    gravity_at_zero = normal_gravity(latitude=latitude)
    shape = 1.0 + _FLATTENING + _ROTATION - 2.0 * _FLATTENING * sine_squared
    slope: Numeric = gravity_at_zero * (
        -2.0 * shape / _SEMI_MAJOR_AXIS + 6.0 * elevation / _SEMI_MAJOR_AXIS**2
    )
    return slope


def _sine_squared(latitude: Numeric, elevation: Numeric) -> Numeric:
    """Squared sine of a latitude, once latitude and elevation are seen to be possible."""
    law = "normal gravity (WGS 84)"
    quarter = 0.5 * math.pi
    check_range(latitude, low=-quarter, high=quarter, variable="latitude in rad", where=law)
    check_range(elevation, low=-500.0, high=1e4, variable="elevation in m", where=law)
    squared: Numeric = np.sin(latitude) ** 2
    return squared


def _free_air(sine_squared: Numeric, elevation: Numeric) -> Numeric:
    """Factor by which gravity at an elevation differs from that on the ellipsoid."""
    shape = 1.0 + _FLATTENING + _ROTATION - 2.0 * _FLATTENING * sine_squared
    radii = elevation / _SEMI_MAJOR_AXIS
    return 1.0 - 2.0 * shape * radii + 3.0 * radii**2
