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

from plumbfall.bench.identities import identity_of
from plumbfall.bench.records import Bench
from plumbfall.bench.stored_constants import Certified, Domain, StoredConstant, StoredInput
from plumbfall.calibration.calibration_sets import CalibrationSets, SetOf, calibration_sets
from plumbfall.calibration.constancy import Constancy, constancy
from plumbfall.calibration.constant_findings import expired, varying
from plumbfall.calibration.set_constants import Observed, observe
from plumbfall.estimate import Estimate
from plumbfall.results import Finding
from plumbfall.timings.records import Timings
from plumbfall.uncertainty.coverage import effective_dof
from plumbfall.uncertainty.least_squares import Evaluated, fit

__all__ = ["Calibration", "CalibrationSet", "TubeConstant", "calibrate_tubes"]

Numbers = NDArray[np.float64]

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
    observed = observe(made)
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


def _join(
    made: CalibrationSets,
    observed: Observed,
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
    findings += expired(made.bench, sets, date)
    findings += varying(steady)
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
    observed: Observed,
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
