"""Keys of the bench sheet that concern equipment: tubes, balls, and the instruments."""

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
from plumbfall.bench.instrument_keys import (
    BalanceKeys,
    GaugeKeys,
    ThermometerKeys,
    TimerKeys,
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


class TubeKeys(Equipment):
    """A fall tube. A mark is passed when the ball's centre passes it."""

    kind: Annotated[
        str,
        fields.choice(names.TUBE_KINDS),
        doc(
            "vertical: bore and marks are given; calibrated: a tube constant stands for them",
            example="vertical",
        ),
    ] = "vertical"
    bore: Annotated[
        Maybe,
        above_zero("length", Range(0.1, 10_000, "mm")),
        doc(
            "inner diameter of the tube",
            example="50.00(2) mm",
            left_out="refused for a vertical tube",
        ),
    ] = None
    marks: Annotated[
        tuple[Annotated[Estimate, quantity("length")], ...],
        doc(
            "how far each mark is below the first one, which comes first and is 0",
            example=["0 mm", "200.00(5) mm"],
            left_out="distance is needed for a vertical tube",
        ),
    ] = ()
    distance: Annotated[
        Maybe,
        above_zero("length"),
        doc(
            "distance between two marks; instead of marks",
            example="200.00(5) mm",
            left_out="marks are needed for a vertical tube",
        ),
    ] = None
    surface_above: Annotated[
        Maybe,
        above_zero("length", roughly=True),
        doc(
            "how far the liquid surface is above the first mark",
            example="80(2) mm",
            left_out="the surface is taken as too far to matter, with a note",
        ),
    ] = None
    bottom_below: Annotated[
        Maybe,
        above_zero("length", roughly=True),
        doc(
            "how far the tube's bottom is below the last mark",
            example="80(2) mm",
            left_out="the bottom is taken as too far to matter, with a note",
        ),
    ] = None
    release_above: Annotated[
        Maybe,
        quantity("length", Range(0, 100, "m")),
        doc(
            "how far above the first mark the ball is let go, from rest and under the surface",
            example="70(2) mm",
            left_out="the ball is taken to have its steady speed at the first mark, with a note",
        ),
    ] = None
    release_offset: Annotated[
        Maybe,
        quantity("length"),
        doc(
            "how far from the tube's axis the ball is let go",
            example="0.0(5) mm",
            left_out="on the axis, taken as exact",
        ),
    ] = None
    surface: Annotated[
        str,
        fields.choice(names.SURFACES),
        doc("what closes the liquid above: its free surface, or a lid", example="free"),
    ] = "free"
    tilt: Annotated[
        Maybe,
        quantity("angle", Range(-89.9, 89.9, "deg")),
        doc(
            "angle of the tube from the vertical",
            example="0.0(3) deg",
            left_out="upright, taken as exact",
        ),
    ] = None
    expansion: Annotated[
        Maybe,
        quantity("temperature coefficient", SOLID_EXPANSION),
        doc(
            "linear thermal expansion of bore and marks",
            example="3.3e-6 /K",
            left_out="the tube is taken as not expanding",
        ),
    ] = None
    measured_at: Annotated[
        Maybe,
        stated_temperature(),
        doc("temperature at which its lengths hold", example="20 degC", left_out="20 degC"),
    ] = None
    constant: Annotated[
        tuple[str, ...],
        fields.names,
        doc(
            "of a calibrated tube: names of its [constant.NAME] entries; the ball selects one",
            example=["K1"],
            left_out="every constant that names this tube",
        ),
    ] = ()


class MaterialKeys(Equipment):
    """What balls are made of. All balls of a material share the error of its density."""

    density: Annotated[
        Estimate,
        above_zero("density", DENSITY),
        doc("density of the material", example="7.700(3) g/cm3"),
    ]
    expansion: Annotated[
        Maybe,
        quantity("temperature coefficient", SOLID_EXPANSION),
        doc(
            "linear thermal expansion",
            example="10.4e-6 /K",
            left_out="that of the ball; otherwise its balls are taken as not expanding",
        ),
    ] = None


class BallKeys(Equipment):
    """A ball, or a lot of balls. One of density, material and mass says how heavy it is."""

    diameter: Annotated[
        Estimate,
        above_zero("length", Range(0.01, 1000, "mm")),
        doc("diameter of the ball; of a lot, the mean", example="2.0000(5) mm"),
    ]
    density: Annotated[
        Maybe,
        above_zero("density", DENSITY),
        doc(
            "density of this ball alone",
            example="7.700(3) g/cm3",
            left_out="material or mass is needed",
        ),
    ] = None
    material: Annotated[
        str | None,
        fields.name,
        doc(
            "name of a [material.NAME] entry",
            example="steel",
            left_out="density or mass is needed",
        ),
    ] = None
    mass: Annotated[
        Maybe,
        above_zero("mass"),
        doc(
            "balance reading in air; the buoyancy of air is corrected",
            example="32.25(1) mg",
            left_out="density or material is needed",
        ),
    ] = None
    weighed_together: Annotated[
        int,
        fields.whole_number("write the number of balls on the balance, such as 20"),
        doc("how many balls were on the balance at once", example=20),
    ] = 1
    lot: Annotated[
        bool,
        fields.flag,
        doc("true: every row of the timing file drops a fresh ball of the lot", example=True),
    ] = False
    spread: Annotated[
        Maybe,
        deviation("length", Range(0, 1, "mm")),
        doc(
            "of a lot: standard deviation of the diameter from ball to ball",
            example="0.5 um",
            left_out="0 um",
        ),
    ] = None
    gauge: Annotated[
        str | None,
        fields.name,
        doc(
            "name of the [gauge.NAME] entry that the diameter was measured with",
            example="micrometer",
            left_out="no correction; the diameter's own uncertainty is all there is",
        ),
    ] = None
    balance: Annotated[
        str | None,
        fields.name,
        doc(
            "name of the [balance.NAME] entry that the mass was read on",
            example="analytical",
            left_out="no correction; the mass's own uncertainty is all there is",
        ),
    ] = None
    expansion: Annotated[
        Maybe,
        quantity("temperature coefficient", SOLID_EXPANSION),
        doc(
            "linear thermal expansion",
            example="10.4e-6 /K",
            left_out="that of the material; otherwise the ball is taken as not expanding",
        ),
    ] = None
    measured_at: Annotated[
        Maybe,
        stated_temperature(),
        doc(
            "temperature at which diameter and density hold",
            example="20 degC",
            left_out="20 degC",
        ),
    ] = None
