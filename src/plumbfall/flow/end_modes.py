r"""Flows that die away from the end of a tube: the end modes.

In a tube of bore radius 1, :math:`\psi = F(\rho)e^{-\kappa\zeta}` with

.. math:: F = J_2(\kappa)\,\rho J_1(\kappa\rho) - J_1(\kappa)\,\rho^2 J_2(\kappa\rho)

is a creeping flow at rest on the bore if :math:`J_1^2(\kappa) = J_0(\kappa)J_2(\kappa)`. The
roots are complex, :math:`\kappa_1 = 4.466 + 1.468i`: an end is felt over about one bore radius.
Real and imaginary parts of the modes together can meet any velocity on the end.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray
from scipy.special import jv

__all__ = ["EndModes", "end_mode_roots"]

Array = NDArray[np.float64]


def end_mode_roots(count: int) -> NDArray[np.complex128]:
    """First roots of J1(x)^2 = J0(x) J2(x) in the first quadrant.

    Parameters
    ----------
    count : int
        Number of roots.

    Returns
    -------
    complex array, shape (count,)
        Roots, by Newton's method from their asymptotic form, in rising order.

    Raises
    ------
    ArithmeticError
        If a root does not settle.
    """
    real = (np.arange(count) + 1.5) * np.pi
    roots = real + 0.5j * np.log(4.0 * real)
    for _ in range(30):
        j0, j1, j2 = jv(0, roots), jv(1, roots), jv(2, roots)
        excess = j1 * j1 - j0 * j2
        change = excess / (2.0 * (j1 * j1 - excess) / roots)
        roots = roots - change
        if np.abs(change).max() < 1e-13 * np.abs(roots).max():
            return np.asarray(roots, dtype=np.complex128)
    raise ArithmeticError("a root of the end modes did not settle")


class EndModes:
    """Velocities of the end modes at given distances from the axis.

    Parameters
    ----------
    roots : complex array, shape (modes,)
        Decay rates.
    rho : array, shape (points,)
        Distances from the axis, at most 1.
    """

    def __init__(self, *, roots: NDArray[np.complex128], rho: Array) -> None:
        self._kappa = kappa = roots[:, None]
        j1, j2 = jv(1, kappa), jv(2, kappa)
        argument = kappa * rho
        inner = jv(1, argument)
        axial = j2 * jv(0, argument) - j1 * rho * inner
        radial = j2 * inner - j1 * rho * jv(2, argument)
        self._shapes = np.stack([axial, radial]) / (j1 * j1)

    def velocities(self, *, distance: Array, above: bool = False, slope: bool = False) -> Array:
        """Axial and radial velocity of the modes, each of order one on the end.

        Parameters
        ----------
        distance : array, shape (points,) or (1,)
            Distance from the end.
        above : bool
            The end is above, so that the distance falls as z grows.
        slope : bool
            Give the derivatives along z instead.

        Returns
        -------
        array, shape (2, 2 modes, points)
            Axial and radial velocity; real parts of all modes, then imaginary parts.
        """
        sign = -1.0 if above else 1.0
        fall = np.exp(-self._kappa * distance)
        if slope:
            fall = -sign * self._kappa * fall
        both = self._shapes * fall * np.array([1.0, sign])[:, None, None]
        return np.concatenate([both.real, both.imag], axis=1)
