"""How far a planned ball falls before it has its speed."""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np

from plumbfall.measurement.balance import Balance, Numbers
from plumbfall.measurement.run_in import SETTLED
from plumbfall.physics.run_in import relaxation_time, run_in_distance, run_in_guard_distance
from plumbfall.physics.start_up import RUN_IN_HIGHEST_REYNOLDS, run_in_delay_and_slope

__all__ = ["NEARLY", "run_in_distances"]

NEARLY = 0.999
"""Part of its terminal speed that a ball has at the end of the run-in."""

STEPS = 24
"""Halvings of the logarithm of the distance: to a thousandth over five decades."""


def run_in_distances(
    forces: Balance, reynolds: Numbers, viscosity: Numbers, drag_factor: Numbers
) -> Numbers:
    """Return the distance [m] from rest to 99.9 % of the terminal speed.

    Parameters
    ----------
    forces : Balance
        The falls' balance, arrays that broadcast to shape (combinations,).
    reynolds : array, shape (combinations,)
        Terminal Reynolds numbers.
    viscosity : array, shape (combinations,) [Pa.s]
        Viscosity of the liquid.
    drag_factor : array, shape (combinations,)
        Drag over Stokes' drag, for what no computed start covers.

    Returns
    -------
    array, shape (combinations,)
        By the computed starts from rest in a tube; where these do not reach, by the rule of thumb
        of :func:`run_in_guard_distance`, and beyond it by a simple exponential.
    """
    shape = viscosity.shape
    ball = {
        "ball_diameter": np.broadcast_to(forces.diameter, shape),
        "tube_bore": np.broadcast_to(forces.bore, shape),
        "fall_speed": np.broadcast_to(forces.speed, shape),
        "liquid_density": np.broadcast_to(forces.liquid_density, shape),
        "viscosity": viscosity,
        "ball_density": np.broadcast_to(forces.mass / forces.volume, shape),
    }
    distance = _computed(ball)
    missing = np.isnan(distance) & np.isfinite(reynolds)
    guarded = missing & (reynolds <= RUN_IN_HIGHEST_REYNOLDS)
    if guarded.any():
        given = {name: values[guarded] for name, values in ball.items() if name != "ball_density"}
        distance[guarded] = run_in_guard_distance(**given)
    beyond = missing & ~guarded
    if beyond.any():
        time = relaxation_time(
            ball_diameter=ball["ball_diameter"][beyond],
            ball_density=ball["ball_density"][beyond],
            liquid_density=ball["liquid_density"][beyond],
            viscosity=viscosity[beyond],
            drag_factor=drag_factor[beyond],
        )
        distance[beyond] = run_in_distance(
            fall_speed=ball["fall_speed"][beyond], relaxation_time=time, fraction=NEARLY
        )
    return distance


def _computed(ball: Mapping[str, Numbers]) -> Numbers:
    """Search where 1/v(y) - 1/v has come down to 0.1 % of 1/v(y); NaN where it is not known."""
    kinematic = ball["viscosity"] / ball["liquid_density"]
    settled = SETTLED * ball["fall_speed"] * (ball["tube_bore"] / 2) ** 2 / kinematic
    low, high = np.log(1e-4 * ball["ball_diameter"]), np.log(settled)
    high = np.maximum(low, high)
    known = np.ones(high.shape, bool)
    with np.errstate(invalid="ignore", divide="ignore", over="ignore"):
        for _ in range(STEPS):
            middle = (low + high) / 2
            _, slope = run_in_delay_and_slope(depth=np.exp(middle), **ball)
            slow = np.asarray(slope) * ball["fall_speed"] > 1 / NEARLY - 1
            known &= ~np.isnan(np.asarray(slope))
            low, high = np.where(slow, middle, low), np.where(slow, high, middle)
    return np.where(known, np.exp((low + high) / 2), np.nan)
