"""Walls and inertia together: rules that combine a wall factor with an inertia factor."""

from __future__ import annotations

import numpy as np

from plumbfall.physics.numeric import Numeric

__all__ = ["tube_drag_additive", "tube_drag_product", "tube_drag_screened"]


def tube_drag_screened(*, wall_factor: Numeric, inertia_factor: Numeric) -> Numeric:
    r"""Drag factor in a tube where the walls screen the inertia.

    .. math:: K = 1 + \sqrt{(K_0 - 1)^2 + (\phi - 1)^2}

    Parameters
    ----------
    wall_factor : float or array, shape (..., drops) [1]
        Factor K0 of the walls at Reynolds number 0.
    inertia_factor : float or array, shape (..., drops) [1]
        Factor phi of the inertia, unbounded.

    Returns
    -------
    float or array [1]
        Factor K, at least the larger of the two.

    Valid range
    -----------
    Diameter ratio 0 to 0.8, Reynolds number 0 to 10.

    Notes
    -----
    Within 0.76 % of Navier-Stokes to Reynolds number 5 and 1.8 % to 10. Beyond it falls off: -5 %
    at diameter ratio 0.2, Reynolds number 100.

    References
    ----------
    [Plumbfall]

    Examples
    --------
    >>> f"{tube_drag_screened(wall_factor=1.2632, inertia_factor=1.1382):.4f}"
    '1.2973'
    """
    factor: Numeric = 1.0 + np.sqrt((wall_factor - 1.0) ** 2 + (inertia_factor - 1.0) ** 2)
    return factor


def tube_drag_additive(*, wall_factor: Numeric, inertia_factor: Numeric) -> Numeric:
    r"""Drag factor in a tube by adding the excess of walls and inertia.

    .. math:: K = K_0 + \phi - 1

    Parameters
    ----------
    wall_factor : float or array, shape (..., drops) [1]
        Factor K0 of the walls at Reynolds number 0.
    inertia_factor : float or array, shape (..., drops) [1]
        Factor phi of the inertia, unbounded.

    Returns
    -------
    float or array [1]
        Factor K.

    Valid range
    -----------
    Diameter ratio 0 to 0.8, Reynolds number 0 to 100.

    Notes
    -----
    Too high against Navier-Stokes: 5 % at diameter ratio 0.05, Reynolds number 0.5; 9 % at 0.1, 1;
    19 % at 0.2, 10. Too low above 0.45 near 100, by 8 % at most.

    References
    ----------
    [FayonHappel1960]

    Examples
    --------
    >>> f"{tube_drag_additive(wall_factor=1.2632, inertia_factor=1.1382):.4f}"
    '1.4014'
    """
    return wall_factor + inertia_factor - 1.0


def tube_drag_product(*, wall_factor: Numeric, inertia_factor: Numeric) -> Numeric:
    r"""Drag factor in a tube by multiplying the factors of walls and inertia.

    .. math:: K = K_0\, \phi

    Parameters
    ----------
    wall_factor : float or array, shape (..., drops) [1]
        Factor K0 of the walls at Reynolds number 0.
    inertia_factor : float or array, shape (..., drops) [1]
        Factor phi of the inertia, unbounded.

    Returns
    -------
    float or array [1]
        Factor K.

    Valid range
    -----------
    Diameter ratio 0 to 0.8, Reynolds number 0 to 100.

    Notes
    -----
    Too high against Navier-Stokes: 6 % at diameter ratio 0.05, Reynolds number 0.5; 12 % at 0.1,
    1; 45 % at 0.2, 10.

    References
    ----------
    [CommonPractice]

    Examples
    --------
    >>> f"{tube_drag_product(wall_factor=1.2632, inertia_factor=1.1382):.4f}"
    '1.4378'
    """
    return wall_factor * inertia_factor
