"""Names that a bench sheet may choose from: kinds, surfaces, laws and methods."""

from __future__ import annotations

__all__ = [
    "COLUMNS",
    "DRAG",
    "ENDS",
    "INERTIA",
    "REFERENCE_LAWS",
    "RUN_IN",
    "SLOPES",
    "SURFACES",
    "TIMER_KINDS",
    "TOGETHER",
    "TUBE_KINDS",
    "WALLS",
]

TIMER_KINDS = ("stopwatch", "gate", "video")
TUBE_KINDS = ("vertical", "calibrated")
SURFACES = ("free", "lid")
REFERENCE_LAWS = ("water",)

WALLS = ("exact", "ladenburg", "faxen", "francis", "haberman-sayre", "bohlin")
"""Laws of the wall factor at Reynolds number 0."""
INERTIA = (
    "compact",
    "stokes",
    "oseen",
    "schiller-naumann",
    "clift-grace-weber",
    "brown-lawler",
    "abraham",
)
"""Laws of the inertia factor in an unbounded liquid; ``stokes`` is none."""
TOGETHER = ("table", "screened", "additive", "product")
"""How wall and inertia act together."""
DRAG = {"together": TOGETHER, "walls": WALLS, "inertia": INERTIA}
"""The parts of a drag law, and the laws for each."""
ENDS = ("table", "classical", "none")
"""The tube's ends: the computed excess, the 1907 factor, or nothing."""
RUN_IN = ("table", "none")
SLOPES = ("andrade", "vogel")

COLUMNS = (
    "set",
    "drop",
    "ball",
    "temperature",
    "tube",
    "liquid",
    "timer",
    "thermometer",
    "operator",
    "started",
    "status",
    "note",
    "total",
    "time",
    "mark",
    "interval",
    "repeat",
)
"""Columns of a timing file that a heading may be declared to be; the last four may be numbered."""
