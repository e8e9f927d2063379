"""Generalised least squares: a model's parameters from values whose errors are correlated.

The parameters come with their sensitivities to the values, so that whatever the values share
with other results, their parameters share too.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass
from typing import TypeAlias

import numpy as np
from numpy.typing import ArrayLike, NDArray
from scipy.linalg import solve_triangular
from scipy.special import chdtrc, fdtrc

from plumbfall.errors import PlumbfallError

__all__ = ["Evaluated", "Goodness", "LeastSquares", "NoFitError", "fit", "fit_linear"]

Numbers = NDArray[np.float64]

MOST_STEPS = 100
SETTLED = 1e-9
"""Steps stop once they move the fit, in standard uncertainties, or every parameter by less."""
MANY = 1e8
"""Degrees of freedom that are as good as unlimited."""

SINGULAR = 1e-12
"""Variances below this part of the largest are taken as no errors of the values' own."""


class NoFitError(PlumbfallError):
    """The values do not determine the parameters."""


@dataclass(frozen=True, slots=True)
class Evaluated:
    """A model at some parameters.

    ``values`` has shape (values,), ``design`` their derivatives by the parameters, shape (values,
    parameters), ``curvature`` the second ones, shape (values, parameters, parameters); ``None``
    for a model that is linear in its parameters.
    """

    values: Numbers
    design: Numbers
    curvature: Numbers | None = None


Model: TypeAlias = Callable[[Numbers], Evaluated]


@dataclass(frozen=True, slots=True)
class LeastSquares:
    """Parameters of a fit and how good it is.

    ``sensitivities`` are the parameters' derivatives by the values, shape (parameters, values);
    ``chi_squared`` is the sum of squared residuals in units of the covariance that weighs them,
    NaN where that is singular. ``contrasts`` are what the values must be multiplied with for
    the independent distances from the model whose squares make chi-squared, shape (dof, values),
    and ``of_contrasts`` is the covariance of these distances by that of the values.
    """

    parameters: Numbers
    sensitivities: Numbers
    covariance: Numbers
    residuals: Numbers
    chi_squared: float
    dof: int
    contrasts: Numbers
    of_contrasts: Numbers

    @property
    def u(self) -> Numbers:
        """Standard uncertainties of the parameters."""
        return np.sqrt(np.diag(self.covariance))

    def scaled(self) -> LeastSquares:
        """Return the fit with the covariance that its own residuals show.

        For values of equal, unknown variance: chi-squared over the degrees of freedom is it.
        """
        if self.dof < 1:
            raise NoFitError("a fit through as many values as parameters leaves no residuals")
        return LeastSquares(
            parameters=self.parameters,
            sensitivities=self.sensitivities,
            covariance=self.covariance * (self.chi_squared / self.dof),
            residuals=self.residuals,
            chi_squared=float(self.dof),
            dof=self.dof,
            contrasts=self.contrasts * math.sqrt(self.dof / self.chi_squared),
            of_contrasts=self.of_contrasts,
        )

    def p_value(self, own_variance: ArrayLike, own_dof: ArrayLike) -> float:
        """Probability of a chi-squared at least as large if the model holds.

        For values weighed by their own variances, part of which were estimated from few
        observations; large values of chi-squared are then common. With many values of few
        observations each it finds too much: see :meth:`goodness`.

        Parameters
        ----------
        own_variance : array, shape (values,)
            The part of each value's variance that was so estimated.
        own_dof : array, shape (values,)
            Degrees of freedom of that estimate.

        Returns
        -------
        float
            NaN without degrees of freedom.

        References
        ----------
        S. Johansen, Biometrika 67 (1980) 85; for means it is the test of Welch 1951.
        """
        n = self.dof
        if n < 1 or math.isnan(self.chi_squared):
            return math.nan
        parts = (self.contrasts**2).sum(axis=0) * np.asarray(own_variance, dtype=float)
        a = float(np.sum(parts**2 / np.asarray(own_dof, dtype=float)))
        if a <= 0:
            return float(chdtrc(n, self.chi_squared))
        larger = n + 2 * a - 6 * a / (n + 2)
        return float(fdtrc(n, n * (n + 2) / (3 * a), self.chi_squared / larger))

    def goodness(
        self,
        own_variance: ArrayLike,
        own_dof: ArrayLike,
        shared: ArrayLike | None = None,
        shared_dof: float = math.inf,
    ) -> Goodness:
        """Return chi-squared by the values' own variances, and the chance of one as large.

        For values weighed alike, whatever their own variances: the sum of squared distances over
        its expectation by these variances is taken for Fisher's F, with degrees of freedom by the
        first two moments of both. Its size holds for any number of values of two observations or
        more each, also of unequal variances (simulated).

        Parameters
        ----------
        own_variance : array, shape (values,)
            The part of each value's variance that was estimated from few observations.
        own_dof : array, shape (values,)
            Degrees of freedom of that estimate.
        shared : array, shape (values, values), optional
            The part of the covariance that was estimated for all values together.
        shared_dof : float
            Its degrees of freedom.

        Returns
        -------
        Goodness
            Chi-squared is scaled to have the fit's degrees of freedom as expectation.

        References
        ----------
        G. E. P. Box, Ann. Math. Stat. 25 (1954) 290; E. Brunner, H. Dette and A. Munk, J. Am.
        Stat. Assoc. 92 (1997) 1494.
        """
        if self.dof < 1 or math.isnan(self.chi_squared):
            return Goodness(math.nan, math.nan)
        own, few = np.asarray(own_variance, dtype=float), np.asarray(own_dof, dtype=float)
        expected = float(np.trace(self.of_contrasts))
        parts = (self.contrasts**2).sum(axis=0) * own
        # the squares of estimated variances are too large on average
        squared = float(np.sum(self.of_contrasts**2) - np.sum(parts**2 * 2 / (few + 2)))
        doubt = float(np.sum(parts**2 / few))
        if shared is not None and math.isfinite(shared_dof):
            part = self.contrasts @ np.asarray(shared, dtype=float) @ self.contrasts.T
            found, twice, k = float(np.sum(part**2)), float(np.trace(part)) ** 2, shared_dof
            if k > 1:  # of one degree of freedom the square says nothing of the true one
                squared -= found - (found - twice / k) * k**2 / ((k + 2) * (k - 1))
            doubt += found / k
        n = min(expected**2 / max(squared, expected**2 / self.dof), float(self.dof))
        ratio = self.chi_squared / expected
        within = min(expected**2 / doubt, MANY) if doubt > 0 else MANY
        return Goodness(ratio * self.dof, float(fdtrc(n, within, ratio)))


@dataclass(frozen=True, slots=True)
class Goodness:
    """How good a fit is: chi-squared, and the chance of one at least as large; NaN if unknown."""

    chi_squared: float
    p_value: float


def fit_linear(design: ArrayLike, values: ArrayLike, covariance: ArrayLike) -> LeastSquares:
    """Fit a model that is linear in its parameters; see :func:`fit`.

    Parameters
    ----------
    design : array, shape (values, parameters)
        Derivatives of the model's values by its parameters.
    values : array, shape (values,)
        What is fitted.
    covariance : array, shape (values, values)
        Of the values.
    """
    matrix = np.asarray(design, dtype=float)
    return fit(
        lambda parameters: Evaluated(matrix @ parameters, matrix),
        np.zeros(matrix.shape[1]),
        values,
        covariance,
    )


def fit(
    model: Model,
    start: ArrayLike,
    values: ArrayLike,
    covariance: ArrayLike,
    weighted_by: ArrayLike | None = None,
) -> LeastSquares:
    """Fit a model by generalised least squares.

    Parameters
    ----------
    model : callable
        From parameters, shape (parameters,), to what they give.
    start : array, shape (parameters,)
        Where to start.
    values : array, shape (values,)
        What is fitted.
    covariance : array, shape (values, values)
        Of the values.
    weighted_by : array, shape (values, values), optional
        The covariance whose inverse weighs the values; theirs where not given. Where it is
        singular, errors that the values share have no weight, and where it is zero all values
        weigh the same. Weights that are themselves estimates from few observations favour values
        that only seem good, and the parameters' uncertainty then comes out too small.

    Returns
    -------
    LeastSquares
        Parameters with exact sensitivities, so also those of a curved model.

    Raises
    ------
    NoFitError
        Where the values do not determine the parameters.

    References
    ----------
    A. C. Aitken, Proc. R. Soc. Edinburgh 55 (1935) 42; JCGM 100:2008, H.3 for a line.
    """
    y, v = np.asarray(values, dtype=float), np.asarray(covariance, dtype=float)
    parameters = np.asarray(start, dtype=float).copy()
    dof = len(y) - len(parameters)
    if dof < 0:
        raise NoFitError(f"{len(y)} values do not determine {len(parameters)} parameters")
    root, regular = _root(v if weighted_by is None else np.asarray(weighted_by, dtype=float))

    def whitened(array: Numbers) -> Numbers:
        return np.asarray(solve_triangular(root, array, lower=True))

    at = model(parameters)
    for _ in range(MOST_STEPS):
        residual = whitened(y - at.values)
        q, r, scale = _decomposed(whitened(at.design))
        step = np.asarray(solve_triangular(r, q.T @ residual)) / scale
        before = residual @ residual
        last = parameters
        parameters, at = _damped(model, parameters, step, y, whitened, float(before))
        moved = np.linalg.norm(q.T @ residual)
        little = np.all(np.abs(step) <= SETTLED * np.abs(parameters)) or parameters is last
        if at.curvature is None or little or moved <= SETTLED * max(1.0, math.sqrt(before)):
            break
    else:
        raise NoFitError("the fit does not settle")

    residual = whitened(y - at.values)
    design = whitened(at.design)
    q, r, scale = _decomposed(design)
    inverse_root = whitened(np.eye(len(y)))
    if at.curvature is None:
        sensitivities = solve_triangular(r, q.T @ inverse_root) / scale[:, None]
    else:
        pull = inverse_root.T @ residual
        bent = np.einsum("k,kij->ij", pull, at.curvature) / np.outer(scale, scale)
        sensitivities = np.linalg.solve(r.T @ r - bent, r.T @ q.T @ inverse_root)
        sensitivities = sensitivities / scale[:, None]
    contrasts = np.linalg.qr(q, mode="complete")[0][:, len(parameters) :].T @ inverse_root
    return LeastSquares(
        parameters=parameters,
        sensitivities=sensitivities,
        covariance=sensitivities @ v @ sensitivities.T,
        residuals=y - at.values,
        chi_squared=float(residual @ residual) if regular else math.nan,
        dof=dof,
        contrasts=contrasts,
        of_contrasts=contrasts @ v @ contrasts.T,
    )


def _damped(
    model: Model,
    parameters: Numbers,
    step: Numbers,
    y: Numbers,
    whitened: Callable[[Numbers], Numbers],
    before: float,
) -> tuple[Numbers, Evaluated]:
    """Take the step, or as much of it as does not make the fit worse."""
    for halvings in range(40):
        tried = parameters + step * 0.5**halvings
        with np.errstate(all="ignore"):
            at = model(tried)
        if at.curvature is None:
            return tried, at
        residual = whitened(y - at.values) if np.isfinite(at.values).all() else np.array([np.inf])
        if residual @ residual <= before * (1 + 1e-12) + 1e-300:
            return tried, at
    return parameters, model(parameters)


def _root(covariance: Numbers) -> tuple[Numbers, bool]:
    """Lower root of the covariance, or of what stands for it, and whether it is regular."""
    largest = float(np.max(np.diag(covariance), initial=0.0))
    if largest <= 0:
        return np.eye(len(covariance)), False
    least = float(np.linalg.eigvalsh(covariance)[0])
    regular = least > SINGULAR * largest
    floor = 0.0 if regular else SINGULAR * largest - min(least, 0.0) * 2
    root = np.linalg.cholesky(covariance + floor * np.eye(len(covariance)))
    return np.asarray(root, dtype=float), regular


def _decomposed(design: Numbers) -> tuple[Numbers, Numbers, Numbers]:
    """Q, R and the lengths that the columns were divided by."""
    scale = np.linalg.norm(design, axis=0)
    if not np.all(np.isfinite(scale)) or np.any(scale == 0):
        raise NoFitError("the values do not determine the parameters")
    q, r = np.linalg.qr(design / scale)
    if np.min(np.abs(np.diag(r))) < 1e-11:
        raise NoFitError("the values do not determine the parameters")
    return q, r, scale
