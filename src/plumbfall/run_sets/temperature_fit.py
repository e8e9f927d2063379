"""The temperature slope of a liquid, fitted to its own run sets at several temperatures.

The run sets' values carry their full joint covariance, so the fit is by generalised least squares,
and its parameters are rows over the same columns as the values: what the sets share, the fit
shares with them and with everything else.
"""

from __future__ import annotations

import dataclasses
import math
from collections.abc import Iterable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy import sparse

from plumbfall.bench.records import Bench
from plumbfall.errors import InputError, Problem
from plumbfall.measurement.inputs import Column, Inputs
from plumbfall.measurement.selection import Selection
from plumbfall.run_sets.jacobian import Jacobian
from plumbfall.run_sets.repeatability import OF_DROPS, OF_VALUES, Repeatability
from plumbfall.run_sets.temperature_laws import LAWS, TemperatureLaw
from plumbfall.uncertainty.least_squares import Goodness, LeastSquares, NoFitError, fit

__all__ = ["APART", "TemperatureFit", "fit_temperatures", "slopes_of", "with_fitted_slopes"]

Numbers = NDArray[np.float64]
Codes = NDArray[np.intp]

APART = 0.1
"""Temperatures closer than this, in kelvin, count as one (common practice, no source)."""


@dataclass(frozen=True)
class TemperatureFit:
    """A law fitted to one liquid's run sets.

    ``sets`` are the places of the run sets fitted, ``members`` those of all the liquid's sets
    that have a temperature, whose slope the fit gives. ``rows`` are the parameters' sensitivities
    to the columns of the Jacobian, shape (parameters, columns). ``goodness``
    measures the sets' distances from the law by each set's own scatter, not by the pooled one that
    weighs them.
    """

    liquid: str
    law: TemperatureLaw
    sets: Codes
    members: Codes
    temperature: Numbers
    found: LeastSquares
    rows: sparse.csr_array
    goodness: Goodness

    def log_viscosity(self, temperature: Numbers) -> tuple[Numbers, Numbers]:
        """ln(viscosity) of the law, and its derivatives by the parameters, shape (..., those)."""
        at = self.law.evaluate(self.found.parameters, np.asarray(temperature, dtype=float))
        return at.values, at.design

    def slope(self, temperature: Numbers) -> Numbers:
        """Return d ln(viscosity)/dT of the law, 1/K."""
        return self.law.slope(self.found.parameters, temperature)

    @property
    def fitted_range(self) -> tuple[float, float]:
        """Lowest and highest temperature fitted."""
        return float(self.temperature.min()), float(self.temperature.max())


def fit_temperatures(
    bench: Bench,
    selection: Selection,
    jacobian: Jacobian,
    scatter: Repeatability,
    temperature: Numbers,
    left_out: Iterable[int] = (),
) -> tuple[TemperatureFit, ...]:
    """Fit the law that the bench sheet names to every liquid that has temperatures enough.

    Parameters
    ----------
    bench : Bench
        Its ``methods.slope`` names the law.
    selection : Selection
        Which run set has which liquid.
    jacobian : Jacobian
        Sensitivities of the run sets' viscosities.
    scatter : Repeatability
        Each set's value at its own temperature, and where its scatter is from.
    temperature : array, shape (run sets,) [K]
        The sets' temperatures, NaN where unknown.
    left_out : places of run sets
        Sets that are not to be fitted, as their data are invalid.

    Returns
    -------
    tuple of TemperatureFit
        One for each liquid that could be fitted.

    Raises
    ------
    InputError
        Where no liquid has temperatures enough and one lacks a slope of its own, or where the law
        does not fit.
    """
    law = LAWS[bench.methods.slope or ""]
    liquid = np.full(len(selection.names), -1, dtype=np.intp)
    liquid[selection.cells.run_set] = selection.cells.liquid
    viscosity = scatter.mean
    known = (liquid >= 0) & np.isfinite(temperature)
    usable = known & np.isfinite(viscosity) & (viscosity > 0)
    usable[list(left_out)] = False
    names = list(bench.liquids)
    fits, short = [], []
    for code in np.unique(liquid[known]).tolist():
        sets = np.flatnonzero(usable & (liquid == code))
        if (count := _distinct(temperature[sets])) < law.fewest:
            short.append((names[code], count))
            continue
        members = np.flatnonzero(known & (liquid == code))
        fits.append(_fit(bench, names[code], law, sets, members, jacobian, scatter, temperature))
    sloped = [name for name, _ in short if bench.liquids[name].viscosity_slope is not None]
    if not fits and (not short or len(sloped) < len(short)):
        raise InputError(_too_few(law, short, bench.path))
    return tuple(fits)


def _fit(
    bench: Bench,
    liquid: str,
    law: TemperatureLaw,
    sets: Codes,
    members: Codes,
    jacobian: Jacobian,
    scatter: Repeatability,
    temperature: Numbers,
) -> TemperatureFit:
    at, eta, basis = temperature[sets], scatter.mean[sets], scatter.basis[sets]
    relative = sparse.csr_array(sparse.diags_array(1 / eta) @ jacobian.matrix[sets])
    contributions = sparse.csr_array(relative * jacobian.u)
    covariance = _product(contributions)
    seen = _product(contributions[:, jacobian.observed_scatter])
    of_balls = _product(contributions[:, jacobian.shared_scatter])
    dof = scatter.dof[sets]
    weighted_by = covariance - seen + np.diag(_pooled(np.diag(seen), dof, basis))
    log_viscosity = np.log(eta)
    try:
        found = fit(
            lambda parameters: law.evaluate(parameters, at),
            law.start(at, log_viscosity),
            log_viscosity,
            covariance,
            weighted_by,
        )
        _check(law, found, at)
    except NoFitError as error:
        raise InputError(
            f"{law.title} cannot be fitted to the run sets of liquid {liquid}: {error}",
            path=bench.path,
            key="methods.slope",
            remedy='use slope = "andrade", or more temperatures, farther apart'
            if law.name == "vogel"
            else "check the temperatures, or give the liquid's viscosity_slope instead",
        ) from None
    return TemperatureFit(
        liquid=liquid,
        law=law,
        sets=sets,
        members=members,
        temperature=at,
        found=found,
        rows=sparse.csr_array(sparse.csr_array(found.sensitivities) @ relative),
        goodness=found.goodness(np.diag(seen - of_balls), dof, of_balls, float(dof.min())),
    )


def _product(contributions: sparse.csr_array) -> Numbers:
    return np.asarray((contributions @ contributions.T).todense())


def _pooled(variance: Numbers, dof: Numbers, basis: Codes) -> Numbers:
    """Relative variances of the sets' means by the scatter that sets of one kind have together.

    Few drops show their scatter badly, and weights by each set's own would favour the sets whose
    drops agree by chance. Pooled they are the same for all. What the same balls do in several sets
    has no weight either: seen in few balls, it seems more alike than it is.
    """
    pooled = variance.copy()
    for kind in np.unique(basis):
        here = (basis == kind) & np.isfinite(dof)
        if kind in (OF_DROPS, OF_VALUES) and here.any():
            single = variance[here] * (dof[here] + 1)  # of one value: a mean of n has n - 1
            pooled[here] = np.sum(dof[here] * single) / np.sum(dof[here]) / (dof[here] + 1)
    return pooled


def slopes_of(fits: Iterable[TemperatureFit], temperature: Numbers) -> Numbers:
    """Fitted d ln(viscosity)/dT at each run set's temperature, 1/K; NaN where none was fitted."""
    slope = np.full(len(temperature), np.nan)
    for one in fits:
        slope[one.members] = one.slope(temperature[one.members])
    return slope


def with_fitted_slopes(inputs: Inputs, cell_set: Codes, slope: Numbers) -> Inputs:
    """Return inputs whose slope is the fitted one wherever there is one.

    It is no input of its own any more: its error is that of the run sets it was fitted to.
    """
    here = np.isfinite(slope[cell_set])
    given = inputs.roles["slope"]
    column = Column(np.where(here, slope[cell_set], given.value), np.where(here, -1, given.entry))
    return dataclasses.replace(
        inputs,
        roles={**inputs.roles, "slope": column},
        slope_known=inputs.slope_known | here,
    )


def _check(law: TemperatureLaw, found: LeastSquares, temperature: Numbers) -> None:
    """Refuse parameters that no liquid has."""
    if law.name != "vogel":
        return
    _, b, t0 = found.parameters
    if not (b > 0 and 0 < t0 < temperature.min()):
        raise NoFitError(
            f"the best it does is B = {b:.4g} K and T0 = {t0:.4g} K, which no liquid has"
        )


def _distinct(temperature: Numbers) -> int:
    """How many of the temperatures differ."""
    count, last = 0, -math.inf
    for one in np.sort(temperature).tolist():
        if one - last > APART:
            count, last = count + 1, one
    return count


def _too_few(law: TemperatureLaw, short: list[tuple[str, int]], path: str) -> Problem:
    counts = "; ".join(f"liquid {name} has {count}" for name, count in short)
    if counts:
        counts += f" (those within {APART:g} K count as one)"
    return Problem(
        f"{law.title} needs run sets of one liquid at {law.fewest} temperatures at least: "
        f"{counts or 'no run set has a temperature'}",
        "give the liquid's viscosity_slope instead of slope in [methods], or reduce run sets at "
        "more temperatures together",
        path=path,
        key="methods.slope",
    )
