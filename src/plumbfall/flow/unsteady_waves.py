r"""Unsteady creeping flow from a ball's centre in a tube, at one Laplace frequency.

Linear unsteady flow at rate s, :math:`s u = -\nabla p + \Delta u` with bore radius and
viscous time as units, is the sum of an irrotational part and one that penetrates
:math:`1/\alpha`, :math:`\alpha = \sqrt s`. Of each kind there is a multipole for every odd m,

.. math:: \psi = r^{-m}\,\sin^2\theta\,P_m'(\cos\theta), \qquad
    \psi = r\,k_m(\alpha r)\,\sin^2\theta\,P_m'(\cos\theta)

(:math:`u_z = \rho^{-1}\partial_\rho\psi`, :math:`u_\rho = -\rho^{-1}\partial_z\psi`; k_m modified
spherical Bessel functions), each a Fourier integral over waves
:math:`\rho K_1(\kappa\rho)\cos kz` with :math:`\kappa = k` or :math:`\sqrt{k^2 + s}`. The wall
answers every wave by the two that are regular on the axis, :math:`\rho I_1(k\rho)` and
:math:`\rho I_1(\sqrt{k^2 + s}\,\rho)`, so that the liquid is at rest on the bore and none flows
through a cross-section in total.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray
from scipy.special import gammaln, ive, kve

from plumbfall.flow.multipoles import legendre, multipole_velocities
from plumbfall.flow.tube_wall import wave_numbers

__all__ = ["unsteady_velocities"]

Array = NDArray[np.float64]
ComplexArray = NDArray[np.complex128]


def unsteady_velocities(
    *, degrees: NDArray[np.int_], radius: float, rate: complex, rho: Array, z: Array
) -> ComplexArray:
    """Velocities of both kinds of multipole together with the wall's answers.

    Parameters
    ----------
    degrees : int array, shape (degrees,)
        Odd m, from 1.
    radius : float
        Ball radius in bore radii; the multipoles are scaled to be of order 1 on the ball.
    rate : complex
        Laplace frequency over viscosity / bore radius^2, off the negative real axis.
    rho, z : array, shape (points,)
        Distance from the axis, and along it from the centre, in bore radii.

    Returns
    -------
    complex array, shape (2, 2 * degrees, points)
        Axial and radial velocity; irrotational multipoles first.
    """
    alpha = np.sqrt(complex(rate))
    free = np.concatenate(
        [
            multipole_velocities(orders=degrees - 1, radius=radius, rho=rho, z=z)[1],
            _penetrating(degrees, radius, alpha, rho, z),
        ],
        axis=1,
    )
    return free + _answers(degrees, radius, alpha, rho, z)


def _spherical_bessel(highest: int, argument: ComplexArray) -> ComplexArray:
    """Return exp(x) k_m(x) for m from 0, normalised to k_0 = exp(-x) / x."""
    found = np.empty((highest + 1, argument.size), dtype=np.complex128)
    found[0] = 1.0 / argument
    found[1] = (1.0 + 1.0 / argument) / argument
    for m in range(1, highest):
        found[m + 1] = found[m - 1] + (2 * m + 1) / argument * found[m]
    return found


def _penetrating(
    degrees: NDArray[np.int_], radius: float, alpha: complex, rho: Array, z: Array
) -> ComplexArray:
    r = np.hypot(rho, z)
    cosine, sine = z / r, rho / r
    values, slopes = legendre(int(degrees.max()), cosine)
    m = degrees[:, None]
    bessel = _spherical_bessel(int(degrees.max()), alpha * r)
    scale = np.exp(alpha * (radius - r)) / r / _sizes(degrees, radius, alpha)[:, None]
    outward = scale * m * (m + 1) * bessel[degrees] * values[degrees]
    onward = (
        scale * sine * slopes[degrees] * (m * bessel[degrees] + alpha * r * bessel[degrees - 1])
    )
    return np.stack([outward * cosine - onward * sine, outward * sine + onward * cosine])


def _sizes(degrees: NDArray[np.int_], radius: float, alpha: complex) -> ComplexArray:
    """Factors that bring the penetrating multipoles to order 1 on the ball."""
    bessel = _spherical_bessel(int(degrees.max()), np.array([alpha * radius]))[:, 0]
    sizes: ComplexArray = degrees * (degrees + 1) / radius * bessel[degrees]
    return sizes


def _answers(
    degrees: NDArray[np.int_], radius: float, alpha: complex, rho: Array, z: Array
) -> ComplexArray:
    top = float(degrees.max())
    k, weights = wave_numbers((top + 9.0 * np.sqrt(top) + 45.0) / (2.0 - radius))
    kappa = np.sqrt(k**2 + alpha**2)
    steep = kappa.real
    i1, j1, k1, l1 = ive(1, k), ive(1, kappa), kve(1, k), kve(1, kappa)
    # k I0(k) I1(kappa) - kappa I0(kappa) I1(k), without the terms that cancel as k goes to 0
    det = k * ive(2, k) * j1 - kappa * ive(2, kappa) * i1
    sign = (2 / np.pi) * (-1.0) ** ((degrees - 1) // 2)[:, None] * weights
    n = degrees[:, None] - 1
    # radius^(n+3) / ((n+1)(n+2)) is the scale of the irrotational multipoles
    outer = sign * radius**3 / ((n + 1) * (n + 2)) * k
    outer = outer * np.exp(n * np.log(radius * k) - gammaln(n + 1.0))
    inner = (
        sign
        * (kappa / alpha**2)
        * _legendre_slopes(degrees, np.asarray(k / alpha, dtype=np.complex128))
    )
    inner = inner / _sizes(degrees, radius, alpha)[:, None]
    # as multiples of I(k rho) exp(-k) and I(kappa rho) exp(-steep), exponents taken together
    outer, inner = outer * np.exp(-k) / det, inner / det
    waves = [
        outer * (k * kve(0, k) * j1 + k1 * kappa * ive(0, kappa)),
        -outer,
        inner * np.exp(alpha * radius - steep),
        -inner * (k * ive(0, k) * l1 + i1 * kappa * kve(0, kappa)) * np.exp(alpha * radius - kappa),
    ]
    by_k = np.concatenate([waves[0], waves[2]])
    by_kappa = np.concatenate([waves[1], waves[3]])
    along, across = np.cos(np.outer(k, z)), np.sin(np.outer(k, z))
    near = np.exp(-np.outer(k, 1.0 - rho))
    deep = np.exp(-np.outer(steep, 1.0 - rho))
    at_k, at_kappa = np.outer(k, rho), np.outer(kappa, rho)
    axial = by_k @ (k[:, None] * ive(0, at_k) * near * along)
    axial = axial + by_kappa @ (kappa[:, None] * ive(0, at_kappa) * deep * along)
    radial = by_k @ (k[:, None] * ive(1, at_k) * near * across)
    radial = radial + by_kappa @ (k[:, None] * ive(1, at_kappa) * deep * across)
    return np.stack([axial, radial])


def _legendre_slopes(degrees: NDArray[np.int_], x: ComplexArray) -> ComplexArray:
    """Slopes of the Legendre polynomials at ix, their powers of i left out: all terms positive."""
    highest = int(degrees.max())
    values = np.empty((highest + 1, x.size), dtype=np.complex128)
    slopes = np.empty_like(values)
    values[0], values[1] = 1.0, x
    slopes[0], slopes[1] = 0.0, 1.0
    for m in range(1, highest):
        values[m + 1] = ((2 * m + 1) * x * values[m] + m * values[m - 1]) / (m + 1)
        slopes[m + 1] = (2 * m + 1) * values[m] - slopes[m - 1]
    return slopes[degrees]
