"""Second-order terms of a run set's viscosity in its largest inputs, by its own solved chain."""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import NDArray

from plumbfall.results import BudgetLine, SecondOrderResult
from plumbfall.run_sets.result import SetColumns
from plumbfall.run_sets.set_model import SetModel
from plumbfall.uncertainty.second_order import second_order

__all__ = ["LARGEST", "second_order_of"]

LARGEST = 5
"""Inputs of the budget that are looked at."""

DECIMALS = 6
"""Decimals of relative sizes that differences are good for on every machine."""


def second_order_of(
    sets: SetColumns, run_set: int, used: NDArray[np.intp], budget: tuple[BudgetLine, ...]
) -> SecondOrderResult | None:
    """Say what the second-order terms of the largest inputs are beside the linear uncertainty.

    Inputs whose second-order term is part of the budget already, such as a tilt, are left out;
    so is scatter, in which the viscosity is linear.

    Parameters
    ----------
    sets : SetColumns
        The columns of every run set.
    run_set : int
        Which one.
    used : array of int
        Places of its used drops.
    budget : tuple of BudgetLine
        Its budget, the largest part first.

    Returns
    -------
    SecondOrderResult or None
        ``None`` without a budget, and where a drop has no viscosity two u away.
    """
    model = SetModel(sets, run_set, used)
    known = {sets.inputs.estimates[entry].name for entry in sets.jacobian.squared.tolist()}
    rows = {estimate.name: row for row, estimate in enumerate(model.inputs.estimates)}
    names = [line.input for line in budget if line.input in rows and line.input not in known]
    names = [name for name in names if not name.endswith(".scatter")][:LARGEST]
    if not names:
        return None
    nominal = np.array([estimate.value for estimate in model.inputs.estimates])
    places = [rows[name] for name in names]

    def viscosity(points: NDArray[np.float64]) -> NDArray[np.float64]:
        drawn = np.repeat(nominal[:, None], points.shape[1], axis=1)
        drawn[places] = points
        return np.exp(model.log_mean(drawn))

    estimates = [model.inputs.estimates[place] for place in places]
    found = second_order(viscosity, nominal[places], [estimate.u for estimate in estimates])
    if found is None:
        return None
    viscosities = sets.outputs.of("viscosity")
    value, variance = float(viscosities.value[run_set]), float(viscosities.u[run_set]) ** 2
    change = math.sqrt(max(1 + found.second / variance, 0.0)) - 1
    return SecondOrderResult(
        inputs=tuple(names),
        change_of_u=round(change, DECIMALS),
        shift=round(found.shift / value, DECIMALS) * value,
    )
