"""Balls whose density is not that of what they are said to be made of, or of any ball."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from plumbfall.bench.records import Ball
from plumbfall.findings.ball_materials import MATERIALS, BallMaterial, material_named
from plumbfall.findings.data import Found, RunData
from plumbfall.findings.densities import radius_slip
from plumbfall.measurement.inputs import cold_ball_density
from plumbfall.results import Finding

__all__ = ["density_off_material"]

COVERAGE = 2.0
"""Standard uncertainties by which a density must be outside a material's range."""


def density_off_material(data: RunData) -> Iterator[Found]:
    """Find balls whose name says one material and whose density says another.

    Where nothing names the material, a ball that was weighed is held against all of them: mass
    and diameter together then tell a mistake in either.
    """
    cells, limits = data.selection.cells, data.limits
    density = cold_ball_density(data.inputs)
    liquid = data.inputs.roles["liquid_density"].value
    slip = radius_slip(data, density)
    believable = (density >= limits.ball_density_low) & (density <= limits.ball_density_high)
    for code in np.unique(cells.ball[believable]):
        ball = data.balls[code]
        at = np.flatnonzero(believable & (cells.ball == code))
        value = float(density[at[0]])
        named = material_named(ball.name.replace(".", " "), ball.material or "")
        if named is None and ball.mass is None:
            continue
        if slip[at].any():
            continue  # a radius written as the diameter is found by itself
        nearest = named or min(MATERIALS, key=lambda one: _outside(one, value))
        outside = _outside(nearest, value)
        if outside <= COVERAGE * _relative_u(data, ball) * value:
            continue
        edge = nearest.low if value < nearest.low else nearest.high
        first = at[np.unique(cells.run_set[at], return_index=True)[1]]
        for run_set, cell in zip(cells.run_set[first], first, strict=True):
            effect = float((edge - value) / (value - liquid[cell]))
            yield int(run_set), _finding(ball, named, nearest, value, effect)


def _finding(
    ball: Ball, named: BallMaterial | None, nearest: BallMaterial, density: float, effect: float
) -> Finding:
    usual = f"{nearest.low / 1000:g} to {nearest.high / 1000:g} g/cm3"
    if named is not None:
        against = f"{named.name} has {usual}"
    else:
        against = f"no usual ball has it; the nearest is {nearest.name}, {usual}"
    off = abs((nearest.low if density < nearest.low else nearest.high) / density - 1)
    remedy = (
        f"weigh and measure it again: {100 * off:.1f} % of mass, or {100 * off / 3:.1f} % of "
        "diameter, would explain it"
        if ball.mass is not None
        else "weigh it, or check its density and what it is made of"
    )
    return Finding(
        code="density-implausible",
        severity="warning",
        statistic=density,
        effect=effect,
        message=f"ball {ball.name} has a density of {density / 1000:.4g} g/cm3, but {against}; "
        f"by density alone that is {100 * abs(effect):.1f} % of viscosity",
        remedy=remedy,
    )


def _outside(material: BallMaterial, density: float) -> float:
    return max(material.low - density, density - material.high, 0.0)


def _relative_u(data: RunData, ball: Ball) -> float:
    """Relative standard uncertainty of a ball's density as the bench sheet has it."""
    if ball.mass is None:
        return 0.0 if ball.density is None else ball.density.relative
    balance = data.bench.balances[ball.balance].correction.u if ball.balance else 0.0
    gauge = data.bench.gauges[ball.gauge].correction.u if ball.gauge else 0.0
    mass = np.hypot(ball.mass.u, balance) / ball.mass.value
    return float(np.hypot(mass, 3 * np.hypot(ball.diameter.u, gauge) / ball.diameter.value))
