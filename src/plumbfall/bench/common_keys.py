"""What the tables of the bench sheet have in common."""

from __future__ import annotations

import datetime as dt
from typing import Annotated, Any

from pydantic import BaseModel, ConfigDict, Field

from plumbfall.bench import fields
from plumbfall.bench.quantity_fields import Range, unadorned
from plumbfall.estimate import Estimate

__all__ = [
    "DENSITY",
    "EMPTY",
    "LIQUID_EXPANSION",
    "SOLID_EXPANSION",
    "TEMPERATURE",
    "Equipment",
    "Keys",
    "Maybe",
    "deviation",
    "doc",
    "stated_temperature",
]

Maybe = Estimate | None
"""An optional quantity."""

EMPTY: Any = Field(default_factory=dict)
"""A table that may be left out."""

DENSITY = Range(0.5, 25.0, "g/cm3")
"""Any liquid or ball: from foamed plastic to osmium (22.6 g/cm3)."""
TEMPERATURE = Range(-100.0, 400.0, "degC")
SOLID_EXPANSION = Range(-1e-4, 1e-3, "/K")
LIQUID_EXPANSION = Range(-0.02, 0.02, "/K")


def doc(description: str) -> Any:
    """Return the description of a key, for documents and editors."""
    return Field(description=description)


def stated_temperature(
    why: str = "its error belongs in the uncertainty of what holds at it",
) -> fields.Reads:
    """Read a temperature that something is stated for, without uncertainty of its own."""
    return unadorned("temperature", TEMPERATURE, why=why)


def deviation(dimension: str, limits: Range) -> fields.Reads:
    """Read a standard deviation, which has no uncertainty of its own."""
    return unadorned(dimension, limits, why="it is a standard deviation itself")


class Keys(BaseModel):
    """A table of the sheet; keys it does not know are refused."""

    model_config = ConfigDict(
        extra="forbid", frozen=True, arbitrary_types_allowed=True, protected_namespaces=()
    )


class Equipment(Keys):
    """What an auditor asks of a piece of equipment."""

    identity: Annotated[str, fields.text, doc("serial or inventory number")] = ""
    certificate: Annotated[str, fields.text, doc("number of its certificate")] = ""
    calibrated: Annotated[dt.date | None, fields.day, doc("date of its calibration")] = None
    due: Annotated[dt.date | None, fields.day, doc("date its next calibration is due")] = None
    note: Annotated[str, fields.text, doc("remark for the report")] = ""
