"""Axisymmetric Navier-Stokes on the elements of a tube mesh: element matrices and residuals.

Lengths are in ball radii, velocities in the speed v of the stream, stresses in eta v over the
ball radius; the Reynolds number here is v times the ball *radius* over the kinematic viscosity.
Unknowns of an element come as axial velocity, radial velocity, pressure.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from plumbfall.flow.mesh import TubeMesh
from plumbfall.flow.quads import quad_element

__all__ = ["TubeElements"]

Array = NDArray[np.float64]


class TubeElements:
    """Weak form of the steady equations, the viscous term as the gradient product.

    Multiplying the momentum equation by w and its weight rho gives, element by element,
    ``Re (u . grad u) w + grad u : grad w + u_rho w_rho / rho^2 - p div w``, and the continuity
    equation ``-q div u``. On the outflow this leaves (-p + du/dn) = 0; on a ball at rest the
    boundary term is the full traction, as the velocity gradient there has no transposed part.
    """

    def __init__(self, mesh: TubeMesh, degree: int) -> None:
        element = quad_element(degree)
        _, rho, jacobian = mesh.map_points(element.points)
        reference = np.stack([element.velocity_first, element.velocity_second], axis=-1)
        gradient = np.einsum("qnr,eqrx->exqn", reference, np.linalg.inv(jacobian))
        self._weight: Array = element.weights * abs(np.linalg.det(jacobian)) * rho
        self._value = element.velocity
        self._by_z: Array = np.ascontiguousarray(gradient[:, 0])
        self._by_rho: Array = np.ascontiguousarray(gradient[:, 1])
        self._axial = slice(0, self._value.shape[1])
        self._radial = slice(self._value.shape[1], 2 * self._value.shape[1])
        self._creeping = self._creeping_matrix(element.pressure, self._value / rho[..., None])

    def tangent(self, local: Array, reynolds: float) -> Array:
        """Return the derivative of the residual, shape (elements, unknowns, unknowns)."""
        if reynolds == 0.0:
            return self._creeping
        axial, radial, gradients = self._velocity(local)
        weight = reynolds * self._weight
        carry = (weight * axial)[..., None] * self._by_z
        carry += (weight * radial)[..., None] * self._by_rho
        carried = self._value.T @ carry
        matrix = self._creeping.copy()
        for row, slopes in zip((self._axial, self._radial), gradients, strict=True):
            matrix[:, row, row] += carried
            for column, slope in zip((self._axial, self._radial), slopes, strict=True):
                sheared = (weight * slope)[..., None] * self._value
                matrix[:, row, column] += self._value.T @ sheared
        return matrix

    def residual(self, local: Array, reynolds: float) -> Array:
        """Return the residual of the weak form, shape (elements, unknowns)."""
        residual: Array = (self._creeping @ local[..., None])[..., 0]
        if reynolds != 0.0:
            axial, radial, gradients = self._velocity(local)
            weight = reynolds * self._weight
            for row, (by_z, by_rho) in zip((self._axial, self._radial), gradients, strict=True):
                residual[:, row] += (weight * (axial * by_z + radial * by_rho)) @ self._value
        return residual

    def _velocity(self, local: Array) -> tuple[Array, Array, list[list[Array]]]:
        """Velocities and their gradients at the quadrature points, shape (elements, points)."""
        parts = [local[:, self._axial], local[:, self._radial]]
        gradients = [
            [(slope @ part[..., None])[..., 0] for slope in (self._by_z, self._by_rho)]
            for part in parts
        ]
        axial, radial = (part @ self._value.T for part in parts)
        return axial, radial, gradients

    def _creeping_matrix(self, pressure: Array, over_rho: Array) -> Array:
        weight = self._weight[..., None]
        laplace = _turned(self._by_z) @ (weight * self._by_z)
        laplace += _turned(self._by_rho) @ (weight * self._by_rho)
        hoop = _turned(over_rho) @ (weight * over_rho)
        by_z = -_turned(self._by_z) @ (weight * pressure)
        by_rho = -_turned(self._by_rho + over_rho) @ (weight * pressure)
        nothing = np.zeros_like(laplace)
        corner = np.zeros((len(weight), pressure.shape[1], pressure.shape[1]))
        rows = (
            (laplace, nothing, by_z),
            (nothing, laplace + hoop, by_rho),
            (_turned(by_z), _turned(by_rho), corner),
        )
        return np.concatenate([np.concatenate(row, axis=2) for row in rows], axis=1)


def _turned(matrices: Array) -> Array:
    return np.swapaxes(matrices, -1, -2)
