"""Linear systems of finite elements, the unknowns inside each element eliminated first.

The pattern of the sparse system is found once; only its numbers change from step to step.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray
from scipy.sparse import csc_matrix
from scipy.sparse.linalg import splu

__all__ = ["CondensedSystem"]

Array = NDArray[np.float64]
Indices = NDArray[np.intp]


class CondensedSystem:
    """Solver for element matrices of one mesh.

    Parameters
    ----------
    unknowns : int array, shape (elements, local)
        Number of each local unknown.
    inner : bool array, shape (local,)
        Which local unknowns belong to their element alone.
    free : bool array, shape (unknowns,)
        Which unknowns are not given.
    """

    def __init__(
        self, *, unknowns: Indices, inner: NDArray[np.bool_], free: NDArray[np.bool_]
    ) -> None:
        self._unknowns = unknowns
        self._inner, self._outer = np.flatnonzero(inner), np.flatnonzero(~inner)
        outer = unknowns[:, self._outer]
        self._skeleton = np.unique(outer[free[outer]])
        place = np.full(free.size, -1)
        place[self._skeleton] = np.arange(self._skeleton.size)
        self._place = place[outer]
        self._known = self._place < 0
        self._kept = ~(self._known[:, :, None] | self._known[:, None, :])
        shape = self._kept.shape
        rows = np.broadcast_to(self._place[:, :, None], shape)[self._kept]
        columns = np.broadcast_to(self._place[:, None, :], shape)[self._kept]
        size = self._skeleton.size
        keys, self._target = np.unique(columns * size + rows, return_inverse=True)
        self._rows = (keys % size).astype(np.int32)
        self._starts = np.searchsorted(keys, np.arange(size + 1) * size).astype(np.int32)
        self._count = free.size

    def solve(self, matrix: Array, loads: Array) -> Array:
        """Solve for several right-hand sides.

        Parameters
        ----------
        matrix : array, shape (elements, local, local)
            Element matrices.
        loads : array, shape (elements, local, loads)
            Element right-hand sides.

        Returns
        -------
        array, shape (unknowns, loads)
            Solutions; 0 where an unknown is given.
        """
        inner, outer = self._inner, self._outer
        coupling = matrix[:, outer[:, None], inner]
        right = np.concatenate((matrix[:, inner[:, None], outer], loads[:, inner]), axis=2)
        solved = np.linalg.solve(matrix[:, inner[:, None], inner], right)
        below, inside = solved[..., : outer.size], solved[..., outer.size :]
        reduced = matrix[:, outer[:, None], outer] - coupling @ below
        loads = loads[:, outer] - coupling @ inside
        size = self._skeleton.size
        values = np.bincount(self._target, reduced[self._kept], minlength=self._rows.size)
        system = csc_matrix((values, self._rows, self._starts), shape=(size, size))
        vectors = np.stack(
            [
                np.bincount(self._place[~self._known], load[~self._known], minlength=size)
                for load in np.moveaxis(loads, -1, 0)
            ],
            axis=-1,
        )
        found = np.zeros((self._count, loads.shape[-1]))
        found[self._skeleton] = splu(system).solve(vectors)
        border = found[self._unknowns[:, outer]]
        found[self._unknowns[:, inner]] = inside - below @ border
        return found
