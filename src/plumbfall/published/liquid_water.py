"""Water: viscosity and density by the international formulations and by older tables."""

from __future__ import annotations

from functools import partial

from plumbfall.physics.liquids import water_density, water_viscosity, water_viscosity_at_atmosphere
from plumbfall.published.figure import FROM_MEMORY, SEEN_IN_PRINT, called, figures

__all__ = ["FIGURES"]

_ZERO = 273.15

_R12 = figures(
    "liquid",
    SEEN_IN_PRINT,
    "IAPWS R12-08, table 4: viscosity of water at a temperature (K) and density (kg/m3), without "
    "the critical term, uPa.s",
    [
        (
            f"water.r12.{temperature}-{density}",
            printed,
            called(water_viscosity, scale=1e6, temperature=temperature, density=density),
        )
        for temperature, density, printed in (
            (298.15, 998, "889.735100"),
            (298.15, 1200, "1437.649467"),
            (373.15, 1000, "307.883622"),
            (433.15, 1, "14.538324"),
            (433.15, 1000, "217.685358"),
            (873.15, 1, "32.619287"),
            (873.15, 100, "35.802262"),
            (873.15, 600, "77.430195"),
            (1173.15, 1, "44.217245"),
            (1173.15, 100, "47.640433"),
            (1173.15, 400, "64.154608"),
        )
    ],
)


def _water_at(celsius: float) -> float:
    temperature = celsius + _ZERO
    density = water_density(temperature=temperature)
    return float(water_viscosity(temperature=temperature, density=density))


def _kinematic_at(celsius: float) -> float:
    return 1e6 * _water_at(celsius) / float(water_density(temperature=celsius + _ZERO))


_DATUM = (
    *figures(
        "liquid",
        FROM_MEMORY,
        "IAPWS SR6-08: viscosity of liquid water at 0.1 MPa and 298.15 K, uPa.s",
        [
            (
                "water.sr6.298.15",
                "889.99677",
                called(water_viscosity_at_atmosphere, scale=1e6, temperature=298.15),
            )
        ],
    ),
    *figures(
        "liquid",
        FROM_MEMORY,
        "ISO/TR 3666: viscosity of water at 20 degC, mPa.s",
        [
            (
                "water.iso-3666.20-degC",
                "1.0016",
                called(water_viscosity_at_atmosphere, scale=1e3, temperature=293.15),
            )
        ],
    ),
    *figures(
        "liquid",
        SEEN_IN_PRINT,
        "ASTM D2162: kinematic viscosity of water at 20 degC, mm2/s",
        [("water.d2162.20-degC", "1.0034", partial(_kinematic_at, 20.0))],
    ),
)

_DENSITY = figures(
    "liquid",
    FROM_MEMORY,
    "Tanaka and others 2001, Metrologia 38, 301: recommended table of the density of water, kg/m3",
    [
        (
            f"water.tanaka.{celsius}-degC",
            printed,
            called(water_density, temperature=celsius + _ZERO),
        )
        for celsius, printed in (
            (0, "999.8428"),
            (4, "999.9749"),
            (5, "999.9668"),
            (10, "999.7027"),
            (15, "999.1026"),
            (20, "998.2067"),
            (25, "997.0470"),
            (30, "995.6488"),
            (35, "994.0326"),
            (40, "992.2152"),
        )
    ],
)

_HANDBOOK = figures(
    "liquid",
    FROM_MEMORY,
    "handbook table of the viscosity of water, 1980s formulation, uPa.s at degC; allowed 1 %, the "
    "uncertainty that IAPWS R12-08 states for the liquid",
    [
        (
            f"water.handbook.{celsius}-degC",
            printed,
            called(water_viscosity_at_atmosphere, scale=1e6, temperature=celsius + _ZERO),
        )
        for celsius, printed in (
            (0, "1793"),
            (10, "1307"),
            (20, "1002"),
            (30, "797.7"),
            (40, "653.2"),
            (50, "547.0"),
            (60, "466.5"),
            (70, "404.0"),
            (80, "354.4"),
            (90, "314.5"),
            (100, "281.8"),
        )
    ],
    within=0.01,
)

FIGURES = (*_R12, *_DATUM, *_DENSITY, *_HANDBOOK)
