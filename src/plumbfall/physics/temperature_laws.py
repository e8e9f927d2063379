"""What temperature does to viscosity: the laws it is fitted and interpolated with."""

from __future__ import annotations

import numpy as np

from plumbfall.physics.numeric import Numeric

__all__ = [
    "andrade_slope",
    "andrade_viscosity",
    "vogel_slope",
    "vogel_viscosity",
    "walther_coefficients",
    "walther_kinematic_viscosity",
    "walther_ordinate",
    "walther_viscosity_of_ordinate",
]


def andrade_viscosity(*, intercept: Numeric, slope: Numeric, temperature: Numeric) -> Numeric:
    r"""Viscosity by Andrade's law.

    .. math:: \ln \eta = A + B / T

    Parameters
    ----------
    intercept : float or array [1]
        A, the logarithm of a viscosity in Pa.s.
    slope : float or array [K]
        B, above 0 for a liquid.
    temperature : float or array, shape (..., drops) [K]
        Absolute temperature T.

    Returns
    -------
    float or array [Pa.s]
        Viscosity.

    Valid range
    -----------
    Between the temperatures it was fitted to; some tens of kelvin for oils.

    Notes
    -----
    Straight in 1/T, which viscous oils are not: they bend by percents over 50 K.

    References
    ----------
    [Andrade1930]

    Examples
    --------
    >>> f"{andrade_viscosity(intercept=-20.0, slope=6000.0, temperature=300.0):.4f}"
    '1.0000'
    """
    viscosity: Numeric = np.exp(intercept + slope / temperature)
    return viscosity


def andrade_slope(*, slope: Numeric, temperature: Numeric) -> Numeric:
    r"""Relative change of viscosity with temperature by Andrade's law.

    .. math:: d \ln \eta / d T = -B / T^2

    Parameters
    ----------
    slope : float or array [K]
        B of Andrade's law.
    temperature : float or array, shape (..., drops) [K]
        Absolute temperature T.

    Returns
    -------
    float or array [1/K]
        Relative slope, below 0 for a liquid.

    Valid range
    -----------
    As for :func:`andrade_viscosity`.

    Notes
    -----
    Exact derivative of Andrade's law; a local slope carries over a few kelvin.

    References
    ----------
    [Andrade1930]

    Examples
    --------
    >>> f"{andrade_slope(slope=6000.0, temperature=300.0):.4f}"
    '-0.0667'
    """
    return -slope / temperature**2


def vogel_viscosity(
    *, intercept: Numeric, slope: Numeric, vogel_temperature: Numeric, temperature: Numeric
) -> Numeric:
    r"""Viscosity by the law of Vogel, Fulcher and Tammann.

    .. math:: \ln \eta = A + B / (T - T_0)

    Parameters
    ----------
    intercept : float or array [1]
        A, the logarithm of a viscosity in Pa.s.
    slope : float or array [K]
        B, above 0 for a liquid.
    vogel_temperature : float or array [K]
        Temperature T0, below all that occur.
    temperature : float or array, shape (..., drops) [K]
        Absolute temperature T.

    Returns
    -------
    float or array [Pa.s]
        Viscosity.

    Valid range
    -----------
    Between the temperatures it was fitted to; T above T0.

    Notes
    -----
    Describes oils over 100 K. B and T0 are nearly interchangeable: fit five temperatures or more.

    References
    ----------
    [Vogel1921]

    Examples
    --------
    >>> value = vogel_viscosity(
    ...     intercept=-7.0, slope=1050.0, vogel_temperature=150.0, temperature=300.0
    ... )
    >>> f"{value:.4f}"
    '1.0000'
    """
    viscosity: Numeric = np.exp(intercept + slope / (temperature - vogel_temperature))
    return viscosity


def vogel_slope(*, slope: Numeric, vogel_temperature: Numeric, temperature: Numeric) -> Numeric:
    r"""Relative change of viscosity with temperature by the law of Vogel, Fulcher and Tammann.

    .. math:: d \ln \eta / d T = -B / (T - T_0)^2

    Parameters
    ----------
    slope : float or array [K]
        B of the law.
    vogel_temperature : float or array [K]
        Temperature T0 of the law.
    temperature : float or array, shape (..., drops) [K]
        Absolute temperature T.

    Returns
    -------
    float or array [1/K]
        Relative slope, below 0 for a liquid.

    Valid range
    -----------
    As for :func:`vogel_viscosity`.

    Notes
    -----
    Exact derivative of the law.

    References
    ----------
    [Vogel1921]

    Examples
    --------
    >>> f"{vogel_slope(slope=1050.0, vogel_temperature=150.0, temperature=300.0):.4f}"
    '-0.0467'
    """
    return -slope / (temperature - vogel_temperature) ** 2


def walther_ordinate(*, kinematic_viscosity: Numeric) -> Numeric:
    r"""Ordinate Z of the viscosity-temperature chart of ASTM D341.

    .. math:: Z = \nu + 0.7 + \exp(-1.47 - 1.84 \nu - 0.51 \nu^2), \quad \nu \text{ in mm}^2/s

    Parameters
    ----------
    kinematic_viscosity : float or array [m2/s]
        Kinematic viscosity.

    Returns
    -------
    float or array [1]
        Z, whose double logarithm is straight in the logarithm of temperature.

    Valid range
    -----------
    0.21 to 2e7 mm2/s.

    Notes
    -----
    The standard's own fit, for hydrocarbon oils.

    References
    ----------
    [ASTMD341]

    Examples
    --------
    >>> f"{walther_ordinate(kinematic_viscosity=100e-6):.4f}"
    '100.7000'
    """
    nu = kinematic_viscosity * 1e6
    ordinate: Numeric = nu + 0.7 + np.exp(-1.47 - 1.84 * nu - 0.51 * nu**2)
    return ordinate


def walther_viscosity_of_ordinate(*, ordinate: Numeric) -> Numeric:
    r"""Kinematic viscosity from the ordinate Z of ASTM D341.

    .. math:: \nu = y - \exp(-0.7487 - 3.295 y + 0.6119 y^2 - 0.3193 y^3), \quad y = Z - 0.7

    Parameters
    ----------
    ordinate : float or array [1]
        Z of :func:`walther_ordinate`.

    Returns
    -------
    float or array [m2/s]
        Kinematic viscosity.

    Valid range
    -----------
    0.21 to 2e7 mm2/s.

    Notes
    -----
    The standard's own inverse: off by up to 2e-4 between 0.3 and 2 mm2/s, else by much less.

    References
    ----------
    [ASTMD341]

    Examples
    --------
    >>> f"{walther_viscosity_of_ordinate(ordinate=100.7) * 1e6:.4f}"
    '100.0000'
    """
    y = ordinate - 0.7
    nu: Numeric = y - np.exp(-0.7487 - 3.295 * y + 0.6119 * y**2 - 0.3193 * y**3)
    return nu * 1e-6


def walther_coefficients(
    *,
    kinematic_viscosity: tuple[float, float],
    temperature: tuple[float, float],
) -> tuple[float, float]:
    r"""Constants of the double-logarithmic law through two known points.

    .. math:: \log\log Z = A - B \log T \quad (\text{base } 10)

    Parameters
    ----------
    kinematic_viscosity : pair of float [m2/s]
        Kinematic viscosity at the two temperatures.
    temperature : pair of float [K]
        The two absolute temperatures.

    Returns
    -------
    pair of float [1]
        A and B.

    Valid range
    -----------
    0.21 to 2e7 mm2/s; liquid hydrocarbons between the two temperatures and some tens of kelvin
    beyond.

    Notes
    -----
    Two points leave nothing to check the law with.

    References
    ----------
    [ASTMD341]

    Examples
    --------
    >>> a, b = walther_coefficients(kinematic_viscosity=(100e-6, 11.1e-6),
    ...                             temperature=(313.15, 373.15))
    >>> f"{a:.4f} {b:.4f}"
    '9.2034 3.5668'
    """
    first, second = (
        np.log10(np.log10(walther_ordinate(kinematic_viscosity=nu))) for nu in kinematic_viscosity
    )
    log_first, log_second = (np.log10(kelvin) for kelvin in temperature)
    b = (first - second) / (log_second - log_first)
    return float(first + b * log_first), float(b)


def walther_kinematic_viscosity(
    *, intercept: Numeric, slope: Numeric, temperature: Numeric
) -> Numeric:
    r"""Kinematic viscosity of an oil by the double-logarithmic law.

    .. math:: \log\log Z = A - B \log T \quad (\text{base } 10)

    Parameters
    ----------
    intercept : float or array [1]
        A of :func:`walther_coefficients`.
    slope : float or array [1]
        B of :func:`walther_coefficients`.
    temperature : float or array, shape (..., drops) [K]
        Absolute temperature T.

    Returns
    -------
    float or array [m2/s]
        Kinematic viscosity.

    Valid range
    -----------
    0.21 to 2e7 mm2/s; liquid hydrocarbons between the temperatures of the fit and some tens of
    kelvin beyond.

    Notes
    -----
    Within a few tenths of a percent between its two points for mineral oils.

    References
    ----------
    [ASTMD341]

    Examples
    --------
    >>> nu = walther_kinematic_viscosity(intercept=9.203413, slope=3.566750, temperature=333.15)
    >>> f"{nu * 1e6:.3f}"
    '39.679'
    """
    ordinate = 10.0 ** (10.0 ** (intercept - slope * np.log10(temperature)))
    return walther_viscosity_of_ordinate(ordinate=ordinate)
