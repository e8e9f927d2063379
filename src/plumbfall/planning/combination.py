"""One ball in one tube in a liquid of one viscosity: everything a plan says of it."""

from __future__ import annotations

import math
from dataclasses import dataclass, field
from typing import Any

import numpy as np
from numpy.typing import NDArray

from plumbfall.bench.records import Bench
from plumbfall.measurement.balance import Numbers
from plumbfall.physics.stokes import shear_rate
from plumbfall.physics.thermal import equilibration_time
from plumbfall.planning.evaluation import Evaluation, interval_times
from plumbfall.planning.judgement import (
    Needed,
    Reason,
    improvements,
    reasons_against,
    spoken_of,
)
from plumbfall.planning.prediction import Part, Prediction
from plumbfall.planning.start import run_in_distances
from plumbfall.planning.wanted import Wanted

__all__ = ["Combination", "build_combinations", "without_fall"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Combination:
    """A ball in a tube in a liquid of one viscosity, SI units; ``None`` where there is no number.

    ``intervals`` are the times between successive marks; ``run_in`` is the distance to 99.9 % of
    the speed and ``run_in_room`` what there is; clearances are distances of the first mark from
    the surface and of the last from the bottom; ``scatter`` that of one drop, relative.
    ``cautions`` are warnings of what the bounds include, which reach the target all the same.
    ``relative_expanded_uncertainty`` is that of ``drops`` drops, made of ``budget``. ``floor`` is
    what no number of drops goes below.
    """

    tube: str
    ball: str
    viscosity: float
    bore: float | None
    diameter_ratio: float | None
    equilibration_time: float | None
    run_in_room: float | None
    surface_clearance: float | None
    bottom_clearance: float | None
    drops: int
    suitable: bool
    reasons: tuple[Reason, ...]
    cautions: tuple[Reason, ...] = ()
    fall_time: float | None = None
    intervals: tuple[float, ...] = ()
    speed: float | None = None
    reynolds: float | None = None
    shear_rate: float | None = None
    run_in: float | None = None
    scatter: float | None = None
    relative_expanded_uncertainty: float | None = None
    floor: float | None = None
    drops_needed: int | None = None
    dominant_input: str | None = None
    prediction: Prediction | None = field(default=None, repr=False, compare=False)
    rank: int = -1
    improvements: tuple[Needed, ...] = ()

    @property
    def budget(self) -> tuple[Part, ...]:
        """Parts of the uncertainty, the largest first."""
        if self.prediction is None:
            return ()
        return self.prediction.budget(self.rank, self.drops)


def build_combinations(
    wanted: Wanted,
    evaluation: Evaluation,
    prediction: Prediction,
    needed: NDArray[np.intp],
    planned: NDArray[np.intp],
    expanded: Numbers,
) -> tuple[Combination, ...]:
    """Return the record of every combination of an evaluation, in its order.

    Parameters
    ----------
    wanted : Wanted
        What is asked.
    evaluation : Evaluation
        The falls.
    prediction : Prediction
        Of its solved combinations.
    needed, planned : array of int, shape (solved,)
        Drops that reach the target, 0 where none do, and drops that are planned.
    expanded : array, shape (solved,)
        Relative expanded uncertainty of the drops planned.
    """
    fallen, n = evaluation.fallen, len(evaluation.viscosity)
    forces, shape = fallen.forces, evaluation.viscosity.shape
    bench = evaluation.conditions.bench
    tubes, balls = list(bench.tubes.values()), list(bench.balls)
    with np.errstate(invalid="ignore"):
        drag = forces.weight / (3 * np.pi * evaluation.viscosity * forces.diameter * forces.speed)
    run_in = run_in_distances(
        forces, fallen.reynolds, evaluation.viscosity, np.broadcast_to(drag, shape)
    )
    if any(len(tube.marks) > 2 for tube in tubes):
        intervals = interval_times(evaluation, np.arange(n))
    else:
        intervals = [(time,) for time in fallen.time.tolist()]
    ranks = {place: rank for rank, place in enumerate(evaluation.solved.tolist())}
    floor = prediction.floor()
    dominant = {drops: prediction.dominant(drops) for drops in np.unique(planned).tolist()}
    shear = np.asarray(shear_rate(fall_speed=fallen.speed, ball_diameter=forces.diameter))
    ratio, bore, shear = (
        np.broadcast_to(values, shape) for values in (forces.diameter_ratio, forces.bore, shear)
    )

    def build(place: int) -> Combination:
        tube, rank = tubes[evaluation.tube[place]], ranks.get(place)
        reasons = tuple(reasons_against(evaluation, prediction, wanted, needed, place, rank))
        known: dict[str, Any] = {
            "tube": tube.name,
            "ball": balls[evaluation.ball[place]],
            "viscosity": float(evaluation.viscosity[place]),
            "diameter_ratio": _number(ratio[place]),
            "bore": None,
            "equilibration_time": None,
            "suitable": not reasons,
            "reasons": reasons,
        }
        for key, name in (
            ("run_in_room", "release_above"),
            ("surface_clearance", "surface_above"),
            ("bottom_clearance", "bottom_below"),
        ):
            estimate = getattr(tube, name)
            known[key] = None if estimate is None else float(estimate.value)
        if tube.bore is not None:
            known["bore"] = float(bore[place])
            known["equilibration_time"] = float(equilibration_time(tube_bore=known["bore"]))
        if rank is None:
            return Combination(drops=wanted.drops, **known)
        drops, speed = int(planned[rank]), _number(fallen.speed[place])
        better: list[Needed] = []
        if wanted.target is not None and not needed[rank]:
            better = improvements(prediction, rank, wanted.target, wanted.most_drops)
        return Combination(
            drops=drops,
            fall_time=float(fallen.time[place]),
            intervals=intervals[place],
            speed=speed,
            reynolds=_number(fallen.reynolds[place]),
            shear_rate=_number(shear[place]),
            run_in=_number(run_in[place]),
            scatter=float(prediction.scatter[rank]),
            relative_expanded_uncertainty=float(expanded[rank]),
            floor=float(floor[rank]),
            drops_needed=int(needed[rank]) or None,
            dominant_input=dominant[drops][rank] if expanded[rank] > 0 else None,
            prediction=prediction,
            rank=rank,
            improvements=tuple(better),
            cautions=spoken_of(evaluation.found[rank], wanted.target)[1],
            **known,
        )

    return tuple(build(place) for place in range(n))


def without_fall(
    bench: Bench, wanted: Wanted, pair: tuple[str, str], viscosity: float, reason: Reason
) -> Combination:
    """Return the record of a tube and a ball of which the bench sheet says too little."""
    tube = bench.tubes[pair[0]]

    def given(name: str) -> float | None:
        estimate = getattr(tube, name)
        return None if estimate is None else float(estimate.value)

    return Combination(
        tube=tube.name,
        ball=pair[1],
        viscosity=viscosity,
        bore=given("bore"),
        diameter_ratio=None,
        equilibration_time=None,
        run_in_room=given("release_above"),
        surface_clearance=given("surface_above"),
        bottom_clearance=given("bottom_below"),
        drops=wanted.drops,
        suitable=False,
        reasons=(reason,),
    )


def _number(value: float) -> float | None:
    return float(value) if math.isfinite(value) else None
