"""The run-in: how much longer the fall between the marks takes as the ball starts from rest.

A ball that is let go at rest falls behind one at full speed by a delay that rises with the depth
to a constant. A timing between two marks is too long by the difference of their delays. That
depends on the viscosity sought, so that it is found by repetition; it shrinks the error by about
its own size each time.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from plumbfall.measurement.balance import Balance, Codes, Numbers
from plumbfall.measurement.inputs import Inputs
from plumbfall.measurement.inverse import Inverse
from plumbfall.physics.drag_map import DragMap
from plumbfall.physics.start_up import (
    RUN_IN_DENSITY_RATIO_LIMITS,
    RUN_IN_ERROR,
    RUN_IN_FLOOR,
    RUN_IN_HIGHEST_REYNOLDS,
    RUN_IN_RATIO_LIMITS,
    run_in_delay,
    run_in_delay_and_slope,
)

__all__ = ["Release", "RunIn", "releases", "run_in", "start_beyond_table"]

SETTLED = 1.5
"""nu y / (v R^2) beyond which walls have stopped the start: exp(-26.37 x 1.5) is 1e-17.

26.37 is the square of the first zero of the Bessel function J2; inertia only makes it quicker.
"""

LEAST_DEPTH = 0.01
"""Ball diameters below the release, at least, where the effect of its height is read.

The slope of the delay is infinite at the point of release itself.
"""

MATTERS = 5e-4
"""Part of the time from which on a start that is not in the table is said to be unknown."""


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
    ``unknown`` marks drops whose start is not in the table and may matter: nothing is taken off,
    and ``error`` is all of what it may come to.
    """

    bias: Numbers
    by_release: Numbers
    error: Numbers
    unknown: NDArray[np.bool_]


def releases(inputs: Inputs) -> Release | None:
    """Return how far below the release each cell's marks are; ``None`` where none is given."""
    role = inputs.roles["release_above"]
    if not role.present:
        return None
    height = np.where(role.entry >= 0, role.value, np.nan)
    first = height + inputs.roles["from_mark"].value - inputs.roles["first_mark"].value
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
    found_at = run_in_delay_and_slope(depth=np.stack([first[at], last[at]]), **ball)
    (early, late), (early_slope, late_slope) = (np.asarray(part) for part in found_at)
    if (first[at] < LEAST_DEPTH * ball["ball_diameter"]).any():
        least = np.maximum(first[at], LEAST_DEPTH * ball["ball_diameter"])
        early_slope = np.asarray(run_in_delay_and_slope(depth=least, **ball)[1])
    unknown = np.isnan(late - early)
    bias, by_release = np.zeros(shape), np.zeros(shape)
    bias[at] = np.where(unknown, 0.0, late - early)
    by_release[at] = np.where(unknown, 0.0, late_slope - early_slope)
    relative = np.abs(bias) / (forces.time + bias)
    error = np.maximum(RUN_IN_ERROR * relative, np.minimum(relative, RUN_IN_FLOOR))
    flags = np.zeros(shape, bool)
    if unknown.any():
        most = start_beyond_table(first[at], last[at], ball, found.reynolds[at])
        most = np.where(unknown, most / part(forces.time), 0.0)
        error[at] += most
        flags[at] = most > MATTERS
    return RunIn(bias=bias, by_release=by_release, error=error, unknown=flags)


def start_beyond_table(
    first: Numbers, last: Numbers, ball: Mapping[str, Numbers], reynolds: Numbers
) -> Numbers:
    """Return the most [s] by which a timing may be too long where the table does not reach.

    The start where the table ends, stretched by as much as a ball with steady drag has a longer way
    M v^2 / (W (1 + s)) to its speed (M its mass with half the liquid displaced, s = dlnK/dlnRe),
    and in wider tubes by as much as the bore is wider. Starts computed there, at Reynolds numbers
    to 100, ratios 0.006 to 0.6 and density ratios 1.05 to 20, are shorter by 3 % to half, and
    shorter still where little is left. NaN where there is no Reynolds number.
    """
    diameter, speed, liquid = ball["ball_diameter"], ball["fall_speed"], ball["liquid_density"]
    ratio, density = diameter / ball["tube_bore"], ball["ball_density"] / liquid
    in_ratio = np.clip(ratio, *RUN_IN_RATIO_LIMITS)
    in_reynolds = np.minimum(reynolds, RUN_IN_HIGHEST_REYNOLDS)
    in_density = np.clip(density, *RUN_IN_DENSITY_RATIO_LIMITS)

    def way(density: Numbers, reynolds: Numbers) -> Numbers:
        log_factor, slope = DragMap().at(in_ratio).evaluate(np.log(np.minimum(reynolds, 100.0)))
        return np.asarray((density + 0.5) * reynolds / (np.exp(log_factor) * (1.0 + slope)))

    stretch = np.maximum(way(density, reynolds) / way(in_density, in_reynolds), 1.0)
    stretch = np.maximum(stretch, in_ratio / ratio)
    edge = {
        "ball_diameter": diameter,
        "tube_bore": diameter / in_ratio,
        "fall_speed": speed,
        "liquid_density": liquid,
        "viscosity": liquid * speed * diameter / in_reynolds,
        "ball_density": in_density * liquid,
    }
    early, late = (np.asarray(run_in_delay(depth=y / stretch, **edge)) for y in (first, last))
    return np.asarray(stretch * (late - early))
