"""Balls as they are sold: preferred sizes, grades and materials, as lots on a bench."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, replace

from plumbfall.bench.keys import key_path
from plumbfall.bench.read_only import ReadOnly
from plumbfall.bench.records import Ball, Bench
from plumbfall.errors import InputError, nearest_name
from plumbfall.estimate import Estimate

__all__ = [
    "DENSITY_U",
    "GRADE",
    "GRADES",
    "MATERIALS",
    "SIZES",
    "Grade",
    "Material",
    "catalogue_bench",
    "grade_named",
    "lot",
    "with_balls",
]

SIZES = (
    0.3, 0.4, 0.5, 0.6, 0.7, 0.8, 1.0, 1.2, 1.5, 2.0, 2.5, 3.0, 3.5, 4.0, 4.5, 5.0, 5.5, 6.0, 6.5,
    7.0, 7.5, 8.0, 8.5, 9.0, 9.5, 10.0, 11.0, 12.0, 13.0, 14.0, 15.0, 16.0, 18.0, 20.0,
)  # fmt: skip
"""Preferred metric nominal diameters in mm (ISO 3290-1, from memory)."""


@dataclass(frozen=True, slots=True)
class Grade:
    """A grade of ISO 3290-1, all in metres.

    ``sphericity`` is the variation of one ball's diameter, ``lot`` that between the balls of a
    lot, ``gauge`` how far a lot's mean may be from the nominal diameter.
    """

    sphericity: float
    lot: float
    gauge: float


GRADES = {
    name: Grade(1e-6 * sphericity, 1e-6 * lot, 1e-6 * gauge)
    for name, sphericity, lot, gauge in (
        ("G5", 0.13, 0.25, 5.0),
        ("G10", 0.25, 0.5, 9.0),
        ("G16", 0.4, 0.8, 10.0),
        ("G20", 0.5, 1.0, 10.0),
        ("G28", 0.7, 1.4, 12.0),
        ("G40", 1.0, 2.0, 16.0),
        ("G60", 1.5, 3.0, 18.0),
        ("G100", 2.5, 5.0, 40.0),
        ("G200", 5.0, 10.0, 60.0),
    )
}
"""Grades of ISO 3290-1, as four public reproductions of its tables agree."""

GRADE = "G10"


@dataclass(frozen=True, slots=True)
class Material:
    """A material balls are sold in: usual density [kg/m3] and linear expansion [1/K]."""

    density: float
    expansion: float


MATERIALS = {
    "tungsten carbide": Material(14900.0, 5.5e-6),
    "steel 316": Material(8000.0, 16.0e-6),
    "chrome steel": Material(7820.0, 12.0e-6),
    "steel 420": Material(7700.0, 10.5e-6),
    "sapphire": Material(3985.0, 5.5e-6),
    "silicon nitride": Material(3230.0, 2.6e-6),
    "soda-lime glass": Material(2500.0, 9.0e-6),
    "borosilicate glass": Material(2230.0, 3.3e-6),
    "acrylic": Material(1180.0, 7.0e-5),
}
"""Usual values: steels EN 10088-1, glass ISO 3585, the others from memory."""

DENSITY_U, DIAMETER_U = 1e-3, 0.5e-6
"""What a lot is taken to be known to: its density by weighing, relative, and its mean diameter
where the bench has no gauge [m] (common practice, no source)."""

MEASURED_BALLS = 5
"""Balls of a lot whose diameters make its mean (common practice, no source)."""

ROOM_TEMPERATURE = 293.15


def grade_named(name: str) -> Grade:
    """Return a grade.

    Raises
    ------
    InputError
        For one that is not known.
    """
    if name in GRADES:
        return GRADES[name]
    near = nearest_name(name, GRADES)
    raise InputError(
        f"there is no grade '{name}'",
        remedy=f"did you mean '{near}'?" if near else f"known: {', '.join(GRADES)}",
    )


def lot(
    name: str, diameter: float, density: float, grade: Grade, gauge: str | None,
    expansion: float | None = None,
) -> Ball:  # fmt: skip
    """Return a lot of balls of a grade, weighed, and measured with a gauge of the bench.

    Parameters
    ----------
    name : str
        Name of the ball.
    diameter : float [m]
        Mean diameter.
    density : float [kg/m3]
        Density.
    grade : Grade
        Its balls differ by the grade's variation of a lot, taken as rectangular.
    gauge : str, optional
        The bench's gauge; without it the mean is taken to be known to 0.5 um.
    expansion : float, optional [1/K]
        Linear expansion.
    """

    def named(key: str, value: float, u: float, unit: str) -> Estimate:
        shape = "normal" if u else "exact"
        return Estimate(value, u, shape, math.inf, key_path("ball", name, key), unit)

    spread = grade.lot / math.sqrt(12)
    of_mean = spread / math.sqrt(MEASURED_BALLS)
    u = of_mean if gauge is not None else math.hypot(of_mean, DIAMETER_U)
    return Ball(
        name=name,
        diameter=named("diameter", diameter, u, "m"),
        density=named("density", density, DENSITY_U * density, "kg/m3"),
        lot=True,
        spread=named("spread", spread, 0.0, "m"),
        gauge=gauge,
        expansion=None if expansion is None else named("expansion", expansion, 0.0, "1/K"),
        measured_at=ROOM_TEMPERATURE,
    )


def catalogue_bench(bench: Bench, grade: Grade) -> Bench:
    """Return the bench with a lot of every preferred size in every material for balls."""
    gauge = next(iter(bench.gauges), None)
    balls = [
        lot(f"{material} {size:g} mm", 1e-3 * size, usual.density, grade, gauge, usual.expansion)
        for material, usual in MATERIALS.items()
        for size in SIZES
    ]
    return with_balls(bench, balls)


def with_balls(bench: Bench, balls: Sequence[Ball]) -> Bench:
    """Return the bench with other balls."""
    return replace(bench, balls=ReadOnly({ball.name: ball for ball in balls}))
