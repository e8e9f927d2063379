"""Glycerol and sucrose in water, and an oil's viscosity between two temperatures."""

from __future__ import annotations

from functools import partial

from plumbfall.physics.liquids import (
    glycerol_water_density,
    glycerol_water_viscosity,
    sucrose_water_viscosity,
)
from plumbfall.physics.temperature_laws import walther_coefficients, walther_kinematic_viscosity
from plumbfall.published.figure import DEFINITION, FROM_MEMORY, called, figures

__all__ = ["FIGURES"]

_ZERO = 273.15

_GLYCEROL = figures(
    "liquid",
    FROM_MEMORY,
    "Segur and Oberstar 1951, Ind. Eng. Chem. 43, 2117: viscosity of glycerol in water by percent "
    "and degC, mPa.s; allowed 3 %, what the formula of Cheng 2008 is used for",
    [
        (
            f"glycerol.viscosity.{percent}-percent.{celsius}-degC",
            printed,
            called(
                glycerol_water_viscosity,
                scale=1e3,
                glycerol_fraction=percent / 100,
                temperature=celsius + _ZERO,
            ),
        )
        for percent, celsius, printed in (
            (10, 20, "1.31"),
            (20, 20, "1.76"),
            (30, 20, "2.50"),
            (40, 20, "3.72"),
            (50, 20, "6.00"),
            (60, 20, "10.8"),
            (70, 20, "22.5"),
            (80, 20, "60.1"),
            (90, 20, "219"),
            (95, 20, "523"),
            (98, 20, "939"),
            (99, 20, "1150"),
            (100, 20, "1410"),
            (100, 30, "612"),
            (100, 40, "284"),
        )
    ],
    within=0.03,
)

_GLYCEROL_DENSITY = figures(
    "liquid",
    FROM_MEMORY,
    "Bosart and Snoddy 1928: density of glycerol in water at 20 degC by percent, kg/m3; allowed "
    "0.07 %, what Volk and Kaehler 2018 state for their formula",
    [
        (
            f"glycerol.density.{percent}-percent",
            printed,
            called(glycerol_water_density, glycerol_fraction=percent / 100, temperature=293.15),
        )
        for percent, printed in (
            (10, "1022.10"),
            (20, "1046.90"),
            (30, "1072.70"),
            (40, "1099.30"),
            (50, "1126.30"),
            (60, "1153.80"),
            (70, "1181.25"),
            (80, "1208.50"),
            (90, "1235.10"),
            (100, "1261.08"),
        )
    ],
    within=0.0007,
)

_SUCROSE = figures(
    "liquid",
    FROM_MEMORY,
    "Bingham and Jackson 1918: measured viscosity of 40 % sucrose in water by degC, mPa.s; allowed "
    "1 %, as the authors' formula leaves their own table by as much",
    [
        (
            f"sucrose.40-percent.{celsius}-degC",
            printed,
            called(
                sucrose_water_viscosity,
                scale=1e3,
                sucrose_fraction=0.4,
                temperature=celsius + _ZERO,
            ),
        )
        for celsius, printed in (
            (15, "7.468"),
            (20, "6.200"),
            (25, "5.187"),
            (30, "4.382"),
            (40, "3.249"),
            (50, "2.497"),
            (60, "1.982"),
            (80, "1.334"),
        )
    ],
    within=0.01,
)


def _oil_at(celsius: float) -> float:
    intercept, slope = walther_coefficients(
        kinematic_viscosity=(100e-6, 11.1e-6), temperature=(40 + _ZERO, 100 + _ZERO)
    )
    temperature = celsius + _ZERO
    return 1e6 * float(
        walther_kinematic_viscosity(intercept=intercept, slope=slope, temperature=temperature)
    )


_OIL = figures(
    "liquid",
    DEFINITION,
    "ASTM D341: the line through two points goes through them, mm2/s; the standard's own inverse "
    "is good to some 1e-7 there",
    [
        ("walther.40-degC", "100", partial(_oil_at, 40.0)),
        ("walther.100-degC", "11.1", partial(_oil_at, 100.0)),
    ],
    within=1e-6,
    exact=True,
)

FIGURES = (*_GLYCEROL, *_GLYCEROL_DENSITY, *_SUCROSE, *_OIL)
