"""Diameters that look read off a catalogue, not measured."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from plumbfall.bench.records import Ball
from plumbfall.findings.data import Found, RunData
from plumbfall.quantities import from_si
from plumbfall.results import Finding

__all__ = ["is_catalogue_size", "nominal_diameter"]

INCH = 25.4
LOT_DEVIATION = 9e-6
"""How far the mean diameter of a lot of grade 10 may be from its nominal one, m (ISO 3290-1)."""


def is_catalogue_size(diameter: float) -> bool:
    """Say whether a diameter in mm is one that balls are sold by.

    Whole and half millimetres, and sixty-fourths of an inch, as printed to three decimals or in
    full.

    References
    ----------
    Nominal sizes of ISO 3290-1 (their steps from memory).

    Examples
    --------
    >>> [is_catalogue_size(mm) for mm in (2.0, 2.381, 3.175, 4.7625, 2.0003, 2.38)]
    [True, True, True, True, False, False]
    """
    if abs(2 * diameter - round(2 * diameter)) < 1e-6:
        return True
    nominal = round(64 * diameter / INCH) * INCH / 64
    printed = abs(1000 * diameter - round(1000 * diameter)) < 1e-6
    within = 0.5e-3 if printed else 0.0
    return diameter < INCH and abs(diameter - nominal) <= within + 1e-6


def nominal_diameter(data: RunData) -> Iterator[Found]:
    """Note balls whose diameter is exactly a catalogue size, with a smaller uncertainty."""
    suspect = np.array([_suspect(ball) for ball in data.balls] + [False], dtype=bool)
    if not suspect.any():
        return
    cells = data.selection.cells
    for run_set in np.unique(cells.run_set[suspect[cells.ball]]):
        codes = np.unique(cells.ball[(cells.run_set == run_set) & suspect[cells.ball]])
        balls = [data.balls[code] for code in codes]
        effect = max(_power(ball) * LOT_DEVIATION / ball.diameter.value for ball in balls)
        sizes = ", ".join(f"{ball.name} ({_millimetres(ball):g} mm)" for ball in balls)
        several = len(balls) > 1
        yield (
            int(run_set),
            Finding(
                code="nominal-diameter",
                severity="note",
                effect=effect,
                message=f"the diameter{'s' if several else ''} of {sizes} "
                f"{'are' if several else 'is'} exactly a catalogue size; a lot sold as such may "
                f"be {1e6 * LOT_DEVIATION:.0f} um off (grade 10), up to {100 * effect:.1f} % of "
                "viscosity",
                remedy="measure the ball in several directions; until then write "
                '"… ± 0.009 mm, limits"',
            ),
        )


def _suspect(ball: Ball) -> bool:
    diameter = ball.diameter
    measured = diameter.distribution == "t"  # the mean of readings that were typed in
    covered = diameter.u >= LOT_DEVIATION / np.sqrt(3)
    return not measured and not covered and is_catalogue_size(_millimetres(ball))


def _millimetres(ball: Ball) -> float:
    return float(from_si(ball.diameter.value, "mm", "length"))


def _power(ball: Ball) -> float:
    """Power of the diameter in the viscosity, without walls: 2 by density, about -1 by mass."""
    return 1.0 if ball.mass is not None else 2.0
