"""The ball that would do best in a tube: diameter and density as free numbers."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from plumbfall.measurement.balance import Numbers
from plumbfall.planning.catalogue import Grade, lot, with_balls
from plumbfall.planning.conditions import Conditions
from plumbfall.planning.evaluation import evaluate
from plumbfall.planning.judgement import spoken_of
from plumbfall.planning.prediction import Prediction
from plumbfall.planning.wanted import Wanted

__all__ = ["IdealBall", "ideal_ball"]

RATIOS = (0.004, 0.6)
"""Diameters looked at, over the bore."""

DENSITIES = (1.02, 16000.0)
"""Densities looked at: from so much denser than the liquid, to tungsten carbide's [kg/m3]."""

STEPS, ROUNDS = (28, 18), 4
"""Diameters and densities of a round, and rounds; each looks closer at the best of the last."""


@dataclass(frozen=True, slots=True)
class IdealBall:
    """Diameter [m] and density [kg/m3] that give the smallest worst uncertainty in a tube.

    ``clean`` says that nothing speaks against it; otherwise it is the best in spite of that.
    """

    tube: str
    diameter: float
    density: float
    relative_expanded_uncertainty: float
    clean: bool


def ideal_ball(conditions: Conditions, wanted: Wanted, tube: str, grade: Grade) -> IdealBall | None:
    """Search the ball that would do best in a tube at all viscosities; ``None`` where none falls.

    Parameters
    ----------
    conditions : Conditions
        What all drops have in common.
    wanted : Wanted
        Viscosities, number of drops, longest time.
    tube : str
        A tube with a bore.
    grade : Grade
        Of the balls.
    """
    bench = conditions.bench
    record = bench.tubes[tube]
    assert record.bore is not None  # a vertical tube has one
    liquid = list(bench.liquids.values())[conditions.liquid].density.value
    spans = np.log(
        [[ratio * record.bore.value for ratio in RATIOS], [DENSITIES[0] * liquid, DENSITIES[1]]]
    )
    best: tuple[float, float, float, bool] | None = None
    for _ in range(ROUNDS):
        grids = [np.linspace(low, high, n) for (low, high), n in zip(spans, STEPS, strict=True)]
        diameter, density = (np.exp(part.ravel()) for part in np.meshgrid(*grids))
        bounds, clean = _bounds(conditions, wanted, tube, grade, diameter, density)
        if not np.isfinite(bounds).any():
            return None
        judged = np.where(clean, bounds, np.inf) if clean.any() else bounds
        at = int(np.argmin(judged))
        found = (float(bounds[at]), float(diameter[at]), float(density[at]), bool(clean[at]))
        if best is None or (not found[3], found[0]) < (not best[3], best[0]):
            best = found
        centre = np.log([best[1], best[2]])
        steps = np.array([grid[1] - grid[0] for grid in grids])
        spans = np.stack([np.maximum(centre - steps, spans[:, 0]),
                          np.minimum(centre + steps, spans[:, 1])], axis=1)  # fmt: skip
    assert best is not None
    return IdealBall(tube, best[1], best[2], best[0], best[3])


def _bounds(
    conditions: Conditions,
    wanted: Wanted,
    tube: str,
    grade: Grade,
    diameter: Numbers,
    density: Numbers,
) -> tuple[Numbers, np.ndarray]:
    """Worst uncertainty of each ball over the viscosities, and whether nothing bars it."""
    bench = conditions.bench
    gauge = next(iter(bench.gauges), None)
    balls = [
        lot(str(place), d, rho, grade, gauge)
        for place, (d, rho) in enumerate(zip(diameter.tolist(), density.tolist(), strict=True))
    ]
    there = replace(conditions, bench=with_balls(bench, balls))
    eta, n = np.array(wanted.viscosities), len(balls)
    codes = np.repeat(np.arange(n), len(eta))
    tubes = np.full(len(codes), list(bench.tubes).index(tube), dtype=np.intp)
    made = evaluate(there, tubes, codes, np.tile(eta, n), wanted.drops)
    bounds = np.full(len(codes), np.inf)
    bounds[made.solved] = Prediction(made, wanted.coverage).expanded(wanted.drops)
    clean = np.isfinite(bounds)
    clean[made.solved] = [not spoken_of(found, wanted.target)[0] for found in made.found]
    clean &= made.fallen.time <= wanted.longest
    return bounds.reshape(n, -1).max(axis=1), clean.reshape(n, -1).all(axis=1)
