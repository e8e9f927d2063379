"""Which inputs of a run set are drawn, and from what distributions.

They are those that its row of the linear budget has: the bench's entries in use, less what the
set's scatter contains, then the scatter itself or the errors that each drop is declared to have.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from plumbfall.bench.keys import key_path
from plumbfall.estimate import Estimate
from plumbfall.measurement.inputs import MODEL_INPUT
from plumbfall.run_sets.repeatability import DECLARED, KNOWN, OF_VALUES
from plumbfall.run_sets.result import SetColumns

__all__ = ["DrawnInputs", "drawn_inputs"]

Codes = NDArray[np.intp]


@dataclass(frozen=True, slots=True)
class DrawnInputs:
    """The inputs that are drawn and the rows in which the draws come.

    ``row_of_entry`` leads from the bench's entries to rows, shape (entries,). ``scatter`` is one
    row; ``clock``, ``resolution``, ``reading`` and ``size`` have shape (drops,): what each drop's
    clock reading, temperature and diameter have to themselves. -1 stands for what is not drawn.
    """

    estimates: tuple[Estimate, ...]
    row_of_entry: Codes
    scatter: int
    clock: Codes
    resolution: Codes
    reading: Codes
    size: Codes


def drawn_inputs(sets: SetColumns, run_set: int, used: Codes) -> DrawnInputs:
    """Return what is drawn of a run set whose used drops are at the places given."""
    inputs, scatter, name = sets.inputs, sets.scatter, sets.selection.names[run_set]
    cell = sets.selection.cell[used]
    basis = scatter.basis[run_set]
    rows = np.full(len(inputs.estimates), -1, dtype=np.intp)
    drawn: list[Estimate] = []
    in_use = np.unique(
        np.concatenate(
            [column.entry[cell] for column in inputs.roles.values()]
            + [inputs.constants[place].entries for place in inputs.constants_of(cell)]
        )
    )
    for entry in in_use[in_use >= 0].tolist():
        estimate = inputs.estimates[entry]
        contained = basis == OF_VALUES and inputs.individual[entry]
        # the drag law's is drawn even if it is exact, so that there always is an input
        if not contained and (not estimate.exact or estimate.name == MODEL_INPUT):
            rows[entry] = len(drawn)
            drawn.append(estimate)

    def own(u: NDArray[np.float64], shape: str, kind: str, counts: bool) -> Codes:
        """Give every drop an input of its own, named by its row of the timing table."""
        places = np.full(len(used), -1, dtype=np.intp)
        for place in np.flatnonzero(u > 0) if counts else ():
            row = sets.selection.row[used[place]]
            places[place] = len(drawn)
            key = key_path("set", name, f"drop {row}", kind)
            drawn.append(Estimate(0.0, float(u[place]), shape, name=key))
        return places

    declared = bool(basis == DECLARED)
    spread_counts = bool(inputs.lot.any()) and basis in (DECLARED, KNOWN)
    read = ~np.isnan(sets.selection.temperature[used])
    clock = own(inputs.per_drop[cell], "normal", "per_drop", declared)
    # two readings, each rectangular within half a step, differ by a triangular error
    resolution = own(inputs.resolution[cell] / np.sqrt(6), "triangular", "resolution", declared)
    reading = own(inputs.per_reading[cell] * read, "normal", "per_reading", declared)
    size = own(inputs.spread[cell], "normal", "spread", spread_counts)
    row = -1
    if scatter.u[run_set] > 0:
        row = len(drawn)
        shape = "rectangular" if scatter.floored[run_set] else "t"
        drawn.append(
            Estimate(
                0.0,
                float(scatter.u[run_set]),
                shape,
                float(scatter.dof[run_set]),
                key_path("set", name, "scatter"),
                "Pa.s",
            )
        )
    return DrawnInputs(tuple(drawn), rows, row, clock, resolution, reading, size)
