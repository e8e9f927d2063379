"""What may stand at a key of the bench sheet that holds no quantity: text, names, dates, numbers.

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
from typing import Any

from pydantic import GetJsonSchemaHandler
from pydantic_core import CoreSchema, core_schema

from plumbfall.errors import InputError, nearest_name

__all__ = [
    "Reads",
    "choice",
    "codec",
    "day",
    "flag",
    "moment",
    "name",
    "names",
    "number",
    "table_of_text",
    "text",
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


def _read_name(written: object) -> str:
    if isinstance(written, str):
        return written
    if isinstance(written, int) and not isinstance(written, bool):
        return str(written)
    if isinstance(written, dt.datetime | dt.date):
        return written.isoformat()
    raise InputError(f"{_said(written)} is not text", remedy="write it in quotes")


name = Reads(_read_name, {"type": ["string", "integer"]})
"""The name of an entry, as it is written in the entry's head; a whole number is a name too."""

text = Reads(lambda written: _read_name(written).strip(), {"type": ["string", "integer"]})
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
