"""Whether planned drops will do, what speaks against them, and what would have to be better."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from plumbfall.measurement.inputs import MODEL_INPUT
from plumbfall.planning.evaluation import Evaluation
from plumbfall.planning.prediction import Part, Prediction
from plumbfall.planning.wanted import Wanted
from plumbfall.results import Finding

__all__ = ["CHOICE", "Needed", "Reason", "improvements", "reasons_against", "spoken_of"]

CHOICE = frozenset(
    {
        "ball-not-denser", "no-solution", "reynolds-high", "diameter-ratio-high", "run-in-short",
        "end-near", "off-axis-suspected", "fall-time-short",
        "density-implausible", "radius-as-diameter-suspected", "constant-outside-domain",
    }
)  # fmt: skip
"""Findings that speak against a ball or a tube, not against data or against the whole sheet."""

BOUNDED = frozenset({"fall-time-short", "reynolds-high"})
"""Warnings of what the bounds include: a target that is reached all the same outweighs them."""

EASY, WORTH = 1 / 3, 1 / 2
"""Few inputs are named if a third of their uncertainty does it, else if they need be no better
than to half of what all inputs together would (common practice, no source)."""


@dataclass(frozen=True, slots=True)
class Reason:
    """Something that speaks against a combination: what limits it in a word, and the whole of it.

    ``code`` is a finding's, or ``uncertainty`` or ``fall-time-long``.
    """

    code: str
    message: str

    def __str__(self) -> str:
        return f"{self.code}: {self.message}"


@dataclass(frozen=True, slots=True)
class Needed:
    """An input whose standard uncertainty is too large: what it is, and what would do, in SI."""

    input: str
    unit: str
    present: float
    needed: float


def spoken_of(
    found: tuple[Finding, ...], target: float | None
) -> tuple[tuple[Reason, ...], tuple[Reason, ...]]:
    """Return what the reduction would say of the ball or the tube: what bars it, and cautions."""
    bars: list[Reason] = []
    cautions: list[Reason] = []
    for finding in found:
        if finding.code not in CHOICE or finding.severity == "note":
            continue
        within = target is not None and finding.severity == "warning" and finding.code in BOUNDED
        (cautions if within else bars).append(Reason(finding.code, finding.message))
    return tuple(bars), tuple(cautions)


def _unsolved(evaluation: Evaluation, place: int) -> Reason:
    """Return why a combination has no fall time."""
    fallen, bench = evaluation.fallen, evaluation.conditions.bench
    ball = list(bench.balls)[evaluation.ball[place]]
    law = evaluation.law
    if fallen.floating[place]:
        return Reason(
            "ball-not-denser", f"ball {ball} is not denser than the liquid, and does not sink"
        )
    if fallen.too_wide[place]:
        ratio = float(np.broadcast_to(fallen.forces.diameter_ratio, fallen.clock.shape)[place])
        return Reason(
            "diameter-ratio-high",
            f"the diameter ratio {ratio:.3g} is above {law.max_ratio:g}, the limit of the drag law "
            f"'{law.ratio_law.name}'",
        )
    if fallen.too_fast[place]:
        return Reason(
            "reynolds-high",
            f"the Reynolds number would be above {law.max_reynolds:g}, the limit of the drag law "
            f"'{law.reynolds_law.name}'",
        )
    return Reason("no-solution", f"ball {ball} has no fall time in this tube")


def reasons_against(
    evaluation: Evaluation,
    prediction: Prediction,
    wanted: Wanted,
    needed: NDArray[np.intp],
    place: int,
    rank: int | None,
) -> list[Reason]:
    """Return everything that speaks against a combination, the gravest first."""
    if rank is None:
        return [_unsolved(evaluation, place)]
    reasons = list(spoken_of(evaluation.found[rank], wanted.target)[0])
    time = float(evaluation.fallen.time[place])
    if time > wanted.longest:
        reasons.append(
            Reason(
                "fall-time-long",
                f"a drop takes {time / 60:.0f} min, more than the {wanted.longest / 60:.0f} min "
                "that are allowed",
            )
        )
    if wanted.target is not None and not needed[rank]:
        floor = float(prediction.expanded(wanted.most_drops, np.array([rank]))[0])
        dominant = prediction.budget(rank, wanted.most_drops)[0].input
        reasons.append(
            Reason(
                "uncertainty",
                f"{wanted.most_drops} drops reach {100 * floor:.2g} %, and "
                f"{100 * wanted.target:.2g} % is wanted; most of it is from {dominant}",
            )
        )
    return reasons


def improvements(prediction: Prediction, place: int, target: float, drops: int) -> list[Needed]:
    """Return what would have to be better for so many drops to reach the target.

    As few inputs as can do it are named, the largest first, all by the same factor.
    """
    parts = prediction.budget(place, drops)
    allowed = (target / prediction.factor(place, drops)) ** 2
    count, factor = _fewest([part.contribution**2 for part in parts], allowed)
    return [_needed(prediction, part, factor) for part in parts[:count]]


def _fewest(variances: list[float], allowed: float) -> tuple[int, float]:
    """Return how many of the largest variances must shrink, and the factor of their roots."""
    factors = [
        math.sqrt(max(allowed - sum(variances[count:]), 0.0) / sum(variances[:count]))
        for count in range(1, len(variances) + 1)
    ]
    enough = min(EASY, WORTH * max(factors))
    return next((count, f) for count, f in enumerate(factors, 1) if f >= enough)


def _needed(prediction: Prediction, part: Part, factor: float) -> Needed:
    if part.input == MODEL_INPUT:
        return Needed(part.input, "1", part.contribution, factor * part.contribution)
    estimate = prediction.known[part.input]
    # a standard deviation that is declared is itself what would have to be less
    present = estimate.u if part.input not in prediction.own_names else estimate.value
    return Needed(part.input, estimate.unit, present, factor * present)
