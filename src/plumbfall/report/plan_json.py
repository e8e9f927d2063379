"""A plan as a document: SI units, full digits (schema ``plumbfall/plan/1``)."""

from __future__ import annotations

from typing import Any

from plumbfall._version import __version__
from plumbfall.planning.combination import Combination
from plumbfall.planning.plan import Plan
from plumbfall.planning.windows import Window
from plumbfall.results import Finding

__all__ = ["SCHEMA", "plan_document"]

SCHEMA = "plumbfall/plan/1"


def plan_document(plan: Plan) -> dict[str, Any]:
    """Return the document; ``None`` where there is no number."""
    wanted, conditions = plan.wanted, plan.conditions
    liquids = list(plan.bench.liquids)
    return {
        "schema": SCHEMA,
        "software": {"version": __version__},
        "inputs": [{"path": plan.bench.path, "sha256": plan.bench.sha256}]
        if plan.bench.path
        else [],
        "liquid": liquids[conditions.liquid],
        "temperature_K": conditions.temperature,
        "viscosities_Pa_s": list(wanted.viscosities),
        "target": wanted.target,
        "coverage_probability": wanted.coverage,
        "most_drops": wanted.most_drops,
        "longest_s": wanted.longest,
        "suitable": plan.suitable,
        "combinations": [_combination(one) for one in plan.combinations],
        "windows": [_window(one) for one in plan.windows],
        "grade": plan.grade or None,
        "ideal": [
            {
                "tube": one.tube,
                "diameter_m": one.diameter,
                "density_kg_m3": one.density,
                "relative_expanded_uncertainty": one.relative_expanded_uncertainty,
                "suitable": one.clean,
            }
            for one in plan.ideal
        ],
        "findings": [_finding(one) for one in plan.findings],
    }


def _combination(one: Combination) -> dict[str, Any]:
    return {
        "tube": one.tube,
        "ball": one.ball,
        "viscosity_Pa_s": one.viscosity,
        "fall_time_s": one.fall_time,
        "intervals_s": list(one.intervals),
        "speed_m_s": one.speed,
        "reynolds": one.reynolds,
        "diameter_ratio": one.diameter_ratio,
        "shear_rate_1_s": one.shear_rate,
        "run_in_m": one.run_in,
        "run_in_room_m": one.run_in_room,
        "surface_clearance_m": one.surface_clearance,
        "bottom_clearance_m": one.bottom_clearance,
        "equilibration_time_s": one.equilibration_time,
        "scatter": one.scatter,
        "relative_expanded_uncertainty": one.relative_expanded_uncertainty,
        "drops": one.drops,
        "uncertainty_floor": one.floor,
        "dominant_input": one.dominant_input,
        "budget": [
            {"input": part.input, "contribution": part.contribution, "share": part.share}
            for part in one.budget
        ],
        "drops_needed": one.drops_needed,
        "suitable": one.suitable,
        "reasons": [str(reason) for reason in one.reasons],
        "cautions": [str(caution) for caution in one.cautions],
        "better": [
            {
                "input": better.input,
                "unit": better.unit,
                "standard_uncertainty": better.present,
                "needed": better.needed,
            }
            for better in one.improvements
        ],
    }


def _window(one: Window) -> dict[str, Any]:
    return {
        "tube": one.tube,
        "ball": one.ball,
        "low_Pa_s": one.low,
        "high_Pa_s": one.high,
        "low_limit": None if one.low_limit is None else str(one.low_limit),
        "high_limit": None if one.high_limit is None else str(one.high_limit),
    }


def _finding(one: Finding) -> dict[str, Any]:
    return {
        "code": one.code,
        "severity": one.severity,
        "message": one.message,
        "remedy": one.remedy,
    }
