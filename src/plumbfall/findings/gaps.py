"""What the bench sheet leaves open: gravity, uncertainties."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from plumbfall.findings.data import Found, RunData
from plumbfall.results import Finding

__all__ = ["default_gravity", "missing_uncertainty"]

GRAVITY_RANGE = 0.0027
"""Gravity at sea level differs from 9.80665 m/s2 by at most this ratio, at pole and equator."""

MOST_KEYS = 12


def default_gravity(data: RunData) -> Iterator[Found]:
    """Note that standard gravity stands in for the local one."""
    site = data.bench.site
    if site.gravity is not None or site.latitude is not None:
        return
    finding = Finding(
        code="default-gravity",
        severity="note",
        effect=GRAVITY_RANGE,
        message="gravity is not given; the standard 9.80665 m/s2 is used, which is up to "
        f"{100 * GRAVITY_RANGE:.2f} % off, and as much of the viscosity",
        remedy="add gravity, or latitude and elevation, to [site]",
    )
    weighed = np.ones(len(data.names), dtype=bool)
    weighed[data.selection.cells.run_set[data.inputs.calibrated]] = False  # gravity is in K
    for run_set in np.flatnonzero(weighed).tolist():
        yield run_set, finding


def missing_uncertainty(data: RunData) -> Iterator[Found]:
    """Find measured inputs that were given as if they were exact."""
    yield from _no_timer(data)
    if not data.unstated:
        return
    unstated = set(data.unstated)
    missing = [
        place for place, estimate in enumerate(data.inputs.estimates) if estimate.name in unstated
    ]
    # What moves no result is not asked for: an end out of reach, a ball within its set's scatter.
    rows, columns = data.jacobian.matrix[:, missing].nonzero()
    by_set: dict[int, set[int]] = {}
    for run_set, column in zip(rows.tolist(), columns.tolist(), strict=True):
        by_set.setdefault(run_set, set()).add(missing[column])
    for run_set, entries in sorted(by_set.items()):
        keys = [data.inputs.estimates[i].name for i in sorted(entries)]
        shown = ", ".join(keys[:MOST_KEYS]) + (
            f" and {len(keys) - MOST_KEYS} more" if len(keys) > MOST_KEYS else ""
        )
        yield (
            run_set,
            Finding(
                code="missing-uncertainty",
                severity="note",
                statistic=float(len(keys)),
                message=f"no uncertainty is given for {shown}; the bounds leave it out",
                remedy="write it into the bench sheet, such as '50.00(2) mm'",
            ),
        )


def _no_timer(data: RunData) -> Iterator[Found]:
    cells = data.selection.cells
    for run_set in np.unique(cells.run_set[cells.timer == -1]):
        yield (
            int(run_set),
            Finding(
                code="missing-uncertainty",
                severity="note",
                message="no timer is described: the bounds leave out the error that all times "
                "share, such as a late hand or a slow clock",
                remedy='add [timer.NAME] with kind = "stopwatch", gate or video, or its bias and '
                "rate",
            ),
        )
