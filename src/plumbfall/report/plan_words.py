"""The words and the figures of a plan: times, limits, and what would have to be better."""

from __future__ import annotations

from collections.abc import Iterator

from plumbfall.measurement.inputs import MODEL_INPUT
from plumbfall.planning.catalogue import DENSITY_U, GRADES
from plumbfall.planning.combination import Combination
from plumbfall.planning.judgement import Needed, Reason
from plumbfall.planning.plan import Plan
from plumbfall.report.rounding import NO_VALUE, round_alone
from plumbfall.report.scales import CELSIUS, Scale, scale_for, viscosity_scale
from plumbfall.report.summary import percent

__all__ = [
    "WAIT",
    "answer_text",
    "better_text",
    "conditions_text",
    "facts_of",
    "ideal_texts",
    "interval_text",
    "limit_word",
    "parts_text",
    "percent_text",
    "source_word",
    "time_text",
    "verdict_text",
    "viscosity_text",
]

LIMITS = {
    "ball-not-denser": "ball floats",
    "no-solution": "no fall time",
    "reynolds-high": "Reynolds number",
    "diameter-ratio-high": "ball too wide",
    "run-in-short": "run-in",
    "end-near": "ends too near",
    "off-axis-suspected": "off the axis",
    "fall-time-short": "fall time too short",
    "fall-time-long": "fall time too long",
    "resolution-coarse": "clock too coarse",
    "density-implausible": "density",
    "constant-outside-domain": "calibrated range",
    "constant-missing": "no tube constant",
    "radius-as-diameter-suspected": "density",
}
"""What limits a ball, in the words of a chart."""

SOURCES = {
    "timer": "timing",
    "thermometer": "temperature",
    "set": "temperature",
    "gauge": "ball diameter",
    "balance": "ball mass",
    "scatter": "scatter",
    "site": "gravity",
    "methods": "drag law",
    "material": "ball density",
    "constant": "tube constant",
}
"""What an entry of the bench sheet is about, where its section alone tells."""

KEYS = {
    "bore": "bore", "distance": "distance of the marks", "marks": "distance of the marks",
    "tilt": "tilt", "release_above": "run-in", "release_offset": "off the axis",
    "diameter": "ball diameter", "spread": "ball diameter", "mass": "ball mass",
    "density": "ball density", "viscosity_slope": "temperature", "expansion": "expansion",
}  # fmt: skip

LEAST_SHARE = 0.005
"""Smaller parts of the squared uncertainty are not named among the largest."""

WAIT = 5
"""Time constants to wait before the first drop (common practice, no source)."""


def viscosity_text(plan: Plan, viscosity: float) -> str:
    """Return a viscosity with its unit."""
    scale = viscosity_scale(viscosity, plan.bench.viscosity_unit)
    return f"{scale.alone(viscosity, 3)} {scale.unit}"


def time_text(seconds: float | None) -> str:
    """Return a time in the unit that it is read in.

    Examples
    --------
    >>> time_text(12.345), time_text(754.0), time_text(9000.0)
    ('12.3 s', '12.6 min', '2.50 h')
    """
    if seconds is None:
        return NO_VALUE
    for limit, unit, size in ((180.0, "s", 1.0), (7200.0, "min", 60.0)):
        if seconds < limit:
            return f"{round_alone(seconds / size, 3)} {unit}"
    return f"{round_alone(seconds / 3600.0, 3)} h"


def percent_text(ratio: float | None) -> str:
    """Return a relative uncertainty as percents with two digits."""
    return NO_VALUE if ratio is None else f"{round_alone(100.0 * ratio, 2)} %"


def length_text(metres: float | None) -> str:
    """Return a length in millimetres with three digits."""
    return NO_VALUE if metres is None else f"{Scale('mm', 1e3).alone(metres, 3)} mm"


def limit_word(reason: Reason | None, part: str | None) -> str:
    """Return what limits a ball at an end of its window, empty where nothing was met."""
    if reason is None:
        return ""
    if reason.code == "uncertainty":
        return source_word(part or "")
    return LIMITS.get(reason.code, reason.code)


def source_word(path: str | None) -> str:
    """Return what an entry of the bench sheet is about, in the words of the trade.

    Examples
    --------
    >>> source_word("timer.T1.per_drop"), source_word("liquid.oil.density")
    ('timing', 'liquid density')
    """
    if path is None:
        return NO_VALUE
    section, key = path.split(".", 1)[0], path.rsplit(".", 1)[-1].split("[", 1)[0]
    if section == "liquid" and key == "density":
        return "liquid density"
    return SOURCES.get(section) or KEYS.get(key) or path or "uncertainty"


def verdict_text(one: Combination) -> str:
    """Return in a word whether a combination will do."""
    return "will do" if one.suitable else "will not do"


def interval_text(one: Combination) -> str:
    """Return the times between successive marks; empty where there are two marks."""
    if len(one.intervals) < 2:
        return ""
    return " + ".join(time_text(time) for time in one.intervals)


def better_text(one: Combination) -> Iterator[str]:
    """Yield what would have to be better for the target to be reached."""
    for better in one.improvements:
        yield _better(better)


def _better(better: Needed) -> str:
    if better.input == MODEL_INPUT:
        return (
            f"the drag law is known to {percent_text(better.present)} there and "
            f"{percent_text(better.needed)} is needed: take a smaller or lighter ball"
        )
    if better.needed <= 0.0:
        return f"{better.input} would have to be free of error"
    scale = scale_for(better.unit, better.present)
    if better.unit == "s":
        scale = Scale("s") if better.present >= 1e-3 else Scale("ms", 1e3)
    if better.unit == "1":
        scale = Scale("%", 100.0) if better.present >= 1e-4 else Scale("ppm", 1e6)
    scale = Scale(scale.unit, scale.factor)  # an uncertainty has no zero of its own
    return (
        f"{better.input}: an uncertainty of {scale.alone(better.needed, 2)} {scale.unit} "
        f"instead of {scale.alone(better.present, 2)} {scale.unit}"
    )


def parts_text(one: Combination) -> str:
    """Return the largest parts of the uncertainty, with their shares of its square."""
    return ", ".join(
        f"{part.input} {Scale('%', 100.0).fixed(part.share, 0)} %"
        for part in one.budget[:3]
        if part.share >= LEAST_SHARE
    )


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
