"""Drag of a ball on the axis of a long tube at Reynolds number 0: the wall factor by author.

Each law is the drag over Stokes' drag, a function of ball diameter over tube bore. None checks
its argument; :func:`plumbfall.physics.wall_factor` does, by the registry of laws.
"""

from __future__ import annotations

from numpy.polynomial import Polynomial

from plumbfall.physics.exact import creeping_wall_factor
from plumbfall.physics.numeric import Numeric

__all__ = [
    "BOHLIN",
    "FAXEN",
    "FAXEN_CUBIC",
    "FAXEN_LINEAR",
    "FRANCIS",
    "HABERMAN_SAYRE",
    "LADENBURG",
    "wall_factor_bohlin",
    "wall_factor_exact",
    "wall_factor_faxen",
    "wall_factor_faxen_cubic",
    "wall_factor_faxen_linear",
    "wall_factor_francis",
    "wall_factor_haberman_sayre",
    "wall_factor_ladenburg",
]

LADENBURG = Polynomial((1.0, 2.4))
FAXEN_LINEAR = Polynomial((1.0, -2.104))
FAXEN_CUBIC = Polynomial((1.0, -2.104, 0.0, 2.09))
FAXEN = Polynomial((1.0, -2.104, 0.0, 2.09, 0.0, -0.95))
# The fifth-power coefficient also circulates as 6.94813, a misprint: 0.3 % out at ratio 0.2.
BOHLIN = Polynomial((1.0, -2.10443, 0.0, 2.08877, 0.0, -0.94813, -1.372, 0.0, 3.87, 0.0, -4.19))
FRANCIS = 0.475
HABERMAN_SAYRE = (
    Polynomial((1.0, 0.0, 0.0, 0.0, 0.0, -0.75857)),
    Polynomial((1.0, -2.1050, 0.0, 2.0865, 0.0, -1.7068, 0.72603)),
)


def wall_factor_exact(*, diameter_ratio: Numeric) -> Numeric:
    r"""Drag on a ball on the axis of a long tube, from the exact solution of creeping flow.

    .. math:: K_0(\lambda) = F / (3 \pi \eta d v)

    Parameters
    ----------
    diameter_ratio : float or array, shape (..., drops) [1]
        Ball diameter over tube bore, symbol lambda.

    Returns
    -------
    float or array [1]
        Factor K0, at least 1, same shape as the input.

    Valid range
    -----------
    Diameter ratio 0 to 0.95; Reynolds number 0; ball on the axis, far from the ends.

    Notes
    -----
    Interpolates values computed by a solver of this program, to better than 1e-6 up to 0.8.

    References
    ----------
    [Plumbfall]

    Examples
    --------
    >>> f"{wall_factor_exact(diameter_ratio=0.1):.4f}"
    '1.2632'
    """
    factor, _ = creeping_wall_factor(diameter_ratio)
    return factor


def wall_factor_ladenburg(*, diameter_ratio: Numeric) -> Numeric:
    r"""Wall factor by Ladenburg's first-order formula.

    .. math:: K_0 = 1 + 2.4 \lambda

    Parameters
    ----------
    diameter_ratio : float or array, shape (..., drops) [1]
        Ball diameter over tube bore, symbol lambda.

    Returns
    -------
    float or array [1]
        Factor K0, at least 1, same shape as the input.

    Valid range
    -----------
    Diameter ratio 0 to 0.2; Reynolds number 0; ball on the axis, far from the ends.

    Notes
    -----
    Error +0.24 % at 0.05, -1.8 % at 0.1, -12 % at 0.2 against the exact solution. The first order
    is really 2.1044.

    References
    ----------
    [Ladenburg1907]

    Examples
    --------
    >>> f"{wall_factor_ladenburg(diameter_ratio=0.05):.4f}"
    '1.1200'
    """
    factor: Numeric = LADENBURG(diameter_ratio)
    return factor


def wall_factor_faxen_linear(*, diameter_ratio: Numeric) -> Numeric:
    r"""Wall factor by Faxén's series cut after the first power.

    .. math:: K_0 = 1 / (1 - 2.104 \lambda)

    Parameters
    ----------
    diameter_ratio : float or array, shape (..., drops) [1]
        Ball diameter over tube bore, symbol lambda.

    Returns
    -------
    float or array [1]
        Factor K0, at least 1, same shape as the input.

    Valid range
    -----------
    Diameter ratio 0 to 0.2; Reynolds number 0; ball on the axis, far from the ends.

    Notes
    -----
    Error +0.03 % at 0.05, +0.26 % at 0.1, +2.8 % at 0.2, +14 % at 0.3 against the exact solution;
    negative above 0.475.

    References
    ----------
    [Faxen1922]

    Examples
    --------
    >>> f"{wall_factor_faxen_linear(diameter_ratio=0.05):.4f}"
    '1.1176'
    """
    factor: Numeric = 1.0 / FAXEN_LINEAR(diameter_ratio)
    return factor


def wall_factor_faxen_cubic(*, diameter_ratio: Numeric) -> Numeric:
    r"""Wall factor by Faxén's series cut after the third power.

    .. math:: K_0 = 1 / (1 - 2.104 \lambda + 2.09 \lambda^3)

    Parameters
    ----------
    diameter_ratio : float or array, shape (..., drops) [1]
        Ball diameter over tube bore, symbol lambda.

    Returns
    -------
    float or array [1]
        Factor K0, at least 1, same shape as the input.

    Valid range
    -----------
    Diameter ratio 0 to 0.4; Reynolds number 0; ball on the axis, far from the ends.

    Notes
    -----
    Error -0.007 % at 0.1, -0.08 % at 0.2, -0.78 % at 0.3, -4.7 % at 0.4, -20 % at 0.5 against the
    exact solution.

    References
    ----------
    [Faxen1922]

    Examples
    --------
    >>> f"{wall_factor_faxen_cubic(diameter_ratio=0.05):.4f}"
    '1.1172'
    """
    factor: Numeric = 1.0 / FAXEN_CUBIC(diameter_ratio)
    return factor


def wall_factor_faxen(*, diameter_ratio: Numeric) -> Numeric:
    r"""Wall factor by Faxén's series to the fifth power.

    .. math:: K_0 = 1 / (1 - 2.104 \lambda + 2.09 \lambda^3 - 0.95 \lambda^5)

    Parameters
    ----------
    diameter_ratio : float or array, shape (..., drops) [1]
        Ball diameter over tube bore, symbol lambda.

    Returns
    -------
    float or array [1]
        Factor K0, at least 1, same shape as the input.

    Valid range
    -----------
    Diameter ratio 0 to 0.5; Reynolds number 0; ball on the axis, far from the ends.

    Notes
    -----
    Error -0.006 % at 0.1, -0.03 % at 0.2, -0.24 % at 0.3, -1.4 % at 0.4, -6.4 % at 0.5 against the
    exact solution.

    References
    ----------
    [Faxen1922]

    Examples
    --------
    >>> f"{wall_factor_faxen(diameter_ratio=0.05):.4f}"
    '1.1172'
    """
    factor: Numeric = 1.0 / FAXEN(diameter_ratio)
    return factor


def wall_factor_bohlin(*, diameter_ratio: Numeric) -> Numeric:
    r"""Wall factor by Bohlin's series to the tenth power.

    .. math::

        1/K_0 = 1 - 2.10443 \lambda + 2.08877 \lambda^3 - 0.94813 \lambda^5
        - 1.372 \lambda^6 + 3.87 \lambda^8 - 4.19 \lambda^{10}

    Parameters
    ----------
    diameter_ratio : float or array, shape (..., drops) [1]
        Ball diameter over tube bore, symbol lambda.

    Returns
    -------
    float or array [1]
        Factor K0, at least 1, same shape as the input.

    Valid range
    -----------
    Diameter ratio 0 to 0.6; Reynolds number 0; ball on the axis, far from the ends.

    Notes
    -----
    Error under 0.001 % to 0.1, -0.003 % at 0.2, -0.016 % at 0.3, -0.08 % at 0.4, -0.41 % at 0.5
    against the exact solution; +48 % at 0.7 and of the wrong sign at 0.8.

    References
    ----------
    [Bohlin1960]

    Examples
    --------
    >>> f"{wall_factor_bohlin(diameter_ratio=0.1):.4f}"
    '1.2632'
    """
    factor: Numeric = 1.0 / BOHLIN(diameter_ratio)
    return factor


def wall_factor_francis(*, diameter_ratio: Numeric) -> Numeric:
    r"""Wall factor by Francis' empirical formula.

    .. math:: K_0 = \left[(1 - 0.475 \lambda) / (1 - \lambda)\right]^4

    Parameters
    ----------
    diameter_ratio : float or array, shape (..., drops) [1]
        Ball diameter over tube bore, symbol lambda.

    Returns
    -------
    float or array [1]
        Factor K0, at least 1, same shape as the input.

    Valid range
    -----------
    Diameter ratio 0 to 0.7; Reynolds number 0; ball on the axis, far from the ends.

    Notes
    -----
    Error -0.19 % at 0.05, -0.69 % at 0.1, -2.5 % at 0.2, -5.0 % at 0.3, -9.1 % at 0.5 against the
    exact solution.

    References
    ----------
    [Francis1933]

    Examples
    --------
    >>> f"{wall_factor_francis(diameter_ratio=0.1):.4f}"
    '1.2546'
    """
    return ((1.0 - FRANCIS * diameter_ratio) / (1.0 - diameter_ratio)) ** 4


def wall_factor_haberman_sayre(*, diameter_ratio: Numeric) -> Numeric:
    r"""Wall factor by Haberman and Sayre's rational formula.

    .. math::

        K_0 = \frac{1 - 0.75857 \lambda^5}{1 - 2.1050 \lambda + 2.0865 \lambda^3
        - 1.7068 \lambda^5 + 0.72603 \lambda^6}

    Parameters
    ----------
    diameter_ratio : float or array, shape (..., drops) [1]
        Ball diameter over tube bore, symbol lambda.

    Returns
    -------
    float or array [1]
        Factor K0, at least 1, same shape as the input.

    Valid range
    -----------
    Diameter ratio 0 to 0.6; Reynolds number 0; ball on the axis, far from the ends.

    Notes
    -----
    Error +0.007 % at 0.1, +0.014 % at 0.2, -0.017 % at 0.3, -0.27 % at 0.4, -1.3 % at 0.5, -4.5 %
    at 0.6, -34 % at 0.8 against the exact solution.

    References
    ----------
    [HabermanSayre1958]

    Examples
    --------
    >>> f"{wall_factor_haberman_sayre(diameter_ratio=0.1):.4f}"
    '1.2633'
    """
    over, under = HABERMAN_SAYRE
    factor: Numeric = over(diameter_ratio) / under(diameter_ratio)
    return factor
