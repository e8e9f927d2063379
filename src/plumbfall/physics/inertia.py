"""Drag of a ball in an unbounded liquid: the inertia factor by author.

Each law is the drag over Stokes' drag, Cd Re / 24, a function of the Reynolds number on the
diameter. None checks its argument; :func:`plumbfall.physics.inertia_factor` does, by the registry.
"""

from __future__ import annotations

import numpy as np
from numpy.polynomial import Polynomial
from numpy.typing import NDArray

from plumbfall.physics.numeric import Numeric

__all__ = [
    "ABRAHAM",
    "BROWN_LAWLER",
    "CLIFT_BOUNDS",
    "CLIFT_LOG_DRAG",
    "COMPACT",
    "OSEEN",
    "SCHILLER_NAUMANN",
    "inertia_factor_abraham",
    "inertia_factor_brown_lawler",
    "inertia_factor_clift_grace_weber",
    "inertia_factor_compact",
    "inertia_factor_oseen",
    "inertia_factor_schiller_naumann",
    "inertia_factor_stokes",
    "reynolds_of_drag_abraham",
]

OSEEN = 3.0 / 16.0
COMPACT = (0.70431, 0.70729, 0.56393)
SCHILLER_NAUMANN = (0.15, 0.687)
ABRAHAM = 9.06
BROWN_LAWLER = (0.15, 0.681, 0.407, 8710.0)
CLIFT_BOUNDS = (0.01, 20.0, 260.0, 1500.0)
CLIFT_LOG_DRAG = (
    Polynomial((1.6435, -1.1242, 0.1558)),
    Polynomial((-2.4571, 2.5558, -0.9295, 0.1049)),
)


def inertia_factor_stokes(*, reynolds: Numeric) -> Numeric:
    r"""Inertia factor without inertia.

    .. math:: \phi = 1

    Parameters
    ----------
    reynolds : float or array, shape (..., drops) [1]
        Reynolds number on the diameter, Re.

    Returns
    -------
    float or array [1]
        Factor phi, at least 1, same shape as the input.

    Valid range
    -----------
    Reynolds number 0 to 1; unbounded liquid.

    Notes
    -----
    Error -0.19 % at 0.01, -1.7 % at 0.1, -12 % at 1 against Navier-Stokes. Common practice: the
    drag coefficient is the straight line 24/Re below 1.

    References
    ----------
    [Stokes1851]

    Examples
    --------
    >>> f"{inertia_factor_stokes(reynolds=0.5):.4f}"
    '1.0000'
    """
    return np.ones_like(reynolds, dtype=np.float64)[()]


def inertia_factor_oseen(*, reynolds: Numeric) -> Numeric:
    r"""Inertia factor by Oseen's first-order law.

    .. math:: \phi = 1 + \tfrac{3}{16} Re

    Parameters
    ----------
    reynolds : float or array, shape (..., drops) [1]
        Reynolds number on the diameter, Re.

    Returns
    -------
    float or array [1]
        Factor phi, at least 1, same shape as the input.

    Valid range
    -----------
    Reynolds number 0 to 2; unbounded liquid.

    Notes
    -----
    Error +0.13 % at 0.1, +1.6 % at 0.5, +4.3 % at 1, +11 % at 2 against Navier-Stokes.

    References
    ----------
    [Oseen1910]

    Examples
    --------
    >>> f"{inertia_factor_oseen(reynolds=1.0):.4f}"
    '1.1875'
    """
    return 1.0 + OSEEN * reynolds


def inertia_factor_compact(*, reynolds: Numeric) -> Numeric:
    r"""Inertia factor by a compact fit to Navier-Stokes values.

    .. math:: \phi = 1 + \tfrac{3}{16} Re\,(1 + 0.70431 Re^{0.70729})^{-0.56393}

    Parameters
    ----------
    reynolds : float or array, shape (..., drops) [1]
        Reynolds number on the diameter, Re.

    Returns
    -------
    float or array [1]
        Factor phi, at least 1, same shape as the input.

    Valid range
    -----------
    Reynolds number 0 to 100; unbounded liquid.

    Notes
    -----
    Within 0.10 % of Navier-Stokes to 100; smooth, with Oseen's slope at 0. The default.

    References
    ----------
    [Plumbfall]

    Examples
    --------
    >>> f"{inertia_factor_compact(reynolds=1.0):.4f}"
    '1.1388'
    """
    scale, power, root = COMPACT
    return 1.0 + OSEEN * reynolds * (1.0 + scale * reynolds**power) ** -root


def inertia_factor_schiller_naumann(*, reynolds: Numeric) -> Numeric:
    r"""Inertia factor by Schiller and Naumann.

    .. math:: \phi = 1 + 0.15 Re^{0.687}

    Parameters
    ----------
    reynolds : float or array, shape (..., drops) [1]
        Reynolds number on the diameter, Re.

    Returns
    -------
    float or array [1]
        Factor phi, at least 1, same shape as the input.

    Valid range
    -----------
    Reynolds number 0 to 800; unbounded liquid.

    Notes
    -----
    Error +1.3 % at 0.1, +1.6 % at 0.5, -0.1 % at 2, -3.6 % at 10, -4.0 % at 20, +0.3 % at 100
    against Navier-Stokes.

    References
    ----------
    [SchillerNaumann1933]

    Examples
    --------
    >>> f"{inertia_factor_schiller_naumann(reynolds=1.0):.4f}"
    '1.1500'
    """
    scale, power = SCHILLER_NAUMANN
    return 1.0 + scale * reynolds**power


def inertia_factor_clift_grace_weber(*, reynolds: Numeric) -> Numeric:
    r"""Inertia factor by the piecewise fit of Clift, Grace and Weber.

    .. math::

        \phi = \begin{cases}
        1 + \tfrac{3}{16} Re & Re \le 0.01 \\
        1 + 0.1315 Re^{0.82 - 0.05 w} & Re < 20 \\
        1 + 0.1935 Re^{0.6305} & Re < 260 \\
        Re\, C_d / 24, \; \log_{10} C_d = 1.6435 - 1.1242 w + 0.1558 w^2 & Re < 1500 \\
        Re\, C_d / 24, \; \log_{10} C_d = -2.4571 + 2.5558 w - 0.9295 w^2 + 0.1049 w^3 & Re \ge 1500
        \end{cases} \quad w = \log_{10} Re

    Parameters
    ----------
    reynolds : float or array, shape (..., drops) [1]
        Reynolds number on the diameter, Re.

    Returns
    -------
    float or array [1]
        Factor phi, at least 1, same shape as the input.

    Valid range
    -----------
    Reynolds number 0 to 12 000; unbounded liquid.

    Notes
    -----
    Error +0.03 % at 0.1, -0.59 % at 1, -1.5 % at 5, +0.6 % at 20, -0.1 % at 100 against
    Navier-Stokes. Steps of some tenths of a percent where the pieces meet.

    References
    ----------
    [Clift1978]

    Examples
    --------
    >>> f"{inertia_factor_clift_grace_weber(reynolds=1.0):.4f}"
    '1.1315'
    """
    re = np.asarray(reynolds, dtype=np.float64)
    w = np.log10(np.maximum(re, CLIFT_BOUNDS[0]))
    middle, high = (re / 24.0 * 10.0 ** polynomial(w) for polynomial in CLIFT_LOG_DRAG)
    pieces = (
        1.0 + OSEEN * re,
        1.0 + 0.1315 * re ** (0.82 - 0.05 * w),
        1.0 + 0.1935 * re**0.6305,
        middle,
    )
    factor: Numeric = np.select(clift_pieces(re), pieces, high)[()]
    return factor


def inertia_factor_brown_lawler(*, reynolds: Numeric) -> Numeric:
    r"""Inertia factor by Brown and Lawler.

    .. math:: \phi = 1 + 0.15 Re^{0.681} + \frac{0.407 Re / 24}{1 + 8710/Re}

    Parameters
    ----------
    reynolds : float or array, shape (..., drops) [1]
        Reynolds number on the diameter, Re.

    Returns
    -------
    float or array [1]
        Factor phi, at least 1, same shape as the input.

    Valid range
    -----------
    Reynolds number 0 to 200 000; unbounded liquid.

    Notes
    -----
    Error +1.4 % at 0.1, +1.0 % at 1, -2.6 % at 5, -4.9 % at 20, -1.4 % at 100 against
    Navier-Stokes.

    References
    ----------
    [BrownLawler2003]

    Examples
    --------
    >>> f"{inertia_factor_brown_lawler(reynolds=1.0):.4f}"
    '1.1500'
    """
    scale, power, plateau, turn = BROWN_LAWLER
    return 1.0 + scale * reynolds**power + plateau / 24.0 * reynolds**2 / (reynolds + turn)


def inertia_factor_abraham(*, reynolds: Numeric) -> Numeric:
    r"""Inertia factor by Abraham's boundary-layer argument.

    .. math:: \phi = (1 + \sqrt{Re} / 9.06)^2

    Parameters
    ----------
    reynolds : float or array, shape (..., drops) [1]
        Reynolds number on the diameter, Re.

    Returns
    -------
    float or array [1]
        Factor phi, at least 1, same shape as the input.

    Valid range
    -----------
    Reynolds number 0 to 5000; unbounded liquid.

    Notes
    -----
    Error +5.3 % at 0.1, +8.3 % at 1, +4.5 % at 5, +1.4 % at 10, -3.5 % at 50 against Navier-Stokes.

    References
    ----------
    [Abraham1970]

    Examples
    --------
    >>> f"{inertia_factor_abraham(reynolds=1.0):.4f}"
    '1.2329'
    """
    factor: Numeric = (1.0 + np.sqrt(reynolds) / ABRAHAM) ** 2
    return factor


def reynolds_of_drag_abraham(*, drag_coefficient: Numeric) -> Numeric:
    r"""Reynolds number that goes with a drag coefficient, by Abraham's law turned round.

    .. math:: Re = \left[\frac{9.06}{\sqrt{9.06^2 C_d / 24} - 1}\right]^2

    Parameters
    ----------
    drag_coefficient : float or array, shape (..., drops) [1]
        Drag over (density of the liquid times speed squared times ball area) / 2.

    Returns
    -------
    float or array [1]
        Reynolds number on the diameter.

    Valid range
    -----------
    Drag coefficient above 0.2924, where the law levels off; unbounded liquid.

    Notes
    -----
    Explicit, so it tells the size of a Reynolds number that is beyond every law for a tube.

    References
    ----------
    [Abraham1970]

    Examples
    --------
    >>> phi = inertia_factor_abraham(reynolds=50.0)
    >>> f"{reynolds_of_drag_abraham(drag_coefficient=24 / 50.0 * phi):.1f}"
    '50.0'
    """
    reynolds: Numeric = (ABRAHAM / (np.sqrt(ABRAHAM**2 * drag_coefficient / 24.0) - 1.0)) ** 2
    return reynolds


def clift_pieces(reynolds: NDArray[np.float64]) -> list[NDArray[np.bool_]]:
    """Where the pieces of Clift, Grace and Weber hold: the first that is true, else the last.

    The published pieces share their ends; a shared one goes to the upper piece, as their errors
    were measured.
    """
    first, *others = CLIFT_BOUNDS
    return [reynolds <= first, *(reynolds < bound for bound in others)]
