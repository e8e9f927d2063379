"""Keys of the bench sheet that choose how timings are read and drops are reduced."""

from __future__ import annotations

import difflib
import re
from typing import Annotated

from pydantic import model_validator

from plumbfall.bench import fields, names
from plumbfall.bench.common_keys import EMPTY, Keys, Maybe, deviation, doc
from plumbfall.bench.quantity_fields import Range
from plumbfall.errors import InputError, nearest_name
from plumbfall.quantities import is_unit

__all__ = ["MethodKeys", "TimingsKeys", "drag_laws", "limits"]


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
        doc(
            "what each heading of the file means, with or without its unit",
            example={"Drop, s": "time"},
        ),
        EMPTY,
    ]
    units: Annotated[
        dict[str, str],
        fields.table_of_text(_known_unit),
        doc(
            "unit of a column whose heading has none, by the column's name",
            example={"time": "s", "temperature": "degC"},
        ),
        EMPTY,
    ]
    delimiter: Annotated[
        str | None,
        fields.choice((",", ";", "\t", "tab", "|", " ")),
        doc("character between cells", example=";", left_out="found from the headings"),
    ] = None
    decimal: Annotated[
        str | None,
        fields.choice((".", ",")),
        doc("decimal mark of the file", example=",", left_out="found from all its numbers"),
    ] = None
    encoding: Annotated[
        str | None,
        fields.codec,
        doc(
            "character encoding of the file",
            example="cp1252",
            left_out="its byte order mark, or UTF-8",
        ),
    ] = None
    header_row: Annotated[
        int | None,
        fields.whole_number("write the line of the headings, counted from 1"),
        doc(
            "line of the headings, counted from 1",
            example=6,
            left_out="the first line with text that is no comment",
        ),
    ] = None
    sheet: Annotated[
        str | None,
        fields.text,
        doc("sheet of a workbook that holds the drops", example="Drops", left_out="the first"),
    ] = None
    thousands: Annotated[
        str | None,
        fields.choice((",", ".", " ", "'")),
        doc("mark that parts thousands in the file's numbers", example=",", left_out="none"),
    ] = None
    transposed: Annotated[
        bool,
        fields.flag,
        doc(
            "true where a drop is a column and the headings stand one below the other",
            example=True,
            left_out="false",
        ),
    ] = False


def _read_drag(written: object) -> str:
    words = written.split() if isinstance(written, str) else []
    every = [law for laws in names.DRAG.values() for law in laws]
    known = "; ".join(f"{part}: {', '.join(laws)}" for part, laws in names.DRAG.items())
    if not words:
        raise InputError("is not the name of a drag law", remedy=f"known are {known}")
    for word in words:
        if word not in every:
            near = nearest_name(word, every)
            remedy = f"did you mean '{near}'? " if near else ""
            raise InputError(f"'{word}' is no drag law", remedy=f"{remedy}known are {known}")
    for part, laws in names.DRAG.items():
        chosen = [word for word in words if word in laws]
        if len(chosen) > 1:
            raise InputError(
                f"'{chosen[0]}' and '{chosen[1]}' are both laws for {part}",
                remedy="keep one of them",
            )
    return " ".join(words)


drag_laws = fields.Reads(
    _read_drag,
    {"type": "string", "examples": ["screened", "product faxen schiller-naumann"]},
)
"""Names of laws, at most one for each part of the drag."""


DEFAULT_LAW = "the default, which the report names"


class MethodKeys(Keys):
    """Choices among the laws; otherwise the defaults, which the report names."""

    drag: Annotated[
        str | None,
        drag_laws,
        doc(
            "laws of the drag, at most one each for walls, inertia, and the two together",
            example="screened",
            left_out=DEFAULT_LAW,
        ),
    ] = None
    walls: Annotated[
        str | None,
        fields.choice(names.WALLS),
        doc("law of the walls' drag", example="bohlin", left_out=DEFAULT_LAW),
    ] = None
    inertia: Annotated[
        str | None,
        fields.choice(names.INERTIA),
        doc("law of the inertia's drag", example="clift-grace-weber", left_out=DEFAULT_LAW),
    ] = None
    ends: Annotated[
        str | None,
        fields.choice(names.ENDS),
        doc("how the ends of the tube are corrected", example="none", left_out=DEFAULT_LAW),
    ] = None
    run_in: Annotated[
        str | None,
        fields.choice(names.RUN_IN),
        doc("how the run-in before the marks is corrected", example="none", left_out=DEFAULT_LAW),
    ] = None
    slope: Annotated[
        str | None,
        fields.choice(names.SLOPES),
        doc(
            "law by which the temperature slope is fitted to the run sets themselves",
            example="andrade",
            left_out="the liquid's viscosity_slope",
        ),
    ] = None
    model_uncertainty: Annotated[
        Maybe,
        deviation("ratio", Range(0, 100, "%")),
        doc(
            "relative standard uncertainty of the drag law, the same error for every drop",
            example="0.05 %",
            left_out="the law's own error at each drop",
        ),
    ] = None

    @model_validator(mode="after")
    def _one_law_a_part(self) -> MethodKeys:
        if words := [word for word in (self.drag, self.walls, self.inertia) if word]:
            drag_laws.read(" ".join(words))
        return self


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
