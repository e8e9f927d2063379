r"""What a tube wall sends back: the flow that cancels a multipole on the bore of an infinite tube.

With the bore radius as unit of length, :math:`1/r = (2/\pi)\int_0^\infty K_0(k\rho)\cos kz\,dk`,
so a multipole of order n is a Fourier integral with weight :math:`k^n/n!`. For each wave number
the wall answers with the two regular creeping flows

.. math:: \psi = \alpha\,(2/k)\,\rho I_1(k\rho) + \beta\,\rho^2 I_2(k\rho),

whose factors follow from no slip at :math:`\rho = 1` (both :math:`\psi` and its slope vanish
there, so no liquid flows through a cross-section in total, as in a tube closed at its ends).
Written with :math:`I_2` every factor is a sum of terms of one sign: nothing cancels as k goes to 0.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray
from scipy.special import gammaln, ive, kve

__all__ = ["TubeWall", "wave_numbers"]

Array = NDArray[np.float64]

_PANEL_POINTS = 16
_GRADED_PANELS = 40  # halvings towards k = 0, where the integrands have logarithms


def wave_numbers(highest: float, *, panel: float = 2.0) -> tuple[Array, Array]:
    """Gauss-Legendre panels over wave numbers, graded towards 0.

    Parameters
    ----------
    highest : float
        Where the integrand has died out.
    panel : float
        Width of the panels above 1.

    Returns
    -------
    tuple of two arrays, shape (nodes,)
        Wave numbers and weights.
    """
    graded = 2.0 ** -np.arange(_GRADED_PANELS, -1, -1.0)
    count = max(1, int(np.ceil((highest - 1.0) / panel)))
    edges = np.concatenate([[0.0], graded, np.linspace(1.0, highest, count + 1)[1:]])
    nodes, weights = np.polynomial.legendre.leggauss(_PANEL_POINTS)
    half, middle = np.diff(edges) / 2, (edges[1:] + edges[:-1]) / 2
    return (middle[:, None] + half[:, None] * nodes).ravel(), (half[:, None] * weights).ravel()


class TubeWall:
    """Answer of the wall of an infinite tube, bore radius 1, to multipoles on its axis.

    Parameters
    ----------
    orders : int array, shape (orders,)
        Orders of the multipoles.
    radius : float
        Ball radius, which scales the multipoles as in ``multipole_velocities``.
    reach : float
        Largest distance from the axis at which velocities will be asked for, at most 1.
    """

    def __init__(self, *, orders: NDArray[np.int_], radius: float, reach: float) -> None:
        top = float(orders.max())
        # the integrand is k^n exp(-k (2 - reach)): a peak near k = n/(2 - reach), and its tail
        k, weights = wave_numbers((top + 9.0 * np.sqrt(top) + 45.0) / (2.0 - reach))
        self._k, self._radius, self._orders = k, radius, orders
        n = orders[:, None]
        amplitude = np.exp(n * np.log(radius * k) - gammaln(n + 1.0) - radius * k)
        # the two signs of the n-th derivative of cos kz
        amplitude *= (2 / np.pi) * (-1.0) ** (n // 2) * weights
        i0, i1, i2 = ive(0, k), ive(1, k), ive(2, k)
        k0, k1 = kve(0, k), kve(1, k)
        det = 2.0 * (i1 * i1 - i0 * i2)
        to_force = amplitude * radius / (n + 1)
        to_dipole = amplitude * radius**3 / ((n + 1) * (n + 2))
        self._force_alpha = to_force * ((k0 * (2 * i2 - k * i1) - k * k1 * i2) / det)
        self._force_beta = to_force * (2 * (k0 * i2 + k1 * i1) / det)
        self._dipole_alpha = to_dipole * (-(k**2) * (k1 * i1 + k0 * i2) / det)
        self._dipole_beta = to_dipole * (2 / det)

    def velocities(self, *, rho: Array, z: Array) -> tuple[Array, Array]:
        """Velocities of the wall's answers to forces and to dipoles.

        Parameters
        ----------
        rho, z : array, shape (points,)
            Distance from the axis, at most the reach, and along it from the ball's centre.

        Returns
        -------
        tuple of two arrays, shape (2, orders, points)
            Axial and radial velocity for forces, and for dipoles.
        """
        k = self._k[:, None]
        # exponents of the scaled Bessel functions and of the amplitude, taken together: never > 0
        scale = np.exp(k * (rho + self._radius - 2.0))
        i0, i1, i2 = (ive(order, k * rho) * scale for order in range(3))
        cosine, sine = np.cos(k * z), np.sin(k * z)
        forces = np.empty((2, self._orders.size, rho.size))
        dipoles = np.empty_like(forces)
        # u_z follows the wave of the source; u_rho is a quarter wave behind
        for odd, (along, across) in enumerate(((cosine, sine), (sine, -cosine))):
            chosen = self._orders % 2 == odd
            if not chosen.any():
                continue
            waves = (
                (2.0 * i0 * along, k * rho * i1 * along),
                (2.0 * i1 * across, k * rho * i2 * across),
            )
            for axis, (alpha, beta) in enumerate(waves):
                forces[axis, chosen] = (
                    self._force_alpha[chosen] @ alpha + self._force_beta[chosen] @ beta
                )
                dipoles[axis, chosen] = (
                    self._dipole_alpha[chosen] @ alpha + self._dipole_beta[chosen] @ beta
                )
        return forces, dipoles
