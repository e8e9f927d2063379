"""A ball let go off the tube's axis: what its place does to the drag.

For a small ball the drag over Stokes' drag is 1/(1 - f(beta) lambda), beta being the distance
from the axis over the bore radius. The drag law is that on the axis, so that here enters the
ratio (1 - f(0) lambda)/(1 - f(beta) lambda), in which what the first order leaves out cancels.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from plumbfall.measurement.balance import Balance, Codes, Numbers, spread
from plumbfall.measurement.inputs import Inputs
from plumbfall.physics.exact import off_axis_coefficient

__all__ = ["OffAxis", "near_wall", "off_axis"]

ON_AXIS, _ = off_axis_coefficient(0.0)
SMALL = 1e-4
"""Offset ratio at which the slope's limit on the axis is read: f is even, so its slope is odd."""


@dataclass(frozen=True, slots=True)
class OffAxis:
    """What being off the axis adds to ln K of a block of drops, and its derivatives.

    ``by_ratio`` is with respect to ln(lambda); ``by_offset`` and ``by_offset_twice`` with respect
    to the offset in metres.
    """

    log_factor: Numbers
    by_ratio: Numbers
    by_offset: Numbers
    by_offset_twice: Numbers


def near_wall(offset_ratio: Numbers, diameter_ratio: Numbers) -> NDArray[np.bool_]:
    """Whether a ball is too near the wall for the small-ball result, which then is not used."""
    return np.asarray(1 - np.abs(offset_ratio) < 2 * diameter_ratio)


def off_axis(inputs: Inputs, cell: Codes, forces: Balance) -> OffAxis | None:
    """Return the effect of the release's distance from the axis; ``None`` where none is given."""
    role = inputs.roles["release_offset"]
    if not role.present:
        return None
    given, radius = spread(role.value, cell), forces.bore / 2
    ratio = forces.diameter_ratio
    beta = np.abs(given) / radius
    unknown = near_wall(beta, ratio)
    beta = np.where(unknown, 0.0, np.maximum(beta, SMALL))
    coefficient, slope = (np.asarray(part) for part in off_axis_coefficient(beta))
    share = ratio / (1 - coefficient * ratio)
    on_axis = ratio / (1 - ON_AXIS * ratio)
    first = slope * share / radius
    known = ~unknown
    return OffAxis(
        log_factor=np.where(
            known, np.log1p(-ON_AXIS * ratio) - np.log1p(-coefficient * ratio), 0.0
        ),
        by_ratio=np.where(known, coefficient * share - ON_AXIS * on_axis, 0.0),
        by_offset=np.where(known, np.where(given == 0, 0.0, np.sign(given) * first), 0.0),
        by_offset_twice=np.where(known, first / (beta * radius + ~known), 0.0),
    )
