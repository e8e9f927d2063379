r"""Creeping flow past a ball on the axis of a tube with ends: bottom, lid or free surface.

With the bore radius as unit of length the flow is the sum of

* multipoles at the ball's centre and their images in the nearer end (``reflection``), which meet
  that end's conditions however near the ball is,
* the flows by which the bore answers both, as if the tube had no end (``tube_wall``), and
* modes that die away from each end (``end_modes``) and are at rest on the bore.

No slip on the bore holds exactly. The strengths follow from least squares over no slip on the
ball and the conditions of each end not met already: no velocity at a solid end; no velocity
through a free surface and no shear along it. As the bore's answers are smooth on the scale of the
bore, few modes are wanted even when the ball nearly touches the end; the number of multipoles
follows the narrowest gap.
"""

from __future__ import annotations

from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from plumbfall.flow.end_modes import EndModes, end_mode_roots
from plumbfall.flow.multipoles import multipole_velocities
from plumbfall.flow.reflection import EXTRA_ORDERS, EndKind, reflected, slope_along
from plumbfall.flow.tube_wall import TubeWall

__all__ = ["BallInTube"]

Array = NDArray[np.float64]


class BallInTube:
    """A ball on the axis of a tube of bore radius 1, to be placed at any distance from its ends.

    Parameters
    ----------
    diameter_ratio : float [1]
        Ball diameter over bore, between 0 and 1.
    order : int
        Highest order of multipole.
    modes : int
        Number of modes of each end.
    """

    def __init__(self, *, diameter_ratio: float, order: int, modes: int) -> None:
        self._radius, self._order = diameter_ratio, order
        cosine, weights = np.polynomial.legendre.leggauss(3 * order // 2 + 12)
        self._rho = diameter_ratio * np.sqrt(1.0 - cosine**2)
        self._z, self._weight = diameter_ratio * cosine, np.sqrt(weights)
        # one order more than the images need, for the slope along the axis at a free surface
        self._orders = np.arange(order + EXTRA_ORDERS + 2)
        nodes, weights = np.polynomial.legendre.leggauss(2 * modes + 12)
        self._end_rho, self._end_weight = (nodes + 1.0) / 2.0, np.sqrt(weights / 2.0)
        self._modes = modes

    @cached_property
    def _wall_on_ball(self) -> TubeWall:
        return TubeWall(orders=self._orders, radius=self._radius, rho=self._rho)

    @cached_property
    def _wall_on_end(self) -> TubeWall:
        return TubeWall(orders=self._orders, radius=self._radius, rho=self._end_rho)

    @cached_property
    def _modes_on_ball(self) -> EndModes:
        return EndModes(roots=end_mode_roots(self._modes), rho=self._rho)

    @cached_property
    def _modes_on_end(self) -> EndModes:
        return EndModes(roots=end_mode_roots(self._modes), rho=self._end_rho)

    def _free(self, rho: Array, z: Array) -> tuple[Array, Array]:
        return multipole_velocities(orders=self._orders, radius=self._radius, rho=rho, z=z)

    def _own(self, forces: Array, dipoles: Array) -> Array:
        """Columns of the ball's own multipoles, of the orders that are unknowns."""
        count = self._order + 1
        return np.concatenate([forces[:, :count], dipoles[:, :count]], axis=1)

    def _imaged(self, forces: Array, dipoles: Array, height: float, end: EndKind) -> Array:
        return self._own(
            *reflected(forces, dipoles, height_over_radius=height / self._radius, end=end)
        )

    @cached_property
    def _ball_without_ends(self) -> Array:
        free = self._free(self._rho, self._z)
        wall = self._wall_on_ball.velocities(z=self._z)
        return self._own(free[0] + wall[0], free[1] + wall[1])

    def _drag(self, blocks: list[tuple[Array, Array]]) -> float:
        """Least squares over blocks of columns (axis, unknown, point) and point weights."""
        rows = [
            (columns * weight).transpose(0, 2, 1).reshape(-1, columns.shape[1])
            for columns, weight in blocks
        ]
        matrix = np.concatenate(rows)
        velocity = np.zeros(matrix.shape[0])
        velocity[: self._weight.size] = self._weight  # along the axis, on the ball
        size = np.linalg.norm(matrix, axis=0)
        strengths = np.linalg.lstsq(matrix / size, velocity, rcond=1e-15)[0]
        return float(strengths[0] / size[0]) * 4.0 / 3.0

    @cached_property
    def factor_without_ends(self) -> float:
        """Drag over Stokes drag in an infinite tube, with the same orders."""
        return self._drag([(self._ball_without_ends, self._weight)])

    def factor(
        self,
        *,
        distance: float,
        end: EndKind,
        length: float | None = None,
        other_end: EndKind = "solid",
    ) -> float:
        """Drag over Stokes drag at a distance from the nearer end.

        Parameters
        ----------
        distance : float [1]
            Distance of the ball's centre from the nearer end over bore radius.
        end : {"solid", "free"}
            What the nearer end is.
        length : float, optional
            Distance between the ends over bore radius; without it the tube has one end.
        other_end : {"solid", "free"}
            What the other end is.

        Returns
        -------
        float [1]
            Drag over Stokes drag.

        Raises
        ------
        ValueError
            If the ball does not fit, or the other end is the nearer one.
        """
        if distance <= self._radius:
            raise ValueError(f"a ball of radius {self._radius} does not fit at {distance}")
        if length is not None and distance > 0.5 * length * (1 + 1e-12):
            raise ValueError(f"of a tube of length {length} the other end is nearer")
        blocks = [(self._on_ball(distance, end, length), self._weight)]
        if end == "solid":
            blocks.append((self._on_near_end(distance, length), self._end_weight))
        if length is not None:
            far = self._on_far_end(distance, end, length, other_end)
            blocks.append((far, self._end_weight))
        return self._drag(blocks)

    def _on_ball(self, h: float, end: EndKind, length: float | None) -> Array:
        image_z = self._z + 2.0 * h
        free = self._free(self._rho, image_z)
        wall = self._wall_on_ball.velocities(z=image_z)
        images = self._imaged(free[0] + wall[0], free[1] + wall[1], h, end)
        columns = [self._ball_without_ends + images]
        if end == "solid":
            columns.append(self._modes_on_ball.velocities(distance=h + self._z))
        if length is not None:
            columns.append(_far_modes(self._modes_on_ball, h + self._z, end, length))
        return np.concatenate(columns, axis=1)

    def _on_near_end(self, h: float, length: float | None) -> Array:
        # multipoles and images cancel on a solid plane; what the bore answered is left
        source, mirrored = (self._wall_on_end.velocities(z=np.array([z])) for z in (-h, h))
        columns = [self._own(*source) + self._imaged(*mirrored, h, "solid")]
        columns.append(self._modes_on_end.velocities(distance=np.zeros(1)))
        if length is not None:
            columns.append(_far_modes(self._modes_on_end, np.zeros(1), "solid", length))
        return np.concatenate(columns, axis=1)

    def _on_far_end(self, h: float, end: EndKind, length: float, other_end: EndKind) -> Array:
        columns = self._far_columns(h, end, length, slope=False)
        if other_end == "free":
            # no shear instead of no velocity along the surface
            columns[1] = self._far_columns(h, end, length, slope=True)[1]
        return columns

    def _far_columns(self, h: float, end: EndKind, length: float, *, slope: bool) -> Array:
        parts = []
        for z in (length - h, length + h):
            free = self._free(self._end_rho, np.full_like(self._end_rho, z))
            wall = self._wall_on_end.velocities(z=np.array([z]))
            part = free[0] + wall[0], free[1] + wall[1]
            parts.append(slope_along(*part, radius=self._radius) if slope else part)
        columns = [self._own(*parts[0]) + self._imaged(*parts[1], h, end)]
        top = np.array([length])
        if end == "solid":
            columns.append(self._modes_on_end.velocities(distance=top, slope=slope))
        columns.append(_far_modes(self._modes_on_end, top, end, length, slope=slope))
        return np.concatenate(columns, axis=1)


def _far_modes(
    modes: EndModes, z: Array, end: EndKind, length: float, *, slope: bool = False
) -> Array:
    """Modes of the far end at a distance from the near one; mirrored in that if it is free."""
    velocities = modes.velocities(distance=length - z, above=True, slope=slope)
    if end == "free":
        velocities = velocities - modes.velocities(distance=length + z, slope=slope)
    return velocities
