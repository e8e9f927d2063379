"""Outliers and stragglers in the trade's words; no drop is left out because of one."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
from numpy.typing import NDArray

from plumbfall.findings.data import Found, RunData
from plumbfall.findings.grubbs import grubbs_critical
from plumbfall.findings.hints import transposed
from plumbfall.findings.significance import detectable
from plumbfall.results import Finding

__all__ = ["in_pair", "outlier", "outlier_pair", "straggler"]


SURER = 0.1
"""Part of the level that is asked of a pair one of whose drops is a straggler."""


def outlier(data: RunData) -> Iterator[Found]:
    """Find the one drop that does not belong with the others; it is kept, and named."""
    for run_set in np.flatnonzero(data.suspects.p_value < data.limits.outlier_level):
        yield int(run_set), _single(data, int(run_set), data.limits.outlier_level)


def outlier_pair(data: RunData) -> Iterator[Found]:
    """Find two drops on the same side, each of which hides the other from the test of one.

    ISO 5725-2, 7.3.4: tried where no single drop is an outlier.
    """
    for run_set in np.flatnonzero(in_pair(data)):
        places = data.suspect_pairs.drops[run_set]
        places = places[np.argsort(data.order[places])]
        first, second = data.numbers(places)
        mean = data.scatter.mean[run_set]
        apart = 100 * (data.columns.at_set[places] / mean - 1)
        effect = _without(data, int(run_set), places)
        hints = "".join(dict.fromkeys(transposed(data, int(place)) for place in places))
        yield (
            int(run_set),
            Finding(
                code="outlier",
                severity="warning",
                drops=(first, second),
                statistic=float(data.suspect_pairs.statistic[run_set]),
                p_value=float(data.suspect_pairs.p_value[run_set]),
                effect=effect,
                detectable=_detectable(data, int(run_set), int(places[0])),
                message=f"drops {first} and {second} are {abs(apart[0]):.1f} and "
                f"{abs(apart[1]):.1f} % {'above' if apart[0] > 0 else 'below'} the mean and do not "
                f"belong with the others (Grubbs' test for two, "
                f"{data.suspect_pairs.statistic[run_set]:.4f} of the squares remain without them); "
                f"they are kept; {_cost(effect, 'them')}{hints}",
                remedy="look for bubbles, a wrong ball, or mistimed marks; if there were any, mark "
                "the drops void and note the reason",
            ),
        )


def straggler(data: RunData) -> Iterator[Found]:
    """Note the drop that lies between the 5 % and the 1 % limit (ISO 5725-2, 7.3.3)."""
    p_value, limits = data.suspects.p_value, data.limits
    between = (p_value >= limits.outlier_level) & (p_value < limits.straggler_level)
    for run_set in np.flatnonzero(between & ~in_pair(data)):
        found = _single(data, int(run_set), limits.straggler_level)
        yield (
            int(run_set),
            Finding(
                code="straggler",
                severity="note",
                drops=found.drops,
                statistic=found.statistic,
                p_value=found.p_value,
                effect=found.effect,
                detectable=found.detectable,
                message=found.message,
                remedy="keep it, unless something was seen to go wrong with it: one good run set "
                "in twenty has such a drop",
            ),
        )


def _single(data: RunData, run_set: int, level: float) -> Finding:
    """Return the finding of one outlier, its drop being beyond the limit of a level."""
    found = data.suspects
    drop, n = int(found.drop[run_set]), int(found.n[run_set])
    mean, own = data.scatter.mean[run_set], data.columns.at_set[drop]
    effect = _without(data, run_set, np.array([drop]))
    number = data.numbers(np.array([drop]))[0]
    critical = float(grubbs_critical(n=n, level=level))
    counted = f"{n} drops" if n == data.weights.n_drops[run_set] else f"{n} values"
    return Finding(
        code="outlier",
        severity="warning",
        drops=(number,),
        statistic=float(found.statistic[run_set]),
        p_value=float(found.p_value[run_set]),
        effect=effect,
        detectable=_detectable(data, run_set, drop),
        message=f"drop {number} ({data.selection.time[drop]:.2f} s) is "
        f"{100 * abs(own / mean - 1):.1f} % {'above' if own > mean else 'below'} the mean "
        f"(Grubbs {found.statistic[run_set]:.2f}, {100 * level:g} % limit {critical:.2f} for "
        f"{counted}); it is kept{_mate(data, drop)}; {_cost(effect)}{transposed(data, drop)}",
        remedy="look for a bubble, a wrong ball, or a mistimed mark; if there was one, "
        "mark the drop void and note the reason",
    )


def in_pair(data: RunData) -> NDArray[np.bool_]:
    """Whether two drops are outliers together where none is alone.

    Where one is a straggler already (ISO 5725-2 then tries no pair), the two must be surer.
    """
    level, one = data.limits.outlier_level, data.suspects.p_value
    of_two = np.where(one < data.limits.straggler_level, level * SURER, level)
    return np.asarray((one >= level) & (data.suspect_pairs.p_value < of_two))


def _mate(data: RunData, drop: int) -> str:
    """Say that of a ball's two drops either may be the bad one, where only they are compared."""
    group = data.errors.group
    if not data.residuals.by_ball[data.selection.run_set[drop]]:
        return ""
    mates = np.flatnonzero(group == group[drop])
    if len(mates) != 2:
        return ""
    (other,) = data.numbers(mates[mates != drop])
    return f" (it may as well be drop {other}, the only other one of this ball)"


def _detectable(data: RunData, run_set: int, drop: int) -> float:
    """Smallest distance from the others at which this drop would have been told, as a ratio."""
    n = int(data.suspects.n[run_set])
    left = data.residuals
    rest = left.squares[run_set] - left.left[drop] ** 2 / left.diagonal[drop]
    scale = max(rest / max(n - 2, 1), float(left.least[run_set]))
    error = np.sqrt(scale / left.diagonal[drop])
    return float(detectable(standard_error=error, dof=n - 2, level=data.limits.outlier_level / n))


def _cost(effect: float, what: str = "it") -> str:
    way = "higher" if effect > 0 else "lower"
    return f"without {what} the viscosity would be {100 * abs(effect):.2f} % {way}"


def _without(data: RunData, run_set: int, drops: NDArray[np.intp]) -> float:
    """Relative change of the set's viscosity when drops are left out."""
    kept = np.flatnonzero(data.selection.run_set == run_set)
    kept = kept[~np.isin(kept, drops)]
    _, value = np.unique(data.weights.value[kept], return_inverse=True)
    means = np.bincount(value, weights=data.columns.at_set[kept]) / np.bincount(value)
    return float(means.mean() / data.scatter.mean[run_set] - 1)
