"""What had run out by the day of a run: calibrations, and reference liquids."""

from __future__ import annotations

import datetime as dt
import re
from collections.abc import Iterator

import numpy as np
from numpy.typing import NDArray

from plumbfall.bench.records import Identity
from plumbfall.findings.data import Found, RunData
from plumbfall.results import Finding

__all__ = ["calibration_overdue", "reference_expired", "run_days"]

_DAY = re.compile(r"\d{4}-\d{2}-\d{2}")
UNKNOWN = 0
"""Stands for no date among days counted by the calendar (1 is the first day of year 1)."""


def run_days(data: RunData) -> NDArray[np.intp]:
    """Day of each run set by its last ``started``, else the report's day of issue, (run sets,).

    Days are counted as by ``date.toordinal``; :data:`UNKNOWN` where neither is given. The clock
    of the computer is never asked.
    """
    started = data.timings.table["started"].astype("category").cat
    days = np.array([_day(str(text)) for text in started.categories] + [UNKNOWN], dtype=np.intp)
    last = np.full(len(data.names), _day(data.bench.report.get("issued", "")), dtype=np.intp)
    of_row = days[started.codes.to_numpy()]  # code -1, no entry, reads the last place
    dated = of_row > UNKNOWN
    by_rows = np.zeros_like(last)
    np.maximum.at(by_rows, data.row_set[dated], of_row[dated])
    return np.where(by_rows > UNKNOWN, by_rows, last)


def _day(text: str) -> int:
    found = _DAY.match(text)
    return dt.date.fromisoformat(found[0]).toordinal() if found else UNKNOWN


def calibration_overdue(data: RunData) -> Iterator[Found]:
    """Find equipment that was used after its calibration was due."""
    overdue: dict[int, list[str]] = {}
    days = None
    for what, identity, run_sets in _equipment(data):
        if identity.due is None:
            continue
        days = run_days(data) if days is None else days
        for run_set in run_sets[days[run_sets] > identity.due.toordinal()]:
            late = int(days[run_set]) - identity.due.toordinal()
            overdue.setdefault(int(run_set), []).append(
                f"{what} was due on {identity.due}, {late} day{'s' if late > 1 else ''} before"
            )
    for run_set, items in sorted(overdue.items()):
        assert days is not None  # something was found by them
        yield (
            run_set,
            Finding(
                code="calibration-overdue",
                severity="warning",
                statistic=float(len(items)),
                message=f"on the day of the run, {dt.date.fromordinal(int(days[run_set]))}, the "
                f"calibration of {'; of '.join(items)}",
                remedy="calibrate it, see what it was off by, and reduce the run set again; if "
                "it was calibrated, correct due in the bench sheet",
            ),
        )


def _equipment(data: RunData) -> Iterator[tuple[str, Identity, NDArray[np.intp]]]:
    """Yield what was used, who it is, and the run sets it was used in."""
    cells = data.selection.cells
    for kind in ("timer", "thermometer", "tube", "ball"):
        entries = list(getattr(data.bench, f"{kind}s").values())
        for code in np.unique(getattr(cells, kind)):
            if code >= 0:
                run_sets = np.unique(cells.run_set[getattr(cells, kind) == code])
                yield f"{kind} {entries[code].name}", entries[code].identity, run_sets
    for kind in ("gauge", "balance"):
        for name, record in getattr(data.bench, f"{kind}s").items():
            measured = np.array([getattr(ball, kind) == name for ball in data.balls], dtype=bool)
            run_sets = np.unique(cells.run_set[measured[cells.ball]])
            yield f"{kind} {name}", record.identity, run_sets


def reference_expired(data: RunData) -> Iterator[Found]:
    """Find certified liquids that were dropped in after they expired."""
    liquid_code = {name: code for code, name in enumerate(data.bench.liquids)}
    for name, reference in data.bench.references.items():
        if reference.expires is None or reference.liquid is None:
            continue
        days = run_days(data)
        used = data.selection.cells.liquid == liquid_code[reference.liquid]
        for run_set in np.unique(data.selection.cells.run_set[used]):
            late = int(days[run_set]) - reference.expires.toordinal()
            if late <= 0:
                continue
            yield (
                int(run_set),
                Finding(
                    code="reference-expired",
                    severity="warning",
                    statistic=float(late),
                    message=f"reference liquid {name} expired on {reference.expires}, {late} "
                    f"day{'s' if late > 1 else ''} before the run of "
                    f"{dt.date.fromordinal(int(days[run_set]))}",
                    remedy="use a bottle that has not expired; until then neither calibrate nor "
                    "check with this one",
                ),
            )
