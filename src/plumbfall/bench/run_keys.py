"""Keys of the bench sheet that concern liquids and runs, and how they are read and reduced."""

from __future__ import annotations

import datetime as dt
import difflib
import re
from typing import Annotated

from plumbfall.bench import fields, names
from plumbfall.bench.common_keys import (
    DENSITY,
    EMPTY,
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
from plumbfall.errors import InputError, nearest_name
from plumbfall.estimate import Estimate
from plumbfall.quantities import is_unit

__all__ = [
    "ConstantKeys",
    "LiquidKeys",
    "MethodKeys",
    "ReferenceKeys",
    "ReferencePointKeys",
    "ScatterKeys",
    "SetKeys",
    "SpecificationKeys",
    "TimingsKeys",
    "limits",
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


def _known_column(heading: str, column: str) -> None:
    base = re.sub(r"\s*[0-9]+$", "", column.strip())
    if base in names.COLUMNS[-4:] or column in names.COLUMNS:
        return
    near = nearest_name(base, names.COLUMNS)
    raise InputError(
        f"'{column}', declared for the heading '{heading}', is no column",
        remedy=f"did you mean '{near}'?" if near else f"known are {', '.join(names.COLUMNS)}",
    )


def _known_unit(column: str, unit: str) -> None:
    if unit not in ("mm:ss", "h:mm:ss") and not is_unit(unit):
        raise InputError(
            f"'{unit}', declared for the column '{column}', is no unit",
            remedy="write such as s, min, mm:ss or degC",
        )


class TimingsKeys(Keys):
    """How to read the timing file where its own headings do not say."""

    columns: Annotated[
        dict[str, str],
        fields.table_of_text(_known_column),
        doc("column meant by a heading"),
        EMPTY,
    ]
    units: Annotated[
        dict[str, str], fields.table_of_text(_known_unit), doc("unit of a column"), EMPTY
    ]
    delimiter: Annotated[
        str | None, fields.choice((",", ";", "\t", "tab", "|", " ")), doc("between cells")
    ] = None
    decimal: Annotated[str | None, fields.choice((".", ",")), doc("decimal sign")] = None
    encoding: Annotated[str | None, fields.codec, doc("character encoding")] = None
    header_row: Annotated[
        int | None,
        fields.whole_number("write the line of the headings, counted from 1"),
        doc("line of the headings, counted from 1"),
    ] = None
    sheet: Annotated[str | None, fields.text, doc("sheet of a workbook")] = None


class MethodKeys(Keys):
    """Choices among the laws; otherwise the defaults, which the report names."""

    drag: Annotated[
        str | None, fields.choice(names.DRAG), doc("how wall and inertia act together")
    ] = None
    walls: Annotated[str | None, fields.choice(names.WALLS), doc("wall factor")] = None
    inertia: Annotated[str | None, fields.choice(names.INERTIA), doc("inertia factor")] = None
    ends: Annotated[str | None, fields.choice(names.ENDS), doc("ends of the tube")] = None
    run_in: Annotated[str | None, fields.choice(names.RUN_IN), doc("run-in before the marks")] = (
        None
    )
    slope: Annotated[
        str | None, fields.choice(names.SLOPES), doc("fit the temperature slope from the run sets")
    ] = None
    model_uncertainty: Annotated[
        Maybe,
        deviation("ratio", Range(0, 100, "%")),
        doc("relative standard uncertainty of the drag law"),
    ] = None


def _read_limits(written: object) -> dict[str, float | bool]:
    if not isinstance(written, dict):
        raise InputError("limits is not a table", remedy="write [limits] and keys below it")
    read: dict[str, float | bool] = {}
    for key, value in written.items():
        near = difflib.get_close_matches(key, ["exclude_outliers"], cutoff=0.8)
        if near and key != near[0]:
            raise InputError(f"unknown limit '{key}'", remedy=f"did you mean '{near[0]}'?")
        if key == "exclude_outliers" or isinstance(value, bool):
            read[key] = fields.flag.read(value)
        else:
            remedy = f"write {key} as a plain number"
            read[key] = fields.number(-1e300, 1e300, remedy).read(value)
    return read


limits = fields.Reads(
    _read_limits,
    {
        "type": "object",
        "properties": {"exclude_outliers": {"type": "boolean"}},
        "additionalProperties": {"type": ["number", "boolean"]},
    },
)
"""Overrides of the limits that findings use: any key with a number, or true or false."""
