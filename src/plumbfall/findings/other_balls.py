"""What a drop would have given, had it been another ball of the bench."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from plumbfall.bench.records import Ball
from plumbfall.findings.data import RunData
from plumbfall.physics.weight import mass_from_weighing, sphere_volume

__all__ = ["Candidates", "candidates", "shifts"]

Numbers = NDArray[np.float64]
Codes = NDArray[np.intp]

FACTORS = {2.0: "as a radius", 10.0: "as a tenth of it", 0.1: "as ten times it", 25.4: "in inches"}
"""How a diameter may have been written, by the factor that would put it right."""


@dataclass(frozen=True, slots=True)
class Candidates:
    """Balls that a drop may have been, arrays of shape (candidates,).

    First the balls of the bench in their order, then each of them with its diameter times a
    factor each. ``ball`` counts the bench's balls; ``factor`` is 1 for the balls as
    they stand; ``density`` is NaN where it is that of no ball.
    """

    ball: Codes
    factor: Numbers
    diameter: Numbers
    density: Numbers

    @property
    def as_written(self) -> NDArray[np.bool_]:
        """Which are balls of the bench as they stand."""
        return np.asarray(self.factor == 1.0)


def candidates(data: RunData, factors: Iterable[float] = FACTORS) -> Candidates:
    """Return every ball of the bench, as written and with slips of its diameter."""
    n = len(data.balls)
    each = np.array([1.0, *factors])
    factor, ball = np.repeat(each, n), np.tile(np.arange(n), len(each))
    diameter = np.array([_diameter(data, one) for one in data.balls])
    mass = np.array([_mass(data, one) for one in data.balls])
    given = np.array([np.nan if one.density is None else one.density.value for one in data.balls])
    size = factor * diameter[ball]
    density = np.where(
        np.isnan(mass[ball]), given[ball], mass[ball] / sphere_volume(ball_diameter=size)
    )
    # a density that no ball has is found by itself, and is no explanation either
    low, high = data.limits.ball_density_low, data.limits.ball_density_high
    fair = (density >= low) & (density <= high)
    density[~(fair & ((factor == 1.0) | fair[ball]))] = np.nan
    return Candidates(ball=ball, factor=factor, diameter=size, density=density)


def _diameter(data: RunData, ball: Ball) -> float:
    gauge = data.bench.gauges[ball.gauge].correction.value if ball.gauge else 0.0
    return ball.diameter.value + gauge


def _mass(data: RunData, ball: Ball) -> float:
    if ball.mass is None:
        return np.nan
    balance = data.bench.balances[ball.balance].correction.value if ball.balance else 0.0
    reading = (ball.mass.value + balance) / ball.weighed_together
    return float(mass_from_weighing(reading=reading, ball_diameter=_diameter(data, ball)))


def shifts(data: RunData, drops: Codes, others: Candidates, viscosity: Numbers) -> Numbers:
    """Return ln of what each drop gives over what it would give as each candidate.

    Parameters
    ----------
    data : RunData
        The reduction.
    drops : array of int, shape (drops,)
        Places of the drops.
    others : Candidates
        Balls that the drops may have been.
    viscosity : array, shape (drops,) [Pa.s]
        What the drops ought to give: only the inertia hangs on it.

    Returns
    -------
    array, shape (drops, candidates)
        NaN where a candidate would not have fitted the tube or sunk, where the drag law does not
        reach, and for calibrated tubes.
    """
    columns, cells = data.columns, data.selection.cells
    cell = data.selection.cell[drops]
    own = cells.ball[cell]
    roles = data.inputs.roles
    liquid = roles["liquid_density"].value[cell, None]
    density, diameter = others.density[None, :], others.diameter[None, :]
    with np.errstate(invalid="ignore", divide="ignore"):
        pull = (density - liquid) * diameter**2
        stokes = columns.stokes[drops, None] * pull / pull[np.arange(len(drops)), own][:, None]
        ratio = diameter / roles["bore"].value[cell, None]
        speed = columns.fall_speed[drops, None]
        reynolds = liquid * speed * diameter / viscosity[:, None]
        able = np.isfinite(stokes) & (stokes > 0) & (ratio > 0) & (ratio < data.law.max_ratio)
        able &= np.isfinite(reynolds) & (reynolds < data.law.max_reynolds)
    found = np.full(stokes.shape, np.nan)
    if able.any():
        drag = np.asarray(data.law.at(ratio[able]).factor(reynolds[able]))
        at_set = np.broadcast_to(columns.at_set[drops, None], stokes.shape)
        found[able] = np.log(at_set[able] / (stokes[able] / drag))
    return found
