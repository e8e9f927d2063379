"""Liquids whose viscosity and density are published: water, glycerol in water, sucrose in water.

Water serves as a reference. The solutions serve to check plausibility, within some percent.
"""

from __future__ import annotations

import math

import numpy as np

from plumbfall.physics.numeric import Numeric
from plumbfall.physics.ranges import check_range

__all__ = [
    "glycerol_water_density",
    "glycerol_water_viscosity",
    "sucrose_water_viscosity",
    "water_density",
    "water_viscosity",
    "water_viscosity_at_atmosphere",
]

_ZERO_CELSIUS = 273.15
_TEMPERATURE = "temperature in K"

# IAPWS R12-08, table 1, and table 2 as (power of 1/T - 1, power of density - 1, coefficient).
_DILUTE = (1.67752, 2.20462, 0.6366564, -0.241605)
_RESIDUAL = (
    (0, 0, 5.20094e-1),
    (1, 0, 8.50895e-2),
    (2, 0, -1.08374),
    (3, 0, -2.89555e-1),
    (0, 1, 2.22531e-1),
    (1, 1, 9.99115e-1),
    (2, 1, 1.88797),
    (3, 1, 1.26613),
    (5, 1, 1.20573e-1),
    (0, 2, -2.81378e-1),
    (1, 2, -9.06851e-1),
    (2, 2, -7.72479e-1),
    (3, 2, -4.89837e-1),
    (4, 2, -2.57040e-1),
    (0, 3, 1.61913e-1),
    (1, 3, 2.57399e-1),
    (0, 4, -3.25372e-2),
    (3, 4, 6.98452e-2),
    (4, 5, 8.72102e-3),
    (3, 6, -4.35673e-3),
    (5, 6, -5.93264e-4),
)
_AT_ATMOSPHERE = ((280.68, -1.9), (511.45, -7.7), (61.131, -19.6), (0.45903, -40.0))

# Bingham and Jackson: t = a y - b / y + d with y = fluidity + c, per mass fraction of sucrose.
_SUCROSE = {0.40: (0.597, 1438.6, 38.24, 20.0), 0.60: (1.472, 323.2, 58.62, 5.0)}
_SUCROSE_COLDEST = {0.40: 288.15, 0.60: 293.15}


def water_viscosity(*, temperature: Numeric, density: Numeric) -> Numeric:
    r"""Viscosity of water and steam, without the term that acts near the critical point.

    .. math::

        \eta = \frac{100 \sqrt{\bar T}}{\sum_i H_i / \bar T^i}
        \exp\left[\bar\rho \sum_{ij} H_{ij} (1/\bar T - 1)^i (\bar\rho - 1)^j\right]
        \; \mu\text{Pa s}

    Parameters
    ----------
    temperature : float or array, shape (..., drops) [K]
        Temperature; over 647.096 K it is T bar.
    density : float or array, shape (..., drops) [kg/m3]
        Density; over 322 kg/m3 it is rho bar.

    Returns
    -------
    float or array [Pa.s]
        Viscosity.

    Raises
    ------
    PhysicsRangeError
        If a temperature or a density is outside the range.

    Valid range
    -----------
    Temperature 273.15 to 1173.15 K, density 0 to 1250 kg/m3.

    Notes
    -----
    The release states about 1 % for the liquid; the datum at 20 degC is known to 0.17 % (both from
    memory).

    References
    ----------
    [IAPWSR12]

    Examples
    --------
    >>> f"{water_viscosity(temperature=298.15, density=998.0) * 1e6:.4f}"
    '889.7351'
    """
    law = "water's viscosity (IAPWS R12-08)"
    check_range(temperature, low=273.15, high=1173.15, variable=_TEMPERATURE, where=law)
    check_range(density, low=0.0, high=1250.0, variable="density in kg/m3", where=law)
    reduced_temperature = np.asarray(temperature, dtype=np.float64) / 647.096
    reduced_density = np.asarray(density, dtype=np.float64) / 322.0
    dilute = sum(h / reduced_temperature**i for i, h in enumerate(_DILUTE))
    colder, denser = 1.0 / reduced_temperature - 1.0, reduced_density - 1.0
    residual = sum(h * colder**i * denser**j for i, j, h in _RESIDUAL)
    viscosity: Numeric = (
        1e-4 * np.sqrt(reduced_temperature) / dilute * np.exp(reduced_density * residual)
    )
    return viscosity


def water_viscosity_at_atmosphere(*, temperature: Numeric) -> Numeric:
    r"""Viscosity of liquid water at 0.1 MPa.

    .. math:: \eta = \sum_i a_i\, (T / 300\,\text{K})^{b_i} \; \mu\text{Pa s}

    Parameters
    ----------
    temperature : float or array, shape (..., drops) [K]
        Temperature T.

    Returns
    -------
    float or array [Pa.s]
        Viscosity.

    Raises
    ------
    PhysicsRangeError
        If a temperature is outside the range.

    Valid range
    -----------
    Temperature 253.15 to 383.15 K, liquid.

    Notes
    -----
    Within 0.01 % of the full formulation from 15 to 40 degC. 1.0016 mPa.s at 20 degC; older tables
    have 1.0020. Falls by 2.45 % a kelvin there.

    References
    ----------
    [IAPWSSR6]

    Examples
    --------
    >>> f"{water_viscosity_at_atmosphere(temperature=298.15) * 1e6:.4f}"
    '889.9968'
    """
    check_range(
        temperature,
        low=253.15,
        high=383.15,
        variable=_TEMPERATURE,
        where="water's viscosity at 0.1 MPa (IAPWS SR6-08)",
    )
    ratio = np.asarray(temperature, dtype=np.float64) / 300.0
    viscosity: Numeric = 1e-6 * sum(a * ratio**b for a, b in _AT_ATMOSPHERE)
    return viscosity


def water_density(*, temperature: Numeric) -> Numeric:
    r"""Density of air-free water at one atmosphere.

    .. math:: \rho = a_5 \left[1 - \frac{(t + a_1)^2 (t + a_2)}{a_3 (t + a_4)}\right]

    Parameters
    ----------
    temperature : float or array, shape (..., drops) [K]
        Temperature; t is in degC.

    Returns
    -------
    float or array [kg/m3]
        Density.

    Raises
    ------
    PhysicsRangeError
        If a temperature is outside the range.

    Valid range
    -----------
    Temperature 273.15 to 313.15 K.

    Notes
    -----
    Uncertainty below 1e-6; air dissolved in water lowers the density by up to 0.0025 kg/m3.

    References
    ----------
    [Tanaka2001]

    Examples
    --------
    >>> f"{water_density(temperature=293.15):.4f}"
    '998.2067'
    """
    check_range(
        temperature,
        low=273.15,
        high=313.15,
        variable=_TEMPERATURE,
        where="water's density (Tanaka and others 2001)",
    )
    t = temperature - _ZERO_CELSIUS
    shrinkage = (t - 3.983035) ** 2 * (t + 301.797) / (522528.9 * (t + 69.34881))
    return 999.974950 * (1.0 - shrinkage)


def glycerol_water_viscosity(*, glycerol_fraction: Numeric, temperature: Numeric) -> Numeric:
    r"""Viscosity of glycerol in water.

    .. math:: \eta = \eta_w^{\alpha}\, \eta_g^{1 - \alpha}, \quad
        \alpha = 1 - C + \frac{a b\, C (1 - C)}{a C + b (1 - C)}

    Parameters
    ----------
    glycerol_fraction : float or array, shape (..., drops) [1]
        Mass fraction of glycerol, C.
    temperature : float or array, shape (..., drops) [K]
        Temperature.

    Returns
    -------
    float or array [Pa.s]
        Viscosity.

    Raises
    ------
    PhysicsRangeError
        If a fraction or a temperature is outside the range.

    Valid range
    -----------
    Mass fraction 0 to 1, temperature 273.15 to 373.15 K.

    Notes
    -----
    Within 3 % of measured tables at 20 degC: for plausibility, never as a reference. One percent
    of water in pure glycerol takes 20 % off its viscosity.

    References
    ----------
    [Cheng2008]

    Examples
    --------
    >>> f"{glycerol_water_viscosity(glycerol_fraction=1.0, temperature=298.15):.4f}"
    '0.9057'
    """
    law = "the viscosity of glycerol in water (Cheng 2008)"
    check_range(
        glycerol_fraction, low=0.0, high=1.0, variable="mass fraction of glycerol", where=law
    )
    check_range(temperature, low=273.15, high=373.15, variable=_TEMPERATURE, where=law)
    c = glycerol_fraction
    t = temperature - _ZERO_CELSIUS
    log_water = math.log(1.790e-3) + (-1230.0 - t) * t / (36100.0 + 360.0 * t)
    log_glycerol = math.log(12.100) + (-1233.0 + t) * t / (9900.0 + 70.0 * t)
    a = 0.705 - 0.0017 * t
    b = (4.9 + 0.036 * t) * a**2.5
    weight = 1.0 - c + a * b * c * (1.0 - c) / (a * c + b * (1.0 - c))
    viscosity: Numeric = np.exp(weight * log_water + (1.0 - weight) * log_glycerol)
    return viscosity


def glycerol_water_density(*, glycerol_fraction: Numeric, temperature: Numeric) -> Numeric:
    r"""Density of glycerol in water.

    .. math:: \rho = \kappa \left[\rho_w + \frac{\rho_g - \rho_w}
        {1 + (\rho_g / \rho_w)(1 / C - 1)}\right]

    Parameters
    ----------
    glycerol_fraction : float or array, shape (..., drops) [1]
        Mass fraction of glycerol, C.
    temperature : float or array, shape (..., drops) [K]
        Temperature.

    Returns
    -------
    float or array [kg/m3]
        Density.

    Raises
    ------
    PhysicsRangeError
        If a fraction or a temperature is outside the range.

    Valid range
    -----------
    Mass fraction 0 to 1, temperature 288.15 to 303.15 K.

    Notes
    -----
    Volumes add but for the contraction kappa. Its authors state 0.07 %.

    References
    ----------
    [VolkKahler2018]

    Examples
    --------
    >>> f"{glycerol_water_density(glycerol_fraction=0.8, temperature=293.15):.1f}"
    '1208.1'
    """
    law = "the density of glycerol in water (Volk and Kähler 2018)"
    check_range(
        glycerol_fraction, low=0.0, high=1.0, variable="mass fraction of glycerol", where=law
    )
    check_range(temperature, low=288.15, high=303.15, variable=_TEMPERATURE, where=law)
    c = np.asarray(glycerol_fraction, dtype=np.float64)
    t = temperature - _ZERO_CELSIUS
    glycerol = 1273.3 - 0.6121 * t
    water = 1000.0 * (1.0 - np.abs((t - 3.98) / 615.0) ** 1.71)
    # the volume fraction of glycerol, written so that none of it is no division by 0
    volume_fraction = c * water / (c * water + glycerol * (1.0 - c))
    # the sine is 0 at both ends but for rounding, which its power must not see below 0
    arch = np.maximum(np.sin(c**1.31 * math.pi), 0.0) ** 0.81
    contraction = 1.0 + (1.78e-6 * t**2 - 1.82e-4 * t + 1.41e-2) * arch
    density: Numeric = contraction * (water + (glycerol - water) * volume_fraction)
    return density


def sucrose_water_viscosity(*, sucrose_fraction: float, temperature: Numeric) -> Numeric:
    r"""Viscosity of sucrose in water at the two mass fractions that have a published formula.

    .. math:: t = a (\varphi + c) - b / (\varphi + c) + d, \quad \eta = 1 / \varphi

    Parameters
    ----------
    sucrose_fraction : float [1]
        Mass fraction of sucrose, 0.40 or 0.60.
    temperature : float or array, shape (..., drops) [K]
        Temperature; t is in degC, and the fluidity phi in 1/P.

    Returns
    -------
    float or array [Pa.s]
        Viscosity.

    Raises
    ------
    PhysicsRangeError
        If the fraction is neither of the two, or a temperature is outside the range.

    Valid range
    -----------
    Mass fraction 0.40 from 288.15, or 0.60 from 293.15, to 368.15 K.

    Notes
    -----
    On the old datum of 1.005 mPa.s for water at 20 degC. Within 1 % (0.40) and 6 % (0.60) of the
    authors' own table; the formula for 0.60 fails below 20 degC, by 18 % at 15 degC.

    References
    ----------
    [BinghamJackson1918]

    Examples
    --------
    >>> f"{sucrose_water_viscosity(sucrose_fraction=0.60, temperature=293.15) * 1e3:.2f}"
    '59.81'
    """
    law = "the viscosity of sucrose in water (Bingham and Jackson 1918)"
    for fraction, constants in _SUCROSE.items():
        if math.isclose(sucrose_fraction, fraction):
            a, b, d, c = constants
            coldest = _SUCROSE_COLDEST[fraction]
            break
    else:
        nearest = min(_SUCROSE, key=lambda fraction: abs(fraction - sucrose_fraction))
        check_range(
            sucrose_fraction,
            low=nearest,
            high=nearest,
            variable="mass fraction of sucrose",
            where=f"{law}, which is for 0.40 and 0.60 alone",
        )
    check_range(temperature, low=coldest, high=368.15, variable=_TEMPERATURE, where=law)
    above = np.asarray(temperature, dtype=np.float64) - _ZERO_CELSIUS - d
    fluidity = (above + np.sqrt(above**2 + 4.0 * a * b)) / (2.0 * a) - c
    viscosity: Numeric = 0.1 / fluidity
    return viscosity
