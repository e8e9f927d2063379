"""What the tables of the bench sheet have in common."""

from __future__ import annotations

import datetime as dt
from typing import Annotated, Any

from pydantic import BaseModel, ConfigDict, Field

from plumbfall.bench import fields
from plumbfall.bench.quantity_fields import Range, unadorned
from plumbfall.estimate import Estimate

__all__ = [
    "BLANK",
    "DENSITY",
    "EMPTY",
    "LEFT_OUT",
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

BLANK = "printed as not supplied"
"""What becomes of an empty entry of the report."""

Maybe = Estimate | None
"""An optional quantity."""

EMPTY: Any = Field(default_factory=dict)
"""A table that may be left out."""

DENSITY = Range(0.5, 25.0, "g/cm3")
"""Any liquid or ball: from foamed plastic to osmium (22.6 g/cm3)."""
TEMPERATURE = Range(-100.0, 400.0, "degC")
SOLID_EXPANSION = Range(-1e-4, 1e-3, "/K")
LIQUID_EXPANSION = Range(-0.02, 0.02, "/K")


LEFT_OUT = "; left out: "
"""What stands in a description between what a key means and what holds without it."""


def doc(meaning: str, *, example: Any = None, left_out: str = "") -> Any:
    """Return what a key means, for documents and editors.

    ``example`` is a value as the sheet's reader takes it; ``left_out`` says what holds where the
    key is not given, unless its default says so.
    """
    return Field(
        description=meaning + (LEFT_OUT + left_out if left_out else ""),
        examples=None if example is None else [example],
    )


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
    """What an auditor asks of a piece of equipment; it is printed in the report."""

    identity: Annotated[
        str, fields.text, doc("serial or inventory number", example="FT-50", left_out=BLANK)
    ] = ""
    certificate: Annotated[
        str, fields.text, doc("number of its certificate", example="C-17/26", left_out=BLANK)
    ] = ""
    calibrated: Annotated[
        dt.date | None,
        fields.day,
        doc("date of its calibration", example="2026-01-12", left_out=BLANK),
    ] = None
    due: Annotated[
        dt.date | None,
        fields.day,
        doc("date on which its next calibration is due", example="2027-01-12", left_out=BLANK),
    ] = None
    note: Annotated[str, fields.text, doc("remark for the report", example="glass")] = ""
