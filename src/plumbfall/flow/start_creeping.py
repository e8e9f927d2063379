r"""A ball released from rest on the axis of an endless tube, without inertia of convection: exact.

Linear unsteady flow at each Laplace frequency s is solved as steady creeping flow is in
``creeping_tube``: multipoles at the ball's centre with the wall's answers (``unsteady_waves``),
no slip on the ball by least squares. Its drag D(s) contains the steady drag, the added mass and
the history force, as the walls change them. The ball's equation of motion

.. math:: M s\,\hat v + D(s)\,\hat v = W/s

is then inverted along contours (``laplace``). With :math:`W = D(0)\,v_t`, what is inverted is the
deficit :math:`1/s - \hat v/v_t`, which has no pole at 0: its last digits are as good absolutely as
its first, and its tail decays as exp(-26.37 nu t / R^2), 26.37 the square of the first zero of
the Bessel function J2. Units here: bore radius R, R^2/nu, and eta R for drag over speed.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from plumbfall.flow.creeping_tube import wall_factor
from plumbfall.flow.laplace import contours, invert
from plumbfall.flow.unsteady_waves import unsteady_velocities

__all__ = ["CreepingStart", "unsteady_drag", "unsteady_drag_of_degree"]

Array = NDArray[np.float64]
ComplexArray = NDArray[np.complex128]

_NODES = 20
_TOLERANCE = 1e-9
_BORE_TIMES = 30.0  # decay by exp(-790) there; a light or dense ball is long settled, too


def unsteady_drag_of_degree(*, diameter_ratio: float, rate: complex, degree: int) -> complex:
    """Drag over speed at a Laplace frequency, with multipoles up to a given degree.

    Parameters
    ----------
    diameter_ratio : float [1]
        Ball diameter over bore, between 0 and 1.
    rate : complex
        Laplace frequency over viscosity / bore radius^2, off the negative real axis.
    degree : int
        Highest degree of multipole, odd.

    Returns
    -------
    complex
        Drag over eta R v, the ball's own mass not counted.
    """
    degrees = np.arange(1, degree + 1, 2)
    nodes, weights = np.polynomial.legendre.leggauss(3 * degree // 4 + 8)
    cosine, root_weight = (nodes + 1.0) / 2.0, np.sqrt(weights / 2.0)
    rho, z = diameter_ratio * np.sqrt(1.0 - cosine**2), diameter_ratio * cosine
    columns = unsteady_velocities(degrees=degrees, radius=diameter_ratio, rate=rate, rho=rho, z=z)
    # (axis, unknown, point) -> (axis and point, unknown)
    matrix = (columns * root_weight).transpose(0, 2, 1).reshape(-1, 2 * degrees.size)
    unit_velocity = np.concatenate([root_weight, np.zeros_like(root_weight)])
    size = np.linalg.norm(matrix, axis=0)
    strengths = np.linalg.lstsq(matrix / size, unit_velocity, rcond=None)[0] / size
    # momentum of all liquid, less that of liquid in the ball's place
    volume = 4.0 / 3.0 * np.pi * diameter_ratio**3
    return complex(rate * (1.5 * strengths[0] - 1.0) * volume)


def unsteady_drag(
    *, diameter_ratio: float, rate: complex, tolerance: float = _TOLERANCE
) -> complex:
    """Converged drag over speed of a ball on the axis at a Laplace frequency.

    Parameters
    ----------
    diameter_ratio : float [1]
        Ball diameter over bore, above 0 and at most 0.6.
    rate : complex
        Laplace frequency over viscosity / bore radius^2, off the negative real axis.
    tolerance : float
        Relative change on adding half as many multipoles again, at which to stop.

    Returns
    -------
    complex
        Drag over eta R v, the ball's own mass not counted.

    Raises
    ------
    ArithmeticError
        If the degrees tried do not settle the result to the tolerance.
    """
    degree = 2 * int(1 + 4 * diameter_ratio / (1.0 - diameter_ratio)) + 1
    last = unsteady_drag_of_degree(diameter_ratio=diameter_ratio, rate=rate, degree=degree)
    for _ in range(6):
        degree = 2 * (3 * degree // 4 + 1) + 1
        value = unsteady_drag_of_degree(diameter_ratio=diameter_ratio, rate=rate, degree=degree)
        if abs(value - last) < tolerance * abs(value):
            return value
        last = value
    raise ArithmeticError(
        f"unsteady drag at diameter ratio {diameter_ratio} and rate {rate} unsettled by "
        f"{abs(value / last - 1.0):.1e} at degree {degree}"
    )


class CreepingStart:
    """Start from rest at one diameter ratio, for balls of any density.

    Times are viscous times of the ball, 4 nu t / d^2, as that is what the start is made of. Thirty
    viscous times of the bore, 30 R^2/nu, after the release nothing is missing any more.

    Parameters
    ----------
    diameter_ratio : float
        Ball diameter over bore, above 0 and at most 0.6.
    first : float
        Earliest time that will be asked for.
    """

    def __init__(self, *, diameter_ratio: float, first: float = 1e-3) -> None:
        self.last = last = _BORE_TIMES / diameter_ratio**2
        self.steady_factor = wall_factor(diameter_ratio=diameter_ratio)[0]
        self._windows = contours(first=first, last=last, nodes=_NODES)
        steady = 6.0 * np.pi * diameter_ratio * self.steady_factor
        self._drag = [
            np.array(
                [
                    unsteady_drag(diameter_ratio=diameter_ratio, rate=complex(rate)) / steady
                    for rate in window.nodes / diameter_ratio**2
                ]
            )
            for window in self._windows
        ]

    def deficit(self, *, time: Array, density_ratio: float) -> Array:
        """Speed still missing, 1 - v / v_t.

        Parameters
        ----------
        time : array, shape (times,) [1]
            Viscous times 4 nu t / d^2 since the release.
        density_ratio : float [1]
            Density of the ball over that of the liquid.

        Returns
        -------
        array, shape (times,) [1]
            Deficit, to 1e-9 absolute.
        """
        return invert(self._deficits(density_ratio), self._windows, self._within(time))

    def lost_time(self, *, time: Array, density_ratio: float) -> Array:
        """Integral of the deficit: how far the ball is behind one that starts at full speed.

        Parameters
        ----------
        time : array, shape (times,) [1]
            Viscous times 4 nu t / d^2 since the release.
        density_ratio : float [1]
            Density of the ball over that of the liquid.

        Returns
        -------
        array, shape (times,) [1]
            Lost distance over v_t, in viscous times, to 1e-9 of its final value.
        """
        transforms = [
            deficit / window.nodes
            for deficit, window in zip(self._deficits(density_ratio), self._windows, strict=True)
        ]
        return invert(transforms, self._windows, self._within(time))

    def _within(self, time: Array) -> Array:
        if (time < self._windows[0].first).any():
            raise ValueError(f"times before {self._windows[0].first:g} were not provided for")
        return np.minimum(time, self._windows[-1].last)

    def _deficits(self, density_ratio: float) -> list[ComplexArray]:
        inertia = 2.0 / 9.0 * density_ratio / self.steady_factor
        transforms = []
        for window, drag in zip(self._windows, self._drag, strict=True):
            s = window.nodes
            transforms.append((1.0 - 1.0 / (inertia * s + drag)) / s)
        return transforms
