"""What may stand at a key of the bench sheet: one reader for each kind of value.

Each is an annotation for the schema. It reads what was written, or raises an ``InputError`` that
says what to type; pydantic gathers these, so that all errors of a sheet come at once.
"""

from __future__ import annotations

import codecs
import datetime as dt
import math
import numbers
from collections.abc import Callable, Iterable
from dataclasses import dataclass
from typing import Any, NamedTuple

from pydantic import GetJsonSchemaHandler
from pydantic_core import CoreSchema, core_schema

from plumbfall.bench.notation import read_quantity
from plumbfall.errors import InputError, nearest_name
from plumbfall.estimate import Estimate
from plumbfall.quantities import DIMENSIONS, exact_unit, from_si

__all__ = [
    "Range",
    "Reads",
    "above_zero",
    "choice",
    "codec",
    "day",
    "flag",
    "moment",
    "names",
    "number",
    "plain",
    "quantity",
    "table_of_text",
    "text",
    "unit_of",
    "whole_number",
]


@dataclass(frozen=True)
class Reads:
    """An annotation that reads a value with ``read`` and is shown to editors as ``shape``."""

    read: Callable[[Any], Any]
    shape: dict[str, Any]

    def __get_pydantic_core_schema__(self, source: object, handler: object) -> CoreSchema:
        """Replace the annotated type's own validation by ``read``."""
        return core_schema.no_info_plain_validator_function(self.read)

    def __get_pydantic_json_schema__(
        self, schema: CoreSchema, handler: GetJsonSchemaHandler
    ) -> dict[str, Any]:
        """Return the shape for editors."""
        return dict(self.shape)


class Range(NamedTuple):
    """Limits that no honest value passes, in the unit they are printed in."""

    low: float
    high: float
    unit: str

    def check(self, found: Estimate, dimension: str) -> None:
        """Refuse a value outside the limits, both of which are allowed."""
        value = from_si(found.value, self.unit, dimension)
        if self.low <= value <= self.high:
            return
        quoted = f"'{found.text}'" if not found.text.startswith("{") else found.text
        unit = "" if self.unit == "1" else f" {self.unit}"
        raise InputError(
            f"{quoted} is {value:.6g}{unit}, outside {self.low:g} to {self.high:g}{unit}",
            remedy="check the value, its sign and its unit",
        )


def quantity(dimension: str, limits: Range | None = None) -> Reads:
    """Read a quantity with or without uncertainty, within ``limits``."""

    def read(written: object) -> Estimate:
        found = read_quantity(written, dimension)
        if limits is not None:
            limits.check(found, dimension)
        return found

    return Reads(read, _quantity_shape(dimension))


def above_zero(dimension: str, limits: Range | None = None) -> Reads:
    """Read a quantity that is more than zero and more than its uncertainty."""
    within = quantity(dimension, limits)

    def read(written: object) -> Estimate:
        found = read_quantity(written, dimension)
        if found.value <= 0.0:
            raise InputError(f"'{found.text}' is not above zero", remedy="check sign and value")
        if found.u >= found.value:
            raise InputError(
                f"'{found.text}' has a standard uncertainty as large as itself",
                remedy="digits in brackets count in the last digits: 2.0000(5) is 2.0000 with "
                "0.0005",
            )
        if limits is not None:
            limits.check(found, dimension)
        return found

    return Reads(read, within.shape)


def plain(dimension: str, limits: Range | None = None, *, why: str) -> Reads:
    """Read a quantity that is given without uncertainty; ``why`` says why none belongs here."""

    def read(written: object) -> Estimate:
        found = read_quantity(written, dimension)
        if found.u > 0.0 or found.distribution == "t":
            raise InputError(
                f"'{found.text}' has an uncertainty, which is not taken here",
                remedy=f"give the value alone: {why}",
            )
        if limits is not None:
            limits.check(found, dimension)
        return found

    return Reads(read, _quantity_shape(dimension))


def _quantity_shape(dimension: str) -> dict[str, Any]:
    table: dict[str, Any] = {
        "type": "object",
        "properties": {
            "value": {"type": "number"},
            "unit": {"type": "string"},
            "u": {"type": "number", "minimum": 0},
            "dof": {"type": "number", "exclusiveMinimum": 0},
            "U": {"type": "number", "minimum": 0},
            "k": {"type": "number", "exclusiveMinimum": 0},
            "within": {"type": "number", "minimum": 0},
            "shape": {"enum": ["rectangular", "triangular", "arcsine"]},
            "readings": {"type": "array", "items": {"type": "number"}, "minItems": 2},
        },
        "required": ["unit"],
        "additionalProperties": False,
    }
    known = DIMENSIONS[dimension]
    text_form = {"type": "string", "examples": [known.example]}
    return {"title": known.called, "anyOf": [text_form, table]}


def _read_text(written: object) -> str:
    if isinstance(written, str):
        return written.strip()
    if isinstance(written, int) and not isinstance(written, bool):
        return str(written)
    if isinstance(written, dt.datetime | dt.date):
        return written.isoformat()
    raise InputError(f"{_said(written)} is not text", remedy="write it in quotes")


text = Reads(_read_text, {"type": "string"})
"""Text; a whole number or a date stands for its own digits."""


def choice(known: Iterable[str]) -> Reads:
    """Read one of the known names."""
    options = tuple(known)

    def read(written: object) -> str:
        if isinstance(written, str) and written in options:
            return written
        near = nearest_name(written, options) if isinstance(written, str) else None
        remedy = f"did you mean '{near}'? " if near else ""
        raise InputError(
            f"{_said(written)} is not known", remedy=f"{remedy}known are {', '.join(options)}"
        )

    return Reads(read, {"enum": list(options)})


def _read_names(written: object) -> tuple[str, ...]:
    found = [written] if isinstance(written, str) else written
    if isinstance(found, list) and found and all(isinstance(name, str) for name in found):
        return tuple(found)
    raise InputError(
        f"{_said(written)} is not a name", remedy='write "NAME", or ["NAME", "OTHER NAME"]'
    )


names = Reads(
    _read_names,
    {"anyOf": [{"type": "string"}, {"type": "array", "items": {"type": "string"}, "minItems": 1}]},
)
"""One name or a list of names."""


def number(low: float, high: float, remedy: str) -> Reads:
    """Read a plain number between limits, which are allowed."""

    def read(written: object) -> float:
        value = _plain_number(written, remedy)
        if not low <= value <= high:
            raise InputError(f"{_said(written)} is outside {low:g} to {high:g}", remedy=remedy)
        return value

    return Reads(read, {"type": "number", "minimum": low, "maximum": high})


def _plain_number(written: object, remedy: str) -> float:
    if isinstance(written, numbers.Real) and not isinstance(written, bool):
        try:
            value = float(written)
        except OverflowError:
            value = math.inf
        if math.isfinite(value):
            return value
    raise InputError(f"{_said(written)} is not a plain number", remedy=remedy)


def whole_number(remedy: str) -> Reads:
    """Read a whole number of at least 1."""

    def read(written: object) -> int:
        if isinstance(written, int) and not isinstance(written, bool) and written >= 1:
            return int(written)
        raise InputError(f"{_said(written)} is not a whole number above zero", remedy=remedy)

    return Reads(read, {"type": "integer", "minimum": 1})


def _read_flag(written: object) -> bool:
    if isinstance(written, bool):
        return written
    raise InputError(f"{_said(written)} is neither true nor false", remedy="write true or false")


flag = Reads(_read_flag, {"type": "boolean"})
"""True or false."""


def _read_day(written: object) -> dt.date:
    if isinstance(written, dt.datetime):
        return written.date()
    if isinstance(written, dt.date):
        return written
    if isinstance(written, str):
        try:
            return dt.date.fromisoformat(written.strip())
        except ValueError:
            pass
    raise InputError(f"{_said(written)} is not a date", remedy="write it as 2026-03-02")


day = Reads(_read_day, {"type": "string", "format": "date"})
"""A date, as TOML writes it or as ISO 8601 text."""


def _read_moment(written: object) -> dt.datetime:
    if isinstance(written, dt.datetime):
        return written
    if isinstance(written, str) and len(written.strip()) > len("2026-03-02"):
        try:
            return dt.datetime.fromisoformat(written.strip())
        except ValueError:
            pass
    raise InputError(
        f"{_said(written)} is not a date with its time of day",
        remedy="write it as 2026-03-02T08:10:00",
    )


moment = Reads(_read_moment, {"type": "string", "format": "date-time"})
"""A date and time of day."""


def unit_of(dimension: str) -> Reads:
    """Read the name of a unit of one dimension."""

    def read(written: object) -> str:
        if not isinstance(written, str):
            raise InputError(f"{_said(written)} is not text", remedy="write the unit in quotes")
        exact_unit(written, dimension)
        return written.strip()

    return Reads(read, {"type": "string", "examples": list(DIMENSIONS[dimension].units)})


def _read_codec(written: object) -> str:
    if isinstance(written, str):
        try:
            return codecs.lookup(written).name and written
        except (LookupError, ValueError):
            pass
    raise InputError(
        f"{_said(written)} is not an encoding", remedy='write such as "utf-8" or "cp1252"'
    )


codec = Reads(_read_codec, {"type": "string"})
"""The name of a character encoding."""


def table_of_text(check: Callable[[str, str], None] | None = None) -> Reads:
    """Read a table whose values are all text, each passed to ``check`` with its key."""

    def read(written: object) -> dict[str, str]:
        if not isinstance(written, dict):
            raise InputError(f"{_said(written)} is not a table", remedy='write { KEY = "value" }')
        for key, value in written.items():
            if not isinstance(value, str):
                raise InputError(f"{key} = {_said(value)} is not text", remedy="write it in quotes")
            if check is not None:
                check(key, value)
        return dict(written)

    return Reads(read, {"type": "object", "additionalProperties": {"type": "string"}})


def _said(written: object) -> str:
    if isinstance(written, str):
        return f"'{written}'"
    if isinstance(written, bool):
        return str(written).lower()
    if isinstance(written, dict):
        return "a table"
    if isinstance(written, list):
        return "a list"
    return str(written)
