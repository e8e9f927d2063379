"""Which ball, tube, liquid, timer and thermometer each drop was made with.

Rows of a timing table name equipment, leave it to the run set's entry in the bench sheet, or
leave it open where the bench has only one of a kind. Here all become integer codes, and equal
combinations become one *cell*: every drop of a cell reads the same entries of the bench sheet.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from plumbfall.bench.records import Bench
from plumbfall.errors import InputError, Problem, nearest_name
from plumbfall.timings.records import Timings

__all__ = ["KINDS", "Cells", "Selection", "check_temperatures", "select"]

Codes = NDArray[np.intp]

KINDS = {
    "ball": "balls",
    "tube": "tubes",
    "liquid": "liquids",
    "timer": "timers",
    "thermometer": "thermometers",
}
"""Equipment a drop may name, and where the bench keeps it."""

REQUIRED = ("ball", "tube", "liquid")


@dataclass(frozen=True, slots=True)
class Cells:
    """Distinct combinations of run set, equipment and marks; codes of shape (cells,).

    A code counts into the bench's mapping of its kind, -1 where there is none (a timer or a
    thermometer may be missing).
    """

    run_set: Codes
    ball: Codes
    tube: Codes
    liquid: Codes
    timer: Codes
    thermometer: Codes
    from_mark: Codes
    to_mark: Codes

    def __len__(self) -> int:
        return len(self.run_set)

    def take(self, at: Codes) -> Cells:
        """Return some of the cells, shape (taken,), in an order of their own."""
        return Cells(*(getattr(self, kind)[at] for kind in self.__slots__))


@dataclass(frozen=True, slots=True)
class Selection:
    """The used drops of a timing table, in columns of shape (drops,).

    ``row`` is each drop's position in the timing table, ``cell`` its cell; ``temperature`` is
    the reading in kelvin, NaN where only the run set's entry has one. ``row_set`` is the run set
    of every row of the table, used or not.
    """

    names: tuple[str, ...]
    row_set: Codes
    row: Codes
    run_set: Codes
    cell: Codes
    cells: Cells
    time: NDArray[np.float64]
    temperature: NDArray[np.float64]


def select(timings: Timings, bench: Bench) -> Selection:
    """Resolve the equipment of every used drop.

    Parameters
    ----------
    timings : Timings
        What was read; only rows of status ``used`` are taken, in their order.
    bench : Bench
        The bench sheet that names the equipment.

    Returns
    -------
    Selection
        Codes into the bench, and the run sets in order of first appearance (of any row).

    Raises
    ------
    InputError
        Where a drop's ball, tube or liquid cannot be known, or is not on the bench, and where
        a run set has drops in several liquids.
    """
    table = timings.table
    set_codes, names = _run_sets(table["set"])
    used = (table["status"] == "used").to_numpy()
    row = np.flatnonzero(used)
    run_set = set_codes[row]

    problems: list[Problem] = []
    codes = {kind: _equipment(kind, table, row, run_set, names, bench, problems) for kind in KINDS}
    if problems:
        raise InputError(problems)
    _check_liquids(table, row, run_set, codes["liquid"], names, list(bench.liquids))

    n_marks = np.array([len(tube.marks) for tube in bench.tubes.values()], dtype=np.intp)
    from_mark = table["from_mark"].to_numpy(dtype=np.intp)[row] - 1
    to_mark = table["to_mark"].to_numpy(dtype=np.intp)[row] - 1
    last = n_marks[codes["tube"]] - 1
    to_mark = np.where(to_mark < 0, last, to_mark)
    _check_marks(table, row, from_mark, to_mark, last)
    calibrated = np.array([tube.kind == "calibrated" for tube in bench.tubes.values()])
    _check_calibrated(table, row, calibrated, codes["tube"], from_mark, to_mark, last)
    _check_kinds_of_tube(table, row, calibrated[codes["tube"]], run_set, names)

    cell, cells = _cells(run_set, codes, from_mark, to_mark)
    return Selection(
        names=names,
        row_set=set_codes,
        row=row,
        run_set=run_set,
        cell=cell,
        cells=cells,
        time=table["time_s"].to_numpy(dtype=float)[row],
        temperature=table["temperature_K"].to_numpy(dtype=float)[row],
    )


def check_temperatures(
    selection: Selection, temperature: NDArray[np.float64], timings: Timings
) -> None:
    """Refuse a run set in which some drops have a temperature and some have none.

    Raises
    ------
    InputError
        With the line of every drop that lacks one.
    """
    missing = np.isnan(temperature)
    n_sets = len(selection.names)
    lacking = np.bincount(selection.run_set[missing], minlength=n_sets)
    mixed = (lacking > 0) & (lacking < np.bincount(selection.run_set, minlength=n_sets))
    at = np.flatnonzero(missing & mixed[selection.run_set])
    if len(at):
        rows = timings.table.iloc[selection.row[at]]
        raise InputError(
            Problem(
                f"drop {drop} of run set '{run_set}' has no temperature, though others have",
                "write it in, or mark the drop void with a reason, or give the run set one "
                "temperature in the bench sheet",
                path=str(file),
                line=int(line),
            )
            for file, line, drop, run_set in zip(
                rows["file"], rows["line"], rows["drop"], rows["set"], strict=True
            )
        )


def _run_sets(column: pd.Series) -> tuple[Codes, tuple[str, ...]]:
    """Codes of the run sets in order of first appearance."""
    codes, labels = _labelled(column)
    rank, order = pd.factorize(codes)
    return rank.astype(np.intp), tuple(labels[i] for i in order.tolist())


def _labelled(column: pd.Series) -> tuple[Codes, list[str]]:
    """Codes of a text column and the labels they count."""
    categorical = column.astype("category").cat
    labels = [str(label) for label in categorical.categories.tolist()]
    return categorical.codes.to_numpy().astype(np.intp), labels


def _equipment(
    kind: str,
    table: pd.DataFrame,
    row: Codes,
    run_set: Codes,
    names: Sequence[str],
    bench: Bench,
    problems: list[Problem],
) -> Codes:
    known = list(getattr(bench, KINDS[kind]))
    place = {name: code for code, name in enumerate(known)}
    only = 0 if len(known) == 1 else -1
    fallback = np.full(len(names), only, dtype=np.intp)
    for code, name in enumerate(names) if bench.sets else ():
        entry = bench.sets.get(name)
        chosen = getattr(entry, kind, None) if entry is not None else None
        if chosen is not None:
            fallback[code] = place[chosen]  # the bench sheet's own references are checked there

    label_codes, labels = _labelled(table[kind])
    code_of_label = np.array(
        [place.get(label, -2) if label else -1 for label in labels] + [-1], dtype=np.intp
    )
    own = code_of_label[label_codes[row]]
    codes: Codes = np.where(own == -1, fallback[run_set], own)

    for place_of in np.flatnonzero(code_of_label[:-1] == -2):
        rows = row[label_codes[row] == place_of]
        if len(rows):
            problems.append(_unknown(kind, labels[place_of], known, table, int(rows[0])))
    if kind in REQUIRED or len(known) > 1:
        for code in np.unique(run_set[codes == -1]):
            problems.append(_open(kind, names[code], known, bench))
    return codes


def _unknown(kind: str, label: str, known: list[str], table: pd.DataFrame, row: int) -> Problem:
    near = nearest_name(label, known)
    return Problem(
        f"{kind} '{label}' is not on the bench sheet",
        f"did you mean '{near}'?" if near else f"the bench has: {', '.join(known) or 'none'}",
        path=str(table["file"].iloc[row]),
        line=int(table["line"].iloc[row]),
    )


def _open(kind: str, run_set: str, known: list[str], bench: Bench) -> Problem:
    if not known:
        return Problem(
            f"no {kind} is described",
            f"add a [{kind}.NAME] section to the bench sheet",
            path=bench.path,
        )
    return Problem(
        f"run set '{run_set}' does not say which {kind} was used",
        f"add a '{kind}' column to the timing file, or {kind} = \"{known[0]}\" to "
        f'[set."{run_set}"] of the bench sheet (known: {", ".join(known)})',
        path=bench.path,
    )


def _check_liquids(
    table: pd.DataFrame,
    row: Codes,
    run_set: Codes,
    liquid: Codes,
    names: Sequence[str],
    known: list[str],
) -> None:
    """Refuse run sets of several liquids: a mean of two liquids' viscosities is that of none."""
    own = np.full(len(names), -1, dtype=np.intp)
    own[run_set[::-1]] = liquid[::-1]  # the first drop's, being written last
    other = np.flatnonzero(liquid != own[run_set])
    firsts = other[np.unique(run_set[other], return_index=True)[1]]
    if len(firsts):
        raise InputError(
            Problem(
                f"run set '{names[run_set[at]]}' has drops in liquid '{known[own[run_set[at]]]}' "
                f"and, from here, in '{known[liquid[at]]}'",
                "give the drops in each liquid a run set of their own, or correct the liquid",
                path=str(table["file"].iloc[int(row[at])]),
                line=int(table["line"].iloc[int(row[at])]),
            )
            for at in firsts.tolist()
        )


def _check_marks(
    table: pd.DataFrame, row: Codes, from_mark: Codes, to_mark: Codes, last: Codes
) -> None:
    beyond = np.flatnonzero((to_mark > last) & (last >= 0))
    if len(beyond):
        at = int(beyond[0])
        raise InputError(
            f"the drop was timed at mark {to_mark[at] + 1}, but its tube has {last[at] + 1} marks",
            path=str(table["file"].iloc[int(row[at])]),
            line=int(table["line"].iloc[int(row[at])]),
            remedy="add the mark to the tube's marks in the bench sheet, or correct the heading",
        )


def _check_calibrated(
    table: pd.DataFrame,
    row: Codes,
    calibrated: NDArray[np.bool_],
    tube: Codes,
    from_mark: Codes,
    to_mark: Codes,
    last: Codes,
) -> None:
    """Refuse drops timed over a part of a calibrated tube: its constant holds for the whole."""
    for code in np.unique(tube[calibrated[tube]]):
        here = np.flatnonzero(tube == code)
        whole = last[here[0]] if last[here[0]] > 0 else to_mark[here].max()
        part = here[(from_mark[here] != 0) | (to_mark[here] != whole)]
        if len(part):
            raise InputError(
                "the drop was not timed from the first to the last mark, for which alone the "
                "constant of its calibrated tube holds",
                path=str(table["file"].iloc[int(row[part[0]])]),
                line=int(table["line"].iloc[int(row[part[0]])]),
                remedy="fill in both readings, or mark the drop void with a reason",
            )


def _check_kinds_of_tube(
    table: pd.DataFrame,
    row: Codes,
    calibrated: NDArray[np.bool_],
    run_set: Codes,
    names: Sequence[str],
) -> None:
    """Refuse run sets with drops in a calibrated tube and in one with a geometry."""
    own = np.zeros(len(names), dtype=bool)
    own[run_set[::-1]] = calibrated[::-1]  # the first drop's, being written last
    other = np.flatnonzero(calibrated != own[run_set])
    if len(other):
        at = int(other[0])
        raise InputError(
            f"run set '{names[run_set[at]]}' has drops in a calibrated tube and, here, in a tube "
            "of the other kind",
            path=str(table["file"].iloc[int(row[at])]),
            line=int(table["line"].iloc[int(row[at])]),
            remedy="give the drops in each tube a run set of their own",
        )


def _cells(
    run_set: Codes, codes: dict[str, Codes], from_mark: Codes, to_mark: Codes
) -> tuple[Codes, Cells]:
    columns = [run_set, *(codes[kind] for kind in KINDS), from_mark, to_mark]
    combined = np.zeros(len(run_set), dtype=np.int64)
    spans = []
    for column in columns:
        low = int(column.min(initial=0))
        span = int(column.max(initial=0)) - low + 1
        spans.append((low, span))
        combined *= span
        combined += column - low
    cell, distinct = pd.factorize(combined)
    parts: list[Codes] = []
    rest = np.asarray(distinct, dtype=np.int64)
    for low, span in reversed(spans):
        parts.append((rest % span + low).astype(np.intp))
        rest = rest // span
    return np.asarray(cell, dtype=np.intp), Cells(*reversed(parts))
