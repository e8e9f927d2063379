"""How drops make a run set's mean: a mean of values, a value being a ball's mean."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from plumbfall.measurement.balance import Codes, Numbers
from plumbfall.measurement.inputs import Inputs
from plumbfall.measurement.selection import Selection

__all__ = ["Weights", "value_weights"]


@dataclass(frozen=True, slots=True)
class Weights:
    """How drops make a run set's mean: means of values, a value being a ball's mean.

    ``value`` is each drop's value, shape (drops,); ``value_set`` the run set of each value;
    ``weight`` each drop's weight in its set's mean. ``n_values`` counts them by run set. Where
    every drop is its own ball (a lot), a value is a drop.
    """

    value: Codes
    value_set: Codes
    value_drops: NDArray[np.intp]
    n_values: NDArray[np.intp]
    n_drops: NDArray[np.intp]
    weight: Numbers


def value_weights(selection: Selection, inputs: Inputs) -> Weights:
    """Group drops into values: a ball's drops of one run set, or single drops of a lot."""
    cells, n_sets = selection.cells, len(selection.names)
    pair = cells.run_set * (cells.ball.max(initial=0) + 1) + cells.ball
    _, first, value_of_cell = np.unique(pair, return_index=True, return_inverse=True)
    value, value_set = value_of_cell[selection.cell], cells.run_set[first]
    fresh = inputs.lot[selection.cell]
    if fresh.any():
        own = np.where(fresh, len(first) + np.arange(len(value)), value)
        _, first, value = np.unique(own, return_index=True, return_inverse=True)
        value_set = selection.run_set[first]
    value_drops = np.bincount(value, minlength=len(first))
    n_values = np.bincount(value_set, minlength=n_sets)
    weight = 1.0 / (value_drops * n_values[value_set])
    return Weights(
        value=value,
        value_set=value_set,
        value_drops=value_drops,
        n_values=n_values,
        n_drops=np.bincount(selection.run_set, minlength=n_sets),
        weight=weight[value],
    )
