"""The run-in: how much longer the fall between the marks takes as the ball starts from rest.

A ball that is let go at rest falls behind one at full speed by a delay that rises with the depth
to a constant. A timing between two marks is too long by the difference of their delays. That
depends on the viscosity sought, so that it is found by repetition; it shrinks the error by about
its own size each time.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from plumbfall.bench.records import Tube
from plumbfall.measurement.balance import Balance, Codes, Numbers
from plumbfall.measurement.inputs import Inputs
from plumbfall.measurement.inverse import Inverse
from plumbfall.measurement.selection import Cells
from plumbfall.physics.start_up import RUN_IN_ERROR, RUN_IN_FLOOR, run_in_delay, run_in_delay_slope

__all__ = ["Release", "RunIn", "releases", "run_in"]

SETTLED = 1.5
"""nu y / (v R^2) beyond which walls have stopped the start: exp(-26.37 x 1.5) is 1e-17.

26.37 is the square of the first zero of the Bessel function J2; inertia only makes it quicker.
"""


@dataclass(frozen=True, slots=True)
class Release:
    """Depths of the marks below the point of release by cell, shape (cells,), NaN where unknown."""

    first: Numbers
    last: Numbers


@dataclass(frozen=True, slots=True)
class RunIn:
    """Effect of the start on a block of drops, shape (drops,).

    ``bias`` is the time [s] to take off; ``by_release`` its derivative with respect to the height
    of the release [s/m]; ``error`` half-width of what is not known of it, over the time;
    ``unknown`` marks drops whose start is not over and not in the table.
    """

    bias: Numbers
    by_release: Numbers
    error: Numbers
    unknown: NDArray[np.bool_]


def releases(inputs: Inputs, cells: Cells, tubes: Sequence[Tube]) -> Release | None:
    """Return how far below the release each cell's marks are; ``None`` where none is given."""
    role = inputs.roles["release_above"]
    if not role.present:
        return None
    top = np.array([tube.marks[0].value if tube.marks else np.nan for tube in tubes])[cells.tube]
    height = np.where(role.entry >= 0, role.value, np.nan)
    first = height + inputs.roles["from_mark"].value - top
    return Release(
        first=first,
        last=first + inputs.roles["to_mark"].value - inputs.roles["from_mark"].value,
    )


def run_in(released: Release, cell: Codes, forces: Balance, found: Inverse) -> RunIn | None:
    """Return the run-in's effect at the viscosities found; ``None`` where all starts are over."""
    first, last = released.first[cell], released.last[cell]
    kinematic = found.viscosity / forces.liquid_density
    radius = forces.bore / 2
    with np.errstate(invalid="ignore"):
        going = kinematic * first < SETTLED * forces.speed * radius**2
    if not going.any():
        return None
    shape = cell.shape
    at = np.flatnonzero(going)

    def part(values: Numbers) -> Numbers:
        return np.broadcast_to(values, shape)[at]

    ball = {
        "ball_diameter": part(forces.diameter),
        "tube_bore": part(forces.bore),
        "fall_speed": part(forces.speed),
        "liquid_density": part(forces.liquid_density),
        "viscosity": found.viscosity[at],
        "ball_density": part(forces.mass / forces.volume),
    }
    early, late = (np.asarray(run_in_delay(depth=y, **ball)) for y in (first[at], last[at]))
    slopes = (np.asarray(run_in_delay_slope(depth=y, **ball)) for y in (first[at], last[at]))
    early_slope, late_slope = slopes
    unknown = np.isnan(late - early)
    bias, by_release, error = np.zeros(shape), np.zeros(shape), np.zeros(shape)
    bias[at] = np.where(unknown, 0.0, late - early)
    by_release[at] = np.where(unknown, 0.0, late_slope - early_slope)
    relative = np.abs(bias) / (forces.time + bias)
    error = np.maximum(RUN_IN_ERROR * relative, np.minimum(relative, RUN_IN_FLOOR))
    flags = np.zeros(shape, bool)
    flags[at] = unknown
    return RunIn(bias=bias, by_release=by_release, error=error, unknown=flags)
