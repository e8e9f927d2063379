"""Units, gravity, weighing in air and expansion: what stands before and around the drag."""

from __future__ import annotations

import math
from collections.abc import Callable
from functools import partial

from plumbfall.physics.gravity import STANDARD_GRAVITY, normal_gravity, normal_gravity_by_elevation
from plumbfall.physics.thermal import expanded_length, expanded_solid_density, liquid_density
from plumbfall.physics.weight import mass_from_weighing, sphere_volume
from plumbfall.published.figure import DEFINITION, FROM_MEMORY, called, figures
from plumbfall.quantities import unit_to_si

__all__ = ["FIGURES"]


def _factor(unit: str, dimension: str) -> Callable[[], float]:
    return partial(_converted, 1.0, unit, dimension, False)


def _kelvin(number: float, unit: str) -> Callable[[], float]:
    return partial(_converted, number, unit, "temperature", True)


def _converted(number: float, unit: str, dimension: str, with_offset: bool) -> float:
    factor, offset = unit_to_si(unit, dimension)
    return number * factor + (offset if with_offset else 0.0)


_SI = figures(
    "chain",
    DEFINITION,
    "SI Brochure, 9th edition, tables 7 and 8: prefixes, minute, hour, litre; factor to SI",
    [
        ("unit.ms", "0.001", _factor("ms", "time")),
        ("unit.min", "60", _factor("min", "time")),
        ("unit.h", "3600", _factor("h", "time")),
        ("unit.cm", "0.01", _factor("cm", "length")),
        ("unit.mm", "0.001", _factor("mm", "length")),
        ("unit.um", "0.000001", _factor("um", "length")),
        ("unit.g", "0.001", _factor("g", "mass")),
        ("unit.mg", "0.000001", _factor("mg", "mass")),
        ("unit.g/cm3", "1000", _factor("g/cm3", "density")),
        ("unit.g/mL", "1000", _factor("g/mL", "density")),
        ("unit.kg/L", "1000", _factor("kg/L", "density")),
        ("unit.mPa.s", "0.001", _factor("mPa.s", "viscosity")),
        ("unit.mm2/s", "0.000001", _factor("mm2/s", "kinematic viscosity")),
        ("unit.tube-constant", "0.000001", _factor("mPa.s.cm3/(g.s)", "tube constant")),
    ],
    exact=True,
)

_SP_811 = figures(
    "chain",
    DEFINITION,
    "NIST SP 811 (2008), appendix B.8: inch, poise, stokes; factor to SI",
    [
        ("unit.in", "0.0254", _factor("in", "length")),
        ("unit.P", "0.1", _factor("P", "viscosity")),
        ("unit.cP", "0.001", _factor("cP", "viscosity")),
        ("unit.St", "0.0001", _factor("St", "kinematic viscosity")),
        ("unit.cSt", "0.000001", _factor("cSt", "kinematic viscosity")),
    ],
    exact=True,
)

_SP_811_ROUNDED = figures(
    "chain",
    FROM_MEMORY,
    "NIST SP 811 (2008), appendix B.8: degree of angle, degree Fahrenheit; factor to SI",
    [
        ("unit.deg", "1.745329e-2", _factor("deg", "angle")),
        ("unit.degF-difference", "5.555556e-1", _factor("degF", "temperature difference")),
    ],
)

_TEMPERATURE = figures(
    "chain",
    DEFINITION,
    "SI Brochure 2.3.1 (T/K = t/degC + 273.15) and NIST SP 811 B.8 (T/K = (t/degF + 459.67)/1.8)",
    [
        ("temperature.0-degC", "273.15", _kelvin(0.0, "degC")),
        ("temperature.25-degC", "298.15", _kelvin(25.0, "degC")),
        ("temperature.32-degF", "273.15", _kelvin(32.0, "degF")),
        ("temperature.212-degF", "373.15", _kelvin(212.0, "degF")),
    ],
    exact=True,
)

_GRAVITY = (
    *figures(
        "chain",
        DEFINITION,
        "3rd CGPM (1901): standard acceleration of free fall, m/s2",
        [("gravity.standard", "9.80665", partial(float, STANDARD_GRAVITY))],
        exact=True,
    ),
    *figures(
        "chain",
        FROM_MEMORY,
        "WGS 84 (NGA.STND.0036): normal gravity at the equator and at a pole, m/s2; allowed 1e-10 "
        "more, as the constants it is computed from are rounded there",
        [
            ("gravity.equator", "9.7803253359", called(normal_gravity, latitude=0.0)),
            ("gravity.pole", "9.8321849379", called(normal_gravity, latitude=math.pi / 2)),
        ],
        allowance=1e-10,
    ),
    *figures(
        "chain",
        FROM_MEMORY,
        "GRS 80 (Moritz 1980): normal gravity at 45 degrees, m/s2; allowed 2e-6, as its "
        "equatorial gravity differs by 1.4e-6 from that of WGS 84",
        [("gravity.45-degrees", "9.806199203", called(normal_gravity, latitude=math.pi / 4))],
        allowance=2e-6,
    ),
    *figures(
        "chain",
        FROM_MEMORY,
        "geophysics' free-air gradient of gravity, mGal/m",
        [
            (
                "gravity.free-air",
                "-0.3086",
                called(normal_gravity_by_elevation, scale=1e5, latitude=math.pi / 4),
            )
        ],
    ),
)

_WEIGHING = (
    *figures(
        "chain",
        DEFINITION,
        "conventional weighing (OIML D 28): a ball of 8000 kg/m3 weighs in air what its mass is; "
        "8000 kg/m3 x 0.5 cm3, in g",
        [
            (
                "weighing.as-dense-as-the-weights",
                "4.000000",
                called(
                    mass_from_weighing,
                    scale=1e3,
                    reading=4e-3,
                    ball_diameter=(3e-6 / math.pi) ** (1 / 3),
                ),
            )
        ],
    ),
    *figures(
        "chain",
        DEFINITION,
        "conventional weighing by hand: 590 mg read for a plastic ball of 0.5 cm3; "
        "590 x (1 - 1.2/8000) + 1.2 kg/m3 x 0.5 cm3, in mg",
        [
            (
                "weighing.plastic",
                "590.511500",
                called(
                    mass_from_weighing,
                    scale=1e6,
                    reading=590e-6,
                    ball_diameter=(3e-6 / math.pi) ** (1 / 3),
                ),
            )
        ],
    ),
    *figures(
        "chain",
        DEFINITION,
        "volume of a ball of 2 mm by hand: pi/6 x 8, in mm3",
        [("volume.2-mm", "4.18879", called(sphere_volume, scale=1e9, ball_diameter=2e-3))],
    ),
)

_BY_20_KELVIN = {"temperature": 313.15, "reference_temperature": 293.15}
_EXPANSION = figures(
    "chain",
    DEFINITION,
    "expansion by hand over 20 K: a length by 1 + 20 x 10.4e-6 (steel), a steel's density by that "
    "to the power -3, a liquid of 1018.4 kg/m3 at 9.2e-4 /K by 1/(1 + 0.0184)",
    [
        (
            "expansion.length",
            "1.000208",
            called(expanded_length, length=1.0, expansion=10.4e-6, **_BY_20_KELVIN),
        ),
        (
            "expansion.solid-density",
            "7695.197",  # 7700 x (1 - 3 x 2.08e-4 + 6 x 2.08e-4 squared)
            called(expanded_solid_density, density=7700.0, expansion=10.4e-6, **_BY_20_KELVIN),
        ),
        (
            "expansion.liquid-density",
            "1000.000",
            called(liquid_density, density=1018.4, expansion=9.2e-4, **_BY_20_KELVIN),
        ),
    ],
)

FIGURES = (*_SI, *_SP_811, *_SP_811_ROUNDED, *_TEMPERATURE, *_GRAVITY, *_WEIGHING, *_EXPANSION)
