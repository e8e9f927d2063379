"""What the timing file says of each run set besides times: who, when, with which clock."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from plumbfall.report.scales import Scale

if TYPE_CHECKING:
    import pandas as pd

    from plumbfall.timings.records import Timings

__all__ = ["Observed", "observed", "reading_remarks"]


@dataclass(frozen=True, slots=True)
class Observed:
    """Names in the order met; ``started`` the first and last start as written; empty if blank.

    ``temperatures`` are the lowest and highest reading in kelvin, NaN where none was read.
    ``marks`` gives the clock readings of a drop by file, line and drop number.
    """

    operators: tuple[str, ...] = ()
    timers: tuple[str, ...] = ()
    thermometers: tuple[str, ...] = ()
    started: tuple[str, ...] = ()
    temperatures: tuple[float, float] = (float("nan"), float("nan"))
    marks: dict[tuple[str, int, int], str] | None = None


def observed(timings: Timings) -> dict[str, Observed]:
    """Return what was observed of each run set, by name."""
    table = timings.table.reset_index(drop=True)
    if table.empty:
        return {}
    marks = timings.marks_s
    found = {}
    for name, rows in table.groupby(table["set"].astype(str), sort=False):
        starts = sorted(_words(rows["started"]))
        readings = rows["temperature_K"].to_numpy(dtype=float)
        found[str(name)] = Observed(
            operators=_words(rows["operator"]),
            timers=_words(rows["timer"]),
            thermometers=_words(rows["thermometer"]),
            started=tuple(dict.fromkeys((starts[0], starts[-1]))) if starts else (),
            temperatures=_extremes(readings[readings == readings].tolist()),
            marks=None if marks is None else _marks(rows, marks[rows.index.to_numpy()].tolist()),
        )
    return found


def _words(column: pd.Series[str]) -> tuple[str, ...]:
    return tuple(word for word in dict.fromkeys(column.astype(str)) if word and word != "nan")


def _extremes(readings: list[float]) -> tuple[float, float]:
    return (min(readings), max(readings)) if readings else (float("nan"), float("nan"))


def _marks(rows: pd.DataFrame, readings: list[list[float]]) -> dict[tuple[str, int, int], str]:
    keys = zip(
        rows["file"].astype(str), rows["line"].astype(int), rows["drop"].astype(int), strict=True
    )
    clock = Scale("s")
    return {
        key: "  ".join(clock.pair(reading, 0.0).value for reading in clocks)
        for key, clocks in zip(keys, readings, strict=True)
    }


def reading_remarks(timings: Timings) -> list[tuple[str, str]]:
    """Return what was ``repaired`` in reading and what is a ``warning``, each with its place."""
    remarks = []
    for repair in timings.repairs:
        place = f"{repair.file}:{repair.line}" if repair.line else repair.file
        remarks.append(("repaired", f"{place}: {repair.what}" if place else repair.what))
    return remarks + [("warning", str(problem)) for problem in timings.problems]
