"""What is computed of each drop, in columns."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from plumbfall.measurement.balance import Numbers

__all__ = ["DropColumns", "empty_columns"]


@dataclass(frozen=True, slots=True)
class DropColumns:
    """What was computed of each used drop, SI, shape (drops,); NaN where there is no solution.

    ``at_set`` is the viscosity brought to the run set's temperature, ``stokes`` the same by
    Stokes' law alone. ``start_bound`` is the run-in's part of ``model_bound``. ``set_temperature``
    has shape (run sets,), NaN where unknown.
    """

    temperature: Numbers
    viscosity: Numbers
    at_set: Numbers
    stokes: Numbers
    reynolds: Numbers
    fall_speed: Numbers
    diameter: Numbers
    diameter_ratio: Numbers
    wall: Numbers
    off_axis: Numbers
    end: Numbers
    run_in: Numbers
    drag_factor: Numbers
    shear_stress: Numbers
    model_bound: Numbers
    start_bound: Numbers
    floating: NDArray[np.bool_]
    too_fast: NDArray[np.bool_]
    too_wide: NDArray[np.bool_]
    no_root: NDArray[np.bool_]
    start_unknown: NDArray[np.bool_]
    set_temperature: Numbers


def empty_columns(n: int, temperature: Numbers, set_temperature: Numbers) -> DropColumns:
    """Return columns to be filled, factors of effects that may not be felt being 1."""

    def numbers() -> Numbers:
        return np.empty(n)

    def flags() -> NDArray[np.bool_]:
        return np.empty(n, dtype=bool)

    return DropColumns(
        temperature=temperature,
        viscosity=numbers(),
        at_set=numbers(),
        stokes=numbers(),
        reynolds=numbers(),
        fall_speed=numbers(),
        diameter=numbers(),
        diameter_ratio=numbers(),
        wall=numbers(),
        off_axis=np.ones(n),
        end=np.ones(n),
        run_in=np.ones(n),
        drag_factor=numbers(),
        shear_stress=numbers(),
        model_bound=numbers(),
        start_bound=np.zeros(n),
        floating=flags(),
        too_fast=flags(),
        too_wide=flags(),
        no_root=flags(),
        start_unknown=np.zeros(n, dtype=bool),
        set_temperature=set_temperature,
    )
