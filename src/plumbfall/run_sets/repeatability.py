"""What the drops' own scatter adds to each run set's uncertainty, and what it replaces.

The rule: where a set has at least two values (ball means, or drops of a lot) their observed
scatter stands for everything each value has to itself: timing, reading, and what is individual
to a ball. Where there is one ball, the scatter of its drops stands for what each drop has to
itself. A set too short to show its own uses the bench's known repeatability if there is one,
unless what it shows contradicts that; a single drop without it uses what the bench sheet declares
of its instruments. Never two of these.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.special import fdtri

from plumbfall.bench.records import Scatter
from plumbfall.measurement.balance import Numbers
from plumbfall.measurement.columns import DropColumns
from plumbfall.measurement.selection import Selection
from plumbfall.measurement.values import Weights
from plumbfall.run_sets.own_errors import OwnErrors
from plumbfall.uncertainty.type_a import group_scatter

__all__ = ["DECLARED", "FEWEST", "KNOWN", "OF_DROPS", "OF_VALUES", "Repeatability", "repeatability"]

DECLARED, KNOWN, OF_DROPS, OF_VALUES = range(4)
"""Where a set's scatter is taken from."""

FEWEST = 6
"""Fewer values than this are too few to show their own scatter, where it is known otherwise.

With six of them Student's interval is on average 1.25 times as wide as that of one who knows
the scatter, with five 1.33 times (E[s] t / (1.96 sigma))."""

MANY = 1e8
"""Degrees of freedom that stand for infinitely many."""

CONTRADICTION = 0.01
"""Probability below which a scatter as large as the observed one contradicts the known one."""


@dataclass(frozen=True, slots=True)
class Repeatability:
    """Scatter of each run set, arrays of shape (run sets,).

    ``mean`` is the set's viscosity in Pa.s; ``u`` and ``dof`` those of the mean due to scatter
    (0 where the declared terms stand); ``basis`` one of the four sources; ``floored`` where the
    clock's resolution is larger than what was observed. ``value_mean`` has shape (values,).
    """

    mean: Numbers
    u: Numbers
    dof: Numbers
    basis: NDArray[np.intp]
    floored: NDArray[np.bool_]
    value_mean: Numbers


def repeatability(
    selection: Selection,
    columns: DropColumns,
    weights: Weights,
    own: OwnErrors,
    known: Scatter | None,
) -> Repeatability:
    """Evaluate every run set's scatter.

    Parameters
    ----------
    selection : Selection
        The used drops.
    columns : DropColumns
        Their viscosities at the run set's temperature.
    weights : Weights
        How drops make values, and values a mean.
    own : OwnErrors
        What declared errors add to each mean.
    known : Scatter, optional
        The bench's known repeatability.

    Returns
    -------
    Repeatability
        By the rule at the head of this module.

    References
    ----------
    JCGM 100:2008, 4.2; ball means where balls repeat: JCGM 100:2008, H.5 (analysis of variance).
    """
    n_sets = len(selection.names)
    at_set = columns.at_set
    value_mean = (
        np.bincount(weights.value, weights=at_set, minlength=len(weights.value_set))
        / weights.value_drops
    )
    values = group_scatter(value_mean, weights.value_set, n_sets)
    drops = group_scatter(at_set, selection.run_set, n_sets)

    several = weights.n_values >= 2
    count = np.where(several, weights.n_values, weights.n_drops)
    basis = np.where(several, OF_VALUES, np.where(weights.n_drops >= 2, OF_DROPS, DECLARED))
    observed = np.where(several, values.sd, drops.sd) / np.sqrt(np.maximum(count, 1))
    own_dof = np.maximum(count - 1, 1).astype(float)
    u = np.where(basis == DECLARED, 0.0, observed)
    dof = np.where(basis == DECLARED, np.inf, own_dof)
    if known is not None:
        squares = np.bincount(selection.run_set, weights=weights.weight**2, minlength=n_sets)
        by_bench = known.relative.value * values.mean * np.sqrt(squares)
        # ball means scatter by their balls' own errors too
        expected = by_bench**2 + np.where(several, own.individual + own.spread, 0.0)
        largest = expected * _largest_ratio(own_dof, known.dof)
        stands = (count < FEWEST) & ~((count > 1) & (observed**2 > largest))
        basis = np.where(stands, KNOWN, basis)
        u = np.where(basis == KNOWN, by_bench, u)
        dof = np.where(basis == KNOWN, known.dof, dof)
    resolution_u = np.sqrt(own.resolution)
    floored = (basis >= OF_DROPS) & (u < resolution_u)
    return Repeatability(
        mean=values.mean,
        u=np.where(floored, resolution_u, u),
        dof=np.where(floored, np.inf, dof),
        basis=basis,
        floored=floored,
        value_mean=value_mean,
    )


def _largest_ratio(dof: Numbers, known_dof: float) -> Numbers:
    """Ratio of an observed variance to a known one that only few would exceed by chance."""
    return np.asarray(fdtri(dof, min(known_dof, MANY), 1 - CONTRADICTION))
