"""The bench sheet: what the equipment, the liquids and the runs are, in SI units."""

from __future__ import annotations

from plumbfall.bench.measured import unstated_uncertainties
from plumbfall.bench.reader import read_bench
from plumbfall.bench.records import (
    Balance,
    Ball,
    Bench,
    Constant,
    Gauge,
    Identity,
    Liquid,
    Material,
    Methods,
    Reference,
    ReferencePoint,
    RunSetEntry,
    Scatter,
    Site,
    Specification,
    Thermometer,
    Timer,
    TimingHints,
    Tube,
)

__all__ = [
    "Balance",
    "Ball",
    "Bench",
    "Constant",
    "Gauge",
    "Identity",
    "Liquid",
    "Material",
    "Methods",
    "Reference",
    "ReferencePoint",
    "RunSetEntry",
    "Scatter",
    "Site",
    "Specification",
    "Thermometer",
    "Timer",
    "TimingHints",
    "Tube",
    "read_bench",
    "unstated_uncertainties",
]
