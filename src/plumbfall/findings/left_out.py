"""What was left out of a run set, and what the result would be with it."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from plumbfall.findings.data import Found, RunData
from plumbfall.findings.grubbs import grubbs_p_value
from plumbfall.findings.suspects import FEWEST
from plumbfall.results import Finding
from plumbfall.uncertainty.type_a import group_scatter

__all__ = ["many_excluded"]


def many_excluded(data: RunData) -> Iterator[Found]:
    """Find sets of which much was left out, or whose result hangs on it.

    A choice is not a measurement; but a drop far off the others is a blunder, and leaving it out
    is none. What a void drop would have given is told from the others of its ball by the ratio
    of the times, which holds but for inertia and run-in.
    """
    n_sets = len(data.names)
    read = np.bincount(data.row_set, minlength=n_sets)
    out = read - data.weights.n_drops
    with np.errstate(invalid="ignore"):
        share = out / read
    effect = near = np.full(n_sets, np.nan)
    if out.any():
        left_out = _left_out(data)
        effect = _effect(data, left_out)
        near = _effect(data, left_out, ~_stands_out(data, left_out))
    viscosity = data.outputs.of("viscosity")
    with np.errstate(invalid="ignore", divide="ignore"):
        allowed = data.limits.excluded_effect * viscosity.expanded / viscosity.value
        moved = np.abs(near) > allowed
    for run_set in np.flatnonzero((share > data.limits.many_excluded) | moved):
        several = out[run_set] > 1
        message = (
            f"{out[run_set]} of {read[run_set]} drops ({100 * share[run_set]:.0f} %) "
            f"{'are' if several else 'is'} void or excluded"
        )
        if np.isfinite(effect[run_set]):
            message += (
                f"; with {'them' if several else 'it'} the viscosity would be "
                f"{100 * abs(effect[run_set]):.2f} % {'higher' if effect[run_set] > 0 else 'lower'}"
            )
        if moved[run_set]:
            bounds = viscosity.expanded[run_set] / viscosity.value[run_set]
            message += f", where the bounds allow {100 * bounds:.2f} % to either side"
        many = share[run_set] > data.limits.many_excluded
        yield (
            int(run_set),
            Finding(
                code="many-excluded",
                severity="warning",
                statistic=float(share[run_set]),
                effect=float(effect[run_set]) if np.isfinite(effect[run_set]) else None,
                message=message,
                remedy="find out why so many drops fail, and repeat the run set"
                if many
                else "be sure of the reason for each drop left out, and report the result with "
                "and without it; if in doubt, repeat the run set",
            ),
        )


@dataclass(frozen=True, slots=True)
class _LeftOut:
    """Rows that were left out though they have a time.

    Their run sets, the value that each belongs to, and what each would have given at its run
    set's temperature, arrays of shape (left out,).
    """

    run_set: NDArray[np.intp]
    value: NDArray[np.intp]
    would_be: NDArray[np.float64]


def _effect(
    data: RunData, left_out: _LeftOut, which: NDArray[np.bool_] | None = None
) -> NDArray[np.float64]:
    """Relative change of each set's mean if these were not left out; NaN where there is none."""
    n_sets, weights, mean = len(data.names), data.weights, data.scatter.mean
    n_values = len(weights.value_set)
    at = slice(None) if which is None else np.flatnonzero(which)
    run_set, value = left_out.run_set[at], left_out.value[at]
    would_be = left_out.would_be[at]
    n_joined = np.bincount(run_set, minlength=n_sets)
    drops = weights.value_drops + np.bincount(value, minlength=n_values)
    total = weights.value_drops * data.scatter.value_mean
    total = total + np.bincount(value, weights=would_be, minlength=n_values)
    with np.errstate(invalid="ignore", divide="ignore"):
        by_ball = (
            np.bincount(weights.value_set, weights=total / drops, minlength=n_sets)
            / weights.n_values
        )
        joined = np.bincount(run_set, weights=would_be, minlength=n_sets)
        by_drop = (weights.n_drops * mean + joined) / (weights.n_drops + n_joined)
        with_all = np.where(weights.n_values == weights.n_drops, by_drop, by_ball)
        return np.where(n_joined > 0, with_all / mean - 1, np.nan)


def _stands_out(data: RunData, left_out: _LeftOut) -> NDArray[np.bool_]:
    """Whether Grubbs' test would have called each an outlier among the drops that were used."""
    with np.errstate(invalid="ignore", divide="ignore"):
        used = group_scatter(np.log(data.columns.at_set), data.selection.run_set, len(data.names))
    n, sd = used.n[left_out.run_set], used.sd[left_out.run_set]
    apart = np.log(left_out.would_be) - used.mean[left_out.run_set]
    with np.errstate(invalid="ignore", divide="ignore"):
        squares = (n - 1) * sd**2 + apart**2 * n / (n + 1)
        statistic = np.abs(apart) * n / (n + 1) / np.sqrt(squares / n)
        p_value = grubbs_p_value(statistic=statistic, n=n + 1)
    return np.asarray((n + 1 >= FEWEST) & (p_value < data.limits.outlier_level))


def _left_out(data: RunData) -> _LeftOut:
    n_sets, used = len(data.names), data.selection.row
    table = data.timings.table
    time = table["time_s"].to_numpy(dtype=float)
    reading = table["temperature_K"].to_numpy(dtype=float)
    slope = np.zeros(n_sets)
    slope[data.selection.cells.run_set] = data.inputs.roles["slope"].value
    of_set = np.bincount(data.selection.run_set, weights=reading[used], minlength=n_sets)
    offset = reading - (of_set / np.maximum(data.weights.n_drops, 1))[data.row_set]
    warm = slope[data.row_set] * np.nan_to_num(offset, nan=0.0)  # unknown: as the others

    group = _groups(data)
    n_groups = int(group.max(initial=0)) + 1
    with np.errstate(invalid="ignore", divide="ignore"):
        level = np.log(data.columns.at_set / time[used]) + warm[used]
    count = np.bincount(group[used], minlength=n_groups)
    level = np.bincount(group[used], weights=level, minlength=n_groups) / np.maximum(count, 1)
    value_of = np.zeros(n_groups, dtype=np.intp)
    value_of[group[used]] = data.weights.value

    unused = np.ones(len(time), dtype=bool)
    unused[used] = False
    row = np.flatnonzero(unused & (time > 0) & (count[group] > 0))
    return _LeftOut(
        run_set=data.row_set[row],
        value=value_of[group[row]],
        would_be=time[row] * np.exp(level[group[row]] - warm[row]),
    )


def _groups(data: RunData) -> NDArray[np.intp]:
    """Rows of one run set, ball and pair of marks, shape (rows,)."""
    table = data.timings.table
    ball = table["ball"].astype("category").cat.codes.to_numpy()
    keys = np.stack([data.row_set, ball, table["from_mark"], table["to_mark"]], axis=1)
    return np.asarray(np.unique(keys, axis=0, return_inverse=True)[1].ravel(), dtype=np.intp)
