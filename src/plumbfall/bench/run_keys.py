"""Keys of the bench sheet that concern liquids, certificates and runs."""

from __future__ import annotations

import datetime as dt
from typing import Annotated

from plumbfall.bench import fields, names
from plumbfall.bench.common_keys import (
    DENSITY,
    LIQUID_EXPANSION,
    TEMPERATURE,
    Equipment,
    Keys,
    Maybe,
    deviation,
    doc,
    stated_temperature,
)
from plumbfall.bench.quantity_fields import Range, above_zero, quantity, unadorned
from plumbfall.estimate import Estimate

__all__ = [
    "ConstantKeys",
    "LiquidKeys",
    "ReferenceKeys",
    "ReferencePointKeys",
    "ScatterKeys",
    "SetKeys",
    "SpecificationKeys",
]


class SpecificationKeys(Keys):
    """Limits that a viscosity is judged by."""

    low: Annotated[
        Maybe,
        unadorned("viscosity", why="a limit is exact"),
        doc("lower limit", example="950 mPa.s", left_out="no lower limit; high is needed"),
    ] = None
    high: Annotated[
        Maybe,
        unadorned("viscosity", why="a limit is exact"),
        doc("upper limit", example="1050 mPa.s", left_out="no upper limit; low is needed"),
    ] = None
    temperature: Annotated[
        Estimate,
        stated_temperature("a limit is exact"),
        doc("temperature at which the limits hold", example="25 degC"),
    ]


class LiquidKeys(Equipment):
    """A liquid: what its weight is, and how it changes with temperature."""

    density: Annotated[
        Estimate,
        above_zero("density", DENSITY),
        doc("density of the liquid", example="970.2(2) kg/m3"),
    ]
    density_temperature: Annotated[
        Maybe,
        stated_temperature(),
        doc(
            "temperature at which the density holds",
            example="25 degC",
            left_out="the density is taken as that at the drops' temperature",
        ),
    ] = None
    expansion: Annotated[
        Maybe,
        quantity("temperature coefficient", LIQUID_EXPANSION),
        doc(
            "volumetric thermal expansion, by which the density follows the temperature",
            example="9.2e-4 /K",
            left_out="the density is taken as the same at every temperature",
        ),
    ] = None
    viscosity_slope: Annotated[
        Maybe,
        quantity("temperature coefficient", Range(-100, 100, "%/K")),
        doc(
            "relative change of the viscosity with temperature, d ln(viscosity)/dT; below zero",
            example="-2.0(2) %/K",
            left_out="drops are averaged as they are, and the bounds leave out temperature",
        ),
    ] = None
    specification: Annotated[
        SpecificationKeys | None,
        doc(
            "limits that the viscosity is judged by",
            example={"low": "950 mPa.s", "high": "1050 mPa.s", "temperature": "25 degC"},
            left_out="nothing is judged",
        ),
    ] = None


ONLY_ONE = "the timing file's column, or the only entry there is"


class SetKeys(Keys):
    """What the timing file does not say of a run set; a column of the file prevails."""

    tube: Annotated[
        str | None,
        fields.name,
        doc("name of a [tube.NAME] entry", example="long", left_out=ONLY_ONE),
    ] = None
    liquid: Annotated[
        str | None,
        fields.name,
        doc("name of a [liquid.NAME] entry", example="fluid", left_out=ONLY_ONE),
    ] = None
    ball: Annotated[
        str | None,
        fields.name,
        doc("name of a [ball.NAME] entry", example="A", left_out=ONLY_ONE),
    ] = None
    timer: Annotated[
        str | None,
        fields.name,
        doc("name of a [timer.NAME] entry", example="gates", left_out=ONLY_ONE),
    ] = None
    thermometer: Annotated[
        str | None,
        fields.name,
        doc("name of a [thermometer.NAME] entry", example="probe", left_out=ONLY_ONE),
    ] = None
    temperature: Annotated[
        Maybe,
        quantity("temperature", TEMPERATURE),
        doc(
            "temperature of the liquid, for drops that have none of their own",
            example="25.00(5) degC",
            left_out="the drops' own readings",
        ),
    ] = None
    filled: Annotated[
        dt.datetime | None,
        fields.moment,
        doc("when the tube was filled, for the report", example="2026-03-02T08:10:00"),
    ] = None


class ScatterKeys(Keys):
    """The bench's known repeatability, used where a set is too short to show its own."""

    relative: Annotated[
        Estimate,
        deviation("ratio", Range(0, 100, "%")),
        doc("relative standard deviation of one drop", example="0.30 %"),
    ]
    dof: Annotated[
        float,
        fields.number(0.5, 1e9, "write the degrees of freedom it was found with, such as 24"),
        doc("degrees of freedom it was found with: drops less sets", example=24),
    ]


class ReferencePointKeys(Keys):
    """One line of a reference liquid's certificate."""

    temperature: Annotated[
        Estimate,
        stated_temperature(),
        doc("temperature of the certified value", example="20 degC"),
    ]
    value: Annotated[
        Estimate,
        above_zero("viscosity"),
        doc("certified viscosity", example="1.2021 ± 0.0030 Pa.s, k=2"),
    ]


class ReferenceKeys(Equipment):
    """A certified liquid."""

    liquid: Annotated[
        str | None, fields.name, doc("name of its [liquid.NAME] entry", example="oil")
    ] = None
    viscosity: Annotated[
        tuple[ReferencePointKeys, ...],
        doc(
            "points of the certificate",
            example=[{"temperature": "20 degC", "value": "1.2021 ± 0.0030 Pa.s, k=2"}],
            left_out="law is needed",
        ),
    ] = ()
    correlation: Annotated[
        float,
        fields.number(0.0, 1.0, "write a number from 0 (independent) to 1 (the same error)"),
        doc(
            "correlation of the errors of any two points: 1 where they share one error",
            example=1.0,
        ),
    ] = 1.0
    law: Annotated[
        str | None,
        fields.choice(names.REFERENCE_LAWS),
        doc(
            "a liquid known by an equation, instead of a certificate",
            example="water",
            left_out="viscosity is needed",
        ),
    ] = None
    expires: Annotated[
        dt.date | None,
        fields.day,
        doc("last day on which the certificate holds", example="2027-05-31"),
    ] = None


class ConstantKeys(Equipment):
    """A tube constant: from a file that calibrate wrote, or by hand."""

    tube: Annotated[
        str | None,
        fields.name,
        doc("name of the [tube.NAME] entry it holds for", example="inclined"),
    ] = None
    ball: Annotated[
        str | None,
        fields.name,
        doc(
            "name of the [ball.NAME] entry it holds for",
            example="A",
            left_out="it is the tube's only constant",
        ),
    ] = None
    value: Annotated[
        Maybe,
        above_zero("tube constant"),
        doc(
            "the constant, typed by hand",
            example="0.0123 ± 0.0001 mPa.s.cm3/(g.s), k=2",
            left_out="file is needed",
        ),
    ] = None
    file: Annotated[
        str | None,
        fields.text,
        doc(
            "file with the constant, looked up beside the bench sheet",
            example="constant.json",
            left_out="value is needed",
        ),
    ] = None
