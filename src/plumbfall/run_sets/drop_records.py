"""Single drops and balls of a run set as records, built when somebody looks at the set."""

from __future__ import annotations

import math
from dataclasses import replace
from typing import Any

import numpy as np
from numpy.typing import NDArray

from plumbfall.bench.records import Bench
from plumbfall.measurement.columns import DropColumns
from plumbfall.measurement.selection import Selection
from plumbfall.physics.stokes import shear_rate
from plumbfall.results import BallResult, DropResult, Finding, Quantity
from plumbfall.timings.records import Timings

__all__ = ["ball_results", "drop_results"]


def ball_results(
    bench: Bench, selection: Selection, drops: DropColumns, used: NDArray[np.intp]
) -> tuple[BallResult, ...]:
    """Return the mean of each ball's drops; its uncertainty is that of their scatter alone."""
    ball = selection.cells.ball[selection.cell[used]]
    names = list(bench.balls)
    found = []
    for code in dict.fromkeys(ball.tolist()):
        here = used[ball == code]
        value = drops.at_set[here]
        rate = shear_rate(fall_speed=drops.fall_speed[here], ball_diameter=drops.diameter[here])
        scatter = float(value.std(ddof=1) / math.sqrt(len(value))) if len(value) > 1 else math.nan
        found.append(
            BallResult(
                ball=names[code],
                n_drops=len(here),
                viscosity=Quantity(float(value.mean()), "Pa.s", scatter),
                reynolds=float(drops.reynolds[here].max()),
                diameter_ratio=float(drops.diameter_ratio[here].max()),
                shear_rate=float(np.max(rate)),
                shear_stress=float(drops.shear_stress[here].max()),
            )
        )
    return tuple(found)


def drop_results(
    bench: Bench,
    timings: Timings,
    selection: Selection,
    columns: DropColumns,
    mean: float,
    used: NDArray[np.intp],
    rows: NDArray[np.intp],
    findings: tuple[Finding, ...],
) -> tuple[DropResult, ...]:
    """Return a record of every row of a run set, used or not, in the order of the timing file."""
    place = dict(zip(selection.row[used].tolist(), used.tolist(), strict=True))
    codes: dict[int, list[str]] = {}
    for finding in findings:
        for drop_number in finding.drops:
            codes.setdefault(drop_number, []).append(finding.code)
    ball_names = list(bench.balls)
    table = timings.table.iloc[rows]
    recorded = zip(
        rows.tolist(),
        *(table[name].astype(str).tolist() for name in ("file", "ball", "status", "note")),
        *(table[name].tolist() for name in ("line", "drop", "time_s", "temperature_K")),
        strict=True,
    )
    distances = [np.array([mark.value for mark in tube.marks]) for tube in bench.tubes.values()]
    clocks = timings.marks_s

    def intervals(row: int, at: int | None) -> tuple[float, ...]:
        if clocks is None or at is None:
            return ()
        return _interval_ratios(distances[selection.cells.tube[selection.cell[at]]], clocks[row])

    return tuple(
        replace(
            _drop(row, place.get(row), record, columns, selection, ball_names, mean, codes),
            interval_ratios=intervals(row, place.get(row)),
        )
        for row, *record in recorded
    )


def _interval_ratios(marks: NDArray[np.float64], clock: NDArray[np.float64]) -> tuple[float, ...]:
    """Return the mean speed of each interval over that from the first to the last mark read."""
    clock = clock[: len(marks)]
    marks = marks[: len(clock)]
    read = np.flatnonzero(np.isfinite(clock))
    if len(read) < 3:
        return ()
    first, last = read[0], read[-1]
    whole = (marks[last] - marks[first]) / (clock[last] - clock[first])
    with np.errstate(divide="ignore", invalid="ignore"):
        return tuple((np.diff(marks) / np.diff(clock) / whole).tolist())


def _others(columns: DropColumns, at: int) -> float:
    """Return the product of every factor of the drag but the inertia's."""
    return float(columns.wall[at] * columns.off_axis[at] * columns.end[at] * columns.run_in[at])


def _drop(
    row: int,
    at: int | None,
    record: list[Any],
    columns: DropColumns,
    selection: Selection,
    ball_names: list[str],
    mean: float,
    codes: dict[int, list[str]],
) -> DropResult:
    file, ball, status, note, line, drop, time, temperature = record

    def computed(values: NDArray[np.float64]) -> float | None:
        return float(values[at]) if at is not None and math.isfinite(values[at]) else None

    at_set, wall, total = (
        computed(column) for column in (columns.at_set, columns.wall, columns.drag_factor)
    )
    others = 1.0 if at is None else _others(columns, at)
    return DropResult(
        file=file,
        line=line,
        drop=drop,
        ball=ball if at is None else ball_names[selection.cells.ball[selection.cell[at]]],
        time=time,
        temperature=temperature if at is None else float(columns.temperature[at]),
        viscosity=computed(columns.viscosity),
        viscosity_at_set=at_set,
        stokes_viscosity=computed(columns.stokes),
        reynolds=computed(columns.reynolds),
        fall_speed=computed(columns.fall_speed),
        wall=wall,
        inertia=None if total is None else total / others,
        end=computed(columns.end),
        residual=at_set / mean - 1 if at_set is not None and mean else None,
        used=at is not None,
        status=status,
        note=note,
        findings=tuple(codes.get(drop, ())),
        diameter_ratio=computed(columns.diameter_ratio),
    )
