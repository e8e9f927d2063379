"""The constant of a tube that has no theory: found with a certified liquid, used for others."""

from __future__ import annotations

from plumbfall.physics.numeric import Numeric

__all__ = ["constant_viscosity"]


def constant_viscosity(
    *,
    tube_constant: Numeric,
    ball_density: Numeric,
    liquid_density: Numeric,
    fall_time: Numeric,
) -> Numeric:
    r"""Viscosity from the time between the marks of a calibrated tube.

    .. math:: \eta = K (\rho_b - \rho_f)\, t

    Parameters
    ----------
    tube_constant : float or array, shape (..., drops) [m2/s2]
        Constant K of the tube with this very ball, at the tilt it was found at.
    ball_density : float or array, shape (..., drops) [kg/m3]
        Density of the ball at the temperature of the drop.
    liquid_density : float or array, shape (..., drops) [kg/m3]
        Density of the liquid at the temperature of the drop.
    fall_time : float or array, shape (..., drops) [s]
        Time between the marks.

    Returns
    -------
    float or array [Pa.s]
        Dynamic viscosity.

    Valid range
    -----------
    Between the viscosities, times and temperatures the constant was found at: K takes in the
    walls, the ends, the tilt, gravity and what inertia there was.

    Notes
    -----
    At a Reynolds number of nothing the drag on a ball is proportional to viscosity and speed, so
    that K is the same at every time; with inertia it is not.

    References
    ----------
    [ISO12058]

    Examples
    --------
    >>> viscosity = constant_viscosity(
    ...     tube_constant=1.0e-8, ball_density=2400.0, liquid_density=1000.0, fall_time=70.0
    ... )
    >>> f"{viscosity:.3e}"
    '9.800e-04'
    """
    return tube_constant * (ball_density - liquid_density) * fall_time
