"""Drops that scatter more, or less, than the instruments and the bench are known to."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
from numpy.typing import NDArray
from scipy.special import chdtr, chdtrc, chdtri, fdtr, fdtrc, fdtri

from plumbfall.findings.clock_steps import clock_steps
from plumbfall.findings.data import Found, RunData
from plumbfall.findings.explained import explained_scatter
from plumbfall.findings.repeats import Repeats, repeats
from plumbfall.findings.significance import POWER
from plumbfall.results import Finding

__all__ = ["scatter_large", "scatter_small"]

MANY = 1e8
"""Degrees of freedom that stand for infinitely many."""


def scatter_large(data: RunData) -> Iterator[Found]:
    """Find drops of one ball that scatter more than timer and thermometer are said to.

    The drop that Grubbs' test calls an outlier is left out, and so are sets whose drops drift or
    follow the temperature: these have findings of their own.
    """
    suspect = data.suspects
    keep = np.ones(len(data.selection.run_set), dtype=bool)
    keep[suspect.drop[suspect.p_value < data.limits.outlier_level]] = False
    found = repeats(data, keep)
    expected, known_dof = _expected(data, found)
    level = data.level
    p_value = _tail(data, found, known_dof, upper=True)
    with np.errstate(invalid="ignore"):
        unexplained = np.sqrt(np.maximum(found.sd**2 - expected**2, 0.0))
        flagged = (p_value < level) & (unexplained > data.limits.scatter_excess)
    flagged &= ~explained_scatter(data)
    for run_set in np.flatnonzero(flagged):
        sd, least = float(found.sd[run_set]), float(expected[run_set])
        n = int(data.weights.n_drops[run_set])
        ratio = _quantile_ratio(int(found.dof[run_set]), float(known_dof), level, upper=True)
        yield (
            int(run_set),
            Finding(
                code="scatter-large",
                severity="warning",
                statistic=sd / least,
                p_value=float(p_value[run_set]),
                effect=float(unexplained[run_set]) / np.sqrt(n),
                detectable=max(least * ratio, data.limits.scatter_excess),
                message=f"drops of one ball scatter by {100 * sd:.2g} % of viscosity, "
                f"{sd / least:.1f} times the {100 * least:.2g} % that {_source(data)} gives",
                remedy="look for drops let go off the axis, bubbles, a ball or liquid not yet at "
                "the bath's temperature, or liquid still moving from the drop before",
            ),
        )


def scatter_small(data: RunData) -> Iterator[Found]:
    """Find drops that agree better than their timing can: copied, averaged or rounded times.

    What the clock's steps may hide is added to the scatter that is seen.
    """
    found = repeats(data)
    expected, known_dof = _expected(data, found)
    level = data.level
    hidden = clock_steps(data).relative ** 2 / 6
    p_value = _tail(data, found, known_dof, upper=False, hidden=hidden)
    for run_set in np.flatnonzero(p_value < level):
        sd, least = float(found.sd[run_set]), float(expected[run_set])
        n = int(data.weights.n_drops[run_set])
        ratio = _quantile_ratio(int(found.dof[run_set]), float(known_dof), level, upper=False)
        yield (
            int(run_set),
            Finding(
                code="scatter-small",
                severity="warning",
                statistic=sd / least,
                p_value=float(p_value[run_set]),
                effect=least / np.sqrt(n),
                detectable=least * ratio,
                message=f"drops of one ball agree within {100 * sd:.2g} % of viscosity (standard "
                f"deviation), where {_source(data)} scatters by {100 * least:.2g} %: too good",
                remedy="were times copied, averaged, or picked? Write down every time as read; if "
                "they are, the timer is better than per_drop says: correct that",
            ),
        )


def _source(data: RunData) -> str:
    return "the bench's known repeatability" if data.bench.scatter else "the timer as described"


def _expected(data: RunData, found: Repeats) -> tuple[NDArray[np.float64], float]:
    """Return the standard deviation to hold the drops against, and its degrees of freedom."""
    known = data.bench.scatter
    if known is None:
        return found.declared, np.inf
    return np.full_like(found.sd, known.relative.value), known.dof


def _tail(
    data: RunData,
    found: Repeats,
    known_dof: float,
    *,
    upper: bool,
    hidden: NDArray[np.float64] | float = 0.0,
) -> NDArray[np.float64]:
    """Probability of a scatter as large (or as small), 1 where it cannot be told, (run sets,)."""
    expected, _ = _expected(data, found)
    dof = np.maximum(found.dof, 1)
    with np.errstate(invalid="ignore", divide="ignore"):
        if data.bench.scatter is None:
            chi_squared = found.chi_squared + dof * hidden / expected**2
            p_value = (chdtrc if upper else chdtr)(dof, chi_squared)
        else:
            f = (found.sd**2 + hidden) / expected**2
            p_value = (fdtrc if upper else fdtr)(dof, min(known_dof, MANY), f)
        able = (found.dof > 0) & np.isfinite(found.sd) & (expected > 0)
    return np.where(able, p_value, 1.0)


def _quantile_ratio(dof: int, known_dof: float, level: float, *, upper: bool) -> float:
    """How many times the expected scatter the true one must be to be found so often."""
    at, often = (1 - level, 1 - POWER) if upper else (level, POWER)
    if np.isinf(known_dof):
        return float(np.sqrt(chdtri(dof, 1 - at) / chdtri(dof, 1 - often)))
    many = min(known_dof, MANY)
    return float(np.sqrt(fdtri(dof, many, at) / fdtri(dof, many, often)))
