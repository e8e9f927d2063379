"""Meridian half-plane between a ball on the axis and its tube, cut into curved quadrilaterals.

Lengths are in ball radii, the ball is centred at the origin and the liquid moves towards
positive z. Inside the box of height 2 R about the ball, R the tube radius, the elements follow
rays from the centre, their radii spaced in ln r: a tube a thousand times wider than the ball
costs little more than one that it nearly fills. Rays that leave through the lower or upper face
of the box go on as lines along the tube.

Every element has a pair of whole numbers: its sector of polar angle, from the downstream axis
round to the upstream axis, and its layer outward from the ball (and on along the tube).
Neighbours in these numbers are neighbours in space, so that numbering nodes is counting.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

__all__ = ["MeshSettings", "NodeNumbers", "TubeMesh", "tube_mesh"]

Array = NDArray[np.float64]
Indices = NDArray[np.intp]

_CORNER = math.pi / 4.0  # polar angle of the corners of the box


@dataclass(frozen=True, slots=True)
class MeshSettings:
    """How fine and how long the mesh is.

    ``fineness`` divides every element size. The two lengths are in tube radii from the centre of
    the ball. ``wake_reynolds`` is the Reynolds number whose wake the innermost sector resolves.
    """

    fineness: float = 1.0
    upstream: float = 4.0
    downstream: float = 8.0
    wake_reynolds: float = 100.0


@dataclass(frozen=True)
class NodeNumbers:
    """Numbers of the nodes of each element, shape (elements, nodes), and of those on a border.

    A node where two borders meet is in both.
    """

    nodes: Indices
    count: int
    ball: Indices
    wall: Indices
    axis: Indices
    inlet: Indices


@dataclass(frozen=True)
class TubeMesh:
    r"""Elements, each a rectangle in (angle, height) with its map to (z, rho).

    ``angles`` and ``heights`` are the sides of the rectangles, shape (elements, 2). A height up
    to 1 is the share of ln r between ball and box; beyond 1 it is the distance \|z\| over R.
    ``corners`` are the sector borders that run to the corners of the box, and on along the wall.
    """

    tube_radius: float
    sector: Indices
    layer: Indices
    angles: Array
    heights: Array
    sectors: int
    box_layers: int
    corners: tuple[int, int]

    def map_points(self, reference: Array) -> tuple[Array, Array, Array]:
        """Map reference points, shape (points, 2) in [-1, 1]^2, to every element.

        Returns z and rho, shape (elements, points), and the Jacobian matrix, shape
        (elements, points, 2, 2) with rows z, rho and columns first, second coordinate.
        """
        half_angle = 0.5 * np.diff(self.angles)
        half_height = 0.5 * np.diff(self.heights)
        angle = self.angles.mean(axis=1, keepdims=True) + half_angle * reference[:, 0]
        height = self.heights.mean(axis=1, keepdims=True) + half_height * reference[:, 1]
        z, rho = np.empty_like(angle), np.empty_like(angle)
        jacobian = np.empty((*angle.shape, 2, 2))
        inside = self.layer < self.box_layers
        for part, to_space in ((inside, _along_rays), (~inside, _along_tube)):
            z[part], rho[part], jacobian[part] = to_space(
                self.tube_radius, angle[part], height[part]
            )
        jacobian[..., 0] *= half_angle[..., None]
        jacobian[..., 1] *= half_height[..., None]
        return z, rho, jacobian

    def number_nodes(self, degree: int) -> NodeNumbers:
        """Return numbers of the nodes of a degree, shared ones once, outward running fastest."""
        step = np.arange(degree + 1)
        across = degree * self.sector[:, None, None] + step[None, :, None]
        outward = degree * self.layer[:, None, None] + step[None, None, :]
        span = degree * (self.layer.max() + 1) + 1
        keys = (across * span + outward).reshape(len(self.sector), -1)
        unique, numbers = np.unique(keys, return_inverse=True)
        across, outward = np.divmod(unique, span)
        last = degree * self.sectors
        lower, upper = (degree * corner for corner in self.corners)
        bottom = outward[across == last].max()
        wall = (outward >= degree * self.box_layers) & (across >= lower) & (across <= upper)
        return NodeNumbers(
            nodes=numbers.reshape(keys.shape),
            count=len(unique),
            ball=np.flatnonzero(outward == 0),
            wall=np.flatnonzero(wall),
            axis=np.flatnonzero((across == 0) | (across == last)),
            inlet=np.flatnonzero((across >= upper) & (outward == bottom)),
        )


def _along_rays(tube_radius: float, angle: Array, height: Array) -> tuple[Array, Array, Array]:
    cosine, sine = np.cos(angle), np.sin(angle)
    through_face = abs(cosine) >= sine
    reach = tube_radius / np.where(through_face, abs(cosine), sine)
    # d ln(reach) / d angle
    bend = np.divide(sine, cosine, where=through_face, out=-cosine / np.maximum(sine, 1e-300))
    log_reach = np.log(reach)
    radius = np.exp(height * log_reach)
    by_angle, by_height = radius * height * bend, radius * log_reach
    jacobian = np.stack(
        [
            np.stack([by_angle * cosine - radius * sine, by_height * cosine], axis=-1),
            np.stack([by_angle * sine + radius * cosine, by_height * sine], axis=-1),
        ],
        axis=-2,
    )
    return radius * cosine, radius * sine, jacobian


def _along_tube(tube_radius: float, angle: Array, height: Array) -> tuple[Array, Array, Array]:
    side = np.where(angle < 2.0 * _CORNER, 1.0, -1.0)
    tangent = np.tan(angle)
    jacobian = np.zeros((*angle.shape, 2, 2))
    jacobian[..., 0, 1] = side * tube_radius
    jacobian[..., 1, 0] = side * tube_radius * (1.0 + tangent**2)
    return side * tube_radius * height, side * tube_radius * tangent, jacobian


def tube_mesh(*, diameter_ratio: float, settings: MeshSettings) -> TubeMesh:
    """Mesh the space between ball and tube for a diameter ratio above 0 and below 1."""
    fine = settings.fineness
    log_reach = -math.log(diameter_ratio)
    # Half-width of the wake where it leaves the box, 2 sqrt(nu z / v), as an angle at the ball.
    wake = min(2.0 * math.sqrt(2.0 * diameter_ratio / settings.wake_reynolds), 0.2)
    rear = _graded(_CORNER, wake, 2.0, 0.3, fine)
    flank = np.linspace(_CORNER, 3.0 * _CORNER, max(2, round(4 * fine)) + 1)
    front = np.linspace(3.0 * _CORNER, math.pi, max(1, round(2 * fine)) + 1)
    borders = np.concatenate((rear, flank[1:], front[1:]))
    corners = len(rear) - 1, len(rear) + len(flank) - 2
    box = _graded(log_reach, min(0.12, log_reach / 3.0), 1.35, 0.7, fine) / log_reach
    downstream = np.append(box, 1.0 + _graded(settings.downstream - 1.0, 0.5, 1.6, 2.5, fine)[1:])
    upstream = np.append(box, 1.0 + _graded(settings.upstream - 1.0, 0.6, 1.6, 1.5, fine)[1:])
    rows = []
    for sector in range(len(borders) - 1):
        heights = box
        if sector < corners[0]:
            heights = downstream
        elif sector >= corners[1]:
            heights = upstream
        rows += [
            (sector, layer, borders[sector], borders[sector + 1], *heights[layer : layer + 2])
            for layer in range(len(heights) - 1)
        ]
    table = np.array(rows)
    return TubeMesh(
        tube_radius=1.0 / diameter_ratio,
        sector=table[:, 0].astype(np.intp),
        layer=table[:, 1].astype(np.intp),
        angles=table[:, 2:4],
        heights=table[:, 4:6],
        sectors=len(borders) - 1,
        box_layers=len(box) - 1,
        corners=corners,
    )


def _graded(length: float, first: float, growth: float, largest: float, fine: float) -> Array:
    """Return borders from 0 to a length, steps growing from about ``first`` to ``largest``."""
    first, largest, growth = first / fine, largest / fine, growth ** (1.0 / fine)
    steps = [first]
    while sum(steps) < length:
        steps.append(min(steps[-1] * growth, largest))
    if len(steps) > 1 and sum(steps) - length > 0.5 * steps[-1]:
        steps.pop()
    borders = np.concatenate(([0.0], np.cumsum(steps)))
    scaled: Array = borders * (length / borders[-1])
    return scaled
