"""Densities that no ball or liquid has, and the slip that most often makes them."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from plumbfall.findings.ball_materials import of_a_material
from plumbfall.findings.data import Found, RunData
from plumbfall.measurement.inputs import cold_ball_density
from plumbfall.results import Finding

__all__ = ["density_implausible", "radius_as_diameter", "radius_slip"]


def density_implausible(data: RunData) -> Iterator[Found]:
    """Find a ball or a liquid of a density outside what labs use."""
    limits, cells = data.limits, data.selection.cells
    ball = cold_ball_density(data.inputs)
    slip = radius_slip(data, ball)
    liquid = data.inputs.roles["liquid_density"].value
    for kind, density, low, high, ok in (
        ("ball", ball, limits.ball_density_low, limits.ball_density_high, slip),
        ("liquid", liquid, limits.liquid_density_low, limits.liquid_density_high, False),
    ):
        wrong = ((density < low) | (density > high)) & ~np.asarray(ok)
        for run_set, code in _distinct(cells.run_set, getattr(cells, kind), wrong):
            name = getattr(data, f"{kind}s")[code].name
            at = float(density[wrong & (getattr(cells, kind) == code)][0])
            yield (
                run_set,
                Finding(
                    code="density-implausible",
                    severity="error",
                    statistic=at,
                    message=f"{kind} {name} has a density of {at / 1000:.3g} g/cm3, outside "
                    f"{low / 1000:g} to {high / 1000:g} g/cm3",
                    remedy=_remedy(data, kind, code, at),
                ),
            )


def _remedy(data: RunData, kind: str, code: int, density: float) -> str:
    if kind == "liquid" or data.balls[code].mass is None:
        return "check its density and the unit of it"
    remedy = "check mass, diameter and their units"
    if data.limits.ball_density_low <= density * 8 <= data.limits.ball_density_high:
        return f"is the diameter twice too large? {remedy}"
    if density > data.limits.ball_density_high and data.balls[code].weighed_together == 1:
        return f"{remedy}; were several balls on the balance? then add weighed_together"
    return remedy


def radius_as_diameter(data: RunData) -> Iterator[Found]:
    """Find a mass that fits eight times the volume: a radius written as the diameter."""
    cells = data.selection.cells
    density = cold_ball_density(data.inputs)
    slip = radius_slip(data, density)
    for run_set, code in _distinct(cells.run_set, cells.ball, slip):
        at = float(density[slip & (cells.ball == code)][0])
        yield (
            run_set,
            Finding(
                code="radius-as-diameter-suspected",
                severity="error",
                statistic=at,
                message=f"ball {data.balls[code].name}: mass and diameter give a density of "
                f"{at / 1000:.1f} g/cm3; with twice the diameter it would be {at / 8000:.2f} g/cm3",
                remedy="the diameter looks like a radius: write the diameter",
            ),
        )


def radius_slip(data: RunData, density: np.ndarray) -> np.ndarray:
    """Say which weighed balls are of no material as written, and of one with twice the diameter.

    Beyond the plausible densities any plausible eighth will do.
    """
    low, high = data.limits.ball_density_low, data.limits.ball_density_high
    inside = (density / 8 >= low) & (density / 8 <= high)
    of_none, eighth = ~of_a_material(density), of_a_material(density / 8, margin=0.0)
    slip: np.ndarray = data.inputs.weighed & (((density > high) & inside) | (of_none & eighth))
    return slip


def _distinct(
    run_set: np.ndarray, code: np.ndarray, where: np.ndarray
) -> Iterator[tuple[int, int]]:
    pairs = np.unique(np.stack([run_set[where], code[where]], axis=1), axis=0)
    return ((int(a), int(b)) for a, b in pairs)
