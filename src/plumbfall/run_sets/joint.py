"""All quantities of all run sets together: their values and what each input does to each.

Two of them are correlated as far as they share inputs; nothing else need be kept.
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray
from scipy import sparse

from plumbfall.bench.keys import key_path
from plumbfall.measurement.inputs import Inputs
from plumbfall.run_sets.jacobian import OWN_KINDS, Jacobian
from plumbfall.run_sets.outputs import QUANTITIES, UNITS, Outputs

__all__ = ["Joint", "Label", "joint_results"]

Numbers = NDArray[np.float64]


@dataclass(frozen=True, slots=True)
class Label:
    """Which quantity of which run set, and its SI unit."""

    run_set: str
    quantity: str
    unit: str


@dataclass(frozen=True)
class Joint:
    """Values with their contributions, in the order of the labels.

    ``contributions`` has shape (labels, inputs): sensitivity times standard uncertainty, in the
    label's unit. ``inputs`` are key paths; what a run set has to itself stands under its name.
    """

    labels: tuple[Label, ...]
    values: Numbers
    inputs: tuple[str, ...]
    contributions: sparse.csr_array

    @cached_property
    def places(self) -> dict[tuple[str, str], int]:
        """Where each run set's quantity stands; one without a value is missing."""
        return {(label.run_set, label.quantity): i for i, label in enumerate(self.labels)}

    @property
    def covariance(self) -> Numbers:
        """Covariance matrix of all labels, in the products of their units (JCGM 102:2011)."""
        return np.asarray((self.contributions @ self.contributions.T).todense())

    def row(self, place: int) -> dict[int, float]:
        """Contributions of the inputs to one label, by their place."""
        start, stop = self.contributions.indptr[place : place + 2]
        return dict(
            zip(
                self.contributions.indices[start:stop].tolist(),
                self.contributions.data[start:stop].tolist(),
                strict=True,
            )
        )


def joint_results(
    outputs: Outputs,
    jacobian: Jacobian,
    inputs: Inputs,
    names: tuple[str, ...],
    balls: Iterable[str],
) -> Joint:
    """Gather every quantity that has a value, set by set.

    Parameters
    ----------
    outputs : Outputs
        All quantities of all run sets.
    jacobian : Jacobian
        Whose columns they are propagated over.
    inputs : Inputs
        For the inputs' names.
    names : tuple of str
        Names of the run sets.
    balls : names
        Of the balls, in the bench's order.
    """
    labels, rows = [], []
    for place, name in enumerate(names):
        for quantity in QUANTITIES:
            row = outputs.rows(quantity).start + place
            if np.isfinite(outputs.values[row]):
                labels.append(Label(name, quantity, UNITS[quantity]))
                rows.append(row)
    contributions = outputs.propagation.contributions[rows]
    used = np.unique(contributions.indices[contributions.data != 0])
    part = sparse.csr_array(contributions[:, used])
    part.eliminate_zeros()
    known = _column_names(jacobian, inputs, names, balls)
    return Joint(
        labels=tuple(labels),
        values=outputs.values[rows],
        inputs=tuple(known[column] for column in used.tolist()),
        contributions=part,
    )


def _column_names(
    jacobian: Jacobian, inputs: Inputs, names: tuple[str, ...], balls: Iterable[str]
) -> list[str]:
    entries = [estimate.name for estimate in inputs.estimates]
    # the second-order part of an input's error is independent of the first
    squared = [f"{entries[entry]} squared" for entry in jacobian.squared.tolist()]
    own = [key_path("set", n, kind) for kind in OWN_KINDS for n in names]
    of_balls = [key_path("ball", n, "scatter") for n in list(balls)[: jacobian.n_balls]]
    return entries + squared + own + of_balls
