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
_GRADED_POINTS = 10
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
    graded = np.concatenate([[0.0], 2.0 ** -np.arange(_GRADED_PANELS, -1, -1.0)])
    count = max(1, int(np.ceil((highest - 1.0) / panel)))
    even = np.linspace(1.0, highest, count + 1)
    parts = [_panels(graded, _GRADED_POINTS), _panels(even, _PANEL_POINTS)]
    return np.concatenate([p[0] for p in parts]), np.concatenate([p[1] for p in parts])


def _panels(edges: Array, points: int) -> tuple[Array, Array]:
    nodes, weights = np.polynomial.legendre.leggauss(points)
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
    rho : array, shape (points,)
        Distances from the axis, at most 1, at which velocities will be asked for.
    """

    def __init__(self, *, orders: NDArray[np.int_], radius: float, rho: Array) -> None:
        top = float(orders.max())
        # the integrand is k^n exp(-k (2 - rho)): a peak near k = n/(2 - rho), and its tail
        highest = (top + 9.0 * np.sqrt(top) + 45.0) / (2.0 - float(rho.max()))
        k, weights = wave_numbers(highest)
        self._k, self._orders = k[:, None], orders
        n = orders[:, None]
        amplitude = np.exp(n * np.log(radius * k) - gammaln(n + 1.0) - radius * k)
        # the two signs of the n-th derivative of cos kz
        amplitude *= (2 / np.pi) * (-1.0) ** (n // 2) * weights
        i0, i1, i2 = ive(0, k), ive(1, k), ive(2, k)
        k0, k1 = kve(0, k), kve(1, k)
        det = 2.0 * (i1 * i1 - i0 * i2)
        to_force = amplitude * radius / (n + 1)
        to_dipole = amplitude * radius**3 / ((n + 1) * (n + 2))
        # the two factors side by side, forces above dipoles
        alpha = [
            to_force * ((k0 * (2 * i2 - k * i1) - k * k1 * i2) / det),
            to_dipole * (-(k**2) * (k1 * i1 + k0 * i2) / det),
        ]
        beta = [to_force * (2 * (k0 * i2 + k1 * i1) / det), to_dipole * (2 / det)]
        self._factors = np.concatenate([np.stack(alpha), np.stack(beta)], axis=-1)

        # exponents of the scaled Bessel functions and of the amplitude, taken together: never > 0
        argument = self._k * rho
        scale = np.exp(argument + (radius - 2.0) * self._k)
        inner = [ive(order, argument) * scale for order in range(3)]
        self._axial = (2.0 * inner[0], argument * inner[1])
        self._radial = (2.0 * inner[1], argument * inner[2])

    def velocities(self, *, z: Array) -> tuple[Array, Array]:
        """Velocities of the wall's answers to forces and to dipoles.

        Parameters
        ----------
        z : array, shape (points,) or (1,)
            Distance along the axis from the centre of the multipoles.

        Returns
        -------
        tuple of two arrays, shape (2, orders, points)
            Axial and radial velocity for forces, and for dipoles.
        """
        cosine, sine = np.cos(self._k * z), np.sin(self._k * z)
        points = self._axial[0].shape[1]
        found = np.empty((2, 2, self._orders.size, points))  # kind, axis, order, point
        # u_z follows the wave of the source; u_rho is a quarter wave behind
        for odd, waves in enumerate(((cosine, sine), (sine, -cosine))):
            chosen = self._orders % 2 == odd
            if not chosen.any():
                continue
            factors = self._factors[:, chosen]
            for axis, (pair, wave) in enumerate(
                zip((self._axial, self._radial), waves, strict=True)
            ):
                found[:, axis, chosen] = factors @ np.concatenate([part * wave for part in pair])
        return found[0], found[1]
