"""What temperature does to lengths and densities."""

from __future__ import annotations

from plumbfall.physics.numeric import Numeric

__all__ = [
    "expanded_length",
    "expanded_solid_density",
    "liquid_density",
]


def expanded_length(
    *, length: Numeric, expansion: Numeric, temperature: Numeric, reference_temperature: Numeric
) -> Numeric:
    r"""Length, diameter or bore at another temperature.

    .. math:: L = L_0\,[1 + \alpha (T - T_0)]

    Parameters
    ----------
    length : float or array, shape (..., drops) [m]
        Length at the reference temperature.
    expansion : float or array, shape (..., drops) [1/K]
        Linear expansion coefficient of the material.
    temperature : float or array, shape (..., drops) [K]
        Temperature of the drop.
    reference_temperature : float or array, shape (..., drops) [K]
        Temperature at which the length was measured.

    Returns
    -------
    float or array [m]
        Length at the temperature.

    Valid range
    -----------
    That of the coefficient; tens of kelvin from the reference temperature.

    Notes
    -----
    A definition of the mean coefficient. A bore expands as if it were solid.

    References
    ----------
    [ISO80000-5]

    Examples
    --------
    >>> value = expanded_length(
    ...     length=2e-3, expansion=10.4e-6, temperature=313.15, reference_temperature=293.15
    ... )
    >>> f"{value:.7e}"
    '2.0004160e-03'
    """
    return length * (1.0 + expansion * (temperature - reference_temperature))


def expanded_solid_density(
    *, density: Numeric, expansion: Numeric, temperature: Numeric, reference_temperature: Numeric
) -> Numeric:
    r"""Density of a solid ball at another temperature, its mass unchanged.

    .. math:: \rho = \rho_0 / [1 + \alpha (T - T_0)]^3

    Parameters
    ----------
    density : float or array, shape (..., drops) [kg/m3]
        Density at the reference temperature.
    expansion : float or array, shape (..., drops) [1/K]
        Linear expansion coefficient of the material.
    temperature : float or array, shape (..., drops) [K]
        Temperature of the drop.
    reference_temperature : float or array, shape (..., drops) [K]
        Temperature at which the density holds.

    Returns
    -------
    float or array [kg/m3]
        Density at the temperature.

    Valid range
    -----------
    That of the coefficient; tens of kelvin from the reference temperature.

    Notes
    -----
    Exact for an isotropic solid. PTFE passes a transition near 19 degC that no coefficient shows.

    References
    ----------
    [ISO80000-5]

    Examples
    --------
    >>> value = expanded_solid_density(
    ...     density=7700.0, expansion=10.4e-6, temperature=313.15,
    ...     reference_temperature=293.15
    ... )
    >>> f"{value:.2f}"
    '7695.20'
    """
    return density / (1.0 + expansion * (temperature - reference_temperature)) ** 3


def liquid_density(
    *, density: Numeric, expansion: Numeric, temperature: Numeric, reference_temperature: Numeric
) -> Numeric:
    r"""Density of a liquid at another temperature.

    .. math:: \rho = \rho_0 / [1 + \beta (T - T_0)]

    Parameters
    ----------
    density : float or array, shape (..., drops) [kg/m3]
        Density at the reference temperature.
    expansion : float or array, shape (..., drops) [1/K]
        Volumetric expansion coefficient of the liquid.
    temperature : float or array, shape (..., drops) [K]
        Temperature of the drop.
    reference_temperature : float or array, shape (..., drops) [K]
        Temperature at which the density was measured.

    Returns
    -------
    float or array [kg/m3]
        Density at the temperature.

    Valid range
    -----------
    A few tens of kelvin; not water near 4 degC.

    Notes
    -----
    A definition of the mean coefficient. In the viscosity an error of the density counts r/(1-r)
    times, with r the liquid's density over the ball's.

    References
    ----------
    [ISO80000-5]

    Examples
    --------
    >>> value = liquid_density(
    ...     density=970.2, expansion=9.2e-4, temperature=308.15,
    ...     reference_temperature=298.15
    ... )
    >>> f"{value:.2f}"
    '961.36'
    """
    return density / (1.0 + expansion * (temperature - reference_temperature))
