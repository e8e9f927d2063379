r"""Mirror images of multipoles in a plane across the axis: a solid end, or a free surface.

For a creeping flow :math:`\psi` on one side of the plane z = 0, with mirrored stream function
:math:`\psi_m(\rho, z) = \psi(\rho, -z)`,

* a free surface (no flow through it, no shear along it) needs the image :math:`-\psi_m`,
* a solid plane needs :math:`-\psi_m + 2z\,\partial_z\psi_m - z^2 E^2\psi_m`, which is again a
  creeping flow and cancels :math:`\psi` and its normal slope at z = 0 (after Lorentz 1907).

Of a multipole both are finite sums of multipoles at the mirrored centre, because
:math:`\partial_z` raises the order by one, :math:`E^2` turns forces into dipoles, and
:math:`z\,d_n = (n+1)s_{n+1} + d_{n-1}` for the stream functions s of forces and d of dipoles.
"""

from __future__ import annotations

from typing import Literal

import numpy as np
from numpy.typing import NDArray

__all__ = ["EXTRA_ORDERS", "EndKind", "reflected", "slope_along"]

Array = NDArray[np.float64]

EndKind = Literal["solid", "free"]

EXTRA_ORDERS = 2  # an image in a solid plane reaches two orders higher than its source


def reflected(
    forces: Array, dipoles: Array, *, height_over_radius: float, end: EndKind
) -> tuple[Array, Array]:
    """Flows of the images of scaled multipoles, from multipoles at the mirrored centre.

    Parameters
    ----------
    forces, dipoles : array, shape (2, orders, points)
        Velocities of the multipoles of orders 0, 1, 2, ... centred at the mirror image of the
        ball's centre, or of the wall's answers to them.
    height_over_radius : float
        Height of the ball's centre above the plane over ball radius.
    end : {"solid", "free"}
        What the plane is.

    Returns
    -------
    tuple of two arrays, shape (2, orders - EXTRA_ORDERS, points)
        Velocities of the images of the forces, and of the dipoles.
    """
    count = forces.shape[1] - EXTRA_ORDERS
    n = np.arange(count)[:, None].astype(float)
    sign = (-1.0) ** n
    if end == "free":
        return -sign * forces[:, :count], -sign * dipoles[:, :count]
    h = height_over_radius
    # orders n - 1 and n - 2; their factors vanish where there is no such order
    below = np.roll(dipoles[:, :count], 1, axis=1)
    lowest = np.roll(dipoles[:, :count], 2, axis=1)
    of_forces = sign * (
        (2 * n - 1) * forces[:, :count]
        - 2 * h * (n + 2) * forces[:, 1 : count + 1]
        + 2 * n * (n - 1) / (n + 1) * lowest
        - 4 * h * n * below
        + 2 * h**2 * (n + 2) * dipoles[:, :count]
    )
    of_dipoles = sign * (
        -(2 * n + 3) * dipoles[:, :count]
        - 2 * (n + 3) * forces[:, 2 : count + 2]
        + 2 * h * (n + 3) * dipoles[:, 1 : count + 1]
    )
    return of_forces, of_dipoles


def slope_along(forces: Array, dipoles: Array, *, radius: float) -> tuple[Array, Array]:
    """Differentiate scaled multipoles of orders 0, 1, 2, ... along the axis: one order fewer.

    Parameters
    ----------
    forces, dipoles : array, shape (2, orders, points)
        Velocities of the multipoles, or of the wall's answers to them.
    radius : float
        Ball radius that scales them.

    Returns
    -------
    tuple of two arrays, shape (2, orders - 1, points)
        Derivatives for forces, and for dipoles.
    """
    n = np.arange(forces.shape[1] - 1)[:, None].astype(float)
    return -(n + 2) / radius * forces[:, 1:], -(n + 3) / radius * dipoles[:, 1:]
