"""Propagation of distributions through any function of its inputs (JCGM 101:2008, JCGM 102:2011).

Every input has a stream of draws of its own, decided by the seed and the input's name. So results
are the same whatever the size of the blocks they are worked out in and whichever other inputs
there are, and what two calls share by name they share draw by draw.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence

import numpy as np
from numpy.typing import ArrayLike, NDArray

from plumbfall.errors import InputError
from plumbfall.estimate import Estimate
from plumbfall.uncertainty.draw_pool import DrawPool
from plumbfall.uncertainty.intervals import interval_ranks
from plumbfall.uncertainty.joint_draws import JointDraws
from plumbfall.uncertainty.monte_carlo_result import MonteCarlo, summarise
from plumbfall.uncertainty.stopping import Stability, adaptive_block

__all__ = ["DRAWS", "MOST_DRAWS", "Model", "run_monte_carlo"]

Numbers = NDArray[np.float64]
Model = Callable[[Numbers], Numbers]
"""From inputs, shape (inputs, draws), to outputs, shape (outputs, draws) or (draws,)."""

DRAWS = 200_000
"""Draws where no number is asked for: ten times what a 95 % interval needs (7.2.2)."""

MOST_DRAWS = 2_000_000
"""Draws at which the adaptive procedure gives up."""

BLOCK_VALUES = 500_000
"""Values of all inputs in one block: they stay in the processor's cache."""

PROBED = 64
"""Draws that show which outputs an input enters."""


def run_monte_carlo(
    model: Model,
    inputs: Sequence[Estimate],
    *,
    draws: int | str = DRAWS,
    seed: int = 0,
    correlation: ArrayLike | None = None,
    block: int | None = None,
    coverage: float = 0.95,
    digits: int = 1,
    tolerance_part: float = 1.0,
    most_draws: int = MOST_DRAWS,
    keep: bool = False,
    pool: DrawPool | None = None,
) -> MonteCarlo:
    """Propagate the inputs' distributions through a model.

    Parameters
    ----------
    model : callable
        From an array of shape (inputs, draws) to one of (outputs, draws), or (draws,) for one
        output. It must treat every draw alike, and must not keep its argument. NaN or infinity
        says that it has no value for a draw.
    inputs : sequence of Estimate
        In the model's order. One name is one random variable.
    draws : int or "auto"
        How many, or the adaptive procedure of 7.9.
    seed : int
        Not below zero; the same seed gives the same draws.
    correlation : array, shape (inputs, inputs), optional
        Correlation coefficients, among normal inputs only.
    block : int, optional
        Draws worked out at a time; it changes memory and speed, not the result.
    coverage : float [1]
        Coverage probability, between 0 and 1.
    digits : int
        Meaningful digits of u, for the adaptive procedure's tolerance.
    tolerance_part : float [1]
        Part of that tolerance to reach, up to 1; 1/5 where a linear interval is to be validated.
    most_draws : int
        Where the adaptive procedure gives up.
    keep : bool
        Keep all draws of the outputs, in order.
    pool : DrawPool, optional
        Draws that several propagations of one seed and number of draws share, to save time.

    Returns
    -------
    MonteCarlo
        On the way 8 bytes a draw and output are needed, up to 16 by the adaptive procedure, and
        8 a draw more where draws are kept.

    Raises
    ------
    InputError
        For inputs that cannot be drawn, or a model that returns the wrong shape.

    References
    ----------
    JCGM 101:2008, 7 and 7.9; several outputs: JCGM 102:2011, 7.
    """
    adaptive = draws == "auto"
    count = adaptive_block(_checked_coverage(coverage)) if adaptive else _whole(draws, "draws")
    interval_ranks(count, coverage)  # refuses too few draws before any work
    if not 0.0 < tolerance_part <= 1.0:
        raise InputError(
            f"tolerance_part = {tolerance_part} is not above 0 and up to 1", remedy="write 0.2"
        )
    source = JointDraws(inputs, seed=seed, correlation=correlation, pool=pool)
    n_inputs = len(source.inputs)
    size = max(BLOCK_VALUES // n_inputs, 1_000) if block is None else _whole(block, "block")
    has_mean, has_u = _moments(model, source, seed, correlation)
    room = np.empty((n_inputs, min(size, count)))
    store = np.empty((len(has_u), count))
    _evaluate(model, source, room, store)
    converged: bool | None = None
    if adaptive:
        watch = Stability(
            coverage=coverage, digits=digits, part=tolerance_part, has_mean=has_mean, has_u=has_u
        )
        watch.add(store)
        drawn, most = count, _whole(most_draws, "most_draws")
        while not (converged := watch.settled) and drawn + count <= most:
            if drawn + count > store.shape[1]:
                store = _doubled(store, max(most, drawn + count))
            part = store[:, drawn : drawn + count]
            _evaluate(model, source, room, part)
            watch.add(part)
            drawn += count
        store = store[:, :drawn]
    return summarise(
        store,
        has_mean=has_mean,
        has_u=has_u,
        seed=int(seed),
        coverage=coverage,
        converged=converged,
        keep=keep,
    )


def _whole(number: object, name: str) -> int:
    if isinstance(number, bool) or not isinstance(number, int | np.integer) or number < 1:
        other = ", or auto" if name == "draws" else ""
        raise InputError(
            f"{name} = {number!r} is not a whole number above zero",
            remedy=f"write {DRAWS}{other}",
        )
    return int(number)


def _checked_coverage(coverage: float) -> float:
    if not 0.0 < coverage < 1.0:
        raise InputError(f"coverage = {coverage} is not between 0 and 1", remedy="write 0.95")
    return coverage


def _outputs(model: Model, drawn: Numbers) -> Numbers:
    """Evaluate the model; what it has no value for may be met by dividing by zero and the like."""
    with np.errstate(all="ignore"):
        found = np.atleast_2d(np.asarray(model(drawn), dtype=float))
    if found.ndim != 2 or found.shape[1] != drawn.shape[1]:
        raise InputError(
            f"the model returns an array of shape {found.shape} for {drawn.shape[1]} draws",
            remedy=f"return outputs of {drawn.shape[1]} values each",
        )
    return found


def _evaluate(model: Model, source: JointDraws, room: Numbers, out: Numbers) -> None:
    """Fill ``out``, shape (outputs, draws), with the model of the next draws."""
    n_draws, size = out.shape[1], room.shape[1]
    for start in range(0, n_draws, size):
        drawn = room[:, : min(size, n_draws - start)]
        source.fill(drawn)
        found = _outputs(model, drawn)
        part = out[:, start : start + drawn.shape[1]]
        part[:] = found
        part[~np.isfinite(part)] = np.nan


def _moments(
    model: Model, source: JointDraws, seed: int, correlation: ArrayLike | None
) -> tuple[NDArray[np.bool_], NDArray[np.bool_]]:
    """Which outputs have a mean, and which a variance, by the inputs that enter them.

    An input enters an output that changes when the input's draws change places.
    """
    heavy = source.heavy(2.0)
    drawn = np.repeat([[estimate.value] for estimate in source.inputs], PROBED, axis=1)
    if heavy:
        JointDraws(source.inputs, seed=seed, correlation=correlation).fill(drawn)
    before = _outputs(model, drawn).copy()
    has_mean, has_u = np.ones((2, len(before)), dtype=bool)
    for place in heavy:
        changed = drawn.copy()
        changed[place] = drawn[place, ::-1]
        after = _outputs(model, changed)
        enters = ((after != before) & ~(np.isnan(after) & np.isnan(before))).any(axis=-1)
        has_u &= ~enters
        if place in source.heavy(1.0):
            has_mean &= ~enters
    return has_mean, has_u


def _doubled(store: Numbers, most: int) -> Numbers:
    """Return twice as much room, within ``most``, with what is in it so far."""
    grown = np.empty((store.shape[0], min(2 * store.shape[1], most)))
    grown[:, : store.shape[1]] = store
    return grown
