"""A run set held against a certified liquid: bias, scores and a decision with its reason."""

from __future__ import annotations

import datetime as dt
import math
from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np

from plumbfall.bench.keys import key_path
from plumbfall.bench.records import Bench, Reference
from plumbfall.calibration.bias import Bias, bias_of, certified_at
from plumbfall.calibration.certified import CertifiedValue, certified_value, is_expired
from plumbfall.calibration.decisions import conformance_probability
from plumbfall.calibration.explanations import explanations
from plumbfall.calibration.moments import day_of, who_and_when
from plumbfall.calibration.scores import e_n, zeta_score
from plumbfall.calibration.verdict import FAILED, UNDECIDED, by_score, by_tolerance
from plumbfall.errors import InputError, Problem, nearest_name
from plumbfall.findings.independence import reference_not_independent
from plumbfall.reduction.reduced import Reduction
from plumbfall.results import Finding, Measured, Quantity, RunSetResult

__all__ = ["CheckResult", "check_run_sets"]


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
        certified = certified_at(reduction, result, known)
        bias = bias_of(reduction, result.name, measured, known, certified)
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
        decision, reason = by_tolerance(bias, tolerance, probability)
    else:
        decision, reason = by_score(math.nan if score is None else score)
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


def _shared(reduction: Reduction, entry: Reference, name: str) -> Finding | None:
    """Find what both the tube constants in use and the certified value rest on."""
    sets = reduction.sets
    cells = np.flatnonzero(sets.selection.cells.run_set == reduction.names.index(name))
    used = [sets.inputs.constants[place] for place in sets.inputs.constants_of(cells)]
    return reference_not_independent(used, entry)


def _explanations(
    result: RunSetResult, bias: Bias | None, known: CertifiedValue | None
) -> tuple[str, ...]:
    """Say what would make the bias of a failed check."""
    if bias is None or known is None or bias.value <= -1:
        return ()
    slope = None if math.isnan(known.slope) else known.slope / known.value
    return explanations(ratio=1 + bias.value, u=bias.u, density=result.liquid_density, slope=slope)
