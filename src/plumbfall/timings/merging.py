"""Drops of the blocks of one file as those of one file."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from plumbfall.timings.drops import TEXTS, FileDrops
from plumbfall.timings.labels import stacked
from plumbfall.timings.notices import Notices, quoted
from plumbfall.timings.numbering import numbered_in_order

__all__ = ["merge_blocks", "merged_marks"]


def merge_blocks(blocks: Sequence[FileDrops], notices: Notices) -> FileDrops:
    """Return the drops of all blocks in order; numbers that begin anew go through the set."""
    if len(blocks) == 1:
        return blocks[0]

    drops = replace(
        blocks[0],
        line=np.concatenate([block.line for block in blocks]),
        column=np.concatenate([block.column for block in blocks]),
        labels={name: stacked([block.labels[name] for block in blocks]) for name in TEXTS},
        drop=np.concatenate([block.drop for block in blocks]),
        status=np.concatenate([block.status for block in blocks]),
        time=np.concatenate([block.time for block in blocks]),
        from_mark=np.concatenate([block.from_mark for block in blocks]),
        to_mark=np.concatenate([block.to_mark for block in blocks]),
        temperature=np.concatenate([block.temperature for block in blocks]),
        marks=merged_marks(blocks),
        named_sets=all(block.named_sets for block in blocks),
    )
    _renumber(drops, [len(block) for block in blocks], blocks, notices)
    return drops


def merged_marks(drops: Sequence[FileDrops]) -> NDArray[np.float64] | None:
    """Return clock readings of several tables, NaN where a table has none at a mark."""
    widths = [one.marks.shape[1] for one in drops if one.marks is not None]
    if not widths:
        return None
    result = np.full((sum(map(len, drops)), max(widths)), np.nan)
    start = 0
    for one in drops:
        if one.marks is not None:
            result[start : start + len(one), : one.marks.shape[1]] = one.marks
        start += len(one)
    return result


def _renumber(
    drops: FileDrops, sizes: Sequence[int], blocks: Sequence[FileDrops], notices: Notices
) -> None:
    sets = drops.labels["set"]
    block = np.repeat(np.arange(len(sizes)), sizes)
    frame = pd.DataFrame({"set": sets.codes, "drop": drops.drop, "block": block})
    given = frame[frame["drop"] > 0].drop_duplicates()
    again = given.duplicated(["set", "drop"])
    in_order = numbered_in_order(sets.codes)
    mixed = (drops.drop > 0).any() and not (drops.drop > 0).all()
    for code in given["set"][again].unique():
        rows = np.flatnonzero(sets.codes == code)
        drops.drop[rows] = in_order[rows]
        later = rows[block[rows] > block[rows[0]]]
        heading = blocks[int(block[later[0]])].layout.fields.get("drop")
        notices.repair(
            f"drops of set {quoted(sets.names[code])} are numbered anew in each block; they are"
            f" numbered 1 to {rows.size} through the set",
            int(drops.line[later[0]]),
            heading.column if heading else None,
        )
    if mixed:
        drops.drop[:] = in_order
