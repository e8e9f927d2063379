"""Every drop's viscosity and the sums its sensitivities add to, block by block.

Blocks keep the working arrays in the processor's cache and memory flat in the number of drops.
"""

from __future__ import annotations

import numpy as np

from plumbfall.measurement.balance import Balance, Codes, Numbers, balance, spread
from plumbfall.measurement.columns import DropColumns, empty_columns
from plumbfall.measurement.ends import Ends
from plumbfall.measurement.inputs import Inputs
from plumbfall.measurement.inverse import invert
from plumbfall.measurement.law import LEFT_OUT
from plumbfall.measurement.off_axis import off_axis
from plumbfall.measurement.run_in import Release, RunIn, run_in
from plumbfall.measurement.selection import Selection
from plumbfall.measurement.sensitivities import DropSlopes, Sums, add_block, empty_sums
from plumbfall.measurement.values import Weights
from plumbfall.physics.drag import Bound, DragLaw

__all__ = ["compute_drops"]

BLOCK = 16_384

MOST_STARTS, TOLERANCE = 30, 1e-12
"""Repetitions of the run-in, and the relative change of the time that ends them."""

LARGEST_SHIFT = 1e-5
"""Largest logarithm of a drop's diameter ratio over its cell's that is taken to first order."""


def compute_drops(
    selection: Selection,
    inputs: Inputs,
    weights: Weights,
    law: DragLaw,
    temperature: Numbers,
    ends: Ends | None = None,
    released: Release | None = None,
) -> tuple[DropColumns, Sums]:
    """Invert the force balance of every drop and sum its sensitivities.

    Parameters
    ----------
    selection : Selection
        The used drops.
    inputs : Inputs
        Raw inputs by cell.
    weights : Weights
        Each drop's weight in its run set's mean.
    law : DragLaw
        The drag law to invert.
    temperature : array, shape (drops,) [K]
        The drops' corrected temperatures, NaN where unknown.
    ends : Ends, optional
        What the tubes' ends add to the drag on each cell's path.
    released : Release, optional
        Depths of the marks below the release; without it no run-in is taken off.

    Returns
    -------
    DropColumns
        Viscosities and flow numbers of the drops.
    Sums
        Weighted sensitivities by cell.
    """
    n, n_sets = len(selection.cell), len(selection.names)
    with np.errstate(invalid="ignore", divide="ignore"):
        by_set = np.bincount(
            selection.run_set, weights=weights.weight * temperature, minlength=n_sets
        )
    set_temperature = np.where(weights.n_drops > 0, by_set, np.nan)
    offset = set_temperature[selection.run_set] - temperature
    np.nan_to_num(offset, copy=False, nan=0.0)

    out = empty_columns(n, temperature, set_temperature)
    sums = empty_sums(len(selection.cells))
    in_cells = set_temperature[selection.cells.run_set]
    every = np.arange(len(in_cells))
    with np.errstate(invalid="ignore"):
        cell_ratio = balance(inputs, every, np.ones(len(every)), in_cells).diameter_ratio
    cell_ratio = np.broadcast_to(cell_ratio, in_cells.shape)
    for start in range(0, n, BLOCK):
        block = slice(start, min(start + BLOCK, n))
        _compute_block(
            block,
            selection,
            inputs,
            law,
            ends,
            released,
            cell_ratio,
            offset,
            weights.weight,
            out,
            sums,
        )
    return out, sums


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


def _compute_block(
    block: slice,
    selection: Selection,
    inputs: Inputs,
    law: DragLaw,
    ends: Ends | None,
    released: Release | None,
    cell_ratio: Numbers,
    offset: Numbers,
    weight: Numbers,
    out: DropColumns,
    sums: Sums,
) -> None:
    """Fill the columns of one block of drops, and add it to the sums."""
    cell, clock = selection.cell[block], selection.time[block]
    with np.errstate(invalid="ignore", divide="ignore"):
        end_factor = 1.0 if ends is None else spread(ends.factor, cell)
        forces = balance(inputs, cell, clock, out.temperature[block], end_factor)
        drag, shift = _bind(law, forces.diameter_ratio, cell, cell_ratio)
        beside = off_axis(inputs, cell, forces)
        log_beside = beside.log_factor if beside is not None else 0.0
        found = invert(forces, drag, log_beside, shift)
        start = None
        for _ in range(MOST_STARTS if released is not None else 0):
            assert released is not None  # as the range is not empty
            before, start = start, run_in(released, cell, forces, found)
            if start is None or _settled(before, start, forces):
                break
            forces = balance(inputs, cell, clock, out.temperature[block], end_factor, start.bias)
            found = invert(forces, drag, log_beside, shift)
        ratio_slope = found.ratio_slope
        if beside is not None:
            ratio_slope = ratio_slope + beside.by_ratio
            out.off_axis[block] = np.exp(beside.log_factor)
        to_set = np.exp(spread(inputs.roles["slope"].value, cell) * offset[block])
        bound = drag.relative_bound(found.log_reynolds) + LEFT_OUT
        stokes = forces.weight * end_factor / (3 * np.pi * forces.diameter * forces.speed)
        if start is not None:
            longer = 1 + start.bias / forces.time
            stokes = stokes * longer
            out.run_in[block] = longer
            out.start_unknown[block] = start.unknown
            # an error of the time is one of the drag, (1 + s) times as large
            out.start_bound[block] = (1 + found.reynolds_slope) * start.error
            bound = bound + out.start_bound[block]
        out.viscosity[block] = found.viscosity
        out.at_set[block] = found.viscosity * to_set
        out.stokes[block] = stokes * to_set
        out.reynolds[block] = found.reynolds
        out.fall_speed[block] = forces.speed
        out.diameter[block] = forces.diameter
        out.diameter_ratio[block] = forces.diameter_ratio
        out.wall[block] = drag.wall * np.exp(drag.wall_slope * shift)
        out.end[block] = end_factor
        out.drag_factor[block] = stokes / found.viscosity
        out.shear_stress[block] = forces.weight / (np.pi * forces.diameter**2)
        out.model_bound[block] = bound
        out.floating[block] = found.floating
        out.too_fast[block] = found.too_fast
        out.too_wide[block] = found.too_wide
        out.no_root[block] = found.no_root
        add_block(
            sums,
            inputs,
            cell,
            clock,
            forces,
            DropSlopes(ratio_slope, found.reynolds_slope, np.asarray(bound), beside, ends, start),
            weight[block] * out.at_set[block],
            offset[block],
            ~np.isnan(selection.temperature[block]),
        )
