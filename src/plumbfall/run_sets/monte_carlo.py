"""Propagation of distributions to a run set's results (JCGM 101:2008).

The drops' mean is worked out through a local expansion of the measurement equation where that
agrees with the equation itself, and by the equation at every draw where it does not.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from plumbfall.estimate import Estimate
from plumbfall.run_sets.drawn import Drawn, compare
from plumbfall.run_sets.result import SetColumns
from plumbfall.run_sets.set_model import SetModel
from plumbfall.uncertainty.draw_pool import DrawPool
from plumbfall.uncertainty.local_expansion import LocalExpansion, expand
from plumbfall.uncertainty.monte_carlo import run_monte_carlo

__all__ = ["draw_run_set"]

Numbers = NDArray[np.float64]
Codes = NDArray[np.intp]


def draw_run_set(
    sets: SetColumns,
    run_set: int,
    used: Codes,
    *,
    draws: int | str,
    seed: int,
    block: int | None = None,
    pool: DrawPool | None = None,
) -> Drawn:
    """Propagate distributions to the results of one run set.

    Parameters
    ----------
    sets : SetColumns
        The columns of every run set.
    run_set : int
        Which one; it has a viscosity.
    used : array of int
        Places of its used drops.
    draws : int or "auto"
        How many, or as many as validate the linear interval (JCGM 101:2008, 8.2).
    seed : int
        Not below zero. Run sets with one seed share the draws of what they share.
    block : int, optional
        Draws made at a time; it changes memory and speed, not the result.
    pool : DrawPool, optional
        Draws that run sets share, of this seed and number of draws.

    Returns
    -------
    Drawn
        Intervals of every quantity, and whether the linear ones agree with them.

    Raises
    ------
    InputError
        For inputs that cannot be drawn.
    """
    model = SetModel(sets, run_set, used)
    expansion = _expansion(model, sets, run_set, seed)
    found = run_monte_carlo(
        model if expansion is None else ExpandedModel(model, expansion),
        model.inputs.estimates,
        draws=draws,
        seed=seed,
        coverage=sets.outputs.coverage,
        tolerance_part=0.2,
        block=block,
        pool=pool,
    )
    return compare(found, model.quantities, sets.outputs, run_set)


def _expansion(model: SetModel, sets: SetColumns, run_set: int, seed: int) -> LocalExpansion | None:
    """Expand what lies before the scatter, which is added to it as it is drawn."""
    inputs = list(model.inputs.estimates)
    if model.inputs.scatter >= 0:
        inputs[model.inputs.scatter] = Estimate(0.0)
    relative = float(sets.scatter.u[run_set] / sets.scatter.mean[run_set])
    return expand(model.log_mean, inputs, seed=seed, beside=relative)


class ExpandedModel:
    """A run set's model with the drops' mean from its expansion, near the estimates."""

    def __init__(self, model: SetModel, expansion: LocalExpansion) -> None:
        self._model, self._expansion = model, expansion

    def __call__(self, drawn: Numbers) -> Numbers:
        """Return the quantities of the draws, as the model does."""
        log_mean = self._expansion(drawn)
        far = self._expansion.beyond(drawn)
        if len(far):
            log_mean[far] = self._model.log_mean(np.ascontiguousarray(drawn[:, far]))
        return self._model.quantities_of(drawn, np.exp(log_mean))
