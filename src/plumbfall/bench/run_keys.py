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

    low: Annotated[Maybe, unadorned("viscosity", why="a limit is exact"), doc("lower limit")] = None
    high: Annotated[Maybe, unadorned("viscosity", why="a limit is exact"), doc("upper limit")] = (
        None
    )
    temperature: Annotated[Estimate, stated_temperature("a limit is exact"), doc("of the limits")]


class LiquidKeys(Equipment):
    """A liquid."""

    density: Annotated[Estimate, above_zero("density", DENSITY), doc("of the liquid")]
    density_temperature: Annotated[
        Maybe, stated_temperature(), doc("temperature of the density")
    ] = None
    expansion: Annotated[
        Maybe, quantity("temperature coefficient", LIQUID_EXPANSION), doc("volumetric expansion")
    ] = None
    viscosity_slope: Annotated[
        Maybe,
        quantity("temperature coefficient", Range(-100, 100, "%/K")),
        doc("d ln(viscosity)/dT"),
    ] = None
    specification: Annotated[SpecificationKeys | None, doc("conformity with it is then stated")] = (
        None
    )


class SetKeys(Keys):
    """What the timing file does not say of a run set."""

    tube: Annotated[str | None, fields.name, doc("entry of [tube.NAME]")] = None
    liquid: Annotated[str | None, fields.name, doc("entry of [liquid.NAME]")] = None
    ball: Annotated[str | None, fields.name, doc("entry of [ball.NAME]")] = None
    timer: Annotated[str | None, fields.name, doc("entry of [timer.NAME]")] = None
    thermometer: Annotated[str | None, fields.name, doc("entry of [thermometer.NAME]")] = None
    temperature: Annotated[Maybe, quantity("temperature", TEMPERATURE), doc("of the liquid")] = None
    filled: Annotated[dt.datetime | None, fields.moment, doc("when the tube was filled")] = None


class ScatterKeys(Keys):
    """The bench's known repeatability, used where a set is too short to show its own."""

    relative: Annotated[
        Estimate,
        deviation("ratio", Range(0, 100, "%")),
        doc("relative standard deviation of one drop"),
    ]
    dof: Annotated[
        float,
        fields.number(0.5, 1e9, "write the degrees of freedom it was found with, such as 24"),
        doc("its degrees of freedom"),
    ]


class ReferencePointKeys(Keys):
    """One line of a reference liquid's certificate."""

    temperature: Annotated[Estimate, stated_temperature(), doc("temperature of the value")]
    value: Annotated[Estimate, above_zero("viscosity"), doc("certified viscosity")]


class ReferenceKeys(Equipment):
    """A certified liquid."""

    liquid: Annotated[str | None, fields.name, doc("entry of [liquid.NAME]")] = None
    viscosity: Annotated[tuple[ReferencePointKeys, ...], doc("points of the certificate")] = ()
    correlation: Annotated[
        float,
        fields.number(0.0, 1.0, "write a number from 0 (independent) to 1 (the same error)"),
        doc("between points of the certificate"),
    ] = 1.0
    law: Annotated[
        str | None,
        fields.choice(names.REFERENCE_LAWS),
        doc("a known liquid instead of a certificate"),
    ] = None
    expires: Annotated[dt.date | None, fields.day, doc("end of the certificate's validity")] = None


class ConstantKeys(Equipment):
    """A tube constant: from a file that calibrate wrote, or by hand."""

    tube: Annotated[str | None, fields.name, doc("entry of [tube.NAME]")] = None
    ball: Annotated[str | None, fields.name, doc("entry of [ball.NAME]")] = None
    value: Annotated[Maybe, above_zero("tube constant"), doc("the constant, by hand")] = None
    file: Annotated[str | None, fields.text, doc("file beside the bench sheet")] = None
