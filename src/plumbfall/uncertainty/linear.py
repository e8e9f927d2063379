"""The law of propagation of uncertainty for many outputs at once (JCGM 100:2008, clause 5).

Every output is a row of one sparse Jacobian and every input one column, so that inputs which
outputs share give the outputs' covariance without anybody saying which.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray
from scipy import sparse

from plumbfall.uncertainty.coverage import effective_dof

__all__ = ["Propagation", "propagate"]

Numbers = NDArray[np.float64]


@dataclass(frozen=True)
class Propagation:
    """Outputs' uncertainty as the sum of their inputs' contributions.

    ``contributions`` is a sparse matrix, shape (outputs, inputs): sensitivity times standard
    uncertainty, in the outputs' units. ``correlation`` is that of the inputs, ``None`` where
    they are independent.
    """

    contributions: sparse.csr_array
    dof: Numbers
    correlation: Numbers | None = None

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
        fourth = self._row_sums(self.contributions.data**4 / dof)
        return effective_dof(u=self.u, contributions_fourth=fourth)

    def covariance(self, rows: slice | None = None) -> Numbers:
        """Covariance matrix of the outputs (of some ``rows``), in their units' products."""
        part = self.contributions if rows is None else self.contributions[rows]
        middle = part if self.correlation is None else part @ self.correlation
        product = middle @ part.T
        return np.asarray(product.todense() if sparse.issparse(product) else product)

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
    )
