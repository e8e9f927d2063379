r"""Creeping flows that decay away from a point on the axis: the multipoles of a ball.

Axisymmetric creeping flow has a stream function :math:`\psi` with
:math:`u_z = \rho^{-1}\partial_\rho\psi` and :math:`u_\rho = -\rho^{-1}\partial_z\psi`. With the
decaying harmonics :math:`\varphi_n = P_n(\cos\theta)/r^{n+1}`, every flow outside a ball is a
sum of

* point forces and their axial derivatives, :math:`\psi = \rho^2\varphi_n`, and
* dipoles and their axial derivatives, :math:`\psi = -\rho\,\partial_\rho\varphi_n`.

Only the first of the first kind carries a force. The orders are scaled by the ball radius so that
each has a velocity of order one on the ball; lengths are in any one unit.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

__all__ = ["legendre", "multipole_velocities"]

Array = NDArray[np.float64]


def legendre(highest: int, cosine: Array) -> tuple[Array, Array]:
    """Legendre polynomials of orders 0 to ``highest`` and their derivatives.

    Parameters
    ----------
    highest : int
        Highest order, at least 1.
    cosine : array, shape (points,)
        Argument between -1 and 1.

    Returns
    -------
    tuple of two arrays, shape (highest + 1, points)
        Polynomials and first derivatives.
    """
    values = np.empty((highest + 1, cosine.size))
    slopes = np.empty_like(values)
    values[0], values[1] = 1.0, cosine
    slopes[0], slopes[1] = 0.0, 1.0
    for n in range(1, highest):
        values[n + 1] = ((2 * n + 1) * cosine * values[n] - n * values[n - 1]) / (n + 1)
        slopes[n + 1] = slopes[n - 1] + (2 * n + 1) * values[n]
    return values, slopes


def multipole_velocities(
    *, orders: NDArray[np.int_], radius: float, rho: Array, z: Array
) -> tuple[Array, Array]:
    r"""Velocities of the scaled multipoles of a ball centred at the origin.

    Stream functions :math:`\rho^2\varphi_n a^{n+1}/(n+1)` (forces) and
    :math:`-\rho\,\partial_\rho\varphi_n a^{n+3}/((n+1)(n+2))` (dipoles).

    Parameters
    ----------
    orders : int array, shape (orders,)
        Orders n.
    radius : float
        Ball radius a.
    rho, z : array, shape (points,)
        Distance from the axis, and along it from the centre.

    Returns
    -------
    tuple of two arrays, shape (2, orders, points)
        Axial and radial velocity of the forces, and of the dipoles.
    """
    r = np.hypot(rho, z)
    cosine, sine = z / r, rho / r
    values, slopes = legendre(int(orders.max()) + 2, cosine)
    n = orders[:, None]
    shrink = (radius / r) ** (n + 1)
    forces = shrink * np.stack(
        [((1 - n) * values[orders] / (n + 1) + cosine * values[orders + 1]),
         sine * values[orders + 1]]
    )  # fmt: skip
    dipoles = (
        shrink
        * (radius / r) ** 2
        * np.stack([values[orders + 2], sine * slopes[orders + 2] / (n + 2)])
    )
    return forces, dipoles
