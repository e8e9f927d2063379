"""The viscosities of a block of drops: every correction joined, the run-in by repetition.

Both ways of propagating uncertainty evaluate the measurement equation here and nowhere else.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from plumbfall.measurement.balance import Balance, Codes, Numbers, balance, spread
from plumbfall.measurement.calibrated import by_constant
from plumbfall.measurement.ends import Ends
from plumbfall.measurement.inputs import Inputs
from plumbfall.measurement.inverse import Inverse, invert
from plumbfall.measurement.off_axis import OffAxis, off_axis
from plumbfall.measurement.run_in import Release, RunIn, run_in
from plumbfall.physics.drag import Bound, DragLaw

__all__ = ["Solved", "cell_ratios", "solve", "viscosities"]

MOST_STARTS, TOLERANCE = 30, 1e-12
"""Repetitions of the run-in, and the relative change of the time that ends them."""

LARGEST_SHIFT = 1e-5
"""Largest logarithm of a drop's diameter ratio over its cell's that is taken to first order."""


@dataclass(frozen=True, slots=True)
class Solved:
    """A block of drops at the solution of their force balance.

    ``drag`` is the law bound to them, ``shift`` the logarithm of each drop's diameter ratio over
    the one it is bound to, ``end_factor`` what the ends make of the path. ``beside`` and ``start``
    are ``None`` where no drop is off the axis, and where all starts are over.
    """

    forces: Balance
    drag: Bound
    shift: Numbers | float
    end_factor: Numbers | float
    beside: OffAxis | None
    start: RunIn | None
    found: Inverse


def cell_ratios(inputs: Inputs, temperature: Numbers) -> Numbers:
    """Diameter ratios of the cells at temperatures of theirs [K], shape (cells,)."""
    every = np.arange(len(temperature))
    with np.errstate(invalid="ignore"):
        ratio = balance(inputs, every, np.ones(len(every)), temperature).diameter_ratio
    return np.broadcast_to(ratio, temperature.shape)


def solve(
    inputs: Inputs,
    law: DragLaw,
    ends: Ends | None,
    released: Release | None,
    cell: Codes,
    clock: Numbers,
    temperature: Numbers,
    cell_ratio: Numbers,
    log_extra: Numbers | float = 0.0,
) -> Solved:
    """Solve the force balance of a block of drops, with every correction.

    Parameters
    ----------
    inputs : Inputs
        Raw inputs by cell.
    law : DragLaw
        The drag law to invert.
    ends : Ends, optional
        What the tubes' ends add to the drag on each cell's path.
    released : Release, optional
        Depths of the marks below the release; without it no run-in is taken off.
    cell : array of int, shape (drops,)
        Each drop's cell.
    clock : array, shape (drops,) [s]
        Clock readings between the marks.
    temperature : array, shape (drops,) [K]
        The drops' corrected temperatures, NaN where unknown.
    cell_ratio : array, shape (cells,) [1]
        The cells' diameter ratios, to which the law may be bound.
    log_extra : array, shape (drops,)
        Logarithm of a further factor of the drag.

    Returns
    -------
    Solved
        Viscosities, and all that led to them.
    """
    with np.errstate(invalid="ignore", divide="ignore"):
        end_factor = 1.0 if ends is None else spread(ends.factor, cell)
        forces = balance(inputs, cell, clock, temperature, end_factor)
        drag, shift = _bind(law, forces.diameter_ratio, cell, cell_ratio)
        beside = off_axis(inputs, cell, forces)
        log_beside = (beside.log_factor if beside is not None else 0.0) + log_extra
        found = invert(forces, drag, log_beside, shift)
        start = None
        if released is not None:
            for _ in range(MOST_STARTS):
                before, start = start, run_in(released, cell, forces, found)
                if start is None or _settled(before, start, forces):
                    break
                forces = balance(inputs, cell, clock, temperature, end_factor, start.bias)
                found = invert(forces, drag, log_beside, shift)
    return Solved(forces, drag, shift, end_factor, beside, start, found)


def viscosities(
    inputs: Inputs,
    law: DragLaw,
    ends: Ends | None,
    released: Release | None,
    cell: Codes,
    clock: Numbers,
    temperature: Numbers,
    cell_ratio: Numbers,
    log_extra: Numbers | float = 0.0,
) -> Numbers:
    """Return the viscosities of a block of drops, NaN where there is none, shape (drops,) [Pa.s].

    Parameters are those of :func:`solve`. All drops are in calibrated tubes, whose constants then
    stand for drag, ends and run-in, or none is.
    """
    if inputs.calibrated[cell[0]]:
        return by_constant(inputs, cell, balance(inputs, cell, clock, temperature)).viscosity
    solved = solve(inputs, law, ends, released, cell, clock, temperature, cell_ratio, log_extra)
    return solved.found.viscosity


def _settled(before: RunIn | None, now: RunIn, forces: Balance) -> bool:
    """Whether the run-in's bias no longer changes; where none of it is felt it never did."""
    last = 0.0 if before is None else before.bias
    return not np.nanmax(np.abs(now.bias - last) / forces.time, initial=0.0) > TOLERANCE


def _bind(
    law: DragLaw, ratio: Numbers, cell: Codes, cell_ratio: Numbers
) -> tuple[Bound, Numbers | float]:
    """Bind the drag law, to cells where their drops' ratios lie together, else to every drop.

    Drops of a cell differ by thermal expansion alone. The law is then bound to the cell's ratio
    and the inverse takes the rest to first order; what that leaves out is the square of the shift
    times about 2 (d2 lnK/dln(ratio)2 / 2 at ratio 0.5), so below 2e-10 at the largest one allowed.
    """
    inside = np.minimum(ratio, law.max_ratio)  # beyond it the inverse flags the drop
    first, last = int(cell.min()), int(cell.max())
    if len(ratio) == 1 or 2 * (last - first) > len(cell):
        return law.at(inside), 0.0
    bound_to = np.minimum(cell_ratio[first : last + 1], law.max_ratio)
    index = cell - first
    shift = np.log(inside / bound_to[index])
    if not np.abs(shift).max() <= LARGEST_SHIFT:
        return law.at(inside), 0.0
    return law.at(bound_to).take(index), shift
