"""Tube constants from timings in certified liquids, with what their errors come from.

In each set ln K = ln(certified viscosity) - ln((ball density - liquid density) x time). The sets
of one ball and tube are joined by generalised least squares with their joint covariance, which
named inputs give: so are the constant's sensitivities to them.
"""

from __future__ import annotations

import dataclasses
import datetime as dt
import math
import re
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from plumbfall.bench.constant_file import Certified, Domain, StoredConstant, StoredInput
from plumbfall.bench.identities import identity_of
from plumbfall.bench.records import Bench
from plumbfall.calibration.calibration_sets import (
    UNIT_NAME,
    CalibrationSets,
    SetOf,
    calibration_sets,
    slope_name,
)
from plumbfall.calibration.certified import is_expired
from plumbfall.calibration.constancy import Constancy, constancy
from plumbfall.estimate import Estimate
from plumbfall.measurement.inputs import MODEL_INPUT
from plumbfall.results import Finding
from plumbfall.timings.records import Timings
from plumbfall.uncertainty.coverage import effective_dof
from plumbfall.uncertainty.least_squares import Evaluated, fit

__all__ = ["Calibration", "CalibrationSet", "TubeConstant", "calibrate_tubes"]

Numbers = NDArray[np.float64]

VARIES = 0.01
"""Significance below which a constant is said to vary (common practice, no source)."""

_DAY = re.compile(r"\d{4}-\d{2}-\d{2}")

ROUNDING = 1e-12
"""Relative change of a constant below which it is rounding."""

LEFT_OUT = ("uncertainty-implausible", "unit-slip-suspected", "shear-dependence")
"""Findings that mean nothing of one ball with a constant of 1."""


@dataclass(frozen=True, slots=True)
class CalibrationSet:
    """What the drops of one ball in one liquid say of the constant, SI; ``weight`` in the mean.

    ``u`` holds everything, ``scatter_u`` what the set has to itself.
    """

    name: str
    reference: str
    law: str
    temperature: float
    viscosity: float
    viscosity_u: float
    time: float
    n_drops: int
    value: float
    u: float
    scatter_u: float
    scatter_dof: float
    weight: float
    residual: float


@dataclass(frozen=True, slots=True)
class TubeConstant:
    """A constant as it is written to a file, the sets it comes from, and whether it is one."""

    stored: StoredConstant
    dof: float
    sets: tuple[CalibrationSet, ...]
    constancy: Constancy
    findings: tuple[Finding, ...]


@dataclass(frozen=True, slots=True)
class Calibration:
    """The constants, and the run sets that gave none, with the findings that say why."""

    bench: Bench
    constants: tuple[TubeConstant, ...]
    invalid: tuple[tuple[str, tuple[Finding, ...]], ...]
    references: tuple[str, ...]
    date: dt.date | None
    inputs: tuple[tuple[str, str], ...]


@dataclass(frozen=True, slots=True)
class _Observed:
    """ln K of every set: values, and derivatives by named inputs, shape (sets, inputs)."""

    log_value: Numbers
    slopes: Numbers
    estimates: tuple[Estimate, ...]
    own_u: Numbers
    own_dof: Numbers
    n_drops: Numbers
    time: Numbers
    reynolds: Numbers

    def covariance(self, rows: NDArray[np.intp]) -> Numbers:
        """Covariance of the logarithms of some sets, shape (rows, rows)."""
        return self._shared(rows) + np.diag(self.own_u[rows] ** 2)

    def weighing(self, rows: NDArray[np.intp]) -> Numbers:
        """Return the covariance that weighs sets: each drop's scatter is taken as the same in all.

        A set of few drops whose scatter happens to be small must not have all the weight.
        """
        if np.isinf(self.own_dof[rows]).any():  # declared, or known from long use
            return self.covariance(rows)
        dof = self.own_dof[rows]
        of_drop = float((dof * self.n_drops[rows] * self.own_u[rows] ** 2).sum() / dof.sum())
        return self._shared(rows) + np.diag(of_drop / self.n_drops[rows])

    def _shared(self, rows: NDArray[np.intp]) -> Numbers:
        parts = self.slopes[rows] * np.array([estimate.u for estimate in self.estimates])
        shared: Numbers = parts @ parts.T
        return shared


def calibrate_tubes(
    timings: Timings,
    bench: Bench,
    references: Sequence[str],
    *,
    date: dt.date | None = None,
    inputs: tuple[tuple[str, str], ...] = (),
) -> Calibration:
    """Find the constant of each ball and tube that was timed in certified liquids.

    Parameters
    ----------
    timings : Timings
        The drops as read.
    bench : Bench
        The bench sheet.
    references : sequence of str
        Names of the certified liquids.
    date : date, optional
        Of the calibration; the day of the last drop where the timings say when it started.
    inputs : tuple of (path, sha256)
        The input files.

    Returns
    -------
    Calibration
        One constant for each ball and tube.

    Raises
    ------
    InputError
        Where the inputs do not say what is needed.
    """
    made = calibration_sets(timings, bench, references, inputs)
    date = date or _last_day(timings, bench)
    found = {
        name: tuple(one for one in findings if one.code not in LEFT_OUT)
        for name, findings in zip(made.reduction.names, made.reduction.found, strict=True)
    }
    invalid = tuple(
        (one.name, found[one.name])
        for one in made.sets
        if any(finding.severity == "error" for finding in found[one.name])
    )
    spoiled = {name for name, _ in invalid}
    observed = _observe(made)
    constants = []
    for pair in dict.fromkeys((one.tube, one.ball) for one in made.sets):
        rows = [n for n, one in enumerate(made.sets) if (one.tube, one.ball) == pair]
        if not any(made.sets[n].name in spoiled for n in rows):
            constants.append(_join(made, observed, np.array(rows), found, date))
    return Calibration(
        bench=bench,
        constants=tuple(constants),
        invalid=invalid,
        references=tuple(dict.fromkeys(references)),
        date=date,
        inputs=inputs,
    )


def _last_day(timings: Timings, bench: Bench) -> dt.date | None:
    """Return the day the last drop started, else the report's day of issue; never the clock's."""
    found = [_DAY.match(str(text)) for text in timings.table["started"].astype(str).unique()]
    days = [dt.date.fromisoformat(day[0]) for day in found if day]
    issued = bench.report.get("issued")
    return max(days, default=dt.date.fromisoformat(issued) if issued else None)


def _observe(made: CalibrationSets) -> _Observed:
    """Take the reduction with a constant of 1 to logarithms of the constant."""
    sets = made.reduction.sets
    jacobian, place = sets.jacobian, {name: n for n, name in enumerate(made.reduction.names)}
    rows = np.array([place[one.name] for one in made.sets])
    unit_value = sets.scatter.mean[rows]
    matrix = jacobian.matrix.toarray()[rows]
    n_inputs = jacobian.n_inputs

    with np.errstate(invalid="ignore", divide="ignore"):
        slopes = -matrix[:, :n_inputs] / unit_value[:, None]
        own = (matrix[:, n_inputs:] * jacobian.u[n_inputs:]) / unit_value[:, None]
        certified = np.array([one.certified.value for one in made.sets])
        log_value = np.log(certified) - np.log(unit_value)
    own_u = np.sqrt((own**2).sum(axis=1))
    own_dof = effective_dof(
        u=own_u, contributions_fourth=(own**4 / jacobian.dof[n_inputs:]).sum(axis=1)
    )
    stand_ins = {UNIT_NAME, MODEL_INPUT, *(slope_name(one.name) for one in made.sets)}
    by_name = {
        estimate.name: (estimate, slopes[:, column])
        for column, estimate in enumerate(sets.inputs.estimates)
        if estimate.name not in stand_ins
    }
    for row, one in enumerate(made.sets):
        for part in one.certified.parts:
            _, column = by_name.setdefault(part.input.name, (part.input, np.zeros(len(rows))))
            column[row] += part.sensitivity / one.certified.value
    times, reynolds = _conditions(made, rows)
    return _Observed(
        log_value=log_value,
        slopes=np.column_stack([column for _, column in by_name.values()]),
        estimates=tuple(estimate for estimate, _ in by_name.values()),
        own_u=own_u,
        own_dof=own_dof,
        n_drops=sets.weights.n_drops[rows].astype(float),
        time=times,
        reynolds=reynolds,
    )


def _conditions(made: CalibrationSets, rows: NDArray[np.intp]) -> tuple[Numbers, Numbers]:
    """Mean time of each set, and its Reynolds number for a fall of 1 m, shape (sets,).

    The distance between the marks may not be known; the number is proportional to it.
    """
    sets = made.reduction.sets
    n = len(made.reduction.names)
    mean = np.bincount(sets.selection.run_set, weights=sets.selection.time, minlength=n)
    time = (mean / np.bincount(sets.selection.run_set, minlength=n))[rows]
    diameter = sets.columns.diameter[
        [int(np.flatnonzero(sets.selection.run_set == row)[0]) for row in rows]
    ]
    viscosity = np.array([one.certified.value for one in made.sets])
    return time, sets.liquid.density[rows] * diameter / (time * viscosity)


def _join(
    made: CalibrationSets,
    observed: _Observed,
    rows: NDArray[np.intp],
    found: dict[str, tuple[Finding, ...]],
    date: dt.date | None,
) -> TubeConstant:
    """Join the sets of one ball and tube."""
    sets = [made.sets[n] for n in rows]
    covariance = observed.covariance(rows)
    ones = np.ones((len(rows), 1))
    joint = fit(
        lambda parameters: Evaluated(ones @ parameters, ones),
        np.zeros(1),
        observed.log_value[rows],
        covariance,
        weighted_by=observed.weighing(rows),
    )
    weights = joint.sensitivities[0]
    value = math.exp(float(joint.parameters[0]))
    slopes = weights @ observed.slopes[rows]
    own = weights * observed.own_u[rows]
    own_u = math.sqrt(float((own**2).sum()))
    own_dof = float(
        effective_dof(u=own_u, contributions_fourth=(own**4 / observed.own_dof[rows]).sum())
    )
    inputs = tuple(
        StoredInput(
            dataclasses.replace(estimate, text=""),
            identity_of(made.bench, estimate.name),
            value * float(slope),
        )
        for estimate, slope in zip(observed.estimates, slopes, strict=True)
        if _felt(estimate, float(slope))
    )
    u = value * float(joint.u[0])
    fourth = sum((one.sensitivity * one.estimate.u) ** 4 / one.estimate.dof for one in inputs)
    fourth += (value * own_u) ** 4 / own_dof
    steady = constancy(
        observed.log_value[rows],
        covariance,
        observed.own_u[rows],
        observed.own_dof[rows],
        {"time": observed.time[rows], "reynolds": observed.reynolds[rows]},
    )
    findings = [finding for one in sets for finding in found[one.name]]
    findings += _expired(made, sets, date)
    findings += _varying(steady)
    return TubeConstant(
        stored=StoredConstant(
            name=f"{sets[0].tube} {sets[0].ball}",
            tube=sets[0].tube,
            ball=sets[0].ball,
            value=value,
            u=u,
            own_u=value * own_u,
            own_dof=own_dof,
            inputs=inputs,
            domain=_domain(made, rows),
            certified=_certified(made, sets),
        ),
        dof=float(effective_dof(u=u, contributions_fourth=fourth)),
        sets=tuple(
            _of_set(made, observed, n, covariance[k, k], weights[k], joint.residuals[k])
            for k, n in enumerate(rows.tolist())
        ),
        constancy=steady,
        findings=tuple(dict.fromkeys(findings)),
    )


def _felt(estimate: Estimate, slope: float) -> bool:
    """Whether an input moves the constant by more than rounding does."""
    size = max(abs(estimate.value), estimate.u) or 1.0  # a correction of nothing counts by itself
    return abs(slope) * size > ROUNDING


def _of_set(
    made: CalibrationSets,
    observed: _Observed,
    row: int,
    variance: float,
    weight: float,
    residual: float,
) -> CalibrationSet:
    one, reduction = made.sets[row], made.reduction
    value = math.exp(float(observed.log_value[row]))
    place = reduction.names.index(one.name)
    return CalibrationSet(
        name=one.name,
        reference=one.certified.reference,
        law=one.certified.law,
        temperature=one.certified.temperature,
        viscosity=one.certified.value,
        viscosity_u=one.certified.u,
        time=float(observed.time[row]),
        n_drops=int(reduction.sets.weights.n_drops[place]),
        value=value,
        u=value * math.sqrt(float(variance)),
        scatter_u=value * float(observed.own_u[row]),
        scatter_dof=float(observed.own_dof[row]),
        weight=float(weight),
        residual=float(residual),
    )


def _domain(made: CalibrationSets, rows: NDArray[np.intp]) -> Domain:
    """Between what the drops of the sets were."""
    sets, names = made.reduction.sets, made.reduction.names
    chosen = [made.sets[n] for n in rows]
    here = np.isin(sets.selection.run_set, [names.index(one.name) for one in chosen])
    temperatures, times = sets.columns.temperature[here], sets.selection.time[here]
    viscosities = [one.certified.value for one in chosen]
    tube, ball = made.bench.tubes[chosen[0].tube], made.bench.balls[chosen[0].ball]
    gravity = made.bench.site.gravity
    return Domain(
        temperature=(float(temperatures.min()), float(temperatures.max())),
        viscosity=(min(viscosities), max(viscosities)),
        time=(float(times.min()), float(times.max())),
        tilt=None if tube.tilt is None else tube.tilt.value,
        gravity=None if gravity is None else gravity.value,
        ball_identity=ball.identity.identity,
        tube_identity=tube.identity.identity,
    )


def _certified(made: CalibrationSets, sets: Sequence[SetOf]) -> tuple[Certified, ...]:
    names = dict.fromkeys(one.certified.reference for one in sets)
    identities = {name: made.bench.references[name].identity for name in names}
    return tuple(
        Certified(name, identity.certificate, identity.identity)
        for name, identity in identities.items()
    )


def _expired(made: CalibrationSets, sets: Sequence[SetOf], date: dt.date | None) -> list[Finding]:
    names = dict.fromkeys(one.certified.reference for one in sets)
    return [
        Finding(
            code="reference-expired",
            severity="warning",
            message=f"the certificate of reference {name} held until "
            f"{made.bench.references[name].expires}, and the drops were made on {date}",
            remedy="calibrate with a liquid whose certificate holds",
        )
        for name in names
        if date is not None and is_expired(made.bench.references[name], date)
    ]


def _varying(steady: Constancy) -> list[Finding]:
    """Say that the sets do not have one constant."""
    if steady.least_p_value >= VARIES:
        return []
    trends = [trend for trend in steady.trends if trend.p_value < VARIES]
    if trends:
        worst = min(trends, key=lambda trend: trend.p_value)
        what = "the fall time" if worst.along == "time" else "the Reynolds number"
        message = (
            f"the constant changes by {100 * worst.change:.2g} % as {what} goes from its least to "
            "its most, more than its uncertainties explain"
        )
        remedy = (
            "use the constant near each time it was found at alone, or a slower ball: inertia, a "
            "timing bias or a wrong certificate row makes it change"
        )
        effect, statistic, p = abs(worst.change), worst.slope / worst.u, worst.p_value
    else:
        message = "the sets have different constants, more than their uncertainties explain"
        remedy = (
            "look for the set that stands out, and its temperature, ball, cleanness and "
            "certificate row; repeat it"
        )
        effect, statistic, p = None, steady.chi_squared, steady.p_value
    return [
        Finding(
            code="constant-varies",
            severity="warning",
            message=message,
            remedy=remedy,
            statistic=statistic,
            p_value=p,
            effect=effect,
        )
    ]
