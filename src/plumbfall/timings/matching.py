"""Drops against the bench sheet: are the names in it, and do the marks agree with the tube's."""

from __future__ import annotations

from collections.abc import Collection, Sequence

import numpy as np

from plumbfall.bench.records import Bench
from plumbfall.errors import nearest_name
from plumbfall.timings.drops import FileDrops
from plumbfall.timings.notices import Notices, quoted

__all__ = ["match_bench"]


def match_bench(drops: FileDrops, bench: Bench, notices: Notices) -> None:
    """Note every name that the bench sheet lacks, and what it needs and the file does not say."""
    kinds: tuple[tuple[str, Collection[str]], ...] = (
        ("ball", bench.balls),
        ("tube", bench.tubes),
        ("liquid", bench.liquids),
        ("timer", bench.timers),
        ("thermometer", bench.thermometers),
    )
    for kind, known in kinds:
        _match_names(drops, kind, known, notices)
    _match_sets(drops, bench, notices)
    if len(bench.balls) > 1:
        _need_balls(drops, bench, notices)
    _match_marks(drops, bench, notices)


def _listed(names: Collection[str]) -> str:
    shown = ", ".join(list(names)[:8])
    return shown + (", …" if len(names) > 8 else "")


def _match_names(drops: FileDrops, kind: str, known: Collection[str], notices: Notices) -> None:
    labels = drops.labels[kind]
    if kind not in drops.layout.fields:
        return
    column = drops.layout.fields[kind].column
    counts = np.bincount(labels.codes, minlength=len(labels.names))
    for code, name in enumerate(labels.names):
        if not name or name in known or not counts[code]:
            continue
        near = nearest_name(name, known)
        if near:
            remedy = f"did you mean {quoted(near)}? "
        elif known:
            remedy = f"the bench sheet has {_listed(known)}; "
        else:
            remedy = f"the bench sheet has no {kind}; "
        rows = f" ({counts[code]} rows)" if counts[code] > 1 else ""
        notices.error(
            f"{kind} {quoted(name)} is not in the bench sheet{rows}",
            f"{remedy}correct the name, or add [{kind}.{_key(name)}] to the bench sheet",
            int(drops.line[labels.first_row(code)]),
            column,
        )


def _key(name: str) -> str:
    return (
        name
        if name.replace("_", "").replace("-", "").isalnum() and name.isascii()
        else ('"' + name.replace("\\", "\\\\").replace('"', '\\"') + '"')
    )


def _match_sets(drops: FileDrops, bench: Bench, notices: Notices) -> None:
    """Warn of a set whose name is nearly, but not quite, that of an entry nothing else uses."""
    labels = drops.labels["set"]
    unused = [name for name in bench.sets if name not in labels.names]
    for code, name in enumerate(labels.names):
        near = None if name in bench.sets else nearest_name(name, unused)
        row = labels.first_row(code) if near else -1
        if near and row >= 0:
            heading = drops.layout.fields.get("set")
            notices.error(
                f"run set {quoted(name)} has no entry in the bench sheet, which has {quoted(near)}",
                "write the same name in both if the same set is meant",
                int(drops.line[row]),
                heading.column if heading else None,
                severity="warning",
            )


def _need_balls(drops: FileDrops, bench: Bench, notices: Notices) -> None:
    """Note used drops of which neither file nor bench sheet tells the ball."""
    sets, balls = drops.labels["set"], drops.labels["ball"]
    unnamed = np.array([name == "" for name in balls.names], dtype=bool)
    silent = np.array(
        [name not in bench.sets or bench.sets[name].ball is None for name in sets.names], dtype=bool
    )
    rows = np.flatnonzero(unnamed[balls.codes] & silent[sets.codes] & (drops.status == 0))
    heading = drops.layout.fields.get("ball")
    for code in np.unique(sets.codes[rows]):
        name = sets.names[code]
        row = sets.first_row(int(code), rows)
        remedy = (
            f'add a column "ball", or ball = "…" under [set.{_key(name)}] in the bench sheet,'
            f" which has {_listed(bench.balls)}"
        )
        if heading is None:
            notices.error(
                f"no column names the ball of set {quoted(name)}, and the bench sheet has several",
                remedy,
                drops.heading_line,
            )
            continue
        for row in rows[sets.codes[rows] == code]:
            notices.error("the ball is missing", remedy, int(drops.line[row]), heading.column)


def _match_marks(drops: FileDrops, bench: Bench, notices: Notices) -> None:
    """Note layouts whose number of marks is not the tube's, and an ambiguous ``time 1…n``."""
    layout = drops.layout
    sets, tubes = drops.labels["set"], drops.labels["tube"]
    pairs = np.unique(sets.codes * len(tubes.names) + tubes.codes)
    seen = set()
    for pair in pairs:
        set_name = sets.names[pair // len(tubes.names)]
        name = tubes.names[pair % len(tubes.names)]
        if not name and set_name in bench.sets:
            name = bench.sets[set_name].tube or ""
        if not name and len(bench.tubes) == 1:
            name = next(iter(bench.tubes))
        if name in seen or name not in bench.tubes:
            continue
        seen.add(name)
        marks = len(bench.tubes[name].marks)
        first, count = layout.times[0], len(layout.times)
        if layout.n_marks and marks and layout.n_marks != marks:
            implied = ", the first one without a column" if layout.first_mark == 2 else ""
            notices.error(
                f"the {layout.kind} of this file are those of {layout.n_marks} marks{implied};"
                f" tube {quoted(name)} has {marks}",
                "give a column for every mark (a reading that was not taken is an empty cell), or"
                f" correct tube.{name}.marks in the bench sheet",
                drops.heading_line,
                first.column,
            )
        elif layout.positions and marks:
            _match_positions(drops, name, [one.value for one in bench.tubes[name].marks], notices)
        if layout.written == "time" and layout.kind == "repeats" and count == marks - 1 >= 2:
            notices.error(
                f"{quoted(first.text)} to {quoted(layout.times[-1].text)} may be {count} drops, or"
                f" one drop's times between the {marks} marks of tube {quoted(name)}",
                f"head them repeat 1 to repeat {count} if they are drops, interval 1 to"
                f" interval {count} if they are times between marks",
                drops.heading_line,
                first.column,
            )


def _match_positions(drops: FileDrops, tube: str, marks: Sequence[float], notices: Notices) -> None:
    """Note a mark whose heading says that it stands elsewhere than the tube's, by over 1 mm."""
    positions = [float(position) for position in drops.layout.positions]
    for heading, position, mark in zip(drops.layout.times, positions, marks, strict=True):
        below, wanted = position - positions[0], mark - marks[0]
        if abs(below - wanted) > 1e-3:
            notices.error(
                f"{quoted(heading.text)} is {below * 1e3:g} mm below the first mark of this file;"
                f" this mark of tube {quoted(tube)} is {wanted * 1e3:g} mm below its first",
                f"correct the heading, or tube.{_key(tube)}.marks in the bench sheet",
                drops.heading_line,
                heading.column,
            )
