"""The report as a document: the names of the schema ``plumbfall/report/1``, SI units, no NaN."""

from __future__ import annotations

import json
import math
from collections.abc import Sequence
from typing import TYPE_CHECKING, Any

from plumbfall._version import __version__
from plumbfall.report.json_values import finite_or_none as _number
from plumbfall.results import (
    BallResult,
    BudgetLine,
    Conformity,
    ConstantUsed,
    DropResult,
    Finding,
    Histogram,
    Improvement,
    Measured,
    MonteCarloResult,
    Quantity,
    RunSetResult,
    TemperatureFitResult,
)
from plumbfall.uncertainty.coverage import joint_coverage_factor

if TYPE_CHECKING:
    from plumbfall.report.report import Report
    from plumbfall.run_sets.joint import Joint

__all__ = [
    "SCHEMA",
    "finding_document",
    "json_text",
    "measured_document",
    "report_document",
]

SCHEMA = "plumbfall/report/1"

LARGEST_MATRIX = 120
"""Results whose covariance is written out; of more of them the contributions alone give it."""


def report_document(report: Report) -> dict[str, Any]:
    """Return the whole report as plain lists, dicts, strings and finite numbers.

    What has no value is ``None``; so is an infinite number of degrees of freedom.
    """
    return {
        "schema": SCHEMA,
        "software": {"version": __version__},
        "inputs": [{"path": path, "sha256": sha256} for path, sha256 in report.inputs],
        "seed": int(report.seed),
        "date": None if report.date is None else report.date.isoformat(),
        "rows": {name: int(report.rows[name]) for name in ("read", "used", "void", "excluded")},
        "run_sets": [_run_set(view.result) for view in report],
        "correlation": {
            "sets": list(report.names),
            "matrix": [[_number(cell) for cell in row] for row in report.correlation().tolist()],
        },
        "covariance": _covariance(report.reduced.joint, report.coverage),
        "temperature_fit": _temperature_fit(report.temperature_fits),
        "findings": [finding_document(finding) for finding in report.findings],
    }


def json_text(document: dict[str, Any]) -> str:
    """Return a document as indented JSON in ASCII, which every console and reader takes."""
    return json.dumps(document, indent=2, allow_nan=False) + "\n"


def _run_set(result: RunSetResult) -> dict[str, Any]:
    return {
        "name": result.name,
        "status": result.status,
        "summary": result.summary,
        "n_drops": int(result.n_drops),
        "n_balls": int(result.n_balls),
        "n_read": int(result.n_read),
        "tube": result.tube,
        "liquid": result.liquid,
        "temperature": _quantity(result.temperature),
        "reference_temperature_K": _number(result.reference_temperature),
        "viscosity": measured_document(result.viscosity),
        "viscosity_at_reference": measured_document(result.viscosity_at_reference),
        "kinematic_viscosity": measured_document(result.kinematic_viscosity),
        "stokes_viscosity": _quantity(result.stokes_viscosity),
        "conformity": _conformity(result.conformity),
        "liquid_density_kg_m3": _number(result.liquid_density),
        "reynolds": _number(result.reynolds),
        "diameter_ratio": _number(result.diameter_ratio),
        "shear_rate_1_s": _number(result.shear_rate),
        "shear_stress_Pa": _number(result.shear_stress),
        "constants": [_constant(constant) for constant in result.constants],
        "corrections": [
            {
                "name": correction.name,
                "factor": _number(correction.factor),
                "method": correction.method,
                "source": correction.source,
            }
            for correction in result.corrections
        ],
        "budget": [_budget_line(line) for line in result.budget],
        "halving": [_improvement(one) for one in result.improvements],
        "linear": _linear(result),
        "monte_carlo": _monte_carlo(result.monte_carlo),
        "balls": [_ball(ball) for ball in result.balls],
        "drops": [_drop(drop) for drop in result.drops],
        "findings": [finding_document(finding) for finding in result.findings],
        "reach": [
            {"code": one.code, "what": one.what, "detectable": _number(one.detectable)}
            for one in result.reach
        ],
    }


def measured_document(measured: Measured | None) -> dict[str, Any] | None:
    """Return a measured value as a dict of the report's schema."""
    if measured is None:
        return None
    return {
        "value": _number(measured.value),
        "unit": measured.unit,
        "standard_uncertainty": _number(measured.u),
        "effective_dof": _number(measured.effective_dof),
        "coverage_probability": _number(measured.coverage_probability),
        "coverage_factor": _number(measured.coverage_factor),
        "expanded_uncertainty": _number(measured.expanded),
        "low": _number(measured.low),
        "high": _number(measured.high),
        "method": measured.method,
    }


def _constant(used: ConstantUsed) -> dict[str, Any]:
    return {
        "tube": used.tube,
        "ball": used.ball,
        "constant": _quantity(used.constant),
        "file": used.file,
        "certificates": list(used.certificates),
    }


def _conformity(judged: Conformity | None) -> dict[str, Any] | None:
    if judged is None:
        return None
    return {
        "probability": _number(judged.probability),
        "rule": judged.rule,
        "decision": judged.decision,
        "limits": judged.limits,
    }


def _monte_carlo(drawn: MonteCarloResult | None) -> dict[str, Any] | None:
    if drawn is None:
        return None
    return {
        "low": _number(drawn.low),
        "high": _number(drawn.high),
        "standard_uncertainty": _number(drawn.standard_uncertainty),
        "draws": int(drawn.draws),
        "validated_linear": bool(drawn.validated_linear),
        "histogram": _histogram(drawn.histogram),
    }


def _histogram(counted: Histogram | None) -> dict[str, Any] | None:
    if counted is None:
        return None
    return {
        "low": _number(counted.low),
        "high": _number(counted.high),
        "counts": list(counted.counts),
        "below": counted.below,
        "above": counted.above,
    }


def _quantity(quantity: Quantity | None) -> dict[str, Any] | None:
    if quantity is None or not math.isfinite(quantity.value):
        return None
    return {
        "value": _number(quantity.value),
        "unit": quantity.unit,
        "standard_uncertainty": _number(quantity.u),
    }


def _linear(result: RunSetResult) -> dict[str, Any] | None:
    linear, terms = measured_document(result.linear), result.second_order
    if linear is None:
        return None
    told = (
        None
        if terms is None
        else {
            "inputs": list(terms.inputs),
            "change_of_u": _number(terms.change_of_u),
            "shift": _number(terms.shift),
        }
    )
    return {**linear, "second_order": told}


def _budget_line(line: BudgetLine) -> dict[str, Any]:
    return {
        "input": line.input,
        "value": _number(line.value),
        "unit": line.unit,
        "standard_uncertainty": _number(line.u),
        "distribution": line.distribution,
        "dof": _number(line.dof),
        "sensitivity": _number(line.sensitivity),
        "contribution": _number(line.contribution),
        "share": _number(line.share),
        "scope": line.scope,
    }


def _covariance(joint: Joint, coverage: float) -> dict[str, Any]:
    """Say what all results share; the whole matrix only where it is not huge."""
    n = len(joint.labels)
    return {
        "labels": [
            {"run_set": label.run_set, "quantity": label.quantity, "unit": label.unit}
            for label in joint.labels
        ],
        "pair_coverage_factor": joint_coverage_factor(outputs=2, probability=coverage),
        "matrix": joint.covariance.tolist() if n <= LARGEST_MATRIX else None,
        "contributions": [
            {joint.inputs[column]: number for column, number in joint.row(place).items()}
            for place in range(n)
        ],
    }


def _temperature_fit(fits: Sequence[TemperatureFitResult]) -> dict[str, Any] | None:
    if not fits:
        return None
    return {
        "law": fits[0].law,
        "equation": fits[0].equation,
        "source": fits[0].source,
        "liquids": [
            {
                "liquid": fit.liquid,
                "parameters": [
                    {"name": name, **(_quantity(parameter) or {})}
                    for name, parameter in fit.parameters
                ],
                "covariance": [[_number(cell) for cell in row] for row in fit.covariance],
                "chi_squared": _number(fit.chi_squared),
                "dof": int(fit.dof),
                "p_value": _number(fit.p_value),
                "reference_temperature_K": _number(fit.reference_temperature),
                "viscosity_at_reference": measured_document(fit.viscosity_at_reference),
                "run_sets": [
                    {
                        "name": name,
                        "temperature_K": _number(temperature),
                        "residual": _number(residual),
                        "slope_1_K": _number(slope),
                    }
                    for name, temperature, residual, slope in zip(
                        fit.sets, fit.temperatures, fit.residuals, fit.slopes, strict=True
                    )
                ],
            }
            for fit in fits
        ],
    }


def _improvement(one: Improvement) -> dict[str, Any]:
    return {
        "input": one.input,
        "what": one.what,
        "unit": one.unit,
        "now": _number(one.now),
        "needed": _number(one.needed),
        "remaining": _number(one.remaining),
    }


def _ball(ball: BallResult) -> dict[str, Any]:
    return {
        "ball": ball.ball,
        "n_drops": int(ball.n_drops),
        "viscosity": _quantity(ball.viscosity),
        "reynolds": _number(ball.reynolds),
        "diameter_ratio": _number(ball.diameter_ratio),
        "shear_rate_1_s": _number(ball.shear_rate),
        "shear_stress_Pa": _number(ball.shear_stress),
    }


def _drop(drop: DropResult) -> dict[str, Any]:
    return {
        "file": drop.file,
        "line": int(drop.line),
        "drop": int(drop.drop),
        "ball": drop.ball,
        "time_s": _number(drop.time),
        "temperature_K": _number(drop.temperature),
        "viscosity_Pa_s": _number(drop.viscosity),
        "viscosity_at_set_Pa_s": _number(drop.viscosity_at_set),
        "stokes_viscosity_Pa_s": _number(drop.stokes_viscosity),
        "reynolds": _number(drop.reynolds),
        "fall_speed_m_s": _number(drop.fall_speed),
        "wall": _number(drop.wall),
        "inertia": _number(drop.inertia),
        "end": _number(drop.end),
        "residual": _number(drop.residual),
        "used": bool(drop.used),
        "status": drop.status,
        "note": drop.note,
        "findings": list(drop.findings),
    }


def finding_document(finding: Finding) -> dict[str, Any]:
    """Return a finding as a dict of the report's schema."""
    return {
        "code": finding.code,
        "severity": finding.severity,
        "drops": [int(drop) for drop in finding.drops],
        "message": finding.message,
        "statistic": _number(finding.statistic),
        "p_value": _number(finding.p_value),
        "effect": _number(finding.effect),
        "detectable": _number(finding.detectable),
        "remedy": finding.remedy,
    }
