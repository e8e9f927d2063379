"""The words and the figures of a plan: times, limits, and what would have to be better."""

from __future__ import annotations

from collections.abc import Iterator

from plumbfall.measurement.inputs import MODEL_INPUT
from plumbfall.planning.combination import Combination
from plumbfall.planning.judgement import Needed, Reason
from plumbfall.planning.plan import Plan
from plumbfall.report.rounding import NO_VALUE, round_alone
from plumbfall.report.scales import Scale, scale_for, viscosity_scale

__all__ = [
    "better_text",
    "interval_text",
    "length_text",
    "limit_word",
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
