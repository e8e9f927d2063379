"""Drops in a calibrated tube: the viscosity by the tube's constant, without any drag law."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from plumbfall.measurement.balance import Balance, Codes, Numbers, spread
from plumbfall.measurement.inputs import Inputs
from plumbfall.physics.tube_constants import constant_viscosity

__all__ = ["ByConstant", "by_constant"]


@dataclass(frozen=True, slots=True)
class ByConstant:
    """Viscosities [Pa.s] of a block of drops, NaN where there is none, each of shape (drops,).

    ``floating`` marks balls that are not denser than the liquid, ``no_time`` drops whose corrected
    time is not above zero.
    """

    viscosity: Numbers
    floating: NDArray[np.bool_]
    no_time: NDArray[np.bool_]


def by_constant(inputs: Inputs, cell: Codes, forces: Balance) -> ByConstant:
    """Return the viscosities of drops in calibrated tubes.

    Parameters
    ----------
    inputs : Inputs
        Raw inputs by cell.
    cell : array of int, shape (drops,)
        Each drop's cell.
    forces : Balance
        Masses and times of the drops; no geometry of the tube is looked at.
    """
    viscosity = constant_viscosity(
        tube_constant=spread(inputs.roles["constant"].value, cell),
        ball_density=forces.mass / forces.volume,
        liquid_density=forces.liquid_density,
        fall_time=forces.time,
    )
    floating = np.broadcast_to(forces.net_mass <= 0, cell.shape)
    no_time = np.broadcast_to(~(forces.time > 0) | np.isinf(forces.time), cell.shape) & ~floating
    return ByConstant(np.where(floating | no_time, np.nan, viscosity), floating, no_time)
