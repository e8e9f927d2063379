"""Look-ups of the exact creeping-flow results: wall factor and off-axis coefficient.

The numbers are computed by ``plumbfall.flow`` and ship as tables. Each look-up returns the value
and its derivatives, taken from one smooth function, so that they agree with each other.
Outside its limits a look-up returns NaN: whoever calls it checks the range and says so.
"""

from __future__ import annotations

from functools import cache

import numpy as np
from numpy.polynomial import chebyshev
from numpy.typing import NDArray

from plumbfall.physics.numeric import Numeric
from plumbfall.physics.piecewise import Piecewise
from plumbfall.physics.tables import shipped_table

__all__ = [
    "OFF_AXIS_OFFSET_LIMITS",
    "WALL_FACTOR_RATIO_LIMITS",
    "creeping_wall_factor",
    "off_axis_coefficient",
]

Array = NDArray[np.float64]

WALL_FACTOR_RATIO_LIMITS = (0.0, 0.95)
"""Diameter ratios between which the wall factor is known."""

OFF_AXIS_OFFSET_LIMITS = (0.0, 0.9)
"""Distances from the axis, in bore radii, between which the off-axis coefficient is known."""

_LUBRICATION_POWER = 2.5  # the drag in a closing gap grows as the gap to this power


@cache
def _wall_exponent() -> Piecewise:
    """(ln K0 + 2.5 ln(1 - ratio)) / ratio: smooth from 0, Faxén's slope less 2.5, to the limit."""
    table = shipped_table("wall_factor").arrays
    ratio, factor = table["diameter_ratio"], table["wall_factor"]
    low, high = WALL_FACTOR_RATIO_LIMITS
    exponent = (np.log(factor) + _LUBRICATION_POWER * np.log1p(-ratio)) / ratio
    series = chebyshev.Chebyshev.fit(ratio, exponent, ratio.size - 1, domain=[low, high])
    return Piecewise(series, low=low, high=high, pieces=256, degree=4)


def creeping_wall_factor(diameter_ratio: Numeric) -> tuple[Numeric, Numeric]:
    r"""Drag on a ball on the axis of a long tube over its Stokes drag, at Reynolds number 0.

    .. math:: \ln K_0 = \lambda\, g(\lambda) - \tfrac52 \ln(1 - \lambda)

    Parameters
    ----------
    diameter_ratio : float or array, shape (..., drops) [1]
        Ball diameter over tube bore, symbol lambda.

    Returns
    -------
    tuple of two floats or arrays [1]
        Factor K0, and its logarithmic sensitivity dlnK0/dln(lambda); NaN beyond the limits.

    Valid range
    -----------
    Diameter ratio 0 to 0.95; Reynolds number 0; ball on the axis, far from the ends of the tube.

    Notes
    -----
    Interpolates the table of ``plumbfall.flow.creeping_tube`` to a relative error below 1e-9.

    References
    ----------
    [Faxen1922], [HabermanSayre1958], [Bohlin1960]

    Examples
    --------
    >>> factor, sensitivity = creeping_wall_factor(0.1)
    >>> f"{factor:.7f} {sensitivity:.3f}"
    '1.2632139 0.258'
    """
    low, high = WALL_FACTOR_RATIO_LIMITS
    ratio = np.asarray(diameter_ratio, dtype=float)
    ratio = np.where((ratio >= low) & (ratio <= high), ratio, np.nan)
    exponent, slope = _wall_exponent()(ratio)
    factor = np.exp(ratio * exponent - _LUBRICATION_POWER * np.log1p(-ratio))
    sensitivity = ratio * (exponent + ratio * slope + _LUBRICATION_POWER / (1.0 - ratio))
    if ratio.ndim == 0:
        return float(factor), float(sensitivity)
    return factor, sensitivity


@cache
def _off_axis_product() -> Piecewise:
    """Product f (1 - offset^2) over offset^2: smooth, as f is even and grows as 1/distance."""
    table = shipped_table("off_axis_coefficient").arrays
    square = table["offset_ratio"] ** 2
    domain = [limit**2 for limit in OFF_AXIS_OFFSET_LIMITS]
    product = table["coefficient"] * (1.0 - square)
    series = chebyshev.Chebyshev.fit(square, product, square.size - 1, domain=domain)
    return Piecewise(series, low=domain[0], high=domain[1], pieces=64, degree=5)


def off_axis_coefficient(offset_ratio: Numeric) -> tuple[Numeric, Numeric]:
    r"""Coefficient f of the drag on a small ball off the axis of a long tube.

    .. math:: F = 6\pi\eta a v / (1 - f(\beta)\lambda)

    Parameters
    ----------
    offset_ratio : float or array, shape (..., drops) [1]
        Distance of the ball's centre from the axis over the bore radius, symbol beta.

    Returns
    -------
    tuple of two floats or arrays [1]
        Coefficient f, and its slope df/dbeta; NaN beyond the limits.

    Valid range
    -----------
    Offset 0 to 0.9; diameter ratio small, and small against 1 - beta; Reynolds number 0; ball
    falling along the tube and free to turn.

    Notes
    -----
    First order in the diameter ratio: what it leaves out is of third order on the axis.
    Interpolates the table of ``plumbfall.flow.off_axis`` to a relative error below 1e-8.

    References
    ----------
    [HappelBrenner1965]

    Examples
    --------
    >>> f"{off_axis_coefficient(0.0)[0]:.5f} {off_axis_coefficient(0.4)[0]:.5f}"
    '2.10444 2.04405'
    """
    low, high = OFF_AXIS_OFFSET_LIMITS
    offset = np.asarray(offset_ratio, dtype=float)
    offset = np.where((offset >= low) & (offset <= high), offset, np.nan)
    square = offset**2
    product, product_slope = _off_axis_product()(square)
    coefficient = product / (1.0 - square)
    slope = 2.0 * offset * (product_slope + coefficient) / (1.0 - square)
    if offset.ndim == 0:
        return float(coefficient), float(slope)
    return coefficient, slope
