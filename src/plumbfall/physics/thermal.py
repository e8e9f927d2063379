"""What temperature does to lengths and densities."""

from __future__ import annotations

from plumbfall.physics.numeric import Numeric

__all__ = [
    "THERMAL_DIFFUSIVITY",
    "equilibration_time",
    "expanded_length",
    "expanded_solid_density",
    "liquid_density",
]

THERMAL_DIFFUSIVITY = 9.5e-8
"""Thermal diffusivity of a liquid that balls are dropped in, where nothing better is known [m2/s].

Glycerol 0.95e-7; mineral oils 0.8e-7, silicone fluids 1.0e-7, water 1.4e-7 (from memory).
"""

_FIRST_ZERO_J0 = 2.404825557695773


def equilibration_time(
    *, tube_bore: Numeric, thermal_diffusivity: Numeric = THERMAL_DIFFUSIVITY
) -> Numeric:
    r"""Time constant with which the liquid on the axis of a tube takes the bath's temperature.

    .. math:: \tau = \frac{R^2}{j_{0,1}^2\, \alpha} = \frac{R^2}{5.783\, \alpha}

    Parameters
    ----------
    tube_bore : float or array, shape (..., drops) [m]
        Bore, 2R.
    thermal_diffusivity : float or array, shape (..., drops) [m2/s]
        Thermal diffusivity of the liquid.

    Returns
    -------
    float or array [s]
        Time in which the difference falls to 1/e of itself.

    Valid range
    -----------
    A long tube whose wall is held at the bath's temperature; liquid at rest. Stirring and
    convection make it quicker, a thick glass wall slower.

    Notes
    -----
    The slowest of the modes of conduction in a cylinder. The difference on the axis is
    1.602 exp(-t/tau) of the first one once the others have died: from 5 K to 0.01 K in 6.7 of them.

    References
    ----------
    [CarslawJaeger1959]

    Examples
    --------
    >>> value = equilibration_time(tube_bore=40e-3)
    >>> f"{value / 60:.0f}"
    '12'
    """
    return (0.5 * tube_bore) ** 2 / (_FIRST_ZERO_J0**2 * thermal_diffusivity)


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
