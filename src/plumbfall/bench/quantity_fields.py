"""What may stand at a key of the bench sheet that holds a quantity, and within which limits.

Each is an annotation for the schema, as in :mod:`plumbfall.bench.fields`.
"""

from __future__ import annotations

from typing import Any, NamedTuple

from plumbfall.bench.fields import Reads
from plumbfall.bench.notation import BOUNDS, read_quantity
from plumbfall.errors import InputError
from plumbfall.estimate import Estimate
from plumbfall.quantities import DIMENSIONS, exact_unit, from_si

__all__ = ["QUANTITY_SHAPE", "Range", "above_zero", "quantity", "unadorned", "unit_of"]


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

    return Reads(read, _shape(dimension))


def above_zero(dimension: str, limits: Range | None = None, *, roughly: bool = False) -> Reads:
    """Read a quantity above zero and, unless ``roughly``, above its standard uncertainty."""
    within = quantity(dimension, limits)

    def read(written: object) -> Estimate:
        found = read_quantity(written, dimension)
        if found.value <= 0.0:
            raise InputError(f"'{found.text}' is not above zero", remedy="check sign and value")
        if found.u >= found.value and not roughly:
            raise InputError(
                f"'{found.text}' has a standard uncertainty as large as itself",
                remedy="digits in brackets count in the last digits: 2.0000(5) is 2.0000 with "
                "0.0005",
            )
        if limits is not None:
            limits.check(found, dimension)
        return found

    return Reads(read, within.shape)


def unadorned(dimension: str, limits: Range | None = None, *, why: str) -> Reads:
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

    return Reads(read, _shape(dimension))


QUANTITY_SHAPE: dict[str, Any] = {
    "description": "a quantity: text such as 2.0000(5) mm, or a table",
    "anyOf": [
        {"type": "string"},
        {
            "type": "object",
            "properties": {
                "value": {"type": "number"},
                "unit": {"type": "string"},
                "u": {"type": "number", "minimum": 0},
                "dof": {"type": "number", "exclusiveMinimum": 0},
                "U": {"type": "number", "minimum": 0},
                "k": {"type": "number", "exclusiveMinimum": 0},
                "within": {"type": "number", "minimum": 0},
                "shape": {"enum": list(BOUNDS)},
                "readings": {"type": "array", "items": {"type": "number"}, "minItems": 2},
            },
            "required": ["unit"],
            "additionalProperties": False,
        },
    ],
}
"""The notation of a quantity, for editors; keys with a dimension refer to it."""


def _shape(dimension: str) -> dict[str, Any]:
    return {"x-quantity": dimension, "examples": [DIMENSIONS[dimension].example]}


def unit_of(dimension: str) -> Reads:
    """Read the name of a unit of one dimension."""

    def read(written: object) -> str:
        if not isinstance(written, str):
            raise InputError(f"{written} is not text", remedy="write the unit in quotes")
        exact_unit(written, dimension)
        return written.strip()

    return Reads(read, {"type": "string", "examples": list(DIMENSIONS[dimension].units)})
