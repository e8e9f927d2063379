"""What is filled in at the bench: a bench sheet, a timing file, and a form to print."""

from __future__ import annotations

import csv
import io
import os
from collections.abc import Sequence
from dataclasses import dataclass
from importlib import resources
from itertools import groupby
from pathlib import Path
from typing import Any

from plumbfall._version import __version__
from plumbfall.bench.records import Bench
from plumbfall.errors import InputError
from plumbfall.planning.combination import Combination
from plumbfall.planning.plan import Plan
from plumbfall.report.html import template
from plumbfall.report.plan_sentences import WAIT, conditions_text
from plumbfall.report.plan_words import percent_text, time_text, viscosity_text
from plumbfall.report.words import CAUTIONS
from plumbfall.report.writing import write_folder

__all__ = ["DropsAhead", "blank_forms", "forms_of_plan", "write_forms"]

BENCH, DROPS, FORM = "bench.toml", "drops.csv", "recording_form.html"
DEFAULT_DROPS = 8

CHECKS = (
    "The tube hangs plumb, and the marks are clean and can be seen without parallax.",
    "The liquid is free of bubbles and stands as high as the bench sheet says.",
    "The balls are clean and dry and lie in the bath, so that they have its temperature.",
    "Each ball is let go from rest, under the surface, on the axis of the tube.",
    "The ball is timed as its centre passes a mark; temperature is read at every drop.",
    "A drop that went wrong is recorded and marked void with the reason, never left out.",
)
"""Asked before the first drop (common practice, no source)."""


@dataclass(frozen=True, slots=True)
class DropsAhead:
    """Drops to be made: the run set, a ball each, and what the timing file must say besides.

    ``marks`` counts readings of the clock a drop, 0 where total times are written.
    ``expected`` is what a plan says of them, line by line.
    """

    run_set: str
    balls: tuple[str, ...]
    tube: str = ""
    liquid: str = ""
    marks: int = 0
    expected: tuple[tuple[str, str], ...] = ()

    @property
    def readings(self) -> tuple[str, ...]:
        """Headings of what the clock shows."""
        if not self.marks:
            return ("time [s]",)
        return tuple(f"mark {number} [s]" for number in range(1, self.marks + 1))


def blank_forms() -> dict[str, bytes]:
    """Return a commented bench sheet, and the timing file and form that go with it."""
    sheet = resources.files("plumbfall.report").joinpath("plan_bench.toml").read_bytes()
    ahead = DropsAhead("batch 1", ("one",) * DEFAULT_DROPS)
    return {BENCH: sheet, DROPS: _timing_file(ahead), FORM: _form(ahead, None, "")}


def forms_of_plan(plan: Plan, run_set: str, viscosity: float | None = None) -> dict[str, bytes]:
    """Return the timing file and the form for a plan's best ball and tube.

    Parameters
    ----------
    plan : Plan
        The plan.
    run_set : str
        Name of the run set to be made.
    viscosity : float, optional [Pa.s]
        Which of the viscosities of the plan; the thinnest where not given.

    Raises
    ------
    InputError
        Where nothing is suitable.
    """
    if plan.grade:
        raise InputError(
            "a ball of the catalogue is not on the bench sheet",
            path=plan.bench.path,
            remedy="add the ball that was bought to it, measured and weighed, and plan with that",
        )
    chosen = _chosen(plan, viscosity)
    bench, first = plan.bench, chosen[0]
    tube = bench.tubes[first.tube]
    drops = max(one.drops for one in chosen)
    ahead = DropsAhead(
        run_set=run_set,
        balls=(first.ball,) * drops,
        tube=first.tube if len(bench.tubes) > 1 else "",
        liquid=list(bench.liquids)[plan.conditions.liquid] if len(bench.liquids) > 1 else "",
        marks=len(tube.marks) if len(tube.marks) > 2 else 0,
        expected=tuple(_expected(plan, chosen)),
    )
    return {DROPS: _timing_file(ahead), FORM: _form(ahead, bench, conditions_text(plan))}


def write_forms(
    folder: str | os.PathLike[str], files: dict[str, bytes], bench: Bench | None = None
) -> tuple[str, ...]:
    """Write forms into a folder, all or none; return the names written.

    A bench sheet given is copied beside them, unless it stands there already.

    Raises
    ------
    InputError
        Where a file of one of the names stands there: nothing is overwritten.
    """
    target, wanted = Path(folder), dict(files)
    if bench is not None and bench.path:
        source = Path(bench.path)
        beside = target / BENCH
        if not (beside.exists() and beside.samefile(source)):
            wanted = {BENCH: source.read_bytes(), **_constants(bench), **wanted}
    for name in wanted:
        if (target / name).exists():
            raise InputError(
                "stands there already and is not overwritten",
                path=str(target / name),
                remedy="name another folder, or move the file away",
            )
    write_folder(target, wanted)
    return tuple(wanted)


def _constants(bench: Bench) -> dict[str, bytes]:
    """Return the files of tube constants that the bench sheet names beside itself."""
    folder = Path(bench.path).parent
    files = {one.file for one in bench.constants.values() if one.file is not None}
    for name in sorted(files):
        if Path(name).name != name:
            raise InputError(
                f"names the file {name} in another folder, which a copy would not find",
                path=bench.path,
                remedy="write the forms into the folder of the bench sheet",
            )
    return {name: (folder / name).read_bytes() for name in sorted(files)}


def _chosen(plan: Plan, viscosity: float | None) -> list[Combination]:
    """Return the best ball and tube at every viscosity, or at one."""
    if viscosity is None and plan.one_for_all:
        return list(plan.best)
    at = min(plan.wanted.viscosities) if viscosity is None else viscosity
    pairs = groupby(plan.combinations, lambda one: (one.tube, one.ball))
    for _, group in pairs:
        for one in group:
            if one.suitable and abs(one.viscosity / at - 1) < 1e-9:
                return [one]
    raise InputError(
        f"no ball on the bench will do at {viscosity_text(plan, at)}",
        path=plan.bench.path,
        remedy="see what plumbfall plan says against each, or ask for less",
    )


def _expected(plan: Plan, chosen: Sequence[Combination]) -> list[tuple[str, str]]:
    first = chosen[0]
    lines = []
    for one in chosen:
        text = time_text(one.fall_time)
        if len(one.intervals) > 1:
            text += f" ({' + '.join(time_text(time) for time in one.intervals)})"
        lines.append((f"Fall time at {viscosity_text(plan, one.viscosity)}", text))
    bounds = max(one.relative_expanded_uncertainty or 0.0 for one in chosen)
    drops = max(one.drops for one in chosen)
    lines.append(("Uncertainty to be reached", f"{percent_text(bounds)} with {drops} drops"))
    if first.equilibration_time is not None:
        lines.append(
            (
                "Wait after filling, at least",
                f"{time_text(WAIT * first.equilibration_time)} ({WAIT} time constants of the bore)",
            )
        )
    return lines


def _timing_file(ahead: DropsAhead) -> bytes:
    """Return a timing file with a row for each drop and the readings left blank."""
    columns = ["set", "drop", "ball"]
    columns += [kind for kind in ("tube", "liquid") if getattr(ahead, kind)]
    blank = ["started", "temperature [degC]", *ahead.readings, "operator", "status", "note"]
    text = io.StringIO(newline="")
    writer = csv.writer(text, lineterminator="\n")
    writer.writerow([*columns, *blank])
    for number, ball in enumerate(ahead.balls, 1):
        known: dict[str, Any] = {
            "set": ahead.run_set, "drop": number, "ball": ball,
            "tube": ahead.tube, "liquid": ahead.liquid,
        }  # fmt: skip
        writer.writerow([*(known[column] for column in columns), *[""] * len(blank)])
    return text.getvalue().encode("utf-8")


def _form(ahead: DropsAhead, bench: Bench | None, conditions: str) -> bytes:
    given = {} if bench is None else {**bench.laboratory, **bench.sample}
    page = template("plan_form.html.j2").render(
        title="Recording form" if bench is None else bench.title or "Recording form",
        version=__version__,
        conditions=conditions,
        ahead=ahead,
        laboratory=given.get("name", ""),
        sample=given.get("identity", ""),
        headings=(
            "Drop",
            "Ball",
            "Started",
            "Temperature / °C",
            *(reading.replace(" [s]", " / s").capitalize() for reading in ahead.readings),
            "Used or void",
            "Note",
        ),
        checks=CHECKS,
        cautions=CAUTIONS,
    )
    return page.encode("utf-8")
