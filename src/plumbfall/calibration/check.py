"""A run set held against a certified liquid: bias, scores and a decision with its reason."""

from __future__ import annotations

import datetime as dt
import math
from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np

from plumbfall.bench.keys import key_path
from plumbfall.bench.records import Bench, Reference
from plumbfall.calibration.certified import CertifiedValue, certified_value, is_expired
from plumbfall.calibration.decisions import (
    ACCEPT,
    REJECT,
    chance,
    conformance_probability,
    is_capable,
)
from plumbfall.calibration.explanations import explanations
from plumbfall.calibration.moments import day_of, who_and_when
from plumbfall.calibration.scores import e_n, zeta_score
from plumbfall.errors import InputError, Problem, nearest_name
from plumbfall.findings.independence import reference_not_independent
from plumbfall.reduction import Reduction
from plumbfall.results import Finding, Measured, Quantity, RunSetResult
from plumbfall.uncertainty.coverage import coverage_factor, effective_dof

__all__ = ["FAILED", "PASSED", "UNDECIDED", "CheckResult", "check_run_sets"]

PASSED, FAILED, UNDECIDED = "passed", "failed", "undecided"


@dataclass(frozen=True, slots=True, kw_only=True)
class CheckResult:
    """A run set against a certified value, in SI units.

    ``bias`` is measured over certified, less 1, with what both share taken into account; its
    degrees of freedom are ``bias_dof``. ``e_n`` and ``zeta`` are ``None`` where the two are not
    independent. ``law`` says how the certificate's points were joined; ``when`` is the set's last
    ``started``, else the date given; ``invalid`` says that the data are. ``explanations`` say what
    would make the bias of a failed check. ``findings`` are those of the data, and that measured and
    certified value are not independent.
    """

    run_set: str
    reference: str
    temperature: float
    measured: Measured | None
    certified: Measured | None
    law: str
    bias: Quantity | None
    bias_dof: float
    e_n: float | None
    zeta: float | None
    tolerance: float | None
    conformance_probability: float | None
    decision: str
    reason: str
    when: str
    operator: str
    invalid: bool = False
    explanations: tuple[str, ...] = ()
    findings: tuple[Finding, ...] = ()


@dataclass(frozen=True, slots=True)
class _Bias:
    value: float
    u: float
    dof: float


def check_run_sets(
    reduction: Reduction,
    reference: str,
    *,
    tolerance: float | None = None,
    date: dt.date | None = None,
) -> tuple[CheckResult, ...]:
    """Check every run set of a certified liquid.

    Parameters
    ----------
    reduction : Reduction
        The reduced drops; sets of other liquids than the reference's are passed over.
    reference : str
        Name of the ``[reference.NAME]`` entry.
    tolerance : float, optional
        Largest bias allowed, as a ratio.
    date : date, optional
        When the drops were made, where they do not say.

    Returns
    -------
    tuple of CheckResult
        One a run set.

    Raises
    ------
    InputError
        Where there is no such reference, no run set of its liquid, or no certified value at a
        set's temperature.

    References
    ----------
    ISO 13528 (E_n, zeta); JCGM 106:2012 (conformance probability).
    """
    entry = _reference(reduction.bench, reference)
    results = [reduction.run_set(name) for name in reduction.names]
    mine = [one for one in results if entry.liquid is None or one.liquid == entry.liquid]
    if not mine:
        liquids = ", ".join(dict.fromkeys(one.liquid for one in results))
        raise InputError(
            f"is of the liquid '{entry.liquid}', and the drops are of {liquids}",
            path=reduction.bench.path,
            key=key_path("reference", reference, "liquid"),
            remedy="name the reference of the liquid that was measured",
        )
    told = who_and_when(reduction.timings)
    problems: list[Problem] = []
    found = []
    for result in mine:
        try:
            found.append(_checked(reduction, entry, result, tolerance, date, told))
        except InputError as error:
            problems += error.problems
    if problems:
        raise InputError(problems)
    return tuple(found)


def _reference(bench: Bench, name: str) -> Reference:
    if name in bench.references:
        return bench.references[name]
    near = nearest_name(name, bench.references)
    known = ", ".join(bench.references)
    if near is not None:
        remedy = f"did you mean '{near}'?"
    elif known:
        remedy = f"the bench sheet has {known}"
    else:
        remedy = f"add [reference.{name}] with the certificate's values to the bench sheet"
    raise InputError(
        f"there is no reference liquid '{name}'", path=bench.path, key="reference", remedy=remedy
    )


def _checked(
    reduction: Reduction,
    entry: Reference,
    result: RunSetResult,
    tolerance: float | None,
    date: dt.date | None,
    told_by: Mapping[str, tuple[str, str]],
) -> CheckResult:
    bench = reduction.bench
    started, by = told_by.get(result.name, ("", ""))
    when = started or (date.isoformat() if date else "")
    invalid = result.status == "invalid"
    known = None
    if result.viscosity is not None and result.temperature is not None:
        known = certified_value(
            entry,
            temperature=result.temperature.value,
            liquid=bench.liquids.get(entry.liquid or result.liquid),
        )
    measured, certified, bias = result.viscosity, None, None
    if known is not None and measured is not None and result.temperature is not None:
        certified = _with_bounds(known, _loose(reduction, result, known), reduction.coverage)
        bias = _bias(reduction, result.name, measured, known, certified)
    shared = _shared(reduction, entry, result.name)
    score = zeta = probability = None
    if bias is not None and measured is not None and certified is not None:
        if shared is None:
            pair = {"value": measured.value, "reference_value": certified.value}
            score = float(
                e_n(**pair, expanded=measured.expanded, reference_expanded=certified.expanded)
            )
            zeta = float(zeta_score(**pair, u=measured.u, reference_u=certified.u))
        if tolerance is not None:
            probability = float(
                conformance_probability(
                    value=bias.value, u=bias.u, low=-tolerance, high=tolerance, dof=bias.dof
                )
            )
    day = day_of(when)
    if invalid or bias is None:
        codes = [one.code for one in result.findings if one.severity == "error"]
        told = f"the run set is invalid ({', '.join(dict.fromkeys(codes))})"
        decision, reason = UNDECIDED, told
    elif shared is not None:
        decision, reason = UNDECIDED, f"{shared.message}; {shared.remedy}"
    elif day is not None and is_expired(entry, day):
        told = f"the certificate of {entry.name} expired on {entry.expires}, before {day}"
        decision, reason = UNDECIDED, told
    elif tolerance is not None and probability is not None:
        decision, reason = _by_tolerance(bias, tolerance, probability)
    else:
        decision, reason = _by_score(math.nan if score is None else score)
    if entry.expires is not None and day is None:
        reason += (
            f"; whether the certificate had expired ({entry.expires}) is not known, as the drops "
            "have no date"
        )
    return CheckResult(
        run_set=result.name,
        reference=entry.name,
        temperature=math.nan if result.temperature is None else result.temperature.value,
        measured=measured,
        certified=certified,
        law="" if known is None else known.law,
        bias=None if bias is None else Quantity(bias.value, "1", bias.u),
        bias_dof=math.nan if bias is None else bias.dof,
        e_n=score,
        zeta=zeta,
        tolerance=tolerance,
        conformance_probability=probability,
        decision=decision,
        reason=reason,
        when=when,
        operator=by,
        invalid=invalid,
        explanations=_explanations(result, bias, known) if decision == FAILED else (),
        findings=result.findings if shared is None else (*result.findings, shared),
    )


def _loose(reduction: Reduction, result: RunSetResult, known: CertifiedValue) -> float:
    """Return what the temperature adds to a certified value, in Pa.s.

    Nothing where the liquid's temperature slope is given: the measured value then carries it.
    """
    sets = reduction.sets
    place = reduction.names.index(result.name)
    cell = int(sets.liquid.cell[place])
    if result.temperature is None or bool(sets.inputs.slope_known[cell]):
        return 0.0
    return 0.0 if math.isnan(known.slope) else known.slope * result.temperature.u


def _with_bounds(known: CertifiedValue, loose: float, coverage: float) -> Measured:
    u = math.hypot(known.u, loose)
    fourth = (known.u**4 / known.dof) if known.u > 0 else 0.0
    dof = float(effective_dof(u=u, contributions_fourth=fourth))
    factor = float(coverage_factor(dof=dof, probability=coverage))
    return Measured(
        value=known.value,
        unit="Pa.s",
        u=u,
        effective_dof=dof,
        coverage_probability=coverage,
        coverage_factor=factor,
        expanded=factor * u,
        low=known.value - factor * u,
        high=known.value + factor * u,
    )


def _bias(
    reduction: Reduction, name: str, measured: Measured, known: CertifiedValue, certified: Measured
) -> _Bias:
    """Propagate both values to the bias; an input of the same name acts on both."""
    sets = reduction.sets
    ratio = measured.value / known.value
    columns, contributions = sets.outputs.propagation.row(reduction.names.index(name))
    inputs = {
        (entry.name, entry.value, entry.u): float(contribution)
        for column, contribution in zip(columns.tolist(), contributions.tolist(), strict=True)
        if column < sets.jacobian.n_inputs
        for entry in (sets.inputs.estimates[column],)
    }
    both = sum(
        inputs.get((part.input.name, part.input.value, part.input.u), 0.0) * part.contribution
        for part in known.parts
    )
    own, theirs = measured.u / known.value, ratio * certified.u / known.value
    variance = own**2 + theirs**2 - 2 * ratio * both / known.value**2
    u = math.sqrt(max(variance, 0.0))
    fourth = own**4 / _dof(measured) + theirs**4 / _dof(certified)
    return _Bias(ratio - 1.0, u, float(effective_dof(u=u, contributions_fourth=fourth)))


def _dof(measured: Measured) -> float:
    return math.inf if measured.effective_dof is None else measured.effective_dof


def _shared(reduction: Reduction, entry: Reference, name: str) -> Finding | None:
    """Find what both the tube constants in use and the certified value rest on."""
    sets = reduction.sets
    cells = np.flatnonzero(sets.selection.cells.run_set == reduction.names.index(name))
    used = [sets.inputs.constants[place] for place in sets.inputs.constants_of(cells)]
    return reference_not_independent(used, entry)


def _explanations(
    result: RunSetResult, bias: _Bias | None, known: CertifiedValue | None
) -> tuple[str, ...]:
    """Say what would make the bias of a failed check."""
    if bias is None or known is None or bias.value <= -1:
        return ()
    slope = None if math.isnan(known.slope) else known.slope / known.value
    return explanations(ratio=1 + bias.value, u=bias.u, density=result.liquid_density, slope=slope)


def _by_tolerance(bias: _Bias, tolerance: float, probability: float) -> tuple[str, str]:
    told = (
        f"the bias of {_percent(bias.value)} lies within {_percent(tolerance, False)} either way "
        f"with a probability of {chance(probability)}"
    )
    if probability >= ACCEPT:
        return PASSED, f"{told}, at least {100 * ACCEPT:g} %"
    if probability <= REJECT:
        return FAILED, f"{told}, at most {100 * REJECT:g} %"
    told += f", between {100 * REJECT:g} and {100 * ACCEPT:g} %"
    if not is_capable(low=-tolerance, high=tolerance, u=bias.u, dof=bias.dof):
        told += (
            f"; no bias could pass, as its standard uncertainty of {_percent(bias.u, False)} is "
            "too large for the tolerance: the measurement is not capable"
        )
    return UNDECIDED, told


def _by_score(score: float) -> tuple[str, str]:
    if abs(score) <= 1:
        return PASSED, f"E_n of {score:.2f} is within 1"
    return FAILED, f"E_n of {score:.2f} is beyond 1"


def _percent(ratio: float, signed: bool = True) -> str:
    return f"{100 * ratio:{'+' if signed else ''}.3g} %"
