"""Keys of the bench sheet that concern instruments: clocks, thermometers, gauges, balances."""

from __future__ import annotations

from typing import Annotated

from plumbfall.bench import fields, names
from plumbfall.bench.common_keys import Equipment, Maybe, deviation, doc
from plumbfall.bench.quantity_fields import Range, quantity

__all__ = ["BalanceKeys", "GaugeKeys", "ThermometerKeys", "TimerKeys"]

USUAL_VALUE = "the usual value of the kind, if it has one; otherwise 0"


class TimerKeys(Equipment):
    """A clock. The true interval is taken as reading x (1 + rate) - bias."""

    kind: Annotated[
        str | None,
        fields.choice(names.TIMER_KINDS),
        doc(
            "kind of clock: its usual values stand in for keys not given, and the report says so",
            example="stopwatch",
            left_out="nothing stands in",
        ),
    ] = None
    per_drop: Annotated[
        Maybe,
        deviation("time", Range(0, 60, "s")),
        doc(
            "standard deviation of one timed interval, start and stop together",
            example="0.10 s",
            left_out=USUAL_VALUE,
        ),
    ] = None
    bias: Annotated[
        Maybe,
        quantity("time"),
        doc(
            "error that all intervals share; it is subtracted from each",
            example="0.00(3) s",
            left_out=USUAL_VALUE,
        ),
    ] = None
    rate: Annotated[
        Maybe,
        quantity("ratio", Range(-0.1, 0.1, "1")),
        doc(
            "relative correction of the clock's rate, above zero where it runs slow",
            example="0(20) ppm",
            left_out=USUAL_VALUE,
        ),
    ] = None
    resolution: Annotated[
        Maybe,
        deviation("time", Range(0, 60, "s")),
        doc("smallest step of one clock reading", example="0.01 s", left_out=USUAL_VALUE),
    ] = None


class ThermometerKeys(Equipment):
    """A thermometer. Its correction is one error that all its readings share."""

    correction: Annotated[
        Maybe,
        quantity("temperature difference"),
        doc("added to every reading", example="0.00(5) K", left_out="0 K, taken as exact"),
    ] = None
    per_reading: Annotated[
        Maybe,
        deviation("temperature difference", Range(0, 50, "K")),
        doc(
            "standard deviation of one reading, as far as readings differ by chance",
            example="0.01 K",
            left_out="0 K",
        ),
    ] = None


class GaugeKeys(Equipment):
    """A diameter gauge. Its correction is one error that all its diameters share."""

    correction: Annotated[
        Maybe,
        quantity("length"),
        doc(
            "added to every diameter measured with it",
            example="0.0(5) um",
            left_out="0 um, taken as exact",
        ),
    ] = None


class BalanceKeys(Equipment):
    """A balance. Its correction is one error that all its weighings share."""

    correction: Annotated[
        Maybe,
        quantity("mass"),
        doc(
            "added to every mass read on it",
            example="0.00(5) mg",
            left_out="0 mg, taken as exact",
        ),
    ] = None
