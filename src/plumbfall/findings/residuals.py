"""What is left of every drop once its run set's mean, and its ball, are taken off.

The drops of a set are weighted by their variances, and a ball's drops share what is uncertain of
the ball: y = mean + ball + own error. With no uncertainty of the balls this is the plain mean of
all drops; with a large one, or where balls were found to disagree, each ball has a mean of its
own and only drops of the same ball are compared.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from plumbfall.findings.drop_errors import DropErrors
from plumbfall.uncertainty.type_a import group_sums

__all__ = ["Residuals", "Slope", "residuals"]

Numbers = NDArray[np.float64]
Codes = NDArray[np.intp]


SEEN = 1e-9
"""Part of a covariate's squares that must be left after the means for it to be seen at all."""


@dataclass(frozen=True, slots=True)
class Slope:
    """Change of ln(viscosity) with a covariate, arrays of shape (run sets,).

    ``value`` per unit of the covariate, its standard ``error`` and degrees of freedom; NaN and 0
    where the set has too few drops, or the covariate does not change within it. ``rest`` is the
    weighted sum of squares that the covariate leaves, infinite there.
    """

    value: Numbers
    error: Numbers
    dof: NDArray[np.intp]
    rest: Numbers


@dataclass(frozen=True, slots=True)
class Residuals:
    """Generalised least squares of the mean of every run set, in columns.

    ``by_ball`` says which sets compare drops of the same ball only. ``left`` is P y with
    P = V^-1 - V^-1 1 (1' V^-1 1)^-1 1' V^-1, shape (drops,), ``diagonal`` that of P; ``squares``
    y' P y by run set, with ``dof`` degrees of freedom. ``ones`` is V^-1 1, ``total`` 1' V^-1 1 by
    run set, ``factor`` what joins the drops of a ball in V^-1, shape (groups,). ``least`` is the
    smallest mean square by run set that the steps of the clock let be believed.
    Variances are relative to each other: the tests estimate their scale from the residuals.
    """

    run_set: Codes
    errors: DropErrors
    by_ball: NDArray[np.bool_]
    left: Numbers
    diagonal: Numbers
    squares: Numbers
    dof: NDArray[np.intp]
    ones: Numbers
    total: Numbers
    factor: Numbers
    least: Numbers

    def between(self, one: Codes, other: Codes) -> Numbers:
        """Elements of P off the diagonal, for pairs of drops of the same run sets."""
        group, weight = self.errors.group, 1 / self.errors.variance
        joined = np.where(group[one] == group[other], self.factor[group[one]], 0.0)
        run_set = self.run_set[one]
        with np.errstate(invalid="ignore", divide="ignore"):
            of_mean = np.where(self.by_ball, 0.0, 1 / self.total)[run_set]
        return np.asarray(
            -weight[one] * weight[other] * joined - self.ones[one] * self.ones[other] * of_mean
        )

    def project(self, values: Numbers) -> Numbers:
        """P x of any values of the drops, shape (drops,)."""
        taken = _inverse(self.errors, self.factor, values)
        n = len(self.by_ball)
        with np.errstate(invalid="ignore", divide="ignore"):
            mean = group_sums(taken, self.run_set, n) / self.total
        mean = np.where(self.by_ball, 0.0, np.nan_to_num(mean))
        return np.asarray(taken - self.ones * mean[self.run_set])

    def slope(
        self, covariate: Numbers, beside: Numbers | None = None, of: Numbers | None = None
    ) -> Slope:
        """Regress on a covariate of the drops; with ``beside``, next to a second one.

        Parameters
        ----------
        covariate : array, shape (drops,)
            NaN makes a set's slope unknown.
        beside : array, shape (drops,), optional
            A further covariate whose effect is taken off first.
        of : array, shape (drops,), optional
            What is regressed; the drops' own values if not given.

        Returns
        -------
        Slope
            Of the first covariate, by run set.
        """
        n = len(self.by_ball)

        def total(values: Numbers) -> Numbers:
            return group_sums(values, self.run_set, n)

        y, left, squares = self.errors.value, self.left, self.squares
        if of is not None:
            y = self._centred(of)
            left = self.project(y)
            squares = total(y * left)
        covariate = self._centred(covariate)
        projected, dof = self.project(covariate), self.dof - 1
        xx = total(covariate * projected)
        with np.errstate(invalid="ignore", divide="ignore"):
            if beside is not None:
                beside = self._centred(beside)
                other = self.project(beside)
                zz = total(beside * other)
                usable = zz > SEEN * total(beside**2 / self.errors.variance)
                part = np.where(usable, total(covariate * other) / zz, 0.0)
                squares = squares - np.where(usable, total(beside * left) ** 2 / zz, 0.0)
                dof = dof - usable
                projected = projected - part[self.run_set] * other
                xx = total(covariate * projected)
            xy = total(projected * y)
            seen = (xx > SEEN * total(covariate**2 / self.errors.variance)) & (dof > 0)
            rest = np.maximum(squares - xy**2 / xx, dof * self.least)
            error = np.sqrt(rest / dof / xx)
            value = xy / xx
        return Slope(
            value=np.where(seen, value, np.nan),
            error=np.where(seen, error, np.nan),
            dof=np.where(seen, dof, 0),
            rest=np.where(seen, rest, np.inf),
        )

    def _centred(self, covariate: Numbers) -> Numbers:
        n = len(self.by_ball)
        count = np.bincount(self.run_set, minlength=n)
        with np.errstate(invalid="ignore", divide="ignore"):
            mean = group_sums(covariate, self.run_set, n) / count
        return covariate - mean[self.run_set]


def residuals(
    run_set: Codes, errors: DropErrors, group_variance: Numbers, by_ball: NDArray[np.bool_]
) -> Residuals:
    """Take the mean of every run set off its drops.

    Parameters
    ----------
    run_set : array of int, shape (drops,)
        The run set of each drop.
    errors : DropErrors
        Values and variances of the drops.
    group_variance : array, shape (groups,)
        Relative variance that a ball's drops share and other balls do not.
    by_ball : array of bool, shape (run sets,)
        Sets whose balls disagree: only drops of the same ball are compared.

    Returns
    -------
    Residuals
        In columns over all drops.
    """
    n = len(by_ball)
    group, n_groups = errors.group, len(errors.group_n)
    weight = 1 / errors.variance
    of_group = group_sums(weight, group, n_groups)
    # what joins the drops of a ball (Woodbury): u^2 / (1 + u^2 S), or its limit 1 / S
    factor = np.where(
        by_ball[errors.group_set], 1 / of_group, group_variance / (1 + group_variance * of_group)
    )
    ones = weight * (1 - (factor * of_group)[group])
    total = group_sums(of_group * (1 - factor * of_group), errors.group_set, n)
    taken = _inverse(errors, factor, errors.value)
    with np.errstate(invalid="ignore", divide="ignore"):
        mean = group_sums(taken, run_set, n) / total
        of_mean = np.where(by_ball, 0.0, 1 / total)[run_set]
    mean = np.where(by_ball, 0.0, np.nan_to_num(mean))
    left = taken - ones * mean[run_set]
    diagonal = weight - weight**2 * factor[group] - ones**2 * np.nan_to_num(of_mean)
    count = group_sums(errors.whole, run_set, n).astype(np.intp)
    balls = np.bincount(errors.group_set, minlength=n)
    return Residuals(
        run_set=run_set,
        errors=errors,
        by_ball=by_ball,
        left=left,
        diagonal=diagonal,
        squares=group_sums(errors.value * left, run_set, n),
        dof=np.maximum(count - np.where(by_ball, balls, 1), 0),
        ones=ones,
        total=total,
        factor=factor,
        least=group_sums(errors.rounding / errors.variance, run_set, n) / np.maximum(count, 1),
    )


def _inverse(errors: DropErrors, factor: Numbers, values: Numbers) -> Numbers:
    """V^-1 x, shape (drops,)."""
    weight = 1 / errors.variance
    summed = group_sums(weight * values, errors.group, len(errors.group_n))
    return np.asarray(weight * (values - (factor * summed)[errors.group]))
