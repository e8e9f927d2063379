"""Keys of the bench sheet that concern the paper: choices, laboratory, report, sample, site."""

from __future__ import annotations

import datetime as dt
from typing import Annotated

from pydantic import model_validator

from plumbfall.bench import fields
from plumbfall.bench.common_keys import Keys, Maybe, doc, stated_temperature
from plumbfall.bench.quantity_fields import Range, quantity, unit_of
from plumbfall.errors import InputError

__all__ = ["BenchKeys", "LaboratoryKeys", "ReportKeys", "SampleKeys", "SiteKeys"]


class BenchKeys(Keys):
    """General choices."""

    title: Annotated[str, fields.text, doc("heading of the report")] = ""
    reference_temperature: Annotated[
        Maybe,
        stated_temperature("results are reduced to exactly this temperature"),
        doc("results are also reduced to it"),
    ] = None
    coverage: Annotated[
        float,
        fields.number(0.5, 0.9999, "write a probability between 0.5 and 0.9999, such as 0.95"),
        doc("coverage probability of the bounds"),
    ] = 0.95
    viscosity_unit: Annotated[
        str | None, unit_of("viscosity"), doc("unit of text and HTML; default by size")
    ] = None


class LaboratoryKeys(Keys):
    """Who measures; a blank is printed as not supplied."""

    name: Annotated[str, fields.text, doc("name of the laboratory")] = ""
    place: Annotated[str, fields.text, doc("where it is")] = ""


class ReportKeys(Keys):
    """The head of the report; a blank is printed as not supplied."""

    number: Annotated[str, fields.text, doc("number of the report")] = ""
    customer: Annotated[str, fields.text, doc("for whom")] = ""
    method: Annotated[str, fields.text, doc("method or procedure followed")] = ""
    deviations: Annotated[str, fields.text, doc("deviations from the method")] = ""
    issued: Annotated[dt.date | None, fields.day, doc("date of issue")] = None
    authorised_by: Annotated[str, fields.text, doc("who authorises the report")] = ""


class SampleKeys(Keys):
    """The sample; a blank is printed as not supplied."""

    identity: Annotated[str, fields.text, doc("identity of the sample")] = ""
    condition: Annotated[str, fields.text, doc("its condition when received")] = ""
    received: Annotated[dt.date | None, fields.day, doc("date of receipt")] = None


class SiteKeys(Keys):
    """Local gravity, or what it is computed from; neither: 9.80665 m/s2 with a note."""

    gravity: Annotated[
        Maybe, quantity("acceleration", Range(9.7, 9.9, "m/s2")), doc("local gravity")
    ] = None
    latitude: Annotated[Maybe, quantity("angle", Range(-90, 90, "deg")), doc("latitude")] = None
    elevation: Annotated[
        Maybe, quantity("length", Range(-500, 9000, "m")), doc("height above the sea")
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
