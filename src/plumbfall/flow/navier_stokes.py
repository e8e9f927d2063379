r"""Steady flow past a ball on the axis of an endless tube, with inertia.

The ball is at rest; the wall, and the liquid far away, move past it together, so that nothing
flows relative to the tube. The axisymmetric Navier-Stokes equations are solved by Taylor-Hood
finite elements of high degree on curved quadrilaterals (:mod:`plumbfall.flow.mesh`), by Newton's
method from creeping flow upward in the Reynolds number. Unknowns inside an element are
eliminated first; a sparse factorisation solves for those on the element borders.

The drag is the reaction: the residual of the axial momentum equation at the ball's nodes. Its
error is of the order of the square of the velocity gradient's. Raising the degree is the test of
convergence: on going from the default to one degree less the drag changes by at most 1e-5 up to
Reynolds number 10 and 5e-5 up to 100.
The flow is taken as steady and symmetric about the axis; whether it is stable is not asked.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray
from scipy.sparse import csc_matrix
from scipy.sparse.linalg import splu

from plumbfall.flow.mesh import MeshSettings, tube_mesh
from plumbfall.flow.tube_elements import TubeElements

__all__ = ["DEGREE", "TubeFlow", "tube_drag_factors"]

Array = NDArray[np.float64]
Indices = NDArray[np.intp]

DEGREE = 6
"""Degree of the velocity polynomials used for the shipped table."""

_CLOSE = 1e-6  # of a Newton step; the next one would be its square
_MOST_STEPS = 15
_SAFE_REYNOLDS = 5.0  # Newton's method gets here from creeping flow
_SAFE_GROWTH = 3.0  # and from one Reynolds number to this multiple of it


class TubeFlow:
    """Flow at one diameter ratio, carried from one Reynolds number to the next.

    Parameters
    ----------
    diameter_ratio : float
        Ball diameter over bore, above 0 and below 1.
    degree : int
        Degree of the velocity polynomials, at least 2; the pressure has one less.
    settings : MeshSettings, optional
        Fineness and lengths of the mesh.
    """

    def __init__(
        self,
        *,
        diameter_ratio: float,
        degree: int = DEGREE,
        settings: MeshSettings | None = None,
    ) -> None:
        mesh = tube_mesh(diameter_ratio=diameter_ratio, settings=settings or MeshSettings())
        self._elements = TubeElements(mesh, degree)
        velocity, pressure = mesh.number_nodes(degree), mesh.number_nodes(degree - 1)
        count = velocity.count
        self._unknowns = np.concatenate(
            (velocity.nodes, count + velocity.nodes, 2 * count + pressure.nodes), axis=1
        )
        self._velocities = 2 * count
        self._ball = velocity.ball
        self._state = np.zeros(2 * count + pressure.count)
        self._state[velocity.wall] = self._state[velocity.inlet] = 1.0
        given = np.concatenate((velocity.ball, velocity.wall, velocity.inlet))
        free = np.ones(self._state.size, dtype=bool)
        free[given] = free[count + given] = free[count + velocity.axis] = False
        self._inner, self._outer = _split(degree)
        outer = self._unknowns[:, self._outer]
        self._skeleton = np.unique(outer[free[outer]])
        place = np.full(self._state.size, -1)
        place[self._skeleton] = np.arange(self._skeleton.size)
        self._place = place[outer]
        self._reynolds: float | None = None

    @property
    def size(self) -> int:
        """Number of unknowns."""
        return self._state.size

    def drag_factor(self, reynolds: float) -> float:
        """Drag over the Stokes drag 3 pi eta d v at a Reynolds number v d / nu, 0 included.

        Starts from the last flow solved, so that a series is best asked for upward.

        Raises
        ------
        ArithmeticError
            If Newton's method does not converge.
        """
        if self._reynolds is None:
            self._converge(0.0)
        assert self._reynolds is not None
        while reynolds > (step := max(_SAFE_GROWTH * self._reynolds, _SAFE_REYNOLDS)):
            self._converge(step)
        self._converge(reynolds)
        residual = self._elements.residual(self._state[self._unknowns], reynolds / 2.0)
        total = np.bincount(self._unknowns.ravel(), residual.ravel(), minlength=self.size)
        # The weights lack 2 pi: the drag is 2 pi times the sum, in units of eta a v.
        return float(-total[self._ball].sum() / 3.0)

    def _converge(self, reynolds: float) -> None:
        for _ in range(_MOST_STEPS):
            if self._newton_step(reynolds / 2.0) < _CLOSE:
                self._reynolds = reynolds
                return
        raise ArithmeticError(f"no steady flow found at Reynolds number {reynolds:g}")

    def _newton_step(self, reynolds: float) -> float:
        """Correct the state and return the largest change of a velocity on element borders."""
        local = self._state[self._unknowns]
        matrix = self._elements.tangent(local, reynolds)
        load = self._elements.residual(local, reynolds)
        inner, outer, place = self._inner, self._outer, self._place
        coupling = matrix[:, outer[:, None], inner]
        right = np.concatenate((matrix[:, inner[:, None], outer], load[:, inner, None]), axis=2)
        solved = np.linalg.solve(matrix[:, inner[:, None], inner], right)
        reduced = matrix[:, outer[:, None], outer] - coupling @ solved[..., :-1]
        load = load[:, outer] - (coupling @ solved[..., -1:])[..., 0]
        known = place < 0
        rows = np.broadcast_to(place[:, :, None], reduced.shape)
        columns = np.broadcast_to(place[:, None, :], reduced.shape)
        kept = ~(known[:, :, None] | known[:, None, :])
        size = self._skeleton.size
        system = csc_matrix((reduced[kept], (rows[kept], columns[kept])), shape=(size, size))
        vector = np.bincount(place[~known], load[~known], minlength=size)
        change = -splu(system).solve(vector)
        border = np.where(known, 0.0, change[place])
        self._state[self._skeleton] += change
        within = solved[..., -1] + (solved[..., :-1] @ border[..., None])[..., 0]
        self._state[self._unknowns[:, inner]] -= within
        return float(abs(change[self._skeleton < self._velocities]).max())


def _split(degree: int) -> tuple[Indices, Indices]:
    """Local unknowns strictly inside an element, and those on its border."""

    def inside(order: int) -> NDArray[np.bool_]:
        flag = np.zeros((order + 1, order + 1), dtype=bool)
        flag[1:-1, 1:-1] = True
        return flag.ravel()

    flag = np.concatenate((inside(degree), inside(degree), inside(degree - 1)))
    return np.flatnonzero(flag), np.flatnonzero(~flag)


def tube_drag_factors(
    *,
    diameter_ratio: float,
    reynolds: Sequence[float],
    degree: int = DEGREE,
    settings: MeshSettings | None = None,
) -> Array:
    """Drag on a ball in a tube over its Stokes drag, at several Reynolds numbers.

    Parameters
    ----------
    diameter_ratio : float [1]
        Ball diameter over bore, above 0 and below 1.
    reynolds : sequence of float, shape (n,) [1]
        Reynolds numbers v d / nu, in rising order.
    degree : int
        Degree of the velocity polynomials.
    settings : MeshSettings, optional
        Fineness and lengths of the mesh.

    Returns
    -------
    array, shape (n,) [1]
        Drag over 3 pi eta d v.

    Raises
    ------
    ArithmeticError
        If Newton's method does not converge.
    """
    flow = TubeFlow(diameter_ratio=diameter_ratio, degree=degree, settings=settings)
    return np.array([flow.drag_factor(float(number)) for number in reynolds])
