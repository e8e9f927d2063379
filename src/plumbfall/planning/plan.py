"""A plan: every ball and tube, over the viscosities expected, judged and ranked."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from plumbfall.bench.records import Bench
from plumbfall.errors import InputError, Problem, nearest_name
from plumbfall.findings.limits import Limits, limits_from
from plumbfall.measurement.balance import Numbers
from plumbfall.measurement.constants import choose_constants
from plumbfall.planning.combination import Combination, build_combinations, without_fall
from plumbfall.planning.conditions import Conditions
from plumbfall.planning.evaluation import Evaluation, evaluate
from plumbfall.planning.ideal import IdealBall
from plumbfall.planning.judgement import Reason
from plumbfall.planning.prediction import Prediction
from plumbfall.planning.wanted import Wanted
from plumbfall.planning.windows import Window, usable_windows
from plumbfall.results import Finding

__all__ = ["Plan", "make_plan"]

MOST_WINDOWS = 40

Pair = tuple[str, str]
"""Names of a tube and a ball."""

SHEET = frozenset(
    {
        "geometry-unknown", "slope-unknown", "density-temperature", "nominal-diameter",
        "missing-uncertainty", "default-gravity", "unit-slip-suspected",
    }
)  # fmt: skip
"""Findings of the bench sheet that hold for the whole plan."""


@dataclass(frozen=True)
class Plan:
    """Planned drops of every ball and tube; records are built when they are looked at.

    Where balls of a ``grade`` were looked for, ``ideal`` are those that would do best.
    """

    wanted: Wanted
    limits: Limits
    evaluation: Evaluation
    prediction: Prediction
    needed: NDArray[np.intp]
    planned: NDArray[np.intp]
    expanded: Numbers
    left_out: Mapping[Pair, Reason]
    grade: str = ""
    ideal: tuple[IdealBall, ...] = ()

    @property
    def bench(self) -> Bench:
        """The bench sheet."""
        return self.evaluation.conditions.bench

    @property
    def conditions(self) -> Conditions:
        """What all drops have in common."""
        return self.evaluation.conditions

    @cached_property
    def combinations(self) -> tuple[Combination, ...]:
        """Every combination, the best ball and tube first, by viscosity within."""
        every = build_combinations(
            self.wanted, self.evaluation, self.prediction, self.needed, self.planned, self.expanded
        )
        every += tuple(
            without_fall(self.bench, self.wanted, pair, viscosity, reason)
            for pair, reason in self.left_out.items()
            for viscosity in self.wanted.viscosities
        )
        groups: dict[tuple[str, str], list[Combination]] = {}
        for one in every:
            groups.setdefault((one.tube, one.ball), []).append(one)

        def rank(group: list[Combination]) -> tuple[int, int, float]:
            bounds = [one.relative_expanded_uncertainty for one in group]
            worst = max(math.inf if bound is None else bound for bound in bounds)
            fails = sum(not one.suitable for one in group)
            misses = sum(not self.reaches(one) for one in group)
            return fails, misses, worst

        ranked = sorted(groups.values(), key=rank)
        return tuple(one for group in ranked for one in group)

    @property
    def suitable(self) -> bool:
        """Whether some ball and tube will do at each of the viscosities."""
        covered = {one.viscosity for one in self.combinations if one.suitable}
        return covered.issuperset(self.wanted.viscosities)

    @property
    def one_for_all(self) -> bool:
        """Whether the best ball and tube will do at every viscosity."""
        return all(one.suitable for one in self.best)

    @property
    def best(self) -> tuple[Combination, ...]:
        """The best ball and tube, at every viscosity."""
        first = self.combinations[0]
        return tuple(
            one for one in self.combinations if (one.tube, one.ball) == (first.tube, first.ball)
        )

    @cached_property
    def findings(self) -> tuple[Finding, ...]:
        """What the reduction will say of the bench sheet whatever the ball, each once."""
        found: dict[tuple[str, str], Finding] = {}
        for place in range(len(self.evaluation.solved)):
            for finding in self.evaluation.found[place]:
                sold = bool(self.grade) and finding.code == "nominal-diameter"
                if finding.code in SHEET and not sold:
                    found.setdefault((finding.code, finding.message), finding)
        return tuple(found.values())

    @cached_property
    def windows(self) -> tuple[Window, ...]:
        """The usable windows of the best balls and tubes, ranked as the combinations."""
        pairs = list(dict.fromkeys((one.tube, one.ball) for one in self.combinations))
        pairs = pairs[:MOST_WINDOWS]
        planned = [pair for pair in pairs if pair not in self.left_out]
        tubes, balls = list(self.bench.tubes), list(self.bench.balls)
        found = usable_windows(
            self.conditions,
            self.wanted,
            np.array([tubes.index(tube) for tube, _ in planned], dtype=np.intp),
            np.array([balls.index(ball) for _, ball in planned], dtype=np.intp),
            fewest_drops(self.limits),
        )
        of_pair = dict(zip(planned, found, strict=True))
        for pair in set(pairs) - set(planned):
            of_pair[pair] = Window(*pair, None, None, self.left_out[pair], None)
        return tuple(of_pair[pair] for pair in pairs)

    def reaches(self, one: Combination) -> bool:
        """Whether a combination reaches the target, or has bounds where there is none."""
        if self.wanted.target is None:
            return one.relative_expanded_uncertainty is not None
        return one.drops_needed is not None


def make_plan(
    conditions: Conditions,
    wanted: Wanted,
    *,
    tubes: Sequence[str] | None = None,
    balls: Sequence[str] | None = None,
) -> Plan:
    """Plan drops of some (by default all) balls in some (by default all) tubes.

    Raises
    ------
    InputError
        Where there is nothing to plan with, or a name is not on the bench sheet.
    """
    bench = conditions.bench
    limits = limits_from(bench.limits, bench.path)
    tube_names = _names(bench, "tube", list(bench.tubes), tubes)
    ball_names = _names(bench, "ball", list(bench.balls), balls)
    pairs = [(tube, ball) for tube in tube_names for ball in ball_names]
    left_out = {
        pair: reason for pair in pairs if (reason := _not_described(bench, *pair)) is not None
    }
    if len(left_out) == len(pairs):
        raise InputError(
            Problem(reason.message, path=bench.path, key=f"tube.{tube}")
            for (tube, _), reason in left_out.items()
        )
    eta = np.array(wanted.viscosities)
    known_tubes, known_balls = list(bench.tubes), list(bench.balls)
    codes = np.array(
        [
            (known_tubes.index(tube), known_balls.index(ball))
            for tube, ball in pairs
            if (tube, ball) not in left_out
        ],
        dtype=np.intp,
    )
    tube, ball = np.repeat(codes, len(eta), axis=0).T
    viscosity = np.tile(eta, len(codes))
    evaluation = evaluate(conditions, tube, ball, viscosity, wanted.drops)
    prediction = Prediction(evaluation, wanted.coverage)
    n = len(evaluation.solved)
    needed = np.zeros(n, dtype=np.intp)
    if wanted.target is not None:
        needed = prediction.drops_needed(wanted.target, fewest_drops(limits), wanted.most_drops)
    planned = np.maximum(needed, wanted.drops)
    return Plan(
        wanted=wanted,
        limits=limits,
        evaluation=evaluation,
        prediction=prediction,
        needed=needed,
        planned=planned,
        expanded=prediction.expanded(planned),
        left_out=left_out,
    )


def fewest_drops(limits: Limits) -> int:
    """Return the least number of drops of a run set that is not noted as too short."""
    return max(math.ceil(limits.too_few_drops), 1)


def _not_described(bench: Bench, tube: str, ball: str) -> Reason | None:
    """Return why a ball cannot be planned in a calibrated tube: it has no constant there."""
    if bench.tubes[tube].kind == "calibrated":
        try:
            choose_constants(bench, [(tube, ball)])
        except InputError as error:
            return Reason("constant-missing", error.first.message)
    return None


def _names(bench: Bench, kind: str, known: list[str], names: Sequence[str] | None) -> list[str]:
    if not known:
        raise InputError(
            f"no {kind} is described",
            path=bench.path,
            remedy=f"add a [{kind}.NAME] section to the bench sheet",
        )
    for name in names or ():
        if name not in known:
            near = nearest_name(name, known)
            raise InputError(
                f"{kind} '{name}' is not on the bench sheet",
                path=bench.path,
                remedy=f"did you mean '{near}'?" if near else f"known: {', '.join(known)}",
            )
    return known if names is None else list(dict.fromkeys(names))
