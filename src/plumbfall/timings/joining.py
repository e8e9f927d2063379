"""Drops of several files as one table."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from plumbfall.timings.columns import Integers
from plumbfall.timings.drops import TEXTS, FileDrops
from plumbfall.timings.labels import Labels, stacked
from plumbfall.timings.merging import merged_marks
from plumbfall.timings.notices import Notices, quoted
from plumbfall.timings.numbering import numbered_in_order
from plumbfall.timings.records import COLUMNS, STATUSES

__all__ = ["join_drops"]


def join_drops(
    drops: Sequence[FileDrops], notices: Notices
) -> tuple[pd.DataFrame, NDArray[np.float64] | None]:
    """Return the table of all drops and their clock readings (``None`` where none has any)."""
    _mind_equal_sets(drops, notices)
    labels = {name: stacked([one.labels[name] for one in drops]) for name in TEXTS}
    labels["file"] = stacked([Labels.constant(one.path, len(one)) for one in drops])
    status = _joined([one.status for one in drops])
    columns: dict[str, object] = {name: label.categorical() for name, label in labels.items()}
    columns["status"] = Labels(status, STATUSES).categorical()
    columns["line"] = _joined([one.line for one in drops])
    columns["column"] = _joined([one.column for one in drops])
    columns["from_mark"] = _joined([one.from_mark for one in drops])
    columns["to_mark"] = _joined([one.to_mark for one in drops])
    columns["time_s"] = _floats([one.time for one in drops])
    columns["temperature_K"] = _floats([one.temperature for one in drops])
    columns["drop"] = _numbered(drops, labels["set"], notices)
    table = pd.DataFrame({name: columns[name] for name in COLUMNS}, copy=False)
    return table, merged_marks(drops)


def _joined(parts: Sequence[Integers]) -> Integers:
    if len(parts) == 1:
        return parts[0]
    return np.concatenate(parts) if len(parts) else np.zeros(0, dtype=np.int64)


def _floats(parts: Sequence[NDArray[np.float64]]) -> NDArray[np.float64]:
    if len(parts) == 1:
        return parts[0]
    return np.concatenate(parts) if len(parts) else np.zeros(0)


def _mind_equal_sets(drops: Sequence[FileDrops], notices: Notices) -> None:
    """Say which sets are joined across files; refuse those that only share a file's stem."""
    owners: dict[str, list[FileDrops]] = {}
    for one in drops:
        labels = one.labels["set"]
        for code in np.flatnonzero(np.bincount(labels.codes)):
            owners.setdefault(labels.names[code], []).append(one)
    for name, files in owners.items():
        if len(files) < 2:
            continue
        unnamed = [one for one in files if not one.named_sets]
        paths = ", ".join(dict.fromkeys(one.path for one in files))
        if unnamed:
            where = "both" if len(files) == 2 else "all"
            message = (
                f"{where} {paths} would be run set {quoted(name)}, the name of the file"
                if len(unnamed) == len(files)
                else f"{paths}: run set {quoted(name)} is named in a column of one file, and is the"
                " name of another"
            )
            notices.error(message, 'add a column "set" that names the run sets, or rename the file')
        else:
            notices.repair(f"rows of run set {quoted(name)} are joined from {paths}")


def _numbered(drops: Sequence[FileDrops], sets: Labels, notices: Notices) -> Integers:
    """Return drop numbers: in order where files give none, or where joined files collide."""
    numbers = _joined([one.drop for one in drops])
    if not numbers.size:
        return numbers
    given = numbers > 0
    if len(drops) < 2 and given.all():
        _note_left_out(numbers, sets, drops, notices)
        return numbers
    in_order = numbered_in_order(sets.codes)
    numbers = np.where(given, numbers, in_order)
    if len(drops) < 2 or not given.any():
        return numbers
    file = np.repeat(np.arange(len(drops)), [len(one) for one in drops])
    frame = pd.DataFrame({"set": sets.codes, "drop": numbers, "file": file})
    across = frame.drop_duplicates().duplicated(["set", "drop"])
    for code in frame["set"][across[across].index].unique():
        rows = sets.codes == code
        numbers[rows] = in_order[rows]
        notices.repair(
            f"files of run set {quoted(sets.names[code])} use the same drop numbers; its drops are"
            f" numbered 1 to {int(rows.sum())} in the order they were read"
        )
    _note_left_out(numbers, sets, drops, notices)
    return numbers


def _note_left_out(
    numbers: Integers, sets: Labels, drops: Sequence[FileDrops], notices: Notices
) -> None:
    """List sets whose numbers have gaps: a drop that is left out of a file is worth a question."""
    counts = np.bincount(sets.codes, minlength=len(sets.names))
    last = np.zeros(len(sets.names), dtype=np.int64)
    np.maximum.at(last, sets.codes, numbers)
    for code in np.flatnonzero(last > counts):
        notices.repair(
            f"drops of run set {quoted(sets.names[code])} are numbered up to {last[code]}, and"
            f" there are {counts[code]}",
            path=drops[0].path if len(drops) == 1 else None,
        )
