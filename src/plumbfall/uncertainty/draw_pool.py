"""Draws that several propagations share, made once.

Run sets of one bench share most inputs, and by the rule of names they share their draws too.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from plumbfall.estimate import Estimate
from plumbfall.uncertainty.distributions import Stream, open_stream

__all__ = ["DrawPool", "Replay"]

Numbers = NDArray[np.float64]

ROOM = 64_000_000
"""Bytes of draws that are kept at most."""


class Replay:
    """Draws of one input that were made before, in order."""

    def __init__(self, draws: Numbers) -> None:
        self._draws, self._at = draws, 0

    def fill(self, out: Numbers) -> None:
        """Fill with the next draws, shape (draws,)."""
        out[:] = self._draws[self._at : self._at + len(out)]
        self._at += len(out)


class DrawPool:
    """The first ``draws`` draws of every named input that was asked for, within ``ROOM``."""

    def __init__(self, *, draws: int, seed: int) -> None:
        self.draws, self.seed = draws, seed
        self._made: dict[Estimate, Numbers] = {}

    def stream(self, estimate: Estimate, place: int) -> Stream | Replay:
        """Return an input's draws from the beginning, from the pool where there is room."""
        stream = open_stream(estimate, seed=self.seed, place=place)
        if not estimate.name:
            return stream
        if estimate not in self._made:
            if (len(self._made) + 1) * self.draws * 8 > ROOM:
                return stream
            self._made[estimate] = np.empty(self.draws)
            stream.fill(self._made[estimate])
        return Replay(self._made[estimate])
