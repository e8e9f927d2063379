"""Arithmetic and laws of a ball falling in a tube; every name is loaded when it is first used.

Keyword-only arguments, SI units, floats or arrays that broadcast with drops along the last axis.
The factors check their range; single laws stand in the modules and check nothing.
"""

from __future__ import annotations

import importlib
from typing import Any

_NAMES_OF = {
    "drag": ("BoundDrag", "DragLaw"),
    "ends": ("end_excess", "end_factor_classical", "plane_factor"),
    "equivalent_time": ("equivalent_time",),
    "fall": ("fall_time", "terminal_speed"),
    "factors": ("inertia_factor", "tube_drag_factor", "wall_factor"),
    "gravity": (
        "STANDARD_GRAVITY",
        "normal_gravity",
        "normal_gravity_by_elevation",
        "normal_gravity_by_latitude",
    ),
    "laws": ("Law", "law", "laws_of"),
    "liquids": (
        "glycerol_water_density",
        "glycerol_water_viscosity",
        "sucrose_water_viscosity",
        "water_density",
        "water_viscosity",
        "water_viscosity_at_atmosphere",
    ),
    "run_in": (
        "creeping_start_speed_ratio",
        "relaxation_time",
        "run_in_distance",
        "run_in_guard_distance",
    ),
    "start_up": ("run_in_delay", "run_in_delay_and_slope"),
    "stokes": (
        "drag_coefficient",
        "reynolds_number",
        "shear_rate",
        "shear_stress",
        "stokes_viscosity",
        "stokes_viscosity_of_weight",
    ),
    "temperature_laws": (
        "andrade_slope",
        "andrade_viscosity",
        "vogel_slope",
        "vogel_viscosity",
        "walther_coefficients",
        "walther_kinematic_viscosity",
    ),
    "thermal": (
        "THERMAL_DIFFUSIVITY",
        "equilibration_time",
        "expanded_length",
        "expanded_solid_density",
        "liquid_density",
    ),
    "tube_constants": ("constant_viscosity",),
    "weight": (
        "effective_weight",
        "effective_weight_of_mass",
        "mass_from_weighing",
        "sphere_volume",
    ),
}
_MODULE_OF = {name: module for module, names in _NAMES_OF.items() for name in names}

__all__ = sorted(_MODULE_OF)


def __getattr__(name: str) -> Any:
    if name not in _MODULE_OF:
        raise AttributeError(f"module {__name__!r} has no attribute {name!r}")
    value = getattr(importlib.import_module(f"{__name__}.{_MODULE_OF[name]}"), name)
    globals()[name] = value
    return value


def __dir__() -> list[str]:
    return list(__all__)
