"""The law of propagation of uncertainty for many outputs at once (JCGM 100:2008, clause 5).

Every output is a row of one sparse Jacobian and every input one column, so that inputs which
outputs share give the outputs' covariance without anybody saying which.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from functools import cached_property

import numpy as np
from numpy.typing import NDArray
from scipy import sparse
from scipy.sparse.csgraph import connected_components

from plumbfall.uncertainty.coverage import effective_dof

__all__ = ["Propagation", "propagate"]

Numbers = NDArray[np.float64]


@dataclass(frozen=True)
class Propagation:
    """Outputs' uncertainty as the sum of their inputs' contributions.

    ``contributions`` is a sparse matrix, shape (outputs, inputs): sensitivity times standard
    uncertainty, in the outputs' units. ``correlation`` is that of the inputs, ``None`` where
    they are independent. ``sample`` marks inputs that together are one sample, deviations from
    one mean; in each output they have ``sample_dof`` degrees of freedom together, shape (outputs,).
    """

    contributions: sparse.csr_array
    dof: Numbers
    correlation: Numbers | None = None
    sample: NDArray[np.bool_] | None = None
    sample_dof: Numbers | None = None

    @cached_property
    def variance(self) -> Numbers:
        """Squared combined standard uncertainty, shape (outputs,)."""
        if self.correlation is not None:
            return np.diag(self.covariance()).copy()
        return self._row_sums(self.contributions.data**2)

    @property
    def u(self) -> Numbers:
        """Combined standard uncertainty, shape (outputs,)."""
        return np.sqrt(self.variance)

    @cached_property
    def effective_dof(self) -> Numbers:
        """Welch and Satterthwaite's effective degrees of freedom, shape (outputs,)."""
        dof = self.dof[self.contributions.indices]
        squares = self.contributions.data**2
        fourth = self._row_sums(squares**2 / dof)
        if self.sample is not None and self.sample_dof is not None:
            of_sample = self.sample[self.contributions.indices]
            fourth += self._row_sums(np.where(of_sample, squares, 0.0)) ** 2 / self.sample_dof
        return effective_dof(u=self.u, contributions_fourth=fourth)

    def covariance(self, rows: slice | Sequence[int] | None = None) -> Numbers:
        """Covariance matrix of the outputs (of some ``rows``), in their units' products."""
        part = self.contributions if rows is None else self.contributions[rows]
        middle = part if self.correlation is None else part @ self.correlation
        product = middle @ part.T
        return np.asarray(product.todense() if sparse.issparse(product) else product)

    def combine(self, outputs: Sequence[int], weights: Numbers) -> Propagation:
        """Return the propagation of a weighted sum of outputs, whatever they share.

        Outputs with inputs of one sample in common have as many degrees of freedom in it as the
        one of them with the fewest; samples of different inputs are independent.
        """
        rows = np.asarray(outputs, dtype=np.intp)
        weights = np.asarray(weights, dtype=float)
        mixed = sparse.csr_array(sparse.csr_array(weights[None, :]) @ self.contributions[rows])
        dof = None
        if self.sample is not None and self.sample_dof is not None:
            parts = weights[:, None] * self.contributions[rows][:, self.sample].toarray()
            dof = np.array([_joined_dof(parts, self.sample_dof[rows])])
        return replace(self, contributions=mixed, sample_dof=dof)

    def part(self, inputs: NDArray[np.bool_]) -> Propagation:
        """Return what some of the inputs alone contribute, independent of the others."""
        return replace(
            self,
            contributions=sparse.csr_array(self.contributions[:, inputs]),
            dof=self.dof[inputs],
            correlation=None if self.correlation is None else self.correlation[inputs][:, inputs],
            sample=None if self.sample is None else self.sample[inputs],
        )

    def row(self, output: int) -> tuple[NDArray[np.intp], Numbers]:
        """Return the inputs of one output, and their contributions with sign."""
        start, stop = self.contributions.indptr[output : output + 2]
        return self.contributions.indices[start:stop], self.contributions.data[start:stop]

    def _row_sums(self, data: Numbers) -> Numbers:
        like = sparse.csr_array(
            (data, self.contributions.indices, self.contributions.indptr),
            shape=self.contributions.shape,
        )
        return np.asarray(like.sum(axis=1), dtype=float).ravel()


def propagate(
    *,
    sensitivities: NDArray[np.float64] | sparse.sparray,
    u: Numbers,
    dof: Numbers | None = None,
    correlation: Numbers | None = None,
    sample: NDArray[np.bool_] | None = None,
    sample_dof: Numbers | None = None,
) -> Propagation:
    """Propagate standard uncertainties of inputs to outputs.

    Parameters
    ----------
    sensitivities : array or sparse array, shape (outputs, inputs)
        Partial derivatives of the outputs.
    u : array, shape (inputs,)
        Standard uncertainties of the inputs.
    dof : array, shape (inputs,), optional
        Degrees of freedom; infinite where not given.
    correlation : array, shape (inputs, inputs), optional
        Correlation coefficients of the inputs.
    sample : array of bool, shape (inputs,), optional
        Inputs that together are one sample; their own ``dof`` are infinite.
    sample_dof : array, shape (outputs,), optional
        Degrees of freedom of that sample in each output.

    Returns
    -------
    Propagation
        Uncertainties, effective degrees of freedom and covariance of the outputs.

    References
    ----------
    JCGM 100:2008, 5.1.2, 5.2.2 and G.4.1.
    """
    return Propagation(
        contributions=sparse.csr_array(sparse.csr_array(sensitivities) * u),
        dof=np.full(len(u), np.inf) if dof is None else np.asarray(dof, dtype=float),
        correlation=correlation,
        sample=sample,
        sample_dof=sample_dof,
    )


def _joined_dof(parts: Numbers, dof: Numbers) -> float:
    """Degrees of freedom of a sum of samples, shape (samples, inputs), by what they share."""
    felt = parts != 0
    _, group = connected_components(sparse.csr_array((felt @ felt.T).astype(float)), directed=False)
    variances, fewest = [], []
    for one in np.unique(group):
        here = group == one
        variances.append(float((parts[here].sum(axis=0) ** 2).sum()))
        fewest.append(float(dof[here].min()))
    variance = np.array(variances)
    fourth = float((variance**2 / np.array(fewest)).sum())
    return float(effective_dof(u=np.sqrt(variance.sum()), contributions_fourth=fourth))
