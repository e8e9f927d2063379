"""Constants as the document of the schema ``plumbfall/constants/1``, which is the file too."""

from __future__ import annotations

import math
from typing import Any

from plumbfall._version import __version__
from plumbfall.bench.constant_file import CONSTANTS_SCHEMA, CONTENT_HASH, content_hash
from plumbfall.bench.stored_constants import Domain, StoredInput
from plumbfall.calibration.constancy import Constancy
from plumbfall.calibration.constant import Calibration, CalibrationSet, TubeConstant
from plumbfall.report.json_report import finding_document

__all__ = ["constants_document"]


def constants_document(calibration: Calibration) -> dict[str, Any]:
    """Return the constants as plain lists, dicts, strings and finite numbers, in SI units."""
    date = None if calibration.date is None else calibration.date.isoformat()
    document: dict[str, Any] = {
        "schema": CONSTANTS_SCHEMA,
        "software": {"version": __version__},
        "date": date,
        "constants": [_constant(one, date) for one in calibration.constants],
        "invalid": [
            {"run_set": name, "findings": [finding_document(one) for one in findings]}
            for name, findings in calibration.invalid
        ],
        "inputs": [{"path": path, "sha256": sha256} for path, sha256 in calibration.inputs],
    }
    document[CONTENT_HASH] = content_hash(document)
    return document


def _constant(constant: TubeConstant, date: str | None) -> dict[str, Any]:
    stored = constant.stored
    return {
        "name": stored.name,
        "tube": stored.tube,
        "ball": stored.ball,
        "value": stored.value,
        "unit": "m2/s2",
        "standard_uncertainty": stored.u,
        "dof": _finite(constant.dof),
        "sensitivities": {one.estimate.name: _input(one) for one in stored.inputs},
        "scatter": {"standard_uncertainty": stored.own_u, "dof": _finite(stored.own_dof)},
        "domain": _domain(stored.domain, stored.tube, stored.ball),
        "references": [one.reference for one in stored.certified],
        "certificates": [
            {
                "reference": one.reference,
                "certificate": one.certificate,
                "identity": one.identity,
            }
            for one in stored.certified
        ],
        "date": date,
        "sets": [_set(one) for one in constant.sets],
        "constancy": _constancy(constant.constancy),
        "findings": [finding_document(one) for one in constant.findings],
    }


def _input(one: StoredInput) -> dict[str, Any]:
    return {
        "value": one.estimate.value,
        "u": one.estimate.u,
        "sensitivity": one.sensitivity,
        "identity": one.identity,
        "unit": one.estimate.unit,
        "distribution": one.estimate.distribution,
        "dof": _finite(one.estimate.dof),
    }


def _domain(domain: Domain, tube: str, ball: str) -> dict[str, Any]:
    def span(given: tuple[float, float] | None) -> list[float]:
        return [] if given is None else list(given)

    return {
        "temperature_K": span(domain.temperature),
        "viscosity_Pa_s": span(domain.viscosity),
        "time_s": span(domain.time),
        "tube": tube,
        "tube_identity": domain.tube_identity,
        "ball": ball,
        "ball_identity": domain.ball_identity,
        "tilt_rad": domain.tilt,
        "gravity_m_s2": domain.gravity,
    }


def _set(one: CalibrationSet) -> dict[str, Any]:
    return {
        "name": one.name,
        "reference": one.reference,
        "law": one.law,
        "temperature_K": one.temperature,
        "viscosity_Pa_s": one.viscosity,
        "viscosity_standard_uncertainty": one.viscosity_u,
        "time_s": one.time,
        "n_drops": one.n_drops,
        "value": one.value,
        "standard_uncertainty": one.u,
        "scatter": one.scatter_u,
        "scatter_dof": _finite(one.scatter_dof),
        "weight": one.weight,
        "residual": one.residual,
    }


def _constancy(steady: Constancy) -> dict[str, Any]:
    return {
        "chi_squared": _finite(steady.chi_squared),
        "dof": steady.dof,
        "p_value": _finite(steady.p_value),
        "trends": [
            {
                "along": trend.along,
                "slope": trend.slope,
                "standard_uncertainty": trend.u,
                "dof": _finite(trend.dof),
                "p_value": _finite(trend.p_value),
                "change": trend.change,
                "detectable": trend.detectable,
            }
            for trend in steady.trends
        ],
    }


def _finite(number: float) -> float | None:
    """Return a finite number, and ``None`` for unlimited degrees of freedom and for none."""
    return number if math.isfinite(number) else None
