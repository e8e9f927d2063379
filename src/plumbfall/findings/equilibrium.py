"""Whether the liquid had the bath's temperature: by the clock, and by the first drops."""

from __future__ import annotations

import datetime as dt
from collections.abc import Iterator

import numpy as np

from plumbfall.bench.records import Tube
from plumbfall.findings.data import Found, RunData
from plumbfall.findings.significance import detectable
from plumbfall.findings.trends import SETTLING_DROPS
from plumbfall.physics.thermal import equilibration_time
from plumbfall.results import Finding

__all__ = ["first_drops_off", "not_equilibrated"]

ON_AXIS = 1.602
"""Part of the first difference that the slowest mode has on the axis: 2 / (2.4048 J1(2.4048))."""

DAY = 86_400.0


def not_equilibrated(data: RunData) -> Iterator[Found]:
    """Find run sets begun too soon after filling, by the time constant of their tube's bore."""
    for run_set, name in enumerate(data.names):
        entry = data.bench.sets.get(name) if data.bench.sets else None
        if entry is None or entry.filled is None:
            continue
        waited = _waited(data, run_set, entry.filled)
        tube = _widest(data, run_set)
        if waited is None or tube is None:
            continue
        assert tube.bore is not None  # the widest of those that have one
        constant = float(equilibration_time(tube_bore=tube.bore.value))
        wanted = data.limits.equilibration_times * constant
        if waited >= wanted:
            continue
        if waited < 0:
            message = (
                f"by the bench sheet the tube was filled {-waited / 60:.0f} min after the first "
                "drop was started"
            )
            remedy = f'correct filled in [set."{name}"], or the started column'
            effect = None
        else:
            left = min(ON_AXIS * np.exp(-waited / constant), 1.0)
            slope = abs(float(data.warmth.slope[run_set]))
            effect = float(left * slope) or None
            cost = f", {100 * left * slope:.2g} % of viscosity" if slope else ""
            message = (
                f"the first drop was started {waited / 60:.0f} min after filling; a bore of "
                f"{1000 * tube.bore.value:.3g} mm needs {wanted / 60:.0f} min, "
                f"{data.limits.equilibration_times:g} time constants; of every kelvin that the "
                f"liquid was off, {left:.2g} K were left{cost}"
            )
            remedy = (
                f"wait {wanted / 60:.0f} min after filling, or fill with liquid that has the "
                "bath's temperature"
            )
        yield (
            run_set,
            Finding(
                code="not-equilibrated",
                severity="warning",
                statistic=waited / constant,
                effect=effect,
                message=message,
                remedy=remedy,
            ),
        )


def first_drops_off(data: RunData) -> Iterator[Found]:
    """Find first drops that approach the others exponentially, as a bath that is settling."""
    trends = data.trends
    for run_set in np.flatnonzero(data.settling):
        off, error = float(trends.settling.value[run_set]), float(trends.settling.error[run_set])
        at = np.flatnonzero(data.selection.run_set == run_set)
        approach = np.exp(-data.order[at] / SETTLING_DROPS)
        dof = int(trends.settling.dof[run_set])
        scatter = np.sqrt(trends.settling.rest[run_set] / dof * data.errors.variance[at])
        touched = at[np.abs(off) * approach > scatter]
        touched = touched[np.argsort(data.order[touched])]
        effect = -off * float(np.sum(data.weights.weight[at] * approach))
        slope = float(data.warmth.slope[run_set])
        warm = f", as if the liquid had been {abs(off / slope):.2g} K off" if slope else ""
        yield (
            int(run_set),
            Finding(
                code="not-equilibrated",
                severity="warning",
                drops=data.numbers(touched),
                statistic=off / error,
                p_value=float(trends.settling_p_value[run_set]),
                effect=effect,
                detectable=float(detectable(standard_error=error, dof=dof, level=data.level)),
                message=f"the first drops are off and approach the others: {100 * abs(off):.2f} % "
                f"{'above' if off > 0 else 'below'} at the first one, dying away within "
                f"{2 * SETTLING_DROPS:.0f} drops{warm}; without that the viscosity would change by "
                f"{100 * effect:+.2f} %",
                remedy="wait until tube, liquid and balls have the bath's temperature, and repeat "
                "the run set; or mark the first drops void and note why",
            ),
        )


def _waited(data: RunData, run_set: int, filled: dt.datetime) -> float | None:
    """Seconds from filling to the first used drop of a run set; ``None`` where not recorded."""
    rows = data.selection.row[data.selection.run_set == run_set]
    texts = data.timings.table["started"].iloc[rows].astype(str)
    waits = [_seconds(filled, text) for text in dict.fromkeys(texts)]
    return min((wait for wait in waits if wait is not None), default=None)


def _seconds(filled: dt.datetime, text: str) -> float | None:
    """Seconds from filling to a start: date and time, or a time of day within a day of it."""
    try:
        start = dt.datetime.fromisoformat(text)
    except ValueError:
        try:
            clock = dt.time.fromisoformat(text.zfill(8) if text.count(":") == 2 else text)
        except ValueError:
            return None
        start = dt.datetime.combine(filled.date(), clock)
        wait = (start - filled.replace(tzinfo=None)).total_seconds()
        return wait % DAY
    if len(text) <= 10:  # a day alone says nothing of the hour
        return None
    if (start.tzinfo is None) != (filled.tzinfo is None):
        start, filled = start.replace(tzinfo=None), filled.replace(tzinfo=None)
    return (start - filled).total_seconds()


def _widest(data: RunData, run_set: int) -> Tube | None:
    cells = data.selection.cells
    tubes = [data.tubes[code] for code in np.unique(cells.tube[cells.run_set == run_set])]
    with_bore = [tube for tube in tubes if tube.bore is not None]
    return max(with_bore, key=lambda tube: tube.bore.value if tube.bore else 0.0, default=None)
