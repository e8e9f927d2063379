"""What the schema cannot see: entries that must agree with each other, all checked at once."""

from __future__ import annotations

from collections.abc import Collection, Iterator, Mapping

from plumbfall.bench.equipment_checks import ball_problems, misfits, tube_problems
from plumbfall.bench.keys import key_path
from plumbfall.bench.records import Bench
from plumbfall.bench.schema import Sheet
from plumbfall.errors import Problem, nearest_name

__all__ = ["cross_check"]


def cross_check(
    sheet: Sheet, bench: Bench, *, names: Mapping[str, Collection[str]], whole: bool = True
) -> list[Problem]:
    """Return every disagreement between entries.

    Parameters
    ----------
    sheet
        The sheet as the schema read it: what was given.
    bench
        Its records.
    names
        Every name the sheet holds, by kind, also of entries the schema refused.
    whole
        Whether the schema refused nothing; otherwise only what does not depend on the refused
        entries is checked.
    """
    parts = [
        _names(sheet, names),
        *(tube_problems(sheet, bench, tube, whole=whole) for tube in bench.tubes.values()),
        *(ball_problems(sheet, ball) for ball in bench.balls.values()),
        _references(sheet),
        _constants(sheet),
        _specifications(bench),
    ]
    if whole:
        parts += [misfits(bench), _constants_of_tubes(sheet)]
    return [problem for found in parts for problem in found]


# --- names --------------------------------------------------------------------------------------

_REFERRING = {
    "ball": (("material", "material"), ("gauge", "gauge"), ("balance", "balance")),
    "set": tuple((kind, kind) for kind in ("tube", "liquid", "ball", "timer", "thermometer")),
    "reference": (("liquid", "liquid"),),
    "constant": (("tube", "tube"), ("ball", "ball")),
    "tube": (("constant", "constant"),),
}


def _names(sheet: Sheet, names: Mapping[str, Collection[str]]) -> Iterator[Problem]:
    for section, entries in names.items():
        if "" in entries:
            yield Problem("an entry has an empty name", "give it a name", key=key_path(section, ""))
    for section, references in _REFERRING.items():
        for name, entry in getattr(sheet, section).items():
            for key, kind in references:
                given = getattr(entry, key)
                for wanted in (given,) if isinstance(given, str) else given or ():
                    place = key_path(section, name, key)
                    yield from _known(wanted, kind, names.get(kind, ()), place)


def _known(wanted: str, kind: str, entries: Collection[str], place: str) -> Iterator[Problem]:
    if wanted in entries:
        return
    near = nearest_name(wanted, entries)
    if near:
        remedy = f"did you mean '{near}'?"
    else:
        known = f"; known are {', '.join(entries)}" if entries else ""
        remedy = f"add [{key_path(kind, wanted)}]{known}"
    yield Problem(f"there is no {kind} '{wanted}'", remedy, key=place)


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


def _constants_of_tubes(sheet: Sheet) -> Iterator[Problem]:
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
