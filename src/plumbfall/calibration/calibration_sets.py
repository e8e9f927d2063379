"""Timings in certified liquids, one set for each ball and tube, reduced with a constant of 1.

What a drop then gives is (ball density - liquid density) x time, by the very functions that will
use the constant: every error they share is known by the input's name.
"""

from __future__ import annotations

import dataclasses
from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np

from plumbfall.bench.keys import key_path
from plumbfall.bench.records import Bench, Constant, Liquid, Reference, RunSetEntry, Tube
from plumbfall.calibration.certified import CertifiedValue, certified_value
from plumbfall.errors import InputError, Problem, nearest_name
from plumbfall.estimate import Estimate
from plumbfall.measurement.selection import Selection, select
from plumbfall.reduction.drops import reduce_drops
from plumbfall.reduction.numbers import reduce_numbers
from plumbfall.reduction.reduced import Reduction
from plumbfall.timings.records import Timings

__all__ = ["UNIT_NAME", "CalibrationSets", "SetOf", "calibration_sets", "slope_name"]

UNIT = "unit"
UNIT_NAME = key_path("constant", UNIT, "value")
"""Name of the constant of 1 m2/s2 that stands in."""


@dataclass(frozen=True, slots=True)
class SetOf:
    """A calibration set: drops of one ball in one tube and one certified liquid."""

    name: str
    run_set: str
    tube: str
    ball: str
    liquid: str
    certified: CertifiedValue


@dataclass(frozen=True)
class CalibrationSets:
    """The sets by their names in ``reduction``, and the bench they were made on."""

    bench: Bench
    sets: tuple[SetOf, ...]
    reduction: Reduction


def calibration_sets(
    timings: Timings,
    bench: Bench,
    references: Sequence[str],
    inputs: tuple[tuple[str, str], ...] = (),
) -> CalibrationSets:
    """Reduce timings in certified liquids with a constant of 1.

    Parameters
    ----------
    timings : Timings
        The drops as read.
    bench : Bench
        The bench sheet.
    references : sequence of str
        Names of the certified liquids that were used.
    inputs : tuple of (path, sha256)
        The input files.

    Raises
    ------
    InputError
        Where a reference is not on the bench, a run set is in a liquid that none certifies, or
        at a temperature that none reaches.
    """
    if not len(timings):
        raise InputError("there is no drop to calibrate with", remedy="give a timing file")
    chosen = _references(bench, references)
    unit = _of_unit_constant(bench)
    split, labels = _split(timings, unit)
    liquid_of = dict(zip(labels, _certifying(labels, chosen, bench), strict=True))
    plain = _with_sets(unit, labels, {})
    temperatures = reduce_numbers(split, plain).columns.set_temperature
    found = []
    for label, temperature in zip(labels, temperatures, strict=True):
        found.append(_certified(label, float(temperature), liquid_of[label], bench))
    with_slopes = _with_sets(
        unit, labels, {one.name: (one.liquid, _slope(one.certified)) for one in found}
    )
    return CalibrationSets(
        bench, tuple(found), reduce_drops(split, with_slopes, draws=0, inputs=inputs)
    )


@dataclass(frozen=True, slots=True)
class _Label:
    """A set's name in the reduction, and what it is made of."""

    name: str
    run_set: str
    tube: str
    ball: str
    liquid: str


def _references(bench: Bench, names: Sequence[str]) -> list[Reference]:
    problems = []
    known = list(bench.references)
    for name in dict.fromkeys(names):
        if name not in bench.references:
            near = nearest_name(name, known)
            remedy = f"did you mean '{near}'?" if near else ""
            listed = f"the bench has {', '.join(known)}" if known else f"add [reference.{name}]"
            problems.append(
                Problem(
                    f"there is no reference '{name}' on the bench sheet",
                    remedy or listed,
                    path=bench.path,
                )
            )
    if not names:
        problems.append(
            Problem("no reference is named", "name the certified liquid: --reference NAME")
        )
    if problems:
        raise InputError(problems)
    return [bench.references[name] for name in dict.fromkeys(names)]


def _of_unit_constant(bench: Bench) -> Bench:
    """Return the bench with every tube calibrated, by a constant of 1 without uncertainty."""
    tubes = {
        name: Tube(
            name=name,
            kind="calibrated",
            marks=tube.marks,
            constant=(UNIT,),
            identity=tube.identity,
        )
        for name, tube in bench.tubes.items()
    }
    one = Constant(name=UNIT, value=Estimate(1.0, name=UNIT_NAME, unit="m2/s2"))
    return dataclasses.replace(
        bench,
        tubes=tubes,
        constants={UNIT: one},
        references={},
        reference_temperature=None,
        methods=dataclasses.replace(bench.methods, slope=None),
    )


def _split(timings: Timings, bench: Bench) -> tuple[Timings, list[_Label]]:
    """Give the drops of each ball and tube in a run set a set of their own."""
    selection = select(timings, bench)
    _refuse_empty(selection)
    labels = _labels(selection, bench)
    table = timings.table.copy()
    names = table["set"].astype(str).to_numpy().astype(object)
    cells = selection.cells
    of_cell = {}
    for label in labels:
        of_cell[label.run_set, label.tube, label.ball] = label.name
    tubes, balls = list(bench.tubes), list(bench.balls)
    by_cell = [
        of_cell[selection.names[s], tubes[t], balls[b]]
        for s, t, b in zip(cells.run_set, cells.tube, cells.ball, strict=True)
    ]
    first = {label.run_set: label.name for label in reversed(labels)}
    names[:] = [first[name] for name in names]  # rows that are not used stay with their run set
    names[selection.row] = [by_cell[cell] for cell in selection.cell]
    table["set"], table["liquid"] = names, names
    table = table.astype({"set": "category", "liquid": "category"})
    return dataclasses.replace(timings, table=table), labels


def _refuse_empty(selection: Selection) -> None:
    used = np.bincount(selection.run_set, minlength=len(selection.names))
    if problems := [
        Problem(
            f"run set '{selection.names[place]}' has no drop that is used",
            "leave its file out, or correct the status of its rows",
        )
        for place in np.flatnonzero(used == 0)
    ]:
        raise InputError(problems)


def _labels(selection: Selection, bench: Bench) -> list[_Label]:
    tubes, balls, liquids = list(bench.tubes), list(bench.balls), list(bench.liquids)
    cells = selection.cells
    made: dict[tuple[int, int, int], str] = {}
    for s, t, b, liquid in zip(cells.run_set, cells.tube, cells.ball, cells.liquid, strict=True):
        made.setdefault((int(s), int(t), int(b)), liquids[liquid])
    n_balls = {s: len({b for (i, _, b) in made if i == s}) for (s, _, _) in made}
    n_tubes = {s: len({t for (i, t, _) in made if i == s}) for (s, _, _) in made}
    labels = []
    for (s, t, b), liquid in made.items():
        name = selection.names[s]
        name += f", ball {balls[b]}" if n_balls[s] > 1 else ""
        name += f", tube {tubes[t]}" if n_tubes[s] > 1 else ""
        labels.append(_Label(name, selection.names[s], tubes[t], balls[b], liquid))
    return labels


def _certifying(
    labels: Sequence[_Label], references: Sequence[Reference], bench: Bench
) -> list[Reference]:
    """Return the reference of each set: the one for its liquid."""
    by_liquid = {one.liquid: one for one in references if one.liquid is not None}
    open_ended = [one for one in references if one.liquid is None]
    liquids = {label.liquid for label in labels}
    if len(open_ended) == 1 and len(liquids - set(by_liquid)) == 1:
        by_liquid[(liquids - set(by_liquid)).pop()] = open_ended[0]
    found, problems = [], []
    for label in labels:
        reference = by_liquid.get(label.liquid)
        if reference is not None:
            found.append(reference)
            continue
        problems.append(
            Problem(
                f"run set '{label.run_set}' is in liquid '{label.liquid}', which none of the "
                f"references named certifies ({', '.join(one.name for one in references)})",
                f'name its reference too, or add liquid = "{label.liquid}" to the [reference.NAME]',
                path=bench.path,
            )
        )
    if problems:
        raise InputError(dict.fromkeys(problems))
    return found


def _certified(label: _Label, temperature: float, reference: Reference, bench: Bench) -> SetOf:
    if np.isnan(temperature):
        raise InputError(
            f"run set '{label.run_set}' has no temperature, at which its liquid is certified",
            path=bench.path,
            remedy="add a temperature column to the timing file, or temperature to the run set",
        )
    try:
        value = certified_value(
            reference, temperature=temperature, liquid=bench.liquids[label.liquid]
        )
    except InputError as error:
        raise InputError(
            dataclasses.replace(one, path=one.path or bench.path) for one in error.problems
        ) from None
    return SetOf(label.name, label.run_set, label.tube, label.ball, label.liquid, value)


def _slope(certified: CertifiedValue) -> float:
    """Relative slope of a certified viscosity, 1/K; NaN where it is not known."""
    return certified.slope / certified.value


def _with_sets(
    bench: Bench, labels: Sequence[_Label], slopes: Mapping[str, tuple[str, float]]
) -> Bench:
    """Give every set its liquid, with the certificate's own temperature slope."""
    liquids, sets = {}, {}
    for label in labels:
        liquid = bench.liquids[label.liquid]
        _, slope = slopes.get(label.name, ("", np.nan))
        liquids[label.name] = _sloped(liquid, label.name, slope)
        entry = bench.sets.get(label.run_set) or RunSetEntry(name=label.run_set)
        sets[label.name] = dataclasses.replace(
            entry, name=label.name, tube=label.tube, ball=label.ball, liquid=label.name
        )
    return dataclasses.replace(bench, liquids=liquids, sets=sets)


def slope_name(run_set: str) -> str:
    """Return the name of the exact slope that a set's certified liquid has."""
    return key_path("liquid", run_set, "certified slope")


def _sloped(liquid: Liquid, name: str, slope: float) -> Liquid:
    """Return a liquid with a slope that counts as exact; the certificate's error is its value's."""
    known = Estimate(slope, name=slope_name(name), unit="1/K")
    return dataclasses.replace(
        liquid, viscosity_slope=None if np.isnan(slope) else known, specification=None
    )
