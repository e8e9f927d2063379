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
    for run_set in range(len(data.names)):
        yield run_set, finding


def missing_uncertainty(data: RunData) -> Iterator[Found]:
    """Find measured inputs that were given as if they were exact."""
    if not data.unstated:
        return
    place = {estimate.name: i for i, estimate in enumerate(data.inputs.estimates)}
    missing = {place[name] for name in data.unstated if name in place}
    by_set: dict[int, set[int]] = {}
    for column in data.inputs.roles.values():
        at = np.flatnonzero(np.isin(column.entry, list(missing)))
        for run_set, entry in zip(
            data.selection.cells.run_set[at].tolist(), column.entry[at].tolist(), strict=True
        ):
            by_set.setdefault(run_set, set()).add(entry)
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
