"""Keys of the bench sheet that concern the paper: choices, laboratory, report, sample, site."""

from __future__ import annotations

import datetime as dt
from typing import Annotated

from pydantic import model_validator

from plumbfall.bench import fields
from plumbfall.bench.common_keys import BLANK, Keys, Maybe, doc, stated_temperature
from plumbfall.bench.quantity_fields import Range, quantity, unit_of
from plumbfall.errors import InputError

__all__ = ["BenchKeys", "LaboratoryKeys", "ReportKeys", "SampleKeys", "SiteKeys"]


class BenchKeys(Keys):
    """General choices."""

    title: Annotated[
        str, fields.text, doc("heading of the report", example="Damping fluid, tank 3")
    ] = ""
    reference_temperature: Annotated[
        Maybe,
        stated_temperature("results are reduced to exactly this temperature"),
        doc(
            "temperature that the results are also brought to; the liquid needs viscosity_slope",
            example="25 degC",
            left_out="results hold at the drops' own mean temperature only",
        ),
    ] = None
    coverage: Annotated[
        float,
        fields.number(0.5, 0.9999, "write a probability between 0.5 and 0.9999, such as 0.95"),
        doc("probability with which the bounds hold the true value", example=0.95),
    ] = 0.95
    viscosity_unit: Annotated[
        str | None,
        unit_of("viscosity"),
        doc(
            "unit of viscosities in the text and on the page; JSON and CSV keep their own",
            example="mPa.s",
            left_out="chosen by the size of the value",
        ),
    ] = None


class LaboratoryKeys(Keys):
    """Who measures; a blank is printed as not supplied."""

    name: Annotated[
        str,
        fields.text,
        doc("name of the laboratory", example="Fluids laboratory", left_out=BLANK),
    ] = ""
    place: Annotated[
        str, fields.text, doc("where it is", example="Building 4, room 12", left_out=BLANK)
    ] = ""


class ReportKeys(Keys):
    """The head of the report; a blank is printed as not supplied."""

    number: Annotated[
        str, fields.text, doc("number of the report", example="26-118", left_out=BLANK)
    ] = ""
    customer: Annotated[
        str, fields.text, doc("for whom it is made", example="Paint shop", left_out=BLANK)
    ] = ""
    method: Annotated[
        str,
        fields.text,
        doc("method or procedure followed", example="Works instruction 4", left_out=BLANK),
    ] = ""
    deviations: Annotated[
        str, fields.text, doc("deviations from the method", example="none", left_out=BLANK)
    ] = ""
    issued: Annotated[
        dt.date | None, fields.day, doc("date of issue", example="2026-03-02", left_out=BLANK)
    ] = None
    authorised_by: Annotated[
        str,
        fields.text,
        doc("who authorises the report", example="Head of laboratory", left_out=BLANK),
    ] = ""


class SampleKeys(Keys):
    """The sample; a blank is printed as not supplied."""

    identity: Annotated[
        str,
        fields.text,
        doc("what the sample is and where it comes from", example="Tank 3", left_out=BLANK),
    ] = ""
    condition: Annotated[
        str,
        fields.text,
        doc("its condition when received", example="clear, free of bubbles", left_out=BLANK),
    ] = ""
    received: Annotated[
        dt.date | None, fields.day, doc("date of receipt", example="2026-03-01", left_out=BLANK)
    ] = None


class SiteKeys(Keys):
    """Local gravity, or what it is computed from; neither: 9.80665 m/s2 with a note."""

    gravity: Annotated[
        Maybe,
        quantity("acceleration", Range(9.7, 9.9, "m/s2")),
        doc(
            "local acceleration of free fall, where it is known",
            example="9.8123(1) m/s2",
            left_out="computed from latitude, or 9.80665 m/s2 with a note",
        ),
    ] = None
    latitude: Annotated[
        Maybe,
        quantity("angle", Range(-90, 90, "deg")),
        doc("latitude of the place, from which gravity is computed", example="52.1 deg"),
    ] = None
    elevation: Annotated[
        Maybe,
        quantity("length", Range(-500, 9000, "m")),
        doc(
            "height of the place above the sea; goes with latitude",
            example="40 m",
            left_out="0 m, where latitude is given",
        ),
    ] = None

    @model_validator(mode="after")
    def _one_way(self) -> SiteKeys:
        if self.gravity and self.latitude:
            raise InputError(
                "both gravity and latitude are given", remedy="keep gravity if it was measured"
            )
        if self.elevation and not self.latitude:
            raise InputError("elevation stands without latitude", remedy="add latitude")
        return self
