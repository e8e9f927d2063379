"""What a plan says in sentences: the answer, the conditions, and the facts of a ball in a tube."""

from __future__ import annotations

from collections.abc import Iterator

from plumbfall.planning.catalogue import DENSITY_U, GRADES
from plumbfall.planning.combination import Combination
from plumbfall.planning.plan import Plan
from plumbfall.report.plan_words import length_text, percent_text, time_text, viscosity_text
from plumbfall.report.rounding import round_alone
from plumbfall.report.scales import CELSIUS, Scale
from plumbfall.report.summary import percent

__all__ = ["WAIT", "answer_text", "conditions_text", "facts_of", "ideal_texts", "parts_text"]

LEAST_SHARE = 0.005
"""Smaller parts of the squared uncertainty are not named among the largest."""

WAIT = 5
"""Time constants to wait before the first drop (common practice, no source)."""


def answer_text(plan: Plan) -> str:
    """Return the answer in a sentence."""
    best = plan.best
    if plan.one_for_all:
        bounds = max(one.relative_expanded_uncertainty or 0.0 for one in best)
        drops = max(one.drops for one in best)
        text = (
            f"Best: ball {best[0].ball} in tube {best[0].tube}, {percent_text(bounds)} or better "
            f"with {drops} drops"
        )
        needed = max(one.drops_needed or 0 for one in best)
        return f"{text}; {needed} are enough" if 0 < needed < drops else text
    if plan.suitable:
        return "No one ball will do over the whole range, but one or another will at each viscosity"
    if any(one.suitable for one in plan.combinations):
        return "Only a part of the range can be measured: see the usable viscosities"
    return f"Nothing here will do; nearest is ball {best[0].ball} in tube {best[0].tube}"


def conditions_text(plan: Plan) -> str:
    """Return liquid, temperature, viscosities and target in a line."""
    wanted, conditions = plan.wanted, plan.conditions
    liquid = list(plan.bench.liquids)[conditions.liquid]
    low, high = min(wanted.viscosities), max(wanted.viscosities)
    between = viscosity_text(plan, low)
    if high > low:
        between += f" to {viscosity_text(plan, high)}"
    text = f"{liquid} at {CELSIUS.fixed(conditions.temperature, 2)} degC, {between}"
    if wanted.target is None:
        return f"{text}; no target given"
    return (
        f"{text}; wanted: {percent_text(wanted.target)} expanded uncertainty "
        f"({percent(wanted.coverage)}) in at most {wanted.most_drops} drops"
    )


def ideal_texts(plan: Plan) -> Iterator[str]:
    """Yield, for each tube, the ball that would do best if any could be had."""
    for one in plan.ideal:
        text = (
            f"A ball of {length_text(one.diameter)} and {round_alone(one.density / 1000, 2)} "
            f"g/cm3 would do best in tube {one.tube}: "
            f"{percent_text(one.relative_expanded_uncertainty)} with {plan.wanted.drops} drops"
        )
        yield text if one.clean else f"{text}, in spite of what speaks against it"
    if plan.grade:
        grade = GRADES[plan.grade]
        yield (
            f"Below are lots of grade {plan.grade} in preferred sizes (ISO 3290-1), their balls "
            f"alike within {1e6 * grade.lot:g} um. A lot's mean may be {1e6 * grade.gauge:g} um "
            f"off the nominal diameter: measure it. The density is taken as known to "
            f"{100 * DENSITY_U:g} %: weigh the balls"
        )


def parts_text(one: Combination) -> str:
    """Return the largest parts of the uncertainty, with their shares of its square."""
    return ", ".join(
        f"{part.input} {Scale('%', 100.0).fixed(part.share, 0)} %"
        for part in one.budget[:3]
        if part.share >= LEAST_SHARE
    )


def facts_of(plan: Plan, one: Combination) -> Iterator[tuple[str, str]]:
    """Yield what holds for a ball in a tube, by name: geometry, run-in, ends, waiting."""
    several = len(plan.wanted.viscosities) > 1
    at = f" at {viscosity_text(plan, one.viscosity)}" if several else ""
    if one.diameter_ratio is not None:
        yield "diameter ratio", round_alone(one.diameter_ratio, 3)
    if one.shear_rate is not None:
        yield f"shear rate{at}", f"{round_alone(one.shear_rate, 3)} 1/s"
    if one.run_in is not None:
        room = "room unknown" if one.run_in_room is None else f"{length_text(one.run_in_room)} room"
        yield f"run-in{at}", f"{length_text(one.run_in)}, {room}"
    if one.scatter is not None:
        yield f"scatter of a drop{at}", percent_text(one.scatter)
    clearances = (("surface", one.surface_clearance), ("bottom", one.bottom_clearance))
    if one.speed is not None and one.bore is not None:
        ends = [
            f"{name} {round_alone(2 * clearance / one.bore, 2)}"
            for name, clearance in clearances
            if clearance is not None
        ]
        yield "ends", f"{', '.join(ends)} bore radii away" if ends else "distances unknown"
    if one.equilibration_time is not None:
        yield (
            "wait before the first drop",
            f"{WAIT} x {time_text(one.equilibration_time)} (time constant of the bore)",
        )
