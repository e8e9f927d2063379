"""Keys of the bench sheet that concern equipment: clocks, thermometers, tubes and balls."""

from __future__ import annotations

from typing import Annotated

from plumbfall.bench import fields, names
from plumbfall.bench.common_keys import (
    DENSITY,
    SOLID_EXPANSION,
    Equipment,
    Maybe,
    deviation,
    doc,
    stated_temperature,
)
from plumbfall.bench.quantity_fields import Range, above_zero, quantity
from plumbfall.estimate import Estimate

__all__ = [
    "BalanceKeys",
    "BallKeys",
    "GaugeKeys",
    "MaterialKeys",
    "ThermometerKeys",
    "TimerKeys",
    "TubeKeys",
]


class TimerKeys(Equipment):
    """A clock: true interval = reading x (1 + rate) - bias."""

    kind: Annotated[
        str | None,
        fields.choice(names.TIMER_KINDS),
        doc("usual values, with their source, stand in for keys not given"),
    ] = None
    per_drop: Annotated[
        Maybe,
        deviation("time", Range(0, 60, "s")),
        doc("standard deviation of one timed interval, start and stop together"),
    ] = None
    bias: Annotated[Maybe, quantity("time"), doc("common to all intervals; subtracted")] = None
    rate: Annotated[
        Maybe, quantity("ratio", Range(-0.1, 0.1, "1")), doc("relative error of the clock")
    ] = None
    resolution: Annotated[
        Maybe, deviation("time", Range(0, 60, "s")), doc("of one clock reading")
    ] = None


class ThermometerKeys(Equipment):
    """A thermometer."""

    correction: Annotated[
        Maybe, quantity("temperature difference"), doc("added to every reading")
    ] = None
    per_reading: Annotated[
        Maybe,
        deviation("temperature difference", Range(0, 50, "K")),
        doc("standard deviation of one reading"),
    ] = None


class GaugeKeys(Equipment):
    """A diameter gauge."""

    correction: Annotated[Maybe, quantity("length"), doc("added to every diameter")] = None


class BalanceKeys(Equipment):
    """A balance."""

    correction: Annotated[Maybe, quantity("mass"), doc("added to every mass")] = None


class TubeKeys(Equipment):
    """A fall tube."""

    kind: Annotated[str, fields.choice(names.TUBE_KINDS), doc("vertical or calibrated")] = (
        "vertical"
    )
    bore: Annotated[
        Maybe, above_zero("length", Range(0.1, 10_000, "mm")), doc("inner diameter")
    ] = None
    marks: Annotated[
        tuple[Annotated[Estimate, quantity("length")], ...],
        doc("distances of the marks down from the first mark, the first one included"),
    ] = ()
    distance: Annotated[
        Maybe, above_zero("length"), doc("between the two marks, instead of marks")
    ] = None
    surface_above: Annotated[
        Maybe, above_zero("length", roughly=True), doc("liquid surface above the first mark")
    ] = None
    bottom_below: Annotated[
        Maybe, above_zero("length", roughly=True), doc("bottom below the last mark")
    ] = None
    release_above: Annotated[
        Maybe,
        quantity("length", Range(0, 100, "m")),
        doc("ball let go from rest this far above the first mark"),
    ] = None
    release_offset: Annotated[Maybe, quantity("length"), doc("of the ball from the axis")] = None
    surface: Annotated[str, fields.choice(names.SURFACES), doc("free surface or lid")] = "free"
    tilt: Annotated[
        Maybe, quantity("angle", Range(-89.9, 89.9, "deg")), doc("from the vertical")
    ] = None
    expansion: Annotated[
        Maybe, quantity("temperature coefficient", SOLID_EXPANSION), doc("linear expansion")
    ] = None
    measured_at: Annotated[
        Maybe, stated_temperature(), doc("temperature of the lengths; default 20 degC")
    ] = None
    constant: Annotated[
        tuple[str, ...], fields.names, doc("entries of [constant.NAME]; the ball selects")
    ] = ()


class MaterialKeys(Equipment):
    """What balls are made of."""

    density: Annotated[
        Estimate, above_zero("density", DENSITY), doc("shared by all balls of the material")
    ]
    expansion: Annotated[
        Maybe, quantity("temperature coefficient", SOLID_EXPANSION), doc("linear expansion")
    ] = None


class BallKeys(Equipment):
    """A ball, or a lot of balls; one of density, material and mass says how heavy it is."""

    diameter: Annotated[
        Estimate, above_zero("length", Range(0.01, 1000, "mm")), doc("of the ball, or a lot's mean")
    ]
    density: Annotated[Maybe, above_zero("density", DENSITY), doc("of this ball")] = None
    material: Annotated[str | None, fields.name, doc("entry of [material.NAME]")] = None
    mass: Annotated[Maybe, above_zero("mass"), doc("reading in air")] = None
    weighed_together: Annotated[
        int,
        fields.whole_number("write the number of balls on the balance, such as 20"),
        doc("number of balls that the mass is of"),
    ] = 1
    lot: Annotated[bool, fields.flag, doc("each row drops a fresh ball of the lot")] = False
    spread: Annotated[
        Maybe,
        deviation("length", Range(0, 1, "mm")),
        doc("standard deviation of the diameter from ball to ball, of a lot"),
    ] = None
    gauge: Annotated[str | None, fields.name, doc("entry of [gauge.NAME]")] = None
    balance: Annotated[str | None, fields.name, doc("entry of [balance.NAME]")] = None
    expansion: Annotated[
        Maybe, quantity("temperature coefficient", SOLID_EXPANSION), doc("linear expansion")
    ] = None
    measured_at: Annotated[
        Maybe, stated_temperature(), doc("temperature of diameter and density; default 20 degC")
    ] = None
