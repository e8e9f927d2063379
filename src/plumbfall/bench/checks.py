"""What the schema cannot see: entries that must agree with each other, all checked at once."""

from __future__ import annotations

import math
from collections.abc import Iterable, Iterator, Mapping

from plumbfall.bench.keys import key_path
from plumbfall.bench.records import Ball, Bench, Tube
from plumbfall.bench.schema import Sheet
from plumbfall.errors import Problem, nearest_name

__all__ = ["cross_check"]

LIGHTEST, HEAVIEST = 500.0, 25_000.0
"""Density of any ball, kg/m3: from foamed plastic to osmium."""


def cross_check(sheet: Sheet, bench: Bench) -> list[Problem]:
    """Return every disagreement between entries.

    Parameters
    ----------
    sheet
        The sheet as the schema read it: what was given.
    bench
        Its records.
    """
    parts = (
        _names(sheet),
        *(_tube(sheet, bench, tube) for tube in bench.tubes.values()),
        *(_ball(sheet, ball) for ball in bench.balls.values()),
        _balls_in_tubes(bench),
        _references(sheet),
        _constants(sheet),
        _specifications(bench),
    )
    return [problem for found in parts for problem in found]


# --- names --------------------------------------------------------------------------------------

_REFERRING = {
    "ball": (("material", "material"), ("gauge", "gauge"), ("balance", "balance")),
    "set": tuple((kind, kind) for kind in ("tube", "liquid", "ball", "timer", "thermometer")),
    "reference": (("liquid", "liquid"),),
    "constant": (("tube", "tube"), ("ball", "ball")),
    "tube": (("constant", "constant"),),
}


def _names(sheet: Sheet) -> Iterator[Problem]:
    for section in type(sheet).model_fields:
        entries = getattr(sheet, section)
        if isinstance(entries, dict) and "" in entries:
            yield Problem("an entry has an empty name", "give it a name", key=key_path(section, ""))
    for section, references in _REFERRING.items():
        for name, entry in getattr(sheet, section).items():
            for key, kind in references:
                given = getattr(entry, key)
                for wanted in (given,) if isinstance(given, str) else given or ():
                    yield from _known(wanted, kind, getattr(sheet, kind), section, name, key)


def _known(
    wanted: str, kind: str, entries: Mapping[str, object], section: str, name: str, key: str
) -> Iterator[Problem]:
    if wanted in entries:
        return
    near = nearest_name(wanted, entries)
    if near:
        remedy = f"did you mean '{near}'?"
    else:
        known = f"; known are {', '.join(entries)}" if entries else ""
        remedy = f"add [{key_path(kind, wanted)}]{known}"
    yield Problem(f"there is no {kind} '{wanted}'", remedy, key=key_path(section, name, key))


# --- tubes --------------------------------------------------------------------------------------


def _tube(sheet: Sheet, bench: Bench, tube: Tube) -> Iterator[Problem]:
    keys = sheet.tube[tube.name]
    path = key_path("tube", tube.name)
    if keys.marks and keys.distance:
        yield Problem("both marks and distance are given", "keep one of them", key=path)
    if tube.kind == "calibrated":
        named = any(entry.tube == tube.name for entry in bench.constants.values())
        if not tube.constant and not named:
            yield Problem(
                "a calibrated tube has no constant",
                f'add constant = "NAME" with [constant.NAME], or tube = "{tube.name}" to one',
                key=path,
            )
    else:
        if tube.constant:
            yield Problem(
                "a vertical tube takes no constant",
                'add kind = "calibrated", or drop constant',
                key=f"{path}.constant",
            )
        elif tube.bore is None:
            yield Problem("is missing", 'add bore, such as "50.00(2) mm"', key=f"{path}.bore")
        if not tube.marks and not tube.constant:
            yield Problem(
                "a vertical tube has no marks",
                'add distance = "200.00(5) mm", or marks = ["0 mm", "200.00(5) mm"]',
                key=path,
            )
    if len(tube.marks) == 1:
        yield Problem("one mark gives no distance", "give two marks or more", key=f"{path}.marks")
    for n, (upper, lower) in enumerate(zip(tube.marks, tube.marks[1:], strict=False), 1):
        if lower.value <= upper.value:
            yield Problem(
                f"'{lower.text}' is not below the mark before it, '{upper.text}'",
                "give distances down from the first mark, in order",
                key=f"{path}.marks[{n}]",
            )
    release, surface = tube.release_above, tube.surface_above
    if release and surface and release.value > surface.value:
        yield Problem(
            f"'{release.text}' above the first mark is above the liquid surface ('{surface.text}')",
            "a ball is let go below the surface",
            key=f"{path}.release_above",
        )
    offset = tube.release_offset
    if offset and tube.bore and abs(offset.value) >= tube.bore.value / 2:
        yield Problem(
            f"'{offset.text}' from the axis is outside the bore ('{tube.bore.text}')",
            "give the distance from the axis",
            key=f"{path}.release_offset",
        )


# --- balls --------------------------------------------------------------------------------------


def _ball(sheet: Sheet, ball: Ball) -> Iterator[Problem]:
    keys = sheet.ball[ball.name]
    path = key_path("ball", ball.name)
    given = [key for key in ("density", "material", "mass") if getattr(keys, key) is not None]
    if len(given) != 1:
        said = f"both {' and '.join(given)} are given" if given else "nothing says how heavy it is"
        if len(given) == 3:
            said = "density, material and mass are all given"
        remedy = "keep one of them" if given else "add density, material or mass"
        yield Problem(said, remedy, key=path)
    if ball.weighed_together > 1 and ball.mass is None:
        yield Problem(
            "stands without mass",
            "add mass, or drop weighed_together",
            key=f"{path}.weighed_together",
        )
    if ball.balance and ball.mass is None:
        yield Problem("stands without mass", "add mass, or drop balance", key=f"{path}.balance")
    if ball.spread and not ball.lot:
        yield Problem(
            "a single ball has no spread from ball to ball",
            "add lot = true, or drop spread",
            key=f"{path}.spread",
        )
    if ball.mass is not None:
        yield from _mass_and_diameter(ball, path)


def _mass_and_diameter(ball: Ball, path: str) -> Iterator[Problem]:
    if ball.mass is None:
        return
    volume = math.pi / 6 * ball.diameter.value**3
    density = ball.mass.value / ball.weighed_together / volume
    if LIGHTEST <= density <= HEAVIEST:
        return
    remedy = "check mass, diameter and their units"
    if ball.weighed_together == 1 and density > HEAVIEST:
        remedy += "; are several balls on the balance? then add weighed_together"
    if _likely(density / 8):
        remedy = "is the diameter a radius? " + remedy
    elif _likely(density * 8):
        remedy = "is the diameter twice too large? " + remedy
    yield Problem(
        f"mass '{ball.mass.text}' and diameter '{ball.diameter.text}' make a density of "
        f"{density / 1000:.3g} g/cm3, outside 0.5 to 25 g/cm3",
        remedy,
        key=path,
    )


def _likely(density: float) -> bool:
    """Whether a density is that of a usual ball, from polyamide to tungsten carbide."""
    return 900.0 <= density <= 16_000.0


def _balls_in_tubes(bench: Bench) -> Iterator[Problem]:
    said = set()
    for entry in bench.sets.values():
        tube = bench.tubes.get(entry.tube or _only(bench.tubes))
        ball = bench.balls.get(entry.ball or _only(bench.balls))
        if tube and ball and tube.bore and not _fits(ball, tube) and ball.name not in said:
            said.add(ball.name)
            yield _too_wide(ball, tube)
    if not bench.tubes or any(tube.bore is None for tube in bench.tubes.values()):
        return
    for ball in bench.balls.values():
        if ball.name not in said and not any(_fits(ball, tube) for tube in bench.tubes.values()):
            widest = max(bench.tubes.values(), key=lambda tube: tube.bore.value if tube.bore else 0)
            yield _too_wide(ball, widest)


def _only(entries: Iterable[str]) -> str:
    names = list(entries)
    return names[0] if len(names) == 1 else ""


def _fits(ball: Ball, tube: Tube) -> bool:
    return tube.bore is None or ball.diameter.value < tube.bore.value


def _too_wide(ball: Ball, tube: Tube) -> Problem:
    bore = tube.bore.text if tube.bore else ""
    return Problem(
        f"ball '{ball.name}' of '{ball.diameter.text}' does not fit tube '{tube.name}' with a bore "
        f"of '{bore}'",
        "check both diameters and their units",
        key=key_path("ball", ball.name, "diameter"),
    )


# --- liquids and constants ----------------------------------------------------------------------


def _references(sheet: Sheet) -> Iterator[Problem]:
    for name, keys in sheet.reference.items():
        if bool(keys.viscosity) == bool(keys.law):
            said = "both viscosity and law are given" if keys.law else "has no viscosity"
            remedy = "keep one of them" if keys.law else "add viscosity = [ { ... } ], or law"
            yield Problem(said, remedy, key=key_path("reference", name))
        temperatures = [point.temperature.value for point in keys.viscosity]
        if len(set(temperatures)) < len(temperatures):
            yield Problem(
                "has two points at one temperature",
                "keep one of them",
                key=key_path("reference", name, "viscosity"),
            )


def _constants(sheet: Sheet) -> Iterator[Problem]:
    for name, keys in sheet.constant.items():
        if (keys.value is None) == (keys.file is None):
            both = keys.value is not None
            said = "both value and file are given" if both else "has neither value nor file"
            remedy = "keep one of them" if both else "add value, or file"
            yield Problem(said, remedy, key=key_path("constant", name))
    for tube, tube_keys in sheet.tube.items():
        mine = [entry for name, entry in sheet.constant.items() if name in tube_keys.constant]
        if not tube_keys.constant:
            mine = [entry for entry in sheet.constant.values() if entry.tube == tube]
        for name in tube_keys.constant:
            other = sheet.constant[name].tube if name in sheet.constant else None
            if other not in (None, tube):
                yield Problem(
                    f"constant '{name}' is that of tube '{other}'",
                    "name a constant of this tube",
                    key=key_path("tube", tube, "constant"),
                )
        balls = [entry.ball for entry in mine if entry.value is not None]
        if len(balls) > 1 and (None in balls or len(set(balls)) < len(balls)):
            yield Problem(
                "several constants of this tube are for the same ball or for any ball",
                "name a ball of its own in each [constant.NAME]",
                key=key_path("tube", tube, "constant"),
            )


def _specifications(bench: Bench) -> Iterator[Problem]:
    for liquid in bench.liquids.values():
        limits = liquid.specification
        if limits is None:
            continue
        path = key_path("liquid", liquid.name, "specification")
        if limits.low is None and limits.high is None:
            yield Problem("has no limit", "add low, high or both", key=path)
        elif limits.low and limits.high and limits.low.value >= limits.high.value:
            yield Problem(
                f"low '{limits.low.text}' is not below high '{limits.high.text}'",
                "exchange them",
                key=path,
            )
