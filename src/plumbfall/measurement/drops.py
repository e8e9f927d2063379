"""Every drop's viscosity and the sums its sensitivities add to, block by block.

Blocks keep the working arrays in the processor's cache and memory flat in the number of drops.
"""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
from numpy.typing import NDArray

from plumbfall.measurement.balance import Codes, Numbers, balance, spread
from plumbfall.measurement.calibrated import by_constant
from plumbfall.measurement.columns import DropColumns, empty_columns
from plumbfall.measurement.ends import Ends
from plumbfall.measurement.inputs import Inputs
from plumbfall.measurement.law import LEFT_OUT
from plumbfall.measurement.run_in import Release
from plumbfall.measurement.selection import Selection
from plumbfall.measurement.sensitivities import DropSlopes, Sums, add_block, empty_sums
from plumbfall.measurement.solving import cell_ratios, solve
from plumbfall.measurement.values import Weights
from plumbfall.physics.drag import DragLaw

__all__ = ["compute_drops"]

BLOCK = 16_384


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
    cell_ratio = cell_ratios(inputs, in_cells)
    calibrated, others = _by_kind_of_tube(inputs.calibrated, selection.cell)
    for block in _blocks(calibrated):
        _compute_calibrated(block, selection, inputs, offset, weights.weight, out, sums)
    for block in _blocks(others):
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


Places = slice | Codes
"""Drops of a block: a slice where all drops are of one kind, which saves copies."""


def _by_kind_of_tube(calibrated: NDArray[np.bool_], cell: Codes) -> tuple[Places, Places]:
    """Return the drops in calibrated tubes, and the others."""
    every, none = slice(0, len(cell)), slice(0, 0)
    if not calibrated.any():
        return none, every
    here = calibrated[cell]
    return (every, none) if here.all() else (np.flatnonzero(here), np.flatnonzero(~here))


def _blocks(places: Places) -> Iterator[Places]:
    if isinstance(places, slice):
        for start in range(places.start, places.stop, BLOCK):
            yield slice(start, min(start + BLOCK, places.stop))
        return
    for start in range(0, len(places), BLOCK):
        yield places[start : start + BLOCK]


def _compute_calibrated(
    block: Places,
    selection: Selection,
    inputs: Inputs,
    offset: Numbers,
    weight: Numbers,
    out: DropColumns,
    sums: Sums,
) -> None:
    """Fill the columns of a block of drops in calibrated tubes, and add it to the sums."""
    cell, clock = selection.cell[block], selection.time[block]
    forces = balance(inputs, cell, clock, out.temperature[block])
    found = by_constant(inputs, cell, forces)
    out.viscosity[block] = found.viscosity
    out.at_set[block] = found.viscosity * np.exp(
        spread(inputs.roles["slope"].value, cell) * offset[block]
    )
    out.diameter[block] = forces.diameter
    for unknown in (
        out.stokes, out.reynolds, out.fall_speed, out.diameter_ratio, out.wall, out.drag_factor,
        out.shear_stress,
    ):  # fmt: skip
        unknown[block] = np.nan
    out.model_bound[block] = 0.0
    out.floating[block] = found.floating
    out.no_root[block] = found.no_time
    out.too_fast[block] = out.too_wide[block] = False
    none = np.zeros(1)
    with np.errstate(invalid="ignore", divide="ignore"):
        add_block(
            sums,
            inputs,
            cell,
            clock,
            forces,
            DropSlopes(none, none, none, calibrated=True),
            weight[block] * out.at_set[block],
            offset[block],
            ~np.isnan(selection.temperature[block]),
        )


def _compute_block(
    block: Places,
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
    solved = solve(inputs, law, ends, released, cell, clock, out.temperature[block], cell_ratio)
    forces, found, drag, shift = solved.forces, solved.found, solved.drag, solved.shift
    beside, start, end_factor = solved.beside, solved.start, solved.end_factor
    with np.errstate(invalid="ignore", divide="ignore"):
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
