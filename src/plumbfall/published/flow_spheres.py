"""Balls without a tube: near a plane, at speed, and grains settling by Stokes' law."""

from __future__ import annotations

import math
from functools import partial

from plumbfall.physics.ends import plane_factor
from plumbfall.physics.factors import inertia_factor
from plumbfall.physics.liquids import water_density
from plumbfall.physics.stokes import (
    drag_coefficient,
    reynolds_number,
    shear_rate,
    shear_stress,
    stokes_viscosity,
)
from plumbfall.published.figure import DEFINITION, FROM_MEMORY, Figure, called, figures

__all__ = ["FIGURES"]

_PLANE = (
    *figures(
        "flow",
        FROM_MEMORY,
        "Brenner 1961, Chem. Eng. Sci. 16, 242: table of the drag factor near a solid plane, by "
        "alpha = arcosh(distance/radius)",
        [
            (
                f"plane.brenner.{alpha}",
                printed,
                called(plane_factor, gap_ratio=math.cosh(alpha)),
            )
            for alpha, printed in (
                (0.5, "9.2518"),
                (1.0, "3.0361"),
                (1.5, "1.8375"),
                (2.0, "1.4129"),
                (2.5, "1.2220"),
                (3.0, "1.1252"),
            )
        ],
    ),
    *figures(
        "flow",
        FROM_MEMORY,
        "far from a plane by hand, e = radius/distance = 0.01: solid 1/(1 - 9/8 e + 1/2 e^3), free "
        "1/(1 - 3/4 e) (Lorentz 1907, Brenner 1961)",
        [
            ("plane.far.solid", "1.011377", called(plane_factor, gap_ratio=100.0)),
            ("plane.far.free", "1.007557", called(plane_factor, gap_ratio=100.0, surface="free")),
        ],
    ),
    *figures(
        "flow",
        FROM_MEMORY,
        "Cox and Brenner 1967, Chem. Eng. Sci. 22, 1753: drag factor at a gap e = 1e-5 of the "
        "radius by hand, 1/e - (1/5) ln e + 0.97128",
        [("plane.near", "100003.2739", called(plane_factor, gap_ratio=1.00001))],
    ),
)


def _standard_drag(reynolds: float, method: str) -> float:
    factor = inertia_factor(reynolds=reynolds, method=method)
    return float(drag_coefficient(inertia_factor=factor, reynolds=reynolds))


def _curve(method: str, rows: tuple[tuple[float, str], ...]) -> tuple[Figure, ...]:
    return figures(
        "flow",
        FROM_MEMORY,
        "Lapple and Shepherd 1940, Ind. Eng. Chem. 32, 605: table of the drag coefficient of a "
        f"sphere by Reynolds number; law '{method}'; allowed 2 %, the scatter of the measurements "
        "it averages (common practice, no source)",
        [
            (f"drag.{reynolds:g}", printed, partial(_standard_drag, reynolds, method))
            for reynolds, printed in rows
        ],
        within=0.02,
    )


_DRAG = (
    *_curve(
        "compact",
        (
            (0.1, "244"),
            (0.2, "124"),
            (0.3, "83.8"),
            (0.5, "51.5"),
            (0.7, "37.6"),
            (1.0, "27.2"),
            (2.0, "14.8"),
            (3.0, "10.5"),
            (5.0, "7.03"),
            (7.0, "5.48"),
            (10.0, "4.26"),
            (20.0, "2.72"),
            (30.0, "2.12"),
            (50.0, "1.57"),
            (70.0, "1.31"),
            (100.0, "1.09"),
        ),
    ),
    *_curve(
        "clift-grace-weber",
        (
            (200.0, "0.776"),
            (300.0, "0.653"),
            (500.0, "0.555"),
            (700.0, "0.508"),
            (1000.0, "0.471"),
        ),
    ),
)

# ASTM D422-63, table 3: K in diameter (mm) = K sqrt(depth in cm/time in min) of settling grains,
# by degC and specific gravity, with the viscosity of water of its day, mPa.s. A grain of K mm
# falls 1 cm a minute; g = 980 cm/s2.
_WATER_THEN = {16: "1.111", 18: "1.056", 20: "1.005", 22: "0.9579", 25: "0.8937"}
_GRAINS = (
    (16, 2.65, 0.01435),
    (18, 2.65, 0.01399),
    (22, 2.65, 0.01332),
    (25, 2.65, 0.01286),
    (20, 2.45, 0.01456),
    (20, 2.50, 0.01431),
    (20, 2.55, 0.01408),
    (20, 2.60, 0.01386),
    (20, 2.65, 0.01365),
    (20, 2.70, 0.01344),
    (20, 2.75, 0.01325),
    (20, 2.80, 0.01307),
    (20, 2.85, 0.01289),
)
_LAST_DIGIT = 0.00001


def _grain_viscosity(celsius: float, gravity: float, constant: float) -> float:
    return 1e3 * float(
        stokes_viscosity(
            ball_diameter=constant * 1e-3,
            ball_density=1e3 * gravity,
            liquid_density=water_density(temperature=celsius + 273.15),
            fall_speed=0.01 / 60.0,
            gravity=9.80,
        )
    )


_SETTLING = tuple(
    figure
    for celsius, gravity, constant in _GRAINS
    for figure in figures(
        "flow",
        FROM_MEMORY,
        f"ASTM D422-63, table 3: Stokes' law at {celsius} degC turns its K = {constant:.5f} for "
        f"specific gravity {gravity:.2f} back into the viscosity of water that the table rests on "
        "(Bingham and Jackson 1918), mPa.s; allowed also half a last digit of K, which is squared",
        [
            (
                f"stokes.d422.{celsius}-degC.{gravity:.2f}",
                _WATER_THEN[celsius],
                partial(_grain_viscosity, celsius, gravity, constant),
            )
        ],
        within=_LAST_DIGIT / constant,
    )
)

_BALL = {"ball_diameter": 2e-3, "liquid_density": 1000.0}
_HAND = figures(
    "flow",
    DEFINITION,
    "2 mm ball of 8000 kg/m3 at 20 mm/s, liquid 1000 kg/m3, g = 9.8 m/s2, by hand: viscosity "
    "7000 x 9.8 x 4e-6/(18 x 0.02) Pa.s; at 0.5 Pa.s Reynolds number 1000 x 0.02 x 0.002/0.5; "
    "shear rate 3 x 0.02/0.002 1/s; shear stress 7000 x 9.8 x 0.002/6 Pa; drag coefficient 24/0.08",
    [
        (
            "stokes.viscosity",
            "0.76222222",
            called(stokes_viscosity, **_BALL, ball_density=8000.0, fall_speed=0.02, gravity=9.8),
        ),
        (
            "stokes.reynolds",
            "0.08000000",
            called(reynolds_number, **_BALL, fall_speed=0.02, viscosity=0.5),
        ),
        (
            "stokes.shear-rate",
            "30.000000",
            called(shear_rate, fall_speed=0.02, ball_diameter=2e-3),
        ),
        (
            "stokes.shear-stress",
            "22.866667",
            called(shear_stress, **_BALL, ball_density=8000.0, gravity=9.8),
        ),
        (
            "stokes.drag-coefficient",
            "300.00000",
            called(drag_coefficient, inertia_factor=1.0, reynolds=0.08),
        ),
    ],
)

FIGURES = (*_PLANE, *_DRAG, *_SETTLING, *_HAND)
